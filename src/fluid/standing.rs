//! Standing (1947): bubble point, solution gas-oil ratio and volume factor of saturated crude oil.
//!
//! ```text
//! pb = 18.2 [ (Rs/g)^0.83 10^a - 1.4 ],   a = 0.00091 T - 0.0125 API
//! Rs = g [ (p/18.2 + 1.4) 10^-a ]^(1/0.83)                     the exact inverse
//! Bo = 0.9759 + 0.00012 [ Rs (g/go)^0.5 + 1.25 T ]^1.2
//! ```
//!
//! p psia, T degF, Rs scf/STB, Bo rb/STB, g gas gravity (air = 1), go oil gravity (water = 1).
//!
//! # Source
//! M. B. Standing, "A Pressure-Volume-Temperature Correlation for Mixtures of California Oils and Gases", Drilling and
//! Production Practice, API (1947); equation form of Standing, "Volumetric and Phase Behavior of Oil Field Hydrocarbon
//! Systems", SPE (1977).
//!
//! # Range
//! 16.5 to 63.8 API, gas gravity 0.59 to 0.95, 100 to 258 degF, Rs 20 to 1,425 scf/STB, pb 130 to 7,000 psia.
//!
//! # Departures
//! Handbooks round 1/0.83 to 1.2048; the exact inverse is used so that Rs and pb agree to rounding.

use super::oil_specific_gravity;
use std::f64::consts::LN_10;

const EXPONENT: f64 = 0.83;

/// The correlation for one oil and gas.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Standing {
    gas_gravity: f64,
    inverse_gas_gravity: f64,
    /// 0.0125 API ln 10.
    api_term: f64,
    /// (g/go)^0.5.
    gravity_ratio_root: f64,
}

impl Standing {
    /// Prepares the constants of one oil (degrees API) and gas (air = 1).
    pub fn new(oil_gravity_api: f64, gas_gravity: f64) -> Self {
        Self {
            gas_gravity,
            inverse_gas_gravity: 1.0 / gas_gravity,
            api_term: 0.0125 * oil_gravity_api * LN_10,
            gravity_ratio_root: (gas_gravity / oil_specific_gravity(oil_gravity_api)).sqrt(),
        }
    }

    /// a ln 10.
    #[inline]
    fn exponent(&self, temperature_degf: f64) -> f64 {
        0.00091 * LN_10 * temperature_degf - self.api_term
    }

    /// Bubble point of oil that holds `rs_scf_stb`, psia. Negative below a few scf/STB, where the fit has no meaning.
    #[inline]
    pub fn bubble_point_psia(&self, rs_scf_stb: f64, temperature_degf: f64) -> f64 {
        if rs_scf_stb <= 0.0 {
            return -18.2 * 1.4;
        }
        let power = (EXPONENT * (rs_scf_stb * self.inverse_gas_gravity).ln() + self.exponent(temperature_degf)).exp();
        18.2 * (power - 1.4)
    }

    /// Solution gas-oil ratio of saturated oil, scf/STB, at pressures above -25.48 psia.
    #[inline]
    pub fn rs_scf_stb(&self, pressure_psia: f64, temperature_degf: f64) -> f64 {
        let ln_base = (pressure_psia * (1.0 / 18.2) + 1.4).ln() - self.exponent(temperature_degf);
        self.gas_gravity * (ln_base * (1.0 / EXPONENT)).exp()
    }

    /// Volume factor of saturated oil that holds `rs_scf_stb`, rb/STB.
    #[inline]
    pub fn bo_rb_stb(&self, rs_scf_stb: f64, temperature_degf: f64) -> f64 {
        let group = rs_scf_stb * self.gravity_ratio_root + 1.25 * temperature_degf;
        0.9759 + 0.000_12 * group * (0.2 * group.ln()).exp()
    }

    /// Slope of the volume factor against the dissolved gas at constant temperature, rb/scf.
    pub fn dbo_drs_rb_scf(&self, rs_scf_stb: f64, temperature_degf: f64) -> f64 {
        let group = rs_scf_stb * self.gravity_ratio_root + 1.25 * temperature_degf;
        0.000_12 * 1.2 * self.gravity_ratio_root * group.powf(0.2)
    }
}
