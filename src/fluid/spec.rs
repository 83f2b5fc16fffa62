//! The fluid as the user states it.

use super::correlations::Correlations;
use super::lab::{LabReport, LabRow};
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
    /// Which correlation gives what.
    pub correlations: Correlations,
    /// Measured oil volume factor at the bubble point and tank temperature, rb/STB; the correlation is tuned to it.
    pub bubble_point_bo_rb_stb: Option<f64>,
    /// Measured oil viscosity at the bubble point and tank temperature, cp; the correlation is tuned to it.
    pub bubble_point_mu_o_cp: Option<f64>,
    /// Measured viscosity of the oil without gas at tank temperature, cp; the correlation is tuned to it.
    pub dead_oil_mu_cp: Option<f64>,
    /// A laboratory's table, which rules at tank temperature.
    pub lab: Option<LabReport>,
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
            correlations: Correlations::default(),
            bubble_point_bo_rb_stb: None,
            bubble_point_mu_o_cp: None,
            dead_oil_mu_cp: None,
            lab: None,
        }
    }

    /// Puts the bubble point and the solution gas-oil ratio of the laboratory's table in the place of stated ones that agree
    /// with them; others are left, and are a fault of [`BlackOil::new`](super::BlackOil::new).
    pub fn take_lab_values(&mut self) {
        let Some(Ok(rows)) = self.lab.as_ref().map(LabReport::converted) else { return };
        let rs = |row: &LabRow| row.rs_scf_stb.unwrap_or(0.0);
        let Some(bubble) = rows.iter().fold(None::<&LabRow>, |top, row| match top {
            Some(top) if rs(top) >= rs(row) => Some(top),
            _ => Some(row),
        }) else {
            return;
        };
        if agrees(self.solution_gor_scf_stb, rs(bubble)) {
            self.solution_gor_scf_stb = rs(bubble);
        }
        if self.bubble_point_psia.is_none_or(|stated| agrees(stated, bubble.pressure_psia)) {
            self.bubble_point_psia = Some(bubble.pressure_psia);
        }
    }
}

/// Whether a stated value and the laboratory's are those of one oil: within 1 %.
pub(super) fn agrees(stated: f64, measured: f64) -> bool {
    (stated / measured - 1.0).abs() <= 0.01
}
