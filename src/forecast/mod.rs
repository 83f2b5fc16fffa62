//! The time-stepping engine: calendar, limits, injectors, events, end of natural flow.

mod calendar;
mod curves;
mod doubts;
mod doubts_flow;
mod doubts_wellhead;
mod dynamics;
mod field;
pub mod integrate;
mod lines;
mod margins;
mod modes;
mod onsets;
mod placement;
mod result;
mod rows;
mod run;
mod screens;
mod spec;
mod switching;
mod track;

pub use calendar::{date_at, days_between};
pub use curves::{WellCurves, curves_on};
pub use field::{Field, RunError};
pub use onsets::OnsetSpec;
pub use result::*;
pub use run::{natural_flow_ends, run, run_with_curves};
pub use spec::*;
pub use track::{WellMoment, WellTrack, tracks, wells_after_events};
