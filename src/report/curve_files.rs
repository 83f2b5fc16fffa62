//! Tables of the fluid, of inflow and tubing curves, and of traverses.

use super::ReportError;
use super::csv_files::{cell, csv_bytes};
use super::labels::{Label, Quantity, UnitSystem, label};
use crate::fluid::FluidRow;
use crate::forecast::WellCurves;
use crate::tubing::TraversePoint;

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
        w.write_record(columns.iter().map(|(stem, unit, _)| unit.column(stem)))?;
        for row in &table.rows {
            w.write_record(columns.iter().map(|(_, unit, pick)| cell(unit.of(pick(row)))))?;
        }
        Ok(())
    })
}

/// Inflow and tubing curves: `well, rate, inflow, tubing`, and the tubing method where several are shown.
///
/// # Errors
/// When the CSV writer fails.
pub fn curves_csv(curves: &[WellCurves], units: UnitSystem, with_method: bool) -> Result<Vec<u8>, ReportError> {
    let (rate, pressure) = (label(units, Quantity::LiquidRate), label(units, Quantity::Pressure));
    csv_bytes(|w| {
        let mut header =
            vec!["well".to_owned(), rate.column("rate"), pressure.column("inflow"), pressure.column("tubing")];
        if with_method {
            header.push("method".to_owned());
        }
        w.write_record(&header)?;
        for well in curves {
            for &(rate_stb_d, inflow_psia, tubing_psia) in &well.curve.points {
                let mut record = vec![
                    well.well.clone(),
                    cell(rate.of(rate_stb_d)),
                    cell(pressure.of(inflow_psia)),
                    cell(pressure.of(tubing_psia)),
                ];
                if with_method {
                    record.push(well.method.to_owned());
                }
                w.write_record(&record)?;
            }
        }
        Ok(())
    })
}

/// The traverses of several wells from the wellhead down, at the rate at which each flows.
///
/// # Errors
/// When the CSV writer fails.
pub fn traverse_csv(curves: &[WellCurves], units: UnitSystem) -> Result<Vec<u8>, ReportError> {
    let unit = |quantity| label(units, quantity);
    let columns: [(&str, Label, fn(&TraversePoint) -> f64); 9] = [
        ("measured_depth", unit(Quantity::Depth), |p| p.md_ft),
        ("vertical_depth", unit(Quantity::Depth), |p| p.tvd_ft),
        ("pressure", unit(Quantity::Pressure), |p| p.pressure_psia),
        ("temperature", unit(Quantity::Temperature), |p| p.temperature_degf),
        ("liquid_holdup", Label::fraction(), |p| p.holdup),
        ("liquid_velocity", unit(Quantity::Velocity), |p| p.liquid_velocity_ft_s),
        ("gas_velocity", unit(Quantity::Velocity), |p| p.gas_velocity_ft_s),
        ("gravity", unit(Quantity::Gradient), |p| p.gravity_psi_ft),
        ("friction", unit(Quantity::Gradient), |p| p.friction_psi_ft),
    ];
    csv_bytes(|w| {
        let names = columns.iter().map(|(stem, unit, _)| unit.column(stem));
        let rate = unit(Quantity::LiquidRate).column("rate");
        let fixed = ["well".to_owned(), "method".to_owned(), rate];
        w.write_record(fixed.into_iter().chain(names).chain(["flow_pattern".to_owned()]))?;
        for well in curves {
            let rate = well.curve.operating_point.map_or(f64::NAN, |(q, _)| unit(Quantity::LiquidRate).of(q));
            for point in &well.profile {
                let fixed = [well.well.clone(), well.method.to_owned(), cell(rate)];
                let values = columns.iter().map(|(_, unit, pick)| cell(unit.of(pick(point))));
                w.write_record(fixed.into_iter().chain(values).chain([point.pattern.to_owned()]))?;
            }
        }
        Ok(())
    })
}
