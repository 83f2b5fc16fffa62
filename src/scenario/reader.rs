//! Typed reading of the tree by the list of keys: every problem is noted, none stops the reading.
//!
//! Where a value is missing or wrong, a placeholder (NaN for numbers) is returned and a problem noted, so that one
//! pass finds all problems; comparisons with NaN are false, so a bad value causes no follow-on message.

use super::guess::guess;
use super::problem::{Location, Problem};
use super::schema::{self, Key, Kind, LATER, Limits, Need};
use super::tree::{Entry, Moment, Node, Table, Value};
use crate::units::{self, Dimension, QuantityError, parse, units_of};
use jiff::civil::Date;
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

/// One table under reading.
#[derive(Debug, Clone)]
pub(super) struct Section<'t> {
    /// `None`: the table is not there, and defaults serve.
    table: Option<&'t Table>,
    /// Where a missing key is reported.
    at: Location,
    /// Path in the list of keys.
    path: String,
    /// The table itself is missing or wrong, which is already noted.
    quiet: bool,
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
    fn misspelt(&self) -> impl Iterator<Item = &'static str> + '_ {
        let known = || schema::children(&self.path).map(|(name, _)| name);
        let entries = self.table.map_or(&[][..], |table| &table.entries);
        entries
            .iter()
            .filter(move |entry| known().all(|name| name != entry.key))
            .filter_map(move |entry| guess(&entry.key, known().filter(|name| !self.has(name))))
    }

    fn path_of(&self, key: &str) -> String {
        if self.path.is_empty() { key.to_owned() } else { format!("{}.{key}", self.path) }
    }
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

    fn rule(&self, section: &Section<'_>, key: &str) -> Option<&'static Key> {
        let rule = schema::find(&section.path_of(key));
        debug_assert!(rule.is_some(), "{} is not in the list of keys", section.path_of(key));
        rule
    }

    /// The entry, its rule, and its default when it is not there.
    fn look<'t>(
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
            Ok(value) => {
                let digits =
                    |x: f64| if x == 0.0 || (1e-3..1e7).contains(&x.abs()) { format!("{x}") } else { format!("{x:e}") };
                self.within(node, name, value, limits, &|x| format!("{} {unit}", digits(x)))
            }
            Err(QuantityError { message, help }) => {
                let mut problem = Problem::new(node.at.clone(), format!("`{name}`: {message}"))
                    .label(format!("{} is expected", dimension.with_article()));
                problem.help = help;
                self.note(problem);
                f64::NAN
            }
        }
    }

    fn within(&mut self, node: &Node, name: &str, value: f64, limits: Limits, show: &dyn Fn(f64) -> String) -> f64 {
        if limits.allow(value) {
            return value;
        }
        let low = if limits.low_allowed { "at least" } else { "above" };
        let range = format!("{low} {} and at most {}", show(limits.low), show(limits.high));
        let message = if value.is_finite() {
            let beyond = if value > limits.high { "too large" } else { "too small" };
            let beyond = if value < 0.0 && limits.low >= 0.0 { "negative" } else { beyond };
            format!("`{name}` is {beyond}")
        } else {
            format!("`{name}` is not a finite number")
        };
        self.note(Problem::new(node.at.clone(), message).label(format!("it must be {range}")));
        f64::NAN
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
        let checked = self.within(node, rule.path, value, limits, &|x| format!("{x}"));
        if fraction
            && value > 1.0
            && value <= 100.0
            && let Some(problem) = self.problems.get_mut(before)
        {
            problem.help = Some(format!("for {value} per cent write {} or \"{value} %\"", value / 100.0));
        }
        Some(checked)
    }

    /// One of the words that the list of keys allows; `None` when it is not there (and has no default) or wrong.
    pub fn choice(&mut self, section: &Section<'_>, key: &str, later: &[&str]) -> Option<&'static str> {
        let rule = self.rule(section, key)?;
        let Kind::Choice(words) = rule.kind else { return None };
        let (entry, _) = self.look(section, key, &format!("\"{}\"", words.first().copied().unwrap_or("")));
        let Some(entry) = entry else {
            return match rule.need {
                Need::Default(text) => words.iter().copied().find(|word| *word == text.trim_matches('"')),
                _ => None,
            };
        };
        let expected = format!("expected one of: {}", words.join(", "));
        let Some(text) = entry.node.text() else {
            self.note(
                Problem::new(entry.node.at.clone(), format!("`{}` is {}", rule.path, entry.node.value.kind()))
                    .label(expected),
            );
            return None;
        };
        let found = words.iter().copied().find(|word| *word == text);
        if found.is_none() {
            let problem = if later.contains(&text) {
                Problem::new(entry.node.at.clone(), format!("`{text}` is not there yet: it comes with a later version"))
            } else {
                let problem = Problem::new(entry.node.at.clone(), format!("`{}` cannot be \"{text}\"", rule.path));
                match guess(text, words.iter().copied()) {
                    Some(word) => problem.help(format!("did you mean \"{word}\"?")),
                    None => problem,
                }
            };
            self.note(problem.label(expected));
        }
        found
    }

    /// A text that is not empty.
    pub fn text(&mut self, section: &Section<'_>, key: &str) -> Option<String> {
        let entry = self.look(section, key, "\"...\"").0?;
        let path = section.path_of(key);
        let Some(text) = entry.node.text() else {
            let problem = Problem::new(entry.node.at.clone(), format!("`{path}` is {}", entry.node.value.kind()));
            self.note(problem.label("a text in quotes is expected"));
            return None;
        };
        if text.trim().is_empty() || text.chars().any(char::is_control) {
            let what = if text.trim().is_empty() { "is empty" } else { "holds a control character" };
            self.note(Problem::new(entry.node.at.clone(), format!("`{path}` {what}")).label("a text is expected"));
            return None;
        }
        Some(text.to_owned())
    }

    /// A name by which paths and result files can speak of a well or injector.
    pub fn name(&mut self, section: &Section<'_>) -> Option<String> {
        let text = self.text(section, "name")?;
        let why = if text.contains('.') {
            "a name holds no dot, since dots separate the parts of a path"
        } else if text.eq_ignore_ascii_case("tank") {
            "`tank` is the name of the tank's own rows in the results"
        } else if text.trim() != text {
            "a name neither begins nor ends with a blank"
        } else if text.contains(['/', '\\', '"', '[', ']']) {
            "a name holds no slash, quote or bracket, since files and paths are named after it"
        } else if text.chars().count() > 60 {
            "a name has at most 60 characters"
        } else {
            return Some(text);
        };
        self.note(Problem::new(section.at("name"), format!("`{}` cannot be a name", shorten(&text))).label(why));
        None
    }

    /// True or false.
    pub fn flag(&mut self, section: &Section<'_>, key: &str) -> Option<bool> {
        let (entry, rule) = self.look(section, key, "true");
        match (entry.map(|entry| (&entry.node.value, &entry.node.at)), rule.map(|rule| rule.need)) {
            (Some((Value::Flag(flag), _)), _) => Some(*flag),
            (Some((other, at)), _) => {
                let problem = Problem::new(at.clone(), format!("`{}` is {}", section.path_of(key), other.kind()));
                self.note(problem.label("true or false is expected, without quotes"));
                None
            }
            (None, Some(Need::Default(text))) => Some(text == "true"),
            (None, _) => None,
        }
    }

    /// A date.
    pub fn day(&mut self, section: &Section<'_>, key: &str) -> Option<Date> {
        let entry = self.look(section, key, "2027-01-01").0?;
        let path = section.path_of(key);
        let at = entry.node.at.clone();
        let label = "a date is expected, like 2027-01-01";
        match &entry.node.value {
            Value::Moment(Moment { date: Some(date), time: None, offset: None }) => {
                let day = Date::new(
                    i16::try_from(date.year).unwrap_or(i16::MAX),
                    i8::try_from(date.month).unwrap_or(0),
                    i8::try_from(date.day).unwrap_or(0),
                );
                match day {
                    Ok(day) if (1900..=2300).contains(&day.year()) => return Some(day),
                    _ => self.note(
                        Problem::new(at, format!("`{path}` is not a likely date"))
                            .label("a year from 1900 to 2300 is expected"),
                    ),
                }
            }
            Value::Moment(_) => {
                self.note(
                    Problem::new(at, format!("`{path}` has a time of day"))
                        .label(label)
                        .help("days begin at 00:00: leave the time out"),
                );
            }
            Value::Text(text) if text.parse::<Date>().is_ok() => {
                self.note(
                    Problem::new(at, format!("`{path}` is a text, not a date"))
                        .label(label)
                        .help(format!("leave out the quotes: {key} = {text}")),
                );
            }
            other => self.note(Problem::new(at, format!("`{path}` is {}, not a date", other.kind())).label(label)),
        }
        None
    }
}

fn other_text_is_number(value: &Value) -> bool {
    matches!(value, Value::Text(text) if text.trim().parse::<f64>().is_ok())
}

pub(super) fn shorten(text: &str) -> String {
    if text.chars().count() <= 60 { text.to_owned() } else { text.chars().take(57).chain("...".chars()).collect() }
}

fn unknown_key(section: &Section<'_>, entry: &Entry) -> Problem {
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
