//! Text for a terminal of 100 columns: headings, tables, wrapped paragraphs.

/// Widest line written.
pub const WIDTH: usize = 100;

/// Bold, where the terminal shows it; the stream takes it out elsewhere.
const BOLD: &str = "\u{1b}[1m";
const DIM: &str = "\u{1b}[2m";
const YELLOW: &str = "\u{1b}[33m";
const RED: &str = "\u{1b}[1;31m";
const RESET: &str = "\u{1b}[0m";

/// A text that grows line by line.
#[derive(Debug, Default)]
pub struct Screen {
    text: String,
}

/// On which side a column stands.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Side {
    /// Words.
    Left,
    /// Figures.
    Right,
}

impl Screen {
    /// The text.
    pub fn finish(self) -> String {
        self.text
    }

    /// A line of its own.
    pub fn line(&mut self, text: &str) {
        self.text.push_str(text.trim_end());
        self.text.push('\n');
    }

    /// The first line of the output.
    pub fn title(&mut self, text: &str) {
        for line in wrap(&clean(text), WIDTH) {
            self.line(&format!("{BOLD}{line}{RESET}"));
        }
    }

    /// An empty line and a heading.
    pub fn heading(&mut self, text: &str) {
        self.line("");
        self.line(&format!("{BOLD}{text}{RESET}"));
    }

    /// A paragraph; lines after the first stand `hang` further in.
    pub fn paragraph(&mut self, indent: usize, hang: usize, text: &str) {
        for (i, line) in wrap(&clean(text), WIDTH - indent - hang).into_iter().enumerate() {
            let left = if i == 0 { indent } else { indent + hang };
            self.line(&format!("{}{line}", " ".repeat(left)));
        }
    }

    /// A paragraph in a quiet tone.
    pub fn quiet(&mut self, text: &str) {
        for line in wrap(&clean(text), WIDTH) {
            self.line(&format!("{DIM}{line}{RESET}"));
        }
    }

    /// A warning's first words stand out.
    pub fn warning(&mut self, mark: &str, text: &str) {
        self.marked(YELLOW, mark, text);
    }

    /// A failure's first words stand out.
    pub fn failure(&mut self, mark: &str, text: &str) {
        self.marked(RED, mark, text);
    }

    fn marked(&mut self, colour: &str, mark: &str, text: &str) {
        let (mark, text) = (clean(mark), clean(text));
        for (i, line) in wrap(&format!("{mark} {text}"), WIDTH - 4).into_iter().enumerate() {
            match line.strip_prefix(mark.as_str()) {
                Some(rest) if i == 0 => self.line(&format!("  {colour}{mark}{RESET}{rest}")),
                _ => self.line(&format!("{}{line}", if i == 0 { "  " } else { "    " })),
            }
        }
    }

    /// Names on the left, values beside them.
    pub fn pairs(&mut self, pairs: &[(&str, String)]) {
        let name = pairs.iter().map(|(name, _)| name.chars().count()).max().unwrap_or(0);
        for (key, value) in pairs {
            for (i, line) in wrap(&clean(value), WIDTH - name - 4).into_iter().enumerate() {
                self.line(&format!("  {:<name$}  {line}", if i == 0 { key } else { "" }));
            }
        }
    }

    /// A table. Cells too long for the width are cut in the first column, which holds names.
    pub fn table(&mut self, header: &[(&str, Side)], rows: &[Vec<String>]) {
        let mut widths: Vec<usize> = header.iter().map(|(text, _)| text.chars().count()).collect();
        for row in rows {
            for (width, cell) in widths.iter_mut().zip(row) {
                *width = (*width).max(cell.chars().count());
            }
        }
        let total: usize = widths.iter().map(|w| w + 2).sum();
        if let Some(first) = widths.first_mut()
            && total > WIDTH
        {
            *first = first.saturating_sub(total - WIDTH).max(8);
        }
        let cells = |row: &mut dyn Iterator<Item = &str>| {
            let mut line = String::new();
            for ((width, (_, side)), cell) in widths.iter().zip(header).zip(row) {
                let cell = cut(&clean(cell), *width);
                match side {
                    Side::Left => line.push_str(&format!("  {cell:<width$}")),
                    Side::Right => line.push_str(&format!("  {cell:>width$}")),
                }
            }
            line
        };
        let head = cells(&mut header.iter().map(|(text, _)| *text));
        self.line(&format!("{DIM}{}{RESET}", head.trim_end()));
        for row in rows {
            let line = cells(&mut row.iter().map(String::as_str));
            self.line(&line);
        }
    }
}

/// Text from a file may hold control characters, which would garble a terminal.
fn clean(text: &str) -> String {
    text.chars().map(|c| if c.is_control() { ' ' } else { c }).collect()
}

fn cut(text: &str, width: usize) -> String {
    if text.chars().count() <= width {
        return text.to_owned();
    }
    let mut short: String = text.chars().take(width.saturating_sub(1)).collect();
    short.push('…');
    short
}

/// Lines of at most `width` characters, broken at blanks; a longer word keeps its line to itself.
pub fn wrap(text: &str, width: usize) -> Vec<String> {
    let mut lines = Vec::new();
    let mut line = String::new();
    for word in text.split_whitespace() {
        if !line.is_empty() && line.chars().count() + 1 + word.chars().count() > width {
            lines.push(std::mem::take(&mut line));
        }
        if !line.is_empty() {
            line.push(' ');
        }
        line.push_str(word);
    }
    if !line.is_empty() || lines.is_empty() {
        lines.push(line);
    }
    lines
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn lines_break_at_blanks() {
        assert_eq!(wrap("aa bbb cc", 6), ["aa bbb", "cc"]);
        assert_eq!(wrap("unbreakable", 4), ["unbreakable"]);
        assert_eq!(wrap("", 4), [""]);
    }

    #[test]
    fn control_characters_do_not_reach_the_terminal() {
        let mut screen = Screen::default();
        screen.paragraph(0, 0, "a\u{1b}[31mb\u{7}");
        assert_eq!(screen.finish(), "a [31mb\n");
    }
}
