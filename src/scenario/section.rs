//! One table under reading, and what to say of keys that nobody knows.

use super::guess::guess;
use super::problem::{Location, Problem};
use super::reader::shorten;
use super::schema::{self, LATER};
use super::tree::{Entry, Node, Table};

/// One table under reading.
#[derive(Debug, Clone)]
pub(super) struct Section<'t> {
    /// `None`: the table is not there, and defaults serve.
    pub table: Option<&'t Table>,
    /// Where a missing key is reported.
    pub at: Location,
    /// Path in the list of keys.
    pub path: String,
    /// The table itself is missing or wrong, which is already noted.
    pub quiet: bool,
}

impl<'t> Section<'t> {
    /// The top of the file.
    pub fn root(table: &'t Table) -> Self {
        Self { table: Some(table), at: Location::File(0..0), path: String::new(), quiet: false }
    }

    /// A table that stands alone, as the path says.
    pub fn of(node: &'t Node, path: &str) -> Self {
        Self { table: node.table(), at: node.at.clone(), path: path.to_owned(), quiet: node.table().is_none() }
    }

    /// The same table read by the keys of another path.
    pub fn renamed(&self, path: &str) -> Self {
        Self { path: path.to_owned(), ..self.clone() }
    }

    pub fn get(&self, key: &str) -> Option<&'t Entry> {
        self.table.and_then(|table| table.get(key))
    }

    pub fn has(&self, key: &str) -> bool {
        self.get(key).is_some()
    }

    pub fn is_there(&self) -> bool {
        self.table.is_some()
    }

    /// Where the value of `key` stands, or the table that should have it.
    pub fn at(&self, key: &str) -> Location {
        self.get(key).map_or_else(|| self.at.clone(), |entry| entry.node.at.clone())
    }

    /// The keys that unknown ones were probably meant to be.
    pub fn misspelt(&self) -> impl Iterator<Item = &'static str> + '_ {
        let known = || schema::children(&self.path).map(|(name, _)| name);
        let entries = self.table.map_or(&[][..], |table| &table.entries);
        entries
            .iter()
            .filter(move |entry| known().all(|name| name != entry.key))
            .filter_map(move |entry| guess(&entry.key, known().filter(|name| !self.has(name))))
    }

    pub fn path_of(&self, key: &str) -> String {
        if self.path.is_empty() { key.to_owned() } else { format!("{}.{key}", self.path) }
    }
}

/// What to say of a key that is not in the list.
pub(super) fn unknown_key(section: &Section<'_>, entry: &Entry) -> Problem {
    let path = section.path_of(&entry.key);
    let shown = shorten(&path);
    if let Some((_, what)) = LATER.iter().find(|(later, _)| *later == path) {
        return Problem::new(entry.key_at.clone(), format!("`{shown}`: {what} comes with a later version"))
            .label("not known to this version");
    }
    let problem = Problem::new(entry.key_at.clone(), format!("`{shown}` is not a known key")).label("unknown key");
    let here: Vec<&str> = schema::children(&section.path).map(|(name, _)| name).collect();
    let absent = || here.iter().copied().filter(|word| !section.has(word));
    if let Some(word) = guess(&entry.key, absent()).or_else(|| guess(&entry.key, here.iter().copied())) {
        return problem.help(format!("did you mean `{word}`?"));
    }
    let elsewhere = schema::KEYS.iter().find_map(|key| {
        let (parent, name) = key.path.rsplit_once('.').unwrap_or(("", key.path));
        (name == entry.key).then_some(parent)
    });
    match elsewhere {
        Some("") => problem.help(format!("`{}` stands at the top of the file", entry.key)),
        Some(parent) => problem.help(format!("`{}` belongs in [{parent}]", entry.key)),
        None if section.path.is_empty() => {
            problem.help(format!("tables and keys of the top level: {}", here.join(", ")))
        }
        None => problem.help(format!("keys of [{}]: {}", section.path, here.join(", "))),
    }
}
