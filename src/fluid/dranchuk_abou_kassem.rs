//! Dranchuk and Abou-Kassem (1975): compressibility factor of natural gas.
//!
//! ```text
//! z = 1 + c1 r + c2 r^2 - c3 r^5 + c4 (1 + A11 r^2) r^2 exp(-A11 r^2),   r = 0.27 ppr/(z Tpr)
//! c1 = A1 + A2/Tpr + A3/Tpr^3 + A4/Tpr^4 + A5/Tpr^5     c2 = A6 + A7/Tpr + A8/Tpr^2
//! c3 = A9 (A7/Tpr + A8/Tpr^2)                           c4 = A10/Tpr^3
//! ```
//!
//! # Method
//! Solved for the reduced density r, of which r z(r) = 0.27 ppr/Tpr is a rising function for Tpr >= 1.03: one root, found by
//! Newton's method inside a bracket.
//!
//! # Source
//! P. M. Dranchuk and J. H. Abou-Kassem, "Calculation of Z Factors for Natural Gases Using Equations of State", Journal of
//! Canadian Petroleum Technology (July-September 1975).
//!
//! # Range
//! ppr 0.2 to 30 with Tpr 1.0 to 3.0. Fitted to the Standing-Katz chart, within about 1 %.
//!
//! # Departures
//! Tpr is held to at least 1.05, the last isotherm of the chart, and at most 3. Below about 1.02 the equation has up to three roots and z would
//! jump with pressure; a gas that heavy or cool would partly condense, which no black-oil model describes.

const A1: f64 = 0.3265;
const A2: f64 = -1.0700;
const A3: f64 = -0.5339;
const A4: f64 = 0.015_69;
const A5: f64 = -0.051_65;
const A6: f64 = 0.5475;
const A7: f64 = -0.7361;
const A8: f64 = 0.1844;
const A9: f64 = 0.1056;
const A10: f64 = 0.6134;
const A11: f64 = 0.7210;

/// The lowest pseudo-reduced temperature that is used.
pub const MINIMUM_TPR: f64 = 1.05;
/// The highest pseudo-reduced temperature that is used.
pub const MAXIMUM_TPR: f64 = 3.0;
/// The highest pseudo-reduced pressure of the fit.
pub const MAXIMUM_PPR: f64 = 30.0;
/// Above the reduced density of every point in range.
const DENSITY_BOUND: f64 = 3.0;

/// The equation at one pseudo-reduced temperature.
#[derive(Debug, Clone, Copy)]
pub struct Isotherm {
    c1: f64,
    c2: f64,
    c3: f64,
    c4: f64,
    inverse_tpr: f64,
}

impl Isotherm {
    /// Prepares the coefficients; `tpr` is held to the range of the fit.
    #[inline]
    pub fn new(tpr: f64) -> Self {
        let i = 1.0 / tpr.clamp(MINIMUM_TPR, MAXIMUM_TPR);
        let i3 = i * i * i;
        let tail = (A7 + A8 * i) * i;
        Self {
            c1: A1 + A2 * i + (A3 + (A4 + A5 * i) * i) * i3,
            c2: A6 + tail,
            c3: A9 * tail,
            c4: A10 * i3,
            inverse_tpr: i,
        }
    }

    /// r z(r) and its first two derivatives.
    #[inline]
    fn pressure_function(&self, r: f64) -> (f64, f64) {
        let r2 = r * r;
        let r5 = r2 * r2 * r;
        let s = A11 * r2;
        let bump = self.c4 * r2 * (-s).exp();
        let z = 1.0 + self.c1 * r + self.c2 * r2 - self.c3 * r5 + bump * (1.0 + s);
        // d(r z)/dr = z + r dz/dr, with d[(1+s) r2 e^-s]/dr = 2 r e^-s (1 + s - s^2).
        let r_dz = self.c1 * r + 2.0 * self.c2 * r2 - 5.0 * self.c3 * r5 + 2.0 * bump * (1.0 + s - s * s);
        (r * z, z + r_dz)
    }

    /// The compressibility factor at a pseudo-reduced pressure, held to 0..30.
    #[inline]
    pub fn z(&self, ppr: f64) -> f64 {
        let target = 0.27 * ppr.clamp(0.0, MAXIMUM_PPR) * self.inverse_tpr;
        if target <= 0.0 {
            return 1.0;
        }
        target / self.density(target, (target / (1.0 + 0.35 * target)).min(DENSITY_BOUND))
    }

    /// The root of r z(r) = `target` from a first guess.
    #[inline]
    fn density(&self, target: f64, guess: f64) -> f64 {
        let (mut low, mut high) = (0.0, DENSITY_BOUND);
        let mut r = guess;
        for _ in 0..60 {
            let (value, slope) = self.pressure_function(r);
            let miss = value - target;
            if miss > 0.0 {
                high = r;
            } else {
                low = r;
            }
            let step = miss / slope;
            let next = r - step;
            // Newton converges quadratically: after a step this small the error is below rounding.
            if step.abs() <= 1e-8 * r {
                return next;
            }
            r = if next > low && next < high { next } else { 0.5 * (low + high) };
        }
        r
    }
}

/// The compressibility factor at one pseudo-reduced pressure and temperature.
pub fn z_factor(ppr: f64, tpr: f64) -> f64 {
    Isotherm::new(tpr).z(ppr)
}
