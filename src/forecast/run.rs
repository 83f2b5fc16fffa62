//! The driver: scheduled changes, stretches between them, mode switches, the end of natural flow.

use super::calendar::{date_at, days_between};
use super::dynamics::{Dynamics, Layout, Memory, Mode, Modes, REGAIN_PSI, Spot, Watch};
use super::field::{Field, RunError, Setup, injection_limit};
use super::integrate::{Effort, End, Settings, State, Stretch, integrate};
use super::placement::{hump_at, placement, stable_below};
use super::{Change, EventKind, EventRecord, FieldSpec, FlowEnd, Forecast, StopReason, Tolerance, Work};
use crate::tank::{ClosureError, TankState};
use crate::well::top_near;
use jiff::civil::Date;
use std::sync::Arc;

/// Height of a hump that has come down to zero, psi: room for rounding.
const GONE_PSI: f64 = 1e-3;
/// Days within which another return of a dead well counts as soon.
const SOON_BACK_DAYS: f64 = 10.0;
/// Such returns in a row after which the well is left shut.
const MOST_RETURNS_IN_A_ROW: usize = 5;
/// Switches at one instant after which the run is given up.
const MOST_SWITCHES_AT_ONCE: usize = 40;

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

struct Run<'a> {
    field: &'a Field,
    setup: Arc<Setup>,
    modes: Modes,
    t: f64,
    y: State,
    trace: Trace,
    switches_here: usize,
    settings: Settings,
    returns: Vec<Returns>,
}

/// Returns of a well in quick succession. Nobody opens a well every other day: it is left shut until a dated event names it.
#[derive(Debug, Clone, Copy)]
struct Returns {
    in_a_row: usize,
    last_days: f64,
}

impl Returns {
    const NONE: Self = Self { in_a_row: 0, last_days: f64::NEG_INFINITY };

    fn soon(self, t_days: f64) -> bool {
        t_days - self.last_days < SOON_BACK_DAYS
    }

    fn allow_another(self, t_days: f64) -> bool {
        !self.soon(t_days) || self.in_a_row < MOST_RETURNS_IN_A_ROW
    }

    fn count(&mut self, t_days: f64) {
        self.in_a_row = if self.soon(t_days) { self.in_a_row + 1 } else { 1 };
        self.last_days = t_days;
    }
}

impl<'a> Run<'a> {
    fn new(field: &'a Field) -> Self {
        let setup = Arc::clone(&field.setup);
        let (wells, injectors) = (setup.wells.len(), setup.injectors.len());
        let memory = Memory::default();
        memory.pressure_psia.set(field.start.pressure_psia);
        *memory.spots.borrow_mut() = vec![Spot::default(); wells];
        // Some hundred times finer than the integrator's tolerance needs.
        memory.crossing_psi.set(match field.spec.tolerance {
            Tolerance::Normal => 1e-5,
            Tolerance::Tight | Tolerance::Reference => 1e-7,
        });
        let layout = Layout { wells, injectors };
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
            y: State::zeros(layout.len()),
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

    fn event(&mut self, name: &str, kind: EventKind, note: String) {
        self.trace.events.push(EventRecord {
            date: date_at(self.field.spec.period.start, self.t),
            days: self.t,
            name: name.to_owned(),
            kind,
            note,
        });
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
            return Err(RunError::TooMuchInjected { days: self.t, source: error });
        }
        for w in 0..self.modes.wells.len() {
            if self.modes.wells[w].flows() {
                self.stop(w, StopReason::BalanceHasNoSolution)?;
            }
        }
        Ok(false)
    }

    fn tank_now(&self) -> Result<TankState, RunError> {
        let dynamics = Dynamics::new(self.field, &self.setup, &self.modes, &self.trace.memory);
        dynamics.tank(self.y.as_slice()).map_err(|source| RunError::TooMuchInjected { days: self.t, source })
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
            self.setup = Arc::new(self.field.changed(&self.setup, &change.change)?);
            self.event(&change.name, EventKind::Scheduled, change.text.clone());
            if let Change::Well(w, _) = change.change {
                self.returns[w] = Returns::NONE;
                named[w] = true;
            }
        }
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

    fn set_limited(&mut self, i: usize, limited: bool, tank: &TankState) {
        if self.modes.limited[i] == limited {
            return;
        }
        self.modes.limited[i] = limited;
        let name = self.setup.injectors[i].name.clone();
        let kind = if limited { EventKind::InjectionLimited } else { EventKind::InjectionLimitLeft };
        self.event(&name, kind, format!("tank pressure {:.0} psia", tank.pressure_psia));
    }

    /// Ends a well's natural flow.
    fn stop(&mut self, w: usize, reason: StopReason) -> Result<(), RunError> {
        if self.modes.wells[w].flows() {
            let end = self.flow_end(w, reason)?;
            self.trace.flow_ends[w] = Some(end);
            let note = format!(
                "{:.0} STB/d liquid, {:.0} STB/d oil, tank at {:.0} psia",
                end.liquid_rate_stb_d, end.oil_rate_stb_d, end.reservoir_pressure_psia
            );
            let name = self.setup.wells[w].spec.name.clone();
            self.event(&name, EventKind::EndOfNaturalFlow(reason), note);
        }
        self.modes.wells[w] = Mode::Stopped(reason);
        self.modes.watch_return[w] = matches!(reason, StopReason::NoCrossing | StopReason::MinimumFlowingPressure);
        Ok(())
    }

    fn flow_end(&self, w: usize, reason: StopReason) -> Result<FlowEnd, RunError> {
        let dynamics = Dynamics::new(self.field, &self.setup, &self.modes, &self.trace.memory);
        // When the balance has run out the last state that it gave stands in.
        let tank = dynamics.tank(self.y.as_slice()).unwrap_or(self.field.start);
        let now = dynamics.well_now(w, &tank);
        let rate = dynamics.rate(w, &now);
        let margin = now.survey().margin_psi;
        Ok(FlowEnd {
            date: date_at(self.field.spec.period.start, self.t),
            days: self.t,
            reason,
            liquid_rate_stb_d: rate,
            oil_rate_stb_d: rate * (1.0 - now.water_cut),
            flow_margin_psi: margin,
            reservoir_pressure_psia: tank.pressure_psia,
        })
    }

    /// Looks at a well from scratch and puts it where it belongs. `starting`: it did not flow before.
    fn place(&mut self, w: usize, starting: bool) -> Result<(), RunError> {
        self.place_above(w, starting, 0.0)
    }

    fn place_above(&mut self, w: usize, starting: bool, least_psi: f64) -> Result<(), RunError> {
        let tank = self.tank_now()?;
        let before = self.modes.wells[w];
        let (found, spot) = {
            let dynamics = Dynamics::new(self.field, &self.setup, &self.modes, &self.trace.memory);
            placement(&dynamics, w, &tank, least_psi)
        };
        self.trace.memory.spots.borrow_mut()[w] = spot;
        let name = self.setup.wells[w].spec.name.clone();
        match found {
            Err(reason) if before.flows() => self.stop(w, reason),
            Err(reason) => {
                // A dead well tested again by an event that did not help keeps its first end.
                if self.trace.flow_ends[w].is_none() {
                    self.trace.flow_ends[w] =
                        Some(FlowEnd { liquid_rate_stb_d: 0.0, oil_rate_stb_d: 0.0, ..self.flow_end(w, reason)? });
                    self.event(&name, EventKind::EndOfNaturalFlow(reason), "it did not come to flow".to_owned());
                    self.modes.wells[w] = Mode::Stopped(reason);
                    self.modes.watch_return[w] =
                        matches!(reason, StopReason::NoCrossing | StopReason::MinimumFlowingPressure);
                }
                Ok(())
            }
            Ok(mode) => {
                self.modes.wells[w] = mode;
                self.modes.watch_return[w] = false;
                if starting && !before.flows() {
                    let kind = if before == Mode::Waiting { EventKind::WellStarted } else { EventKind::FlowsAgain };
                    self.event(&name, kind, String::new());
                    self.trace.flow_ends[w] = None;
                    self.trace.first_flow[w].get_or_insert(self.t);
                }
                let target = self.setup.wells[w].spec.target_rate_stb_d;
                if mode == Mode::Target && before.flows() && before != Mode::Target {
                    self.event(&name, EventKind::TargetRegained, String::new());
                }
                if target.is_some() && mode != Mode::Target && (before == Mode::Target || !before.flows()) {
                    self.plateau_lost(w);
                }
                Ok(())
            }
        }
    }

    fn plateau_lost(&mut self, w: usize) {
        if self.trace.plateau_ends[w].is_none() {
            self.trace.plateau_ends[w] = Some(self.t);
        }
        let name = self.setup.wells[w].spec.name.clone();
        self.event(&name, EventKind::PlateauLost, String::new());
    }

    /// Acts on a watch that reached zero.
    fn switch(&mut self, watch: Watch) -> Result<(), RunError> {
        let tank = self.tank_now()?;
        let name = |w: usize| self.setup.wells[w].spec.name.clone();
        match watch {
            Watch::BubblePoint => {
                self.modes.saturated = !self.modes.saturated;
                self.modes.bubble_point_slack.crossed(self.t);
                let kind = if self.modes.saturated {
                    EventKind::BubblePointCrossedDown
                } else {
                    EventKind::BubblePointCrossedUp
                };
                self.event("tank", kind, format!("{:.1} psia", tank.pressure_psia));
            }
            Watch::CriticalGas => {
                self.modes.gas_mobile = !self.modes.gas_mobile;
                self.modes.critical_gas_slack.crossed(self.t);
                if self.modes.gas_mobile {
                    self.event("tank", EventKind::FreeGasMobile, format!("{:.1} psia", tank.pressure_psia));
                }
            }
            Watch::InjectorShut(i) => self.modes.held_shut[i] = !self.modes.held_shut[i],
            Watch::InjectorLimit(i) => self.set_limited(i, !self.modes.limited[i], &tank),
            Watch::TargetAbove(w) => {
                let name = name(w);
                self.modes.regain_psi[w].crossed(self.t);
                self.modes.wells[w] = Mode::Target;
                self.event(&name, EventKind::TargetRegained, String::new());
            }
            Watch::FloorAbove(w) => {
                let name = name(w);
                self.modes.regain_psi[w].crossed(self.t);
                if self.modes.wells[w] == Mode::Target {
                    self.plateau_lost(w);
                }
                self.modes.wells[w] = Mode::Floor;
                self.event(&name, EventKind::FloorReached, String::new());
            }
            Watch::CapLost(w) => self.cap_lost(w, &tank)?,
            Watch::Valley(w) => self.part_hump(w, &tank),
            Watch::MarginGone(w) => self.hump_lost(w, &tank)?,
            Watch::RightHump(w) => {
                let before = self.modes.wells[w];
                self.place(w, false)?;
                self.climb_right(w, &tank);
                self.note_jump(w, before);
            }
            Watch::MinimumRate(w) => self.stop(w, StopReason::RateLimit)?,
            Watch::WaterCut(w) => self.stop(w, StopReason::WaterCutLimit)?,
            Watch::GasOilRatio(w) => self.stop(w, StopReason::GasOilRatioLimit)?,
            Watch::FlowAgain(w) => {
                let may = self.setup.wells[w].spec.may_flow_again;
                if may && self.returns[w].allow_another(self.t) {
                    self.place(w, true)?;
                    if self.modes.wells[w].flows() {
                        self.returns[w].count(self.t);
                    }
                } else {
                    let name = name(w);
                    self.modes.watch_return[w] = false;
                    let note =
                        if may { "it comes and goes within days: left shut" } else { "flow margin back at 1 psi" };
                    self.event(&name, EventKind::CouldFlowAgain, note.to_owned());
                }
            }
        }
        Ok(())
    }

    fn note_jump(&mut self, w: usize, before: Mode) {
        if self.modes.wells[w].flows() && self.modes.wells[w] != before {
            let name = self.setup.wells[w].spec.name.clone();
            self.event(&name, EventKind::RateJump, String::new());
        }
    }

    /// The hump on which a well flowed has come down to zero: another one that carries it, or the end of natural flow.
    ///
    /// The look over all rates and the watch may differ by the height of a model's jump on whether a hump is still there. So a hump
    /// counts only when the watch agrees that it does; otherwise only higher ones are considered.
    fn hump_lost(&mut self, w: usize, tank: &TankState) -> Result<(), RunError> {
        let before = self.modes.wells[w];
        let mut least_psi = GONE_PSI;
        loop {
            let margin = {
                let dynamics = Dynamics::new(self.field, &self.setup, &self.modes, &self.trace.memory);
                dynamics.well_now(w, tank).survey().margin_psi
            };
            // Called back to the same instant time and again, the well stands on the edge of a jump: what carries it here is gone beyond.
            if margin < least_psi || self.switches_here > MOST_SWITCHES_AT_ONCE / 2 {
                self.modes.wells[w] = before;
                return self.stop(w, StopReason::NoCrossing);
            }
            self.place_above(w, false, least_psi)?;
            let Mode::Line { low, high } = self.modes.wells[w] else { break };
            let dynamics = Dynamics::new(self.field, &self.setup, &self.modes, &self.trace.memory);
            if dynamics.top(w, &dynamics.well_now(w, tank), low, high).1 > 0.0 {
                break;
            }
            least_psi *= 4.0;
        }
        self.note_jump(w, before);
        Ok(())
    }

    /// The hump on which a well flows has become two: from now on the right-hand one counts, so that its end is seen coming.
    fn part_hump(&mut self, w: usize, tank: &TankState) {
        let Mode::Line { high, .. } = self.modes.wells[w] else { return };
        let low = {
            let dynamics = Dynamics::new(self.field, &self.setup, &self.modes, &self.trace.memory);
            let now = dynamics.well_now(w, tank);
            let found = dynamics.valley(w, &now);
            let valley = found.rate_stb_d;
            let rate = dynamics.rate(w, &now).max(valley);
            // From the higher ground, so that the same valley is not found again.
            let (top, _) = top_near(|q| now.height_psi(q), found.crest_stb_d, valley, rate);
            let spot = &mut self.trace.memory.spots.borrow_mut()[w];
            (spot.top_rate_stb_d, spot.low_rate_stb_d) = (top, valley);
            valley / now.curve.open_flow_stb_d()
        };
        self.modes.wells[w] = Mode::Line { low, high };
    }

    /// A hump so narrow that the look over all rates steps over it, but seen on the right of the operating point, is taken from there.
    fn climb_right(&mut self, w: usize, tank: &TankState) {
        let Mode::Line { .. } = self.modes.wells[w] else { return };
        let found = {
            let dynamics = Dynamics::new(self.field, &self.setup, &self.modes, &self.trace.memory);
            let now = dynamics.well_now(w, tank);
            dynamics
                .right_of(w, &now)
                .filter(|(_, height)| *height >= REGAIN_PSI)
                .and_then(|(crest, _)| hump_at(&now, dynamics.rate(w, &now), crest))
        };
        if let Some((mode, spot)) = found {
            self.trace.memory.spots.borrow_mut()[w] = spot;
            self.modes.wells[w] = mode;
        }
    }

    /// The target, or the floor's rate, can no longer be held: `h` has come down to zero there.
    fn cap_lost(&mut self, w: usize, tank: &TankState) -> Result<(), RunError> {
        let was = self.modes.wells[w];
        let (next, spot) = {
            let dynamics = Dynamics::new(self.field, &self.setup, &self.modes, &self.trace.memory);
            let now = dynamics.well_now(w, tank);
            let cap = dynamics.rate(w, &now);
            let nudge = 1e-4 * cap;
            let slope = (now.height_psi(cap + nudge) - now.height_psi(cap - nudge)) / (2.0 * nudge);
            if slope < 0.0 {
                // The stable crossing comes in from the right: the well declines along it.
                let land = now.survey();
                let open = now.curve.open_flow_stb_d();
                let (low, high) = (land.hump_stb_d.0.min(0.999 * cap), land.hump_stb_d.1.max(1.001 * cap));
                let top = if land.top_rate_stb_d < cap { land.top_rate_stb_d } else { 0.9 * cap };
                let mode = Mode::Line { low: low / open, high: (high / open).min(1.0) };
                (Ok(mode), Spot { rate_stb_d: cap, slope, top_rate_stb_d: top, ..Spot::default() })
            } else {
                let limit = if was == Mode::Floor { StopReason::MinimumFlowingPressure } else { StopReason::RateLimit };
                match stable_below(&now, 0.999_999 * cap) {
                    Some((mode, spot)) => (Ok(mode), spot),
                    None if now.survey().margin_psi <= GONE_PSI => (Err(StopReason::NoCrossing), Spot::default()),
                    None => (Err(limit), Spot::default()),
                }
            }
        };
        match next {
            Err(reason) => self.stop(w, reason),
            Ok(mode) => {
                self.trace.memory.spots.borrow_mut()[w] = spot;
                self.modes.wells[w] = mode;
                if was == Mode::Target {
                    self.plateau_lost(w);
                } else {
                    let name = self.setup.wells[w].spec.name.clone();
                    self.event(&name, EventKind::FloorLeft, String::new());
                }
                Ok(())
            }
        }
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
