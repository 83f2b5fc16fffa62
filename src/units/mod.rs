//! Quantities: "3600 psia" in, plain numbers in oilfield units inside, field or metric out.
//!
//! Every unit is one row of the table in `table.rs`; reading, writing and the lists in error messages all use it.

pub mod constants;
mod output;
mod quantity;
mod table;
mod text;

pub use output::{OutputUnit, UnitSystem};
pub use quantity::{QuantityError, parse, parse_flow_coefficient, parse_number};
pub use table::{Dimension, Scale, Unit, units, units_of};
