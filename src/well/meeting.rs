//! Where inflow and tubing curve meet, from the height `h(q) = inflow pressure - tubing pressure` alone.
//!
//! The operating point is the right-most place where `h` falls through zero: there the tubing curve crosses the inflow
//! curve from below and a small disturbance dies out. The other crossing is unstable. The largest `h` over all rates is the
//! flow margin. `h` may have several humps and corners, so everything is bracketed and nothing relies on derivatives.

use crate::roots::{brent, maximise};

/// Rates of the coarse look over `h`.
const LOOK: usize = 50;
/// First and last of them as parts of open flow. The first lies far below any rate that matters to an ordinary well; a prolific
/// one flows at small parts of its open flow.
pub const LOOK_FROM: f64 = 1e-4;
/// See [`LOOK_FROM`].
pub const LOOK_TO: f64 = 0.999;
/// Relative width in rate to which crossings are refined.
const RATE_WIDTH: f64 = 1e-10;
/// Width to which tops are refined, relative to the rate at which they stand (at a small part of open flow corners are steep): even
/// where the curves part by their whole height within a few per cent of the rate it costs well below 0.01 psi.
const TOP_WIDTH: f64 = 1e-6;

/// A place where `h` is zero.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Crossing {
    /// Liquid rate, STB/d.
    pub rate_stb_d: f64,
    /// Whether it is a stable one: `h` falls through zero.
    pub stable: bool,
}

/// What a look over all rates found.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Landscape {
    /// Largest `h` over all rates, psi: the flow margin.
    pub margin_psi: f64,
    /// The rate at which it is found, STB/d.
    pub margin_rate_stb_d: f64,
    /// Right-most stable crossing, STB/d.
    pub right_crossing_stb_d: Option<f64>,
    /// Rate at the top of the right-most hump that reaches above zero (of the highest one when none does), STB/d.
    pub top_rate_stb_d: f64,
    /// The stretch of rates that belongs to that hump, STB/d: from the valley on its left to the valley on its right.
    pub hump_stb_d: (f64, f64),
}

/// The coarse look, refined at every hump that may matter.
struct Look {
    points: [(f64, f64); LOOK],
    /// (index of the highest point, rate, height) of each hump, from left to right; `count` of them.
    store: [(usize, f64, f64); LOOK],
    count: usize,
}

impl Look {
    fn humps(&self) -> &[(usize, f64, f64)] {
        &self.store[..self.count]
    }
}

fn look(h: &mut impl FnMut(f64) -> f64, open_flow_stb_d: f64) -> Look {
    let mut points = [(0.0, 0.0); LOOK];
    for (i, point) in points.iter_mut().enumerate() {
        // Closer at low rates, where wells die.
        let s = i as f64 / (LOOK - 1) as f64;
        let q = open_flow_stb_d * (LOOK_FROM + (LOOK_TO - LOOK_FROM) * s * s.sqrt());
        *point = (q, h(q));
    }
    let best = points.iter().map(|p| p.1).fold(f64::NEG_INFINITY, f64::max);
    let mut store = [(0, 0.0, 0.0); LOOK];
    let mut count = 0;
    for i in 0..LOOK {
        let left = if i > 0 { points[i - 1] } else { points[0] };
        let right = if i + 1 < LOOK { points[i + 1] } else { points[i] };
        let here = points[i];
        if here.1 < left.1 || here.1 < right.1 || (i > 0 && here.1 <= left.1 && i + 1 < LOOK) {
            continue;
        }
        // How far the top can stand above the highest point: no further than the neighbours lie below it.
        let reach = (here.1 - left.1).max(here.1 - right.1);
        let (mut q, mut top) = here;
        if here.1 + reach >= best || here.1 + reach >= 0.0 {
            (q, top) = maximise(&mut *h, left.0, here.0, right.0, TOP_WIDTH * here.0);
            if here.1 > top {
                (q, top) = here;
            }
        }
        store[count] = (i, q, top);
        count += 1;
    }
    Look { points, store, count }
}

/// Looks over all rates up to open flow.
pub fn survey(h: impl FnMut(f64) -> f64, open_flow_stb_d: f64) -> Landscape {
    survey_above(h, open_flow_stb_d, 0.0)
}

/// As [`survey`], where a hump counts as a place to flow only when it reaches above `least_psi`.
pub fn survey_above(mut h: impl FnMut(f64) -> f64, open_flow_stb_d: f64, least_psi: f64) -> Landscape {
    let look = look(&mut h, open_flow_stb_d);
    let humps = look.humps();
    let (_, margin_rate, margin) =
        humps.iter().copied().fold((0, 0.0, f64::NEG_INFINITY), |a, b| if b.2 > a.2 { b } else { a });
    let chosen =
        humps.iter().rposition(|x| x.2 > least_psi).or_else(|| humps.iter().position(|x| x.2 >= margin)).unwrap_or(0);
    let (index, top_rate, top) = humps.get(chosen).copied().unwrap_or((0, look.points[0].0, look.points[0].1));
    let right_crossing_stb_d = (top > least_psi).then(|| {
        // The first point beyond the top at which h is no longer positive; open flow itself always is such a point.
        let beyond = look.points[index + 1..].iter().copied().find(|p| p.0 > top_rate && p.1 <= 0.0);
        let inside = look.points[index + 1..]
            .iter()
            .copied()
            .take_while(|p| p.1 > 0.0)
            .filter(|p| p.0 > top_rate)
            .last()
            .unwrap_or((top_rate, top));
        let outside = beyond.unwrap_or_else(|| (open_flow_stb_d, h(open_flow_stb_d)));
        if outside.1 > 0.0 { outside.0 } else { brent(&mut h, inside, outside, RATE_WIDTH * open_flow_stb_d) }
    });
    let valley = |from: usize, to: usize| {
        let lowest =
            look.points[from..=to].iter().copied().fold((0.0, f64::INFINITY), |a, b| if b.1 < a.1 { b } else { a });
        lowest.0
    };
    let low = if chosen > 0 { valley(humps[chosen - 1].0, index) } else { 0.0 };
    let high = if chosen + 1 < humps.len() { valley(index, humps[chosen + 1].0) } else { open_flow_stb_d };
    Landscape {
        margin_psi: margin,
        margin_rate_stb_d: margin_rate,
        right_crossing_stb_d,
        top_rate_stb_d: top_rate,
        hump_stb_d: (low, high),
    }
}

/// All crossings from left to right.
pub fn crossings(mut h: impl FnMut(f64) -> f64, open_flow_stb_d: f64) -> Vec<Crossing> {
    let look = look(&mut h, open_flow_stb_d);
    let mut points: Vec<(f64, f64)> = look.points.to_vec();
    points.extend(look.humps().iter().map(|&(_, q, top)| (q, top)));
    points.push((open_flow_stb_d, h(open_flow_stb_d)));
    points.sort_by(|a, b| a.0.total_cmp(&b.0));
    points.dedup_by(|a, b| a.0 == b.0);
    let mut found = Vec::new();
    for pair in points.windows(2) {
        let (a, b) = (pair[0], pair[1]);
        if (a.1 > 0.0) != (b.1 > 0.0) {
            found.push(Crossing { rate_stb_d: brent(&mut h, a, b, RATE_WIDTH * open_flow_stb_d), stable: a.1 > 0.0 });
        }
    }
    found
}

/// Follows the top of a hump from where it was found last: rate and height.
///
/// Local: it stays between `low` and `high`, and widens its bracket until the top is inside.
pub fn top_near(h: impl FnMut(f64) -> f64, rate_stb_d: f64, low: f64, high: f64) -> (f64, f64) {
    top_within(h, rate_stb_d, low, high, TOP_WIDTH)
}

/// [`top_near`] to a width relative to the rate.
fn top_within(mut h: impl FnMut(f64) -> f64, rate_stb_d: f64, low: f64, high: f64, width_share: f64) -> (f64, f64) {
    // Bounds that have closed leave one rate.
    let high = high.max(low);
    let mut middle = rate_stb_d.max(low).min(high);
    let mut width = 0.02 * middle.max(1e-6 * high);
    let mut hm = h(middle);
    for _ in 0..60 {
        let (a, b) = ((middle - width).max(low), (middle + width).min(high));
        let (ha, hb) = (h(a), h(b));
        if hb > hm && b < high {
            (middle, hm) = (b, hb);
        } else if ha > hm && a > low {
            (middle, hm) = (a, ha);
        } else {
            return maximise(h, a, middle, b, width_share * middle.max(1e-6 * high));
        }
        width *= 2.0;
    }
    (middle, hm)
}

/// Follows the top of a smooth hump that moved little: the vertex of a parabola through three heights, accepted when the height
/// there is the one foretold; otherwise [`top_near`]. Rate and height.
pub fn follow_top(h: impl FnMut(f64) -> f64, rate_stb_d: f64, low: f64, high: f64) -> (f64, f64) {
    follow_top_within(h, rate_stb_d, low, high, TOP_WIDTH)
}

/// [`follow_top`] where the top is needed only to a width relative to the rate.
pub fn follow_top_within(
    mut h: impl FnMut(f64) -> f64,
    rate_stb_d: f64,
    low: f64,
    high: f64,
    width_share: f64,
) -> (f64, f64) {
    const FORETOLD_PSI: f64 = 0.05;
    let step = 0.015 * rate_stb_d;
    let (a, b, c) = (rate_stb_d - step, rate_stb_d, rate_stb_d + step);
    if a > low && c < high {
        let (ha, hb, hc) = (h(a), h(b), h(c));
        let (slope, bend) = (0.5 * (hc - ha), ha - 2.0 * hb + hc);
        let shift = -slope / bend;
        if bend < 0.0 && shift.abs() < 3.0 {
            let (q, foretold) = (b + shift * step, hb + 0.5 * slope * shift);
            let there = h(q);
            if q > low && q < high && (there - foretold).abs() < FORETOLD_PSI {
                return if hb > there { (b, hb) } else { (q, there) };
            }
        }
    }
    top_within(h, rate_stb_d, low, high, width_share)
}

/// Follows a stable crossing from where it was found last, with the slope of `h` found last: rate and slope.
///
/// Secant steps that must stay on the falling side; `None` when they do not settle, and the caller looks wider.
pub fn right_crossing(
    mut h: impl FnMut(f64) -> f64,
    rate_stb_d: f64,
    slope_psi_per_stb_d: f64,
    accuracy_psi: f64,
    (low, high): (f64, f64),
) -> Option<(f64, f64)> {
    if !(slope_psi_per_stb_d < 0.0 && rate_stb_d > low && rate_stb_d < high) {
        return None;
    }
    let (mut q, mut slope) = (rate_stb_d, slope_psi_per_stb_d);
    let mut value = h(q);
    for _ in 0..8 {
        if value.abs() <= accuracy_psi {
            return Some((q, slope));
        }
        let step = -value / slope;
        if step.abs() > 0.2 * q {
            return None;
        }
        let next = q + step;
        if !(next > low && next < high) {
            return None;
        }
        if step.abs() <= 1e-13 * q {
            return Some((q, slope));
        }
        let there = h(next);
        let secant = (there - value) / (next - q);
        // Far from the root the secant tells the truth; within noise of it the old slope is the better one.
        if secant < 0.0 {
            slope = secant;
        } else if there.abs() > 10.0 * accuracy_psi {
            return None;
        }
        (q, value) = (next, there);
    }
    None
}
