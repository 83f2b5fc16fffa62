//! Compares cases (and, later, odds, levers and edge maps).

mod compare;

pub use compare::{CaseOutcome, CaseRow, Comparison, Shift, WellShift};
