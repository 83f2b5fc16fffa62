//! Where the flow lingers on the border of two branches.
//!
//! On some borders each branch drives the flow to the other: laminar flow may raise the Reynolds number above 2,100 and
//! turbulent flow lower it below, a film may hold only while it is not taken as one. No branch holds there, but the equation
//! has one solution in the sense of Filippov (1988): the flow stays on the border, its gradient a mixture of the two, until
//! one of them lets go. The pressure then follows from the border itself.

use super::march::{March, Progress};
use super::model::{Branch, Hydraulics};
use super::path::Stretch;
use super::slope::Slope;

/// A branch that would end at once and has no border to slide on is left unwatched for a while, as a change of pressure
/// relative to the pressure; it doubles each time.
pub(super) const UNWATCHED: f64 = 2e-4;
/// Steps on a border: first, shortest and longest, as changes of pressure relative to the pressure.
const FIRST: f64 = 1e-4;
const SHORTEST: f64 = 1e-6;
const LONGEST: f64 = 0.01;
/// Distance over which the margin's course is seen, likewise.
const AHEAD: f64 = 1e-5;
/// Largest margin of a point taken as on the border.
const ON_BORDER: f64 = 1e-9;

/// A point on a border.
#[derive(Clone, Copy)]
struct Point {
    md: f64,
    psia: f64,
}

/// Which way the two branches drive from a point on their border.
enum Drive {
    /// Both towards it; the slope that stays on it, psi/ft.
    Stay(f64),
    /// The branch leads away from it.
    Leave(Branch),
}

impl<M: Hydraulics> March<'_, M> {
    /// Goes along the border of two branches as far as they keep the flow there, and gives the branch that goes on;
    /// `None`: not a step was possible.
    pub(super) fn slide(
        &self,
        stretch: &Stretch,
        progress: &mut Progress,
        end_md_ft: f64,
        (inner, outer): (Branch, Branch),
    ) -> Option<Branch> {
        let direction = (end_md_ft - progress.md_ft).signum();
        let mut at = Point { md: progress.md_ft, psia: progress.pressure_psia };
        let Drive::Stay(mut slope) = self.drive(stretch, at, direction, (inner, outer)) else { return None };
        let mut step = FIRST;
        let mut next = None;
        while next.is_none() {
            let rest = (end_md_ft - at.md).abs();
            let length = step * at.psia / slope.max(1e-12);
            let whole = length >= rest;
            let h = direction * length.min(rest);
            let md = if whole { end_md_ft } else { at.md + h };
            let landed = self.on_border(stretch, Point { md, psia: at.psia + h * slope }, inner);
            let drive = landed.map(|point| (point, self.drive(stretch, point, direction, (inner, outer))));
            match drive {
                Some((point, Drive::Stay(new))) => {
                    (at, slope) = (point, new);
                    step = (2.0 * step).min(LONGEST);
                    if whole {
                        next = Some(inner);
                    }
                }
                Some((point, Drive::Leave(branch))) if step <= SHORTEST => {
                    at = point;
                    next = Some(branch);
                }
                None if step <= SHORTEST => break,
                _ => step *= 0.25,
            }
        }
        if at.md == progress.md_ft {
            return None;
        }
        (progress.md_ft, progress.pressure_psia) = (at.md, at.psia);
        next.or_else(|| Some(self.branch(stretch, at.md, at.psia)))
    }

    /// The pressure at a depth at which the margin of a branch is zero, by secants from one nearby.
    fn on_border(&self, stretch: &Stretch, from: Point, inner: Branch) -> Option<Point> {
        let margin = |psia: f64| self.slope(stretch, from.md, psia, inner).margin;
        let (mut a, mut b) = (from.psia, from.psia * (1.0 + AHEAD));
        let (mut margin_a, mut margin_b) = (margin(a), margin(b));
        for _ in 0..8 {
            if margin_b.abs() < 1e-11 || margin_b == margin_a {
                break;
            }
            let next = b - margin_b * (b - a) / (margin_b - margin_a);
            if !(next > 0.5 * from.psia && next < 2.0 * from.psia) {
                return None;
            }
            (a, margin_a) = (b, margin_b);
            (b, margin_b) = (next, margin(next));
        }
        (margin_b.abs() < 1e3 * ON_BORDER).then_some(Point { md: from.md, psia: b })
    }

    fn drive(&self, stretch: &Stretch, at: Point, direction: f64, (inner, outer): (Branch, Branch)) -> Drive {
        let here = self.slope(stretch, at.md, at.psia, inner);
        let slopes = [here.psi_ft, self.slope(stretch, at.md, at.psia, outer).psi_ft];
        let ahead = direction * AHEAD * at.psia / slopes[0].max(slopes[1]).max(1e-12);
        let [on_inner, on_outer] =
            slopes.map(|f| self.slope(stretch, at.md + ahead, at.psia + f * ahead, inner).margin - here.margin);
        if on_inner >= 0.0 {
            Drive::Leave(inner)
        } else if on_outer <= 0.0 {
            Drive::Leave(outer)
        } else {
            let share = on_outer / (on_outer - on_inner);
            Drive::Stay(share * slopes[0] + (1.0 - share) * slopes[1])
        }
    }

    /// Whether a branch that begins on its border leads back across it.
    pub(super) fn ends_at_once(
        &self,
        stretch: &Stretch,
        progress: &Progress,
        direction: f64,
        branch: Branch,
        start: Slope,
    ) -> bool {
        let ahead = direction * AHEAD * progress.pressure_psia / start.psi_ft.max(1e-12);
        let at = Point { md: progress.md_ft + ahead, psia: progress.pressure_psia + start.psi_ft * ahead };
        self.slope(stretch, at.md, at.psia, branch).margin < start.margin.min(0.0) - ON_BORDER
    }

    /// Goes on from where the second branch ends as it begins: along its border with the first one, the branch before it; else
    /// unwatched for a while. Gives the branch that follows and the slope on it.
    pub(super) fn linger(
        &self,
        stretch: &Stretch,
        progress: &mut Progress,
        end_md_ft: f64,
        (before, branch): (Option<Branch>, Branch),
        start: Slope,
    ) -> (Branch, Slope) {
        if let Some(next) = before.and_then(|before| self.slide(stretch, progress, end_md_ft, (before, branch))) {
            return (next, self.slope(stretch, progress.md_ft, progress.pressure_psia, next));
        }
        let rest = end_md_ft - progress.md_ft;
        let pressure_length = progress.pressure_psia / start.psi_ft.max(1e-12);
        let h = rest.signum() * (progress.unwatched * pressure_length).min(rest.abs());
        progress.unwatched *= 2.0;
        let step = self.step(stretch, progress.md_ft, progress.pressure_psia, start, h, branch);
        progress.md_ft = if h == rest { end_md_ft } else { progress.md_ft + h };
        progress.pressure_psia = step.pressure_psia;
        self.begin(stretch, progress.md_ft, progress.pressure_psia)
    }
}
