//! The survey: pairs of measured and true vertical depth, in the scenario or in a CSV file beside it.

use super::problem::{Location, Problem};
use super::reader::{FileUsed, Reader, shorten};
use super::schema::Limits;
use super::section::Section;
use super::tree::{Node, Value};
use crate::units::{Dimension, parse, parse_number};
use sha2::{Digest, Sha256};

/// Depths in a survey, ft: it begins at zero.
const DEPTH_FT: Limits = Limits { low: 0.0, low_allowed: true, high: 50_000.0 };
/// More points than any tool records.
const MOST_POINTS: usize = 100_000;

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
            rows.iter().map(|row| pair(reader, row)).collect()
        }
        other => {
            let problem = Problem::new(entry.node.at.clone(), format!("`well.tubing.survey` is {}", other.kind()));
            reader.note(problem.label(label));
            Vec::new()
        }
    }
}

fn pair(reader: &mut Reader, row: &Node) -> (f64, f64) {
    match row.list() {
        Some([measured, vertical]) => (
            reader.quantity_node(measured, "measured depth", Dimension::Length, DEPTH_FT),
            reader.quantity_node(vertical, "vertical depth", Dimension::Length, DEPTH_FT),
        ),
        _ => {
            reader.note(
                Problem::new(row.at.clone(), "a point of a survey is a pair")
                    .label("[measured depth, vertical depth] is expected, like [\"4000 ft\", \"3950 ft\"]"),
            );
            (f64::NAN, f64::NAN)
        }
    }
}

fn from_file(reader: &mut Reader, path: &str, at: &Location) -> Vec<(f64, f64)> {
    match load(&reader.folder.join(path)) {
        Ok((points, sha256)) => {
            if !reader.files.iter().any(|file| file.path == path) {
                reader.files.push(FileUsed { path: path.to_owned(), sha256 });
            }
            points
        }
        Err(message) => {
            reader.note(
                Problem::new(at.clone(), format!("survey file {}: {message}", shorten(path)))
                    .label("read for this survey, from the scenario's folder")
                    .help(
                        "a survey file has two columns with their units in the first line: md_ft,tvd_ft or md_m,tvd_m",
                    ),
            );
            Vec::new()
        }
    }
}

fn load(path: &std::path::Path) -> Result<(Vec<(f64, f64)>, String), String> {
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
    Ok((parse_csv(&bytes)?, sha256))
}

fn parse_csv(bytes: &[u8]) -> Result<Vec<(f64, f64)>, String> {
    let mut rows = csv::ReaderBuilder::new().trim(csv::Trim::All).flexible(true).comment(Some(b'#')).from_reader(bytes);
    let header = rows.headers().map_err(|error| format!("it is not text ({error})"))?.clone();
    if header.len() != 2 {
        return Err(format!("line 1 has {} columns where 2 are expected", header.len()));
    }
    let units: Vec<String> = header.iter().map(unit_of).collect::<Result<_, _>>()?;
    let mut points = Vec::new();
    for row in rows.records() {
        let row = row.map_err(|error| format!("it is not a table of text ({error})"))?;
        let line = row.position().map_or(0, csv::Position::line);
        if row.len() != 2 {
            return Err(format!("line {line} has {} columns where 2 are expected", row.len()));
        }
        let mut depths_ft = [0.0; 2];
        for ((cell, unit), depth_ft) in row.iter().zip(&units).zip(&mut depths_ft) {
            let value = parse_number(cell).map_err(|message| format!("line {line}: {message}"))?;
            *depth_ft = parse(&format!("{value:e} {unit}"), Dimension::Length, 0.0)
                .map_err(|error| format!("line {line}: {error}"))?;
            if !DEPTH_FT.allow(*depth_ft) {
                return Err(format!("line {line}: depth {cell} is not between 0 and 50000 ft"));
            }
        }
        points.push((depths_ft[0], depths_ft[1]));
        if points.len() > MOST_POINTS {
            return Err(format!("it has more than {MOST_POINTS} points"));
        }
    }
    if points.len() < 2 { Err("it has fewer than two points".to_owned()) } else { Ok(points) }
}

/// The unit in a column's title: "md_ft", "MD (m)".
fn unit_of(title: &str) -> Result<String, String> {
    let unit = title.split(|c: char| !c.is_alphanumeric()).rfind(|part| !part.is_empty()).unwrap_or("");
    match parse(&format!("1 {unit}"), Dimension::Length, 0.0) {
        Ok(_) => Ok(unit.to_owned()),
        Err(_) => Err(format!("line 1: the column \"{}\" does not end with its unit", shorten(title))),
    }
}
