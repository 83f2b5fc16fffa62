//! Studies that run many forecasts: cases side by side, the spread over tubing models.

mod compare;
mod spread;

pub use compare::{CaseOutcome, CaseRow, Comparison, Shift, WellShift};
pub use spread::add_spread;
