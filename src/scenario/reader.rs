//! Typed reading of the tree by the list of keys: every problem is noted, none stops the reading.
//!
//! Where a value is missing or wrong, a placeholder (NaN for numbers) is returned and a problem noted, so that one
//! pass finds all problems; comparisons with NaN are false, so a bad value causes no follow-on message.

use super::problem::{Location, Problem};
use super::schema::{self, Key, Kind, Limits, Need};
use super::section::{Section, unknown_key};
use super::tree::{Entry, Node, Value};
use crate::units::{self, Dimension, QuantityError, parse, units_of};
use std::path::{Path, PathBuf};

/// Notes problems while sections are read.
pub(super) struct Reader {
    pub problems: Vec<Problem>,
    pub atmospheric_pressure_psia: f64,
    /// Where the paths of a scenario begin.
    pub folder: PathBuf,
    /// The files that were read besides the scenario.
    pub files: Vec<FileUsed>,
}

/// A file that a scenario names.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct FileUsed {
    /// As the scenario names it.
    pub path: String,
    /// SHA-256 of its bytes.
    pub sha256: String,
}

impl Reader {
    pub fn new(folder: &Path, atmospheric_pressure_psia: f64) -> Self {
        Self { problems: Vec::new(), atmospheric_pressure_psia, folder: folder.to_owned(), files: Vec::new() }
    }

    pub fn note(&mut self, problem: Problem) {
        self.problems.push(problem);
    }

    /// The table below `key`.
    pub fn section<'t>(&mut self, parent: &Section<'t>, key: &str) -> Section<'t> {
        let path = parent.path_of(key);
        let nothing = |at: Location, quiet| Section { table: None, at, path: path.clone(), quiet };
        match parent.get(key) {
            Some(entry) => match &entry.node.value {
                Value::Table(table) => {
                    Section { table: Some(table), at: entry.node.at.clone(), path: path.clone(), quiet: false }
                }
                other => {
                    self.note(
                        Problem::new(entry.node.at.clone(), format!("`{path}` is {}, not a table", other.kind()))
                            .label(format!("a table [{path}] is expected")),
                    );
                    nothing(entry.node.at.clone(), true)
                }
            },
            None => {
                let required = schema::find(&path).is_some_and(|key| key.need == Need::Required);
                if required && !parent.quiet && parent.misspelt().all(|word| word != key) {
                    let shown = if path.starts_with("well.") { format!("{path} of this well") } else { path.clone() };
                    self.note(
                        Problem::new(parent.at.clone(), format!("the table [{path}] is missing"))
                            .label(format!("{shown} is expected")),
                    );
                }
                nothing(parent.at.clone(), parent.quiet || required)
            }
        }
    }

    /// The tables of the list below `key`.
    pub fn sections<'t>(&mut self, parent: &Section<'t>, key: &str) -> Vec<Section<'t>> {
        let path = parent.path_of(key);
        let Some(entry) = parent.get(key) else {
            if schema::find(&path).is_some_and(|key| key.need == Need::Required)
                && !parent.quiet
                && parent.misspelt().all(|word| word != key)
            {
                let noun = if path == "well" {
                    "no producing well: [[well]] is missing".to_owned()
                } else {
                    format!("`{path}` is missing")
                };
                self.note(Problem::new(parent.at.clone(), noun).label(format!("[[{path}]] is expected")));
            }
            return Vec::new();
        };
        let Value::List(items) = &entry.node.value else {
            let message = format!("`{path}` is {}, not a list of tables", entry.node.value.kind());
            let label = if path.contains('.') {
                format!("expected: {key} = [ {{ ... }}, ... ]")
            } else {
                format!("expected: [[{path}]] with two brackets")
            };
            self.note(Problem::new(entry.node.at.clone(), message).label(label));
            return Vec::new();
        };
        if items.is_empty() && path != "event" && path != "case" {
            self.note(Problem::new(entry.node.at.clone(), format!("`{path}` is an empty list")));
        }
        let mut out = Vec::new();
        for item in items {
            match &item.value {
                Value::Table(table) => {
                    out.push(Section { table: Some(table), at: item.at.clone(), path: path.clone(), quiet: false });
                }
                other => self.note(
                    Problem::new(item.at.clone(), format!("this member of `{path}` is {}, not a table", other.kind()))
                        .label("a table { key = value, ... } is expected"),
                ),
            }
        }
        out
    }

    /// Notes the keys that nobody knows.
    pub fn finish(&mut self, section: &Section<'_>) {
        let Some(table) = section.table else { return };
        for entry in &table.entries {
            if schema::children(&section.path).any(|(name, _)| name == entry.key) {
                continue;
            }
            self.note(unknown_key(section, entry));
        }
    }

    fn missing(&mut self, section: &Section<'_>, key: &str, example: &str) {
        // A slip of the pen in the key is reported as unknown, with its guess: once is enough.
        if section.quiet || section.misspelt().any(|word| word == key) {
            return;
        }
        let path = section.path_of(key);
        self.note(
            Problem::new(section.at.clone(), format!("`{path}` is missing"))
                .label(format!("`{key}` is expected here"))
                .help(format!("{key} = {example}")),
        );
    }

    pub(super) fn rule(&self, section: &Section<'_>, key: &str) -> Option<&'static Key> {
        let rule = schema::find(&section.path_of(key));
        debug_assert!(rule.is_some(), "{} is not in the list of keys", section.path_of(key));
        rule
    }

    /// The entry, its rule, and its default when it is not there.
    pub(super) fn look<'t>(
        &mut self,
        section: &Section<'t>,
        key: &str,
        example: &str,
    ) -> (Option<&'t Entry>, Option<&'static Key>) {
        let rule = self.rule(section, key);
        let entry = section.get(key);
        if entry.is_none() && rule.is_some_and(|rule| rule.need == Need::Required) {
            self.missing(section, key, example);
        }
        (entry, rule)
    }

    /// A quantity that is required or has a default; NaN when it is wrong.
    pub fn quantity(&mut self, section: &Section<'_>, key: &str) -> f64 {
        self.optional_quantity(section, key).unwrap_or(f64::NAN)
    }

    /// A quantity; `None` when it is not there and has no default. NaN when it is wrong.
    pub fn optional_quantity(&mut self, section: &Section<'_>, key: &str) -> Option<f64> {
        let rule = self.rule(section, key)?;
        let Kind::Quantity(dimension, limits) = rule.kind else { return None };
        self.any_quantity(section, key, rule, dimension, limits)
    }

    /// A quantity of an injector, whose dimension follows from what it injects.
    pub fn injected_quantity(&mut self, section: &Section<'_>, key: &str, gas: bool) -> Option<f64> {
        let rule = self.rule(section, key)?;
        let Kind::Injected(liquid_dimension, gas_dimension, limits) = rule.kind else { return None };
        self.any_quantity(section, key, rule, if gas { gas_dimension } else { liquid_dimension }, limits)
    }

    fn any_quantity(
        &mut self,
        section: &Section<'_>,
        key: &str,
        rule: &Key,
        dimension: Dimension,
        limits: Limits,
    ) -> Option<f64> {
        let example = format!("\"{}\"", dimension.example());
        match self.look(section, key, &example).0 {
            Some(entry) => Some(self.quantity_node(&entry.node, rule.path, dimension, limits)),
            None => match rule.need {
                Need::Default(text) => parse(text.trim_matches('"'), dimension, self.atmospheric_pressure_psia).ok(),
                _ => None,
            },
        }
    }

    /// A quantity from its node; NaN when it is wrong.
    pub fn quantity_node(&mut self, node: &Node, name: &str, dimension: Dimension, limits: Limits) -> f64 {
        let unit = units_of(dimension).next().map_or("", |unit| unit.name);
        let text = match &node.value {
            Value::Text(text) => text,
            Value::Number(number) if number.is_finite() => {
                let written =
                    if *number == 0.0 || number.abs() > 1e-4 { format!("{number}") } else { format!("{number:e}") };
                self.note(
                    Problem::new(node.at.clone(), format!("`{name}` has no unit"))
                        .label(format!("{} with its unit is expected", dimension.with_article()))
                        .help(format!("write it in quotes with its unit, like \"{written} {unit}\"")),
                );
                return f64::NAN;
            }
            other => {
                let found = if matches!(other, Value::Number(_)) { "not a finite number" } else { other.kind() };
                self.note(Problem::new(node.at.clone(), format!("`{name}` is {found}")).label(format!(
                    "{} is expected, like \"{}\"",
                    dimension.with_article(),
                    dimension.example()
                )));
                return f64::NAN;
            }
        };
        match parse(text, dimension, self.atmospheric_pressure_psia) {
            Ok(value) => self.within(node, name, value, limits, unit),
            Err(QuantityError { message, help }) => {
                let mut problem = Problem::new(node.at.clone(), format!("`{name}`: {message}"))
                    .label(format!("{} is expected", dimension.with_article()));
                problem.help = help;
                self.note(problem);
                f64::NAN
            }
        }
    }

    fn within(&mut self, node: &Node, name: &str, value: f64, limits: Limits, unit: &str) -> f64 {
        if limits.allow(value) {
            return value;
        }
        let message = if !value.is_finite() {
            format!("`{name}` is not a finite number")
        } else if value < 0.0 && limits.low >= 0.0 {
            format!("`{name}` is negative")
        } else if value > limits.high {
            format!("`{name}` is too large")
        } else {
            format!("`{name}` is too small")
        };
        self.note(Problem::new(node.at.clone(), message).label(format!("it must be {}", limits.text(unit))));
        f64::NAN
    }

    /// A bare number from its node; NaN when it is wrong.
    pub fn number_node(&mut self, node: &Node, name: &str, limits: Limits) -> f64 {
        match &node.value {
            Value::Number(number) => self.within(node, name, *number, limits, ""),
            other => {
                self.note(
                    Problem::new(node.at.clone(), format!("`{name}` is {}, not a number", other.kind()))
                        .label("a bare number is expected"),
                );
                f64::NAN
            }
        }
    }

    /// A number or fraction that is required or has a default; NaN when it is wrong.
    pub fn number(&mut self, section: &Section<'_>, key: &str) -> f64 {
        self.optional_number(section, key).unwrap_or(f64::NAN)
    }

    /// A number or fraction; `None` when it is not there and has no default. NaN when it is wrong.
    pub fn optional_number(&mut self, section: &Section<'_>, key: &str) -> Option<f64> {
        let (entry, rule) = self.look(section, key, "0.2");
        let rule = rule?;
        let Some(entry) = entry else {
            return match rule.need {
                Need::Default(text) => text.parse().ok(),
                _ => None,
            };
        };
        let (fraction, limits) = match rule.kind {
            Kind::Fraction(limits) => (true, limits),
            Kind::Number(limits) => (false, limits),
            _ => return None,
        };
        let node = &entry.node;
        let value = match &node.value {
            Value::Number(number) => *number,
            Value::Text(text) if fraction && text.trim_end().ends_with('%') => {
                match units::parse_number(text.trim_end().trim_end_matches('%')) {
                    Ok(percent) => percent / 100.0,
                    Err(message) => {
                        self.note(
                            Problem::new(node.at.clone(), format!("`{}`: {message}", rule.path))
                                .label("a fraction is expected, like 0.22 or \"22 %\""),
                        );
                        return Some(f64::NAN);
                    }
                }
            }
            other => {
                let expected = if fraction {
                    "a fraction is expected, like 0.22 or \"22 %\""
                } else {
                    "a bare number is expected"
                };
                let mut problem =
                    Problem::new(node.at.clone(), format!("`{}` is {}, not a number", rule.path, other.kind()))
                        .label(expected);
                if other_text_is_number(other) {
                    problem = problem.help("this key has no dimension: leave out the quotes");
                }
                self.note(problem);
                return Some(f64::NAN);
            }
        };
        let before = self.problems.len();
        let checked = self.within(node, rule.path, value, limits, "");
        if fraction
            && value > 1.0
            && value <= 100.0
            && let Some(problem) = self.problems.get_mut(before)
        {
            problem.help = Some(format!("for {value} per cent write {} or \"{value} %\"", value / 100.0));
        }
        Some(checked)
    }
}

fn other_text_is_number(value: &Value) -> bool {
    matches!(value, Value::Text(text) if text.trim().parse::<f64>().is_ok())
}

pub(super) fn shorten(text: &str) -> String {
    if text.chars().count() <= 60 { text.to_owned() } else { text.chars().take(57).chain("...".chars()).collect() }
}
