//! Beal (1946) in Standing's form (1977): viscosity of dead oil.
//!
//! ```text
//! mu_od = (0.32 + 1.8e7/API^4.53) [ 360/(T + 200) ]^a,   a = 10^(0.43 + 8.33/API)
//! ```
//!
//! mu cp, T degF (the printed equation has degR - 260).
//!
//! # Source
//! C. Beal, "The Viscosity of Air, Water, Natural Gas, Crude Oil and Its Associated Gases at Oil Field Temperatures and Pressures",
//! Transactions AIME 165 (1946); M. B. Standing, "Volumetric and Phase Behavior of Oil Field Hydrocarbon Systems", SPE (1977).
//!
//! # Range
//! 10.1 to 52.5 API, 98 to 250 degF.

/// Viscosity of oil without gas, cp.
pub fn dead_oil_viscosity_cp(oil_gravity_api: f64, temperature_degf: f64) -> f64 {
    let a = 10f64.powf(0.43 + 8.33 / oil_gravity_api);
    (0.32 + 1.8e7 / oil_gravity_api.powf(4.53)) * (360.0 / (temperature_degf + 200.0)).powf(a)
}
