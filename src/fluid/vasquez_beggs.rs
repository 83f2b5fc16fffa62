//! Vasquez and Beggs (1980): saturated oil, and oil above its bubble point.
//!
//! ```text
//! gs = g [ 1 + 5.912e-5 API Tsep log10(psep/114.7) ]           gas gravity at a 100 psig separator
//! Rs = C1 gs p^C2 exp[ C3 API/(T + 459.67) ]
//! Bo = 1 + C4 Rs + (T - 60)(API/gs)(C5 + C6 Rs)
//! co = A/p,  A = 1e-5 (-1433 + 5 Rsb + 17.2 T - 1180 gs + 12.61 API)
//! Bo = Bob (pb/p)^A                                            closed form of co = A/p above pb
//! mu = mu_b (p/pb)^m,  m = 2.6 p^1.187 exp(-11.513 - 8.98e-5 p)
//! ```
//!
//! p psia, T and Tsep degF, Rs scf/STB, co 1/psi, mu cp. The constants switch at 30 API.
//!
//! # Source
//! M. Vasquez and H. D. Beggs, "Correlations for Fluid Physical Property Prediction", Journal of Petroleum Technology (June 1980).
//! The separate fit for the bubble point, which no fluid here uses, is the form printed in T. Ahmed, "Reservoir Engineering Handbook" (2001).
//!
//! # Range
//! 15.3 to 59.5 API, gas gravity 0.511 to 1.351, 75 to 294 degF, pb 15 to 6,055 psia, Rs 0 to 2,199 scf/STB; undersaturated
//! oil 141 to 9,515 psia, viscosity 0.117 to 148 cp.
//!
//! # Departures
//! The compressibility is never below 1e-6 1/psi: A is negative for cool heavy oil with little gas, where the fit would let oil
//! swell under pressure.

use crate::elementary::{exp, ln};
use crate::units::constants::DEGF_TO_DEGR;

/// The least oil compressibility, 1/psi.
pub const MINIMUM_COMPRESSIBILITY_1_PSI: f64 = 1e-6;

/// Gas gravity corrected to a separator at 100 psig.
pub fn separator_gas_gravity(gas_gravity: f64, oil_gravity_api: f64, separator_psia: f64, separator_degf: f64) -> f64 {
    gas_gravity * (1.0 + 5.912e-5 * oil_gravity_api * separator_degf * (separator_psia / 114.7).log10())
}

/// C1, C2 and C3 of an oil.
pub(super) fn gas_constants(oil_gravity_api: f64) -> (f64, f64, f64) {
    if oil_gravity_api <= 30.0 { (0.0362, 1.0937, 25.724) } else { (0.0178, 1.187, 23.931) }
}

/// Solution gas-oil ratio of saturated oil, scf/STB; `gas_gravity` at a 100 psig separator.
pub fn rs_scf_stb(pressure_psia: f64, temperature_degf: f64, oil_gravity_api: f64, gas_gravity: f64) -> f64 {
    let (c1, c2, c3) = gas_constants(oil_gravity_api);
    c1 * gas_gravity * pressure_psia.powf(c2) * (c3 * oil_gravity_api / (temperature_degf + DEGF_TO_DEGR)).exp()
}

/// Bubble point, psia: a separate fit, not the inverse of [`rs_scf_stb`].
pub fn bubble_point_psia(rs_scf_stb: f64, temperature_degf: f64, oil_gravity_api: f64, gas_gravity: f64) -> f64 {
    let (c1, c2, c3) = if oil_gravity_api <= 30.0 { (27.624, 0.914_328, 11.172) } else { (56.18, 0.842_46, 10.393) };
    let a = -c3 * oil_gravity_api / (temperature_degf + DEGF_TO_DEGR);
    (c1 * rs_scf_stb / gas_gravity * 10f64.powf(a)).powf(c2)
}

/// Volume factor of saturated oil, rb/STB.
pub fn bo_rb_stb(rs_scf_stb: f64, temperature_degf: f64, oil_gravity_api: f64, gas_gravity: f64) -> f64 {
    let (c4, c5, c6) =
        if oil_gravity_api <= 30.0 { (4.677e-4, 1.751e-5, -1.811e-8) } else { (4.670e-4, 1.100e-5, 1.337e-9) };
    1.0 + c4 * rs_scf_stb + (temperature_degf - 60.0) * (oil_gravity_api / gas_gravity) * (c5 + c6 * rs_scf_stb)
}

/// The group A = co p of oil above its bubble point, dimensionless.
#[inline]
pub fn compressibility_group(rs_scf_stb: f64, temperature_degf: f64, oil_gravity_api: f64, gas_gravity: f64) -> f64 {
    1e-5 * (-1433.0 + 5.0 * rs_scf_stb + 17.2 * temperature_degf - 1180.0 * gas_gravity + 12.61 * oil_gravity_api)
}

/// Bo/Bob between the bubble point and a pressure above it: exp(-integral of co dp) with co = max(A/p, 1e-6).
/// `ln_ratio` is ln(p/pb).
#[inline]
pub fn undersaturated_volume_ratio(group: f64, pressure_psia: f64, bubble_point_psia: f64, ln_ratio: f64) -> f64 {
    // The pressure from which the floor rules.
    let floor_from_psia = group / MINIMUM_COMPRESSIBILITY_1_PSI;
    let strain = if pressure_psia <= floor_from_psia {
        group * ln_ratio
    } else if bubble_point_psia >= floor_from_psia {
        MINIMUM_COMPRESSIBILITY_1_PSI * (pressure_psia - bubble_point_psia)
    } else {
        group * ln(floor_from_psia / bubble_point_psia)
            + MINIMUM_COMPRESSIBILITY_1_PSI * (pressure_psia - floor_from_psia)
    };
    exp(-strain)
}

/// mu/mu_b between the bubble point and a pressure above it. `ln_ratio` is ln(p/pb), `ln_pressure` ln(p).
#[inline]
pub fn undersaturated_viscosity_ratio(pressure_psia: f64, ln_pressure: f64, ln_ratio: f64) -> f64 {
    let m = 2.6 * exp(1.187 * ln_pressure - 11.513 - 8.98e-5 * pressure_psia);
    exp(m * ln_ratio)
}
