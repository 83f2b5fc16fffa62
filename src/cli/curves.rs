//! `wane curves`: inflow and tubing curves on a date.

use super::args::CurvesArgs;
use super::context::{provenance, quantity, scenario_copy, shown};
use super::failure::Failure;
use super::screen::{Screen, Side};
use super::{Done, output};
use crate::forecast::{CurveSet, RunError, WellCurves, curves_on};
use crate::report::folder::ResultFolder;
use crate::report::human::number;
use crate::report::labels::label;
use crate::report::{
    OutFile, Provenance, ReportError, curves_csv, curves_json, curves_picture, depth_picture, file_stem,
    models_picture, picture_files, traverse_csv, traverse_picture,
};
use crate::scenario::Document;
use crate::units::Dimension;

/// Rows of a curve on the screen.
const ROWS: usize = 12;

pub fn run(args: &CurvesArgs) -> Result<Done, Failure> {
    let file = &args.common.file;
    let document = Document::load(file)?;
    let scenario = document.resolve(args.case.as_deref(), &args.common.set)?;
    let mut rates = Vec::new();
    for text in &args.rate {
        let rate = quantity(text, Dimension::LiquidRate, "--rate", scenario.atmospheric_pressure_psia)?;
        if rate <= 0.0 {
            return Err(Failure::Usage(format!("--rate \"{text}\": a rate above zero is expected")));
        }
        rates.push(rate);
    }
    let folder = args.output.as_deref().map(ResultFolder::prepare).transpose()?;
    let curves = curves_on(&scenario.field, args.on, &rates, args.all_models).map_err(|error| match &error {
        RunError::Input(faults) if faults.iter().any(|f| f.key == "on") => {
            let text: Vec<String> = faults
                .iter()
                .map(|f| f.help.as_ref().map_or_else(|| f.message.clone(), |help| format!("{} ({help})", f.message)))
                .collect();
            Failure::Usage(format!("--on: {}", text.join("; ")))
        }
        _ => Failure::of_run(error, &scenario, None),
    })?;
    let provenance = provenance(&scenario, file);
    if let Some(folder) = folder {
        let mut files = files(&curves, &provenance, args.all_models)?;
        files.push(scenario_copy(&document, &provenance.scenario_name, &files));
        folder.commit(files, &provenance)?;
    }
    if args.csv {
        output::bytes(&curves_csv(&curves, scenario.units, args.all_models)?)?;
    } else if args.common.json {
        output::bytes(&curves_json(&curves, &provenance)?)?;
    } else if !args.common.quiet {
        output::text(&text(&curves, &provenance, args.output.as_deref().map(shown), !rates.is_empty()))?;
    }
    Ok(Done::Well)
}

fn files(curves: &[WellCurves], provenance: &Provenance, all_models: bool) -> Result<Vec<OutFile>, ReportError> {
    let mut files = vec![
        OutFile::new("curves.csv", curves_csv(curves, provenance.units, all_models)?),
        OutFile::new("traverse.csv", traverse_csv(curves, provenance.units)?),
    ];
    let mut taken = Vec::new();
    for well in curves.chunk_by(|a, b| a.well == b.well) {
        let Some(first) = well.first() else { continue };
        let stem = file_stem(&first.well, &mut taken);
        let named: Vec<CurveSet> =
            well.iter().map(|c| CurveSet { label: format!("method {}", c.method), ..c.curve.clone() }).collect();
        let drawing = curves_picture(&first.well, "Inflow and tubing curves", &named, provenance);
        files.extend(picture_files(&format!("curves-{stem}"), &drawing)?);
        let all: Vec<&WellCurves> = well.iter().collect();
        if all.len() > 1 {
            files.extend(picture_files(&format!("models-{stem}"), &models_picture(&first.well, &all, provenance))?);
        }
        files.extend(picture_files(&format!("depth-{stem}"), &depth_picture(first, provenance))?);
        let drawing = traverse_picture(&first.well, &all, provenance);
        files.extend(picture_files(&format!("traverse-{stem}"), &drawing)?);
    }
    Ok(files)
}

fn text(curves: &[WellCurves], provenance: &Provenance, folder: Option<String>, all_points: bool) -> String {
    let units = provenance.units;
    let (rate, pressure) = (label(units, Dimension::LiquidRate), label(units, Dimension::Pressure));
    let difference = label(units, Dimension::PressureDifference);
    let mut s = Screen::default();
    match &provenance.case {
        Some(case) => s.title(&format!("{} · case {case}", provenance.title)),
        None => s.title(&provenance.title),
    }
    for well in curves {
        let curve = &well.curve;
        s.heading(&format!("{}, {}, {}", well.well, curve.date, well.method));
        let point = curve.operating_point.map_or_else(
            || "does not flow".to_owned(),
            |(q, p)| {
                format!(
                    "flows {} {} at {} {}",
                    number(rate.of(q), 1),
                    rate.text,
                    number(pressure.of(p), 1),
                    pressure.text
                )
            },
        );
        s.paragraph(
            2,
            0,
            &format!(
                "reservoir {} {}, {point}, flow margin {} {}",
                number(pressure.of(curve.reservoir_psia), 1),
                pressure.text,
                number(difference.of(curve.flow_margin_psi), 2),
                difference.text
            ),
        );
        let step = if all_points { 1 } else { curve.points.len().div_ceil(ROWS).max(1) };
        let rows: Vec<Vec<String>> = curve
            .points
            .iter()
            .step_by(step)
            .map(|&(q, inflow, tubing)| {
                vec![
                    number(rate.of(q), 1),
                    number(pressure.of(inflow), 1),
                    number(pressure.of(tubing), 1),
                    number(difference.of(inflow - tubing), 1),
                ]
            })
            .collect();
        let names = [
            format!("liquid rate, {}", rate.text),
            format!("inflow, {}", pressure.text),
            format!("tubing, {}", pressure.text),
            format!("difference, {}", difference.text),
        ];
        let header: Vec<(&str, Side)> = names.iter().map(|n| (n.as_str(), Side::Right)).collect();
        s.table(&header, &rows);
    }
    if let Some(folder) = folder {
        s.line("");
        s.paragraph(0, 2, &format!("Results: {folder} (curves.csv, traverse.csv, pictures)"));
    }
    s.finish()
}
