//! The scenario file: parse, check, resolve cases, point at the offending line.
//!
//! The file becomes a tree in which everything knows its place ([`Document`]); overrides of a case and of the
//! command line change the tree; then one pass reads it by the list of keys in [`schema`] and notes *every* problem.

mod checks;
mod checks_surveys;
mod document;
mod doubts;
mod doubts_lab;
mod doubts_surveys;
mod doubts_wells;
mod events;
mod flowing_survey;
mod guess;
mod load;
mod overrides;
mod problem;
mod read_aquifer;
mod read_inflow;
mod read_lab;
mod read_line;
mod read_onsets;
mod read_tank;
mod read_water;
mod read_wells;
mod reader;
mod reader_words;
mod resolve;
pub mod schema;
mod section;
mod survey;
mod tree;

pub use document::{Document, FluidScenario, Scenario};
pub use doubts::data_doubts;
pub use load::LoadError;
pub use problem::{Location, Problem, Problems};
pub use reader::FileUsed;

/// A commented scenario that runs, for `wane new`.
pub fn starter() -> &'static str {
    include_str!("starter.toml")
}

/// Lower-case hexadecimal digits.
fn hex(bytes: &[u8]) -> String {
    bytes.iter().map(|byte| format!("{byte:02x}")).collect()
}
