//! How a command fails: what is printed on standard error, and with which exit status.

use crate::fault::Fault;
use crate::forecast::RunError;
use crate::report::ReportError;
use crate::report::folder::FolderError;
use crate::scenario::{LoadError, Problems, Scenario};
use crate::units::UnitSystem;
use std::io::{self, Write};
use std::process::ExitCode;

/// Why a command failed.
#[derive(Debug)]
pub enum Failure {
    /// The scenario is wrong, and it is known where.
    Scenario(Box<Problems>),
    /// An argument is wrong.
    Usage(String),
    /// The run or the writing failed.
    Run(String),
}

impl Failure {
    /// The exit status.
    pub fn code(&self) -> ExitCode {
        ExitCode::from(match self {
            Self::Scenario(_) | Self::Usage(_) => 2,
            Self::Run(_) => 1,
        })
    }

    /// Prints the message on standard error, coloured where that is a terminal.
    pub fn print(&self) {
        let mut err = anstream::stderr();
        // Nobody reads a closed standard error.
        match self {
            Self::Scenario(problems) => writeln!(err, "{}", problems.render(true)).ok(),
            Self::Usage(text) | Self::Run(text) => writeln!(err, "\u{1b}[1;31merror\u{1b}[0m: {}", clean(text)).ok(),
        };
    }

    /// A run that failed; faults of the input become places in the file. `case` is named where several run.
    pub fn of_run(error: RunError, scenario: &Scenario, case: Option<&str>) -> Self {
        let RunError::Input(faults) = error else {
            let which = case.map_or_else(String::new, |case| format!("case {case}: "));
            return Self::Run(format!("{which}{}", scenario.units.tell(&error.to_string())));
        };
        let mut all: Option<Problems> = None;
        for fault in &faults {
            let found = scenario.problem_at(&told(fault, scenario.units));
            match &mut all {
                None => all = Some(found),
                Some(so_far) => so_far.list.extend(found.list),
            }
        }
        match all {
            Some(problems) => problems.into(),
            None => Self::Run("the input cannot be run".to_owned()),
        }
    }
}

fn told(fault: &Fault, units: UnitSystem) -> Fault {
    Fault { message: units.tell(&fault.message), help: fault.help.as_deref().map(|h| units.tell(h)), ..fault.clone() }
}

/// A file name or a value from a file may hold control characters, which would garble a terminal.
fn clean(text: &str) -> String {
    text.chars().map(|c| if c.is_control() && c != '\n' { ' ' } else { c }).collect()
}

impl From<Problems> for Failure {
    fn from(problems: Problems) -> Self {
        Self::Scenario(Box::new(problems))
    }
}

impl From<LoadError> for Failure {
    fn from(error: LoadError) -> Self {
        match error {
            LoadError::Problems(problems) => problems.into(),
            other => Self::Usage(other.to_string()),
        }
    }
}

impl From<FolderError> for Failure {
    fn from(error: FolderError) -> Self {
        match error {
            FolderError::NotOurs { .. } | FolderError::Unwritable { .. } => Self::Usage(error.to_string()),
            FolderError::Failed { .. } | FolderError::Report(_) => Self::Run(error.to_string()),
        }
    }
}

impl From<ReportError> for Failure {
    fn from(error: ReportError) -> Self {
        Self::Run(error.to_string())
    }
}

impl From<io::Error> for Failure {
    fn from(error: io::Error) -> Self {
        Self::Run(format!("cannot write to standard output: {error}"))
    }
}
