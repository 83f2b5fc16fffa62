//! Studies that run many forecasts: cases side by side, the spread over tubing models and over the rules for future inflow; the edge of natural flow around one; and
//! models tuned to measurements.

pub mod calibrate;
mod compare;
mod edge;
mod future_rules;
mod spread;

pub use compare::{CaseOutcome, CaseRow, Comparison, Shift, WellShift};
pub use edge::{
    Edge, EdgeLine, EdgeMap, EdgeOptions, Gas, LineOf, Place, Seen, Stand, Verdict, Way, WellEdge, edge_map,
};
pub use future_rules::{RuleEnds, rule_ends, store_rule_ends};
pub use spread::add_spread;
