//! `edge-WELL`: the edge of natural flow against water cut, with the way of the well over it.

use super::axes::{Panel, Span, dashed, fitted, headings, legend, legend_height, mark};
use super::paint::text_width;
use super::rates::title;
use super::style::{Dash, GRID, INK, Look, Mark, QUIET, look};
use super::{Anchor, Colour, Drawing};
use crate::report::human;
use crate::report::labels::{Dimension, Label, label};
use crate::report::{Provenance, gas_text, line_text};
use crate::study::{Edge, EdgeLine, Gas, Stand, WellEdge};

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
        no_flow(&mut d, &panel, own, pressure, pressure.of(well.top_psia));
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
    let mut curves: Vec<Vec<(f64, f64)>> = well.lines.iter().flat_map(EdgeLine::branches).collect();
    curves.extend(well.way.iter().map(|way| way.stands.iter().map(on_the_map).collect()));
    for point in curves.iter_mut().flatten() {
        *point = panel.at((point.0, pressure.of(point.1)));
    }
    let mut words = Words { panel: &panel, curves, taken: Vec::new() };
    draw_way(&mut d, &mut words, well, pressure);
    draw_seen(&mut d, &mut words, well, pressure);
    d
}

fn on_the_map(stand: &Stand) -> (f64, f64) {
    (stand.moment.water_cut, stand.moment.reservoir_pressure_psia)
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
    let gas = match well.lines.first().map(|line| line.of.gas) {
        Some(Gas::Given(_)) => "a given gas-oil ratio at every pressure".to_owned(),
        Some(gas) => gas_text(gas, provenance.units),
        None => String::new(),
    };
    let beyond = well.forecast_ends_psia.map_or_else(String::new, |psia| {
        format!(
            "; below {} {} the tank depletes on without injection",
            human::number(pressure.of(psia), 0),
            pressure.text
        )
    });
    let given = well.lines.iter().any(|l| matches!(l.of.gas, Gas::Given(_)));
    let other = if given && well.way.is_some() { "; the forecast has a ratio of its own" } else { "" };
    format!("{}, {gas}{beyond}{other}", well.method)
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
        entry(d, &|d, x| mark(d, (x + 17.0, y), Mark::Square, 4.0, QUIET), "test or survey");
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
fn no_flow(d: &mut Drawing, panel: &Panel, own: &EdgeLine, pressure: Label, top: f64) {
    // Each border of no flow, from below upwards.
    let stretches = |edge: &Edge| -> Vec<(f64, f64)> {
        let mut list = vec![(panel.y.low, edge.lowest().map_or(top, |p| pressure.of(p.pressure_psia)))];
        let gaps = edge.gaps_psia().into_iter().rev();
        list.extend(gaps.map(|(low, high)| (pressure.of(low), high.map_or(top, |p| pressure.of(p)))));
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
        panel.draw_mark(d, (water_cut, pressure.of(reservoir_psia)), look, 7.0);
    }
}

fn draw_seen(d: &mut Drawing, words: &mut Words, well: &WellEdge, pressure: Label) {
    for verdict in &well.seen {
        let seen = &verdict.seen;
        let at = words.panel.at((seen.water_cut, pressure.of(seen.reservoir_pressure_psia)));
        if seen.flowed {
            ring(d, at);
        } else {
            cross(d, at);
        }
        words.taken.push((at.0 - 6.0, at.1 - 6.0, at.0 + 6.0, at.1 + 6.0));
    }
    for verdict in well.seen.iter().filter(|_| well.seen.len() <= MOST_NAMES) {
        let seen = &verdict.seen;
        let at = words.panel.at((seen.water_cut, pressure.of(seen.reservoir_pressure_psia)));
        words.write(d, at, fitted(&seen.label, 12.0, 160.0));
    }
}

/// The way of the well, with a small mark at each new year and its two ends called by name.
fn draw_way(d: &mut Drawing, words: &mut Words, well: &WellEdge, pressure: Label) {
    let Some(way) = &well.way else { return };
    let panel = words.panel;
    let at = |stand: &Stand| (on_the_map(stand).0, pressure.of(on_the_map(stand).1));
    panel.draw_line(d, way.stands.iter().map(at), WAY);
    for stand in way.stands.iter().filter(|s| s.moment.date.month() == 1 && s.moment.date.day() == 1) {
        panel.draw_mark(d, at(stand), WAY, 3.0);
    }
    let (Some(first), Some(last)) = (way.stands.first(), way.stands.last()) else { return };
    panel.draw_mark(d, at(first), WAY, 5.0);
    panel.draw_mark(d, at(last), Look { mark: Mark::Diamond, ..WAY }, 6.0);
    let end = match &way.end {
        Some(end) => format!("{}: ends, {}", human::short_month(end.date), end.reason.text()),
        None => format!("{}: still flows", human::short_month(last.moment.date)),
    };
    words.write(d, panel.at(at(last)), end);
    words.write(d, panel.at(at(first)), human::short_month(first.moment.date));
}

/// A box: left, top, right, bottom.
type Frame = (f64, f64, f64, f64);

/// Writes texts beside marks so that no curve runs through them.
struct Words<'a> {
    panel: &'a Panel,
    /// In pixels.
    curves: Vec<Vec<(f64, f64)>>,
    taken: Vec<Frame>,
}

impl Words<'_> {
    /// A text beside a mark, on a white ground where there is no free place.
    fn write(&mut self, d: &mut Drawing, (x, y): (f64, f64), text: String) {
        let width = text_width(&text, 12.0);
        let frame = |(dx, dy): (f64, f64)| -> Frame {
            let left = if dx > 0.0 { x + dx } else { x + dx - width };
            (left - 3.0, y + dy - 8.0, left + width + 3.0, y + dy + 8.0)
        };
        let panel = self.panel;
        let inside = |f: &Frame| f.0 > panel.left && f.2 < panel.right && f.1 > panel.top && f.3 < panel.bottom;
        let crossings =
            |f: &Frame| self.curves.iter().filter(|c| c.windows(2).any(|s| runs_through(s[0], s[1], f))).count();
        let apart = |f: &Frame, g: &Frame| f.2 < g.0 || g.2 < f.0 || f.3 < g.1 || g.3 < f.1;
        let unwritten = |f: &Frame| self.taken.iter().all(|g| apart(f, g));
        let downs = [0.0, 16.0, -16.0, 28.0, -28.0];
        let places: Vec<Frame> = downs.into_iter().flat_map(|dy| [(14.0, dy), (-14.0, dy)]).map(frame).collect();
        let allowed = places.iter().filter(|f| inside(f) && unwritten(f));
        let best = allowed.map(|f| (crossings(f), *f)).min_by_key(|(count, _)| *count);
        let (count, chosen) = best.unwrap_or_else(|| (1, frame((14.0, 0.0))));
        if count > 0 {
            let (left, top, right, bottom) = chosen;
            d.area(vec![(left, top), (right, top), (right, bottom), (left, bottom)], [255, 255, 255]);
        }
        self.taken.push(chosen);
        d.text((chosen.0 + 3.0, 0.5 * (chosen.1 + chosen.3)), 12.0, Anchor::Left, INK, text);
    }
}

/// Whether a segment touches a box, looked at every few pixels.
fn runs_through(a: (f64, f64), b: (f64, f64), f: &Frame) -> bool {
    let steps = ((a.0 - b.0).hypot(a.1 - b.1) / 3.0).ceil().max(1.0);
    (0..=steps as u32).map(|i| f64::from(i) / steps).any(|s| {
        let (x, y) = (a.0 + s * (b.0 - a.0), a.1 + s * (b.1 - a.1));
        x > f.0 && x < f.2 && y > f.1 && y < f.3
    })
}
