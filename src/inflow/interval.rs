//! How well tests know the figures that are fitted to them.

use crate::statistics::student_t;

/// A figure of an inflow curve.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Figure {
    /// Fetkovich's n.
    Exponent,
    /// Fetkovich's C, STB/d/psi^2n.
    Coefficient,
    /// J above the bubble point, STB/d/psi.
    ProductivityIndex,
    /// b of Jones, Blount and Glaze, psi/(STB/d)^2.
    Turbulence,
    /// Rate at zero flowing pressure and the first test's reservoir pressure, STB/d.
    OpenFlow,
}

/// A fitted figure between its limits at [`CONFIDENCE`](crate::statistics::CONFIDENCE).
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Interval {
    /// Which.
    pub figure: Figure,
    /// As fitted.
    pub value: f64,
    /// Lower limit.
    pub low: f64,
    /// Upper limit.
    pub high: f64,
}

impl Interval {
    /// Around a value, from its standard error.
    pub(super) fn around(figure: Figure, value: f64, standard_error: f64, degrees_of_freedom: usize) -> Self {
        let half = student_t(degrees_of_freedom) * standard_error;
        Self { figure, value, low: value - half, high: value + half }
    }

    /// Around a positive value, from the standard error of its logarithm.
    pub(super) fn around_log(figure: Figure, value: f64, error_of_log: f64, degrees_of_freedom: usize) -> Self {
        let times = (student_t(degrees_of_freedom) * error_of_log).exp();
        Self { figure, value, low: value / times, high: value * times }
    }

    /// The reciprocal figure.
    pub(super) fn reciprocal(self, figure: Figure) -> Self {
        let high = if self.low > 0.0 { 1.0 / self.low } else { f64::INFINITY };
        Self { figure, value: 1.0 / self.value, low: 1.0 / self.high, high }
    }

    /// The same with limits that cannot be negative.
    pub(super) fn at_least_zero(self) -> Self {
        Self { low: self.low.max(0.0), ..self }
    }
}
