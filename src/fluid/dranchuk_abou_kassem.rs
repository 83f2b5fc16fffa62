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
//! Halley's method inside a bracket, from a coarse table of roots that is filled once per run. Two steps reach rounding, so that the
//! table leaves no trace in the result.
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

use crate::elementary::exp;
use std::sync::LazyLock;

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
    fn pressure_function(&self, r: f64) -> (f64, f64, f64) {
        let r2 = r * r;
        let r5 = r2 * r2 * r;
        let s = A11 * r2;
        let bump = self.c4 * exp(-s);
        let value = r + self.c1 * r2 + self.c2 * r2 * r - self.c3 * r5 * r + bump * (1.0 + s) * r2 * r;
        let slope =
            1.0 + 2.0 * self.c1 * r + 3.0 * self.c2 * r2 - 6.0 * self.c3 * r5 + bump * (3.0 + (3.0 - 2.0 * s) * s) * r2;
        let curvature = 2.0 * self.c1 + 6.0 * self.c2 * r - 30.0 * self.c3 * r2 * r2
            + bump * (6.0 + (6.0 + (-18.0 + 4.0 * s) * s) * s) * r;
        (value, slope, curvature)
    }

    /// The compressibility factor at a pseudo-reduced pressure, held to 0..30.
    #[inline]
    pub fn z(&self, ppr: f64) -> f64 {
        let target = 0.27 * ppr.clamp(0.0, MAXIMUM_PPR) * self.inverse_tpr;
        if target > 0.0 { target / self.density(target, STARTS.at(target, self.inverse_tpr)) } else { 1.0 }
    }

    /// The root of r z(r) = `target` from a first guess.
    #[inline]
    fn density(&self, target: f64, guess: f64) -> f64 {
        let (mut low, mut high) = (0.0, DENSITY_BOUND);
        let mut r = guess;
        for _ in 0..60 {
            let (value, slope, curvature) = self.pressure_function(r);
            let miss = value - target;
            if miss > 0.0 {
                high = r;
            } else {
                low = r;
            }
            let step = miss * slope / (slope * slope - 0.5 * miss * curvature);
            let next = r - step;
            // Halley converges cubically: after a step this small the error is below rounding.
            if step.abs() <= 3e-5 * r {
                return next;
            }
            r = if next > low && next < high { next } else { 0.5 * (low + high) };
        }
        r
    }
}

/// Roots over a grid, from which the solver starts: r/target against target/(target + 1) and 1/Tpr.
struct Starts([[f64; Starts::COLUMNS]; Starts::ROWS]);

static STARTS: LazyLock<Starts> = LazyLock::new(Starts::new);

impl Starts {
    const ROWS: usize = 33;
    const COLUMNS: usize = 65;
    const LOWEST: f64 = 1.0 / MAXIMUM_TPR;
    const ROWS_PER_UNIT: f64 = (Self::ROWS - 1) as f64 / (1.0 / MINIMUM_TPR - Self::LOWEST);
    /// The highest target is 0.27 * 30/1.05 = 7.7; the last column lies above it.
    const COLUMNS_PER_UNIT: f64 = (Self::COLUMNS - 1) as f64 / 0.9;

    fn new() -> Self {
        let mut grid = [[1.0; Self::COLUMNS]; Self::ROWS];
        for (i, row) in grid.iter_mut().enumerate() {
            let isotherm = Isotherm::new(1.0 / (Self::LOWEST + i as f64 / Self::ROWS_PER_UNIT));
            for (j, cell) in row.iter_mut().enumerate().skip(1) {
                let x = j as f64 / Self::COLUMNS_PER_UNIT;
                let target = x / (1.0 - x);
                *cell = isotherm.density(target, (target / (1.0 + 0.35 * target)).min(DENSITY_BOUND)) / target;
            }
        }
        Self(grid)
    }

    #[inline]
    fn at(&self, target: f64, inverse_tpr: f64) -> f64 {
        let row = (inverse_tpr - Self::LOWEST) * Self::ROWS_PER_UNIT;
        let column = target / (target + 1.0) * Self::COLUMNS_PER_UNIT;
        // The cell's first neighbour of four; at the rim the cell is not the middle one.
        let i = (row as usize).clamp(1, Self::ROWS - 3) - 1;
        let j = (column as usize).clamp(1, Self::COLUMNS - 3) - 1;
        let along = cubic_weights(column - (j + 1) as f64);
        let across = cubic_weights(row - (i + 1) as f64);
        let mut sum = 0.0;
        for (row, weight) in self.0[i..i + 4].iter().zip(across) {
            let four = &row[j..j + 4];
            sum += weight * ((four[0] * along[0] + four[1] * along[1]) + (four[2] * along[2] + four[3] * along[3]));
        }
        sum * target
    }
}

/// Weights of Lagrange's cubic through values at -1, 0, 1, 2.
#[inline]
fn cubic_weights(x: f64) -> [f64; 4] {
    let (before, after, far) = (x + 1.0, x - 1.0, x - 2.0);
    let (inner, outer) = (0.5 * after * far, 0.5 * before * x);
    [-x * inner * (1.0 / 3.0), before * inner, -outer * far, outer * after * (1.0 / 3.0)]
}

/// The compressibility factor at one pseudo-reduced pressure and temperature.
pub fn z_factor(ppr: f64, tpr: f64) -> f64 {
    Isotherm::new(tpr).z(ppr)
}
