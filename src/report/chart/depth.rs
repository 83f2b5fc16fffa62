//! `depth-WELL`: what flows in the tubing of one well along its depth, quantity by quantity.

use super::axes::{Panel, Span, dashed, fitted, headings, ticks};
use super::paint::text_width;
use super::rates::title;
use super::style::{Dash, FRAME, GRID, INFLOW, INK, Look, Mark, QUIET, TUBING};
use super::{Anchor, Colour, Drawing};
use crate::forecast::WellCurves;
use crate::report::Provenance;
use crate::report::human::{month, number};
use crate::report::labels::{Dimension, Label, label};
use crate::tubing::TraversePoint;

const WIDTH: u32 = 1120;
const TOP: f64 = 122.0;
const BOTTOM: f64 = 640.0;
/// Fills of the gradient's parts.
const GRAVITY: Colour = [178, 198, 218];
const FRICTION: Colour = [232, 176, 130];

const FIRST: Look = Look { colour: INFLOW, width: 2.2, dash: Dash::Solid, mark: Mark::Disc };
const SECOND: Look = Look { colour: TUBING, width: 2.2, dash: Dash::Long, mark: Mark::Disc };

/// One quantity, or two in the same unit.
struct Column {
    title: &'static str,
    unit: &'static str,
    /// Name, values.
    lines: Vec<(&'static str, Vec<f64>)>,
    highest: Option<f64>,
    from_zero: bool,
}

/// Pressure, temperature, holdup, velocities and the parts of the gradient of one well and one model, against depth.
pub fn depth_picture(curves: &WellCurves, provenance: &Provenance) -> Drawing {
    let unit = |dimension| label(provenance.units, dimension);
    let (depth, rate) = (unit(Dimension::Length), unit(Dimension::LiquidRate));
    let mut d = Drawing::new(WIDTH, 720);
    let at = curves.curve.operating_point.map_or_else(
        || "does not flow".to_owned(),
        |(q, _)| format!("{} {} at line pressure", number(rate.of(q), 0), rate.text),
    );
    let subtitle = format!(
        "Along the tubing against true vertical depth in {}: {}, {}, {at}",
        depth.text,
        curves.method,
        month(curves.curve.date)
    );
    headings(&mut d, &format!("{} · {}", curves.well, title(provenance)), &subtitle, &provenance.footer());
    let points: Vec<&TraversePoint> =
        curves.profile.iter().filter(|p| p.tvd_ft.is_finite() && p.pressure_psia.is_finite()).collect();
    let Some(deepest) = Span::of(points.iter().map(|p| depth.of(p.tvd_ft))).filter(|_| points.len() > 1) else {
        d.text((f64::from(WIDTH) / 2.0, 300.0), 14.0, Anchor::Middle, INK, "The well does not flow on this date");
        return d;
    };
    let y = Span::new(0.0, deepest.high).turned();
    let columns = columns(&points, unit);
    let (left, right) = (76.0, f64::from(WIDTH) - 132.0);
    let width = (right - left - 22.0 * columns.len() as f64) / (columns.len() + 1) as f64;
    let place = |i: usize| left + i as f64 * (width + 22.0);
    let depths: Vec<f64> = points.iter().map(|p| depth.of(p.tvd_ft)).collect();
    for (i, column) in columns.iter().enumerate() {
        let values = column.lines.iter().flat_map(|l| l.1.iter().copied());
        let span = Span::of(values).unwrap_or(Span::new(0.0, 1.0));
        let x = match column.highest {
            Some(high) => Span::new(0.0, high),
            None if column.from_zero => Span::from_zero(span.high, false),
            None => span.rounded(false),
        };
        let panel = Panel { left: place(i), top: TOP, right: place(i) + width, bottom: BOTTOM, x, y };
        grid(&mut d, &panel, i == 0, column.title, column.unit);
        for ((name, line), look) in column.lines.iter().zip([FIRST, SECOND]) {
            panel.draw_line(&mut d, line.iter().copied().zip(depths.iter().copied()), look);
            if column.lines.len() > 1 {
                let second = look == SECOND;
                sample(&mut d, (panel.left + if second { 62.0 } else { 0.0 }, TOP - 15.0), look, name);
            }
        }
    }
    let last = place(columns.len());
    gradients(&mut d, (last, last + width), y, &points, &depths, unit(Dimension::PressureGradient));
    patterns(&mut d, left, last + width, y, &points, &depths);
    d
}

fn columns(points: &[&TraversePoint], unit: impl Fn(Dimension) -> Label) -> Vec<Column> {
    let line = |name: &'static str, label: Label, pick: fn(&TraversePoint) -> f64| {
        (name, points.iter().map(|p| label.of(pick(p))).collect::<Vec<f64>>())
    };
    let (pressure, temperature) = (unit(Dimension::Pressure), unit(Dimension::Temperature));
    let velocity = unit(Dimension::Velocity);
    let alone = |title, unit: Label, pick: fn(&TraversePoint) -> f64, from_zero, highest| Column {
        title,
        unit: unit.text,
        lines: vec![line("", unit, pick)],
        highest,
        from_zero,
    };
    vec![
        alone("Pressure", pressure, |p| p.pressure_psia, true, None),
        alone("Temperature", temperature, |p| p.temperature_degf, false, None),
        alone("Liquid holdup", Label::fraction(), |p| p.holdup, true, Some(1.0)),
        Column {
            title: "Superficial velocity",
            unit: velocity.text,
            lines: vec![
                line("liquid", velocity, |p| p.liquid_velocity_ft_s),
                line("gas", velocity, |p| p.gas_velocity_ft_s),
            ],
            highest: None,
            from_zero: true,
        },
    ]
}

/// Grid, figures, title; depth figures at the first panel only.
fn grid(d: &mut Drawing, panel: &Panel, first: bool, title: &str, unit: &str) {
    let (depths, decimals) = ticks(panel.y, 8);
    for v in depths {
        let y = panel.at_y(v);
        d.line(vec![(panel.left, y), (panel.right, y)], 1.0, GRID);
        if first {
            d.text((panel.left - 7.0, y), 12.0, Anchor::Right, QUIET, number(v, decimals));
        }
    }
    let (values, decimals) = ticks(panel.x, 3);
    for v in values {
        let x = panel.at_x(v);
        d.line(vec![(x, panel.top), (x, panel.bottom)], 1.0, GRID);
        let text = number(v, decimals);
        // Figures at the two ends stay within their own panel.
        let half = text_width(&text, 12.0) / 2.0;
        let x = x.min(panel.right - half + 2.0).max(panel.left + half - 8.0);
        d.text((x, panel.bottom + 14.0), 12.0, Anchor::Middle, QUIET, text);
    }
    let title = if unit.is_empty() { title.to_owned() } else { format!("{title}, {unit}") };
    let room = panel.right - panel.left + 18.0;
    d.text((panel.left, TOP - 34.0), 13.0, Anchor::Left, INK, fitted(&title, 13.0, room));
    d.line(vec![(panel.left, panel.top), (panel.left, panel.bottom), (panel.right, panel.bottom)], 1.2, FRAME);
}

fn sample(d: &mut Drawing, (x, y): (f64, f64), look: Look, name: &str) {
    dashed(d, &[(x, y), (x + 20.0, y)], look.width, look.dash, look.colour);
    d.text((x + 25.0, y), 12.0, Anchor::Left, INK, name);
}

/// Gravity, and friction on top of it.
fn gradients(
    d: &mut Drawing,
    (left, right): (f64, f64),
    y: Span,
    points: &[&TraversePoint],
    depths: &[f64],
    unit: Label,
) {
    let gravity: Vec<f64> = points.iter().map(|p| unit.of(p.gravity_psi_ft)).collect();
    let both: Vec<f64> = points.iter().map(|p| unit.of(p.gravity_psi_ft + p.friction_psi_ft)).collect();
    let highest = Span::of(both.iter().copied()).map_or(1.0, |s| s.high);
    let panel = Panel { left, top: TOP, right, bottom: BOTTOM, x: Span::from_zero(highest, false), y };
    for i in 1..points.len() {
        let strip = |from: [f64; 2], to: [f64; 2]| {
            let at = |value: f64, depth: f64| panel.at((value.clamp(panel.x.low, panel.x.high), depth));
            vec![at(from[0], depths[i - 1]), at(from[1], depths[i]), at(to[1], depths[i]), at(to[0], depths[i - 1])]
        };
        d.area(strip([0.0; 2], [gravity[i - 1], gravity[i]]), GRAVITY);
        d.area(strip([gravity[i - 1], gravity[i]], [both[i - 1], both[i]]), FRICTION);
    }
    grid(d, &panel, false, "Gradient along pipe", unit.text);
    panel.draw_line(d, gravity.iter().copied().zip(depths.iter().copied()), Look { width: 1.2, ..FIRST });
    panel.draw_line(d, both.iter().copied().zip(depths.iter().copied()), Look { width: 1.6, colour: TUBING, ..FIRST });
    for (i, (name, colour)) in [("gravity", GRAVITY), ("friction", FRICTION)].into_iter().enumerate() {
        let (x, y) = (left + 80.0 * i as f64, TOP - 15.0);
        d.area(vec![(x, y - 6.0), (x + 16.0, y - 6.0), (x + 16.0, y + 6.0), (x, y + 6.0)], colour);
        d.text((x + 21.0, y), 12.0, Anchor::Left, INK, name);
    }
}

/// Lines across where the flow pattern changes, and its name beside each stretch.
fn patterns(d: &mut Drawing, left: f64, right: f64, y: Span, points: &[&TraversePoint], depths: &[f64]) {
    let panel = Panel { left, top: TOP, right, bottom: BOTTOM, x: Span::new(0.0, 1.0), y };
    let mut start = 0;
    let mut free_from = TOP - 20.0;
    d.text((right + 14.0, TOP - 34.0), 13.0, Anchor::Left, INK, "Flow pattern");
    while start < points.len() {
        let same = points[start..].iter().take_while(|p| p.pattern == points[start].pattern).count();
        let end = start + same;
        let (from, to) = (panel.at_y(depths[start]), panel.at_y(depths[(end).min(points.len() - 1)]));
        if start > 0 {
            dashed(d, &[(left, from), (right + 10.0, from)], 1.2, Dash::Short, QUIET);
        }
        // A stretch too thin for its name goes without.
        let middle = (0.5 * (from + to)).max(free_from + 8.0);
        if middle <= to.max(from + 10.0) {
            d.text((right + 14.0, middle), 12.0, Anchor::Left, INK, fitted(points[start].pattern, 12.0, 112.0));
            free_from = middle + 8.0;
        }
        start = end;
    }
}
