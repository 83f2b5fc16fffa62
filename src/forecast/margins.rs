//! The signed margins of the watches: positive while the stretch is valid.

use super::dynamics::Dynamics;
use super::field::injection_limit;
use super::modes::{Mode, REGAIN_PSI, Valley, Watch};
use super::placement::place_on;
use crate::tank::TankState;
use crate::well::{LOOK_TO, WellNow};

/// Flow margin at which a dead well may flow again, psi.
const FLOW_AGAIN_PSI: f64 = 1.0;
/// Relative room to a well's limits within which a dead well does not return.
const RETURN_ROOM: f64 = 1e-4;
/// Depth from which a valley between the top of a hump and the operating point parts the hump in two, psi.
const VALLEY_PSI: f64 = 0.1;
/// Height that shows without further search that natural flow is not about to end, psi.
const CLEAR_MARGIN_PSI: f64 = 25.0;
/// Relative slack of an injection limit.
const LIMIT_SLACK: f64 = 1e-6;
/// Slack in psi of an injector shut in by its bottom-hole limit.
const SHUT_SLACK_PSI: f64 = 1e-3;

impl Dynamics<'_> {
    pub(super) fn margin_of(&self, watch: Watch, tank: &TankState) -> f64 {
        let spec = |w: usize| &self.setup.wells[w].spec;
        match watch {
            Watch::BubblePoint => {
                let side = if self.modes.saturated { 1.0 } else { -1.0 };
                side * tank.excess_gas_scf_stb + self.modes.bubble_point_slack.now
            }
            Watch::CriticalGas => {
                let above = tank.gas_saturation - self.setup.tank.relative_permeability().critical_gas();
                (if self.modes.gas_mobile { above } else { -above }) + self.modes.critical_gas_slack.now
            }
            Watch::InjectorLimit(i) => {
                let (asked, _) = self.injection(i, tank, self.withdrawal_rb_d(tank));
                let limit = injection_limit(&self.setup.injectors[i], tank.pressure_psia);
                if limit.is_infinite() {
                    return 1.0;
                }
                let scale = asked.max(limit).max(1e-9);
                let spare = (limit - asked) / scale;
                (if self.modes.limited[i] { -spare } else { spare }) + LIMIT_SLACK
            }
            Watch::InjectorShut(i) => {
                let room = self.setup.injectors[i].bottomhole_limit_psia.unwrap_or(f64::INFINITY) - tank.pressure_psia;
                (if self.modes.held_shut[i] { -room } else { room }) + SHUT_SLACK_PSI
            }
            Watch::CapLost(w) => {
                let now = self.well_now(w, tank);
                match self.modes.wells[w] {
                    // Beyond open flow the inflow curve has no pressure to offer: go on with its slope so that the zero is crossed.
                    Mode::Target => {
                        let target = spec(w).target_rate_stb_d.unwrap_or(0.0);
                        let beyond = (target - now.curve.open_flow_stb_d()).max(0.0);
                        now.height_psi(target) - beyond
                    }
                    _ => {
                        let rate = self.floor_rate(w, &now);
                        if rate > 0.0 { now.height_psi(rate) } else { -1.0 }
                    }
                }
            }
            Watch::TargetAbove(w) => {
                let now = self.well_now(w, tank);
                let target = spec(w).target_rate_stb_d.unwrap_or(f64::INFINITY);
                match self.modes.wells[w] {
                    Mode::Floor => target - self.floor_rate(w, &now) + 1e-6 * target,
                    _ => self.modes.regain_psi[w].now - now.height_psi(target),
                }
            }
            Watch::FloorAbove(w) => {
                let now = self.well_now(w, tank);
                let floor = spec(w).minimum_flowing_pressure_psia.unwrap_or(0.0);
                match self.modes.wells[w] {
                    Mode::Target => now.curve.flowing_psia(spec(w).target_rate_stb_d.unwrap_or(0.0)) - floor + 1e-6,
                    _ => self.modes.regain_psi[w].now - now.height_psi(self.floor_rate(w, &now)),
                }
            }
            Watch::MarginGone(w) => {
                let now = self.well_now(w, tank);
                match self.modes.wells[w] {
                    Mode::Line { low, high } => {
                        // A rate at which the curves stand well apart answers the question without looking for the best one.
                        let known = self.memory.spots.borrow()[w].top_rate_stb_d;
                        let known = known.min(LOOK_TO * now.curve.open_flow_stb_d());
                        let there = if known > 0.0 && low <= 0.0 { now.height_psi(known) } else { 0.0 };
                        if there > CLEAR_MARGIN_PSI { there } else { self.top(w, &now, low, high).1 }
                    }
                    _ => 1.0,
                }
            }
            Watch::RightHump(w) => self.right_hump(w, tank),
            Watch::Valley(w) => {
                let now = self.well_now(w, tank);
                VALLEY_PSI - self.valley(w, &now).rise_psi
            }
            Watch::MinimumRate(w) => {
                let now = self.well_now(w, tank);
                self.rate(w, &now) - spec(w).minimum_rate_stb_d.unwrap_or(0.0)
            }
            Watch::Breakthrough(w) => self.before_breakthrough(w, tank).unwrap_or(1.0),
            Watch::WaterCut(w) => spec(w).maximum_water_cut.unwrap_or(1.0) - self.well_now(w, tank).water_cut,
            Watch::GasOilRatio(w) => {
                let limit = spec(w).maximum_gor_scf_stb.unwrap_or(f64::INFINITY);
                (limit - self.well_now(w, tank).gor_scf_stb) / limit
            }
            Watch::FlowAgain(w) => {
                let now = self.well_now(w, tank);
                if now.curve.open_flow_stb_d() <= 0.0 {
                    return FLOW_AGAIN_PSI;
                }
                let land = now.survey();
                let short = FLOW_AGAIN_PSI - land.margin_psi;
                // A margin alone does not help a well that one of its own limits would stop at once.
                if short > 0.0 {
                    return short;
                }
                // Every condition is asked for with a little room, so that rounding does not refuse at the same instant what was found here.
                let (limits, room) = (spec(w), 1.0 - RETURN_ROOM);
                let near = limits.maximum_water_cut.is_some_and(|limit| now.water_cut > room * limit)
                    || limits.maximum_gor_scf_stb.is_some_and(|limit| now.gor_scf_stb > room * limit);
                match place_on(&now, limits, &land) {
                    (Err(_), _) => FLOW_AGAIN_PSI,
                    (Ok(_), _) if near => FLOW_AGAIN_PSI,
                    // On its floor a well has no rate to give way to: the room of a return is asked for there.
                    (Ok(Mode::Floor), _) => short.max(FLOW_AGAIN_PSI - now.height_psi(self.floor_rate(w, &now))),
                    (Ok(Mode::Target), _) => {
                        short.max(REGAIN_PSI - now.height_psi(limits.target_rate_stb_d.unwrap_or(0.0)))
                    }
                    (Ok(_), spot) if limits.minimum_rate_stb_d.is_some_and(|least| room * spot.rate_stb_d < least) => {
                        FLOW_AGAIN_PSI
                    }
                    (Ok(_), _) => short,
                }
            }
        }
    }

    /// The lowest place between the top of the hump and the operating point that has higher ground on its right.
    pub fn valley(&self, w: usize, now: &WellNow) -> Valley {
        const LOOKS: usize = 4;
        let rate = self.rate(w, now);
        let top = self.memory.spots.borrow()[w].top_rate_stb_d;
        let mut lowest = (top, f64::INFINITY);
        let mut found = Valley { rate_stb_d: top, crest_stb_d: rate, rise_psi: 0.0 };
        if top <= 0.0 || top >= rate {
            return found;
        }
        for k in 1..=LOOKS {
            let q = top + (rate - top) * k as f64 / (LOOKS + 1) as f64;
            let height = now.height_psi(q);
            if height < lowest.1 {
                lowest = (q, height);
            } else if height - lowest.1 > found.rise_psi {
                found = Valley { rate_stb_d: lowest.0, crest_stb_d: q, rise_psi: height - lowest.1 };
            }
        }
        found
    }

    /// The highest place looked at to the right of the operating point, rate and height; `None` where the well does not go there.
    pub fn right_of(&self, w: usize, now: &WellNow) -> Option<(f64, f64)> {
        const LOOKS: usize = 2;
        // Beyond a target or floor the well does not go, so nothing there matters.
        let cap = self.floor_rate(w, now).min(self.setup.wells[w].spec.target_rate_stb_d.unwrap_or(f64::INFINITY));
        let (rate, open) = (self.rate(w, now), now.curve.open_flow_stb_d().min(cap));
        if !(rate > 0.0 && rate < open) {
            return None;
        }
        (1..=LOOKS)
            .map(|k| rate + (open - rate) * k as f64 / (LOOKS + 1) as f64)
            .map(|q| (q, now.height_psi(q)))
            .max_by(|a, b| a.1.total_cmp(&b.1))
    }

    /// Positive while no other hump reaches above zero to the right of the one on which the well flows.
    fn right_hump(&self, w: usize, tank: &TankState) -> f64 {
        self.right_of(w, &self.well_now(w, tank)).map_or(1.0, |(_, height)| REGAIN_PSI - height)
    }
}
