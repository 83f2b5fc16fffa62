//! Tables of the fluid, of inflow and tubing curves, and of traverses.

use super::ReportError;
use super::csv_files::{cell, csv_bytes};
use super::labels::{Label, Quantity, UnitSystem, label};

/// One row of the fluid's property table at tank temperature.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FluidRow {
    /// Pressure, psia.
    pub pressure_psia: f64,
    /// Gas dissolved in the oil, scf/STB.
    pub rs_scf_stb: f64,
    /// Oil volume factor, rb/STB.
    pub bo_rb_stb: f64,
    /// Oil viscosity, cp.
    pub mu_o_cp: f64,
    /// Compressibility factor of the gas.
    pub z: f64,
    /// Gas volume factor, rb/scf.
    pub bg_rb_scf: f64,
    /// Gas viscosity, cp.
    pub mu_g_cp: f64,
    /// Water volume factor, rb/STB.
    pub bw_rb_stb: f64,
    /// Water viscosity, cp.
    pub mu_w_cp: f64,
}

/// The fluid's properties at tank temperature.
#[derive(Debug, Clone, PartialEq)]
pub struct FluidSheet {
    /// Temperature, degF.
    pub temperature_degf: f64,
    /// Initial bubble point, psia.
    pub bubble_point_psia: f64,
    /// The rows, by pressure.
    pub rows: Vec<FluidRow>,
}

impl FluidSheet {
    pub(super) fn line(&self, pick: impl Fn(&FluidRow) -> f64) -> Vec<f64> {
        self.rows.iter().map(pick).collect()
    }

    /// Name, unit and value of each column.
    pub fn columns(units: UnitSystem) -> [(&'static str, Label, fn(&FluidRow) -> f64); 9] {
        let unit = |quantity| label(units, quantity);
        [
            ("pressure", unit(Quantity::Pressure), |r| r.pressure_psia),
            ("rs", unit(Quantity::GasOilRatio), |r| r.rs_scf_stb),
            ("bo", unit(Quantity::LiquidVolumeFactor), |r| r.bo_rb_stb),
            ("mu_o", unit(Quantity::Viscosity), |r| r.mu_o_cp),
            ("z", Label::fraction(), |r| r.z),
            ("bg", unit(Quantity::GasVolumeFactor), |r| r.bg_rb_scf),
            ("mu_g", unit(Quantity::Viscosity), |r| r.mu_g_cp),
            ("bw", unit(Quantity::LiquidVolumeFactor), |r| r.bw_rb_stb),
            ("mu_w", unit(Quantity::Viscosity), |r| r.mu_w_cp),
        ]
    }
}

/// The fluid table.
///
/// # Errors
/// When the CSV writer fails.
pub fn fluid_csv(table: &FluidSheet, units: UnitSystem) -> Result<Vec<u8>, ReportError> {
    let columns = FluidSheet::columns(units);
    csv_bytes(|w| {
        w.write_record(columns.iter().map(|(stem, unit, _)| match unit.suffix {
            "" => (*stem).to_owned(),
            _ => unit.column(stem),
        }))?;
        for row in &table.rows {
            w.write_record(columns.iter().map(|(_, unit, pick)| cell(unit.of(pick(row)))))?;
        }
        Ok(())
    })
}
