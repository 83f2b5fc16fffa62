//! Studies that run many forecasts: cases side by side, the spread over tubing models; models tuned to measurements.

pub mod calibrate;
mod compare;
mod spread;

pub use compare::{CaseOutcome, CaseRow, Comparison, Shift, WellShift};
pub use spread::add_spread;
