//! Flowing surveys: what flowed, and pressures along depth, in the scenario or in a CSV file beside it.

use super::problem::{Location, Problem};
use super::reader::{Reader, shorten};
use super::schema::Limits;
use super::section::Section;
use super::survey::table_file;
use super::tree::{Node, Value};
use crate::units::{Dimension, parse, parse_number};
use crate::well::{FlowingSurvey, SurveyPoint};
use jiff::civil::Date;

/// Depths of stations, ft.
const DEPTH_FT: Limits = Limits { low: 0.0, low_allowed: true, high: 50_000.0 };
/// Pressures in a well, psia.
const PRESSURE_PSIA: Limits = Limits { low: 0.0, low_allowed: false, high: 30_000.0 };
/// Flowing temperatures, degF.
const TEMPERATURE_DEGF: Limits = Limits { low: -40.0, low_allowed: true, high: 500.0 };
/// More stations than a survey has; each is a step of every fit.
const MOST_POINTS: usize = 2_000;
/// What the stations look like.
const EXAMPLE: &str = "[[\"0 ft\", \"410 psia\"], [\"4000 ft\", \"1420 psia\"]]";

/// The flowing surveys of a well.
pub(super) fn read(reader: &mut Reader, well: &Section<'_>) -> Vec<FlowingSurvey> {
    if !well.has("flowing_survey") {
        return Vec::new();
    }
    reader.sections(well, "flowing_survey").iter().map(|section| one(reader, section)).collect()
}

fn one(reader: &mut Reader, section: &Section<'_>) -> FlowingSurvey {
    let survey = FlowingSurvey {
        // Without a day there is a problem, and the survey is never used.
        on: reader.day(section, "on").unwrap_or(Date::constant(1900, 1, 1)),
        rate_stb_d: reader.quantity(section, "rate"),
        gor_scf_stb: reader.quantity(section, "gor"),
        water_cut: reader.number(section, "water_cut"),
        wellhead_psia: reader.quantity(section, "wellhead"),
        wellhead_temperature_degf: reader.optional_quantity(section, "wellhead_temperature"),
        reservoir_psia: reader.optional_quantity(section, "reservoir"),
        points: points(reader, section),
    };
    reader.finish(section);
    survey
}

fn points(reader: &mut Reader, section: &Section<'_>) -> Vec<SurveyPoint> {
    let Some(entry) = reader.look(section, "points", EXAMPLE).0 else { return Vec::new() };
    match &entry.node.value {
        Value::Text(path) => from_file(reader, path, &entry.node.at),
        Value::List(rows) => {
            if rows.is_empty() || rows.len() > MOST_POINTS {
                let message = if rows.is_empty() { "a flowing survey without a point" } else { "too many points" };
                reader.note(
                    Problem::new(entry.node.at.clone(), message)
                        .label(format!("1 to {MOST_POINTS} are expected: {EXAMPLE}")),
                );
                return Vec::new();
            }
            rows.iter().map(|row| point(reader, row)).collect()
        }
        other => {
            let kind = other.kind();
            reader.note(
                Problem::new(entry.node.at.clone(), format!("`well.flowing_survey.points` is {kind}"))
                    .label(format!("expected: {EXAMPLE} or the path of a CSV file")),
            );
            Vec::new()
        }
    }
}

fn point(reader: &mut Reader, row: &Node) -> SurveyPoint {
    let Some([measured, pressure, temperature @ ..]) = row.list().filter(|values| values.len() <= 3) else {
        reader.note(Problem::new(row.at.clone(), "a point of a flowing survey is a depth and a pressure").label(
            "[measured depth, pressure] is expected, like [\"4000 ft\", \"1420 psia\"], and perhaps a temperature",
        ));
        return SurveyPoint { md_ft: f64::NAN, pressure_psia: f64::NAN, temperature_degf: None };
    };
    SurveyPoint {
        md_ft: reader.quantity_node(measured, "measured depth", Dimension::Length, DEPTH_FT),
        pressure_psia: reader.quantity_node(pressure, "pressure", Dimension::Pressure, PRESSURE_PSIA),
        temperature_degf: temperature
            .first()
            .map(|node| reader.quantity_node(node, "temperature", Dimension::Temperature, TEMPERATURE_DEGF)),
    }
}

fn from_file(reader: &mut Reader, path: &str, at: &Location) -> Vec<SurveyPoint> {
    let atmospheric_pressure_psia = reader.atmospheric_pressure_psia;
    let help = "a file of a flowing survey has columns that end with their units in the first line: md_ft,pressure_psia or \
                md_m,pressure_barg,temperature_degC";
    table_file(reader, "survey file", path, at, help, |bytes| parse_csv(bytes, atmospheric_pressure_psia))
}

const COLUMNS: [(Dimension, &str, Limits); 3] = [
    (Dimension::Length, "depth", DEPTH_FT),
    (Dimension::Pressure, "pressure", PRESSURE_PSIA),
    (Dimension::Temperature, "temperature", TEMPERATURE_DEGF),
];

fn parse_csv(bytes: &[u8], atmospheric_pressure_psia: f64) -> Result<Vec<SurveyPoint>, String> {
    let mut rows = csv::ReaderBuilder::new().trim(csv::Trim::All).flexible(true).comment(Some(b'#')).from_reader(bytes);
    let header = rows.headers().map_err(|error| format!("it is not text ({error})"))?.clone();
    if header.len() < 2 || header.len() > COLUMNS.len() {
        return Err(format!("line 1 has {} columns where 2 or 3 are expected", header.len()));
    }
    let mut units = Vec::new();
    for (title, (dimension, what, _)) in header.iter().zip(COLUMNS) {
        let unit = title.split(|c: char| !c.is_alphanumeric()).rfind(|part| !part.is_empty()).unwrap_or("").to_owned();
        if parse(&format!("1 {unit}"), dimension, atmospheric_pressure_psia).is_err() {
            return Err(format!("line 1: the column \"{}\" does not end with a unit of {what}", shorten(title)));
        }
        units.push(unit);
    }
    let mut out = Vec::new();
    for row in rows.records() {
        let row = row.map_err(|error| format!("it is not a table of text ({error})"))?;
        let line = row.position().map_or(0, csv::Position::line);
        if row.len() != units.len() {
            return Err(format!("line {line} has {} columns where {} are expected", row.len(), units.len()));
        }
        let mut values = [None; 3];
        for (((cell, unit), (dimension, what, limits)), value) in row.iter().zip(&units).zip(COLUMNS).zip(&mut values) {
            // A station may be without a temperature.
            if cell.is_empty() && dimension == Dimension::Temperature {
                continue;
            }
            let number = parse_number(cell).map_err(|message| format!("line {line}: {message}"))?;
            let found = parse(&format!("{number:e} {unit}"), dimension, atmospheric_pressure_psia)
                .map_err(|error| format!("line {line}: {error}"))?;
            if !limits.allow(found) {
                return Err(format!("line {line}: a {what} of {cell} {unit} cannot be"));
            }
            *value = Some(found);
        }
        if let [Some(md_ft), Some(pressure_psia), temperature_degf] = values {
            out.push(SurveyPoint { md_ft, pressure_psia, temperature_degf });
        }
        if out.len() > MOST_POINTS {
            return Err(format!("it has more than {MOST_POINTS} points"));
        }
    }
    if out.is_empty() {
        return Err("it holds no point".to_owned());
    }
    Ok(out)
}
