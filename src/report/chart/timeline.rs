//! Panels stacked above one another on a common axis of years and months.

use super::axes::{Panel, Span, dashed};
use super::paint::text_width;
use super::style::{Dash, GRID, Look, QUIET};
use super::{Anchor, Drawing};
use crate::forecast::{date_at, days_between};
use crate::report::human;
use jiff::civil::{Date, date};

/// A marked instant: the end of natural flow of a well.
pub(super) struct Moment {
    pub days: f64,
    pub text: String,
    pub look: Look,
}

/// The common axis.
#[derive(Debug, Clone, Copy)]
pub(super) struct Timeline {
    pub start: Date,
    pub days: Span,
}

/// First days of years or months in `timeline`, with labels.
fn date_ticks(timeline: Timeline) -> Vec<(f64, String)> {
    let length = timeline.days.high - timeline.days.low;
    let months = match length {
        l if l > 365.25 * 40.0 => 120,
        l if l > 365.25 * 16.0 => 24,
        l if l > 365.25 * 3.5 => 12,
        l if l > 365.25 * 1.6 => 6,
        l if l > 240.0 => 3,
        _ => 1,
    };
    let first = date_at(timeline.start, timeline.days.low);
    let mut month = i32::from(first.year()) * 12 + i32::from(first.month()) - 1;
    month -= month.rem_euclid(months);
    let mut out = Vec::new();
    while out.len() < 60 {
        let (year, number) = (month.div_euclid(12), month.rem_euclid(12) + 1);
        let (Ok(year), Ok(number)) = (i16::try_from(year), i8::try_from(number)) else { break };
        if !(1..9000).contains(&year) {
            break;
        }
        let day = date(year, number, 1);
        let days = days_between(timeline.start, day);
        if days > timeline.days.high + 0.5 {
            break;
        }
        if days >= timeline.days.low - 0.5 {
            out.push((days, if months >= 12 { year.to_string() } else { human::short_month(day) }));
        }
        month += months;
    }
    out
}

impl Timeline {
    /// Vertical grid of `panel`; figures below it when `figures`.
    pub fn draw(self, d: &mut Drawing, panel: &Panel, figures: bool) {
        let mut free = f64::NEG_INFINITY;
        for (days, label) in date_ticks(self) {
            let x = panel.at_x(days);
            d.line(vec![(x, panel.top), (x, panel.bottom)], 1.0, GRID);
            let half = text_width(&label, 12.0) / 2.0;
            if figures && x - half > free {
                d.text((x, panel.bottom + 14.0), 12.0, Anchor::Middle, QUIET, label);
                free = x + half + 8.0;
            }
        }
    }
}

/// Splits the picture between `top` and `bottom` into panels of one width and these shares of the height.
pub(super) fn stack(d: &Drawing, top: f64, bottom: f64, right: f64, x: Span, ys: &[(Span, f64)]) -> Vec<Panel> {
    const GAP: f64 = 44.0;
    let shares: f64 = ys.iter().map(|(_, share)| share).sum();
    let free = bottom - top - GAP * ys.len().saturating_sub(1) as f64;
    let right = f64::from(d.width) - right;
    let mut panels = Vec::new();
    let mut at = top;
    for (y, share) in ys {
        let height = free * share / shares;
        panels.push(Panel { left: 84.0, top: at, right, bottom: at + height, x, y: *y });
        at += height + GAP;
    }
    panels
}

/// How many rows of labels `moments` need, and the row of each.
fn rows_of(moments: &[Moment], panel: &Panel) -> (usize, Vec<(usize, f64)>) {
    let mut ends: Vec<f64> = Vec::new();
    let mut order: Vec<usize> = (0..moments.len()).collect();
    order.sort_by(|&a, &b| moments[a].days.total_cmp(&moments[b].days));
    let mut placed = vec![(0, 0.0); moments.len()];
    for i in order {
        let half = text_width(&moments[i].text, 12.0) / 2.0;
        let x = panel.at_x(moments[i].days).clamp(panel.left + half - 60.0, panel.right - half + 16.0);
        let row = ends.iter().position(|&end| x - half > end).unwrap_or(ends.len());
        if row == ends.len() {
            ends.push(0.0);
        }
        ends[row] = x + half + 14.0;
        placed[i] = (row, x);
    }
    (ends.len(), placed)
}

/// Height of the strip of labels above the panels of a picture of this width.
pub(super) fn moments_height(width: u32, right: f64, x: Span, moments: &[Moment]) -> f64 {
    let panels = stack(&Drawing::new(width, 100), 0.0, 100.0, right, x, &[(Span::new(0.0, 1.0), 1.0)]);
    panels.first().map_or(0.0, |panel| rows_of(moments, panel).0 as f64 * 17.0)
}

/// A thin line through all panels at each moment, and its label above the first.
pub(super) fn draw_moments(d: &mut Drawing, panels: &[Panel], top: f64, moments: &[Moment]) {
    let Some(first) = panels.first() else { return };
    let (_, placed) = rows_of(moments, first);
    for (moment, (row, x)) in moments.iter().zip(placed) {
        let at = first.at_x(moment.days);
        let y = top + 8.0 + row as f64 * 17.0;
        // Over the title of the first panel the line would cross words.
        if at > first.left + 260.0 {
            dashed(d, &[(at, y + 9.0), (at, first.top)], 1.0, Dash::Short, moment.look.colour);
        }
        for panel in panels {
            dashed(d, &[(at, panel.top), (at, panel.bottom)], 1.0, Dash::Short, moment.look.colour);
        }
        d.text((x, y), 12.0, Anchor::Middle, moment.look.colour, &*moment.text);
    }
}

/// Labels at the right end of lines, moved apart where they would overlap.
pub(super) fn end_labels(d: &mut Drawing, panel: &Panel, mut labels: Vec<(f64, String, Look)>) {
    const HEIGHT: f64 = 14.0;
    labels.sort_by(|a, b| b.0.total_cmp(&a.0));
    let mut next = f64::NEG_INFINITY;
    let mut ys: Vec<f64> = labels
        .iter()
        .map(|(value, ..)| {
            let y = panel.at_y(*value).max(next);
            next = y + HEIGHT;
            y
        })
        .collect();
    // Push back up what ran over the bottom.
    let mut limit = panel.bottom + 4.0;
    for y in ys.iter_mut().rev() {
        *y = y.min(limit);
        limit = *y - HEIGHT;
    }
    for ((_, text, look), y) in labels.into_iter().zip(ys) {
        d.text((panel.right + 8.0, y), 12.0, Anchor::Left, look.colour, text);
    }
}
