//! Osif (1988): compressibility of brine; reported only, the volume factor of [`mccain`](super::mccain) rules.
//!
//! ```text
//! cw = 1/(7.033 p + 541.5 C - 537.0 T + 403300)
//! ```
//!
//! cw 1/psi, p psia, T degF, C grams of salt per litre.
//!
//! # Source
//! T. L. Osif, "The Effects of Salt, Gas, Temperature, and Pressure on the Compressibility of Water", SPE Reservoir Engineering
//! (February 1988). A circulating copy prints the last constant as 403.3e-3; it is 403.3e3.
//!
//! # Range
//! 200 to 270 degF, 1,000 to 20,000 psia, to 200 g/L.

/// Compressibility of brine, 1/psi.
pub fn compressibility_1_psi(pressure_psia: f64, temperature_degf: f64, salt_g_l: f64) -> f64 {
    1.0 / (7.033 * pressure_psia + 541.5 * salt_g_l - 537.0 * temperature_degf + 403_300.0)
}
