//! `compare.csv` and the machine-readable comparison.

use super::csv_files::{cell, csv_bytes};
use super::json::Json;
use super::labels::{Dimension, UnitSystem, label};
use super::{Provenance, ReportError};
use crate::study::{CaseRow, Comparison, Shift, WellShift};

/// Mean length of a month, days.
const DAYS_PER_MONTH: f64 = 30.436_875;

fn bound(shift: Shift) -> (Option<f64>, &'static str) {
    match shift {
        Shift::Days(days) => (Some(days), ""),
        Shift::AtLeast(days) => (Some(days), "at least"),
        Shift::AtMost(days) => (Some(days), "at most"),
        Shift::Unknown => (None, ""),
    }
}

/// `compare.csv`: for each case a row per well and one for the tank.
///
/// # Errors
/// When the CSV writer fails.
pub fn compare_csv(comparison: &Comparison, units: UnitSystem) -> Result<Vec<u8>, ReportError> {
    let liquid = label(units, Dimension::LiquidVolume);
    let gas = label(units, Dimension::GasVolume);
    let rate = label(units, Dimension::LiquidRate);
    let pressure = label(units, Dimension::Pressure);
    let ratio = label(units, Dimension::GasOilRatio);
    csv_bytes(|w| {
        w.write_record([
            "case",
            "name",
            "natural_flow_end",
            "natural_flow_end_days",
            "reason",
            "flowing_at_end",
            &rate.column("end_oil_rate"),
            "shift_days",
            "shift_months",
            "shift_bound",
            &liquid.column("oil_cum"),
            &liquid.column("oil_increment"),
            &liquid.column("injected_water_cum"),
            &liquid.column("injected_water_increment"),
            &gas.column("injected_gas_cum"),
            &gas.column("injected_gas_increment"),
            "injected_water_per_extra_oil",
            &ratio.column("injected_gas_per_extra_oil"),
            &pressure.column("final_pressure"),
            "final_water_cut",
            "recovery",
            "end_days",
        ])?;
        let some = |value: Option<f64>| value.map_or_else(String::new, cell);
        for case in comparison.rows() {
            for well in &case.wells {
                let (shift, bound) = bound(well.shift);
                let mut record = vec![
                    case.name.clone(),
                    well.name.clone(),
                    well.end.map_or_else(String::new, |e| e.date.to_string()),
                    some(well.end.map(|e| e.days)),
                    well.end.map_or("", |e| e.reason.text()).to_owned(),
                    if well.flowing_at_end { "yes" } else { "no" }.to_owned(),
                    some(well.end.map(|e| rate.of(e.oil_rate_stb_d))),
                    some(shift),
                    some(shift.map(|d| d / DAYS_PER_MONTH)),
                    bound.to_owned(),
                    cell(liquid.of(well.oil_cum_stb)),
                    some(well.oil_increment_stb.map(|v| liquid.of(v))),
                ];
                record.resize(22, String::new());
                w.write_record(&record)?;
            }
            let mut record = vec![case.name.clone(), "tank".to_owned()];
            record.resize(10, String::new());
            record.extend([
                cell(liquid.of(case.oil_cum_stb)),
                cell(liquid.of(case.oil_increment_stb)),
                cell(liquid.of(case.injected_water_stb)),
                cell(liquid.of(case.injected_water_increment_stb)),
                cell(gas.of(case.injected_gas_scf)),
                cell(gas.of(case.injected_gas_increment_scf)),
                some(case.water_per_extra_oil),
                some(case.gas_per_extra_oil_scf_stb.map(|v| ratio.of(v))),
                cell(pressure.of(case.pressure_psia)),
                some(case.water_cut),
                cell(case.recovery),
                cell(case.end_days),
            ]);
            w.write_record(&record)?;
        }
        Ok(())
    })
}

/// The comparison as JSON, for `--json` and `compare.json`.
///
/// # Errors
/// When the JSON writer fails.
pub fn compare_json(comparison: &Comparison, provenance: &Provenance) -> Result<Vec<u8>, ReportError> {
    let mut entries = provenance.entries();
    entries.retain(|(key, _)| key != "case");
    let cases = comparison.rows().iter().map(|case| case_json(case, provenance.units)).collect();
    entries.push(("cases".to_owned(), Json::List(cases)));
    Ok(Json::Object(entries).to_bytes()?)
}

fn case_json(case: &CaseRow, units: UnitSystem) -> Json {
    let liquid = label(units, Dimension::LiquidVolume);
    let gas = label(units, Dimension::GasVolume);
    let pressure = label(units, Dimension::Pressure);
    let ratio = label(units, Dimension::GasOilRatio);
    Json::object([
        ("case".to_owned(), case.name.as_str().into()),
        ("end_days".to_owned(), case.end_days.into()),
        (liquid.column("oil_cum"), liquid.of(case.oil_cum_stb).into()),
        (liquid.column("oil_increment"), liquid.of(case.oil_increment_stb).into()),
        ("recovery".to_owned(), case.recovery.into()),
        (liquid.column("injected_water_cum"), liquid.of(case.injected_water_stb).into()),
        (liquid.column("injected_water_increment"), liquid.of(case.injected_water_increment_stb).into()),
        (gas.column("injected_gas_cum"), gas.of(case.injected_gas_scf).into()),
        (gas.column("injected_gas_increment"), gas.of(case.injected_gas_increment_scf).into()),
        ("injected_water_per_extra_oil".to_owned(), case.water_per_extra_oil.into()),
        (ratio.column("injected_gas_per_extra_oil"), case.gas_per_extra_oil_scf_stb.map(|v| ratio.of(v)).into()),
        (pressure.column("final_pressure"), pressure.of(case.pressure_psia).into()),
        ("final_water_cut".to_owned(), case.water_cut.into()),
        ("wells".to_owned(), Json::List(case.wells.iter().map(|well| well_json(well, units)).collect())),
    ])
}

fn well_json(well: &WellShift, units: UnitSystem) -> Json {
    let liquid = label(units, Dimension::LiquidVolume);
    let rate = label(units, Dimension::LiquidRate);
    let (shift, bound) = bound(well.shift);
    let end = well.end.map_or(Json::Null, |end| {
        Json::object([
            ("date".to_owned(), Json::text(end.date.to_string())),
            ("days".to_owned(), end.days.into()),
            ("reason".to_owned(), end.reason.text().into()),
            (rate.column("oil_rate"), rate.of(end.oil_rate_stb_d).into()),
        ])
    });
    Json::object([
        ("name".to_owned(), well.name.as_str().into()),
        ("natural_flow_end".to_owned(), end),
        ("flowing_at_end".to_owned(), Json::Bool(well.flowing_at_end)),
        ("shift_days".to_owned(), shift.into()),
        ("shift_bound".to_owned(), bound.into()),
        (liquid.column("oil_cum"), liquid.of(well.oil_cum_stb).into()),
        (liquid.column("oil_increment"), well.oil_increment_stb.map(|v| liquid.of(v)).into()),
    ])
}
