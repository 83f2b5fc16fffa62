//! `wane fluid`: the property table.

use super::args::FluidArgs;
use super::context::{file_name, quantity, scenario_copy, shown, target};
use super::failure::Failure;
use super::screen::{Screen, Side};
use super::{Done, output};
use crate::fluid::{BlackOil, OilCorrelation, ReservoirFluid};
use crate::report::folder::ResultFolder;
use crate::report::human::{number, significant};
use crate::report::labels::label;
use crate::report::{FluidSheet, OutFile, Provenance, fluid_csv, fluid_json, fluid_picture, picture_files};
use crate::scenario::{Document, FluidScenario};
use crate::units::{Dimension, UnitSystem};

pub fn run(args: &FluidArgs) -> Result<Done, Failure> {
    let file = &args.common.file;
    let document = Document::load(file)?;
    let scenario = document.resolve_fluid(&args.common.set)?;
    let fluid =
        BlackOil::new(&scenario.fluid, scenario.temperature_degf).map_err(|faults| faults_of(&document, faults))?;
    let (low, high) = fluid.pressure_range_psia();
    let mut pressures = Vec::new();
    for text in &args.at {
        let psia = quantity(text, Dimension::Pressure, "--at", scenario.atmospheric_pressure_psia)?;
        if !(low..=high).contains(&psia) {
            return Err(Failure::Usage(format!(
                "--at \"{text}\": the fluid model is used between {} and {} psia",
                number(low, 1),
                number(high, 0)
            )));
        }
        pressures.push(psia);
    }
    let picked = !pressures.is_empty();
    let top = scenario.pressure_psia.unwrap_or(0.0).max(1.2 * fluid.initial_bubble_point_psia()).clamp(low, high);
    if !picked {
        pressures = choice(&fluid, scenario.units, low, top);
    }
    let sheet = sheet(&fluid, &scenario, &pressures, &[]);
    let provenance = provenance(&scenario, &file_name(file));
    if let Some(target_folder) = &args.output {
        let folder = ResultFolder::prepare(target_folder)?;
        // The picture has its own, closer pressures.
        let drawing = fluid_picture(&picture_sheet(&fluid, &scenario, low, top), &provenance);
        let mut files = vec![OutFile::new("fluid.csv", fluid_csv(&sheet, scenario.units)?)];
        files.extend(picture_files("fluid", &drawing)?);
        files.push(scenario_copy(&document, &provenance.scenario_name, &files));
        folder.commit(files, &provenance)?;
    }
    if args.csv {
        output::bytes(&fluid_csv(&sheet, scenario.units)?)?;
    } else if args.common.json {
        output::bytes(&fluid_json(&sheet, &provenance)?)?;
    } else if !args.common.quiet {
        output::text(&text(&sheet, &provenance, args.output.as_deref().map(|o| shown(&target(Some(o), file)))))?;
    }
    Ok(Done::Well)
}

fn faults_of(document: &Document, faults: Vec<crate::fault::Fault>) -> Failure {
    let mut all: Option<crate::scenario::Problems> = None;
    for fault in faults {
        // The tank's temperature is the only key of a fluid's fault that stands elsewhere.
        let table = if fault.key == "temperature" { "tank" } else { "fluid" };
        let found = document.problem_at(&fault.under(table));
        match &mut all {
            None => all = Some(found),
            Some(so_far) => so_far.list.extend(found.list),
        }
    }
    all.map_or_else(|| Failure::Run("the fluid cannot be used".to_owned()), Failure::from)
}

/// Pressures that are round in the written units up to `top`, and the bubble point; psia.
fn choice(fluid: &BlackOil, units: UnitSystem, low: f64, top: f64) -> Vec<f64> {
    let pressure = label(units, Dimension::Pressure);
    let highest = pressure.of(top);
    let steps = [5.0, 10.0, 20.0, 25.0, 50.0, 100.0, 200.0, 250.0, 500.0, 1000.0];
    let step = steps.into_iter().find(|s| highest / s <= 20.0).unwrap_or(2000.0);
    let round = (1..).map(|i| f64::from(i) * step).take_while(|p| *p <= highest + 0.5 * step);
    let mut list: Vec<f64> = round.map(|p| pressure.back(p)).filter(|p| *p >= low).collect();
    let bubble = fluid.initial_bubble_point_psia();
    list.retain(|p| (p - bubble).abs() > 1e-6);
    list.push(bubble);
    list.sort_by(f64::total_cmp);
    list
}

/// Closer pressures, up to the highest of the laboratory's, and with a laboratory's table the correlations beside it.
fn picture_sheet(fluid: &BlackOil, scenario: &FluidScenario, low: f64, top: f64) -> FluidSheet {
    let lab = fluid.lab_rows();
    let top = lab.iter().map(|row| row.pressure_psia).fold(top, f64::max);
    let mut fine: Vec<f64> = (0..=200).map(|i| low + (top - low) * f64::from(i) / 200.0).collect();
    fine.push(fluid.initial_bubble_point_psia());
    fine.sort_by(f64::total_cmp);
    let mut choices = if lab.is_empty() { Vec::new() } else { OilCorrelation::ALL.to_vec() };
    let chosen = scenario.fluid.correlations.oil;
    choices.sort_by_key(|choice| *choice != chosen);
    sheet(fluid, scenario, &fine, &choices)
}

fn sheet(fluid: &BlackOil, scenario: &FluidScenario, pressures: &[f64], choices: &[OilCorrelation]) -> FluidSheet {
    let rows = |fluid: &BlackOil| pressures.iter().map(|&p| fluid.table_row(p)).collect::<Vec<_>>();
    FluidSheet {
        temperature_degf: scenario.temperature_degf,
        bubble_point_psia: fluid.initial_bubble_point_psia(),
        rows: rows(fluid),
        sources: fluid.sources(),
        lab: fluid.lab_rows().to_vec(),
        by_correlation: choices
            .iter()
            .filter_map(|choice| Some((choice.authors(), rows(&fluid.by_correlation(*choice)?))))
            .collect(),
    }
}

fn provenance(scenario: &FluidScenario, name: &str) -> Provenance {
    Provenance {
        title: scenario.title.clone(),
        case: None,
        units: scenario.units,
        scenario_name: name.to_owned(),
        sha256: scenario.sha256.clone(),
        version: env!("CARGO_PKG_VERSION").to_owned(),
        settings: scenario
            .settings
            .iter()
            .filter_map(|s| s.split_once('='))
            .map(|(k, v)| (format!("set {k}"), v.to_owned()))
            .collect(),
    }
}

/// Where the properties come from, a line for each.
fn sources(s: &mut Screen, sheet: &FluidSheet) {
    s.heading("From laboratory or correlation");
    for source in &sheet.sources {
        s.paragraph(2, 2, &format!("{}: {}, {}", source.property, source.from, source.detail));
    }
}

fn text(sheet: &FluidSheet, provenance: &Provenance, folder: Option<String>) -> String {
    let units = provenance.units;
    let (pressure, degrees) = (label(units, Dimension::Pressure), label(units, Dimension::Temperature));
    let mut s = Screen::default();
    s.title(&provenance.title);
    s.paragraph(
        0,
        0,
        &format!(
            "At tank temperature, {} {}; bubble point {} {}: saturated below it, undersaturated above",
            number(degrees.of(sheet.temperature_degf), 1),
            degrees.text,
            number(pressure.of(sheet.bubble_point_psia), 1),
            pressure.text
        ),
    );
    s.line("");
    let columns = FluidSheet::columns(units);
    let header: Vec<(&str, Side)> = columns.iter().map(|(stem, ..)| (*stem, Side::Right)).collect();
    let mut rows = vec![columns.iter().map(|(_, unit, _)| unit.text.to_owned()).collect::<Vec<_>>()];
    for row in &sheet.rows {
        rows.push(
            columns
                .iter()
                .map(|(stem, unit, pick)| match *stem {
                    "pressure" | "rs" => number(unit.of(pick(row)), 1),
                    _ => significant(unit.of(pick(row))),
                })
                .collect(),
        );
    }
    s.table(&header, &rows);
    sources(&mut s, sheet);
    if let Some(folder) = folder {
        s.line("");
        s.paragraph(0, 2, &format!("Results: {folder} (fluid.csv, fluid.svg, fluid.png)"));
    }
    s.finish()
}
