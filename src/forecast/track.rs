//! The way of the tank and of each well through a forecast, for maps that are drawn around it.

use super::calendar::{date_at, periods};
use super::dynamics::Dynamics;
use super::field::{Field, RunError};
use super::rows::piece_at;
use super::run::{Trace, trace};
use super::{Change, FlowEnd};
use crate::tank::{Cumulatives, Tank, TankState};
use crate::well::{KeptLine, WellModel};
use jiff::civil::Date;

/// Longest time between two states of the tank, days.
const SPACING_DAYS: f64 = 10.0;
/// Pressure between two states of the tank beyond the end of the forecast, psi.
const SPACING_PSI: f64 = 15.0;
/// Pressure at which that depletion ends, psia.
const LOWEST_PSIA: f64 = 30.0;
/// Steps after which it is given up.
const MOST_STEPS: usize = 3000;

/// Where a well stands at one instant.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct WellMoment {
    /// The calendar day.
    pub date: Date,
    /// Days from the start of the forecast.
    pub days: f64,
    /// Tank pressure at the datum, psia.
    pub reservoir_pressure_psia: f64,
    /// Water cut of the well's stream.
    pub water_cut: f64,
    /// Producing gas-oil ratio, scf/STB.
    pub gor_scf_stb: f64,
}

/// The way of one well.
#[derive(Debug, Clone)]
pub struct WellTrack {
    /// At its first flow, at the ends of periods, and at the end of its natural flow, while it flows.
    pub moments: Vec<WellMoment>,
    /// The end of natural flow; `None` when it still flows at the end of the run or never flowed.
    pub end: Option<FlowEnd>,
    /// Whether it flows at the end of the run.
    pub flowing_at_end: bool,
    /// The well under the settings that hold there.
    pub model: WellModel,
    /// States of the tank by rising pressure: its last passage through each pressure before the well's end, and below that the
    /// tank depleted on at its own producing ratios, without injection.
    pub tank: Vec<TankState>,
    /// Pressure of the tank at the well's end, psia.
    pub end_pressure_psia: f64,
    /// The shared line as it stood there.
    pub line: Option<KeptLine>,
}

/// Runs the forecast and keeps the way of every well.
///
/// # Errors
/// As [`run`](super::run).
pub fn tracks(field: &Field) -> Result<Vec<WellTrack>, RunError> {
    let run = trace(field)?;
    (0..field.setup.wells.len()).map(|w| well_track(field, &run, w)).collect()
}

/// The wells under the settings after all dated events.
///
/// # Errors
/// [`RunError::Input`] where the settings that an event brings cannot be.
pub fn wells_after_events(field: &Field) -> Result<Vec<WellModel>, RunError> {
    let mut setup = field.setup.as_ref().clone();
    for change in &field.spec.changes {
        if let Change::Well(..) = change.change {
            setup = field.changed(&setup, change)?;
        }
    }
    Ok(setup.wells.into_iter().map(|well| well.frozen(0.0)).collect())
}

fn well_track(field: &Field, run: &Trace, w: usize) -> Result<WellTrack, RunError> {
    let end = run.flow_ends[w];
    let end_days = end.map_or(run.end_days, |e| e.days);
    run.memory.pressure_psia.set(field.start.pressure_psia);
    let too_much = |days: f64| move |source| RunError::TooMuchInjected { days, source };

    let mut states = vec![field.start];
    let mut taken = Cumulatives::default();
    for piece in run.pieces.iter().filter(|p| p.stretch.from_days < end_days || p.stretch.from_days <= 0.0) {
        let dynamics = Dynamics::new(field, &piece.setup, &piece.modes, &run.memory);
        let (from, to) = (piece.stretch.from_days, piece.stretch.to_days.min(end_days));
        let steps = ((to - from) / SPACING_DAYS).ceil().max(1.0);
        for i in 0..=steps as u32 {
            let days = from + (to - from) * f64::from(i) / steps;
            let y = piece.stretch.at(days);
            let state = dynamics.tank(days, y.as_slice()).map_err(too_much(days))?;
            states.push(dynamics.offer(w, &state));
            taken = dynamics.cumulatives(y.as_slice());
        }
    }
    let last = piece_at(&run.pieces, end_days);
    let setup = last.map_or(&field.setup, |p| &p.setup);
    let end_pressure_psia = states.last().unwrap_or(&field.start).pressure_psia;
    let line = match last.filter(|_| setup.line_of[w].is_some()) {
        None => None,
        Some(piece) => {
            let dynamics = Dynamics::new(field, &piece.setup, &piece.modes, &run.memory);
            dynamics.tank(end_days, piece.stretch.at(end_days).as_slice()).map_err(too_much(end_days))?;
            KeptLine::of(dynamics.line(w))
        }
    };
    let beyond = depleted(&setup.tank, taken, states.last().unwrap_or(&field.start));
    states.extend(beyond);

    Ok(WellTrack {
        moments: moments(field, run, w, end_days)?,
        end,
        flowing_at_end: end.is_none() && run.pieces.last().is_some_and(|p| p.modes.wells[w].flows()),
        model: setup.wells[w].clone().frozen(end_days),
        tank: last_passages(states),
        end_pressure_psia,
        line,
    })
}

/// Where the well stands from its first flow to `end_days`.
fn moments(field: &Field, run: &Trace, w: usize, end_days: f64) -> Result<Vec<WellMoment>, RunError> {
    let Some(first) = run.first_flow[w] else { return Ok(Vec::new()) };
    run.memory.pressure_psia.set(field.start.pressure_psia);
    let ends = periods(&field.spec.period).into_iter().map(|p| p.end_days);
    let inside = ends.filter(|d| *d > first + 1e-6 && *d < end_days - 1e-6);
    let mut list = Vec::new();
    for days in std::iter::once(first).chain(inside).chain([end_days]) {
        // At its first instant the well has just been set flowing: the stretch that begins there shows it.
        let looked_at = if days <= first { days + 1e-6 } else { days };
        let Some(piece) = piece_at(&run.pieces, looked_at) else { continue };
        if !piece.modes.wells[w].flows() {
            continue;
        }
        let dynamics = Dynamics::new(field, &piece.setup, &piece.modes, &run.memory);
        let tank = dynamics
            .tank(days, piece.stretch.at(days).as_slice())
            .map_err(|source| RunError::TooMuchInjected { days, source })?;
        let now = dynamics.well_now(w, &tank);
        list.push(WellMoment {
            date: date_at(field.spec.period.start, days),
            days,
            reservoir_pressure_psia: tank.pressure_psia,
            water_cut: now.water_cut,
            gor_scf_stb: now.gor_scf_stb,
        });
    }
    Ok(list)
}

/// The tank depleted on from `taken` at its own producing ratios (Muskat's depletion), by the midpoint rule, as far as its balance goes.
fn depleted(tank: &Tank, mut taken: Cumulatives, last: &TankState) -> Vec<TankState> {
    let mut states = Vec::new();
    let mut now = *last;
    let mut step_stb = 1e-5 * tank.initial().oil_stb;
    let add = |from: &Cumulatives, at: &TankState, oil_stb: f64| Cumulatives {
        oil_stb: from.oil_stb + oil_stb,
        gas_scf: from.gas_scf + oil_stb * (at.rs_scf_stb + at.free_gor_scf_stb),
        water_stb: from.water_stb + oil_stb * at.water_oil_ratio,
        ..*from
    };
    for _ in 0..MOST_STEPS {
        let state = |taken: &Cumulatives| tank.state_after(taken, now.pressure_psia);
        let Ok(middle) = state(&add(&taken, &now, 0.5 * step_stb)) else { break };
        let next_taken = add(&taken, &middle, step_stb);
        let Ok(next) = state(&next_taken) else { break };
        let fall_psi = now.pressure_psia - next.pressure_psia;
        if fall_psi.is_nan() || fall_psi <= 0.0 {
            break;
        }
        (taken, now) = (next_taken, next);
        states.push(next);
        if next.pressure_psia < LOWEST_PSIA {
            break;
        }
        step_stb *= (SPACING_PSI / fall_psi).clamp(0.2, 3.0);
    }
    states
}

/// States in time to states by rising pressure, the latest of each pressure.
fn last_passages(states: Vec<TankState>) -> Vec<TankState> {
    let mut kept: Vec<TankState> = Vec::with_capacity(states.len());
    for state in states.into_iter().rev() {
        if kept.last().is_none_or(|last| state.pressure_psia > last.pressure_psia) {
            kept.push(state);
        }
    }
    kept
}
