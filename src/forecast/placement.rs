//! Where a well belongs when it is looked at from scratch: a flowing mode, or the reason why it does not flow.

use super::StopReason;
use super::dynamics::Dynamics;
use super::modes::{Mode, Spot};
use crate::inflow::FutureRule;
use crate::roots::brent;
use crate::tank::TankState;
use crate::well::{Crossing, LOOK_TO, Landscape, WellNow, WellSpec, crossings, top_near};

/// The right-most stable crossing below a cap, as a mode.
pub(super) fn stable_below(now: &WellNow, cap_stb_d: f64) -> Option<(Mode, Spot)> {
    let open = now.curve.open_flow_stb_d();
    let all = crossings(|q| now.height_psi(q), open);
    let i = all.iter().rposition(|c: &Crossing| c.stable && c.rate_stb_d <= cap_stb_d)?;
    let rate = all[i].rate_stb_d;
    let low = if i > 0 { all[i - 1].rate_stb_d } else { 0.0 };
    let high = all.get(i + 1).map_or(open, |c| c.rate_stb_d);
    let slope = now.height_slope(rate);
    // The hump reaches from the middle of the dip on its left to the middle of the one on its right.
    let low = if i > 1 { 0.5 * (low + all[i - 2].rate_stb_d) } else { 0.0 };
    let high = if high < open { 0.5 * (rate + high) } else { open };
    Some((
        Mode::Line { low: low / open, high: high / open },
        Spot { rate_stb_d: rate, slope, top_rate_stb_d: 0.5 * (rate + low.max(0.5 * rate)), ..Spot::default() },
    ))
}

/// Open flow up to which a well that follows the mobility of the oil counts as standing still, STB/d: ten times the least that an inflow
/// curve knows, so that both sides of its end are told alike.
const STANDSTILL_STB_D: f64 = 0.01;

/// Why the curves do not meet: oil that has ceased to move takes the whole inflow away, whatever the tubing asks.
pub(super) fn why_apart(dynamics: &Dynamics, w: usize, now: &WellNow) -> StopReason {
    let by_mobility = dynamics.setup.wells[w].inflow.future == FutureRule::Mobility;
    if by_mobility && now.curve.reservoir_psia() > 0.0 && now.curve.open_flow_stb_d() < STANDSTILL_STB_D {
        StopReason::OilNoLongerMoves
    } else {
        StopReason::NoCrossing
    }
}

/// Where a well belongs at a tank state: a flowing mode, or the reason why it does not flow. Humps no higher than `least_psi` do not count.
pub(super) fn placement(
    dynamics: &Dynamics,
    w: usize,
    tank: &TankState,
    least_psi: f64,
) -> (Result<Mode, StopReason>, Spot) {
    let now = dynamics.well_now(w, tank);
    if now.curve.open_flow_stb_d() <= 0.0 {
        return (Err(why_apart(dynamics, w, &now)), Spot::default());
    }
    let land = now.survey_above(least_psi);
    if land.margin_psi <= least_psi {
        return (Err(StopReason::NoCrossing), Spot::default());
    }
    place_on(&now, &dynamics.setup.wells[w].spec, &land)
}

/// [`placement`] on a landscape that is known already.
pub(super) fn place_on(now: &WellNow, spec: &WellSpec, land: &Landscape) -> (Result<Mode, StopReason>, Spot) {
    let open = now.curve.open_flow_stb_d();
    if land.margin_psi <= 0.0 {
        return (Err(StopReason::NoCrossing), Spot::default());
    }
    if spec.maximum_water_cut.is_some_and(|limit| now.water_cut >= limit) {
        return (Err(StopReason::WaterCutLimit), Spot::default());
    }
    if spec.maximum_gor_scf_stb.is_some_and(|limit| now.gor_scf_stb >= limit) {
        return (Err(StopReason::GasOilRatioLimit), Spot::default());
    }
    let floor = spec.minimum_flowing_pressure_psia.map_or(f64::INFINITY, |p| now.curve.rate_stb_d(p));
    let target = spec.target_rate_stb_d.unwrap_or(f64::INFINITY);
    let (cap, capped, limit) = if target <= floor {
        (target, Mode::Target, StopReason::RateLimit)
    } else {
        (floor, Mode::Floor, StopReason::MinimumFlowingPressure)
    };
    let top = Spot { top_rate_stb_d: land.top_rate_stb_d, ..Spot::default() };
    let (mode, spot, rate) = if cap <= 0.0 {
        return (Err(limit), top);
    } else if cap < open && now.height_psi(cap) >= 0.0 {
        (capped, top, cap)
    } else {
        match land.right_crossing_stb_d {
            Some(rate) if rate <= cap => {
                let slope = now.height_slope(rate);
                let mode = Mode::Line { low: land.hump_stb_d.0 / open, high: land.hump_stb_d.1 / open };
                (mode, Spot { rate_stb_d: rate, slope, ..top }, rate)
            }
            _ => match stable_below(now, cap) {
                Some((mode, spot)) => (mode, spot, spot.rate_stb_d),
                None => return (Err(limit), top),
            },
        }
    };
    if spec.minimum_rate_stb_d.is_some_and(|least| rate < least) {
        return (Err(StopReason::RateLimit), spot);
    }
    (Ok(mode), spot)
}

/// The hump around a rate known to lie above zero, on the right of the operating point `left_stb_d`.
pub(super) fn hump_at(now: &WellNow, left_stb_d: f64, crest_stb_d: f64) -> Option<(Mode, Spot)> {
    const LOOKS: usize = 12;
    let open = now.curve.open_flow_stb_d();
    let height = |q: f64| now.height_psi(q);
    let (top_rate, top) = top_near(height, crest_stb_d, left_stb_d, LOOK_TO * open);
    let between = |a: f64, b: f64, k: usize| a + (b - a) * k as f64 / LOOKS as f64;
    let valley = (0..LOOKS)
        .map(|k| between(left_stb_d, top_rate, k))
        .map(|q| (q, height(q)))
        .min_by(|a, b| a.1.total_cmp(&b.1))?
        .0;
    let mut inside = (top_rate, top);
    for k in 1..=LOOKS {
        let q = between(top_rate, open, k);
        let here = (q, height(q));
        if here.1 <= 0.0 {
            let rate = brent(height, inside, here, 1e-10 * open);
            let slope = now.height_slope(rate);
            let spot =
                Spot { rate_stb_d: rate, slope, top_rate_stb_d: top_rate, low_rate_stb_d: valley, ..Spot::default() };
            return Some((Mode::Line { low: valley / open, high: 1.0 }, spot));
        }
        inside = here;
    }
    None
}
