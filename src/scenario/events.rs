//! Dated events: reading, and applying them to the tree.

use super::overrides::{self, Override, unknown_name};
use super::problem::{Location, Problem};
use super::reader::Reader;
use super::section::Section;
use super::tree::{Node, Table, Value};
use jiff::civil::Date;

/// One event as written.
#[derive(Debug, Clone)]
pub(super) struct EventRead {
    pub on: Date,
    pub on_at: Location,
    /// "well", "line", "injector" or "tank".
    pub list: &'static str,
    /// The name of the well, line or injector, or "tank".
    pub name: String,
    /// Where the name stands.
    pub name_at: Location,
    pub set: Vec<Override>,
}

impl EventRead {
    /// What it sets, as the user wrote it ("skin = -2.0").
    pub fn text(&self, file: &str) -> String {
        let parts: Vec<String> = self
            .set
            .iter()
            .map(|one| {
                let value = match &one.node.at {
                    Location::File(span) => file.get(span.clone()).unwrap_or(""),
                    _ => "",
                };
                format!("{} = {}", one.dotted(), value.split_whitespace().collect::<Vec<_>>().join(" "))
            })
            .collect();
        parts.join(", ")
    }
}

/// Reads the `event` list of the scenario or of a case.
pub(super) fn read(reader: &mut Reader, parent: &Section<'_>) -> Vec<EventRead> {
    if !parent.has("event") {
        return Vec::new();
    }
    let sections = reader.sections(parent, "event");
    sections.iter().filter_map(|section| read_one(reader, &section.renamed("event"))).collect()
}

fn read_one(reader: &mut Reader, section: &Section<'_>) -> Option<EventRead> {
    let on = reader.day(section, "on");
    reader.finish(section);
    let set = read_set(reader, section);
    let there: Vec<&'static str> =
        ["well", "line", "injector", "tank"].into_iter().filter(|key| section.has(key)).collect();
    let list = match there.as_slice() {
        [one] => *one,
        [] => {
            reader.note(
                Problem::new(section.at(""), "the event does not say what it changes")
                    .label("one of well, line, injector, tank is expected"),
            );
            return None;
        }
        [_, second, ..] => {
            reader.note(
                Problem::new(section.at(second), "an event changes one thing")
                    .label("only one of well, line, injector, tank is expected"),
            );
            return None;
        }
    };
    let name = if list == "tank" {
        match reader.flag(section, "tank") {
            Some(true) => "tank".to_owned(),
            Some(false) => {
                reader.note(
                    Problem::new(section.at("tank"), "`tank = false` names nothing").label("tank = true is expected"),
                );
                return None;
            }
            None => return None,
        }
    } else {
        reader.text(section, list)?
    };
    Some(EventRead { on: on?, on_at: section.at("on"), list, name_at: section.at(list), name, set: set? })
}

fn read_set(reader: &mut Reader, section: &Section<'_>) -> Option<Vec<Override>> {
    let entry = reader.look(section, "set", "{ skin = -2.0 }").0?;
    let set = entry.node.table().map(overrides::of_table);
    match set {
        Some(set) if !set.is_empty() => Some(set),
        _ => {
            reader.note(
                Problem::new(entry.node.at.clone(), "`set` holds no key").label("set = { key = value } is expected"),
            );
            None
        }
    }
}

/// Two events may not set one key of one name on one day: their order would decide, and nobody sees it.
pub(super) fn note_conflicts(events: &[EventRead], reader: &mut Reader) {
    for (i, event) in events.iter().enumerate() {
        for one in &event.set {
            let twice = events[..i]
                .iter()
                .filter(|earlier| earlier.on == event.on && earlier.list == event.list && earlier.name == event.name)
                .flat_map(|earlier| &earlier.set)
                .any(|earlier| earlier.path.starts_with(&one.path) || one.path.starts_with(&earlier.path));
            if twice {
                reader.note(
                    Problem::new(
                        one.path_at.clone(),
                        format!("`{}` of {} is set twice on {}", one.dotted(), event.name, event.on),
                    )
                    .label("an earlier event of this day sets it too"),
                );
            }
        }
    }
}

/// Applies an event to the tree; gives the path and the index of what it changed, or `None` when that failed.
pub(super) fn apply(event: &EventRead, root: &mut Table, reader: &mut Reader) -> Option<(String, usize)> {
    let allowed: Vec<Override> = event
        .set
        .iter()
        .filter(|one| {
            let why = not_allowed(event.list, one);
            if let Some(why) = why {
                reader.note(
                    Problem::new(
                        one.path_at.clone(),
                        format!("an event cannot set `{}` of a {}", one.dotted(), event.list),
                    )
                    .label(why),
                );
            }
            why.is_none()
        })
        .cloned()
        .collect();
    if event.list == "tank" {
        let table = table_of(&mut root.get_mut("tank")?.node)?;
        overrides::apply(table, "tank", &allowed, &mut reader.problems);
        return Some(("tank".to_owned(), 0));
    }
    let names: Vec<String> = root.tables(event.list).iter().filter_map(|node| node.name().map(str::to_owned)).collect();
    let Some(index) = root.tables(event.list).iter().position(|node| node.name() == Some(event.name.as_str())) else {
        // Where a name is missing or wrong, which is noted, it may have been this one.
        let misshapen = root.get(event.list).is_some_and(|entry| entry.node.list().is_none());
        if names.len() == root.tables(event.list).len() && !misshapen {
            reader.note(unknown_name(event.list, &event.name, &names, event.name_at.clone()));
        }
        return None;
    };
    let Value::List(items) = &mut root.get_mut(event.list)?.node.value else { return None };
    let table = table_of(items.get_mut(index)?)?;
    overrides::apply(table, event.list, &allowed, &mut reader.problems);
    Some((format!("{}[{index}]", event.list), index))
}

fn table_of(node: &mut Node) -> Option<&mut Table> {
    match &mut node.value {
        Value::Table(table) => Some(table),
        _ => None,
    }
}

/// Why an event may not set a key, or `None` where it may.
fn not_allowed(list: &str, one: &Override) -> Option<&'static str> {
    let first = one.path.first().map_or("", String::as_str);
    match list {
        "tank" if first == "relative_permeability" || first == "water" => None,
        "tank" => Some("only relative_permeability.* and water.* of the tank can change"),
        _ if first == "name" => Some("a name does not change"),
        _ if matches!(first, "start" | "end") => {
            Some("start and end are dates already: state them where it is defined")
        }
        "injector" if first == "fluid" => Some("define a second injector for the other fluid"),
        _ => None,
    }
}
