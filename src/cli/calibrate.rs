//! `wane calibrate`: tubing models against what was measured in the wells.

use super::args::CalibrateArgs;
use super::calibrate_text::calibrate_text;
use super::context::{provenance, scenario_copy, shown};
use super::failure::Failure;
use super::{Done, output};
use crate::report::folder::ResultFolder;
use crate::report::{
    OutFile, Provenance, ReportError, calibration_csv, calibration_json, calibration_picture, file_stem, lines_toml,
    picture_files, stations_csv,
};
use crate::scenario::Document;
use crate::study::calibrate::{WellCalibration, calibrate};
use std::path::{Path, PathBuf};

pub fn run(args: &CalibrateArgs) -> Result<Done, Failure> {
    let file = &args.common.file;
    let document = Document::load(file)?;
    let scenario = document.resolve(args.case.as_deref(), &args.common.set)?;
    for name in &args.well {
        if scenario.field.wells.iter().all(|well| well.name != *name) {
            let known: Vec<&str> = scenario.field.wells.iter().map(|well| well.name.as_str()).collect();
            return Err(Failure::Usage(format!("--well {name}: there is no such well (wells: {})", known.join(", "))));
        }
    }
    let target = target(args.output.as_deref(), file);
    let folder = ResultFolder::prepare(&target)?;
    let wells: Vec<WellCalibration> =
        calibrate(&scenario.field, &args.well).map_err(|e| Failure::of_run(e, &scenario, None))?;
    if wells.iter().all(|well| well.measurements.is_empty()) {
        return Err(Failure::Usage(
            "nothing to calibrate to: no well has a [[well.flowing_survey]], nor a separator test with a gauge \
             (wellhead, gor and flowing)"
                .to_owned(),
        ));
    }
    let provenance = provenance(&scenario, file);
    let mut files = files(&wells, &provenance)?;
    files.push(scenario_copy(&document, &provenance.scenario_name, &files));
    folder.commit(files, &provenance)?;
    if args.common.json {
        output::bytes(&calibration_json(&wells, &provenance)?)?;
    } else if !args.common.quiet {
        output::text(&calibrate_text(&wells, &provenance, Some(&shown(&target))))?;
    }
    Ok(Done::Well)
}

/// A folder beside that of the forecast, which stays.
fn target(output: Option<&Path>, file: &Path) -> PathBuf {
    output.map_or_else(
        || {
            let mut name = file.file_stem().unwrap_or(file.as_os_str()).to_owned();
            name.push("-calibration");
            Path::new("results").join(name)
        },
        Path::to_owned,
    )
}

fn files(wells: &[WellCalibration], provenance: &Provenance) -> Result<Vec<OutFile>, ReportError> {
    let mut files = vec![
        OutFile::new("calibration.json", calibration_json(wells, provenance)?),
        OutFile::new("calibration.csv", calibration_csv(wells, provenance.units)?),
        OutFile::new("stations.csv", stations_csv(wells, provenance.units)?),
        OutFile::new("lines.toml", lines_toml(wells, provenance.units).into_bytes()),
    ];
    let mut taken = Vec::new();
    for well in wells.iter().filter(|well| !well.measurements.is_empty()) {
        let stem = file_stem(&well.well, &mut taken);
        files.extend(picture_files(&format!("calibration-{stem}"), &calibration_picture(well, provenance))?);
    }
    Ok(files)
}
