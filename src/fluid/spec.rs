//! The fluid as the user states it.

use crate::units::constants::{STANDARD_PRESSURE_PSIA, STANDARD_TEMPERATURE_DEGR};

/// The fluid as the user states it, in oilfield units.
#[derive(Debug, Clone, PartialEq)]
pub struct FluidSpec {
    /// Stock-tank oil gravity, degrees API.
    pub oil_gravity_api: f64,
    /// Gas gravity, air = 1. One gravity serves dissolved, free and produced gas.
    pub gas_gravity: f64,
    /// Solution gas-oil ratio at and above the bubble point, scf/STB.
    pub solution_gor_scf_stb: f64,
    /// Measured bubble point at tank temperature, psia; the correlation is tuned through it. `None`: the
    /// correlation's own bubble point serves.
    pub bubble_point_psia: Option<f64>,
    /// Salinity of the water, weight fraction of total dissolved solids in parts per million.
    pub salinity_ppm: f64,
    /// Mole fraction of hydrogen sulphide in the gas.
    pub h2s_fraction: f64,
    /// Mole fraction of carbon dioxide in the gas.
    pub co2_fraction: f64,
    /// Separator pressure, psia, and temperature, degF, when stated (Vasquez-Beggs gas gravity only).
    pub separator: Option<(f64, f64)>,
    /// Standard pressure, psia.
    pub standard_pressure_psia: f64,
    /// Standard temperature, degR.
    pub standard_temperature_degr: f64,
}

impl FluidSpec {
    /// A sweet gas, fresh water fluid at 14.696 psia and 60 degF standard conditions, without a measured bubble point.
    pub fn new(oil_gravity_api: f64, gas_gravity: f64, solution_gor_scf_stb: f64) -> Self {
        Self {
            oil_gravity_api,
            gas_gravity,
            solution_gor_scf_stb,
            bubble_point_psia: None,
            salinity_ppm: 0.0,
            h2s_fraction: 0.0,
            co2_fraction: 0.0,
            separator: None,
            standard_pressure_psia: STANDARD_PRESSURE_PSIA,
            standard_temperature_degr: STANDARD_TEMPERATURE_DEGR,
        }
    }
}
