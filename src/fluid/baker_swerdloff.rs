//! Baker and Swerdloff (1955, 1956): surface tension of oil and of water against gas.
//!
//! ```text
//! oil:    s68 = 39 - 0.2571 API, s100 = 37.5 - 0.2571 API, linear in T between 68 and 100 degF, constant outside;
//!         s = s_dead (1 - 0.024 p^0.45), at least 1
//! water:  s74 = 75 - 1.108 p^0.349, s280 = 53 - 0.1048 p^0.637, linear in T between 74 and 280 degF, constant outside, at least 1
//! ```
//!
//! s dyn/cm, p psia, T degF.
//!
//! # Source
//! O. Baker and W. Swerdloff, Oil and Gas Journal (December 1955; January 1956), in the fits of H. D. Beggs, "Production
//! Optimization" (1991).
//!
//! # Range
//! The pressure factor of oil is zero at 3,977 psia; the floor of 1 dyn/cm rules from about 3,650 psia on.
//!
//! # Departures
//! Some printings divide the temperature difference of water by 280; the interpolation is over the 206 degF between its ends.

use crate::elementary::Power;

static POWER_OF_OIL: Power = Power::new(0.45);
static POWER_OF_COOL_WATER: Power = Power::new(0.349);
static POWER_OF_HOT_WATER: Power = Power::new(0.637);

/// The least tension, dyn/cm.
pub const FLOOR_DYN_CM: f64 = 1.0;

/// Tension of oil without gas against air, dyn/cm.
#[inline]
pub fn dead_oil_dyn_cm(oil_gravity_api: f64, temperature_degf: f64) -> f64 {
    39.0 - 0.2571 * oil_gravity_api - 1.5 * ((temperature_degf - 68.0) * (1.0 / 32.0)).clamp(0.0, 1.0)
}

/// The factor by which dissolved gas lowers the tension of oil.
#[inline]
pub fn pressure_factor(pressure_psia: f64) -> f64 {
    1.0 - 0.024 * POWER_OF_OIL.of(pressure_psia)
}

/// Tension between oil and gas, dyn/cm.
#[inline]
pub fn oil_gas_dyn_cm(oil_gravity_api: f64, temperature_degf: f64, pressure_psia: f64) -> f64 {
    (dead_oil_dyn_cm(oil_gravity_api, temperature_degf) * pressure_factor(pressure_psia)).max(FLOOR_DYN_CM)
}

/// Tension between water and gas at 74 and at 280 degF, without floor, dyn/cm.
#[inline]
pub(super) fn water_gas_ends_dyn_cm(pressure_psia: f64) -> (f64, f64) {
    let cool = 75.0 - 1.108 * POWER_OF_COOL_WATER.of(pressure_psia);
    let hot = 53.0 - 0.1048 * POWER_OF_HOT_WATER.of(pressure_psia);
    (cool, hot)
}

/// Tension between water and gas, dyn/cm.
#[inline]
pub fn water_gas_dyn_cm(temperature_degf: f64, pressure_psia: f64) -> f64 {
    let (cool, hot) = water_gas_ends_dyn_cm(pressure_psia);
    water_gas_of_dyn_cm(temperature_degf, cool, hot)
}

/// The same from the tensions at 74 and at 280 degF.
#[inline]
pub(super) fn water_gas_of_dyn_cm(temperature_degf: f64, cool: f64, hot: f64) -> f64 {
    let part = ((temperature_degf - 74.0) * (1.0 / 206.0)).clamp(0.0, 1.0);
    (cool + (hot - cool) * part).max(FLOOR_DYN_CM)
}
