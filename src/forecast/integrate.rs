//! The one module that names `ode_solvers`: a smooth stretch integrated with its events located.
//!
//! # Method
//! Dormand and Prince (1980), 5(4) with continuous output, in local time. A stretch ends at its last instant or where one of
//! its watches (signed margins, positive while the stretch is valid) reaches zero; the instant is found on the interpolant by
//! Brent (1973). A watch that dips and recovers between step ends is caught by its parabola through three step ends, and the
//! interpolant is then sampled there. A right-hand side that fails hands NaN to the solver, which rejects the step and
//! shrinks it: trial states beyond the physics do no harm.

use crate::roots::brent;
use nalgebra::DVector;
use ode_solvers::continuous_output_model::ContinuousOutputModel;
use ode_solvers::{Dopri5, OutputType, System};
use std::cell::RefCell;

/// State vector.
pub type State = DVector<f64>;

/// Samples of the interpolant per step where a dip is suspected.
const DIP_SAMPLES: usize = 12;
/// Steps after which a stretch is given up.
const MOST_STEPS: u32 = 40_000;
/// The solver's own test for stiffness would give up a tank that follows its injection within days. Such a run only costs steps, so
/// the test is put off for ever.
const NO_STIFFNESS_TEST: u32 = u32::MAX;
/// Width in days to which events are located.
const EVENT_WIDTH_DAYS: f64 = 1e-7;

/// The right-hand side and the watches of one stretch; time is absolute, in days.
pub trait Problem {
    /// What can go wrong.
    type Error: Clone;
    /// Rates of change of the state.
    ///
    /// # Errors
    /// Where the physics has no answer.
    fn derivative(&self, t_days: f64, y: &[f64], dy: &mut [f64]) -> Result<(), Self::Error>;
    /// Number of watches.
    fn watch_count(&self) -> usize;
    /// Signed margins, positive while the stretch is valid.
    ///
    /// # Errors
    /// Where the physics has no answer.
    fn watches(&self, t_days: f64, y: &[f64], out: &mut [f64]) -> Result<(), Self::Error>;
    /// One of the watches.
    ///
    /// # Errors
    /// Where the physics has no answer.
    fn watch(&self, index: usize, t_days: f64, y: &[f64]) -> Result<f64, Self::Error>;
}

/// Tolerances and step limits.
#[derive(Debug, Clone, Copy)]
pub struct Settings {
    /// Relative tolerance on the scaled state.
    pub rtol: f64,
    /// Absolute tolerance on the scaled state.
    pub atol: f64,
    /// Longest step, days.
    pub longest_step_days: f64,
    /// First step, days.
    pub first_step_days: f64,
}

/// A stretch that was integrated, with its interpolant.
#[derive(Debug, Clone)]
pub struct Stretch {
    /// Start, days.
    pub from_days: f64,
    /// End, days.
    pub to_days: f64,
    start: State,
    end: State,
    dense: Option<ContinuousOutputModel<f64, State>>,
}

impl Stretch {
    /// The state inside the stretch (clamped to it).
    pub fn at(&self, t_days: f64) -> State {
        if t_days >= self.to_days {
            return self.end.clone();
        }
        if t_days <= self.from_days {
            return self.start.clone();
        }
        self.dense.as_ref().and_then(|d| d.evaluate(t_days - self.from_days)).unwrap_or_else(|| self.end.clone())
    }
}

/// How a stretch ended.
#[derive(Debug, Clone)]
pub enum End<E> {
    /// At its last instant.
    Reached,
    /// Where this watch reached zero.
    Watch(usize),
    /// The physics has no answer beyond this point.
    Failed(E),
    /// The integrator gave up for this reason.
    GaveUp(String),
}

/// Work counted.
#[derive(Debug, Clone, Copy, Default)]
pub struct Effort {
    /// Accepted steps.
    pub steps: u64,
    /// Right-hand sides.
    pub right_hand_sides: u64,
}

/// Watch values at a step end: local time and values.
type Mark = (f64, Vec<f64>);

struct Notes<E> {
    failure: Option<E>,
    marks: Vec<Mark>,
    right_hand_sides: u64,
}

struct Rhs<'a, P: Problem> {
    problem: &'a P,
    from_days: f64,
    notes: &'a RefCell<Notes<P::Error>>,
}

impl<P: Problem> System<f64, State> for Rhs<'_, P> {
    fn system(&self, tau: f64, y: &State, dy: &mut State) {
        self.notes.borrow_mut().right_hand_sides += 1;
        if let Err(error) = self.problem.derivative(self.from_days + tau, y.as_slice(), dy.as_mut_slice()) {
            dy.fill(f64::NAN);
            // The first failure of a trial tells why; later stages only see its NaN.
            self.notes.borrow_mut().failure.get_or_insert(error);
        }
    }

    fn solout(&mut self, tau: f64, y: &State, _dy: &State) -> bool {
        let mut values = vec![0.0; self.problem.watch_count()];
        let outcome = self.problem.watches(self.from_days + tau, y.as_slice(), &mut values);
        let mut notes = self.notes.borrow_mut();
        if let Err(error) = outcome {
            notes.failure = Some(error);
            return true;
        }
        notes.failure = None;
        let stop = values.iter().any(|v| *v <= 0.0);
        notes.marks.push((tau, values));
        stop || dip_suspected(&notes.marks).is_some()
    }
}

/// A watch whose last three step ends fall and rise again so that a parabola through them dips well below the middle one.
fn dip_suspected(marks: &[Mark]) -> Option<usize> {
    let [.., a, b, c] = marks else { return None };
    (0..b.1.len()).find(|&i| {
        let (ya, yb, yc) = (a.1[i], b.1[i], c.1[i]);
        if !(yb <= ya && yb <= yc && yb > 0.0) {
            return false;
        }
        let (h1, h2) = (b.0 - a.0, c.0 - b.0);
        if h1 <= 0.0 || h2 <= 0.0 {
            return false;
        }
        let (s1, s2) = ((yb - ya) / h1, (yc - yb) / h2);
        let curvature = (s2 - s1) / (h1 + h2);
        let slope = s1 + curvature * h1;
        // Lowest point of the parabola, with room for what the parabola does not know.
        curvature > 0.0 && yb - 2.0 * slope * slope / (4.0 * curvature) - 0.05 * (ya.min(yc) - yb) <= 0.0
    })
}

/// Integrates from `from` (days, state) to `to_days`, or to the first event.
///
/// # Errors
/// The physics' own error when it has no answer at the very start.
pub fn integrate<P: Problem>(
    problem: &P,
    from_days: f64,
    start: &State,
    to_days: f64,
    settings: &Settings,
    effort: &mut Effort,
) -> Result<(Stretch, End<P::Error>), P::Error> {
    let mut dy = State::zeros(start.len());
    problem.derivative(from_days, start.as_slice(), dy.as_mut_slice())?;
    let count = problem.watch_count();
    let mut first = vec![0.0; count];
    problem.watches(from_days, start.as_slice(), &mut first)?;
    effort.right_hand_sides += 1;
    let notes = RefCell::new(Notes { failure: None, marks: vec![(0.0, first)], right_hand_sides: 0 });
    let span = to_days - from_days;
    let rhs = Rhs { problem, from_days, notes: &notes };
    let mut solver = Dopri5::from_param(
        rhs,
        0.0,
        span,
        span,
        start.clone(),
        settings.rtol,
        settings.atol,
        0.9,
        0.04,
        0.2,
        10.0,
        settings.longest_step_days,
        settings.first_step_days.min(span),
        MOST_STEPS,
        NO_STIFFNESS_TEST,
        OutputType::Continuous,
    );
    let mut dense = ContinuousOutputModel::default();
    let outcome = solver.integrate_with_continuous_output_model(&mut dense);
    let last = solver.x_out().last().copied().zip(solver.y_out().last().cloned());
    drop(solver);
    let notes = notes.into_inner();
    effort.right_hand_sides += notes.right_hand_sides;
    effort.steps += notes.marks.len() as u64 - 1;
    let Some((reached, end)) = last else {
        // Not one step was accepted.
        let stretch = Stretch { from_days, to_days: from_days, start: start.clone(), end: start.clone(), dense: None };
        return Ok((stretch, give_up(notes.failure, outcome.err().map(|e| e.to_string()))));
    };
    let mut stretch =
        Stretch { from_days, to_days: from_days + reached, start: start.clone(), end, dense: Some(dense) };
    if let Some((t, index)) = locate(problem, &stretch, &notes.marks)? {
        stretch.end = stretch.at(t);
        stretch.to_days = t;
        return Ok((stretch, End::Watch(index)));
    }
    let end = match outcome {
        Err(error) => give_up(notes.failure, Some(error.to_string())),
        Ok(_) if notes.failure.is_some() => give_up(notes.failure, None),
        // Stopped only to look at a dip that turned out to be none: the caller goes on from here.
        Ok(_) => End::Reached,
    };
    Ok((stretch, end))
}

fn give_up<E>(failure: Option<E>, solver: Option<String>) -> End<E> {
    match failure {
        Some(error) => End::Failed(error),
        None => End::GaveUp(solver.unwrap_or_else(|| "no step was accepted".to_owned())),
    }
}

/// The first instant at which a watch reaches zero, and which.
fn locate<P: Problem>(problem: &P, stretch: &Stretch, marks: &[Mark]) -> Result<Option<(f64, usize)>, P::Error> {
    let Some((last, earlier)) = marks.split_last() else { return Ok(None) };
    let Some(before) = earlier.last() else { return Ok(None) };
    // (instant, values) between which a sign change is looked for, in order of time.
    let mut samples: Vec<(f64, Vec<f64>)> = Vec::new();
    let absolute = |m: &Mark| (stretch.from_days + m.0, m.1.clone());
    if last.1.iter().all(|v| *v > 0.0) {
        let (Some(_), Some(first)) = (dip_suspected(marks), earlier.len().checked_sub(2).map(|i| &earlier[i])) else {
            return Ok(None);
        };
        samples.push(absolute(first));
        for (a, b) in [(first, before), (before, last)] {
            for k in 1..=DIP_SAMPLES {
                let t = stretch.from_days + a.0 + (b.0 - a.0) * k as f64 / DIP_SAMPLES as f64;
                let mut values = vec![0.0; a.1.len()];
                problem.watches(t, stretch.at(t).as_slice(), &mut values)?;
                samples.push((t, values));
            }
        }
    } else {
        samples.push(absolute(before));
        samples.push(absolute(last));
    }
    for pair in samples.windows(2) {
        let mut found: Option<(f64, usize)> = None;
        for i in 0..pair[0].1.len() {
            let (a, b) = (pair[0].1[i], pair[1].1[i]);
            if b > 0.0 {
                continue;
            }
            let t = if a <= 0.0 {
                pair[0].0
            } else {
                let mut failure = None;
                let t = brent(
                    |t| match problem.watch(i, t, stretch.at(t).as_slice()) {
                        Ok(value) => value,
                        Err(error) => {
                            failure = Some(error);
                            -1.0
                        }
                    },
                    (pair[0].0, a),
                    (pair[1].0, b),
                    EVENT_WIDTH_DAYS,
                );
                if let Some(error) = failure {
                    return Err(error);
                }
                t
            };
            if found.is_none_or(|f| t < f.0) {
                found = Some((t, i));
            }
        }
        if found.is_some() {
            return Ok(found);
        }
    }
    Ok(None)
}
