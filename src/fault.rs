//! What is wrong with one value of the input, addressed by the dotted path of its key.

/// One thing that is wrong with the input, as the physics layers report it: they know neither files nor
/// lines, only which key is at fault. The `scenario` layer turns `key` into a line and a column.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Fault {
    /// Dotted path of the key, relative to whoever was asked (`diameter`, `inflow.test[1].flowing`).
    pub key: String,
    /// What was found and why it cannot be.
    pub message: String,
    /// What was expected, or what was probably meant.
    pub help: Option<String>,
}

impl Fault {
    /// A fault without a hint.
    pub fn new(key: impl Into<String>, message: impl Into<String>) -> Self {
        Self { key: key.into(), message: message.into(), help: None }
    }

    /// Adds the hint.
    #[must_use]
    pub fn help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }

    /// Puts `prefix.` before the key, so that a fault of a part becomes one of the whole.
    #[must_use]
    pub fn under(mut self, prefix: &str) -> Self {
        self.key = if self.key.is_empty() { prefix.to_owned() } else { format!("{prefix}.{}", self.key) };
        self
    }
}

impl std::fmt::Display for Fault {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        write!(f, "{}: {}", self.key, self.message)?;
        match &self.help {
            Some(help) => write!(f, " ({help})"),
            None => Ok(()),
        }
    }
}

impl std::error::Error for Fault {}
