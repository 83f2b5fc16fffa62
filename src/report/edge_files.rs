//! `edge.csv`, `track.csv` and the machine-readable edge map.

use super::csv_files::{cell, csv_bytes};
use super::human::number;
use super::json::Json;
use super::labels::{Dimension, UnitSystem, label};
use super::{Provenance, ReportError};
use crate::forecast::WellMoment;
use crate::study::{Edge, EdgeLine, EdgeMap, Gas, LineOf, Place, Stand, Verdict, Way, WellEdge};

/// Mean length of a month, days.
const DAYS_PER_MONTH: f64 = 30.436_875;

/// Where the gas-oil ratio comes from, in a few words.
pub fn gas_text(gas: Gas, units: UnitSystem) -> String {
    let ratio = label(units, Dimension::GasOilRatio);
    match gas {
        Gas::Forecast => "gas-oil ratio of the forecast at each pressure".to_owned(),
        Gas::Dissolved => "gas-oil ratio: what the oil dissolves at each pressure, no free gas".to_owned(),
        Gas::Given(gor) => format!("gas-oil ratio {} {} at every pressure", number(ratio.of(gor), 0), ratio.text),
    }
}

fn gas_word(gas: Gas) -> &'static str {
    match gas {
        Gas::Forecast => "forecast",
        Gas::Dissolved => "dissolved",
        Gas::Given(_) => "given",
    }
}

/// What a line holds fixed: line pressure, string, and the gas-oil ratio where it is given.
pub fn line_text(line: &EdgeLine, units: UnitSystem) -> String {
    let LineOf { line_pressure_psia, diameter_in, gas } = line.of;
    let (pressure, diameter) = (label(units, Dimension::Pressure), label(units, Dimension::Diameter));
    let ratio = label(units, Dimension::GasOilRatio);
    let mut text = format!("line {} {}", trimmed(pressure.of(line_pressure_psia), 1), pressure.text);
    if let Some(inches) = diameter_in {
        text.push_str(&format!(", {} {}", trimmed(diameter.of(inches), 3), diameter.text));
    }
    if let Gas::Given(gor) = gas {
        text.push_str(&format!(", {} {}", number(ratio.of(gor), 0), ratio.text));
    }
    if line.own {
        text.push_str(" (its own)");
    }
    text
}

/// So many decimals at most, no idle zeros.
fn trimmed(value: f64, decimals: usize) -> String {
    format!("{value:.decimals$}").trim_end_matches('0').trim_end_matches('.').to_owned()
}

fn optional(value: Option<f64>) -> String {
    value.map_or_else(String::new, cell)
}

/// `edge.csv`: a row for each water cut of each line.
///
/// # Errors
/// When the CSV writer fails.
pub fn edge_csv(map: &EdgeMap, units: UnitSystem) -> Result<Vec<u8>, ReportError> {
    let unit = |dimension| label(units, dimension);
    let (pressure, diameter) = (unit(Dimension::Pressure), unit(Dimension::Diameter));
    let (ratio, rate) = (unit(Dimension::GasOilRatio), unit(Dimension::LiquidRate));
    csv_bytes(|w| {
        w.write_record([
            "well".to_owned(),
            pressure.column("line_pressure"),
            diameter.column("diameter"),
            "gas".to_owned(),
            "own".to_owned(),
            "water_cut".to_owned(),
            pressure.column("edge_pressure"),
            ratio.column("gor"),
            rate.column("liquid_rate"),
            pressure.column("gap_from"),
            pressure.column("gap_to"),
        ])?;
        for well in &map.wells {
            for line in &well.lines {
                for point in &line.points {
                    let place = |pick: fn(&Place) -> f64| point.lowest().map(pick);
                    let gap = widest_gap(point, well.top_psia);
                    w.write_record([
                        well.well.clone(),
                        cell(pressure.of(line.of.line_pressure_psia)),
                        optional(line.of.diameter_in.map(|d| diameter.of(d))),
                        gas_word(line.of.gas).to_owned(),
                        if line.own { "yes" } else { "no" }.to_owned(),
                        cell(point.water_cut),
                        optional(place(|p| p.pressure_psia).map(|p| pressure.of(p))),
                        optional(place(|p| p.gor_scf_stb).map(|g| ratio.of(g))),
                        optional(place(|p| p.rate_stb_d).map(|q| rate.of(q))),
                        optional(gap.map(|g| pressure.of(g.0))),
                        optional(gap.map(|g| pressure.of(g.1))),
                    ])?;
                }
            }
        }
        Ok(())
    })
}

/// The widest stretch of pressures above the edge without flow, psia.
fn widest_gap(edge: &Edge, top_psia: f64) -> Option<(f64, f64)> {
    let gaps = edge.gaps_psia().into_iter().map(|(low, high)| (low, high.unwrap_or(top_psia)));
    gaps.max_by(|a, b| (a.1 - a.0).total_cmp(&(b.1 - b.0)))
}

/// `track.csv`: the way of each well through its forecast, and how far it stands above its own edge.
///
/// # Errors
/// When the CSV writer fails.
pub fn track_csv(map: &EdgeMap, units: UnitSystem) -> Result<Vec<u8>, ReportError> {
    let unit = |dimension| label(units, dimension);
    let (pressure, difference) = (unit(Dimension::Pressure), unit(Dimension::PressureDifference));
    let ratio = unit(Dimension::GasOilRatio);
    csv_bytes(|w| {
        w.write_record([
            "well".to_owned(),
            "date".to_owned(),
            "days".to_owned(),
            pressure.column("reservoir_pressure"),
            "water_cut".to_owned(),
            ratio.column("gor"),
            pressure.column("border_pressure"),
            difference.column("pressure_margin"),
        ])?;
        for well in &map.wells {
            for stand in well.way.iter().flat_map(|way| &way.stands) {
                let WellMoment { date, days, reservoir_pressure_psia, water_cut, gor_scf_stb } = stand.moment;
                w.write_record([
                    well.well.clone(),
                    date.to_string(),
                    cell(days),
                    cell(pressure.of(reservoir_pressure_psia)),
                    cell(water_cut),
                    cell(ratio.of(gor_scf_stb)),
                    optional(stand.border_psia.map(|p| pressure.of(p))),
                    optional(stand.pressure_margin_psi.map(|p| difference.of(p))),
                ])?;
            }
        }
        Ok(())
    })
}

/// The edge map as JSON.
///
/// # Errors
/// When the JSON writer fails.
pub fn edge_json(map: &EdgeMap, provenance: &Provenance) -> Result<Vec<u8>, ReportError> {
    let mut entries = provenance.entries();
    let why = map.no_forecast.as_deref().map_or(Json::Null, Json::text);
    entries.push(("no_forecast_because".to_owned(), why));
    let wells = map.wells.iter().map(|well| well_json(well, provenance.units));
    entries.push(("wells".to_owned(), Json::List(wells.collect())));
    Ok(Json::Object(entries).to_bytes()?)
}

fn well_json(well: &WellEdge, units: UnitSystem) -> Json {
    let pressure = label(units, Dimension::Pressure);
    let gas = well.lines.first().map_or_else(String::new, |line| gas_text(line.of.gas, units));
    Json::object([
        ("name".to_owned(), well.well.as_str().into()),
        ("method".to_owned(), well.method.into()),
        ("gas".to_owned(), Json::text(gas)),
        (pressure.column("highest_pressure"), pressure.of(well.top_psia).into()),
        ("notes".to_owned(), Json::List(well.notes.iter().map(|n| Json::text(n.as_str())).collect())),
        ("track".to_owned(), well.way.as_ref().map_or(Json::Null, |way| way_json(way, units))),
        ("seen".to_owned(), Json::List(well.seen.iter().map(|v| verdict_json(v, units)).collect())),
        ("lines".to_owned(), Json::List(well.lines.iter().map(|line| line_json(line, units)).collect())),
    ])
}

fn line_json(line: &EdgeLine, units: UnitSystem) -> Json {
    let unit = |dimension| label(units, dimension);
    let (pressure, diameter) = (unit(Dimension::Pressure), unit(Dimension::Diameter));
    let (ratio, rate) = (unit(Dimension::GasOilRatio), unit(Dimension::LiquidRate));
    let difference = unit(Dimension::PressureDifference);
    let given = match line.of.gas {
        Gas::Given(gor) => Json::Number(ratio.of(gor)),
        Gas::Forecast | Gas::Dissolved => Json::Null,
    };
    let point = |point: &Edge| {
        let of = point.lowest();
        let windows = point.windows_psia().into_iter().map(|(low, high)| {
            Json::object([
                (pressure.column("from"), Json::Number(pressure.of(low))),
                (pressure.column("to"), Json::from(high.map(|p| pressure.of(p)))),
            ])
        });
        Json::object([
            ("water_cut".to_owned(), Json::Number(point.water_cut)),
            (pressure.column("edge_pressure"), Json::from(of.map(|p| pressure.of(p.pressure_psia)))),
            (ratio.column("gor"), Json::from(of.map(|p| ratio.of(p.gor_scf_stb)))),
            (rate.column("liquid_rate"), Json::from(of.map(|p| rate.of(p.rate_stb_d)))),
            (difference.column("margin_left"), Json::from(of.map(|p| difference.of(p.margin_psi)))),
            ("flows".to_owned(), Json::List(windows.collect())),
        ])
    };
    Json::object([
        (pressure.column("line_pressure"), Json::Number(pressure.of(line.of.line_pressure_psia))),
        (diameter.column("diameter"), Json::from(line.of.diameter_in.map(|d| diameter.of(d)))),
        ("gas".to_owned(), gas_word(line.of.gas).into()),
        (ratio.column("given_gor"), given),
        ("own".to_owned(), Json::Bool(line.own)),
        ("no_flow_from_water_cut".to_owned(), Json::from(line.no_flow_from)),
        ("points".to_owned(), Json::List(line.points.iter().map(point).collect())),
    ])
}

fn stand_json(stand: &Stand, units: UnitSystem) -> Json {
    let (pressure, difference) = (label(units, Dimension::Pressure), label(units, Dimension::PressureDifference));
    let ratio = label(units, Dimension::GasOilRatio);
    Json::object([
        ("date".to_owned(), Json::text(stand.moment.date.to_string())),
        ("days".to_owned(), Json::Number(stand.moment.days)),
        (pressure.column("reservoir_pressure"), Json::Number(pressure.of(stand.moment.reservoir_pressure_psia))),
        ("water_cut".to_owned(), Json::Number(stand.moment.water_cut)),
        (ratio.column("gor"), Json::Number(ratio.of(stand.moment.gor_scf_stb))),
        (pressure.column("border_pressure"), Json::from(stand.border_psia.map(|p| pressure.of(p)))),
        (difference.column("pressure_margin"), Json::from(stand.pressure_margin_psi.map(|p| difference.of(p)))),
    ])
}

fn way_json(way: &Way, units: UnitSystem) -> Json {
    let ends = |stand: Option<&Stand>| stand.map_or(Json::Null, |s| stand_json(s, units));
    let end = way.end.map_or(Json::Null, |end| Json::text(end.date.to_string()));
    Json::object([
        ("now", ends(way.stands.first())),
        ("last", ends(way.stands.last())),
        ("natural_flow_end", end),
        ("reason", way.end.map_or(Json::Null, |end| end.reason.text().into())),
        ("flowing_at_end", Json::Bool(way.flowing_at_end)),
        ("days_left", Json::Number(way.days_left)),
        ("months_left", Json::Number(way.days_left / DAYS_PER_MONTH)),
    ])
}

fn verdict_json(verdict: &Verdict, units: UnitSystem) -> Json {
    let (pressure, difference) = (label(units, Dimension::Pressure), label(units, Dimension::PressureDifference));
    let seen = &verdict.seen;
    Json::object([
        ("label".to_owned(), Json::text(seen.label.as_str())),
        ("state".to_owned(), if seen.flowed { "flowing" } else { "dead" }.into()),
        (pressure.column("reservoir_pressure"), Json::Number(pressure.of(seen.reservoir_pressure_psia))),
        ("water_cut".to_owned(), Json::Number(seen.water_cut)),
        (pressure.column("line_pressure"), Json::from(seen.line_pressure_psia.map(|p| pressure.of(p)))),
        (pressure.column("edge_pressure"), Json::from(verdict.edge.lowest().map(|p| pressure.of(p.pressure_psia)))),
        (difference.column("flow_margin"), Json::Number(difference.of(verdict.flow_margin_psi))),
        ("agrees".to_owned(), Json::Bool(verdict.agrees())),
    ])
}
