//! Integration of the pressure along the path.
//!
//! `dp/dL` is integrated by the 5(4) pair of Dormand and Prince (1980), the fifth order carried on. The result feeds
//! a root finder inside an integrator, so it must depend smoothly on rate, water cut, gas-oil ratio and wellhead
//! pressure, which ordinary step control spoils. Here every step is a *continuous* function of what came before:
//!
//! - the next step follows from the last error without thresholds; a step cut short by the end of a stretch counts
//!   in proportion to its length, so that a vanishing last step changes nothing;
//! - a step whose error is too large is repeated at `h (tolerance/error)^(1/4)`, which is the same step at the
//!   threshold itself;
//! - the branch of the model (flow pattern, laminar or turbulent, gas or no gas) is held within a step, and its end
//!   is located (see `border`). Stepping over one would cost 0.2 to 10 psi.

use super::heat;
use super::model::{Branch, Hydraulics};
use super::path::Stretch;
use super::slide::UNWATCHED;
use super::slope::Slope;
use super::traverse::Stream;
use crate::fluid::{BlackOil, CappedOil};

/// Largest change of pressure in a step, relative to the pressure.
const STEP_RELATIVE: f64 = 0.35;
/// First step: change of pressure relative to the pressure.
const FIRST_STEP_RELATIVE: f64 = 0.15;
/// Error at which a step aims, in units of the one at which it is repeated.
const AIM: f64 = 0.4;
/// Error below which the next step grows no further, in the same units.
const LEAST_ERROR: f64 = 0.001;
/// Tolerance of one step's error estimate relative to the accuracy asked of the whole traverse.
const STEP_SHARE: f64 = 0.004;
/// Weight of the third difference of the slopes in the error estimate.
const BEND_SHARE: f64 = 1e-4;
/// A branch that ends this soon after its begin lingers on its border, see `slide`. As a change of
/// pressure relative to the pressure, like the two below.
const LEAST_BRANCH: f64 = 1e-8;
/// Beyond a border the next branch is chosen this change of pressure ahead, relative to the pressure.
const LOOK_AHEAD: f64 = 1e-6;
/// How often a step is repeated, and by how much its bar rises each time.
const MOST_REPETITIONS: u32 = 4;
const BAR_RISE: f64 = 4.0;
/// Steps after which the rest of a stretch is taken in one.
const MOST_STEPS: u32 = 4000;
/// The march upwards gives up below this pressure, psia.
const LEAST_PRESSURE_PSIA: f64 = 1.0;

/// One model, one fluid, one stream.
pub(crate) struct March<'a, M> {
    pub(super) model: &'a M,
    pub(super) fluid: CappedOil<'a>,
    pub(super) rate_stb_s: f64,
    pub(super) oil_fraction: f64,
    pub(super) water_fraction: f64,
    pub(super) gor_scf_stb: f64,
    pub(super) per_gor_stb_scf: f64,
    pub(super) slip_factor: f64,
    tolerance_psi: f64,
    liquid_btu_lb_degf: f64,
}

/// Where the march stands.
pub(crate) struct Progress {
    pub md_ft: f64,
    pub pressure_psia: f64,
    /// Largest kinetic term met at the ends of steps.
    pub kinetic: f64,
    /// Length wished for the next step, ft; 0: none yet.
    wish_ft: f64,
    pub(super) unwatched: f64,
    pub(crate) steps: u32,
    /// Whether a restriction was critical.
    pub choked: bool,
}

impl Progress {
    pub fn new(md_ft: f64, pressure_psia: f64) -> Self {
        Self { md_ft, pressure_psia, kinetic: 0.0, wish_ft: 0.0, unwatched: UNWATCHED, steps: 0, choked: false }
    }

    /// Through the restriction at the bottom of a stretch; whether there is one.
    pub fn pass_down<M: Hydraulics>(&mut self, march: &March<'_, M>, stretch: &Stretch) -> bool {
        let Some(throat) = &stretch.throat else { return false };
        let (pressure_psia, critical) = throat.down(march, stretch, self.md_ft, self.pressure_psia);
        self.pressure_psia = pressure_psia;
        self.choked |= critical;
        true
    }
}

/// One attempted step.
pub(super) struct Step {
    pub pressure_psia: f64,
    pub end: Slope,
    error_psi: f64,
    least_margin: f64,
    /// Whether the margin may be lower between the stages than at any of them.
    valley: bool,
}

impl<'a, M: Hydraulics> March<'a, M> {
    pub fn new(model: &'a M, fluid: &'a BlackOil, stream: &Stream, slip_factor: f64, accuracy_psi: f64) -> Self {
        let water_fraction = held(stream.water_cut, 1.0);
        let gor_scf_stb = held(stream.gor_scf_stb, 1e8);
        Self {
            model,
            fluid: fluid.capped(gor_scf_stb),
            rate_stb_s: held(stream.liquid_rate_stb_d, 1e8) / 86_400.0,
            oil_fraction: 1.0 - water_fraction,
            water_fraction,
            gor_scf_stb,
            per_gor_stb_scf: 1.0 / gor_scf_stb.max(1e-300),
            slip_factor,
            tolerance_psi: accuracy_psi * STEP_SHARE,
            liquid_btu_lb_degf: heat::liquid_btu_lb_degf(fluid, water_fraction),
        }
    }

    /// Whether nothing flows.
    pub fn at_rest(&self) -> bool {
        self.rate_stb_s == 0.0
    }

    /// Heat capacity of the liquid.
    pub fn liquid_btu_lb_degf(&self) -> f64 {
        self.liquid_btu_lb_degf
    }

    /// Marches to a depth within a stretch, downwards or upwards, by way of the corners of its temperature. False: the
    /// pressure ran out on the way up.
    pub fn advance(&self, stretch: &Stretch, progress: &mut Progress, end_md_ft: f64) -> bool {
        loop {
            let stop_md_ft = stretch.next_stop_ft(progress.md_ft, end_md_ft);
            if !self.advance_to(stretch, progress, stop_md_ft) {
                return false;
            }
            if stop_md_ft == end_md_ft {
                return true;
            }
        }
    }

    /// One step of Dormand and Prince's pair on one branch; `h` is negative on the way up.
    #[inline]
    pub(super) fn step(&self, stretch: &Stretch, md: f64, p: f64, start: Slope, h: f64, branch: Branch) -> Step {
        let k1 = start.psi_ft;
        let mut least_margin = f64::INFINITY;
        let mut stage = |c: f64, slope: f64| {
            let at = self.slope(stretch, md + c * h, p + h * slope, branch);
            least_margin = least_margin.min(at.margin);
            at
        };
        let k2 = stage(0.2, k1 / 5.0).psi_ft;
        let third = stage(0.3, 3.0 / 40.0 * k1 + 9.0 / 40.0 * k2);
        let k3 = third.psi_ft;
        let fourth = stage(0.8, 44.0 / 45.0 * k1 - 56.0 / 15.0 * k2 + 32.0 / 9.0 * k3);
        let k4 = fourth.psi_ft;
        let k5 = stage(
            8.0 / 9.0,
            19372.0 / 6561.0 * k1 - 25360.0 / 2187.0 * k2 + 64448.0 / 6561.0 * k3 - 212.0 / 729.0 * k4,
        )
        .psi_ft;
        let k6 = stage(
            1.0,
            9017.0 / 3168.0 * k1 - 355.0 / 33.0 * k2 + 46732.0 / 5247.0 * k3 + 49.0 / 176.0 * k4
                - 5103.0 / 18656.0 * k5,
        )
        .psi_ft;
        let mean =
            35.0 / 384.0 * k1 + 500.0 / 1113.0 * k3 + 125.0 / 192.0 * k4 - 2187.0 / 6784.0 * k5 + 11.0 / 84.0 * k6;
        let end = stage(1.0, mean);
        let error = 71.0 / 57600.0 * k1 - 71.0 / 16695.0 * k3 + 71.0 / 1920.0 * k4 - 17253.0 / 339_200.0 * k5
            + 22.0 / 525.0 * k6
            - end.psi_ft / 40.0;
        // The fourth difference, which `error` measures, may vanish by chance; the third then still tells of a bend.
        let third_difference = -k1 / 0.24 + third.psi_ft / 0.105 - fourth.psi_ft / 0.08 + end.psi_ft / 0.14;
        let bend = BEND_SHARE * third_difference;
        let error = (error * error + bend * bend).sqrt();
        let valley = third.margin < start.margin && fourth.margin < end.margin;
        Step { pressure_psia: p + h * mean, end, error_psi: (h * error).abs(), least_margin, valley }
    }

    /// As `advance`, where nothing in the temperature is in the way.
    fn advance_to(&self, stretch: &Stretch, progress: &mut Progress, end_md_ft: f64) -> bool {
        let direction = (end_md_ft - progress.md_ft).signum();
        let (mut branch, mut start) = self.begin(stretch, progress.md_ft, progress.pressure_psia);
        // The branch left at the last border.
        let mut before = None;
        loop {
            progress.kinetic = progress.kinetic.max(start.kinetic);
            if progress.pressure_psia < LEAST_PRESSURE_PSIA {
                return false;
            }
            let (md, p) = (progress.md_ft, progress.pressure_psia);
            let rest = (end_md_ft - md) * direction;
            if rest <= 1e-9 {
                return true;
            }
            let pressure_length = p / start.psi_ft.max(1e-12);
            if progress.wish_ft == 0.0 {
                progress.wish_ft = FIRST_STEP_RELATIVE * pressure_length;
            }
            let course = if direction > 0.0 { start.course.rise } else { start.course.fall };
            let mut wish = progress.wish_ft.min(course.min(STEP_RELATIVE) * pressure_length);
            progress.steps += 1;
            if progress.steps > MOST_STEPS {
                wish = rest;
            }
            let mut length = wish.min(rest);
            let mut step = self.step(stretch, md, p, start, direction * length, branch);
            let mut switched = false;
            let mut at_border = (0.0, 0.0);
            for _ in 0..5 {
                if step.least_margin >= 0.0 && !step.valley {
                    break;
                }
                let Some(part) = self.switch(stretch, (md, p, start), &step, direction * length, branch) else { break };
                if part * length < LEAST_BRANCH * pressure_length {
                    length = 0.0;
                    break;
                }
                length *= part;
                step = self.step(stretch, md, p, start, direction * length, branch);
                let end = self.corrected(stretch, (md, p, start), &step, direction * length, branch);
                if let Some(end) = end.filter(|end| (end_md_ft - end.0) * direction >= 0.0) {
                    switched = true;
                    at_border = end;
                    break;
                }
            }
            if length == 0.0 {
                (branch, start) = self.linger(stretch, progress, end_md_ft, (before, branch), start);
                before = None;
                continue;
            }
            // The bar rises with every repetition: where the error does not fall with the step, a chain of repetitions
            // would magnify the smallest change of its beginning.
            let mut bar = self.tolerance_psi;
            for _ in 0..MOST_REPETITIONS {
                if step.error_psi <= bar || progress.steps > MOST_STEPS {
                    break;
                }
                let factor = (bar / step.error_psi).sqrt().sqrt().max(0.2);
                wish *= factor;
                length *= factor;
                switched = false;
                step = self.step(stretch, md, p, start, direction * length, branch);
                bar *= BAR_RISE;
            }
            progress.wish_ft = self.next_wish(wish, length, step.error_psi);
            if length >= rest {
                progress.md_ft = end_md_ft;
            } else {
                progress.md_ft = md + direction * length;
            }
            progress.pressure_psia = step.pressure_psia;
            start = step.end;
            if switched {
                (progress.md_ft, progress.pressure_psia) = at_border;
                let left = Some(branch);
                let ahead = direction * (LOOK_AHEAD * pressure_length).min(rest);
                branch = self.branch(stretch, progress.md_ft + ahead, progress.pressure_psia + start.psi_ft * ahead);
                start = self.slope(stretch, progress.md_ft, progress.pressure_psia, branch);
                before = left;
                if self.ends_at_once(stretch, progress, direction, branch, start) {
                    (branch, start) = self.linger(stretch, progress, end_md_ft, (before, branch), start);
                    before = None;
                }
            }
        }
    }

    /// The wish for the next step after one of `length`, which may have been cut short of its own wish.
    fn next_wish(&self, wish: f64, length: f64, error_psi: f64) -> f64 {
        let relative = error_psi / self.tolerance_psi;
        let error = (relative * relative + LEAST_ERROR * LEAST_ERROR).sqrt();
        if length == wish {
            return wish * fifth_root(AIM / error);
        }
        let weight = length / wish;
        // Geometric mean of the old wish and the best length, by how much of the wish was tried.
        let best = weight * fifth_root(AIM / error);
        if best > 0.0 { wish * best.powf(weight) } else { wish }
    }
}

/// A value held between 0 and `most`; not `clamp`, since a NaN becomes 0 here.
fn held(value: f64, most: f64) -> f64 {
    if value > 0.0 { value.min(most) } else { 0.0 }
}

#[inline]
fn fifth_root(x: f64) -> f64 {
    x.powf(0.2)
}
