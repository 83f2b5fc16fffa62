//! Pressure traverse: path, temperature, hydraulics.

mod spec;

pub use spec::{TubingMethod, TubingSection, TubingSpec};
