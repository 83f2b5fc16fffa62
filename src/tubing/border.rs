//! Where a branch of a model ends inside a step.
//!
//! The margin that the model reports is followed along the cubic Hermite interpolant of the step to its sign change; a
//! new step ends there, and its end is corrected by a secant.

use super::march::{March, Step};
use super::model::{Branch, Hydraulics};
use super::path::Stretch;
use super::slope::Slope;

/// A margin no larger than this is on the border.
const ON_BORDER: f64 = 1e-8;

impl<M: Hydraulics> March<'_, M> {
    /// The part of a step after which its branch ends; `None`: it does not.
    pub(super) fn switch(
        &self,
        stretch: &Stretch,
        from: (f64, f64, Slope),
        step: &Step,
        h: f64,
        branch: Branch,
    ) -> Option<f64> {
        let (md, p, start) = from;
        let margin = |x: f64| {
            let pressure = hermite(x, h, (p, start.psi_ft), (step.pressure_psia, step.end.psi_ft));
            self.slope(stretch, md + x * h, pressure, branch).margin
        };
        let (mut inside, mut inside_margin) = (0.0, start.margin);
        if inside_margin <= ON_BORDER {
            // A branch begins on its own border, where rounding decides the sign: look a little inside. It may be short.
            let look = |x: f64| (x, margin(x));
            let found = [1.0 / 64.0, 1.0 / 1024.0, 1.0 / 65_536.0].into_iter().map(look).find(|at| at.1 > ON_BORDER);
            let Some(found) = found else { return Some(0.0) };
            (inside, inside_margin) = found;
        }
        let mut beyond = (step.end.margin < 0.0).then_some((1.0, step.end.margin));
        if beyond.is_none() {
            // A stage was beyond, or may have missed an excursion.
            for x in [0.25, 0.4, 0.5, 0.6, 0.75] {
                let at = margin(x);
                if at < 0.0 {
                    beyond = Some((x, at));
                    break;
                }
                (inside, inside_margin) = (x, at);
            }
        }
        let (mut beyond, mut beyond_margin) = beyond?;
        // False position with the correction of Illinois, as far as the step's own correction can take it from there.
        let mut last_side = 0;
        for _ in 0..40 {
            if (beyond - inside) * h.abs() < 1e-7 {
                break;
            }
            let x = inside + (beyond - inside) * inside_margin / (inside_margin - beyond_margin);
            let at = margin(x);
            if at.abs() < ON_BORDER {
                return Some(x);
            }
            if at > 0.0 {
                (inside, inside_margin) = (x, at);
                if last_side == 1 {
                    beyond_margin *= 0.5;
                }
                last_side = 1;
            } else {
                (beyond, beyond_margin) = (x, at);
                if last_side == -1 {
                    inside_margin *= 0.5;
                }
                last_side = -1;
            }
        }
        Some(0.5 * (inside + beyond))
    }

    /// The border near the end of a step that was to end on it, by a secant on the margin; `None` when the step missed it.
    pub(super) fn corrected(
        &self,
        stretch: &Stretch,
        from: (f64, f64, Slope),
        step: &Step,
        h: f64,
        branch: Branch,
    ) -> Option<(f64, f64)> {
        let (md, p, start) = from;
        let back = -0.02 * h;
        let pressure = hermite(0.98, h, (p, start.psi_ft), (step.pressure_psia, step.end.psi_ft));
        let before = self.slope(stretch, md + 0.98 * h, pressure, branch);
        let shift = -step.end.margin * back / (before.margin - step.end.margin);
        let bend = (before.psi_ft - step.end.psi_ft) / back;
        let at = (md + h + shift, step.pressure_psia + shift * (step.end.psi_ft + 0.5 * shift * bend));
        (shift.abs() <= 0.02 * h.abs()).then_some(at)
    }
}

/// Cubic Hermite interpolant at the part `x` of a step of length `h` between two values and slopes.
#[inline]
fn hermite(x: f64, h: f64, (p0, f0): (f64, f64), (p1, f1): (f64, f64)) -> f64 {
    let rise = p1 - p0;
    p0 + x * (rise + (1.0 - x) * ((1.0 - x) * (h * f0 - rise) + x * (rise - h * f1)))
}
