//! Sutton (1985): pseudo-critical temperature and pressure of a natural gas from its gravity.
//!
//! ```text
//! Tpc = 169.2 + 349.5 g - 74.0 g^2        ppc = 756.8 - 131.0 g - 3.6 g^2
//! ```
//!
//! Tpc degR, ppc psia, g the gravity (air = 1) of the *hydrocarbon* part. With hydrogen sulphide (fraction h) and carbon dioxide
//! (fraction c) the hydrocarbon gravity is g = (gg - 1.1767 h - 1.5196 c)/(1 - h - c), and the pseudo-criticals are mixed by
//! mole fraction with those of the pure gases (672.35 degR, 1306 psia; 547.58 degR, 1071 psia) before the correction of
//! [`wichert_aziz`](super::wichert_aziz).
//!
//! # Source
//! R. P. Sutton, "Compressibility Factors for High-Molecular-Weight Reservoir Gases", SPE 14265 (1985).
//!
//! # Range
//! Gravity 0.57 to 1.68.

/// A pseudo-critical point.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PseudoCritical {
    /// Temperature, degR.
    pub temperature_degr: f64,
    /// Pressure, psia.
    pub pressure_psia: f64,
}

/// Pseudo-criticals of a hydrocarbon gas.
pub fn hydrocarbon(gravity: f64) -> PseudoCritical {
    PseudoCritical {
        temperature_degr: 169.2 + (349.5 - 74.0 * gravity) * gravity,
        pressure_psia: 756.8 - (131.0 + 3.6 * gravity) * gravity,
    }
}

/// Gravity of the hydrocarbon part of a gas.
pub fn hydrocarbon_gravity(gas_gravity: f64, h2s_fraction: f64, co2_fraction: f64) -> f64 {
    (gas_gravity - 1.1767 * h2s_fraction - 1.5196 * co2_fraction) / (1.0 - h2s_fraction - co2_fraction)
}

/// Pseudo-criticals of a gas with hydrogen sulphide and carbon dioxide, not yet corrected for them.
pub fn mixture(gas_gravity: f64, h2s_fraction: f64, co2_fraction: f64) -> PseudoCritical {
    let part = hydrocarbon(hydrocarbon_gravity(gas_gravity, h2s_fraction, co2_fraction));
    let rest = 1.0 - h2s_fraction - co2_fraction;
    PseudoCritical {
        temperature_degr: rest * part.temperature_degr + 672.35 * h2s_fraction + 547.58 * co2_fraction,
        pressure_psia: rest * part.pressure_psia + 1306.0 * h2s_fraction + 1071.0 * co2_fraction,
    }
}
