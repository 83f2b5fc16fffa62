//! What `edge` prints: for each well the edge by water cut, and where the well stands against it.

use super::screen::{Screen, Side};
use crate::report::human::{month, number, span};
use crate::report::labels::{Dimension, Label, UnitSystem, label};
use crate::report::{CAUTION, Provenance, gas_text, line_text};
use crate::study::{Edge, EdgeLine, EdgeMap, Stand, Way, WellEdge};

/// Water cuts on the screen.
const ROWS: [f64; 12] = [0.0, 0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 0.95, 0.99];

/// The map for people; `folder` is where the files are.
pub fn edge_text(map: &EdgeMap, provenance: &Provenance, folder: Option<&str>) -> String {
    let units = provenance.units;
    let mut s = Screen::default();
    match &provenance.case {
        Some(case) => s.title(&format!("{} · case {case}", provenance.title)),
        None => s.title(&provenance.title),
    }
    let what = "Edge of natural flow: the lowest reservoir pressure at which a well still flows, by water cut";
    s.paragraph(0, 0, &format!("{what} · {}", provenance.scenario_name));
    if let Some(why) = &map.no_forecast {
        s.paragraph(0, 0, &units.tell(&format!("Without a forecast, which failed: {why}")));
    }
    for well in &map.wells {
        s.heading(&format!("{}, {}", well.well, well.method));
        for group in well.lines.chunk_by(|a, b| (a.of.diameter_in, a.of.gas) == (b.of.diameter_in, b.of.gas)) {
            lines(&mut s, well, group, units);
        }
        if let Some(way) = &well.way {
            stands(&mut s, way, units);
        }
        seen(&mut s, well, units);
        for note in &well.notes {
            s.paragraph(2, 2, &format!("Note: {note}."));
        }
    }
    if let Some(folder) = folder {
        let track = if map.wells.iter().any(|w| w.way.is_some()) { "track.csv, " } else { "" };
        s.line("");
        s.paragraph(0, 2, &format!("Results: {folder} (edge.csv, edge.json, {track}a picture for each well)"));
    }
    s.line("");
    s.quiet(CAUTION);
    s.finish()
}

/// The lines of one string and one gas rule beside each other.
fn lines(s: &mut Screen, well: &WellEdge, group: &[EdgeLine], units: UnitSystem) {
    let (pressure, diameter) = (label(units, Dimension::Pressure), label(units, Dimension::Diameter));
    let Some(first) = group.first() else { return };
    let string = first.of.diameter_in.map_or_else(
        || "its own string".to_owned(),
        |d| format!("a string of {:.3} {}", diameter.of(d), diameter.text),
    );
    let top = number(pressure.of(well.top_psia), 0);
    s.paragraph(2, 2, &format!("{string}, {}, {}; up to {top}", pressure.text, gas_text(first.of.gas, units)));
    let names: Vec<String> = group
        .iter()
        .map(|line| {
            let bare = EdgeLine {
                of: crate::study::LineOf { diameter_in: None, gas: crate::study::Gas::Forecast, ..line.of },
                ..line.clone()
            };
            line_text(&bare, units)
        })
        .collect();
    let mut header = vec![("water cut", Side::Right)];
    header.extend(names.iter().map(|n| (n.as_str(), Side::Right)));
    let mut gaps = false;
    let mut rows: Vec<Vec<String>> = Vec::new();
    for cut in ROWS {
        let mut row = vec![format!("{:.0} %", 100.0 * cut)];
        for line in group {
            let point = line.points.iter().find(|p| (p.water_cut - cut).abs() < 1e-9);
            let text = point.map_or_else(|| "-".to_owned(), |p| cell(p, well.top_psia, pressure));
            gaps |= point.is_some_and(|p| !p.gaps_psia().is_empty());
            row.push(text);
        }
        rows.push(row);
    }
    let limits = group
        .iter()
        .map(|line| line.no_flow_from.map_or_else(|| "-".to_owned(), |cut| format!("{:.1} %", 100.0 * cut)));
    rows.push(std::iter::once("no flow from".to_owned()).chain(limits).collect());
    s.table(&header, &rows);
    if gaps {
        s.paragraph(2, 2, "In brackets: pressures above the edge at which it does not flow, there being too little gas; the widest such gap.");
    }
}

/// The edge, and the widest gap above it.
fn cell(edge: &Edge, top_psia: f64, pressure: Label) -> String {
    let at = |psia: f64| number(pressure.of(psia), 0);
    let Some(lowest) = edge.lowest() else { return "-".to_owned() };
    let size = |gap: &(f64, Option<f64>)| gap.1.unwrap_or(top_psia) - gap.0;
    let gap = match edge.gaps_psia().into_iter().max_by(|a, b| size(a).total_cmp(&size(b))) {
        Some((low, Some(high))) => format!("[{}-{}] ", at(low), at(high)),
        Some((low, None)) => format!("[above {}] ", at(low)),
        None => String::new(),
    };
    format!("{gap}{}", at(lowest.pressure_psia))
}

/// Where the well stands now, and how it ends.
fn stands(s: &mut Screen, way: &Way, units: UnitSystem) {
    let Some(first) = way.stands.first() else { return };
    let left = match (&way.end, way.flowing_at_end) {
        (Some(end), _) => format!("{} left, until {} ({})", span(way.days_left), month(end.date), end.reason.text()),
        (None, true) => format!("it still flows at the end of the forecast, {} later", span(way.days_left)),
        (None, false) => "it does not flow at the end of the forecast".to_owned(),
    };
    s.paragraph(2, 2, &format!("At its first flow, {}; {left}.", stand(first, units)));
    if let Some(last) = way.stands.last().filter(|_| way.stands.len() > 1) {
        s.paragraph(2, 2, &format!("At the end, {}.", stand(last, units)));
    }
}

fn stand(stand: &Stand, units: UnitSystem) -> String {
    let (pressure, difference) = (label(units, Dimension::Pressure), label(units, Dimension::PressureDifference));
    let ratio = label(units, Dimension::GasOilRatio);
    let moment = stand.moment;
    let margin = match (stand.pressure_margin_psi, stand.border_psia) {
        (Some(margin), _) if margin.abs() < 0.5 => "on its line".to_owned(),
        (Some(margin), Some(border)) => {
            let side = match (margin > 0.0, moment.reservoir_pressure_psia > border) {
                (true, true) => "above its line",
                (true, false) => "below the gap in its line",
                (false, _) => "on the dead side of its line",
            };
            let distance = difference.of(margin.abs());
            format!("{} {} {side}", number(distance, if distance < 10.0 { 1 } else { 0 }), difference.text)
        }
        _ => "where its line has no point".to_owned(),
    };
    format!(
        "{}: reservoir {} {}, water cut {:.1} %, {} {}, {margin}",
        month(moment.date),
        number(pressure.of(moment.reservoir_pressure_psia), 0),
        pressure.text,
        100.0 * moment.water_cut,
        number(ratio.of(moment.gor_scf_stb), 0),
        ratio.text
    )
}

fn seen(s: &mut Screen, well: &WellEdge, units: UnitSystem) {
    if well.seen.is_empty() {
        return;
    }
    let (pressure, difference) = (label(units, Dimension::Pressure), label(units, Dimension::PressureDifference));
    let rows: Vec<Vec<String>> = well
        .seen
        .iter()
        .map(|v| {
            vec![
                v.seen.label.clone(),
                number(pressure.of(v.seen.reservoir_pressure_psia), 0),
                format!("{:.1} %", 100.0 * v.seen.water_cut),
                cell(&v.edge, well.top_psia, pressure),
                number(difference.of(v.flow_margin_psi), 0),
                if v.seen.flowed { "flowing" } else { "dead" }.to_owned(),
                if v.agrees() { "agrees" } else { "differs" }.to_owned(),
            ]
        })
        .collect();
    let names = [
        format!("reservoir, {}", pressure.text),
        format!("edge, {}", pressure.text),
        format!("flow margin, {}", difference.text),
    ];
    let header = [
        ("seen", Side::Left),
        (names[0].as_str(), Side::Right),
        ("water cut", Side::Right),
        (names[1].as_str(), Side::Right),
        (names[2].as_str(), Side::Right),
        ("it was", Side::Left),
        ("the map", Side::Left),
    ];
    s.table(&header, &rows);
    let agree = well.seen.iter().filter(|v| v.agrees()).count();
    s.paragraph(2, 2, &format!("The map agrees with {agree} of {} points seen.", well.seen.len()));
}
