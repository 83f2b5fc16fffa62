//! Standing (1977): pseudo-critical temperature and pressure of dry natural gas from its gravity.
//!
//! ```text
//! Tpc = 168 + 325 g - 12.5 g^2        ppc = 677 + 15.0 g - 37.5 g^2
//! ```
//!
//! Tpc degR, ppc psia, g gas gravity (air = 1).
//!
//! # Source
//! M. B. Standing, "Volumetric and Phase Behavior of Oil Field Hydrocarbon Systems", SPE (1977), a fit of the chart of Brown et
//! al. (1948). A second set in the book, for wet gas, is another fit.
//!
//! # Range
//! Gravity below 0.75.

use super::sutton::PseudoCritical;

/// Pseudo-criticals of a dry gas.
pub fn dry_gas(gravity: f64) -> PseudoCritical {
    PseudoCritical {
        temperature_degr: 168.0 + (325.0 - 12.5 * gravity) * gravity,
        pressure_psia: 677.0 + (15.0 - 37.5 * gravity) * gravity,
    }
}
