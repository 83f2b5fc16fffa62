//! Lee, Gonzalez and Eakin (1966): viscosity of natural gas.
//!
//! ```text
//! mu = 1e-4 K exp(X d^Y)
//! 1966 paper:   K = (9.379 + 0.01607 M) T^1.5/(209.2 + 19.26 M + T)   X = 3.448 + 986.4/T + 0.01009 M   Y = 2.447 - 0.2224 X
//! handbook:     K = (9.4 + 0.02 M) T^1.5/(209 + 19 M + T)             X = 3.5 + 986/T + 0.01 M          Y = 2.4 - 0.2 X
//! ```
//!
//! mu cp, T degR, M lb/lbmol, d density in g/cm3.
//!
//! # Source
//! A. L. Lee, M. H. Gonzalez and B. E. Eakin, "The Viscosity of Natural Gases", Journal of Petroleum Technology (August 1966).
//!
//! # Range
//! 100 to 340 degF, 100 to 8,000 psia, carbon dioxide 0.9 to 3.2 mole per cent; not meant for sour gas.

use crate::elementary::{exp, ln};

/// 1 g/cm3 in lb/ft3.
pub const LB_FT3_PER_G_CM3: f64 = 62.427_960_6;

/// The two printed coefficient sets.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum CoefficientSet {
    /// As in the 1966 paper.
    Paper,
    /// As rounded in handbooks.
    Handbook,
}

/// The correlation for one gas.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LeeGonzalezEakin {
    k_numerator: f64,
    k_denominator: f64,
    x_base: f64,
    x_inverse_temperature: f64,
    y_base: f64,
    y_slope: f64,
}

impl LeeGonzalezEakin {
    /// Prepares the constants of one gas.
    pub fn new(set: CoefficientSet, molar_mass_lb_lbmol: f64) -> Self {
        let m = molar_mass_lb_lbmol;
        match set {
            CoefficientSet::Paper => Self {
                k_numerator: 9.379 + 0.016_07 * m,
                k_denominator: 209.2 + 19.26 * m,
                x_base: 3.448 + 0.010_09 * m,
                x_inverse_temperature: 986.4,
                y_base: 2.447,
                y_slope: 0.2224,
            },
            CoefficientSet::Handbook => Self {
                k_numerator: 9.4 + 0.02 * m,
                k_denominator: 209.0 + 19.0 * m,
                x_base: 3.5 + 0.01 * m,
                x_inverse_temperature: 986.0,
                y_base: 2.4,
                y_slope: 0.2,
            },
        }
    }

    /// K, X and Y at a temperature.
    #[inline]
    pub fn kxy(&self, temperature_degr: f64) -> (f64, f64, f64) {
        let t = temperature_degr;
        let k = self.k_numerator * t * t.sqrt() / (self.k_denominator + t);
        let x = self.x_base + self.x_inverse_temperature / t;
        (k, x, self.y_base - self.y_slope * x)
    }

    /// Viscosity, cp.
    #[inline]
    pub fn viscosity_cp(&self, temperature_degr: f64, density_lb_ft3: f64) -> f64 {
        let (k, x, y) = self.kxy(temperature_degr);
        let density_power = exp(y * ln(density_lb_ft3 * (1.0 / LB_FT3_PER_G_CM3)));
        1e-4 * k * exp(x * density_power)
    }
}
