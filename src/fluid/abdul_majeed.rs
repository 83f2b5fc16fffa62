//! Abdul-Majeed and Abu Al-Soof (2000): surface tension of oil with dissolved gas.
//!
//! ```text
//! s_dead = (1.17013 - 1.694e-3 T)(38.085 - 0.259 API)
//! s = s_dead [ 0.056379 + 0.94362 exp(-3.8491e-3 Rs) ]
//! ```
//!
//! s dyn/cm, T degF, Rs scf/STB.
//!
//! # Source
//! G. H. Abdul-Majeed and N. B. Abu Al-Soof, "Estimation of Gas-Oil Surface Tension", Journal of Petroleum Science and Engineering
//! 27 (2000).

/// Tension of oil without gas, dyn/cm.
pub fn dead_oil_dyn_cm(oil_gravity_api: f64, temperature_degf: f64) -> f64 {
    (1.170_13 - 1.694e-3 * temperature_degf) * (38.085 - 0.259 * oil_gravity_api)
}

/// The factor by which dissolved gas lowers the tension.
pub fn dissolved_gas_factor(rs_scf_stb: f64) -> f64 {
    0.056_379 + 0.943_62 * (-3.8491e-3 * rs_scf_stb).exp()
}

/// Tension between oil and gas, dyn/cm.
pub fn oil_gas_dyn_cm(oil_gravity_api: f64, temperature_degf: f64, rs_scf_stb: f64) -> f64 {
    dead_oil_dyn_cm(oil_gravity_api, temperature_degf) * dissolved_gas_factor(rs_scf_stb)
}
