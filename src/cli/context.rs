//! What the commands share: the loaded scenario, its provenance, its result folder.

use super::failure::Failure;
use crate::forecast::{Every, Tolerance};
use crate::report::{OutFile, Provenance};
use crate::scenario::{Document, Scenario};
use crate::units::{Dimension, parse};
use std::path::{Path, PathBuf};

/// Name of the scenario file without its folder.
pub fn file_name(path: &Path) -> String {
    path.file_name().map_or_else(|| path.display().to_string(), |name| name.to_string_lossy().into_owned())
}

/// Where results go.
pub fn target(output: Option<&Path>, file: &Path) -> PathBuf {
    output.map_or_else(|| Path::new("results").join(file.file_stem().unwrap_or(file.as_os_str())), Path::to_owned)
}

/// A path as it is shown.
pub fn shown(path: &Path) -> String {
    path.display().to_string()
}

/// A quantity given on the command line.
pub fn quantity(text: &str, dimension: Dimension, option: &str, atmospheric_psia: f64) -> Result<f64, Failure> {
    parse(text, dimension, atmospheric_psia).map_err(|e| Failure::Usage(format!("{option} \"{text}\": {e}")))
}

/// The scenario's text as a file of the result.
pub fn scenario_copy(document: &Document, name: &str, taken: &[OutFile]) -> OutFile {
    let clash = name == "manifest.json" || taken.iter().any(|f| f.path == name);
    let path = if clash { format!("scenario-{name}") } else { name.to_owned() };
    OutFile::new(path, document.text().as_bytes().to_vec())
}

/// Where a result of `scenario` comes from.
pub fn provenance(scenario: &Scenario, file: &Path) -> Provenance {
    Provenance {
        title: scenario.title.clone(),
        case: scenario.case.clone(),
        units: scenario.units,
        scenario_name: file_name(file),
        sha256: scenario.sha256.clone(),
        version: env!("CARGO_PKG_VERSION").to_owned(),
        settings: settings(scenario),
    }
}

/// Everything that shaped the result besides the file itself, defaults included.
fn settings(scenario: &Scenario) -> Vec<(String, String)> {
    let field = &scenario.field;
    let mut list = Vec::new();
    let mut add = |key: String, value: String| list.push((key, value));
    for set in &scenario.settings {
        let (key, value) = set.split_once('=').unwrap_or((set, ""));
        add(format!("set {}", key.trim()), value.trim().to_owned());
    }
    for file in &scenario.files {
        add(format!("file {}", file.path), format!("sha256 {}", file.sha256));
    }
    let every = match field.period.every {
        Every::Month => "month",
        Every::Quarter => "quarter",
        Every::Year => "year",
    };
    add("period".to_owned(), format!("{} to {} by {every}", field.period.start, field.period.end));
    let tolerance = match field.tolerance {
        Tolerance::Normal => "normal",
        Tolerance::Tight => "tight",
        Tolerance::Reference => "reference",
    };
    add("numerics.tolerance".to_owned(), tolerance.to_owned());
    add("atmospheric_pressure_psia".to_owned(), scenario.atmospheric_pressure_psia.to_string());
    add("standard_pressure_psia".to_owned(), field.fluid.standard_pressure_psia.to_string());
    let standard_degf = field.fluid.standard_temperature_degr - crate::units::constants::DEGF_TO_DEGR;
    add(
        "standard_temperature_degf".to_owned(),
        format!("{standard_degf:.4}").trim_end_matches('0').trim_end_matches('.').to_owned(),
    );
    let bubble = field.fluid.bubble_point_psia.map_or("from the correlation".to_owned(), |_| "measured".to_owned());
    add("fluid.bubble_point".to_owned(), bubble);
    add("tank.water.model".to_owned(), format!("{:?}", field.tank.water_model).to_lowercase());
    for well in &field.wells {
        add(format!("well.{}.tubing.method", well.name), well.tubing.method.name().to_owned());
        add(format!("well.{}.inflow.method", well.name), format!("{:?}", well.inflow.method).to_lowercase());
        add(format!("well.{}.inflow.future", well.name), format!("{:?}", well.inflow.future).to_lowercase());
    }
    list
}
