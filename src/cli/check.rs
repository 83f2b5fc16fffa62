//! `wane check`: read, check and doubt without running.

use super::args::CheckArgs;
use super::context::{file_name, provenance};
use super::failure::Failure;
use super::screen::Screen;
use super::{Done, output, summary_text};
use crate::forecast::{Doubt, Field};
use crate::report::doubts_json;
use crate::report::human::month;
use crate::scenario::{Document, Scenario, data_doubts};

pub fn run(args: &CheckArgs) -> Result<Done, Failure> {
    let document = Document::load(&args.common.file)?;
    let mut cases = vec![args.case.clone()];
    if args.case.is_none() {
        cases.extend(document.case_names().into_iter().map(Some));
    }
    let mut first: Option<Scenario> = None;
    let mut doubts: Vec<Doubt> = Vec::new();
    for case in cases {
        let scenario = document.resolve(case.as_deref(), &args.common.set)?;
        Field::new(&scenario.field).map_err(|e| Failure::of_run(e, &scenario, case.as_deref()))?;
        let new: Vec<Doubt> = data_doubts(&scenario).into_iter().filter(|d| !doubts.contains(d)).collect();
        doubts.extend(new);
        first.get_or_insert(scenario);
    }
    let Some(scenario) = first else { return Ok(Done::Well) };
    if args.common.json {
        output::bytes(&doubts_json(&doubts, &provenance(&scenario, &args.common.file))?)?;
    } else if !args.common.quiet {
        output::text(&text(&scenario, &document, &doubts, &file_name(&args.common.file)))?;
    }
    Ok(Done::Well)
}

fn text(scenario: &Scenario, document: &Document, doubts: &[Doubt], file: &str) -> String {
    let mut s = Screen::default();
    s.title(&scenario.title);
    let count = |n: usize, what: &str| format!("{n} {what}{}", if n == 1 { "" } else { "s" });
    let field = &scenario.field;
    s.paragraph(
        0,
        0,
        &format!(
            "{file} can be run: {} to {}, {}, {}, {}, {}",
            month(field.period.start),
            month(field.period.end.yesterday().unwrap_or(field.period.end)),
            count(field.wells.len(), "well"),
            count(field.injectors.len(), "injector"),
            count(field.changes.len(), "dated event"),
            count(document.case_names().len(), "case"),
        ),
    );
    if doubts.is_empty() {
        s.paragraph(0, 0, "No doubts about the data.");
    }
    summary_text::doubts(&mut s, doubts);
    s.finish()
}
