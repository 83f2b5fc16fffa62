//! From the tree of one case to the data of a forecast.

use super::checks;
use super::events::{self, EventRead};
use super::problem::{Location, Problem};
use super::read_line;
use super::read_tank;
use super::read_wells;
use super::reader::{FileUsed, Reader};
use super::section::Section;
use super::tree::{self, Node, Table};
use crate::fault::Fault;
use crate::forecast::{Change, ChangeSpec, Every, Field, FieldSpec, InjectedFluid, PeriodSpec, RunError};
use crate::units::UnitSystem;
use jiff::civil::Date;
use std::path::Path;

/// What the reading of one case gives, problems included.
pub(super) struct Resolved {
    pub units: UnitSystem,
    pub atmospheric_pressure_psia: f64,
    /// Holds placeholders where there are problems.
    pub field: FieldSpec,
    pub files: Vec<FileUsed>,
    /// The tree after each change, and the path of what it changed.
    pub changed: Vec<(Table, String)>,
    pub problems: Vec<Problem>,
}

/// Reads and checks a tree to which case and settings are already applied.
pub(super) fn resolve(root: &Table, case: Option<&Node>, folder: &Path, text: &str) -> Resolved {
    let mut reader = Reader::new(folder, f64::NAN);
    let top = Section::root(root);
    reader.atmospheric_pressure_psia = read_tank::atmospheric_pressure_psia(&mut reader, &top);
    let atmospheric_pressure_psia = reader.atmospheric_pressure_psia;
    if top.has("title") {
        reader.text(&top, "title");
    }
    let units = read_tank::units(&mut reader, &top);
    let period = read_tank::period(&mut reader, &top);
    let (fluid, onsets) = read_tank::fluid(&mut reader, &top);
    let water_injected = injects_water(root);
    let tank_section = reader.section(&top, "tank");
    let tank = read_tank::tank(&mut reader, &tank_section, water_injected, period.as_ref().map(|p| p.start));
    let lines: Vec<_> =
        reader.sections(&top, "line").iter().map(|section| read_line::line(&mut reader, section)).collect();
    let wells: Vec<_> = reader
        .sections(&top, "well")
        .iter()
        .map(|section| read_wells::well(&mut reader, section, tank.pressure_psia, &lines))
        .collect();
    let injectors: Vec<_> =
        reader.sections(&top, "injector").iter().map(|section| read_wells::injector(&mut reader, section)).collect();
    let tolerance = read_tank::tolerance(&mut reader, &top);
    reader.finish(&top);

    let mut faults = checks::fluid(&fluid, atmospheric_pressure_psia);
    faults.extend(period.iter().flat_map(checks::period));
    // Dates are not held against a period that is wrong itself.
    let period = period.filter(|period| period.start < period.end);
    faults.extend(checks::tank(&tank, &fluid, atmospheric_pressure_psia));
    for (i, well) in wells.iter().enumerate() {
        faults.extend(checks::well(&format!("well[{i}]"), well, period.as_ref(), &tank, atmospheric_pressure_psia));
    }
    for (i, line) in lines.iter().enumerate() {
        let absolute = |fault: Fault| fault.under(&format!("line[{i}]"));
        faults.extend(line.check().into_iter().map(absolute));
    }
    for (i, injector) in injectors.iter().enumerate() {
        faults.extend(checks::injector(
            &format!("injector[{i}]"),
            injector,
            period.as_ref(),
            atmospheric_pressure_psia,
        ));
    }
    let named = |list: &str, i: usize, name: &str| (format!("{list}[{i}]"), name.to_owned());
    let mut names: Vec<_> = wells.iter().enumerate().map(|(i, well)| named("well", i, &well.name)).collect();
    names.extend(lines.iter().enumerate().map(|(i, line)| named("line", i, &line.name)));
    names.extend(injectors.iter().enumerate().map(|(i, injector)| named("injector", i, &injector.name)));
    faults.extend(checks::duplicate_names(&names));
    let located = faults.iter().map(|fault| problem_of(fault, root)).collect::<Vec<_>>();
    reader.problems.extend(located);

    let mut events = events::read(&mut reader, &top);
    if let Some(case) = case {
        events.extend(events::read(&mut reader, &Section::of(case, "case")));
    }
    let mut changed = Vec::new();
    // A calendar that could not be read is a problem already; any other lets the events be looked at all the same.
    let stand_in =
        PeriodSpec { start: Date::constant(1900, 1, 1), end: Date::constant(2301, 1, 1), every: Every::Month };
    let period = period.unwrap_or(stand_in);
    let mut field = FieldSpec { period, fluid, tank, wells, lines, injectors, changes: Vec::new(), onsets, tolerance };
    apply_events(events, root, &mut reader, &mut field, &mut changed, text);
    normalise(&mut field);
    Resolved { units, atmospheric_pressure_psia, field, files: reader.files, changed, problems: reader.problems }
}

/// Whether there is a water injector, as far as the tree tells.
fn injects_water(root: &Table) -> bool {
    root.tables("injector").iter().any(|node| {
        node.table().and_then(|table| table.get("fluid")).and_then(|entry| entry.node.text()) == Some("water")
    })
}

/// A start that has passed is no start any more.
fn normalise(field: &mut FieldSpec) {
    let first = field.period.start;
    for well in &mut field.wells {
        well.start = well.start.filter(|start| *start > first);
    }
    for injector in &mut field.injectors {
        injector.start = injector.start.filter(|start| *start > first);
    }
    for change in &mut field.changes {
        match &mut change.change {
            Change::Well(_, well) => well.start = well.start.filter(|start| *start > first),
            Change::Injector(_, injector) => injector.start = injector.start.filter(|start| *start > first),
            Change::Line(..) | Change::Tank(_) => {}
        }
    }
}

/// Turns events into changes: each takes the settings that earlier ones on the same name left.
fn apply_events(
    mut events: Vec<EventRead>,
    root: &Table,
    reader: &mut Reader,
    field: &mut FieldSpec,
    changed: &mut Vec<(Table, String)>,
    text: &str,
) {
    events.sort_by_key(|event| event.on);
    events::note_conflicts(&events, reader);
    let atmospheric_pressure_psia = reader.atmospheric_pressure_psia;
    let mut current = root.clone();
    for event in &events {
        if event.on < field.period.start || event.on >= field.period.end {
            reader.note(
                Problem::new(
                    event.on_at.clone(),
                    format!("the event lies outside the period {} to {}", field.period.start, field.period.end),
                )
                .label("a day from period.start up to the day before period.end is expected"),
            );
        }
        let Some((path, index)) = events::apply(event, &mut current, reader) else { continue };
        let mut again = Reader::new(&reader.folder, atmospheric_pressure_psia);
        let top = Section::root(&current);
        let water_injected = field.injectors.iter().any(|injector| injector.fluid == InjectedFluid::Water);
        let (change, faults) = match event.list {
            "well" => {
                let Some(node) = current.tables("well").get(index) else { continue };
                let spec =
                    read_wells::well(&mut again, &Section::of(node, "well"), field.tank.pressure_psia, &field.lines);
                let faults = checks::well(&path, &spec, Some(&field.period), &field.tank, atmospheric_pressure_psia);
                (Change::Well(index, Box::new(spec)), faults)
            }
            "line" => {
                let Some(node) = current.tables("line").get(index) else { continue };
                (Change::Line(index, read_line::line(&mut again, &Section::of(node, "line"))), Vec::new())
            }
            "injector" => {
                let Some(node) = current.tables("injector").get(index) else { continue };
                let spec = read_wells::injector(&mut again, &Section::of(node, "injector"));
                let faults = checks::injector(&path, &spec, Some(&field.period), atmospheric_pressure_psia);
                (Change::Injector(index, spec), faults)
            }
            _ => {
                let section = again.section(&top, "tank");
                let spec = read_tank::tank(&mut again, &section, water_injected, Some(field.period.start));
                let faults = checks::tank(&spec, &field.fluid, atmospheric_pressure_psia);
                (Change::Tank(Box::new(spec)), faults)
            }
        };
        again.problems.extend(faults.iter().map(|fault| problem_of(fault, &current)));
        // What is wrong without the event is reported already.
        let new: Vec<_> = again.problems.into_iter().filter(|problem| !reader.problems.contains(problem)).collect();
        reader.problems.extend(new);
        field.changes.push(ChangeSpec { on: event.on, name: event.name.clone(), text: event.text(text), change });
        changed.push((current.clone(), path));
    }
}

/// Finds the place of a fault in the tree: the value at its path, or the nearest table above it.
///
/// A clash of several values has their paths with bars between them: what was set beside the file is to blame
/// first, then the first that is there.
pub(super) fn problem_of(fault: &Fault, root: &Table) -> Problem {
    let there: Vec<&str> = fault.key.split('|').filter(|path| tree::locate_exactly(root, path)).collect();
    let places: Vec<Location> = there.iter().filter_map(|path| tree::locate(root, path)).collect();
    let setting = places.iter().find(|place| matches!(place, Location::Setting { .. })).cloned();
    let first = fault.key.split('|').next().unwrap_or("");
    let at = setting
        .or_else(|| places.first().cloned())
        .or_else(|| tree::locate(root, first))
        .unwrap_or(Location::File(0..0));
    let mut problem = Problem::new(at, fault.message.clone());
    problem.help = fault.help.clone();
    problem
}

/// Faults that the layers of the physics find when they are built from these data.
///
/// Keys are full paths (`well[0].tubing.survey`, `change[2].tubing.diameter` for the new settings of a dated event).
pub(super) fn physics_faults(field: &FieldSpec, units: UnitSystem) -> Vec<Fault> {
    let faults = match Field::new(field) {
        Ok(built) => built.change_faults(),
        Err(RunError::Input(faults)) => faults,
        Err(other) => vec![Fault::new("tank", other.to_string())],
    };
    let told = |text: &str| units.tell(text);
    faults.into_iter().map(|f| Fault { message: told(&f.message), help: f.help.as_deref().map(told), ..f }).collect()
}
