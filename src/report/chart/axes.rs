//! A panel with axes: scales, ticks, clipped lines, markers. Nothing that is not finite gets past it.

use super::paint::text_width;
use super::style::{Dash, FRAME, GRID, INK, Look, Mark, QUIET};
use super::{Anchor, Colour, Drawing};
use crate::report::human;

/// A closed range of values, never empty.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Span {
    pub low: f64,
    pub high: f64,
}

impl Span {
    pub fn new(low: f64, high: f64) -> Self {
        let (low, high) = if low.is_finite() && high.is_finite() { (low, high) } else { (0.0, 1.0) };
        if high > low { Self { low, high } } else { Self { low, high: low + low.abs().max(1.0) * 0.1 } }
    }

    /// The range of the finite values in `values`; `None` when there is none.
    pub fn of(values: impl IntoIterator<Item = f64>) -> Option<Self> {
        let mut found: Option<(f64, f64)> = None;
        for v in values.into_iter().filter(|v| v.is_finite()) {
            found = Some(found.map_or((v, v), |(low, high)| (low.min(v), high.max(v))));
        }
        found.map(|(low, high)| Self::new(low, high))
    }

    /// From zero to a tick above the highest value; fractions end at one.
    pub fn from_zero(highest: f64, fraction: bool) -> Self {
        let span = Self::new(0.0, highest * 1.04).rounded(true);
        if fraction { Self::new(0.0, span.high.min(1.0)) } else { span }
    }

    /// The same range running the other way, for an axis that grows downwards.
    pub fn turned(self) -> Self {
        Self { low: self.high, high: self.low }
    }

    /// Widened to the next tick on both sides; `from_zero` keeps the lower end at zero.
    pub fn rounded(self, from_zero: bool) -> Self {
        let low = if from_zero { 0.0_f64.min(self.low) } else { self.low };
        let step = tick_step(Self::new(low, self.high), 5);
        let high = (self.high / step - 0.02).ceil() * step;
        Self::new((low / step + 0.02).floor() * step, if high < self.high { self.high + 0.04 * step } else { high })
    }
}

/// 1, 2 or 5 times a power of ten that gives about `count` ticks.
fn tick_step(span: Span, count: usize) -> f64 {
    let raw = (span.high - span.low) / count as f64;
    let power = 10_f64.powf(raw.log10().floor());
    let step = [1.0, 2.0, 5.0, 10.0].into_iter().find(|m| m * power >= raw * 0.999).unwrap_or(10.0) * power;
    if step.is_finite() && step > 0.0 { step } else { 1.0 }
}

/// Round values in `span`, and the decimals they need.
pub(super) fn ticks(span: Span, count: usize) -> (Vec<f64>, usize) {
    let span = Span { low: span.low.min(span.high), high: span.low.max(span.high) };
    let step = tick_step(span, count);
    let decimals = (-(step.log10() + 1e-9).floor()).clamp(0.0, 6.0) as usize;
    let first = (span.low / step - 1e-6).ceil();
    let values = (0..=2 * count + 2).map(|i| (first + i as f64) * step);
    (values.take_while(|v| *v <= span.high + 1e-6 * step).collect(), decimals)
}

/// A rectangle of the picture with a scale on both axes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Panel {
    pub left: f64,
    pub top: f64,
    pub right: f64,
    pub bottom: f64,
    pub x: Span,
    pub y: Span,
}

impl Panel {
    pub fn at_x(&self, x: f64) -> f64 {
        self.left + (x - self.x.low) / (self.x.high - self.x.low) * (self.right - self.left)
    }

    pub fn at_y(&self, y: f64) -> f64 {
        self.bottom - (y - self.y.low) / (self.y.high - self.y.low) * (self.bottom - self.top)
    }

    pub fn at(&self, p: (f64, f64)) -> (f64, f64) {
        (self.at_x(p.0), self.at_y(p.1))
    }

    fn holds(&self, p: (f64, f64)) -> bool {
        p.0 >= self.x.low && p.0 <= self.x.high && p.1 >= self.y.low && p.1 <= self.y.high
    }

    /// Horizontal grid with figures on the left; the frame; the title above.
    pub fn draw_y(&self, d: &mut Drawing, title: &str, count: usize, figures: bool) {
        let (values, decimals) = ticks(self.y, count);
        for v in values {
            let y = self.at_y(v);
            d.line(vec![(self.left, y), (self.right, y)], 1.0, GRID);
            if figures {
                d.text((self.left - 7.0, y), 12.0, Anchor::Right, QUIET, human::number(v, decimals));
            }
        }
        d.text((self.left, self.top - 13.0), 13.0, Anchor::Left, INK, title);
    }

    /// Vertical grid with figures below.
    pub fn draw_x(&self, d: &mut Drawing, title: &str, count: usize) {
        let (values, decimals) = ticks(self.x, count);
        let last = values.len().saturating_sub(1);
        for (i, v) in values.into_iter().enumerate() {
            let x = self.at_x(v);
            d.line(vec![(x, self.top), (x, self.bottom)], 1.0, GRID);
            // The last figure may not run into the next panel's first.
            let label = human::number(v, decimals);
            let over = x + text_width(&label, 12.0) / 2.0 - self.right;
            if i < last || over < 12.0 {
                d.text((x, self.bottom + 14.0), 12.0, Anchor::Middle, QUIET, label);
            }
        }
        d.text(((self.left + self.right) / 2.0, self.bottom + 34.0), 13.0, Anchor::Middle, INK, title);
    }

    /// Left and bottom edge, above grid and below series.
    pub fn draw_frame(&self, d: &mut Drawing) {
        d.line(vec![(self.left, self.top), (self.left, self.bottom), (self.right, self.bottom)], 1.2, FRAME);
    }

    /// A line through `points`, broken where a point is not finite, clipped to the panel.
    pub fn draw_line(&self, d: &mut Drawing, points: impl IntoIterator<Item = (f64, f64)>, look: Look) {
        let mut piece: Vec<(f64, f64)> = Vec::new();
        let mut before: Option<(f64, f64)> = None;
        for point in points {
            if !(point.0.is_finite() && point.1.is_finite()) {
                flush(d, &mut piece, look);
                before = None;
                continue;
            }
            if let Some(previous) = before
                && let Some((a, b)) = self.clip(previous, point)
            {
                let (a, b) = (self.at(a), self.at(b));
                if piece.last().is_none_or(|&end| distance(end, a) > 0.01) {
                    flush(d, &mut piece, look);
                    piece.push(a);
                }
                piece.push(b);
            }
            before = Some(point);
        }
        flush(d, &mut piece, look);
    }

    /// The part of a segment inside the panel (Liang and Barsky, 1984).
    fn clip(&self, a: (f64, f64), b: (f64, f64)) -> Option<((f64, f64), (f64, f64))> {
        let (dx, dy) = (b.0 - a.0, b.1 - a.1);
        let (mut from, mut to) = (0.0_f64, 1.0_f64);
        let (bottom, top) = (self.y.low.min(self.y.high), self.y.low.max(self.y.high));
        let edges = [(-dx, a.0 - self.x.low), (dx, self.x.high - a.0), (-dy, a.1 - bottom), (dy, top - a.1)];
        for (p, q) in edges {
            if p == 0.0 {
                if q < 0.0 {
                    return None;
                }
            } else if p < 0.0 {
                from = from.max(q / p);
            } else {
                to = to.min(q / p);
            }
        }
        (from <= to).then_some(((a.0 + from * dx, a.1 + from * dy), (a.0 + to * dx, a.1 + to * dy)))
    }

    /// A marker at a point inside the panel.
    pub fn draw_mark(&self, d: &mut Drawing, point: (f64, f64), look: Look, size: f64) {
        if point.0.is_finite() && point.1.is_finite() && self.holds(point) {
            mark(d, self.at(point), look.mark, size, look.colour);
        }
    }
}

fn flush(d: &mut Drawing, piece: &mut Vec<(f64, f64)>, look: Look) {
    if piece.len() > 1 {
        dashed(d, piece, look.width, look.dash, look.colour);
    }
    piece.clear();
}

fn distance(a: (f64, f64), b: (f64, f64)) -> f64 {
    (a.0 - b.0).hypot(a.1 - b.1)
}

/// A line in pixels, cut into dashes.
pub(super) fn dashed(d: &mut Drawing, points: &[(f64, f64)], width: f64, dash: Dash, colour: Colour) {
    let pattern = dash.pattern();
    if pattern.is_empty() {
        d.line(points.to_vec(), width, colour);
        return;
    }
    let (mut index, mut left) = (0, pattern[0]);
    let mut piece = points.first().map_or_else(Vec::new, |p| vec![*p]);
    for pair in points.windows(2) {
        let (mut from, to) = (pair[0], pair[1]);
        let mut length = distance(from, to);
        while length > left {
            let share = left / length;
            from = (from.0 + share * (to.0 - from.0), from.1 + share * (to.1 - from.1));
            length -= left;
            if index % 2 == 0 {
                piece.push(from);
                d.line(std::mem::take(&mut piece), width, colour);
            } else {
                piece = vec![from];
            }
            index = (index + 1) % pattern.len();
            left = pattern[index];
        }
        left -= length;
        if index % 2 == 0 {
            piece.push(to);
        }
    }
    if index % 2 == 0 {
        d.line(piece, width, colour);
    }
}

/// A filled marker with a thin white rim, so that it stands out from lines.
pub(super) fn mark(d: &mut Drawing, at: (f64, f64), mark: Mark, size: f64, colour: Colour) {
    d.area(outline(at, mark, size + 1.5), [255, 255, 255]);
    d.area(outline(at, mark, size), colour);
}

fn outline(at: (f64, f64), mark: Mark, r: f64) -> Vec<(f64, f64)> {
    let corners: &[(f64, f64)] = match mark {
        Mark::Disc => {
            return (0..32)
                .map(|i| f64::from(i) / 32.0 * std::f64::consts::TAU)
                .map(|a| (at.0 + r * a.cos(), at.1 + r * a.sin()))
                .collect();
        }
        Mark::Square => &[(-0.9, -0.9), (0.9, -0.9), (0.9, 0.9), (-0.9, 0.9)],
        Mark::Triangle => &[(0.0, -1.2), (1.1, 0.8), (-1.1, 0.8)],
        Mark::Diamond => &[(0.0, -1.25), (1.25, 0.0), (0.0, 1.25), (-1.25, 0.0)],
    };
    corners.iter().map(|(x, y)| (at.0 + r * x, at.1 + r * y)).collect()
}

/// Height that [`legend`] takes in a picture of this width.
pub(super) fn legend_height(width: u32, entries: &[(String, Look, bool)]) -> f64 {
    legend(&mut Drawing::new(width, 100), 0.0, entries)
}

/// Title, subtitle and the small line at the bottom.
pub(super) fn headings(d: &mut Drawing, title: &str, subtitle: &str, footer: &str) {
    let (width, height) = (f64::from(d.width), f64::from(d.height));
    d.text((24.0, 26.0), 19.0, Anchor::Left, INK, fitted(title, 19.0, width - 48.0));
    d.text((24.0, 49.0), 13.0, Anchor::Left, QUIET, fitted(subtitle, 13.0, width - 48.0));
    d.text((24.0, height - 14.0), 10.5, Anchor::Left, QUIET, fitted(footer, 10.5, width - 48.0));
}

/// `text`, cut with an ellipsis where it is wider than `width`.
pub(super) fn fitted(text: &str, size: f64, width: f64) -> String {
    if text_width(text, size) <= width {
        return text.to_owned();
    }
    let mut cut: Vec<char> = text.chars().collect();
    while !cut.is_empty() {
        cut.pop();
        let shorter: String = cut.iter().collect::<String>().trim_end().to_owned() + "…";
        if text_width(&shorter, size) <= width {
            return shorter;
        }
    }
    String::new()
}

/// Samples of series with their names in rows; returns the height used.
pub(super) fn legend(d: &mut Drawing, top: f64, entries: &[(String, Look, bool)]) -> f64 {
    let right = f64::from(d.width) - 24.0;
    let (mut x, mut y) = (24.0, top + 8.0);
    for (name, look, marked) in entries {
        let name = fitted(name, 12.5, right - 24.0 - 60.0);
        let width = 34.0 + 8.0 + text_width(&name, 12.5) + 24.0;
        if x + width > right + 24.0 && x > 24.0 {
            x = 24.0;
            y += 20.0;
        }
        dashed(d, &[(x, y), (x + 34.0, y)], look.width, look.dash, look.colour);
        if *marked {
            mark(d, (x + 17.0, y), look.mark, 3.6, look.colour);
        }
        d.text((x + 42.0, y), 12.5, Anchor::Left, INK, name);
        x += width;
    }
    y - top + 14.0
}
