//! CSV, JSON and pictures of a finished forecast.
//!
//! Exporters turn results into bytes and know no files; [`folder`] alone writes them.

mod calibration_files;
mod chart;
mod compare_files;
mod csv_files;
mod curve_files;
mod edge_files;
pub mod folder;
pub mod human;
mod json;
pub mod labels;
mod sanity;
mod summary;
mod table;
mod words;

pub use calibration_files::{
    calibration_csv, calibration_json, finding_text, held_text, kind_text, lines_of, lines_toml, measurement_title,
    stations_csv,
};
pub use chart::{
    Drawing, calibration_picture, compare_picture, curves_picture, depth_picture, edge_picture, fluid_picture,
    models_picture, pressure_picture, rates_picture, traverse_picture,
};
pub use compare_files::{compare_csv, compare_json};
pub use csv_files::{events_csv, profile_csv, yearly_csv};
pub use curve_files::{FluidSheet, curves_csv, curves_json, fluid_csv, fluid_json, traverse_csv};
pub use edge_files::{edge_csv, edge_json, gas_text, line_text, track_csv};
pub use labels::UnitSystem;
pub use sanity::sanity;
pub use summary::{doubts_json, summary_json};
pub use table::recovery;
pub use words::{doubt_text, event_text};

use crate::forecast::Forecast;
use json::Json;

/// The wording of a forecast's limits that goes with every result read by people.
pub const CAUTION: &str = "Model results, as uncertain as their inputs: for planning by competent people. They do not \
replace well-integrity, pressure-control or injection limits, local rules or company procedures.";

/// Where a result comes from.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Provenance {
    /// Title of the scenario.
    pub title: String,
    /// Name of the case; `None`: the scenario as it stands.
    pub case: Option<String>,
    /// What results are written in.
    pub units: UnitSystem,
    /// Name of the scenario file, without its folder.
    pub scenario_name: String,
    /// SHA-256 of the scenario file, in hexadecimal.
    pub sha256: String,
    /// Version of the program.
    pub version: String,
    /// The settings that shaped the result: key and value.
    pub settings: Vec<(String, String)>,
}

impl Provenance {
    /// The name of the case as results state it: "base" for the scenario as it stands.
    pub fn case_name(&self) -> &str {
        self.case.as_deref().unwrap_or("base")
    }

    fn entries(&self) -> Vec<(String, Json)> {
        let units = self.units.name();
        let entries = [
            ("program", "wane"),
            ("version", &self.version),
            ("title", &self.title),
            ("case", self.case_name()),
            ("scenario", &self.scenario_name),
            ("sha256", &self.sha256),
            ("units", units),
        ];
        entries.into_iter().map(|(key, value)| (key.to_owned(), value.into())).collect()
    }

    /// The small line below a picture.
    fn footer(&self) -> String {
        self.footer_of(&format!("case {}", self.case_name()))
    }

    /// The same with other words at its end.
    fn footer_of(&self, last: &str) -> String {
        let digest = self.sha256.get(..12).unwrap_or(&self.sha256);
        let line = format!("wane {} · {} · SHA-256 {digest}", self.version, self.scenario_name);
        if last.is_empty() { line } else { format!("{line} · {last}") }
    }
}

/// Why a result could not be turned into bytes.
#[derive(Debug, thiserror::Error)]
pub enum ReportError {
    /// The CSV writer failed.
    #[error("cannot write CSV: {0}")]
    Csv(#[from] csv::Error),
    /// The JSON writer failed.
    #[error("cannot write JSON: {0}")]
    Json(#[from] serde_json::Error),
    /// A picture could not be drawn.
    #[error("cannot draw the picture: {0}")]
    Picture(String),
}

/// One file of a result.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct OutFile {
    /// Path relative to the result folder, with `/`.
    pub path: String,
    /// What stands in it.
    pub bytes: Vec<u8>,
}

impl OutFile {
    /// A file of this path and content.
    pub fn new(path: impl Into<String>, bytes: Vec<u8>) -> Self {
        Self { path: path.into(), bytes }
    }
}

/// Both forms of a picture.
///
/// # Errors
/// When the picture cannot be drawn.
pub fn picture_files(stem: &str, drawing: &Drawing) -> Result<[OutFile; 2], ReportError> {
    Ok([OutFile::new(format!("{stem}.svg"), drawing.to_svg()?), OutFile::new(format!("{stem}.png"), drawing.to_png()?)])
}

/// Every file of one forecast except the manifest: tables, summary, pictures.
///
/// # Errors
/// When a table or a picture cannot be made.
pub fn forecast_files(forecast: &Forecast, provenance: &Provenance) -> Result<Vec<OutFile>, ReportError> {
    use rayon::prelude::*;
    let mut files = vec![
        OutFile::new("profile.csv", profile_csv(forecast, provenance.units)?),
        OutFile::new("yearly.csv", yearly_csv(forecast, provenance.units)?),
        OutFile::new("events.csv", events_csv(forecast)?),
        OutFile::new("summary.json", summary_json(forecast, provenance)?),
    ];
    let mut stems = vec![("rates".to_owned(), None), ("pressure".to_owned(), None)];
    let mut taken = Vec::new();
    for well in forecast.wells.iter().filter(|w| !w.curves.is_empty()) {
        stems.push((format!("curves-{}", file_stem(&well.name, &mut taken)), Some(well)));
    }
    let pictures: Vec<[OutFile; 2]> = stems
        .par_iter()
        .map(|(stem, well)| {
            let drawing = match well {
                Some(well) => curves_picture(&well.name, &well.inflow_text, &well.curves, provenance),
                None if stem == "rates" => rates_picture(forecast, provenance),
                None => pressure_picture(forecast, provenance),
            };
            picture_files(stem, &drawing)
        })
        .collect::<Result<_, _>>()?;
    files.extend(pictures.into_iter().flatten());
    Ok(files)
}

/// A name made safe for a file, and unlike those in `taken`.
pub fn file_stem(name: &str, taken: &mut Vec<String>) -> String {
    let safe: String =
        name.chars().map(|c| if c.is_alphanumeric() || matches!(c, '-' | '_' | '.') { c } else { '_' }).collect();
    let safe = match safe.trim_matches('.') {
        "" => "unnamed".to_owned(),
        trimmed => trimmed.chars().take(80).collect(),
    };
    let mut stem = safe.clone();
    let mut number = 2;
    // File systems that ignore case would put "a" and "A" into one file.
    while taken.contains(&stem.to_lowercase()) {
        stem = format!("{safe}-{number}");
        number += 1;
    }
    taken.push(stem.to_lowercase());
    stem
}
