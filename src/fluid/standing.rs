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
use crate::elementary::{Power, exp};
use std::f64::consts::LN_10;

const EXPONENT: f64 = 0.83;
static POWER_OF_GAS: Power = Power::new(EXPONENT);
static POWER_OF_PRESSURE: Power = Power::new(1.0 / EXPONENT);
static POWER_OF_VOLUME: Power = Power::new(1.2);

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
        Self::bubble_point_of_psia(self.gas_power(rs_scf_stb), self.temperature_factor(temperature_degf))
    }

    /// (Rs/g)^0.83.
    #[inline]
    pub fn gas_power(&self, rs_scf_stb: f64) -> f64 {
        if rs_scf_stb > 0.0 { POWER_OF_GAS.of(rs_scf_stb * self.inverse_gas_gravity) } else { 0.0 }
    }

    /// 10^a.
    #[inline]
    pub fn temperature_factor(&self, temperature_degf: f64) -> f64 {
        exp(self.exponent(temperature_degf))
    }

    /// Bubble point from (Rs/g)^0.83 and 10^a, psia.
    #[inline]
    pub fn bubble_point_of_psia(gas_power: f64, temperature_factor: f64) -> f64 {
        18.2 * (gas_power * temperature_factor - 1.4)
    }

    /// g 10^(-a/0.83), the gas that dissolves where p/18.2 + 1.4 is one, scf/STB.
    #[inline]
    pub fn unit_gas_scf_stb(&self, temperature_degf: f64) -> f64 {
        self.gas_gravity * exp(self.exponent(temperature_degf) * (-1.0 / EXPONENT))
    }

    /// (p/18.2 + 1.4)^(1/0.83) at pressures above -25.48 psia.
    #[inline]
    pub fn pressure_power(pressure_psia: f64) -> f64 {
        POWER_OF_PRESSURE.of(pressure_psia * (1.0 / 18.2) + 1.4)
    }

    /// Solution gas-oil ratio of saturated oil, scf/STB, at pressures above -25.48 psia.
    #[inline]
    pub fn rs_scf_stb(&self, pressure_psia: f64, temperature_degf: f64) -> f64 {
        Self::pressure_power(pressure_psia) * self.unit_gas_scf_stb(temperature_degf)
    }

    /// Volume factor of saturated oil that holds `rs_scf_stb`, rb/STB.
    #[inline]
    pub fn bo_rb_stb(&self, rs_scf_stb: f64, temperature_degf: f64) -> f64 {
        let group = rs_scf_stb * self.gravity_ratio_root + 1.25 * temperature_degf;
        0.9759 + 0.000_12 * POWER_OF_VOLUME.of(group)
    }

    /// Slope of the volume factor against the dissolved gas at constant temperature, rb/scf.
    pub fn dbo_drs_rb_scf(&self, rs_scf_stb: f64, temperature_degf: f64) -> f64 {
        let group = rs_scf_stb * self.gravity_ratio_root + 1.25 * temperature_degf;
        0.000_12 * 1.2 * self.gravity_ratio_root * group.powf(0.2)
    }
}
