//! A CSV file of wells seen dead or flowing, set against the edge map.

use super::context::file_name;
use super::failure::Failure;
use crate::scenario::Scenario;
use crate::study::Seen;
use crate::units::{Dimension, parse, parse_number};
use std::path::Path;

const COLUMNS: [&str; 7] = ["well", "label", "reservoir", "water_cut", "line_pressure", "gor", "state"];
/// More than a picture can show.
const MOST_ROWS: usize = 1000;
/// Highest pressure of a point, psia.
const HIGHEST_PSIA: f64 = 30_000.0;

/// The file as it is.
pub fn bytes(path: &Path) -> Result<Vec<u8>, Failure> {
    std::fs::read(path).map_err(|e| Failure::Usage(format!("--seen: cannot read {}: {e}", path.display())))
}

/// Reads the file. Every mistake names file, line and column.
pub fn read(path: &Path, scenario: &Scenario) -> Result<Vec<Seen>, Failure> {
    let name = file_name(path);
    let bytes = bytes(path)?;
    let text =
        String::from_utf8(bytes).map_err(|_| Failure::Usage(format!("--seen: {name} is not a text file in UTF-8")))?;
    let text = text.strip_prefix('\u{feff}').unwrap_or(&text);
    let mut reader = csv::ReaderBuilder::new().trim(csv::Trim::All).comment(Some(b'#')).from_reader(text.as_bytes());
    let wrong = |e: csv::Error| Failure::Usage(format!("--seen: {name}: {e}"));
    let header = reader.headers().map_err(wrong)?.clone();
    for column in &header {
        if !COLUMNS.contains(&column) {
            return Err(Failure::Usage(format!(
                "--seen: {name}, line 1: `{column}` is not a known column; the columns are {}",
                COLUMNS.join(", ")
            )));
        }
    }
    for needed in ["reservoir", "water_cut"] {
        if !header.iter().any(|h| h == needed) {
            return Err(Failure::Usage(format!("--seen: {name}, line 1: the column `{needed}` is missing")));
        }
    }
    let wells: Vec<&str> = scenario.field.wells.iter().map(|w| w.name.as_str()).collect();
    let mut list = Vec::new();
    for record in reader.records() {
        let record = record.map_err(wrong)?;
        let line = record.position().map_or(0, csv::Position::line);
        let cell = |column: &str| {
            let i = header.iter().position(|h| h == column)?;
            record.get(i).filter(|text| !text.is_empty())
        };
        let at =
            |column: &str, what: String| Failure::Usage(format!("--seen: {name}, line {line}, `{column}`: {what}"));
        let quantity = |column: &str, dimension: Dimension, highest: f64| {
            cell(column)
                .map(|text| match parse(text, dimension, scenario.atmospheric_pressure_psia) {
                    Ok(value) if value > 0.0 && value <= highest => Ok(value),
                    Ok(_) => Err(at(column, format!("{text} is outside what a well has"))),
                    Err(error) => Err(at(column, format!("`{text}`: {error}"))),
                })
                .transpose()
        };
        let missing = |column: &str| at(column, "a value is expected".to_owned());
        let well = cell("well").map(str::to_owned);
        if let Some(well) = well.as_deref().filter(|w| !wells.contains(w)) {
            return Err(at("well", format!("`{well}` is no well of the scenario, which has {}", wells.join(", "))));
        }
        let cut_text = cell("water_cut").ok_or_else(|| missing("water_cut"))?;
        let (figure, part) = cut_text.strip_suffix('%').map_or((cut_text, 1.0), |figure| (figure, 100.0));
        let water_cut = parse_number(figure).map_err(|e| at("water_cut", format!("`{cut_text}`: {e}")))? / part;
        if !(0.0..1.0).contains(&water_cut) {
            return Err(at(
                "water_cut",
                format!("`{cut_text}`: a fraction from 0 to below 1 is expected, like 0.35 or \"35 %\""),
            ));
        }
        let flowed = match cell("state") {
            None | Some("dead") => false,
            Some("flowing") => true,
            Some(other) => return Err(at("state", format!("`{other}`: dead or flowing is expected"))),
        };
        list.push(Seen {
            well,
            label: cell("label").map_or_else(|| format!("line {line}"), str::to_owned),
            reservoir_pressure_psia: quantity("reservoir", Dimension::Pressure, HIGHEST_PSIA)?
                .ok_or_else(|| missing("reservoir"))?,
            water_cut,
            line_pressure_psia: quantity("line_pressure", Dimension::Pressure, HIGHEST_PSIA)?,
            gor_scf_stb: quantity("gor", Dimension::GasOilRatio, 1e6)?,
            flowed,
        });
        if list.len() > MOST_ROWS {
            return Err(Failure::Usage(format!("--seen: {name} has more than {MOST_ROWS} points")));
        }
    }
    if list.is_empty() {
        return Err(Failure::Usage(format!("--seen: {name} holds no point")));
    }
    Ok(list)
}
