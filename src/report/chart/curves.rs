//! `curves-WELL`: inflow and tubing curve at several instants side by side on the same scales, so that one sees
//! the gap between them close.

use super::axes::{Panel, Span, dashed, fitted, headings, mark};
use super::rates::title;
use super::style::{Dash, GAP, INFLOW, INK, Look, Mark, QUIET, TUBING};
use super::{Anchor, Drawing};
use crate::forecast::CurveSet;
use crate::report::Provenance;
use crate::report::human;
use crate::report::labels::{Dimension, Label, label};

const INFLOW_LOOK: Look = Look { colour: INFLOW, width: 2.2, dash: Dash::Solid, mark: Mark::Disc };
const TUBING_LOOK: Look = Look { colour: TUBING, width: 2.2, dash: Dash::Long, mark: Mark::Disc };
/// Panels in a row.
const IN_A_ROW: usize = 3;

/// Inflow and tubing curves of one well.
pub fn curves_picture(well: &str, inflow: &str, curves: &[CurveSet], provenance: &Provenance) -> Drawing {
    let rows = curves.len().div_ceil(IN_A_ROW).max(1);
    let columns = curves.len().clamp(1, IN_A_ROW);
    let mut d = Drawing::new(if columns == 1 { 720 } else { 1080 }, (150 + 425 * rows) as u32);
    let width = f64::from(d.size().0);
    headings(&mut d, &format!("{well} · {}", title(provenance)), inflow, &provenance.footer());
    key(&mut d, 76.0);

    let rate = label(provenance.units, Dimension::LiquidRate);
    let pressure = label(provenance.units, Dimension::Pressure);
    let (x, y) = spans(curves, rate, pressure);
    let panel_width = (width - 84.0 - 28.0 - 40.0 * (columns - 1) as f64) / columns as f64;
    for (i, curve) in curves.iter().enumerate() {
        let (row, column) = (i / IN_A_ROW, i % IN_A_ROW);
        let left = 84.0 + column as f64 * (panel_width + 40.0);
        let top = 168.0 + 430.0 * row as f64;
        let panel = Panel { left, top, right: left + panel_width, bottom: top + 330.0, x, y };
        draw_instant(&mut d, &panel, curve, provenance, i);
    }
    d
}

/// Samples of what the picture contains.
fn key(d: &mut Drawing, y: f64) {
    dashed(d, &[(24.0, y), (58.0, y)], INFLOW_LOOK.width, INFLOW_LOOK.dash, INFLOW);
    d.text((66.0, y), 12.5, Anchor::Left, INK, "inflow");
    dashed(d, &[(134.0, y), (168.0, y)], TUBING_LOOK.width, TUBING_LOOK.dash, TUBING);
    d.text((176.0, y), 12.5, Anchor::Left, INK, "tubing at line pressure");
    d.area(vec![(356.0, y - 7.0), (390.0, y - 7.0), (390.0, y + 7.0), (356.0, y + 7.0)], GAP);
    d.text((398.0, y), 12.5, Anchor::Left, INK, "inflow above tubing");
    mark(d, (555.0, y), Mark::Disc, 4.5, INK);
    d.text((566.0, y), 12.5, Anchor::Left, INK, "operating point");
}

/// Common scales: all rates; pressures from zero to a little above the highest reservoir pressure.
fn spans(curves: &[CurveSet], rate: Label, pressure: Label) -> (Span, Span) {
    let rates = curves.iter().flat_map(|c| c.points.iter().map(|p| rate.of(p.0)));
    let highest_rate = Span::of(rates).map_or(1.0, |s| s.high);
    let reservoir = curves.iter().map(|c| pressure.of(c.reservoir_psia));
    let highest = Span::of(reservoir).map_or(1.0, |s| s.high);
    (Span::new(0.0, highest_rate * 1.02), Span::new(0.0, highest * 1.05).rounded(true))
}

fn draw_instant(d: &mut Drawing, panel: &Panel, curve: &CurveSet, provenance: &Provenance, index: usize) {
    let rate = label(provenance.units, Dimension::LiquidRate);
    let pressure = label(provenance.units, Dimension::Pressure);
    let difference = label(provenance.units, Dimension::PressureDifference);
    let width = panel.right - panel.left;
    let points: Vec<(f64, f64, f64)> = curve
        .points
        .iter()
        .map(|p| (rate.of(p.0), pressure.of(p.1), pressure.of(p.2)))
        .filter(|p| p.0.is_finite())
        .collect();

    gap(d, panel, &points);
    panel.draw_y(d, "", 6, index.is_multiple_of(IN_A_ROW));
    panel.draw_x(d, &format!("Liquid rate, {}", rate.text), 4);
    panel.draw_frame(d);
    if index == 0 {
        d.text((24.0, panel.top - 56.0), 13.0, Anchor::Left, INK, format!("Flowing pressure, {}", pressure.text));
    }
    let heading = format!("{}, {}", capital(&curve.label), human::month(curve.date));
    d.text((panel.left, panel.top - 32.0), 13.5, Anchor::Left, INK, fitted(&heading, 13.5, width));
    let reservoir = human::number(pressure.of(curve.reservoir_psia), 0);
    let state = format!("reservoir {reservoir} {} · {}", pressure.text, margin_text(curve, difference));
    d.text((panel.left, panel.top - 14.0), 12.0, Anchor::Left, QUIET, fitted(&state, 12.0, width + 24.0));

    panel.draw_line(d, points.iter().map(|p| (p.0, p.1)), INFLOW_LOOK);
    panel.draw_line(d, points.iter().map(|p| (p.0, p.2)), TUBING_LOOK);
    widest(d, panel, &points, curve);
    if let Some((q, p)) = curve.operating_point {
        operating_point(d, panel, (rate.of(q), pressure.of(p)), &points, rate);
    }
}

fn margin_text(curve: &CurveSet, difference: Label) -> String {
    let margin = difference.of(curve.flow_margin_psi);
    if !margin.is_finite() {
        return "no margin".to_owned();
    }
    let size = human::number(margin.abs(), if margin.abs() < 10.0 { 2 } else { 0 });
    // Less than this is the thickness of a line.
    if curve.flow_margin_psi.abs() < 0.5 && curve.operating_point.is_some() {
        "the curves only touch".to_owned()
    } else if margin < 0.0 {
        format!("no crossing, {size} {} short", difference.text)
    } else {
        format!("margin {size} {}", difference.text)
    }
}

/// Fills where the inflow curve stands above the tubing curve.
fn gap(d: &mut Drawing, panel: &Panel, points: &[(f64, f64, f64)]) {
    let y = |v: f64| panel.at_y(v.clamp(panel.y.low, panel.y.high));
    for pair in points.windows(2) {
        let (a, b) = (pair[0], pair[1]);
        let (above_a, above_b) = (a.1 - a.2, b.1 - b.2);
        if !(above_a.is_finite() && above_b.is_finite()) || (above_a <= 0.0 && above_b <= 0.0) {
            continue;
        }
        // The crossing inside the pair, by straight lines.
        let cut = above_a / (above_a - above_b);
        let crossing = (a.0 + cut * (b.0 - a.0), a.1 + cut * (b.1 - a.1), a.1 + cut * (b.1 - a.1));
        let (from, to) = match (above_a > 0.0, above_b > 0.0) {
            (true, true) => (a, b),
            (true, false) => (a, crossing),
            _ => (crossing, b),
        };
        let (x0, x1) = (panel.at_x(from.0), panel.at_x(to.0));
        d.area(vec![(x0, y(from.1)), (x1, y(to.1)), (x1, y(to.2)), (x0, y(from.2))], GAP);
    }
}

/// A bar where the inflow curve stands highest above the tubing curve: the flow margin.
fn widest(d: &mut Drawing, panel: &Panel, points: &[(f64, f64, f64)], curve: &CurveSet) {
    let inside = points.iter().filter(|p| p.1.is_finite() && p.2.is_finite() && p.2 <= panel.y.high);
    let Some(best) = inside.max_by(|a, b| (a.1 - a.2).total_cmp(&(b.1 - b.2))) else { return };
    let (x, top, bottom) = (panel.at_x(best.0), panel.at_y(best.1), panel.at_y(best.2));
    if curve.flow_margin_psi > 0.0 && bottom - top > 6.0 {
        d.line(vec![(x, top), (x, bottom)], 1.2, INK);
        for y in [top, bottom] {
            d.line(vec![(x - 3.5, y), (x + 3.5, y)], 1.2, INK);
        }
    }
}

fn operating_point(d: &mut Drawing, panel: &Panel, point: (f64, f64), points: &[(f64, f64, f64)], rate: Label) {
    if !(point.0.is_finite() && point.1.is_finite()) {
        return;
    }
    let (x, y) = panel.at(point);
    // A choked well works above the tubing curve: the choke takes the rest.
    let tubing = points.windows(2).find(|w| w[0].0 <= point.0 && point.0 <= w[1].0).map(|w| {
        let share = if w[1].0 > w[0].0 { (point.0 - w[0].0) / (w[1].0 - w[0].0) } else { 0.0 };
        w[0].2 + share * (w[1].2 - w[0].2)
    });
    let choked = tubing.is_some_and(|t| t.is_finite() && panel.at_y(t) - y > 8.0);
    if let (true, Some(t)) = (choked, tubing) {
        dashed(d, &[(x, y), (x, panel.at_y(t))], 1.4, Dash::Short, INK);
    }
    panel.draw_mark(d, point, Look { colour: INK, ..INFLOW_LOOK }, 4.5);
    let text = format!("{} {}{}", human::number(point.0, 0), rate.text, if choked { ", choked" } else { "" });
    label_beside(d, panel, (x, y), points, text);
}

/// Writes a text beside a point where neither curve runs through it.
fn label_beside(d: &mut Drawing, panel: &Panel, at: (f64, f64), points: &[(f64, f64, f64)], text: String) {
    let width = super::paint::text_width(&text, 12.0);
    let places = [(9.0, -12.0), (9.0, -26.0), (9.0, -40.0), (-9.0 - width, 15.0), (-9.0 - width, 28.0), (9.0, 15.0)];
    let place = |(dx, dy): (f64, f64)| {
        let left = (at.0 + dx).min(panel.right - width).max(panel.left + 3.0);
        (left, (at.1 + dy).max(panel.top + 8.0))
    };
    let free = |spot: &(f64, f64)| {
        let (left, middle) = place(*spot);
        let inside = |x: f64, y: f64| (left - 3.0..left + width + 3.0).contains(&x) && (y - middle).abs() < 9.0;
        let crossed = |value: fn(&(f64, f64, f64)) -> f64| {
            points.windows(2).any(|w| {
                (0..=8).map(|i| f64::from(i) / 8.0).any(|s| {
                    let mix = |a: f64, b: f64| a + s * (b - a);
                    inside(panel.at_x(mix(w[0].0, w[1].0)), panel.at_y(mix(value(&w[0]), value(&w[1]))))
                })
            })
        };
        !crossed(|p| p.1) && !crossed(|p| p.2)
    };
    let spot = places.iter().find(|spot| free(spot)).unwrap_or(&places[0]);
    d.text(place(*spot), 12.0, Anchor::Left, INK, text);
}

fn capital(text: &str) -> String {
    let mut chars = text.chars();
    chars.next().map_or_else(String::new, |c| c.to_uppercase().collect::<String>() + chars.as_str())
}
