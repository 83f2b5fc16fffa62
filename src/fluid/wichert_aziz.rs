//! Wichert and Aziz (1972): pseudo-criticals of sour gas.
//!
//! ```text
//! e    = 120 (A^0.9 - A^1.6) + 15 (B^0.5 - B^4),   A = yH2S + yCO2, B = yH2S
//! Tpc' = Tpc - e                 ppc' = ppc Tpc'/(Tpc + B (1 - B) e)
//! ```
//!
//! Temperatures degR, pressures psia, mole fractions.
//!
//! # Source
//! E. Wichert and K. Aziz, "Calculate Z's for Sour Gases", Hydrocarbon Processing (May 1972).
//!
//! # Range
//! 40 to 300 degF, 154 to 7,026 psia, carbon dioxide to 0.544, hydrogen sulphide to 0.738.

use super::sutton::PseudoCritical;

/// The temperature correction e, degR.
pub fn temperature_correction_degr(h2s_fraction: f64, co2_fraction: f64) -> f64 {
    let sour = h2s_fraction + co2_fraction;
    120.0 * (sour.powf(0.9) - sour.powf(1.6)) + 15.0 * (h2s_fraction.sqrt() - h2s_fraction.powi(4))
}

/// Pseudo-criticals corrected for hydrogen sulphide and carbon dioxide.
pub fn corrected(uncorrected: PseudoCritical, h2s_fraction: f64, co2_fraction: f64) -> PseudoCritical {
    let correction_degr = temperature_correction_degr(h2s_fraction, co2_fraction);
    let temperature_degr = uncorrected.temperature_degr - correction_degr;
    PseudoCritical {
        temperature_degr,
        pressure_psia: uncorrected.pressure_psia * temperature_degr
            / (uncorrected.temperature_degr + h2s_fraction * (1.0 - h2s_fraction) * correction_degr),
    }
}
