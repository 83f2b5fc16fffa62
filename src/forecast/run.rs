//! The driver: scheduled changes and the stretches between them. What a switch does stands in `switching.rs`.

use super::calendar::{date_at, days_between};
use super::dynamics::Dynamics;
use super::field::{Field, RunError, Setup, injection_limit};
use super::integrate::{Effort, End, Settings, State, Stretch, integrate};
use super::modes::{Memory, Mode, Modes, Returns, Spot};
use super::switching::GONE_PSI;
use super::{Change, EventKind, EventRecord, FieldSpec, FlowEnd, Forecast, StopReason, Tolerance, Work};
use crate::tank::{ClosureError, TankState};
use jiff::civil::Date;
use std::sync::Arc;

/// Switches at one instant after which the run is given up.
pub(super) const MOST_SWITCHES_AT_ONCE: usize = 40;

/// A stretch with the settings and modes that held in it.
pub(super) struct Piece {
    pub stretch: Stretch,
    pub setup: Arc<Setup>,
    pub modes: Modes,
}

/// Everything the run left behind, for the rows to be made from.
pub(super) struct Trace {
    pub pieces: Vec<Piece>,
    pub events: Vec<EventRecord>,
    pub flow_ends: Vec<Option<FlowEnd>>,
    pub plateau_ends: Vec<Option<f64>>,
    pub first_flow: Vec<Option<f64>>,
    pub memory: Memory,
    pub effort: Effort,
    pub end_days: f64,
    pub end_text: &'static str,
}

/// Runs the forecast.
///
/// # Errors
/// [`RunError`]; a balance that runs out is no error but the reason of the wells' stop.
pub fn run(spec: &FieldSpec) -> Result<Forecast, RunError> {
    let field = Field::new(spec)?;
    let trace = trace(&field)?;
    super::rows::forecast(&field, &trace)
}

/// Each well's end of natural flow, `None` where it still flows: the run alone, without rows, doubts and curves, in about a third of the time.
///
/// # Errors
/// As [`run`].
pub fn natural_flow_ends(spec: &FieldSpec) -> Result<Vec<Option<FlowEnd>>, RunError> {
    Ok(trace(&Field::new(spec)?)?.flow_ends)
}

/// Runs the forecast and adds each well's curves at the start, at mid-life and at the end of its natural flow.
///
/// # Errors
/// As [`run`].
pub fn run_with_curves(spec: &FieldSpec) -> Result<Forecast, RunError> {
    let field = Field::new(spec)?;
    let trace = trace(&field)?;
    let mut forecast = super::rows::forecast(&field, &trace)?;
    for (w, well) in forecast.wells.iter_mut().enumerate() {
        well.curves = super::curves::life_curves(&field, &trace, w)?;
    }
    Ok(forecast)
}

/// Integrates and keeps the trace only.
pub(super) fn trace(field: &Field) -> Result<Trace, RunError> {
    Run::new(field).go()
}

pub(super) struct Run<'a> {
    pub(super) field: &'a Field,
    pub(super) setup: Arc<Setup>,
    pub(super) modes: Modes,
    /// Days from the start.
    pub(super) t: f64,
    pub(super) y: State,
    pub(super) trace: Trace,
    pub(super) switches_here: usize,
    settings: Settings,
    pub(super) returns: Vec<Returns>,
}

impl<'a> Run<'a> {
    fn new(field: &'a Field) -> Self {
        let setup = Arc::clone(&field.setup);
        let (wells, injectors) = (setup.wells.len(), setup.injectors.len());
        let memory = Memory::default();
        memory.pressure_psia.set(field.start.pressure_psia);
        *memory.spots.borrow_mut() = vec![Spot::default(); wells];
        *memory.into_line.borrow_mut() = vec![0.0; wells];
        *memory.gives_way.borrow_mut() = vec![0.0; wells];
        *memory.oil_stb.borrow_mut() = vec![0.0; wells];
        // Some hundred times finer than the integrator's tolerance needs.
        memory.crossing_psi.set(match field.spec.tolerance {
            Tolerance::Normal => 1e-5,
            Tolerance::Tight | Tolerance::Reference => 1e-7,
        });
        let layout = field.layout();
        let mut y = State::zeros(layout.len());
        if layout.flood {
            y[layout.replaced()] = field.tank().replaced_before(&field.start);
        }
        let (rtol, atol) = match field.spec.tolerance {
            Tolerance::Normal => (2e-7, 2e-9),
            Tolerance::Tight => (2e-9, 2e-11),
            Tolerance::Reference => (2e-11, 2e-13),
        };
        // The integrator's error norm is a mean over components: idle ones must not loosen it.
        let share = (2.0 / layout.len() as f64).sqrt();
        let (rtol, atol) = (rtol * share, atol * share);
        Self {
            field,
            setup,
            modes: Modes::new(
                wells,
                injectors,
                field.start.excess_gas_scf_stb >= 0.0,
                field.start.gas_saturation > field.tank().relative_permeability().critical_gas(),
            ),
            t: 0.0,
            y,
            trace: Trace {
                pieces: Vec::new(),
                events: Vec::new(),
                flow_ends: vec![None; wells],
                plateau_ends: vec![None; wells],
                first_flow: vec![None; wells],
                memory,
                effort: Effort::default(),
                end_days: 0.0,
                end_text: "period ended",
            },
            switches_here: 0,
            returns: vec![Returns::NONE; wells],
            settings: Settings { rtol, atol, longest_step_days: 180.0, first_step_days: 1.0 },
        }
    }

    fn day(&self, date: Date) -> f64 {
        days_between(self.field.spec.period.start, date)
    }

    pub(super) fn event(&mut self, name: &str, kind: EventKind, note: String) {
        self.trace.events.push(EventRecord {
            date: date_at(self.field.spec.period.start, self.t),
            days: self.t,
            name: name.to_owned(),
            kind,
            note,
        });
    }

    pub(super) fn well_event(&mut self, w: usize, kind: EventKind, note: String) {
        let name = self.setup.wells[w].spec.name.clone();
        self.event(&name, kind, note);
    }

    /// All days on which something is scheduled, and the last day.
    fn marks(&self) -> Vec<f64> {
        let spec = &self.field.spec;
        let end = self.day(spec.period.end);
        let mut dates: Vec<Date> = spec.changes.iter().map(|c| c.on).collect();
        let changed_wells = spec.changes.iter().filter_map(|c| match &c.change {
            Change::Well(_, w) => Some(w.as_ref()),
            _ => None,
        });
        for well in spec.wells.iter().chain(changed_wells) {
            dates.extend(well.start.iter().chain(&well.end));
            // The loss of productivity begins with a corner.
            dates.extend(well.loss.since.filter(|_| well.loss.yearly > 0.0));
        }
        let changed_injectors = spec.changes.iter().filter_map(|c| match &c.change {
            Change::Injector(_, i) => Some(i),
            _ => None,
        });
        for injector in spec.injectors.iter().chain(changed_injectors) {
            dates.extend(injector.start.iter().chain(&injector.end));
        }
        let mut days: Vec<f64> = dates.into_iter().map(|d| self.day(d)).filter(|d| *d > 0.0 && *d < end).collect();
        days.push(end);
        days.sort_by(f64::total_cmp);
        days.dedup();
        days
    }

    fn go(mut self) -> Result<Trace, RunError> {
        let marks = self.marks();
        self.note_breakthroughs(None, false)?;
        self.scheduled()?;
        let end = marks.last().copied().unwrap_or(0.0);
        for mark in marks {
            while self.t < mark {
                if self.finished(end) {
                    self.trace.end_days = self.t;
                    return Ok(self.trace);
                }
                if !self.stretch_to(mark)? {
                    self.trace.end_days = self.t;
                    self.trace.end_text = "balance has no solution";
                    return Ok(self.trace);
                }
            }
            if self.t < end {
                self.scheduled()?;
            }
        }
        self.trace.end_days = self.t;
        Ok(self.trace)
    }

    /// Whether nothing more can happen before the period ends.
    fn finished(&mut self, end: f64) -> bool {
        let period_start = self.field.spec.period.start;
        let window_ahead = |w: usize| {
            let spec = &self.setup.wells[w].spec;
            spec.start.is_some_and(|d| days_between(period_start, d) > self.t && days_between(period_start, d) < end)
        };
        let alive = self.modes.wells.iter().enumerate().any(|(w, mode)| match mode {
            Mode::Waiting => window_ahead(w),
            Mode::Stopped(_) => self.setup.wells[w].spec.may_flow_again && self.modes.watch_return[w],
            _ => true,
        });
        let ahead = |day: f64| day > self.t && day < end;
        let events_ahead =
            self.field.spec.changes.iter().any(|c| ahead(self.day(c.on)) && matches!(c.change, Change::Well(..)));
        if alive || events_ahead {
            return false;
        }
        self.trace.end_text = "no well flows any more";
        true
    }

    /// One stretch up to `mark` or its first event. False when the balance has run out.
    fn stretch_to(&mut self, mark: f64) -> Result<bool, RunError> {
        if mark - self.t < 1e-6 {
            self.t = mark;
            return Ok(true);
        }
        let setup = Arc::clone(&self.setup);
        let modes = self.modes.clone();
        let dynamics = Dynamics::new(self.field, &setup, &modes, &self.trace.memory);
        let outcome = integrate(&dynamics, self.t, &self.y, mark, &self.settings, &mut self.trace.effort);
        let (stretch, end) = match outcome {
            Ok(found) => found,
            Err(error) => {
                return self.balance_gone(error);
            }
        };
        let watch = match end {
            End::Watch(i) => Some(dynamics.watches[i]),
            _ => None,
        };
        let progress = stretch.to_days - self.t;
        self.switches_here = if progress > 1e-6 { 0 } else { self.switches_here + 1 };
        self.t = stretch.to_days;
        self.y = stretch.at(stretch.to_days);
        self.trace.pieces.push(Piece { stretch, setup, modes });
        match end {
            End::Reached => {
                if (self.t - mark).abs() < 1e-6 {
                    self.t = mark;
                }
            }
            End::Watch(_) => {
                if let Some(watch) = watch {
                    self.switch(watch)?;
                }
            }
            End::Failed(error) => return self.balance_gone(error),
            End::GaveUp(reason) => return Err(RunError::Integration { days: self.t, reason }),
        }
        if self.switches_here > MOST_SWITCHES_AT_ONCE {
            return Err(RunError::Flicker { days: self.t, what: format!("{watch:?}") });
        }
        Ok(true)
    }

    fn balance_gone(&mut self, error: ClosureError) -> Result<bool, RunError> {
        if !matches!(error, ClosureError::NoRoot { .. }) {
            // What was computed up to here is kept; the event fails a check of the results.
            self.event("tank", EventKind::BalanceStopped, error.to_string());
        }
        for w in 0..self.modes.wells.len() {
            if self.modes.wells[w].flows() {
                self.stop(w, StopReason::BalanceHasNoSolution)?;
            }
        }
        Ok(false)
    }

    pub(super) fn tank_now(&self) -> Result<TankState, RunError> {
        let dynamics = Dynamics::new(self.field, &self.setup, &self.modes, &self.trace.memory);
        dynamics.tank(self.t, self.y.as_slice()).map_err(|source| RunError::TooMuchInjected { days: self.t, source })
    }

    /// Applies everything scheduled for this instant.
    fn scheduled(&mut self) -> Result<(), RunError> {
        let mut named = vec![false; self.setup.wells.len()];
        let changes: Vec<_> = self
            .field
            .spec
            .changes
            .iter()
            .filter(|c| self.day(c.on) == self.t || (self.t == 0.0 && self.day(c.on) < 0.0))
            .collect();
        for change in changes {
            self.setup = Arc::new(self.field.changed(&self.setup, change)?);
            self.event(&change.name, EventKind::Scheduled, change.text.clone());
            if let Change::Well(w, _) = change.change {
                self.returns[w] = Returns::NONE;
                named[w] = true;
            }
            // What changes on a shared line concerns all its wells.
            let line = match change.change {
                Change::Line(line, _) => Some(line),
                Change::Well(w, _) => self.setup.line_of[w],
                _ => None,
            };
            let all = matches!(change.change, Change::Line(..));
            for (w, of) in self.setup.line_of.iter().enumerate() {
                named[w] |= line.is_some() && *of == line && (all || self.modes.wells[w].flows());
            }
        }
        self.note_breakthroughs(None, true)?;
        for i in 0..self.setup.injectors.len() {
            let spec = &self.setup.injectors[i];
            let on = spec.start.is_none_or(|d| self.day(d) <= self.t) && spec.end.is_none_or(|d| self.t < self.day(d));
            if on != self.modes.injecting[i] {
                self.modes.injecting[i] = on;
                self.modes.limited[i] = false;
                let name = spec.name.clone();
                let kind = if on { EventKind::InjectionStarted } else { EventKind::InjectionEnded };
                self.event(&name, kind, String::new());
            }
        }
        for (w, named) in named.into_iter().enumerate() {
            let spec = &self.setup.wells[w].spec;
            let started = spec.start.is_none_or(|d| self.day(d) <= self.t);
            let ended = spec.end.is_some_and(|d| self.day(d) <= self.t);
            let mode = self.modes.wells[w];
            if ended {
                if mode.flows() {
                    self.stop(w, StopReason::Scheduled)?;
                } else if mode == Mode::Waiting {
                    self.modes.wells[w] = Mode::Stopped(StopReason::Scheduled);
                }
            } else if started {
                let shut = mode == Mode::Stopped(StopReason::Scheduled);
                if mode == Mode::Waiting || shut || named {
                    // A dead well does not come to flow on the rounding of the margin that it died with.
                    let least_psi = if matches!(mode, Mode::Stopped(_)) { GONE_PSI } else { 0.0 };
                    self.place_above(w, true, least_psi)?;
                }
            }
        }
        self.check_limits()
    }

    /// Finds out which injectors are held back from the start.
    fn check_limits(&mut self) -> Result<(), RunError> {
        let tank = self.tank_now()?;
        for i in 0..self.setup.injectors.len() {
            if !self.modes.injecting[i] {
                continue;
            }
            let dynamics = Dynamics::new(self.field, &self.setup, &self.modes, &self.trace.memory);
            let (asked, _) = dynamics.injection(i, &tank, dynamics.withdrawal_rb_d(&tank));
            let limited = asked > injection_limit(&self.setup.injectors[i], tank.pressure_psia);
            self.set_limited(i, limited, &tank);
            let injector = &self.setup.injectors[i];
            let limit = injector.bottomhole_limit_psia.filter(|_| injector.injectivity.is_some());
            self.modes.held_shut[i] = limit.is_some_and(|limit| tank.pressure_psia > limit);
        }
        Ok(())
    }

    pub(super) fn set_limited(&mut self, i: usize, limited: bool, tank: &TankState) {
        if self.modes.limited[i] == limited {
            return;
        }
        self.modes.limited[i] = limited;
        let name = self.setup.injectors[i].name.clone();
        let kind = if limited { EventKind::InjectionLimited } else { EventKind::InjectionLimitLeft };
        self.event(&name, kind, format!("tank pressure {:.0} psia", tank.pressure_psia));
    }
}

/// Work of a trace, for the results.
pub(super) fn work(trace: &Trace) -> Work {
    Work {
        steps: trace.effort.steps,
        right_hand_sides: trace.effort.right_hand_sides,
        traverses: trace.memory.gauge.traverses.get(),
        closure_solves: trace.memory.closures.get(),
        segments: trace.pieces.len() as u64,
    }
}
