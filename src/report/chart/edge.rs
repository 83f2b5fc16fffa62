//! `edge-WELL`: the edge of natural flow against water cut, with the way of the well over it.

use super::axes::{Panel, Span, dashed, fitted, headings, legend, legend_height, mark};
use super::paint::text_width;
use super::rates::title;
use super::style::{Dash, GRID, INK, Look, Mark, QUIET, look};
use super::{Anchor, Colour, Drawing};
use crate::report::human;
use crate::report::labels::{Dimension, Label, label};
use crate::report::{Provenance, gas_text, line_text};
use crate::study::{Edge, EdgeLine, WellEdge};

const WIDTH: u32 = 960;
/// Where the well does not flow at its own line pressure.
const NO_FLOW: Colour = [241, 236, 228];
const WAY: Look = Look { colour: INK, width: 3.0, dash: Dash::Solid, mark: Mark::Disc };
/// Points seen that are called by name.
const MOST_NAMES: usize = 8;

/// The edge map of one well.
pub fn edge_picture(well: &WellEdge, provenance: &Provenance) -> Drawing {
    let pressure = label(provenance.units, Dimension::Pressure);
    let entries: Vec<(String, Look, bool)> =
        well.lines.iter().map(|line| (line_text(line, provenance.units), look_of(well, line), false)).collect();
    let top = 82.0 + legend_height(WIDTH, &entries) + 24.0;
    let mut d = Drawing::new(WIDTH, (top + 560.0) as u32);
    let height = f64::from(d.size().1);
    let subtitle = "Edge of natural flow: the lowest reservoir pressure at which the well still flows, by water cut";
    headings(&mut d, &format!("{} · {}", well.well, title(provenance)), subtitle, &provenance.footer());
    d.text((24.0, 68.0), 13.0, Anchor::Left, QUIET, fitted(&rule(well, provenance), 13.0, f64::from(WIDTH) - 48.0));
    legend(&mut d, 82.0, &entries);
    key(&mut d, well, top - 16.0);

    let seen = well.seen.iter().map(|v| v.seen.reservoir_pressure_psia);
    let highest = seen.chain([well.top_psia]).fold(0.0, f64::max);
    let panel = Panel {
        left: 84.0,
        top: top + 28.0,
        right: f64::from(WIDTH) - 30.0,
        bottom: height - 72.0,
        // A way without water runs along the axis: it must be seen.
        x: Span::new(-0.02, 1.0),
        y: Span::from_zero(pressure.of(highest), false),
    };
    if let Some(own) = well.own() {
        no_flow(&mut d, &panel, own, pressure);
    }
    panel.draw_y(&mut d, &format!("Reservoir pressure, {}", pressure.text), 8, true);
    panel.draw_x(&mut d, "Water cut, fraction of liquid", 10);
    d.line(vec![panel.at((0.0, panel.y.low)), panel.at((0.0, panel.y.high))], 1.0, GRID);
    panel.draw_frame(&mut d);
    for line in &well.lines {
        for branch in line.branches() {
            panel.draw_line(&mut d, branch.iter().map(|p| (p.0, pressure.of(p.1))), look_of(well, line));
        }
    }
    draw_tests(&mut d, &panel, well, pressure);
    draw_seen(&mut d, &panel, well, pressure);
    draw_way(&mut d, &panel, well, pressure);
    d
}

/// Colour by line pressure; dash by line pressure, or by string and gas rule where there are several; the well's own is the broad one.
fn look_of(well: &WellEdge, line: &EdgeLine) -> Look {
    let pressures: Vec<f64> = distinct(well.lines.iter().map(|l| l.of.line_pressure_psia));
    let index = pressures.iter().position(|p| *p == line.of.line_pressure_psia).unwrap_or(0);
    let mut groups = well.lines.chunk_by(|a, b| (a.of.diameter_in, a.of.gas) == (b.of.diameter_in, b.of.gas));
    let several = groups.clone().count() > 1;
    let group = groups.position(|g| g.iter().any(|l| l.of == line.of)).unwrap_or(0);
    // The first colour is near to that of the track.
    let base = look(index + 1);
    let dash = if several { look(group).dash } else { look(index + 1).dash };
    Look { width: if line.own { 3.4 } else { 2.0 }, dash: if line.own { Dash::Solid } else { dash }, ..base }
}

fn distinct(values: impl Iterator<Item = f64>) -> Vec<f64> {
    let mut list: Vec<f64> = values.collect();
    list.sort_by(f64::total_cmp);
    list.dedup();
    list
}

/// Tubing model and gas-oil ratio in one line.
fn rule(well: &WellEdge, provenance: &Provenance) -> String {
    let pressure = label(provenance.units, Dimension::Pressure);
    let gas = well.lines.first().map_or_else(String::new, |line| gas_text(line.of.gas, provenance.units));
    let beyond = well.forecast_ends_psia.map_or_else(String::new, |psia| {
        format!(
            "; below {} {} the tank depletes on without injection",
            human::number(pressure.of(psia), 0),
            pressure.text
        )
    });
    format!("{}, {gas}{beyond}", well.method)
}

/// What the marks mean.
fn key(d: &mut Drawing, well: &WellEdge, y: f64) {
    let mut x = 24.0;
    let mut entry = |d: &mut Drawing, draw: &dyn Fn(&mut Drawing, f64), text: &str| {
        draw(d, x);
        d.text((x + 42.0, y), 12.5, Anchor::Left, INK, text);
        x += 42.0 + text_width(text, 12.5) + 24.0;
    };
    let patch = |d: &mut Drawing, x: f64| {
        d.area(vec![(x, y - 7.0), (x + 34.0, y - 7.0), (x + 34.0, y + 7.0), (x, y + 7.0)], NO_FLOW);
    };
    entry(d, &patch, "no natural flow at its own line pressure");
    if well.way.is_some() {
        entry(d, &|d, x| dashed(d, &[(x, y), (x + 34.0, y)], WAY.width, WAY.dash, WAY.colour), "forecast");
    }
    if !well.tests.is_empty() {
        entry(d, &|d, x| mark(d, (x + 17.0, y), Mark::Square, 4.0, QUIET), "test");
    }
    if well.seen.iter().any(|v| !v.seen.flowed) {
        entry(d, &|d, x| cross(d, (x + 17.0, y)), "seen dead");
    }
    if well.seen.iter().any(|v| v.seen.flowed) {
        entry(d, &|d, x| ring(d, (x + 17.0, y)), "seen flowing");
    }
}

fn cross(d: &mut Drawing, (x, y): (f64, f64)) {
    for (width, colour) in [(5.0, [255, 255, 255]), (2.2, INK)] {
        d.line(vec![(x - 5.0, y - 5.0), (x + 5.0, y + 5.0)], width, colour);
        d.line(vec![(x - 5.0, y + 5.0), (x + 5.0, y - 5.0)], width, colour);
    }
}

fn ring(d: &mut Drawing, at: (f64, f64)) {
    mark(d, at, Mark::Disc, 5.5, INK);
    mark(d, at, Mark::Disc, 2.0, [255, 255, 255]);
}

/// Fills the side of the own line on which the well does not flow.
fn no_flow(d: &mut Drawing, panel: &Panel, own: &EdgeLine, pressure: Label) {
    // Each border of no flow, from below upwards.
    let stretches = |edge: &Edge| -> Vec<(f64, f64)> {
        let mut list = vec![(panel.y.low, edge.lowest().map_or(panel.y.high, |p| pressure.of(p.pressure_psia)))];
        let gaps = edge.gaps_psia().into_iter().rev();
        list.extend(gaps.map(|(low, high)| (pressure.of(low), high.map_or(panel.y.high, |p| pressure.of(p)))));
        list
    };
    for pair in own.points.windows(2) {
        let (left, right) = (stretches(&pair[0]), stretches(&pair[1]));
        // Where a gap opens or closes the two points lie within a pixel.
        let left = if left.len() == right.len() { left } else { right.clone() };
        for (a, b) in left.iter().zip(&right) {
            let at = |cut: f64, value: f64| panel.at((cut, value.clamp(panel.y.low, panel.y.high)));
            let (x0, x1) = (pair[0].water_cut, pair[1].water_cut);
            d.area(vec![at(x0, a.0), at(x1, b.0), at(x1, b.1), at(x0, a.1)], NO_FLOW);
        }
    }
    if let Some(last) = own.points.last() {
        for (low, high) in stretches(last) {
            let at = |cut: f64, value: f64| panel.at((cut, value));
            let (x0, x1) = (last.water_cut, panel.x.high);
            d.area(vec![at(x0, low), at(x1, low), at(x1, high), at(x0, high)], NO_FLOW);
        }
    }
}

fn draw_tests(d: &mut Drawing, panel: &Panel, well: &WellEdge, pressure: Label) {
    for &(_, reservoir_psia, water_cut) in &well.tests {
        let look = Look { colour: QUIET, mark: Mark::Square, ..WAY };
        panel.draw_mark(d, (water_cut, pressure.of(reservoir_psia)), look, 5.0);
    }
}

fn draw_seen(d: &mut Drawing, panel: &Panel, well: &WellEdge, pressure: Label) {
    let mut taken: Vec<(f64, f64, f64)> = Vec::new();
    for verdict in &well.seen {
        let seen = &verdict.seen;
        let (x, y) = panel.at((seen.water_cut, pressure.of(seen.reservoir_pressure_psia)));
        if seen.flowed {
            ring(d, (x, y))
        } else {
            cross(d, (x, y))
        }
        if well.seen.len() > MOST_NAMES {
            continue;
        }
        let text = fitted(&seen.label, 12.0, 160.0);
        let width = text_width(&text, 12.0);
        let left = if x + 11.0 + width > panel.right { x - 11.0 - width } else { x + 11.0 };
        let free = |y: f64| taken.iter().all(|t| (t.2 - y).abs() > 13.0 || t.0 > left + width || t.1 < left);
        let y = [y, y - 14.0, y + 14.0, y - 28.0, y + 28.0].into_iter().find(|y| free(*y)).unwrap_or(y);
        taken.push((left, left + width, y));
        d.text((left, y), 12.0, Anchor::Left, INK, text);
    }
}

/// The way of the well, with a small mark at each new year and its two ends called by name.
fn draw_way(d: &mut Drawing, panel: &Panel, well: &WellEdge, pressure: Label) {
    let Some(way) = &well.way else { return };
    let at = |stand: &crate::study::Stand| (stand.moment.water_cut, pressure.of(stand.moment.reservoir_pressure_psia));
    panel.draw_line(d, way.stands.iter().map(at), WAY);
    for stand in way.stands.iter().filter(|s| s.moment.date.month() == 1 && s.moment.date.day() == 1) {
        panel.draw_mark(d, at(stand), WAY, 3.0);
    }
    let (Some(first), Some(last)) = (way.stands.first(), way.stands.last()) else { return };
    panel.draw_mark(d, at(first), WAY, 5.0);
    panel.draw_mark(d, at(last), Look { mark: Mark::Diamond, ..WAY }, 6.0);
    let start = human::short_month(first.moment.date);
    let end = match &way.end {
        Some(end) => format!("{}: end of natural flow, {}", human::short_month(end.date), end.reason.text()),
        None => format!("{}: still flows", human::short_month(last.moment.date)),
    };
    // Beside each other where the way is short.
    let (from, to) = (panel.at(at(first)), panel.at(at(last)));
    let apart = (from.1 - to.1).abs() > 16.0;
    words(d, panel, (from.0, if apart { from.1 } else { from.1 - 14.0 }), start);
    words(d, panel, (to.0, if apart { to.1 } else { to.1 + 6.0 }), end);
}

/// A text beside a mark on a white ground, since lines may run through it.
fn words(d: &mut Drawing, panel: &Panel, (x, y): (f64, f64), text: String) {
    let width = text_width(&text, 12.0);
    let left = if x + 14.0 + width > panel.right { x - 14.0 - width } else { x + 14.0 };
    let ground =
        [(left - 3.0, y - 8.0), (left + width + 3.0, y - 8.0), (left + width + 3.0, y + 8.0), (left - 3.0, y + 8.0)];
    d.area(ground.to_vec(), [255, 255, 255]);
    d.text((left, y), 12.0, Anchor::Left, INK, text);
}
