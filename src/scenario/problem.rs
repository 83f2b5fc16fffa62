//! What is wrong with a scenario, where, and how it is shown.

use annotate_snippets::{AnnotationKind, Level, Renderer, Snippet};
use std::ops::Range;

/// Where a problem lies.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Location {
    /// Bytes of the scenario file.
    File(Range<usize>),
    /// Bytes of one of the `KEY=VALUE` settings given beside the file.
    Setting {
        /// Which of them.
        index: usize,
        /// Bytes of its text.
        span: Range<usize>,
    },
    /// Nowhere in a text: for instance the name of a case that does not exist.
    Nowhere,
}

/// One thing that is wrong.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Problem {
    /// What was found.
    pub message: String,
    /// What was expected there; stands beside the underlined text.
    pub label: Option<String>,
    /// What was probably meant, or what to do.
    pub help: Option<String>,
    /// Where.
    pub at: Location,
}

impl Problem {
    /// A problem without label and help.
    pub fn new(at: Location, message: impl Into<String>) -> Self {
        Self { message: message.into(), label: None, help: None, at }
    }

    /// Adds what was expected.
    #[must_use]
    pub fn label(mut self, label: impl Into<String>) -> Self {
        self.label = Some(label.into());
        self
    }

    /// Adds a hint.
    #[must_use]
    pub fn help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }
}

/// All problems of a scenario, with the texts in which they lie.
///
/// `Display` writes them plainly, each with its line, column and the text underlined.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Problems {
    /// Name of the file as the user gave it.
    pub name: String,
    /// The file's text.
    pub text: String,
    /// The settings given beside the file.
    pub settings: Vec<String>,
    /// The problems, in the order of the file.
    pub list: Vec<Problem>,
}

impl Problems {
    /// Sorts by place and drops repetitions.
    pub(super) fn new(name: &str, text: &str, settings: &[String], mut list: Vec<Problem>) -> Self {
        list.sort_by_key(|problem| match &problem.at {
            Location::Nowhere => (0, 0, 0),
            Location::File(span) => (1, 0, span.start),
            Location::Setting { index, span } => (2, *index, span.start),
        });
        list.dedup();
        Self { name: name.to_owned(), text: text.to_owned(), settings: settings.to_vec(), list }
    }

    /// Line and column, from one, of a problem's first character.
    pub fn line_column(&self, problem: &Problem) -> Option<(usize, usize)> {
        let (text, span) = self.place(problem)?;
        let before = text.get(..span.start)?;
        let line = before.matches('\n').count() + 1;
        let column = before.rsplit('\n').next().unwrap_or("").chars().count() + 1;
        Some((line, column))
    }

    /// The offending text.
    pub fn quoted(&self, problem: &Problem) -> Option<&str> {
        let (text, span) = self.place(problem)?;
        text.get(span)
    }

    fn place(&self, problem: &Problem) -> Option<(&str, Range<usize>)> {
        let (text, span) = match &problem.at {
            Location::File(span) => (self.text.as_str(), span),
            Location::Setting { index, span } => (self.settings.get(*index)?.as_str(), span),
            Location::Nowhere => return None,
        };
        Some((text, on_boundaries(text, span)))
    }

    /// All problems as text, with colours for a terminal if so asked.
    pub fn render(&self, colour: bool) -> String {
        let renderer = if colour { Renderer::styled() } else { Renderer::plain() };
        let mut out = String::new();
        for problem in &self.list {
            out.push_str(&self.render_one(problem, &renderer));
            out.push_str("\n\n");
        }
        let count = self.list.len();
        let noun = if count == 1 { "problem" } else { "problems" };
        out.push_str(&format!("{count} {noun} in {}", self.name));
        out
    }

    fn render_one(&self, problem: &Problem, renderer: &Renderer) -> String {
        let title = Level::ERROR.primary_title(printable(&problem.message));
        let help = problem.help.as_deref().map(|help| Level::HELP.message(printable(help)));
        let group = match self.place(problem) {
            Some((text, span)) => {
                // Only the line in question: the end of a longer stretch adds nothing to its beginning.
                let (line, number, span) = line_of(text, span);
                let path = match &problem.at {
                    Location::Setting { .. } => "--set",
                    _ => self.name.as_str(),
                };
                let line = printable(line);
                let mut annotation = AnnotationKind::Primary.span(span);
                if let Some(label) = &problem.label {
                    annotation = annotation.label(printable(label));
                }
                let snippet = Snippet::source(line).line_start(number).path(printable(path)).annotation(annotation);
                title.element(snippet).elements(help)
            }
            None => annotate_snippets::Group::with_title(title).elements(help),
        };
        renderer.render(&[group])
    }
}

impl std::fmt::Display for Problems {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str(&self.render(false))
    }
}

impl std::error::Error for Problems {}

/// Control characters would garble a terminal; a blank of the same length keeps the columns (and bytes) in place.
fn printable(text: &str) -> String {
    text.chars()
        .flat_map(|c| {
            let (shown, times) = if c.is_control() && c != '\n' { (' ', c.len_utf8()) } else { (c, 1) };
            std::iter::repeat_n(shown, times)
        })
        .collect()
}

/// The nearest span that lies in the text and cuts no character.
fn on_boundaries(text: &str, span: &Range<usize>) -> Range<usize> {
    let mut start = span.start.min(text.len());
    while !text.is_char_boundary(start) {
        start -= 1;
    }
    let mut end = span.end.clamp(start, text.len());
    while !text.is_char_boundary(end) {
        end += 1;
    }
    start..end
}

/// The line in which the span begins, its number, and the span within it.
fn line_of(text: &str, span: Range<usize>) -> (&str, usize, Range<usize>) {
    // A span on nothing after the last line break is shown at the end of the last line with text.
    let begin = text[..span.start].rfind('\n').map_or(0, |i| i + 1);
    let end = text[begin..].find('\n').map_or(text.len(), |i| begin + i);
    let line = text[begin..end].strip_suffix('\r').unwrap_or(&text[begin..end]);
    let number = text[..begin].matches('\n').count() + 1;
    let start = (span.start - begin).min(line.len());
    let stop = (span.end - begin).clamp(start, line.len());
    (line, number, start..stop)
}
