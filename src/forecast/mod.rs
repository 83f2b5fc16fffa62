//! The time-stepping engine: calendar, limits, injectors, events, end of natural flow.

mod calendar;
mod curves;
mod doubts;
mod dynamics;
mod field;
pub mod integrate;
mod modes;
mod placement;
mod result;
mod rows;
mod run;
mod spec;
mod switching;
mod track;

pub use calendar::{date_at, days_between};
pub use curves::{WellCurves, curves_on};
pub use field::{Field, RunError};
pub use result::*;
pub use run::{run, run_with_curves};
pub use spec::*;
pub use track::{WellMoment, WellTrack, tracks, wells_after_events};
