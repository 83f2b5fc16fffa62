//! Reading of words, names, dates and flags; the rest of the reader is in `reader.rs`.

use super::guess::guess;
use super::problem::Problem;
use super::reader::{Reader, shorten};
use super::schema::{Kind, Need};
use super::section::Section;
use super::tree::{Moment, Value};
use jiff::civil::Date;

impl Reader {
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
