//! Where inflow and tubing meet: stable rate, flow margin.

mod spec;

pub use spec::WellSpec;
