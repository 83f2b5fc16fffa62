//! Chew and Connally (1959): viscosity of oil that is saturated with gas.
//!
//! ```text
//! mu = a mu_od^b,   a = 10^[ Rs (2.2e-7 Rs - 7.4e-4) ]
//! b = 0.68 10^(-8.62e-5 Rs) + 0.25 10^(-1.1e-3 Rs) + 0.062 10^(-3.74e-3 Rs)
//! ```
//!
//! mu and mu_od (without gas) cp, Rs scf/STB.
//!
//! # Source
//! J. N. Chew and C. A. Connally, "A Viscosity Correlation for Gas-Saturated Crude Oils", Transactions AIME 216 (1959); equations of
//! M. B. Standing, "Volumetric and Phase Behavior of Oil Field Hydrocarbon Systems", SPE (1977).
//!
//! # Range
//! Rs 51 to 3,544 scf/STB, 72 to 292 degF, pb 132 to 5,645 psia, mu_od 0.377 to 50 cp.
//!
//! # Departures
//! a has its least value at Rs = 1,681.8 scf/STB and keeps it beyond: the parabola would let more gas thicken the oil.

use crate::elementary::exp;
use std::f64::consts::LN_10;

/// Where the parabola of log a turns, scf/STB.
const TURN_SCF_STB: f64 = 7.4e-4 / (2.0 * 2.2e-7);

/// a and b of oil that is saturated with `rs_scf_stb`.
#[inline]
pub fn live_coefficients(rs_scf_stb: f64) -> (f64, f64) {
    let held = rs_scf_stb.min(TURN_SCF_STB);
    let tenth_power = |exponent: f64| exp(LN_10 * exponent);
    let b = 0.68 * tenth_power(-8.62e-5 * rs_scf_stb)
        + 0.25 * tenth_power(-1.1e-3 * rs_scf_stb)
        + 0.062 * tenth_power(-3.74e-3 * rs_scf_stb);
    (tenth_power(held * (2.2e-7 * held - 7.4e-4)), b)
}

/// Viscosity of oil that is saturated with `rs_scf_stb`, cp.
pub fn live_cp(dead_cp: f64, rs_scf_stb: f64) -> f64 {
    let (a, b) = live_coefficients(rs_scf_stb);
    a * dead_cp.powf(b)
}
