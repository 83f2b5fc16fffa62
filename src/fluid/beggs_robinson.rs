//! Beggs and Robinson (1975): viscosity of dead and of gas-saturated oil.
//!
//! ```text
//! mu_od = 10^x - 1,  x = 10^(3.0324 - 0.02023 API) T^-1.163
//! mu_o  = a mu_od^b, a = 10.715 (Rs + 100)^-0.515, b = 5.44 (Rs + 150)^-0.338
//! ```
//!
//! T degF, Rs scf/STB, mu cp.
//!
//! # Source
//! H. D. Beggs and J. R. Robinson, "Estimating the Viscosity of Crude Oil Systems", Journal of Petroleum Technology (September
//! 1975). The factor 10^(3.0324 - 0.02023 API) is 10^Z of the paper.
//!
//! # Range
//! 16 to 58 API, 70 to 295 degF, Rs 20 to 2,070 scf/STB, up to 5,265 psia. The dead-oil fit rises steeply below 70 degF.

use crate::elementary::{Power, exp};
use std::f64::consts::LN_10;

static POWER_OF_A: Power = Power::new(-0.515);
static POWER_OF_B: Power = Power::new(-0.338);

/// The correlation for one oil.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct BeggsRobinson {
    /// (3.0324 - 0.02023 API) ln 10 + ln(ln 10).
    ln_gravity_factor: f64,
}

impl BeggsRobinson {
    /// Prepares the constants of one oil, degrees API.
    pub fn new(oil_gravity_api: f64) -> Self {
        Self { ln_gravity_factor: (3.0324 - 0.02023 * oil_gravity_api) * LN_10 + LN_10.ln() }
    }

    /// Viscosity of oil without gas, cp. `ln_temperature` is the logarithm of degF.
    #[inline]
    pub fn dead_cp(&self, ln_temperature: f64) -> f64 {
        (self.ln_gravity_factor - 1.163 * ln_temperature).exp().exp() - 1.0
    }

    /// a and b of oil that is saturated with `rs_scf_stb`.
    #[inline]
    pub fn live_coefficients(rs_scf_stb: f64) -> (f64, f64) {
        (10.715 * POWER_OF_A.of(rs_scf_stb + 100.0), 5.44 * POWER_OF_B.of(rs_scf_stb + 150.0))
    }

    /// Viscosity of oil that is saturated with `rs_scf_stb`, cp.
    #[inline]
    pub fn live_cp(ln_dead_cp: f64, rs_scf_stb: f64) -> f64 {
        let (a, b) = Self::live_coefficients(rs_scf_stb);
        a * exp(b * ln_dead_cp)
    }
}
