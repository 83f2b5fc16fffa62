//! Al-Marhoun (1988): bubble point, solution gas-oil ratio and volume factor of Middle East oils.
//!
//! ```text
//! pb = 5.38088e-3 Rs^0.715082 g^-1.87784 go^3.1437 T^1.32657
//! Rs = ( 185.843208 g^1.87784 go^-3.1437 T^-1.32657 p )^1.398441
//! Bo = 0.497069 + 0.862963e-3 T + 0.182594e-2 F + 0.318099e-5 F^2,   F = Rs^0.74239 g^0.323294 go^-1.20204
//! ```
//!
//! p psia, T **degR**, Rs scf/STB, g gas gravity (air = 1), go oil gravity (water = 1). Arguments here are in degF.
//!
//! # Source
//! M. A. Al-Marhoun, "PVT Correlations for Middle East Crude Oils", Journal of Petroleum Technology (May 1988).
//!
//! # Range
//! 19.4 to 44.6 API, gas gravity 0.752 to 1.367, 74 to 240 degF, pb 130 to 3,573 psia, Rs 26 to 1,602 scf/STB.

use super::oil_specific_gravity;

/// The printed coefficients belong to a scale that starts at 460.
pub(super) const DEGF_TO_DEGR_PRINTED: f64 = 460.0;

/// Bubble point, psia.
pub fn bubble_point_psia(rs_scf_stb: f64, temperature_degf: f64, oil_gravity_api: f64, gas_gravity: f64) -> f64 {
    let oil = oil_specific_gravity(oil_gravity_api);
    5.380_88e-3
        * rs_scf_stb.powf(0.715_082)
        * gas_gravity.powf(-1.877_84)
        * oil.powf(3.1437)
        * (temperature_degf + DEGF_TO_DEGR_PRINTED).powf(1.326_57)
}

/// Solution gas-oil ratio of saturated oil, scf/STB.
pub fn rs_scf_stb(pressure_psia: f64, temperature_degf: f64, oil_gravity_api: f64, gas_gravity: f64) -> f64 {
    let oil = oil_specific_gravity(oil_gravity_api);
    (185.843_208
        * gas_gravity.powf(1.877_84)
        * oil.powf(-3.1437)
        * (temperature_degf + DEGF_TO_DEGR_PRINTED).powf(-1.326_57)
        * pressure_psia)
        .powf(1.398_441)
}

/// Volume factor of saturated oil, rb/STB.
pub fn bo_rb_stb(rs_scf_stb: f64, temperature_degf: f64, oil_gravity_api: f64, gas_gravity: f64) -> f64 {
    let oil = oil_specific_gravity(oil_gravity_api);
    let f = rs_scf_stb.powf(0.742_39) * gas_gravity.powf(0.323_294) * oil.powf(-1.202_04);
    0.497_069 + 0.862_963e-3 * (temperature_degf + DEGF_TO_DEGR_PRINTED) + (0.182_594e-2 + 0.318_099e-5 * f) * f
}
