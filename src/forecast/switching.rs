//! What happens when a watch reaches zero: wells change their mode, end, jump or come back.

use super::calendar::date_at;
use super::dynamics::Dynamics;
use super::field::RunError;
use super::modes::{Mode, REGAIN_PSI, Spot, Watch};
use super::placement::{hump_at, placement, stable_below, why_apart};
use super::run::{MOST_SWITCHES_AT_ONCE, Run};
use super::{EventKind, EventRecord, FlowEnd, StopReason};
use crate::tank::TankState;
use crate::well::top_near;

/// Height of a hump that has come down to zero, psi: room for rounding.
pub(super) const GONE_PSI: f64 = 1e-3;

fn end_note(end: &FlowEnd) -> String {
    format!(
        "{:.0} STB/d liquid, {:.0} STB/d oil, tank at {:.0} psia",
        end.liquid_rate_stb_d, end.oil_rate_stb_d, end.reservoir_pressure_psia
    )
}

impl Run<'_> {
    /// Ends a well's natural flow.
    pub(super) fn stop(&mut self, w: usize, reason: StopReason) -> Result<(), RunError> {
        let reason = if reason == StopReason::NoCrossing { self.why_apart(w) } else { reason };
        if self.modes.wells[w].flows() {
            let end = self.flow_end(w, reason)?;
            self.trace.flow_ends[w] = Some(end);
            self.well_event(w, EventKind::EndOfNaturalFlow(reason), end_note(&end));
        }
        self.modes.wells[w] = Mode::Stopped(reason);
        self.modes.watch_return[w] = reason.may_pass();
        Ok(())
    }

    fn why_apart(&self, w: usize) -> StopReason {
        let dynamics = Dynamics::new(self.field, &self.setup, &self.modes, &self.trace.memory);
        match dynamics.tank(self.y.as_slice()) {
            Ok(tank) => why_apart(&dynamics, w, &dynamics.well_now(w, &tank)),
            Err(_) => StopReason::NoCrossing,
        }
    }

    fn flow_end(&self, w: usize, reason: StopReason) -> Result<FlowEnd, RunError> {
        let dynamics = Dynamics::new(self.field, &self.setup, &self.modes, &self.trace.memory);
        // When the balance has run out the state at the start stands in.
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
    pub(super) fn place(&mut self, w: usize, starting: bool) -> Result<(), RunError> {
        self.place_above(w, starting, 0.0)
    }

    pub(super) fn place_above(&mut self, w: usize, starting: bool, least_psi: f64) -> Result<(), RunError> {
        let tank = self.tank_now()?;
        let before = self.modes.wells[w];
        let (found, spot) = {
            let dynamics = Dynamics::new(self.field, &self.setup, &self.modes, &self.trace.memory);
            placement(&dynamics, w, &tank, least_psi)
        };
        self.trace.memory.spots.borrow_mut()[w] = spot;
        match found {
            Err(reason) if before.flows() => self.stop(w, reason),
            Err(reason) => {
                // A dead well tested again by an event that did not help keeps its first end.
                if self.trace.flow_ends[w].is_none() {
                    self.trace.flow_ends[w] =
                        Some(FlowEnd { liquid_rate_stb_d: 0.0, oil_rate_stb_d: 0.0, ..self.flow_end(w, reason)? });
                    self.well_event(w, EventKind::EndOfNaturalFlow(reason), "it did not come to flow".to_owned());
                    self.modes.wells[w] = Mode::Stopped(reason);
                    self.modes.watch_return[w] = reason.may_pass();
                }
                Ok(())
            }
            Ok(mode) => {
                self.modes.wells[w] = mode;
                self.modes.watch_return[w] = false;
                if starting && !before.flows() {
                    let kind = if before == Mode::Waiting { EventKind::WellStarted } else { EventKind::FlowsAgain };
                    self.well_event(w, kind, String::new());
                    self.trace.flow_ends[w] = None;
                    self.trace.first_flow[w].get_or_insert(self.t);
                }
                let target = self.setup.wells[w].spec.target_rate_stb_d;
                if mode == Mode::Target && before.flows() && before != Mode::Target {
                    self.well_event(w, EventKind::TargetRegained, String::new());
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
        self.well_event(w, EventKind::PlateauLost, String::new());
    }

    /// Acts on a watch that reached zero.
    pub(super) fn switch(&mut self, watch: Watch) -> Result<(), RunError> {
        let tank = self.tank_now()?;
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
                self.modes.regain_psi[w].crossed(self.t);
                self.modes.wells[w] = Mode::Target;
                self.well_event(w, EventKind::TargetRegained, String::new());
            }
            Watch::FloorAbove(w) => {
                self.modes.regain_psi[w].crossed(self.t);
                if self.modes.wells[w] == Mode::Target {
                    self.plateau_lost(w);
                }
                self.modes.wells[w] = Mode::Floor;
                self.well_event(w, EventKind::FloorReached, String::new());
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
            Watch::Breakthrough(w) => self.break_through(w)?,
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
                    self.modes.watch_return[w] = false;
                    let note =
                        if may { "it comes and goes within days: left shut" } else { "flow margin back at 1 psi" };
                    self.well_event(w, EventKind::CouldFlowAgain, note.to_owned());
                }
            }
        }
        Ok(())
    }

    /// Marks the wells that the front has reached, which are returned; `seen` was found by its watch.
    pub(super) fn note_breakthroughs(&mut self, seen: Option<usize>, with_event: bool) -> Result<Vec<usize>, RunError> {
        // Wells alike are reached at one instant: rounding does not set them apart.
        const TOGETHER: f64 = 1e-9;
        let tank = self.tank_now()?;
        let reached: Vec<usize> = {
            let dynamics = Dynamics::new(self.field, &self.setup, &self.modes, &self.trace.memory);
            let new = |w: &usize| !self.modes.broken_through[*w];
            let margin = |w: usize| dynamics.before_breakthrough(w, &tank);
            (0..self.modes.wells.len())
                .filter(new)
                .filter(|&w| seen == Some(w) || margin(w).is_some_and(|m| m <= TOGETHER))
                .collect()
        };
        for &w in &reached {
            self.modes.broken_through[w] = true;
            if with_event {
                let cut = {
                    let dynamics = Dynamics::new(self.field, &self.setup, &self.modes, &self.trace.memory);
                    dynamics.well_now(w, &tank).water_cut
                };
                let note = format!("water cut {:.1} %, tank at {:.0} psia", 100.0 * cut, tank.pressure_psia);
                self.well_event(w, EventKind::WaterBreakthrough, note);
            }
        }
        Ok(reached)
    }

    /// The front reaches wells: their water cut jumps, so that they, and those on a line with them, are looked at from scratch.
    fn break_through(&mut self, seen: usize) -> Result<(), RunError> {
        let flowing: Vec<Option<FlowEnd>> = (0..self.modes.wells.len())
            .map(|w| self.modes.wells[w].flows().then(|| self.flow_end(w, StopReason::NoCrossing)).transpose())
            .collect::<Result<_, _>>()?;
        let reached = self.note_breakthroughs(Some(seen), true)?;
        let lines: Vec<usize> = reached.iter().filter_map(|&w| self.setup.line_of[w]).collect();
        for (w, before) in flowing.into_iter().enumerate() {
            let concerned = reached.contains(&w) || self.setup.line_of[w].is_some_and(|l| lines.contains(&l));
            if concerned && self.modes.wells[w].flows() {
                self.place(w, false)?;
                self.ended_from(w, before);
            }
        }
        Ok(())
    }

    /// The last rates of a well that a jump ended are those from which it jumped.
    fn ended_from(&mut self, w: usize, before: Option<FlowEnd>) {
        let (Some(before), false) = (before, self.modes.wells[w].flows()) else { return };
        let Some(end) = self.trace.flow_ends[w].as_mut() else { return };
        (end.liquid_rate_stb_d, end.oil_rate_stb_d) = (before.liquid_rate_stb_d, before.oil_rate_stb_d);
        let (note, name) = (end_note(end), &self.setup.wells[w].spec.name);
        let is_end = |e: &&mut EventRecord| matches!(e.kind, EventKind::EndOfNaturalFlow(_)) && e.name == *name;
        if let Some(event) = self.trace.events.iter_mut().rev().find(is_end) {
            event.note = note;
        }
    }

    fn note_jump(&mut self, w: usize, before: Mode) {
        if self.modes.wells[w].flows() && self.modes.wells[w] != before {
            self.well_event(w, EventKind::RateJump, String::new());
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
            let slope = now.height_slope(cap);
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
                    self.well_event(w, EventKind::FloorLeft, String::new());
                }
                Ok(())
            }
        }
    }
}
