//! Beal (1946) in Standing's form (1977): viscosity of dead oil, and of oil above its bubble point.
//!
//! ```text
//! mu_od = (0.32 + 1.8e7/API^4.53) [ 360/(T + 200) ]^a,   a = 10^(0.43 + 8.33/API)
//! mu = mu_b + 0.001 (p - pb) (0.024 mu_b^1.6 + 0.038 mu_b^0.56)
//! ```
//!
//! mu cp, T degF (the printed equation has degR - 260), p psia, mu_b at the bubble point.
//!
//! # Source
//! C. Beal, "The Viscosity of Air, Water, Natural Gas, Crude Oil and Its Associated Gases at Oil Field Temperatures and Pressures",
//! Transactions AIME 165 (1946); M. B. Standing, "Volumetric and Phase Behavior of Oil Field Hydrocarbon Systems", SPE (1977).
//!
//! # Range
//! Dead oil 10.1 to 52.5 API, 98 to 250 degF; above the bubble point 140 to 4,135 psig, mu_b 0.142 to 127 cp.

/// Viscosity of oil without gas, cp.
pub fn dead_oil_viscosity_cp(oil_gravity_api: f64, temperature_degf: f64) -> f64 {
    let a = 10f64.powf(0.43 + 8.33 / oil_gravity_api);
    (0.32 + 1.8e7 / oil_gravity_api.powf(4.53)) * (360.0 / (temperature_degf + 200.0)).powf(a)
}

/// mu/mu_b between the bubble point and a pressure above it.
#[inline]
pub fn undersaturated_viscosity_ratio(mu_b_cp: f64, above_bubble_point_psi: f64) -> f64 {
    1.0 + 0.001 * above_bubble_point_psi * (0.024 * mu_b_cp.powf(0.6) + 0.038 * mu_b_cp.powf(-0.44))
}
