//! Tables of the fluid, of inflow and tubing curves, and of traverses.

use super::csv_files::{cell, csv_bytes};
use super::json::Json;
use super::labels::{Dimension, Label, UnitSystem, label};
use super::{Provenance, ReportError};
use crate::fluid::{FluidRow, LabRow, Source};
use crate::forecast::WellCurves;
use crate::tubing::TraversePoint;

/// Name, unit and value of a column.
pub type Column<Row> = (&'static str, Label, fn(&Row) -> f64);

/// The fluid's properties at tank temperature.
#[derive(Debug, Clone, PartialEq)]
pub struct FluidSheet {
    /// Temperature, degF.
    pub temperature_degf: f64,
    /// Initial bubble point, psia.
    pub bubble_point_psia: f64,
    /// The rows, by pressure.
    pub rows: Vec<FluidRow>,
    /// Where each property comes from.
    pub sources: Vec<Source>,
    /// The laboratory's rows, converted; empty without a table.
    pub lab: Vec<LabRow>,
    /// For the picture: the same fluid by each correlation without the table, the chosen one first.
    pub by_correlation: Vec<(&'static str, Vec<FluidRow>)>,
}

impl FluidSheet {
    /// Name, unit and value of each column.
    pub fn columns(units: UnitSystem) -> [Column<FluidRow>; 9] {
        let unit = |dimension| label(units, dimension);
        [
            ("pressure", unit(Dimension::Pressure), |r| r.pressure_psia),
            ("rs", unit(Dimension::GasOilRatio), |r| r.rs_scf_stb),
            ("bo", unit(Dimension::LiquidVolumeFactor), |r| r.bo_rb_stb),
            ("mu_o", unit(Dimension::Viscosity), |r| r.mu_o_cp),
            ("z", Label::fraction(), |r| r.z),
            ("bg", unit(Dimension::GasVolumeFactor), |r| r.bg_rb_scf),
            ("mu_g", unit(Dimension::Viscosity), |r| r.mu_g_cp),
            ("bw", unit(Dimension::LiquidVolumeFactor), |r| r.bw_rb_stb),
            ("mu_w", unit(Dimension::Viscosity), |r| r.mu_w_cp),
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
    let (rate, pressure) = (label(units, Dimension::LiquidRate), label(units, Dimension::Pressure));
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
    let unit = |dimension| label(units, dimension);
    let columns: [Column<TraversePoint>; 9] = [
        ("measured_depth", unit(Dimension::Length), |p| p.md_ft),
        ("vertical_depth", unit(Dimension::Length), |p| p.tvd_ft),
        ("pressure", unit(Dimension::Pressure), |p| p.pressure_psia),
        ("temperature", unit(Dimension::Temperature), |p| p.temperature_degf),
        ("liquid_holdup", Label::fraction(), |p| p.holdup),
        ("liquid_velocity", unit(Dimension::Velocity), |p| p.liquid_velocity_ft_s),
        ("gas_velocity", unit(Dimension::Velocity), |p| p.gas_velocity_ft_s),
        ("gravity", unit(Dimension::PressureGradient), |p| p.gravity_psi_ft),
        ("friction", unit(Dimension::PressureGradient), |p| p.friction_psi_ft),
    ];
    csv_bytes(|w| {
        let names = columns.iter().map(|(stem, unit, _)| unit.column(stem));
        let rate = unit(Dimension::LiquidRate).column("rate");
        let fixed = ["well".to_owned(), "method".to_owned(), rate];
        w.write_record(fixed.into_iter().chain(names).chain(["flow_pattern".to_owned()]))?;
        for well in curves {
            let rate = well.curve.operating_point.map_or(f64::NAN, |(q, _)| unit(Dimension::LiquidRate).of(q));
            for point in &well.profile {
                let fixed = [well.well.clone(), well.method.to_owned(), cell(rate)];
                let values = columns.iter().map(|(_, unit, pick)| cell(unit.of(pick(point))));
                w.write_record(fixed.into_iter().chain(values).chain([point.pattern.to_owned()]))?;
            }
        }
        Ok(())
    })
}

/// The fluid table as JSON.
///
/// # Errors
/// When the JSON writer fails.
pub fn fluid_json(sheet: &FluidSheet, provenance: &Provenance) -> Result<Vec<u8>, ReportError> {
    let columns = FluidSheet::columns(provenance.units);
    let unit = |dimension| label(provenance.units, dimension);
    let mut entries = provenance.entries();
    entries.retain(|(key, _)| key != "case");
    let temperature = unit(Dimension::Temperature);
    let pressure = unit(Dimension::Pressure);
    entries.push((temperature.column("temperature"), temperature.of(sheet.temperature_degf).into()));
    entries.push((pressure.column("bubble_point"), pressure.of(sheet.bubble_point_psia).into()));
    let rows = sheet.rows.iter().map(|row| {
        Json::object(columns.iter().map(|(stem, unit, pick)| (unit.column(stem), Json::Number(unit.of(pick(row))))))
    });
    entries.push(("rows".to_owned(), Json::List(rows.collect())));
    entries.push(("sources".to_owned(), sources_json(&sheet.sources)));
    Ok(Json::Object(entries).to_bytes()?)
}

/// Where each property of the fluid comes from.
pub(super) fn sources_json(sources: &[Source]) -> Json {
    let list = sources.iter().map(|source| {
        Json::object([
            ("property", source.property.into()),
            ("from", source.from.into()),
            ("detail", Json::text(source.detail.clone())),
        ])
    });
    Json::List(list.collect())
}

/// Inflow and tubing curves as JSON.
///
/// # Errors
/// When the JSON writer fails.
pub fn curves_json(curves: &[WellCurves], provenance: &Provenance) -> Result<Vec<u8>, ReportError> {
    let unit = |dimension| label(provenance.units, dimension);
    let (rate, pressure) = (unit(Dimension::LiquidRate), unit(Dimension::Pressure));
    let difference = unit(Dimension::PressureDifference);
    let mut entries = provenance.entries();
    let list = curves.iter().map(|well| {
        let curve = &well.curve;
        let points = curve.points.iter().map(|p| {
            Json::object([
                (rate.column("rate"), Json::Number(rate.of(p.0))),
                (pressure.column("inflow"), Json::Number(pressure.of(p.1))),
                (pressure.column("tubing"), Json::Number(pressure.of(p.2))),
            ])
        });
        let operating = curve.operating_point.map_or(Json::Null, |(q, p)| {
            Json::object([
                (rate.column("rate"), Json::Number(rate.of(q))),
                (pressure.column("flowing_pressure"), Json::Number(pressure.of(p))),
            ])
        });
        Json::object([
            ("well".to_owned(), well.well.as_str().into()),
            ("method".to_owned(), well.method.into()),
            ("date".to_owned(), Json::text(curve.date.to_string())),
            (pressure.column("reservoir_pressure"), Json::Number(pressure.of(curve.reservoir_psia))),
            (difference.column("flow_margin"), Json::Number(difference.of(curve.flow_margin_psi))),
            ("operating_point".to_owned(), operating),
            ("points".to_owned(), Json::List(points.collect())),
        ])
    });
    entries.push(("curves".to_owned(), Json::List(list.collect())));
    Ok(Json::Object(entries).to_bytes()?)
}
