//! The choice of correlations and the laboratory's table: from the tree and a CSV file to plain data.

use super::problem::{Location, Problem};
use super::reader::{Reader, shorten};
use super::section::Section;
use super::survey::table_file;
use crate::fluid::{
    Correlations, DeadOilCorrelation, LabBasis, LabReport, LabRow, LiveOilCorrelation, OilCorrelation,
    UndersaturatedCorrelation, ZCorrelation,
};
use crate::units::{Dimension, parse, parse_number};

/// More rows than a laboratory measures.
const MOST_ROWS: usize = 2_000;

/// The correlations that `[fluid]` names.
pub(super) fn correlations(reader: &mut Reader, fluid: &Section<'_>) -> Correlations {
    let mut word = |key: &str| reader.choice(fluid, key, &[]).unwrap_or("");
    Correlations {
        oil: OilCorrelation::of_word(word("oil_correlation")).unwrap_or_default(),
        dead_oil: DeadOilCorrelation::of_word(word("dead_oil_correlation")).unwrap_or_default(),
        live_oil: LiveOilCorrelation::of_word(word("live_oil_correlation")).unwrap_or_default(),
        undersaturated: UndersaturatedCorrelation::of_word(word("undersaturated_correlation")).unwrap_or_default(),
        z: ZCorrelation::of_word(word("z_correlation")).unwrap_or_default(),
    }
}

/// The laboratory's table of `[fluid.lab]`; `None` without one or where it cannot be read, which is noted.
pub(super) fn lab(reader: &mut Reader, fluid: &Section<'_>) -> Option<LabReport> {
    let section = reader.section(fluid, "lab");
    if !section.is_there() {
        return None;
    }
    let path = reader.text(&section, "table");
    let basis = basis(reader, &section);
    let rows = path.map(|path| {
        let at = section.at("table");
        from_file(reader, &path, &at)
    });
    reader.finish(&section);
    match (basis, rows) {
        (Some(basis), Some(rows)) if !rows.is_empty() => Some(LabReport { basis, rows }),
        _ => None,
    }
}

fn basis(reader: &mut Reader, section: &Section<'_>) -> Option<LabBasis> {
    let word = reader.choice(section, "basis", &[]);
    let bo = reader.optional_quantity(section, "separator_bo");
    let gor = reader.optional_quantity(section, "separator_gor");
    let keys = ["separator_bo", "separator_gor"];
    match word? {
        "differential" => {
            for key in keys.into_iter().filter(|key| !section.has(key)) {
                reader.note(
                    Problem::new(section.at.clone(), format!("`fluid.lab.{key}` is missing"))
                        .label("a differential liberation is converted with the separator test: `separator_bo` and `separator_gor` are expected")
                        .help("rows that were converted already have basis = \"flash\""),
                );
            }
            Some(LabBasis::Differential { separator_bo_rb_stb: bo?, separator_gor_scf_stb: gor? })
        }
        _ => {
            for key in keys.into_iter().filter(|key| section.has(key)) {
                reader.note(
                    Problem::new(section.at(key), format!("`fluid.lab.{key}` goes with basis = \"differential\""))
                        .label("rows of basis \"flash\" are used as they are"),
                );
            }
            Some(LabBasis::Flash)
        }
    }
}

fn from_file(reader: &mut Reader, path: &str, at: &Location) -> Vec<LabRow> {
    let atmospheric_pressure_psia = reader.atmospheric_pressure_psia;
    let help = "a laboratory's table has columns that end with their units in the first line: pressure_psig,rs_scf_stb,bo_rb_stb \
                and, as far as they were measured, mu_o_cp, z or bg_rb_scf, mu_g_cp; cells may be empty";
    table_file(reader, "laboratory's table", path, at, help, |bytes| parse_csv(bytes, atmospheric_pressure_psia))
}

/// A column of the table: what its title begins with, what it holds.
const COLUMNS: [(&str, Option<Dimension>); 7] = [
    ("pressure", Some(Dimension::Pressure)),
    ("rs", Some(Dimension::GasOilRatio)),
    ("bo", Some(Dimension::LiquidVolumeFactor)),
    ("mu_o", Some(Dimension::Viscosity)),
    ("z", None),
    ("bg", Some(Dimension::GasVolumeFactor)),
    ("mu_g", Some(Dimension::Viscosity)),
];

/// Which column a title means, and its unit ("rs_scf_stb", "Rs (scf/STB)").
fn column(title: &str, atmospheric_pressure_psia: f64) -> Result<(usize, String), String> {
    let lower = title.to_lowercase();
    let known = || COLUMNS.map(|(stem, _)| stem).join(", ");
    for (i, (stem, dimension)) in COLUMNS.into_iter().enumerate() {
        let Some(rest) = lower.strip_prefix(stem) else { continue };
        if rest.chars().next().is_some_and(char::is_alphanumeric) {
            continue;
        }
        let rest = &title[title.len() - rest.len()..];
        let unit = rest.trim_matches(|c: char| !c.is_alphanumeric());
        let Some(dimension) = dimension else {
            return if unit.is_empty() {
                Ok((i, String::new()))
            } else {
                Err(format!("line 1: the column \"{}\" has no unit", shorten(title)))
            };
        };
        let readings = [unit.to_owned(), unit.replace('_', "/"), unit.replace('_', ".")];
        let fits = |unit: &String| parse(&format!("1 {unit}"), dimension, atmospheric_pressure_psia).is_ok();
        return match readings.into_iter().find(fits) {
            Some(unit) => Ok((i, unit)),
            None => Err(format!(
                "line 1: the column \"{}\" does not end with the unit of {}, like {}",
                shorten(title),
                dimension.with_article(),
                dimension.example().split_once(' ').map_or("", |(_, unit)| unit)
            )),
        };
    }
    Err(format!("line 1: \"{}\" is none of the columns {}", shorten(title), known()))
}

fn parse_csv(bytes: &[u8], atmospheric_pressure_psia: f64) -> Result<Vec<LabRow>, String> {
    let mut rows = csv::ReaderBuilder::new().trim(csv::Trim::All).flexible(true).comment(Some(b'#')).from_reader(bytes);
    let header = rows.headers().map_err(|error| format!("it is not text ({error})"))?.clone();
    let columns: Vec<(usize, String)> =
        header.iter().map(|title| column(title, atmospheric_pressure_psia)).collect::<Result<_, _>>()?;
    for (i, (stem, _)) in COLUMNS.into_iter().enumerate() {
        match columns.iter().filter(|(column, _)| *column == i).count() {
            0 if i < 3 => return Err(format!("line 1 has no column {stem}")),
            0 | 1 => {}
            _ => return Err(format!("line 1 has two columns {stem}")),
        }
    }
    if columns.iter().any(|(i, _)| *i == 4) && columns.iter().any(|(i, _)| *i == 5) {
        return Err("line 1 has both z and bg: one follows from the other".to_owned());
    }
    let mut out = Vec::new();
    for row in rows.records() {
        let row = row.map_err(|error| format!("it is not a table of text ({error})"))?;
        let line = row.position().map_or(0, csv::Position::line);
        if row.len() != columns.len() {
            return Err(format!("line {line} has {} columns where {} are expected", row.len(), columns.len()));
        }
        let mut values = [None; COLUMNS.len()];
        for (cell, (i, unit)) in row.iter().zip(&columns) {
            if cell.is_empty() {
                continue;
            }
            let number = parse_number(cell).map_err(|message| format!("line {line}: {message}"))?;
            let value = match COLUMNS[*i].1 {
                None => number,
                Some(dimension) => parse(&format!("{number:e} {unit}"), dimension, atmospheric_pressure_psia)
                    .map_err(|error| format!("line {line}: {error}"))?,
            };
            values[*i] = Some(value);
        }
        let [Some(pressure_psia), rs_scf_stb, Some(bo_rb_stb), mu_o_cp, z, bg_rb_scf, mu_g_cp] = values else {
            return Err(format!("line {line}: the pressure and the oil volume factor cannot be empty"));
        };
        out.push(LabRow { pressure_psia, rs_scf_stb, bo_rb_stb, mu_o_cp, z, bg_rb_scf, mu_g_cp });
        if out.len() > MOST_ROWS {
            return Err(format!("it has more than {MOST_ROWS} rows"));
        }
    }
    if out.is_empty() {
        return Err("it holds no row".to_owned());
    }
    Ok(out)
}
