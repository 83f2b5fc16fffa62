//! The loss of productivity by scale and fines.
//!
//! # Method
//! A stated part is lost every year: J = J0*(1 - loss)^(years since the last stimulation), continuous in time. A constant relative decline is
//! our own simplest form; scale and fines follow chemistry and rate, which are not modelled. The clock also runs while the well is shut in.

/// Days in a year.
const DAYS_IN_YEAR: f64 = 365.25;

/// What a well has left of its productivity, over time.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ProductivityLoss {
    /// Part left at `from_days`.
    left: f64,
    /// Days from the start of the forecast at which the present rate of loss began.
    from_days: f64,
    /// Relative loss per day, as a rate.
    rate_1_d: f64,
}

impl ProductivityLoss {
    /// Nothing is lost at `from_days`, and `yearly` of what is left in every year after that.
    pub fn new(yearly: f64, from_days: f64) -> Self {
        Self { left: 1.0, from_days, rate_1_d: -(-yearly).ln_1p() / DAYS_IN_YEAR }
    }

    /// The same well at another yearly loss from `from_days` on: what is lost already stays lost.
    pub fn at_rate(self, yearly: f64, from_days: f64) -> Self {
        Self { left: self.left(from_days), ..Self::new(yearly, from_days) }
    }

    /// What is left at an instant, as a constant.
    pub fn frozen(self, days: f64) -> Self {
        Self { left: self.left(days), ..Self::new(0.0, 0.0) }
    }

    /// Part of the productivity left.
    pub fn left(&self, days: f64) -> f64 {
        if self.rate_1_d == 0.0 {
            return self.left;
        }
        self.left * (-self.rate_1_d * (days - self.from_days).max(0.0)).exp()
    }
}
