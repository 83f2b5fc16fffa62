//! The survey: pairs of measured and true vertical depth, in the scenario or in a CSV file beside it.

use super::problem::{Location, Problem};
use super::reader::{FileUsed, Reader, shorten};
use super::schema::Limits;
use super::section::Section;
use super::tree::{Node, Value};
use crate::tubing::minimum_curvature::{self, Station};
use crate::units::{Dimension, parse, parse_number};
use sha2::{Digest, Sha256};

/// Depths in a survey, ft: it begins at zero.
const DEPTH_FT: Limits = Limits { low: 0.0, low_allowed: true, high: 50_000.0 };
/// More points than any tool records.
const MOST_POINTS: usize = 100_000;

/// Inclinations from vertical, degrees: beyond horizontal the well would climb.
const INCLINATION_DEG: Limits = Limits { low: 0.0, low_allowed: true, high: 90.0 };
const AZIMUTH_DEG: Limits = Limits { low: -360.0, low_allowed: true, high: 360.0 };
/// Flowing temperatures, degF.
const TEMPERATURE_DEGF: Limits = Limits { low: -40.0, low_allowed: true, high: 500.0 };

/// Measured and vertical depths, ft; NaN where one is wrong.
pub(super) fn read(reader: &mut Reader, tubing: &Section<'_>) -> Vec<(f64, f64)> {
    let label = "expected: [ [\"0 ft\", \"0 ft\"], [\"8600 ft\", \"8150 ft\"] ] or the path of a CSV file";
    let example = "[[\"0 ft\", \"0 ft\"], [\"8600 ft\", \"8150 ft\"]]";
    let Some(entry) = reader.look(tubing, "survey", example).0 else { return Vec::new() };
    match &entry.node.value {
        Value::Text(path) => from_file(reader, path, &entry.node.at),
        Value::List(rows) => {
            if rows.len() < 2 {
                reader.note(Problem::new(entry.node.at.clone(), "a survey needs at least two points").label(label));
            }
            // The unit of the second value tells a depth from an inclination.
            if rows.iter().any(|row| row.list().is_some_and(|values| values.get(1).is_some_and(is_angle))) {
                let stations: Vec<Station> = rows.iter().map(|row| station(reader, row)).collect();
                return minimum_curvature::vertical_depths(&stations);
            }
            let row_label = "[measured depth, vertical depth] is expected, like [\"4000 ft\", \"3950 ft\"]";
            rows.iter().map(|row| depths(reader, row, row_label)).collect()
        }
        other => {
            let problem = Problem::new(entry.node.at.clone(), format!("`well.tubing.survey` is {}", other.kind()));
            reader.note(problem.label(label));
            Vec::new()
        }
    }
}

/// Measured depths, ft, and temperatures, degF; empty when there are none.
pub(super) fn temperatures(reader: &mut Reader, tubing: &Section<'_>) -> Vec<(f64, f64)> {
    if !tubing.has("temperature") {
        return Vec::new();
    }
    let example = "[[\"0 ft\", \"110 degF\"], [\"8600 ft\", \"190 degF\"]]";
    let Some(entry) = reader.look(tubing, "temperature", example).0 else { return Vec::new() };
    let Value::List(rows) = &entry.node.value else {
        let kind = entry.node.value.kind();
        let problem = Problem::new(entry.node.at.clone(), format!("`well.tubing.temperature` is {kind}"));
        reader.note(problem.label(format!("expected: {example}")));
        return Vec::new();
    };
    if rows.is_empty() {
        reader.note(
            Problem::new(entry.node.at.clone(), "a table of temperatures needs at least one point")
                .label(format!("expected: {example}")),
        );
    }
    let mut out = Vec::with_capacity(rows.len());
    for row in rows {
        if let Some([measured, temperature]) = row.list() {
            out.push((
                reader.quantity_node(measured, "measured depth", Dimension::Length, DEPTH_FT),
                reader.quantity_node(temperature, "temperature", Dimension::Temperature, TEMPERATURE_DEGF),
            ));
        } else {
            reader.note(
                Problem::new(row.at.clone(), "a point of a table of temperatures is a pair")
                    .label("[measured depth, temperature] is expected, like [\"4000 ft\", \"150 degF\"]"),
            );
            out.push((f64::NAN, f64::NAN));
        }
    }
    out
}

fn is_angle(node: &Node) -> bool {
    node.text().is_some_and(|text| parse(text, Dimension::Angle, 0.0).is_ok())
}

/// One station of a survey with inclinations; the azimuth may be left out.
fn station(reader: &mut Reader, row: &Node) -> Station {
    let Some([measured, inclination, azimuth @ ..]) = row.list().filter(|values| values.len() <= 3) else {
        reader.note(
            Problem::new(row.at.clone(), "a station of this survey has a measured depth and an inclination").label(
                "[measured depth, inclination] is expected, like [\"4000 ft\", \"30 deg\"], and perhaps an azimuth",
            ),
        );
        return Station { md_ft: f64::NAN, inclination_deg: f64::NAN, azimuth_deg: 0.0 };
    };
    Station {
        md_ft: reader.quantity_node(measured, "measured depth", Dimension::Length, DEPTH_FT),
        inclination_deg: reader.quantity_node(inclination, "inclination", Dimension::Angle, INCLINATION_DEG),
        azimuth_deg: azimuth
            .first()
            .map_or(0.0, |node| reader.quantity_node(node, "azimuth", Dimension::Angle, AZIMUTH_DEG)),
    }
}

fn depths(reader: &mut Reader, row: &Node, label: &str) -> (f64, f64) {
    match row.list() {
        Some([measured, vertical]) => (
            reader.quantity_node(measured, "measured depth", Dimension::Length, DEPTH_FT),
            reader.quantity_node(vertical, "vertical depth", Dimension::Length, DEPTH_FT),
        ),
        _ => {
            reader.note(Problem::new(row.at.clone(), "a point of a survey is a pair").label(label));
            (f64::NAN, f64::NAN)
        }
    }
}

fn from_file(reader: &mut Reader, path: &str, at: &Location) -> Vec<(f64, f64)> {
    let help = "a survey file has two columns with their units in the first line: md_ft,tvd_ft or md_m,tvd_m or \
                md_ft,inclination_deg";
    table_file(reader, "survey file", path, at, help, parse_csv)
}

/// A table in a file beside the scenario, which is noted among the files used.
pub(super) fn table_file<T>(
    reader: &mut Reader,
    what: &str,
    path: &str,
    at: &Location,
    help: &str,
    parse: impl Fn(&[u8]) -> Result<Vec<T>, String>,
) -> Vec<T> {
    let read = load(&reader.folder.join(path)).and_then(|(bytes, sha256)| Ok((parse(&bytes)?, sha256)));
    match read {
        Ok((points, sha256)) => {
            if !reader.files.iter().any(|file| file.path == path) {
                reader.files.push(FileUsed { path: path.to_owned(), sha256 });
            }
            points
        }
        Err(message) => {
            reader.note(
                Problem::new(at.clone(), format!("{what} {}: {message}", shorten(path)))
                    .label(format!("read for this {}, from the scenario's folder", what.trim_end_matches(" file")))
                    .help(help),
            );
            Vec::new()
        }
    }
}

fn load(path: &std::path::Path) -> Result<(Vec<u8>, String), String> {
    let kind = std::fs::metadata(path).map_err(|error| match error.kind() {
        std::io::ErrorKind::NotFound => "there is no such file".to_owned(),
        _ => format!("it cannot be read ({error})"),
    })?;
    if !kind.is_file() {
        return Err("it is not a file".to_owned());
    }
    if kind.len() > 16 << 20 {
        return Err("it is larger than 16 megabytes".to_owned());
    }
    let bytes = std::fs::read(path).map_err(|error| format!("it cannot be read ({error})"))?;
    let sha256 = super::hex(&Sha256::digest(&bytes));
    Ok((bytes, sha256))
}

fn parse_csv(bytes: &[u8]) -> Result<Vec<(f64, f64)>, String> {
    let mut rows = csv::ReaderBuilder::new().trim(csv::Trim::All).flexible(true).comment(Some(b'#')).from_reader(bytes);
    let header = rows.headers().map_err(|error| format!("it is not text ({error})"))?.clone();
    let columns: Vec<Column> = header.iter().enumerate().map(column).collect::<Result<_, _>>()?;
    let directional = columns.get(1).is_some_and(|column| column.dimension == Dimension::Angle);
    let most = if directional { 3 } else { 2 };
    if columns.len() < 2 || columns.len() > most {
        return Err(format!("line 1 has {} columns where 2 are expected", columns.len()));
    }
    let mut stations = Vec::new();
    for row in rows.records() {
        let row = row.map_err(|error| format!("it is not a table of text ({error})"))?;
        let line = row.position().map_or(0, csv::Position::line);
        if row.len() != columns.len() {
            return Err(format!("line {line} has {} columns where {} are expected", row.len(), columns.len()));
        }
        let mut values = [0.0; 3];
        for ((cell, column), out) in row.iter().zip(&columns).zip(&mut values) {
            let value = parse_number(cell).map_err(|message| format!("line {line}: {message}"))?;
            *out = parse(&format!("{value:e} {}", column.unit), column.dimension, 0.0)
                .map_err(|error| format!("line {line}: {error}"))?;
            if !column.limits.allow(*out) {
                let what = column.what;
                let unit = if column.dimension == Dimension::Angle { "deg" } else { "ft" };
                let (low, high) = (column.limits.low, column.limits.high);
                return Err(format!("line {line}: {what} {cell} is not between {low} and {high} {unit}"));
            }
        }
        stations.push(values);
        if stations.len() > MOST_POINTS {
            return Err(format!("it has more than {MOST_POINTS} points"));
        }
    }
    if stations.len() < 2 {
        return Err("it has fewer than two points".to_owned());
    }
    if directional {
        let stations: Vec<Station> = stations
            .into_iter()
            .map(|[md_ft, inclination_deg, azimuth_deg]| Station { md_ft, inclination_deg, azimuth_deg })
            .collect();
        return Ok(minimum_curvature::vertical_depths(&stations));
    }
    Ok(stations.into_iter().map(|[md_ft, tvd_ft, _]| (md_ft, tvd_ft)).collect())
}

/// A column of a survey file.
struct Column {
    unit: String,
    dimension: Dimension,
    limits: Limits,
    what: &'static str,
}

/// What a column's title tells: it ends with the unit ("md_ft", "MD (m)", "inclination_deg").
fn column((i, title): (usize, &str)) -> Result<Column, String> {
    let unit = title.split(|c: char| !c.is_alphanumeric()).rfind(|part| !part.is_empty()).unwrap_or("").to_owned();
    let is = |dimension| parse(&format!("1 {unit}"), dimension, 0.0).is_ok();
    let (dimension, limits, what) = match i {
        1 if is(Dimension::Angle) => (Dimension::Angle, INCLINATION_DEG, "inclination"),
        2 => (Dimension::Angle, AZIMUTH_DEG, "azimuth"),
        _ => (Dimension::Length, DEPTH_FT, "depth"),
    };
    if i < 3 && is(dimension) {
        Ok(Column { unit, dimension, limits, what })
    } else {
        Err(format!("line 1: the column \"{}\" does not end with its unit", shorten(title)))
    }
}
