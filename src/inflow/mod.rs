//! Rate against flowing pressure, now and at future reservoir pressures.

mod spec;

pub use spec::{Coefficient, FutureRule, InflowMethod, InflowSpec, InflowTest, Measured, RateBasis};
