//! The slip factor and the effective roughness of one model, fitted to a well's measurements.
//!
//! # Method
//! Every station counts alike: the sum of squared pressure misses in psi, since a gauge errs by psi. The search runs in logistic
//! coordinates of the slip factor and of the logarithm of the roughness, so that it never leaves their bounds; intervals are
//! carried back by the slopes there. Two fits are made: of the slip factor alone, with the roughness as stated, and of both. The
//! roughness is taken only where the points tell it: the second fit must be better by Fisher's test, the interval of the roughness
//! must not span more than a factor of ten, and a tubing of that roughness must exist. Otherwise it is held and the reason is told.

use super::least_squares::{self, Estimates, Settings, student_t};
use super::measured::{Measurement, Tuning};
use crate::fluid::BlackOil;
use crate::tubing::TubingMethod;

/// Bounds of the search. No column is told from another outside those of the slip factor.
const SLIP: (f64, f64) = (0.02, 6.0);
const ROUGHNESS_IN: (f64, f64) = (1e-6, 0.1);
/// Part of the narrowest inside diameter beyond which the friction factor is not known.
const ROUGHEST_PART: f64 = 0.04;
/// Outside this a slip factor repairs something else: rate, gas, water or depth.
pub const LIKELY_SLIP: (f64, f64) = (0.5, 2.0);
/// Rougher than this no tubing is that has not lost its bore to scale (new pipe 0.0006 to 0.002, corroded up to 0.01), in.
pub const ROUGHEST_IN: f64 = 0.015;
/// Smoother than this is smoother than drawn tube, in.
const SMOOTHEST_IN: f64 = 5e-6;
/// Relative closeness to a bound, in the search's own coordinates, that counts as lying on it.
const ON_BOUND: f64 = 0.005;
/// An interval of the roughness that spans more than this factor tells nothing.
const WIDEST: f64 = 10.0;
/// Correlation from which slip and roughness can hardly be told apart.
const EXCHANGEABLE: f64 = 0.95;
/// Durbin and Watson's (1950) statistic below which misses follow each other (1 is well below all its lower limits for 15 points).
const FOLLOWING: f64 = 1.0;
/// Step of the differences in the search's coordinates.
const STEP: f64 = 1e-3;
/// Relative change of the sum of squares that ends the search: below what the traverse's own accuracy lets it see.
const TOLERANCE: f64 = 1e-9;

/// Why the roughness is held at its stated value.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Held {
    /// Two figures need more points than there are.
    TooFewPoints,
    /// Letting it free makes the fit no better than chance would.
    NoGain,
    /// Its interval spans more than a factor of ten.
    Undetermined,
    /// It would be so rough that no tubing is, or smoother than any.
    Unphysical,
    /// The fit of both did not settle.
    Unsettled,
}

/// A fit of both, told where the roughness is held all the same.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Free {
    /// Slip factor.
    pub slip_factor: f64,
    /// Roughness, in.
    pub roughness_in: f64,
    /// Its interval, in.; `None` where the points do not give one.
    pub roughness_interval_in: Option<(f64, f64)>,
    /// Correlation of the slip factor with the logarithm of the roughness.
    pub correlation: Option<f64>,
}

/// Something to know about a fit.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Finding {
    /// The interval of the slip factor excludes 1: the model as published does not describe the well.
    ExcludesOne,
    /// It includes 1.
    IncludesOne,
    /// There are not enough points for an interval.
    NoInterval,
    /// The slip factor is outside what slip can be blamed for.
    UnlikelySlip,
    /// The slip factor lies on the bound of the search: no slip factor meets the points.
    SlipOnBound,
    /// Slip and roughness do nearly the same to these points.
    Exchangeable,
    /// The misses that are left follow each other along depth: intervals are too narrow.
    MissesFollow,
}

/// A fitted model.
#[derive(Debug, Clone, PartialEq)]
pub struct Fitted {
    /// Slip factor.
    pub slip_factor: f64,
    /// Its interval.
    pub slip_interval: Option<(f64, f64)>,
    /// Effective roughness, in.; `None`: it is held.
    pub roughness_in: Option<f64>,
    /// The roughness that is held then, in.; `None`: that of each stretch as stated.
    pub held_roughness_in: Option<f64>,
    /// Its interval, in.
    pub roughness_interval_in: Option<(f64, f64)>,
    /// The slip factor alone, at the roughness as stated, and its interval.
    pub alone: (f64, Option<(f64, f64)>),
    /// Why the roughness is held, and what the fit of both gave.
    pub held: Option<(Held, Option<Free>)>,
    /// Correlation of the slip factor with the logarithm of the roughness where both were fitted.
    pub correlation: Option<f64>,
    /// Standard deviation of the misses that are left, psi.
    pub deviation_psi: Option<f64>,
    /// Points less fitted figures.
    pub degrees_of_freedom: usize,
    /// What is to be known.
    pub findings: Vec<Finding>,
}

impl Fitted {
    /// The model with this fit.
    pub fn tuning(&self, method: TubingMethod) -> Tuning {
        Tuning { method, slip_factor: self.slip_factor, roughness_in: self.roughness_in.or(self.held_roughness_in) }
    }

    /// Whether the fitted figures can be what they are called.
    pub fn plausible(&self) -> bool {
        !self.findings.iter().any(|f| matches!(f, Finding::UnlikelySlip | Finding::SlipOnBound))
    }
}

/// A bounded figure and the search's coordinate of it.
#[derive(Clone, Copy)]
struct Bounded {
    low: f64,
    high: f64,
}

impl Bounded {
    fn value(self, u: f64) -> f64 {
        self.low + (self.high - self.low) / (1.0 + (-u).exp())
    }

    fn coordinate(self, value: f64) -> f64 {
        let share = ((value - self.low) / (self.high - self.low)).clamp(1e-3, 1.0 - 1e-3);
        (share / (1.0 - share)).ln()
    }

    fn slope(self, u: f64) -> f64 {
        let part = 1.0 / (1.0 + (-u).exp());
        (self.high - self.low) * part * (1.0 - part)
    }

    fn on_bound(self, value: f64) -> bool {
        let share = (value - self.low) / (self.high - self.low);
        !(ON_BOUND..=1.0 - ON_BOUND).contains(&share)
    }
}

const SLIP_SCALE: Bounded = Bounded { low: SLIP.0, high: SLIP.1 };

fn roughness_scale(measurements: &[Measurement]) -> Bounded {
    let narrowest_in = measurements.iter().map(Measurement::narrowest_in).fold(f64::INFINITY, f64::min);
    Bounded { low: ROUGHNESS_IN.0.ln(), high: ROUGHNESS_IN.1.min(ROUGHEST_PART * narrowest_in).ln() }
}

/// Fits a model to a well's measurements. `untuned` is the model as published, whose roughness is held where the points do not tell
/// one; `start_in` is the roughness from which the search starts.
///
/// # Errors
/// A sentence when the model cannot be brought through the points at all.
pub fn fit(untuned: &Tuning, measurements: &[Measurement], fluid: &BlackOil, start_in: f64) -> Result<Fitted, String> {
    let Tuning { method, roughness_in: held_roughness_in, .. } = *untuned;
    let start_in = held_roughness_in.unwrap_or(start_in);
    let misses = |tuning: &Tuning| -> Vec<f64> { measurements.iter().flat_map(|m| m.misses(fluid, tuning)).collect() };
    let slip_at = |u: &[f64]| SLIP_SCALE.value(u[0]);
    let rough = roughness_scale(measurements);
    let rough_at = |u: &[f64]| rough.value(u[1]).exp();
    let start = SLIP_SCALE.coordinate(1.0);
    let alone = least_squares::fit(
        |u| misses(&Tuning { method, slip_factor: slip_at(u), roughness_in: held_roughness_in }),
        &[start],
        Settings { typical: &[1.0], step: STEP, tolerance: TOLERANCE },
    )?;
    let points = alone.degrees_of_freedom + 1;
    let both = (points > 2).then(|| {
        let from = [alone.values[0], rough.coordinate(start_in.max(ROUGHNESS_IN.0).ln())];
        least_squares::fit(
            |u| misses(&Tuning { method, slip_factor: slip_at(u), roughness_in: Some(rough_at(u)) }),
            &from,
            Settings { typical: &[1.0, 1.0], step: STEP, tolerance: TOLERANCE },
        )
    });
    let (held, both) = match both {
        None => (Some((Held::TooFewPoints, None)), None),
        Some(Err(_)) => (Some((Held::Unsettled, None)), None),
        Some(Ok(both)) => {
            let free = free(&both, rough);
            (why_held(&alone, &both, &free).map(|why| (why, Some(free))), Some((both, free)))
        }
    };
    let (used, roughness) = match (&held, &both) {
        (None, Some((both, free))) => (both, Some(*free)),
        _ => (&alone, None),
    };
    let (slip_factor, slip_interval) = slip(used);
    let mut fitted = Fitted {
        slip_factor,
        slip_interval,
        alone: slip(&alone),
        roughness_in: roughness.map(|f| f.roughness_in),
        held_roughness_in,
        roughness_interval_in: roughness.and_then(|f| f.roughness_interval_in),
        held,
        correlation: roughness.and_then(|f| f.correlation),
        deviation_psi: used.residual_deviation(),
        degrees_of_freedom: used.degrees_of_freedom,
        findings: Vec::new(),
    };
    let left: Vec<Vec<f64>> = measurements.iter().map(|m| m.misses(fluid, &fitted.tuning(method))).collect();
    fitted.findings = findings(&fitted, &left);
    Ok(fitted)
}

/// The slip factor and its interval.
fn slip(found: &Estimates) -> (f64, Option<(f64, f64)>) {
    let value = SLIP_SCALE.value(found.values[0]);
    let half = found.half_width(0).map(|half| half * SLIP_SCALE.slope(found.values[0]));
    (value, half.filter(|h| h.is_finite()).map(|h| ((value - h).max(0.0), value + h)))
}

fn free(both: &Estimates, rough: Bounded) -> Free {
    let ln_in = rough.value(both.values[1]);
    let half = both.half_width(1).map(|half| half * rough.slope(both.values[1])).filter(|h| h.is_finite());
    Free {
        slip_factor: SLIP_SCALE.value(both.values[0]),
        roughness_in: ln_in.exp(),
        // On a bound the slope is lost, and with it the interval.
        roughness_interval_in: half.filter(|h| *h < 20.0).map(|h| ((ln_in - h).exp(), (ln_in + h).exp())),
        correlation: both.correlation,
    }
}

fn why_held(alone: &Estimates, both: &Estimates, free: &Free) -> Option<Held> {
    let dof = both.degrees_of_freedom;
    // Fisher's ratio for one more figure is the square of Student's t.
    let gain = (alone.sum_of_squares - both.sum_of_squares) / (both.sum_of_squares / dof as f64);
    if gain.is_nan() || gain <= student_t(dof).powi(2) {
        return Some(Held::NoGain);
    }
    if free.roughness_in > ROUGHEST_IN || free.roughness_in < SMOOTHEST_IN {
        return Some(Held::Unphysical);
    }
    if !both.settled {
        return Some(Held::Unsettled);
    }
    let told = free.roughness_interval_in.is_some_and(|(low, high)| high <= WIDEST * low);
    (!told).then_some(Held::Undetermined)
}

fn findings(fit: &Fitted, left: &[Vec<f64>]) -> Vec<Finding> {
    let mut out = Vec::new();
    if SLIP_SCALE.on_bound(fit.slip_factor) {
        out.push(Finding::SlipOnBound);
    } else {
        out.push(match fit.slip_interval {
            None => Finding::NoInterval,
            Some((low, high)) if low <= 1.0 && high >= 1.0 => Finding::IncludesOne,
            Some(_) => Finding::ExcludesOne,
        });
        if !(LIKELY_SLIP.0..=LIKELY_SLIP.1).contains(&fit.slip_factor) {
            out.push(Finding::UnlikelySlip);
        }
    }
    if fit.correlation.is_some_and(|c| c.abs() > EXCHANGEABLE) {
        out.push(Finding::Exchangeable);
    }
    // Misses are followed within a survey, never from one into the next.
    let steps: f64 = left.iter().flat_map(|one| one.windows(2)).map(|pair| (pair[1] - pair[0]).powi(2)).sum();
    let squares: f64 = left.iter().filter(|one| one.len() > 1).flatten().map(|x| x * x).sum();
    let long = left.iter().map(Vec::len).max().unwrap_or(0) >= 6;
    // What is left below a gauge's reading follows nothing.
    let seen = fit.deviation_psi.is_some_and(|psi| psi > 1.0);
    if long && seen && steps < FOLLOWING * squares {
        out.push(Finding::MissesFollow);
    }
    out
}
