//! `wane forecast`: the main job.

use super::args::ForecastArgs;
use super::context::{provenance, scenario_copy, shown, target};
use super::failure::Failure;
use super::{Done, forecast_text, output};
use crate::forecast::{EventKind, Forecast, RunError};
use crate::report::folder::ResultFolder;
use crate::report::{forecast_files, sanity, summary_json};
use crate::scenario::{Document, Scenario, data_doubts};
use crate::study::calibrate::tubing_doubts;
use crate::study::{add_spread, rule_ends, store_rule_ends};
use crate::units::UnitSystem;

pub fn run(args: &ForecastArgs) -> Result<Done, Failure> {
    let file = &args.common.file;
    let document = Document::load(file)?;
    let scenario = document.resolve(args.case.as_deref(), &args.common.set)?;
    let folder = ResultFolder::prepare(&target(args.output.as_deref(), file))?;

    let mut forecast = run_one(&scenario).map_err(|e| Failure::of_run(e, &scenario, None))?;
    if !args.no_spread {
        let (spread, rules) = rayon::join(|| add_spread(&scenario.field, &mut forecast), || rule_ends(&scenario.field));
        spread.map_err(|e| Failure::of_run(e, &scenario, None))?;
        store_rule_ends(&scenario.field, &rules, &mut forecast);
    }
    let provenance = provenance(&scenario, file);
    let mut files = forecast_files(&forecast, &provenance)?;
    files.push(scenario_copy(&document, &provenance.scenario_name, &files));
    folder.commit(files, &provenance)?;

    if args.common.json {
        output::bytes(&summary_json(&forecast, &provenance)?)?;
    } else if !args.common.quiet {
        let at = shown(&target(args.output.as_deref(), file));
        output::text(&forecast_text(&forecast, &provenance, Some(&at)))?;
    }
    let failed = sanity(&forecast);
    if failed.is_empty() {
        return Ok(Done::Well);
    }
    if args.common.json || args.common.quiet {
        warn_failed(&failed, "");
    }
    Ok(Done::Doubtful)
}

/// Runs a scenario; the doubts about its data come before those about the result.
pub fn run_one(scenario: &Scenario) -> Result<Forecast, RunError> {
    let mut forecast = crate::forecast::run_with_curves(&scenario.field)?;
    let mut doubts = data_doubts(scenario);
    doubts.extend(tubing_doubts(&scenario.field)?);
    doubts.extend(forecast.doubts.iter().filter(|d| !doubts.contains(d)).cloned().collect::<Vec<_>>());
    forecast.doubts = doubts;
    tell(&mut forecast, scenario.units);
    Ok(forecast)
}

/// Puts the sentences of the engine, which speaks oilfield units, into the scenario's units.
fn tell(forecast: &mut Forecast, units: UnitSystem) {
    for doubt in &mut forecast.doubts {
        doubt.seen = units.tell(&doubt.seen);
    }
    for well in &mut forecast.wells {
        well.inflow_text = units.tell(&well.inflow_text);
    }
    // The text of a scheduled event is the user's own.
    for event in forecast.events.iter_mut().filter(|e| e.kind != EventKind::Scheduled) {
        event.note = units.tell(&event.note);
    }
}

/// Failed checks on standard error, where the summary does not show them.
pub fn warn_failed(failed: &[String], before: &str) {
    use std::io::Write as _;
    let mut err = anstream::stderr();
    for text in failed {
        writeln!(err, "\u{1b}[1;31mcheck failed\u{1b}[0m: {before}{text}").ok();
    }
}
