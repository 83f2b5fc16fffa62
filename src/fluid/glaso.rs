//! Glaso (1980): bubble point, solution gas-oil ratio, volume factor and dead-oil viscosity of North Sea oils.
//!
//! ```text
//! log pb = 1.7669 + 1.7447 log x - 0.30218 (log x)^2,   x = (Rs/g)^0.816 T^0.172 API^-0.989
//! Rs     = g [ API^0.989 T^-0.172 x ]^1.2255,           log x = 2.8869 - (14.1811 - 3.3093 log p)^0.5
//! log(Bo - 1) = -6.58511 + 2.91329 log y - 0.27683 (log y)^2,   y = Rs (g/go)^0.526 + 0.968 T
//! mu_od  = 3.141e10 T^-3.444 (log API)^(10.313 log T - 36.447)
//! ```
//!
//! Logarithms to base 10; p psia, T degF, Rs scf/STB, mu cp, g gas gravity (air = 1), go oil gravity (water = 1).
//!
//! # Source
//! O. Glaso, "Generalized Pressure-Volume-Temperature Correlations", Journal of Petroleum Technology (May 1980).
//!
//! # Range
//! 22.3 to 48.1 API, gas gravity 0.65 to 1.276, 80 to 280 degF, pb 165 to 7,142 psia, Rs 90 to 2,637 scf/STB; dead oil 20.1 to
//! 48.1 API, 50 to 300 degF. The bubble-point curve has its highest pressure, 19,285 psia, at log x = 2.8869; Rs has no value above.

use super::oil_specific_gravity;

/// Bubble point, psia.
pub fn bubble_point_psia(rs_scf_stb: f64, temperature_degf: f64, oil_gravity_api: f64, gas_gravity: f64) -> f64 {
    let x = (rs_scf_stb / gas_gravity).powf(0.816) * temperature_degf.powf(0.172) * oil_gravity_api.powf(-0.989);
    pressure_of_x_psia(x)
}

/// log x where the pressure is highest.
const TURN: f64 = 1.7447 / (2.0 * 0.302_18);

/// Bubble point of a group x, psia; zero without gas, the highest beyond the turn.
pub(super) fn pressure_of_x_psia(x: f64) -> f64 {
    if x <= 0.0 {
        return 0.0;
    }
    let log_x = x.log10().min(TURN);
    10f64.powf(1.7669 + 1.7447 * log_x - 0.302_18 * log_x * log_x)
}

/// The group x of a bubble point: the exact inverse, with the printed 2.8869, 14.1811 and 3.3093 unrounded.
pub(super) fn x_of_pressure(pressure_psia: f64) -> f64 {
    let below_turn = (TURN * TURN + (1.7669 - pressure_psia.log10()) / 0.302_18).max(0.0).sqrt();
    10f64.powf(TURN - below_turn)
}

/// Solution gas-oil ratio of saturated oil, scf/STB; the curve's end is used above its highest pressure.
pub fn rs_scf_stb(pressure_psia: f64, temperature_degf: f64, oil_gravity_api: f64, gas_gravity: f64) -> f64 {
    let log_x = 2.8869 - (14.1811 - 3.3093 * pressure_psia.log10()).max(0.0).sqrt();
    gas_gravity * (oil_gravity_api.powf(0.989) * temperature_degf.powf(-0.172) * 10f64.powf(log_x)).powf(1.2255)
}

/// Volume factor of saturated oil, rb/STB.
pub fn bo_rb_stb(rs_scf_stb: f64, temperature_degf: f64, oil_gravity_api: f64, gas_gravity: f64) -> f64 {
    let ratio = gas_gravity / oil_specific_gravity(oil_gravity_api);
    let log_y = (rs_scf_stb * ratio.powf(0.526) + 0.968 * temperature_degf).log10();
    1.0 + 10f64.powf(-6.585_11 + 2.913_29 * log_y - 0.276_83 * log_y * log_y)
}

/// Viscosity of oil without gas, cp.
pub fn dead_oil_viscosity_cp(oil_gravity_api: f64, temperature_degf: f64) -> f64 {
    let exponent = 10.313 * temperature_degf.log10() - 36.447;
    3.141e10 * temperature_degf.powf(-3.444) * oil_gravity_api.log10().powf(exponent)
}
