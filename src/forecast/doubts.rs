//! Doubts about a result: what was seen, the likely cause, what to do.

use super::doubts_flow::about_flow;
use super::doubts_wellhead;
use super::field::Field;
use super::screens::Screens;
use super::{Doubt, DoubtKind, EventKind, Forecast, InjectedFluid, StopReason};
use crate::inflow::{Figure, Shape};
use crate::tank::{TankState, WaterModel};
use jiff::civil::Date;

/// A test that the model misses by more than this is doubted (practice: a test within 10 % of the model).
const TEST_MISS: f64 = 0.10;
/// Upper over lower limit of the open flow beyond which the tests count as weak.
const WIDE_OPEN_FLOW: f64 = 2.0;
/// Part of the stated bottom-hole limit from which injection is doubted.
const NEAR_LIMIT: f64 = 0.90;
/// Recovery by depletion alone above which the case is doubted (solution-gas drive seldom exceeds it; common practice).
const HIGH_DEPLETION_RECOVERY: f64 = 0.30;

/// What the rows met on the way.
pub(super) struct Seen {
    /// Volume asked of each injector up to the last row, STB or scf.
    pub asked: Vec<f64>,
    /// What the screens of each well met.
    pub screens: Vec<Screens>,
    injection: Vec<Option<(f64, f64, usize)>>,
    lowest_psia: f64,
}

impl Seen {
    pub fn new(wells: usize, injectors: usize) -> Self {
        Self {
            asked: vec![0.0; injectors],
            screens: vec![Screens::default(); wells],
            injection: vec![None; injectors],
            lowest_psia: f64::INFINITY,
        }
    }

    pub fn injector(&mut self, i: usize, row: usize, pressure_psia: f64, limit_psia: Option<f64>) {
        if let Some(limit) = limit_psia {
            let part = pressure_psia / limit;
            if self.injection[i].is_none_or(|(highest, _, _)| part > highest) {
                self.injection[i] = Some((part, pressure_psia, row));
            }
        }
    }

    pub fn tank(&mut self, _row: usize, tank: &TankState) {
        self.lowest_psia = self.lowest_psia.min(tank.pressure_psia);
    }
}

pub(super) fn month(date: Date) -> String {
    format!("{} {}", date.strftime("%B"), date.year())
}

pub(super) fn months(forecast: &Forecast, rows: &[usize]) -> String {
    let name = |i: &usize| forecast.periods.get(*i).map_or_else(String::new, |p| month(p.start));
    match rows {
        [] => String::new(),
        [one] => name(one),
        [first, .., last] => format!("{} periods between {} and {}", rows.len(), name(first), name(last)),
    }
}

/// All doubts about a result, in a fixed order.
pub(super) fn about_result(field: &Field, forecast: &Forecast, seen: &Seen) -> Vec<Doubt> {
    let mut doubts = Vec::new();
    fluid_and_tank(field, forecast, &mut doubts);
    for w in 0..forecast.wells.len() {
        well(field, forecast, seen, w, &mut doubts);
        doubts_wellhead::choke(&field.wells()[w], forecast, w, &mut doubts);
    }
    for l in 0..field.spec.lines.len() {
        doubts_wellhead::line(field, forecast, l, &mut doubts);
    }
    for i in 0..forecast.injectors.len() {
        injector(field, forecast, seen, i, &mut doubts);
    }
    sanity(field, forecast, &mut doubts);
    doubts
}

pub(super) fn doubt(kind: DoubtKind, about: &str, seen: String, cause: &str, advice: &str) -> Doubt {
    Doubt { kind, about: about.to_owned(), seen, cause: cause.to_owned(), advice: advice.to_owned() }
}

fn fluid_and_tank(field: &Field, forecast: &Forecast, doubts: &mut Vec<Doubt>) {
    for note in field.fluid.range_notes() {
        doubts.push(doubt(
            DoubtKind::OutsideRange,
            "fluid",
            format!("{} ({}): {}", note.property, note.correlation, note.text),
            "the fluid lies outside the data on which the correlation was fitted",
            "compare with a laboratory report, above all the bubble point and the viscosity",
        ));
    }
    let tank = &field.spec.tank;
    if let Some(measured) = tank.produced.and_then(|p| p.measured_pressure_psia) {
        let gap = forecast.start_pressure_psia - measured;
        if gap.abs() > (0.02 * measured).max(30.0) {
            doubts.push(doubt(
                DoubtKind::PressureMismatch,
                "tank",
                format!(
                    "the balance gives {:.0} psia at the start, measured were {measured:.0} psia ({gap:+.0} psi)",
                    forecast.start_pressure_psia
                ),
                "oil in place, produced gas or water, an aquifer or a gas cap differ from what is stated",
                "check the produced volumes first, then the oil in place; the measured pressure is not imposed",
            ));
        }
    }
    if tank.gas_cap_ratio > 0.0 {
        doubts.push(doubt(
            DoubtKind::NotModelled,
            "tank",
            "the tank has a gas cap".to_owned(),
            "gas coning into the wells is not modelled: it makes the gas-oil ratio rise earlier than computed",
            "compare the first months' gas-oil ratio with measurements; state a gor_factor where a well makes more",
        ));
    }
    if tank.aquifer.is_some() && tank.water_model == WaterModel::Connate {
        doubts.push(doubt(
            DoubtKind::NotModelled,
            "tank",
            "there is an aquifer but the water model \"connate\" lets none of its water reach a well".to_owned(),
            "the scenario chose it: support without water flatters the wells",
            "choose the model \"average\" for anything but a bound on the best case",
        ));
    }
    let water_injected = field.spec.injectors.iter().any(|i| i.fluid == InjectedFluid::Water);
    if water_injected && tank.water_model == WaterModel::Connate {
        doubts.push(doubt(
            DoubtKind::NotModelled,
            "tank",
            "water is injected but the water model \"connate\" returns none of it".to_owned(),
            "the scenario chose it: support without water return flatters the wells",
            "choose the model \"displacement\" for anything but a bound on the best case",
        ));
    } else if tank.water_model == WaterModel::Displacement {
        doubts.push(doubt(
            DoubtKind::NotModelled,
            "tank",
            format!("inflowing water comes as one front through {:.0} % of the oil zone", 100.0 * tank.water.contacted_fraction),
            "layers and unequal distances spread a front: real water comes earlier and rises more slowly, and no measured water cut has fixed the contacted fraction",
            "run cases with other contacted fractions; give wells nearer to or farther from the injector a breakthrough_delay",
        ));
    } else if tank.water_model == WaterModel::Trend {
        doubts.push(doubt(
            DoubtKind::NotModelled,
            "tank",
            "the water cut follows the table of the scenario".to_owned(),
            "a table does not feel how much is injected or withdrawn",
            "compare a second case with the model \"displacement\"",
        ));
    } else if water_injected {
        doubts.push(doubt(
            DoubtKind::NotModelled,
            "tank",
            "injected water returns at the tank's average saturation".to_owned(),
            "the average has no front: water is seen too early and then too little of it",
            "read the date of the first water with care, and compare a second case with the model \"connate\"",
        ));
    }
}

fn well(field: &Field, forecast: &Forecast, seen: &Seen, w: usize, doubts: &mut Vec<Doubt>) {
    let (result, model) = (&forecast.wells[w], &field.wells()[w]);
    let name = &result.name;
    for test in &result.tests {
        let miss = test.model_rate_stb_d / test.rate_stb_d - 1.0;
        if miss.abs() > TEST_MISS {
            doubts.push(doubt(
                DoubtKind::TestMismatch,
                name,
                format!(
                    "the test of {:.0} STB/d at {:.0} psia flowing is met with {:.0} STB/d ({:+.0} %)",
                    test.rate_stb_d,
                    test.flowing_psia,
                    test.model_rate_stb_d,
                    100.0 * miss
                ),
                "the tests do not lie on one curve of the chosen form, or one of them was not stable",
                "check the test's reservoir pressure and duration, or leave it out and see what changes",
            ));
        }
    }
    if let (Some(fit), Shape::Fetkovich { n }) = (&model.fit, model.inflow.shape)
        && !(0.5..=1.0).contains(&n)
    {
        doubts.push(doubt(
            DoubtKind::WeakFit,
            name,
            format!("the fitted exponent n is {n:.3} (rates met within {:.1} %)", 100.0 * fit.rms_relative),
            "n lies between 0.5 and 1 for wells on solution-gas drive; scatter or unstable tests push it out",
            "state exponent = 1.0 (or 0.5) and compare the end of natural flow",
        ));
    }
    let open_flow = model.fit.iter().flat_map(|fit| &fit.intervals).find(|i| i.figure == Figure::OpenFlow);
    if let Some(i) = open_flow.filter(|i| i.high > WIDE_OPEN_FLOW * i.low) {
        doubts.push(doubt(
            DoubtKind::WeakFit,
            name,
            format!("the tests leave the open flow anywhere between {:.0} STB/d and {:.0} STB/d", i.low, i.high),
            "few tests that scatter, or all far from the open flow",
            "test again at other rates, nearer to that at the end of natural flow; until then run both ends as cases",
        ));
    }
    about_flow(forecast, name, &seen.screens[w], doubts);
    if let Some(end) = result.natural_flow_end {
        let critical = field.tank().relative_permeability().critical_gas();
        let row = forecast.periods.iter().position(|p| p.run_days >= end.days);
        let in_dip = row.is_some_and(|i| {
            let t = &forecast.tank[i];
            t.gas_saturation > 0.0 && t.gas_saturation < critical + 0.01
        });
        if end.reason == StopReason::NoCrossing && in_dip {
            doubts.push(doubt(
                DoubtKind::EarlyEnd,
                name,
                format!("it ends in {} at {:.0} STB/d, in the dip of the gas-oil ratio", month(end.date), end.oil_rate_stb_d),
                "just below the bubble point freed gas stays in the rock until its critical saturation, the column grows heavier",
                "the well may flow again once gas moves: set may_flow_again = true, and weigh a short kick-off against lift",
            ));
        }
        if forecast.events.iter().any(|e| e.name == *name && e.kind == EventKind::CouldFlowAgain) {
            doubts.push(doubt(
                DoubtKind::EarlyEnd,
                name,
                "after its end the well could flow again by itself".to_owned(),
                "rising gas-oil ratio or pressure support gave it a flow margin again; a stopped well needs a start",
                if field.spec.wells[w].may_flow_again {
                    "it came and went within days and was left shut: lift it, or let pressure build up and open it by an event"
                } else {
                    "set may_flow_again = true if somebody will open it"
                },
            ));
        }
    }
}

fn injector(field: &Field, forecast: &Forecast, seen: &Seen, i: usize, doubts: &mut Vec<Doubt>) {
    let spec = &field.spec.injectors[i];
    let rows = &forecast.injectors[i].rows;
    let short: f64 = rows.iter().map(|r| r.shortfall).sum();
    let injected: f64 = rows.last().map_or(0.0, |r| r.water_cum_stb + r.gas_cum_scf);
    if short > 1e-6 * (short + injected) {
        let when: Vec<usize> = rows.iter().enumerate().filter(|(_, r)| r.shortfall > 0.0).map(|(k, _)| k).collect();
        doubts.push(doubt(
            DoubtKind::InjectionShortfall,
            &spec.name,
            format!(
                "{:.1} % of the volume asked for is not injected: {}",
                100.0 * short / (short + injected),
                months(forecast, &when)
            ),
            "the rate, injectivity or bottom-hole limit holds it back; the limit was not exceeded",
            "add an injector, improve the injectivity, or ask for less",
        ));
    }
    if let Some((part, pressure, row)) = seen.injection[i]
        && part >= NEAR_LIMIT
    {
        doubts.push(doubt(
            DoubtKind::InjectionPressure,
            &spec.name,
            format!("bottom-hole pressure {pressure:.0} psia is {:.0} % of the stated limit in {}", 100.0 * part, months(forecast, &[row])),
            "injection near to the fracture figure",
            "keep to the limit set by local regulation and the operator's procedures; have the figure confirmed by a step-rate test",
        ));
    }
    if spec.bottomhole_limit_psia.is_none() || spec.injectivity.is_none() {
        doubts.push(doubt(
            DoubtKind::InjectionPressure,
            &spec.name,
            "the injection pressure is not checked against a fracture figure".to_owned(),
            "bottomhole_limit or injectivity is not stated",
            "state both; injection above fracture pressure is a matter of safety and of regulation",
        ));
    }
}

/// Expansion of connate water and rock that may come out as water, over the connate water.
const CONNATE_EXPANSION: f64 = 0.02;

/// No more water comes out than went in, beside the expansion of what was there.
fn water_made(field: &Field, forecast: &Forecast, doubts: &mut Vec<Doubt>) {
    let before = field.spec.tank.produced.unwrap_or_default();
    let made_stb = before.water_stb + forecast.tank.last().map_or(0.0, |t| t.water_cum_stb);
    let injected_stb = before.injected_water_stb + forecast.tank.iter().map(|t| t.injected_water_stb).sum::<f64>();
    let influx_stb = forecast.tank.last().and_then(|t| t.aquifer).map_or(0.0, |a| a.influx_cum_stb.max(0.0));
    let came_stb = injected_stb + influx_stb;
    let room_stb = CONNATE_EXPANSION * field.tank().initial().water_stb;
    if made_stb > came_stb + room_stb {
        doubts.push(doubt(
            DoubtKind::Sanity,
            "tank",
            format!("the wells make {made_stb:.0} STB of water, but only {came_stb:.0} STB came in"),
            "a table of water cuts or a water_factor asks for water that is not there; or an aquifer is not stated",
            "state what brings the water, or lower the table",
        ));
    }
}

fn sanity(field: &Field, forecast: &Forecast, doubts: &mut Vec<Doubt>) {
    water_made(field, forecast, doubts);
    let recovery = forecast
        .tank
        .last()
        .map_or(0.0, |t| (forecast.produced_before_stb + t.oil_cum_stb) / forecast.oil_in_place_stb);
    let tank = &field.spec.tank;
    let alone = field.spec.injectors.is_empty() && tank.gas_cap_ratio <= 0.0 && tank.aquifer.is_none();
    if alone && recovery > HIGH_DEPLETION_RECOVERY {
        doubts.push(doubt(
            DoubtKind::Sanity,
            "tank",
            format!("depletion alone recovers {:.0} % of the oil in place", 100.0 * recovery),
            "solution-gas drive recovers 5 to 30 %; a low critical gas saturation or a gentle gas curve flatters it",
            "check the relative permeability against field gas-oil ratios, and the oil in place",
        ));
    }
}
