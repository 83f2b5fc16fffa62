//! Overrides by dotted path, applied to the tree before it is read.

use super::guess::guess;
use super::problem::{Location, Problem};
use super::read_wells::EXCLUSIVE;
use super::reader::shorten;
use super::schema::{self, Kind};
use super::tree::{self, Entry, Node, Table, Value};
use toml::de::DeValue;

/// Lists whose members are reached by name.
const NAMED: [&str; 3] = ["well", "line", "injector"];

/// One new value and the path at which it goes.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Override {
    pub path: Vec<String>,
    pub path_at: Location,
    pub node: Node,
}

impl Override {
    /// The path as people write it.
    pub fn dotted(&self) -> String {
        self.path.join(".")
    }
}

/// The overrides of a `set` table: quoted paths, dotted keys and nested tables all mean the same.
pub(super) fn of_table(table: &Table) -> Vec<Override> {
    let mut out = Vec::new();
    for entry in &table.entries {
        let path: Vec<String> = entry.key.split('.').map(|part| part.trim().to_owned()).collect();
        collect(entry, path, &mut out);
    }
    out
}

fn collect(entry: &Entry, path: Vec<String>, out: &mut Vec<Override>) {
    match &entry.node.value {
        Value::Table(inner) => {
            for below in &inner.entries {
                let mut path = path.clone();
                path.extend(below.key.split('.').map(|part| part.trim().to_owned()));
                collect(below, path, out);
            }
        }
        _ => out.push(Override { path, path_at: entry.key_at.clone(), node: entry.node.clone() }),
    }
}

/// Reads "KEY=VALUE", setting number `index`: the value is a TOML value, or else a text.
pub(super) fn of_setting(text: &str, index: usize) -> Result<Vec<Override>, Problem> {
    let whole = Location::Setting { index, span: 0..text.len() };
    let wrong = |what: &str| Problem::new(whole.clone(), what).label("KEY=VALUE is expected, like well.OP-1.skin=-2");
    let Some((key, value)) = text.split_once('=') else {
        return Err(wrong("a setting without an equals sign"));
    };
    if key.trim().is_empty() || value.trim().is_empty() {
        return Err(wrong("a setting without a key or without a value"));
    }
    let key_start = key.len() - key.trim_start().len();
    let path_at = Location::Setting { index, span: key_start..key_start + key.trim().len() };
    let value_start = key.len() + 1 + value.len() - value.trim_start().len();
    let value = value.trim();
    let node = match DeValue::parse(value) {
        Ok(parsed) => tree::from_value(&parsed, &|span| Location::Setting {
            index,
            span: span.start + value_start..span.end + value_start,
        }),
        Err(_) => Node {
            value: Value::Text(value.to_owned()),
            at: Location::Setting { index, span: value_start..value_start + value.len() },
        },
    };
    let path = key.trim().split('.').map(|part| part.trim().trim_matches(['"', '\'']).to_owned()).collect();
    let mut out = Vec::new();
    collect(&Entry { key: key.trim().to_owned(), key_at: path_at, node }, path, &mut out);
    Ok(out)
}

/// Applies overrides to a table that has the given path in the list of keys.
pub(super) fn apply(table: &mut Table, schema_path: &str, overrides: &[Override], problems: &mut Vec<Problem>) {
    for one in overrides {
        let first = one.path.first().map_or("", String::as_str);
        let result = if schema_path.is_empty() && matches!(first, "case" | "event") {
            Err(Problem::new(one.path_at.clone(), "an override cannot change cases or events")
                .label("the path of a value of the scenario is expected"))
        } else {
            put(table, schema_path, &one.path, one)
        };
        problems.extend(result.err());
    }
}

fn put(table: &mut Table, schema_path: &str, path: &[String], one: &Override) -> Result<(), Problem> {
    let Some((key, rest)) = path.split_first() else { return Ok(()) };
    let here = if schema_path.is_empty() { key.clone() } else { format!("{schema_path}.{key}") };
    let kind = schema::find(&here).map(|key| key.kind);
    if rest.is_empty() {
        if kind.is_some_and(|kind| kind == Kind::Name) {
            return Err(Problem::new(one.path_at.clone(), "a name cannot be overridden"));
        }
        if kind == Some(Kind::Tables) && NAMED.contains(&here.as_str()) {
            return Err(Problem::new(
                one.path_at.clone(),
                format!("`{here}` is a list: which {here}, and which of its keys?"),
            )
            .label(format!("{here}.NAME.key is expected")));
        }
        remove_excluded(table, schema_path, key);
        table.set(key, &one.path_at, one.node.clone());
        return Ok(());
    }
    if table.get(key).is_none() {
        match kind {
            Some(Kind::Table) => {
                remove_excluded(table, schema_path, key);
                table.set(key, &one.path_at, Node { value: Value::Table(Table::default()), at: one.path_at.clone() });
            }
            Some(Kind::Tables) if NAMED.contains(&here.as_str()) => {
                return Err(no_such_member(&here, &rest[0], &[], one));
            }
            Some(_) => return Err(too_deep(&here, one)),
            None => return Err(no_such_key(schema_path, key, one)),
        }
    }
    let Some(entry) = table.get_mut(key) else { return Ok(()) };
    match &mut entry.node.value {
        Value::Table(inner) => put(inner, &here, rest, one),
        Value::List(items) if NAMED.contains(&here.as_str()) => {
            let count = items.len();
            let names: Vec<String> = items.iter().filter_map(|item| item.name().map(str::to_owned)).collect();
            match items.iter_mut().find(|item| item.name() == Some(rest[0].as_str())) {
                Some(Node { value: Value::Table(_), .. }) if rest.len() == 1 => {
                    Err(Problem::new(one.path_at.clone(), format!("which key of {here} {}?", shorten(&rest[0])))
                        .label(format!("{here}.{}.key is expected", shorten(&rest[0]))))
                }
                Some(Node { value: Value::Table(inner), .. }) => put(inner, &here, &rest[1..], one),
                // Where a name is missing or wrong, which is noted, it may have been this one.
                _ if names.len() < count => Ok(()),
                _ => Err(no_such_member(&here, &rest[0], &names, one)),
            }
        }
        Value::List(_) => Err(Problem::new(
            one.path_at.clone(),
            format!("the members of `{here}` have no names: only the whole list can be replaced"),
        )),
        // A list that is none is noted when it is read.
        _ if kind == Some(Kind::Tables) => Ok(()),
        _ => Err(too_deep(&here, one)),
    }
}

/// Removes what cannot stand beside a key that is set.
fn remove_excluded(table: &mut Table, schema_path: &str, key: &str) {
    for (parent, keys) in EXCLUSIVE {
        if *parent == schema_path && keys.contains(&key) {
            keys.iter().filter(|other| **other != key).for_each(|other| table.remove(other));
            // What a stated coefficient needs beside itself does not fit the tests that replace it.
            if key == "test" {
                table.remove("reservoir");
            }
        }
    }
}

fn too_deep(here: &str, one: &Override) -> Problem {
    Problem::new(one.path_at.clone(), format!("`{here}` is a value, there is nothing below it"))
        .label("path goes too deep")
}

fn no_such_key(schema_path: &str, key: &str, one: &Override) -> Problem {
    let problem = Problem::new(one.path_at.clone(), format!("`{}` is not a known key", shorten(&one.dotted())))
        .label("unknown path");
    let known: Vec<&str> = schema::children(schema_path).map(|(name, _)| name).collect();
    match guess(key, known.iter().copied()) {
        Some(word) => problem.help(format!("did you mean `{word}` in place of `{}`?", shorten(key))),
        None => problem.help(format!("known here: {}", known.join(", "))),
    }
}

/// A well or injector that is not there.
pub(super) fn no_such_member(list: &str, name: &str, names: &[String], one: &Override) -> Problem {
    unknown_name(list, name, names, one.path_at.clone())
}

/// A name that refers to nothing.
pub(super) fn unknown_name(list: &str, name: &str, names: &[String], at: Location) -> Problem {
    let problem = Problem::new(at, format!("there is no {list} named `{}`", shorten(name))).label("unknown name");
    match guess(name, names.iter().map(String::as_str)) {
        Some(word) => problem.help(format!("did you mean `{word}`?")),
        None if names.is_empty() => problem.help(format!("the scenario has no {list} at all")),
        None => problem.help(format!("names of {list}s: {}", names.join(", "))),
    }
}
