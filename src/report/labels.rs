//! The units in which results are written, with the short names that the exporters use.

pub use crate::units::{Dimension, UnitSystem};

/// How one dimension is written.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Label {
    /// Ending of column names, without the leading underscore; empty for a number without a dimension.
    pub suffix: &'static str,
    /// For people.
    pub text: &'static str,
    factor: f64,
    offset: f64,
}

impl Label {
    /// A number without a dimension.
    pub fn fraction() -> Self {
        Self { suffix: "", text: "", factor: 1.0, offset: 0.0 }
    }

    /// From the program's oilfield units to the written ones.
    pub fn of(&self, value: f64) -> f64 {
        value * self.factor + self.offset
    }

    /// From the written units to the program's.
    pub fn back(&self, written: f64) -> f64 {
        (written - self.offset) / self.factor
    }

    /// `stem` with the unit behind it.
    pub fn column(&self, stem: &str) -> String {
        if self.suffix.is_empty() { stem.to_owned() } else { format!("{stem}_{}", self.suffix) }
    }
}

/// How `dimension` is written in `units`.
pub fn label(units: UnitSystem, dimension: Dimension) -> Label {
    let unit = units.unit(dimension);
    Label { suffix: unit.suffix, text: unit.label, factor: unit.factor, offset: unit.offset }
}
