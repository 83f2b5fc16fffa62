//! The maps of all wells of a field.

use super::branch::{lost, pressures};
use super::gas::{ByPressure, Gas};
use super::line::{Edge, LEFT_PSI, Place, Subject};
use super::{EdgeLine, EdgeMap, EdgeOptions, LineOf, Seen, Stand, Verdict, Way, WellEdge};
use crate::fault::Fault;
use crate::forecast::{Field, FieldSpec, RunError, WellTrack, tracks, wells_after_events};
use crate::inflow::{Coefficient, FutureRule, InflowTest, RateBasis};
use crate::tubing::{Tubing, TubingSection};
use crate::well::{KeptLine, WellModel};
use rayon::prelude::*;

/// Water cuts of every line.
const WATER_CUTS: [f64; 23] = [
    0.0, 0.05, 0.1, 0.15, 0.2, 0.25, 0.3, 0.35, 0.4, 0.45, 0.5, 0.55, 0.6, 0.65, 0.7, 0.75, 0.8, 0.85, 0.9, 0.925,
    0.95, 0.975, 0.99,
];
/// Line pressures beside the well's own, as parts of it.
const BESIDE_OWN: [f64; 2] = [0.6, 1.5];
/// Width to which the end of a line is located.
const WATER_CUT_WIDTH: f64 = 1e-3;
/// Change of a place between two water cuts, parts of the top of the map, from which on a water cut is set between them; and the width
/// that is left.
const FAR: f64 = 0.05;
/// See [`FAR`].
const FAR_WIDTH: f64 = 0.01;
/// Accuracy of the tubing's pressure on a string asked for, psi: that of a forecast.
const ACCURACY_PSI: f64 = 0.02;

/// The edge map of every well.
///
/// # Errors
/// [`RunError`] where the field cannot be prepared, or a string that was asked for cannot be (key `diameter`). A forecast that stops with an
/// error leaves a map without it.
pub fn edge_map(spec: &FieldSpec, options: &EdgeOptions) -> Result<EdgeMap, RunError> {
    let field = Field::new(spec)?;
    let (ways, no_forecast) = match options.forecast.then(|| tracks(&field)) {
        Some(Ok(ways)) => (Some(ways), None),
        Some(Err(error)) => (None, Some(error.to_string())),
        None => (None, None),
    };
    let models = match &ways {
        Some(ways) => ways.iter().map(|w| w.model.clone()).collect(),
        None => wells_after_events(&field)?,
    };
    let wells = models
        .iter()
        .enumerate()
        .map(|(w, model)| well_edge(spec, &field, model, ways.as_ref().map(|ways| &ways[w]), options))
        .collect::<Result<Vec<_>, RunError>>()?;
    Ok(EdgeMap { start: spec.period.start, wells, no_forecast })
}

fn well_edge(
    spec: &FieldSpec,
    field: &Field,
    model: &WellModel,
    way: Option<&WellTrack>,
    options: &EdgeOptions,
) -> Result<WellEdge, RunError> {
    let offer = match way {
        Some(way) => ByPressure::Forecast(&way.tank, way.end_pressure_psia),
        None => ByPressure::Dissolved { fluid: field.fluid(), tank: field.tank(), start: field.start() },
    };
    let seen: Vec<&Seen> =
        options.seen.iter().filter(|s| s.well.as_ref().is_none_or(|name| *name == model.spec.name)).collect();
    let tests = tests(model);
    let highest = tests.iter().map(|t| t.1).chain(seen.iter().map(|s| s.reservoir_pressure_psia));
    let on_the_way = way.iter().flat_map(|w| &w.moments).map(|m| m.reservoir_pressure_psia);
    let top_psia = highest.chain(on_the_way).fold(spec.tank.pressure_psia, f64::max);

    let kept = way.and_then(|way| way.line.as_ref());
    let own_psia = kept.map_or(model.spec.line_pressure_psia, KeptLine::pressure_psia);
    let all = lines_of(own_psia, way.is_some(), options);
    let subject = |of: &LineOf, own: bool| -> Result<Subject, RunError> {
        Ok(Subject {
            well: with_line(model, of, spec.tank.temperature_degf)?,
            fluid: field.fluid(),
            offer: &offer,
            gas: of.gas,
            shared: kept.filter(|_| own || (of.line_pressure_psia - own_psia).abs() < 1e-6 * own_psia),
            datum_temperature_degf: spec.tank.datum_tvd_ft.map(|_| spec.tank.temperature_degf),
            top_psia,
        })
    };
    let subjects = all.iter().map(|(of, own)| subject(of, *own)).collect::<Result<Vec<_>, RunError>>()?;
    let grid: Vec<(usize, f64)> =
        (0..subjects.len()).flat_map(|i| WATER_CUTS.into_iter().map(move |cut| (i, cut))).collect();
    let points: Vec<Edge> = grid.par_iter().map(|&(i, cut)| subjects[i].edge(cut, &[])).collect();
    let lines: Vec<EdgeLine> = all
        .par_iter()
        .zip(&subjects)
        .zip(points.par_chunks(WATER_CUTS.len()))
        .map(|(((of, own), subject), points)| finished(*of, *own, subject, points.to_vec()))
        .collect();

    let own = all.iter().position(|(_, own)| *own).unwrap_or(0);
    let forecast_ends_psia = way.filter(|_| lines[own].of.gas == Gas::Forecast).map(|w| w.end_pressure_psia);
    let forecast = way.is_some();
    let way = way.filter(|w| !w.moments.is_empty()).map(|way| followed(way, &subjects[own], &lines[own]));
    let verdicts = seen.into_par_iter().map(|seen| verdict(seen, &subjects[own])).collect();
    Ok(WellEdge {
        well: model.spec.name.clone(),
        method: model.tubing.method().name(),
        top_psia,
        forecast_ends_psia,
        notes: notes(spec, model, kept.is_some(), forecast),
        lines,
        way,
        tests,
        seen: verdicts,
    })
}

/// Every combination asked for, and which of them is the well's own.
fn lines_of(own_psia: f64, forecast: bool, options: &EdgeOptions) -> Vec<(LineOf, bool)> {
    let mut pressures = options.line_pressures_psia.clone();
    if pressures.is_empty() {
        pressures.extend(BESIDE_OWN.map(|part| part * own_psia));
    }
    let rising = |list: &mut Vec<f64>| {
        list.sort_by(f64::total_cmp);
        list.dedup_by(|a, b| (*a - *b).abs() < 1e-6 * *b);
    };
    pressures.retain(|p| (p - own_psia).abs() >= 1e-6 * own_psia);
    pressures.push(own_psia);
    rising(&mut pressures);
    let mut gors = options.gors_scf_stb.clone();
    rising(&mut gors);
    let gases: Vec<Gas> = match (gors.is_empty(), forecast) {
        (false, _) => gors.into_iter().map(Gas::Given).collect(),
        (true, true) => vec![Gas::Forecast],
        (true, false) => vec![Gas::Dissolved],
    };
    let mut diameters = options.diameters_in.clone();
    rising(&mut diameters);
    let strings: Vec<Option<f64>> = std::iter::once(None).chain(diameters.into_iter().map(Some)).collect();
    let mut list = Vec::new();
    for (g, gas) in gases.into_iter().enumerate() {
        for &diameter_in in &strings {
            for &line_pressure_psia in &pressures {
                let own = g == 0 && diameter_in.is_none() && (line_pressure_psia - own_psia).abs() < 1e-6 * own_psia;
                list.push((LineOf { line_pressure_psia, diameter_in, gas }, own));
            }
        }
    }
    list
}

/// The well with a line's pressure and string.
fn with_line(model: &WellModel, of: &LineOf, temperature_degf: f64) -> Result<WellModel, RunError> {
    let mut well = model.clone();
    well.spec.line_pressure_psia = of.line_pressure_psia;
    // A well that sees none of the tank's water is asked all the same what it would do with some.
    if well.spec.water_factor <= 0.0 {
        well.spec.water_factor = 1.0;
    }
    if let Some(diameter_in) = of.diameter_in {
        let roughness_in = well.spec.tubing.sections.first().map_or(0.0006, |s| s.roughness_in);
        let whole = TubingSection { to_md_ft: f64::INFINITY, diameter_in, roughness_in, inner_pipe_in: 0.0 };
        well.spec.tubing.sections = vec![whole];
        well.tubing = Tubing::new(&well.spec.tubing, well.spec.perforations_md_ft, temperature_degf, ACCURACY_PSI)
            .map_err(|faults| {
                RunError::Input(faults.into_iter().map(|f| Fault { key: "diameter".to_owned(), ..f }).collect())
            })?;
    }
    Ok(well)
}

/// A line with the water cuts located at which a window or a gap opens or closes.
fn finished(of: LineOf, own: bool, subject: &Subject, points: Vec<Edge>) -> EdgeLine {
    let mut all = Vec::with_capacity(2 * points.len());
    for point in points {
        if let Some(before) = all.last().cloned() {
            between(subject, &before, &point, &mut all);
        }
        all.push(point);
    }
    let no_flow_from =
        all.iter().rposition(|p| !p.places.is_empty()).map_or(Some(0), |i| (i + 1 < all.len()).then_some(i + 1));
    EdgeLine { of, own, no_flow_from: no_flow_from.map(|i| all[i].water_cut), points: all }
}

/// Adds what lies between two points of which one has more places, or whose places lie far apart.
fn between(subject: &Subject, low: &Edge, high: &Edge, all: &mut Vec<Edge>) {
    let (before, after) = (pressures(low), pressures(high));
    let width = high.water_cut - low.water_cut;
    let same = before.len() == after.len();
    let far = |(a, b): (&f64, &f64)| (a - b).abs() > FAR * subject.top_psia;
    let wanted = if same { before.iter().zip(&after).any(far) && width > FAR_WIDTH } else { width > WATER_CUT_WIDTH };
    if !wanted {
        return;
    }
    // What vanishes is looked for where it was seen last.
    let (more, fewer) = if before.len() > after.len() { (&before, &after) } else { (&after, &before) };
    let also: Vec<f64> = match lost(more, fewer) {
        Some((first, 2)) => vec![0.5 * (more[first] + more[first + 1])],
        _ => Vec::new(),
    };
    let middle = subject.edge(0.5 * (low.water_cut + high.water_cut), &also);
    between(subject, low, &middle, all);
    all.push(middle.clone());
    between(subject, &middle, high, all);
}

fn followed(way: &WellTrack, subject: &Subject, line: &EdgeLine) -> Way {
    let last = way.moments.len().saturating_sub(1);
    let stands: Vec<Stand> = way
        .moments
        .par_iter()
        .enumerate()
        .map(|(i, moment)| {
            let pressure = moment.reservoir_pressure_psia;
            let known = if i == 0 || i == last { None } else { straight(&line.points, moment.water_cut) };
            let edge = known.unwrap_or_else(|| subject.edge(moment.water_cut, &[]));
            // A window that has only just closed is too narrow to be bracketed.
            let touches = || subject.margin_psi(pressure, moment.water_cut).abs() <= LEFT_PSI;
            let nearest = edge.nearest(pressure).map(|p| p.pressure_psia);
            let border_psia = if i == last && touches() { Some(pressure) } else { nearest };
            let side = if edge.flows(pressure) { 1.0 } else { -1.0 };
            let pressure_margin_psi = border_psia.map(|border| side * (pressure - border).abs());
            Stand { moment: *moment, border_psia, pressure_margin_psi }
        })
        .collect();
    let days_left = match (way.moments.first(), way.moments.last()) {
        (Some(first), Some(last)) => last.days - first.days,
        _ => 0.0,
    };
    Way { stands, end: way.end, flowing_at_end: way.flowing_at_end, days_left }
}

/// The edge straight between the two points around a water cut; `None` where they do not go on each other.
fn straight(points: &[Edge], water_cut: f64) -> Option<Edge> {
    let above = points.get(points.partition_point(|p| p.water_cut <= water_cut))?;
    let below = points.iter().rfind(|p| p.water_cut <= water_cut)?;
    let share = (water_cut - below.water_cut) / (above.water_cut - below.water_cut);
    let mix = |a: f64, b: f64| a + share * (b - a);
    let pairs = below.places.iter().zip(&above.places);
    (below.flows_at_top == above.flows_at_top && below.places.len() == above.places.len()).then(|| Edge {
        water_cut,
        flows_at_top: below.flows_at_top,
        places: pairs.map(|(a, b)| Place { pressure_psia: mix(a.pressure_psia, b.pressure_psia), ..*a }).collect(),
    })
}

fn verdict(seen: &Seen, own: &Subject) -> Verdict {
    let mut well = own.well.clone();
    well.spec.line_pressure_psia = seen.line_pressure_psia.unwrap_or(well.spec.line_pressure_psia);
    let gas = seen.gor_scf_stb.map_or(own.gas, Gas::Given);
    let shared = own.shared.filter(|_| seen.line_pressure_psia.is_none());
    let there = Subject { well, gas, shared, ..*own };
    Verdict {
        seen: seen.clone(),
        flow_margin_psi: there.margin_psi(seen.reservoir_pressure_psia, seen.water_cut),
        edge: there.edge(seen.water_cut, &[]),
    }
}

fn tests(model: &WellModel) -> Vec<(Option<jiff::civil::Date>, f64, f64)> {
    let tests: &[InflowTest] = match &model.spec.inflow.coefficient {
        Coefficient::Tests(tests) => tests,
        _ => &[],
    };
    let surveys = &model.spec.flowing_surveys;
    let surveyed = surveys.iter().filter_map(|s| Some((Some(s.on), s.reservoir_psia?, s.water_cut)));
    // A survey and a test of one day at one pressure are one point.
    let mut points: Vec<_> = tests.iter().map(|t| (t.on, t.reservoir_psia, t.water_cut)).collect();
    for point in surveyed {
        if !points.contains(&point) {
            points.push(point);
        }
    }
    points
}

fn notes(spec: &FieldSpec, model: &WellModel, settled: bool, forecast: bool) -> Vec<String> {
    let mut list = Vec::new();
    let well = &model.spec;
    if let Some(line) = &well.shared_line {
        list.push(if settled {
            format!("on the shared line {line} its own line of the map has the other wells' rates of its end of natural flow; the others are at fixed pressures")
        } else {
            format!("the shared line {line} is taken at its lowest pressure: without a forecast the other wells' rates are not known")
        });
    }
    if well.choke.is_some() {
        list.push("drawn with its choke".to_owned());
    }
    let limits: Vec<&str> = [
        (well.minimum_rate_stb_d.is_some(), "minimum rate"),
        (well.minimum_flowing_pressure_psia.is_some(), "minimum flowing pressure"),
        (well.maximum_water_cut.is_some(), "highest water cut"),
        (well.maximum_gor_scf_stb.is_some(), "highest gas-oil ratio"),
    ]
    .into_iter()
    .filter_map(|(set, name)| set.then_some(name))
    .collect();
    if !limits.is_empty() {
        list.push(format!("its own limits ({}) are no part of the edge and may end it earlier", limits.join(", ")));
    }
    if spec.changes.iter().any(|c| c.name == well.name) {
        list.push("drawn under the settings at its end of natural flow, after dated events".to_owned());
    }
    if well.inflow.basis == RateBasis::Oil {
        list.push("its inflow is that of oil alone: at a higher water cut more liquid comes in".to_owned());
    }
    if well.loss.yearly > 0.0 {
        list.push(if forecast {
            "drawn with the productivity that is left at its end of natural flow".to_owned()
        } else {
            "drawn without the productivity that it loses in a forecast".to_owned()
        });
    }
    if well.inflow.future == FutureRule::Mobility {
        list.push(
            "its inflow follows the oil mobility of the tank at each pressure, whatever the water cut of the map"
                .to_owned(),
        );
    }
    list
}
