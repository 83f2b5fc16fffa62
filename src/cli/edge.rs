//! `wane edge`: the edge of natural flow.

use super::args::EdgeArgs;
use super::context::{file_name, provenance, quantity, scenario_copy, shown};
use super::edge_text::edge_text;
use super::failure::Failure;
use super::{Done, output, seen};
use crate::forecast::RunError;
use crate::report::folder::ResultFolder;
use crate::report::{
    OutFile, Provenance, ReportError, edge_csv, edge_json, edge_picture, file_stem, picture_files, track_csv,
};
use crate::scenario::{Document, Scenario};
use crate::study::{EdgeMap, EdgeOptions, edge_map};
use crate::units::Dimension;
use rayon::prelude::*;

/// More lines than one picture can show apart.
const MOST_LINES: usize = 24;

pub fn run(args: &EdgeArgs) -> Result<Done, Failure> {
    let file = &args.common.file;
    let document = Document::load(file)?;
    let scenario = document.resolve(args.case.as_deref(), &args.common.set)?;
    let options = options(args, &scenario)?;
    let folder = args.output.as_deref().map(ResultFolder::prepare).transpose()?;
    let map = edge_map(&scenario.field, &options).map_err(|error| match &error {
        RunError::Input(faults) if faults.iter().any(|f| f.key == "diameter") => {
            let text: Vec<String> = faults.iter().map(|f| scenario.units.tell(&f.message)).collect();
            Failure::Usage(format!("--diameter: {}", text.join("; ")))
        }
        _ => Failure::of_run(error, &scenario, None),
    })?;
    let mut provenance = provenance(&scenario, file);
    provenance.settings.extend(settings(args));
    if let Some(folder) = folder {
        let mut files = files(&map, &provenance)?;
        if let Some(path) = &args.seen {
            // As it was read: the map can be checked against it later.
            files.push(OutFile::new("seen.csv", seen::bytes(path)?));
        }
        files.push(scenario_copy(&document, &provenance.scenario_name, &files));
        folder.commit(files, &provenance)?;
    }
    if args.csv {
        output::bytes(&edge_csv(&map, provenance.units)?)?;
    } else if args.common.json {
        output::bytes(&edge_json(&map, &provenance)?)?;
    } else if !args.common.quiet {
        output::text(&edge_text(&map, &provenance, args.output.as_deref().map(shown).as_deref()))?;
    }
    Ok(Done::Well)
}

fn options(args: &EdgeArgs, scenario: &Scenario) -> Result<EdgeOptions, Failure> {
    let all = |texts: &[String], dimension, option: &str, (low, high): (f64, f64)| {
        texts
            .iter()
            .map(|text| {
                let value = quantity(text, dimension, option, scenario.atmospheric_pressure_psia)?;
                if value > low && value <= high {
                    return Ok(value);
                }
                let unit = scenario.units.unit(dimension);
                let (low, high) = (unit.to_output(low), unit.to_output(high));
                Err(Failure::Usage(format!(
                    "{option} \"{text}\": a value between {low:.0} and {high:.0} {} is expected",
                    unit.label
                )))
            })
            .collect::<Result<Vec<f64>, Failure>>()
    };
    let options = EdgeOptions {
        line_pressures_psia: all(&args.line_pressure, Dimension::Pressure, "--line-pressure", (5.0, 5_000.0))?,
        diameters_in: all(&args.diameter, Dimension::Diameter, "--diameter", (0.3, 20.0))?,
        gors_scf_stb: all(&args.gor, Dimension::GasOilRatio, "--gor", (0.0, 200_000.0))?,
        forecast: !args.no_forecast,
        seen: args.seen.as_deref().map_or_else(|| Ok(Vec::new()), |path| seen::read(path, scenario))?,
    };
    let lines = (options.line_pressures_psia.len().max(2) + 1)
        * (options.diameters_in.len() + 1)
        * options.gors_scf_stb.len().max(1);
    if lines > MOST_LINES {
        return Err(Failure::Usage(format!(
            "{lines} lines for each well are asked for, of which a map shows at most {MOST_LINES}: give fewer of --line-pressure, \
             --diameter, --gor"
        )));
    }
    Ok(options)
}

/// What was asked for, for the manifest.
fn settings(args: &EdgeArgs) -> Vec<(String, String)> {
    let mut list: Vec<(String, String)> = Vec::new();
    for (option, texts) in [("line-pressure", &args.line_pressure), ("diameter", &args.diameter), ("gor", &args.gor)] {
        if !texts.is_empty() {
            list.push((format!("edge {option}"), texts.join(", ")));
        }
    }
    list.push(("edge forecast".to_owned(), if args.no_forecast { "no" } else { "yes" }.to_owned()));
    list.extend(args.seen.as_deref().map(|path| ("edge seen".to_owned(), file_name(path))));
    list
}

fn files(map: &EdgeMap, provenance: &Provenance) -> Result<Vec<OutFile>, ReportError> {
    let mut files = vec![
        OutFile::new("edge.csv", edge_csv(map, provenance.units)?),
        OutFile::new("edge.json", edge_json(map, provenance)?),
    ];
    if map.wells.iter().any(|w| w.way.is_some()) {
        files.push(OutFile::new("track.csv", track_csv(map, provenance.units)?));
    }
    let mut taken = Vec::new();
    let stems: Vec<String> = map.wells.iter().map(|w| format!("edge-{}", file_stem(&w.well, &mut taken))).collect();
    let pictures: Vec<[OutFile; 2]> = map
        .wells
        .par_iter()
        .zip(&stems)
        .map(|(well, stem)| picture_files(stem, &edge_picture(well, provenance)))
        .collect::<Result<_, _>>()?;
    files.extend(pictures.into_iter().flatten());
    Ok(files)
}
