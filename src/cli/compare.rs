//! `wane compare`: every case side by side.

use super::args::CompareArgs;
use super::context::{provenance, scenario_copy, shown, target};
use super::failure::Failure;
use super::forecast::{run_one, warn_failed};
use super::{Done, compare_text, output};
use crate::report::folder::{ResultFolder, manifest_json};
use crate::report::{
    OutFile, ReportError, compare_csv, compare_json, compare_picture, file_stem, forecast_files, picture_files, sanity,
};
use crate::scenario::{Document, Scenario};
use crate::study::{CaseOutcome, Comparison};
use rayon::prelude::*;

pub fn run(args: &CompareArgs) -> Result<Done, Failure> {
    let file = &args.common.file;
    let document = Document::load(file)?;
    let mut scenarios = vec![("base".to_owned(), document.resolve(None, &args.common.set)?)];
    for name in document.case_names() {
        let scenario = document.resolve(Some(&name), &args.common.set)?;
        scenarios.push((name, scenario));
    }
    let folder = ResultFolder::prepare(&target(args.output.as_deref(), file))?;

    let cases = scenarios
        .par_iter()
        .map(|(name, scenario)| {
            let forecast = run_one(scenario).map_err(|e| Failure::of_run(e, scenario, Some(name)))?;
            Ok(CaseOutcome { name: name.clone(), forecast })
        })
        .collect::<Result<Vec<_>, Failure>>()?;
    let comparison = Comparison { cases };

    let base = provenance(&scenarios[0].1, file);
    let mut files = case_files(&comparison, &scenarios, file)?;
    files.push(OutFile::new("compare.csv", compare_csv(&comparison, base.units)?));
    files.push(OutFile::new("compare.json", compare_json(&comparison, &base)?));
    let laid: Vec<_> = comparison.cases.iter().map(|c| (c.name.as_str(), &c.forecast)).collect();
    files.extend(picture_files("compare", &compare_picture(&laid, &base))?);
    files.push(scenario_copy(&document, &base.scenario_name, &files));
    folder.commit(files, &base)?;

    if args.common.json {
        output::bytes(&compare_json(&comparison, &base)?)?;
    } else if !args.common.quiet {
        let at = shown(&target(args.output.as_deref(), file));
        output::text(&compare_text(&comparison, &base, Some(&at)))?;
    }
    let mut done = Done::Well;
    for case in &comparison.cases {
        let failed = sanity(&case.forecast);
        if !failed.is_empty() {
            warn_failed(&failed, &format!("case {}: ", case.name));
            done = Done::Doubtful;
        }
    }
    Ok(done)
}

/// The results of each case in a folder of its own.
fn case_files(
    comparison: &Comparison,
    scenarios: &[(String, Scenario)],
    file: &std::path::Path,
) -> Result<Vec<OutFile>, ReportError> {
    let mut taken = Vec::new();
    let folders: Vec<String> = comparison.cases.iter().map(|case| file_stem(&case.name, &mut taken)).collect();
    let work: Vec<_> = comparison.cases.iter().zip(scenarios).zip(folders).collect();
    let lists: Vec<Vec<OutFile>> = work
        .into_par_iter()
        .map(|((case, (_, scenario)), folder)| {
            let provenance = provenance(scenario, file);
            let mut files = forecast_files(&case.forecast, &provenance)?;
            files.push(OutFile::new("manifest.json", manifest_json(&files, &provenance)?));
            Ok(files.into_iter().map(|f| OutFile::new(format!("{folder}/{}", f.path), f.bytes)).collect())
        })
        .collect::<Result<_, ReportError>>()?;
    Ok(lists.into_iter().flatten().collect())
}
