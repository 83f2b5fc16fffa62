//! The scenario as a tree in which every key and every value knows where it was written.

use super::problem::Location;
use std::ops::Range;
use toml::Spanned;
use toml::de::{DeInteger, DeTable, DeValue};

/// A date or time as TOML has it.
pub(super) type Moment = toml::value::Datetime;

/// One value and where it was written.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Node {
    pub value: Value,
    pub at: Location,
}

/// What can stand in a scenario.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum Value {
    Text(String),
    Number(f64),
    Flag(bool),
    Moment(Moment),
    List(Vec<Node>),
    Table(Table),
}

/// A table; its entries are in the order in which they were written.
#[derive(Debug, Clone, PartialEq, Default)]
pub(super) struct Table {
    pub entries: Vec<Entry>,
}

/// One key with its value.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Entry {
    pub key: String,
    pub key_at: Location,
    pub node: Node,
}

impl Value {
    /// With its article, for messages.
    pub fn kind(&self) -> &'static str {
        match self {
            Self::Text(_) => "a text",
            Self::Number(_) => "a number",
            Self::Flag(_) => "true or false",
            Self::Moment(_) => "a date",
            Self::List(_) => "a list",
            Self::Table(_) => "a table",
        }
    }
}

impl Node {
    pub fn table(&self) -> Option<&Table> {
        match &self.value {
            Value::Table(table) => Some(table),
            _ => None,
        }
    }

    pub fn list(&self) -> Option<&[Node]> {
        match &self.value {
            Value::List(items) => Some(items),
            _ => None,
        }
    }

    pub fn text(&self) -> Option<&str> {
        match &self.value {
            Value::Text(text) => Some(text),
            _ => None,
        }
    }

    /// The text under the key `name`, for tables that carry a name.
    pub fn name(&self) -> Option<&str> {
        self.table()?.get("name")?.node.text()
    }
}

impl Table {
    pub fn get(&self, key: &str) -> Option<&Entry> {
        self.entries.iter().find(|entry| entry.key == key)
    }

    pub fn get_mut(&mut self, key: &str) -> Option<&mut Entry> {
        self.entries.iter_mut().find(|entry| entry.key == key)
    }

    /// Puts a value in place of that of `key`, or adds it.
    pub fn set(&mut self, key: &str, key_at: &Location, node: Node) {
        let entry = Entry { key: key.to_owned(), key_at: key_at.clone(), node };
        match self.get_mut(key) {
            Some(old) => *old = entry,
            None => self.entries.push(entry),
        }
    }

    pub fn remove(&mut self, key: &str) {
        self.entries.retain(|entry| entry.key != key);
    }

    /// The tables of a list of tables; empty when there are none.
    pub fn tables(&self, key: &str) -> &[Node] {
        self.get(key).and_then(|entry| entry.node.list()).unwrap_or(&[])
    }
}

/// Makes the tree of a parsed document; `place` turns bytes of its text into a location.
pub(super) fn from_document(table: &DeTable<'_>, place: &dyn Fn(Range<usize>) -> Location) -> Table {
    let mut entries: Vec<(usize, Entry)> = table
        .iter()
        .map(|(key, value)| {
            let start = key.span().start;
            let node = from_value(value, place);
            (start, Entry { key: key.get_ref().to_string(), key_at: place(key.span()), node })
        })
        .collect();
    entries.sort_by_key(|(start, _)| *start);
    Table { entries: entries.into_iter().map(|(_, entry)| entry).collect() }
}

/// Makes the tree of one value.
pub(super) fn from_value(value: &Spanned<DeValue<'_>>, place: &dyn Fn(Range<usize>) -> Location) -> Node {
    let at = place(value.span());
    let value = match value.get_ref() {
        DeValue::String(text) => Value::Text(text.to_string()),
        DeValue::Integer(integer) => Value::Number(integer_value(integer)),
        // Too large for an f64 becomes infinite, which no key accepts.
        DeValue::Float(float) => Value::Number(float.as_str().parse().unwrap_or(f64::NAN)),
        DeValue::Boolean(flag) => Value::Flag(*flag),
        DeValue::Datetime(moment) => Value::Moment(*moment),
        DeValue::Array(items) => Value::List(items.iter().map(|item| from_value(item, place)).collect()),
        DeValue::Table(table) => Value::Table(from_document(table, place)),
    };
    Node { value, at }
}

fn integer_value(integer: &DeInteger<'_>) -> f64 {
    if integer.radix() == 10 {
        return integer.as_str().parse().unwrap_or(f64::NAN);
    }
    // Saturates: such a number is beyond every limit anyway.
    i128::from_str_radix(integer.as_str(), integer.radix()).map_or(f64::INFINITY, |value| value as f64)
}

/// Where the value at a dotted path was written, or, when it is not there, the nearest table above it.
///
/// Segments are keys, names of list members ("well.OP-1.skin") or indices (`well[0].skin`).
pub(super) fn locate(root: &Table, path: &str) -> Option<Location> {
    walk(root, path).0
}

/// Whether something stands at the path.
pub(super) fn locate_exactly(root: &Table, path: &str) -> bool {
    walk(root, path).1
}

/// The place of the longest part of the path that exists, and whether that is all of it.
fn walk(root: &Table, path: &str) -> (Option<Location>, bool) {
    let mut table = Some(root);
    let mut node: Option<&Node> = None;
    let mut found = None;
    for segment in segments(path) {
        let next = match segment {
            Segment::Index(index) => node.and_then(Node::list).and_then(|items| items.get(index)),
            Segment::Key(key) => match (table, node.and_then(Node::list)) {
                (Some(table), _) => table.get(key).map(|entry| &entry.node),
                (None, Some(items)) => items.iter().find(|item| item.name() == Some(key)),
                (None, None) => None,
            },
        };
        let Some(next) = next else { return (found, false) };
        node = Some(next);
        table = next.table();
        found = Some(next.at.clone());
    }
    (found, true)
}

enum Segment<'p> {
    Key(&'p str),
    Index(usize),
}

/// `well[0].tubing` as well, 0, tubing.
fn segments(path: &str) -> impl Iterator<Item = Segment<'_>> {
    path.split('.').flat_map(|part| {
        let (key, rest) = part.split_at(part.find('[').unwrap_or(part.len()));
        let indices = rest.split(['[', ']']).filter_map(|inner| inner.parse().ok()).map(Segment::Index);
        (!key.is_empty()).then_some(Segment::Key(key)).into_iter().chain(indices)
    })
}
