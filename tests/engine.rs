//! The engine: numbers to hold, consistency, injection, events.
#![allow(clippy::unwrap_used)]

mod common;

use common::fields::{injector, one_well, well};
use common::near;
use jiff::civil::date;
use wane::forecast::{
    Change, ChangeSpec, EventKind, FieldSpec, Forecast, InjectedFluid, InjectionControl, StopReason, Tolerance, run,
};
use wane::tank::WaterModel;
use wane::tubing::TubingMethod;

/// Every number of the design's table that one run can show.
fn holds(spec: &FieldSpec) -> Forecast {
    let f = run(spec).unwrap();
    assert!(f.balance_residual <= 1e-8, "balance residual {:e}", f.balance_residual);
    for t in &f.tank {
        if let Some(d) = t.drive_indices {
            let sum = d.depletion + d.gas_cap + d.rock_and_water + d.aquifer + d.injection;
            assert!((sum - 1.0).abs() <= 1e-6, "drive indices sum to {sum}");
        }
        assert!((t.oil_saturation + t.gas_saturation + t.water_saturation - 1.0).abs() < 1e-9, "saturations");
        assert!(t.oil_stb >= 0.0 && t.gas_scf >= 0.0 && t.water_stb >= 0.0, "negative volume");
    }
    for w in &f.wells {
        if let Some(end) = w.natural_flow_end
            && end.reason == StopReason::NoCrossing
            && end.liquid_rate_stb_d > 0.0
            // A change of settings may end a well at once, whatever its margin was before.
            && !f.events.iter().any(|e| e.kind == EventKind::Scheduled && e.days == end.days)
        {
            assert!(end.flow_margin_psi.abs() <= 0.01, "{}: margin {} at the end", w.name, end.flow_margin_psi);
        }
        let made: f64 = w.rows.iter().map(|r| r.oil_stb).sum();
        near(made, w.rows.last().unwrap().oil_cum_stb, 1e-12, "monthly oil sums to the cumulative");
    }
    f
}

fn end_days(f: &Forecast, w: usize) -> f64 {
    f.wells[w].natural_flow_end.unwrap_or_else(|| panic!("{} still flows", f.wells[w].name)).days
}

/// A field whose well outlives the dip of the gas-oil ratio.
fn long_lived() -> FieldSpec {
    let mut spec = one_well();
    spec.wells[0].line_pressure_psia = 120.0;
    spec.wells[0].target_rate_stb_d = Some(800.0);
    spec.tank.oil_in_place_stb = 7e6;
    spec
}

#[test]
fn ends_agree_with_tighter_tolerances() {
    let oil = |f: &Forecast| f.tank.last().unwrap().oil_cum_stb;
    for method in TubingMethod::ALL {
        // One that outlives the dip of the gas-oil ratio, one that does not, one on a small tank to its very end.
        let mut small = long_lived();
        small.tank.oil_in_place_stb = 2e6;
        let mut ended = 0;
        for (field, mut spec) in [("long", long_lived()), ("dip", one_well()), ("small", small)] {
            spec.wells[0].tubing.method = method;
            let normal = holds(&spec);
            spec.tolerance = Tolerance::Tight;
            let tight = holds(&spec);
            let name = format!("{} on {field}", method.name());
            near(oil(&normal), oil(&tight), 1e-4, "cumulative oil");
            if normal.wells[0].natural_flow_end.is_none() {
                assert!(tight.wells[0].natural_flow_end.is_none(), "{name}: one of the runs ends");
                continue;
            }
            ended += 1;
            let (n, t) = (end_days(&normal, 0), end_days(&tight, 0));
            println!("{name}: {n:.4} {t:.4}, {:?}", normal.work);
            assert!((n - t).abs() <= 0.5, "{name}: normal {n} against tight {t} days");
            // A hundred times tighter again takes long: once per model is enough.
            if ended == 1 {
                spec.tolerance = Tolerance::Reference;
                let r = end_days(&holds(&spec), 0);
                assert!((t - r).abs() <= 0.1, "{name}: tight {t} against reference {r} days");
            }
        }
        // Without slip the tubing curve hardly turns up at low rates: such wells do not die of it.
        assert!(ended > 0 || method == TubingMethod::NoSlip, "{}: no run ended", method.name());
    }
}

#[test]
fn a_shut_well_changes_nothing_and_two_equal_wells_equal_one_double_one() {
    let mut two = long_lived();
    two.tank.oil_in_place_stb *= 2.0;
    two.wells = vec![two.wells[0].clone(), wane::well::WellSpec { name: "OP-2".to_owned(), ..two.wells[0].clone() }];
    let two = holds(&two);
    let one = holds(&long_lived());
    // The integrator weighs the errors of two wells otherwise than those of one: a fifth of the bar on tolerances.
    assert!((end_days(&two, 0) - end_days(&one, 0)).abs() < 0.1, "end of the first of two equal wells");
    assert!((end_days(&two, 1) - end_days(&one, 0)).abs() < 0.1, "end of the second of two equal wells");
    near(two.tank.last().unwrap().oil_cum_stb, 2.0 * one.tank.last().unwrap().oil_cum_stb, 1e-5, "oil");
}

#[test]
fn zero_injection_equals_no_injector() {
    let plain = holds(&long_lived());
    for fluid in [InjectedFluid::Water, InjectedFluid::Gas] {
        let mut spec = long_lived();
        spec.injectors = vec![injector("WI", fluid, InjectionControl::VoidageReplacement(0.0))];
        let f = holds(&spec);
        // The same steps up to rounding; the tubing pressure is smooth to about 1e-4 psi, the margin closes at 0.3 psi a day.
        assert!((end_days(&f, 0) - end_days(&plain, 0)).abs() < 0.01, "end with an idle injector");
        assert_eq!(f.tank.last().unwrap().injected_water_stb, 0.0);
    }
}

/// Voidage replacement of 1 by water holds the pressure exactly: above, at and below the bubble point.
#[test]
fn full_voidage_replacement_by_water_holds_the_pressure_in_every_state() {
    for start in [3800.0, 2650.0, 2000.0] {
        let mut spec = long_lived();
        spec.tank.water_model = WaterModel::Connate;
        if start < 2650.0 {
            // A tank that has made enough to stand below its bubble point.
            spec.tank.produced = Some(wane::tank::ProducedSpec {
                oil_stb: 1.9e6,
                gas_scf: 1.15e9,
                ..wane::tank::ProducedSpec::default()
            });
        } else {
            spec.tank.pressure_psia = start;
        }
        spec.wells[0].line_pressure_psia = 60.0;
        spec.injectors = vec![injector("WI", InjectedFluid::Water, InjectionControl::VoidageReplacement(1.0))];
        let f = holds(&spec);
        for t in &f.tank {
            near(t.pressure_psia, f.start_pressure_psia, 1e-7, "pressure under full replacement");
            near(t.voidage_replacement.unwrap(), 1.0, 1e-7, "voidage replacement");
        }
        assert!(f.periods.len() > 12, "it ran {} months only", f.periods.len());
    }
}

#[test]
fn more_voidage_replacement_moves_the_end_and_brings_water() {
    let case = |part: f64| {
        let mut spec = long_lived();
        spec.tank.water_model = WaterModel::Average;
        spec.injectors = vec![injector("WI", InjectedFluid::Water, InjectionControl::VoidageReplacement(part))];
        holds(&spec)
    };
    let runs: Vec<Forecast> = [0.0, 0.5, 1.0].map(case).into();
    let pressure = |f: &Forecast| f.tank[24].pressure_psia;
    assert!(pressure(&runs[0]) < pressure(&runs[1]) && pressure(&runs[1]) < pressure(&runs[2]), "pressure support");
    let water = |f: &Forecast| f.tank.last().unwrap().water_cum_stb;
    assert!(water(&runs[2]) > 100.0 * water(&runs[0]) + 1.0, "water comes back");
    for f in &runs[1..] {
        let t = f.tank.last().unwrap();
        let injected = f.injectors[0].rows.last().unwrap().water_cum_stb;
        // Injected water that came back is at most what went in, beside the connate water's own expansion.
        assert!(t.water_cum_stb <= injected + 1e-2 * f.oil_in_place_stb);
    }
    assert!(runs[2].tank.last().unwrap().oil_cum_stb > runs[0].tank.last().unwrap().oil_cum_stb, "more oil");
}

#[test]
fn an_injector_stays_below_its_limit_and_reports_what_it_could_not_inject() {
    let mut spec = long_lived();
    spec.tank.water_model = WaterModel::Average;
    let mut wi = injector("WI", InjectedFluid::Water, InjectionControl::VoidageReplacement(1.2));
    wi.bottomhole_limit_psia = Some(4000.0);
    wi.injectivity = Some(0.3);
    wi.start = Some(date(2028, 1, 1));
    wi.end = Some(date(2029, 1, 1));
    spec.injectors = vec![wi];
    let f = holds(&spec);
    let rows = &f.injectors[0].rows;
    assert_eq!(rows[11].water_cum_stb, 0.0, "nothing before the start");
    assert!(rows[12].water_stb > 0.0);
    assert!(
        rows.iter().filter_map(|r| r.bottomhole_pressure_psia).all(|p| p <= 4000.0 * (1.0 + 1e-9)),
        "limit exceeded"
    );
    near(rows.last().unwrap().water_cum_stb, rows[23].water_cum_stb, 1e-12, "nothing after the end");
    assert!(rows.iter().map(|r| r.shortfall).sum::<f64>() > 0.0, "shortfall is reported");
    assert!(f.events.iter().any(|e| e.kind == EventKind::InjectionLimited));
    assert!(f.doubts.iter().any(|d| d.kind == wane::forecast::DoubtKind::InjectionShortfall));
}

#[test]
fn a_target_is_held_by_choking_and_lost_once() {
    let f = holds(&long_lived());
    let plateau = f.wells[0].plateau_end.unwrap();
    for (p, r) in f.periods.iter().zip(&f.wells[0].rows) {
        if p.end_days < plateau {
            near(r.liquid_rate_stb_d.unwrap(), 800.0, 1e-12, "target");
            assert!(r.wellhead_pressure_psia.unwrap() > 120.0, "choked: wellhead above line pressure");
            near(r.oil_stb, 800.0 * 0.95 * (p.end_days - p.start_days), 1e-9, "uptime counts once");
        } else if let Some(rate) = r.liquid_rate_stb_d {
            assert!(rate < 800.0 && r.wellhead_pressure_psia == Some(120.0));
        }
    }
    // At the instant the plateau is lost line pressure just suffices: the rate is continuous.
    let first = f.wells[0].rows.iter().find(|r| r.liquid_rate_stb_d.is_some_and(|q| q < 800.0)).unwrap();
    assert!(first.liquid_rate_stb_d.unwrap() > 700.0);
}

#[test]
fn dated_events_act_on_their_day() {
    let mut spec = one_well();
    let mut changed = spec.wells[0].clone();
    changed.skin = 2.0;
    spec.changes = vec![ChangeSpec {
        on: date(2028, 7, 17),
        name: "OP-1".to_owned(),
        text: "skin = 2.0".to_owned(),
        change: Change::Well(0, Box::new(changed)),
    }];
    let damaged = holds(&spec);
    let plain = holds(&one_well());
    let at = |f: &Forecast, m: usize| f.tank[m].oil_cum_stb;
    near(at(&damaged, 17), at(&plain, 17), 1e-7, "nothing changes before the event");
    assert!(at(&damaged, 20) < at(&plain, 20) - 1.0, "skin costs oil");
    let event = damaged.events.iter().find(|e| e.kind == EventKind::Scheduled).unwrap();
    assert_eq!((event.date, event.days), (date(2028, 7, 17), 563.0));
}

/// The productivity under skin s is that without it times r/(r + s), r = 7 where no radii are stated (common practice).
#[test]
fn an_event_can_stimulate_a_dying_well() {
    let mut spec = one_well();
    let end = end_days(&run(&spec).unwrap(), 0);
    let mut better = spec.wells[0].clone();
    better.skin = -3.0;
    spec.changes = vec![ChangeSpec {
        on: date(2029, 6, 1),
        name: "OP-1".to_owned(),
        text: "skin = -3.0".to_owned(),
        change: Change::Well(0, Box::new(better)),
    }];
    assert!(end_days(&holds(&spec), 0) > end, "a stimulation before the end buys time");
}

#[test]
fn a_dead_well_flows_again_when_injection_lifts_the_tank() {
    let mut spec = one_well();
    spec.tank.water_model = WaterModel::Connate;
    let mut wi = injector("WI", InjectedFluid::Water, InjectionControl::Rate(3000.0));
    wi.start = Some(date(2030, 6, 1));
    wi.end = Some(date(2031, 6, 1));
    spec.injectors = vec![wi];
    // A second well, on lower line pressure and held back, keeps the run going.
    let mut second = well("OP-2");
    second.line_pressure_psia = 80.0;
    second.target_rate_stb_d = Some(100.0);
    spec.wells.push(second);
    let without = holds(&spec);
    let first_end = without.wells[0].natural_flow_end.unwrap();
    assert!(without.events.iter().any(|e| e.kind == EventKind::CouldFlowAgain && e.name == "OP-1"), "could flow again");
    assert!(!without.wells[0].flowing_at_end);
    spec.wells[0].may_flow_again = true;
    let with = holds(&spec);
    let again = with.events.iter().find(|e| e.kind == EventKind::FlowsAgain && e.name == "OP-1").unwrap();
    assert!(again.days > first_end.days);
    assert!(with.wells[0].rows.last().unwrap().oil_cum_stb > without.wells[0].rows.last().unwrap().oil_cum_stb);
}

#[test]
fn wells_start_and_stop_on_their_days() {
    let mut spec = one_well();
    let mut late = well("OP-2");
    late.start = Some(date(2027, 9, 10));
    late.end = Some(date(2028, 3, 5));
    late.target_rate_stb_d = Some(300.0);
    spec.wells.push(late);
    let f = holds(&spec);
    let w = &f.wells[1];
    assert_eq!(w.rows[7].oil_stb, 0.0);
    near(w.rows[8].flowing_days, 21.0 * 0.95, 1e-9, "days on stream in the first month");
    near(w.rows[14].flowing_days, 4.0 * 0.95, 1e-9, "days on stream in the last month");
    let end = w.natural_flow_end.unwrap();
    assert_eq!((end.reason, end.date), (StopReason::Scheduled, date(2028, 3, 5)));
}

#[test]
fn limits_end_wells_with_their_own_reason() {
    let mut spec = long_lived();
    spec.wells[0].minimum_rate_stb_d = Some(600.0);
    let f = holds(&spec);
    let end = f.wells[0].natural_flow_end.unwrap();
    assert_eq!(end.reason, StopReason::RateLimit);
    near(end.liquid_rate_stb_d, 600.0, 1e-6, "rate at the rate limit");

    let mut spec = long_lived();
    spec.wells[0].minimum_flowing_pressure_psia = Some(2500.0);
    let f = holds(&spec);
    assert_eq!(f.wells[0].natural_flow_end.unwrap().reason, StopReason::MinimumFlowingPressure);
    assert!(f.wells[0].rows.iter().filter_map(|r| r.flowing_pressure_psia).all(|p| p >= 2500.0 - 1e-3));

    let mut spec = long_lived();
    spec.wells[0].maximum_gor_scf_stb = Some(900.0);
    let f = holds(&spec);
    let end = f.wells[0].natural_flow_end.unwrap();
    assert_eq!(end.reason, StopReason::GasOilRatioLimit);
}

#[test]
fn the_same_input_gives_the_same_result_to_the_last_bit() {
    let spec = one_well();
    let (a, b) = (run(&spec).unwrap(), run(&spec).unwrap());
    assert_eq!(a, b);
}

#[test]
fn gas_injection_counts_gas_back_and_closes() {
    let mut spec = long_lived();
    spec.injectors = vec![injector("GI", InjectedFluid::Gas, InjectionControl::Rate(300e3))];
    let f = holds(&spec);
    let t = f.tank.last().unwrap();
    let injected = f.injectors[0].rows.last().unwrap().gas_cum_scf;
    assert!(injected > 0.0);
    assert!(t.gas_cum_scf <= 7e6 * 620.0 + injected, "no more gas out than was there and went in");
}

#[test]
fn a_tank_flooded_beyond_its_fluid_stops_with_what_was_computed_so_far() {
    let mut spec = long_lived();
    spec.tank.water_model = WaterModel::Connate;
    spec.injectors = vec![injector("WI", InjectedFluid::Water, InjectionControl::Rate(200_000.0))];
    let f = holds(&spec);
    let stop = f.events.iter().find(|e| e.kind == EventKind::BalanceStopped).expect("the stop is an event");
    assert!(stop.note.contains("too much is injected") && stop.days > 1.0 && stop.days == f.end_days, "{stop:?}");
    let end = f.wells[0].natural_flow_end.unwrap();
    assert_eq!((end.reason, end.days), (StopReason::BalanceHasNoSolution, stop.days));
    // A check of the results fails, so that the exit status is 3.
    assert!(wane::report::sanity(&f).iter().any(|text| text.contains("too much is injected")));
}

/// Two minima of the tubing curve: the hump on which the well flows parts from the other one and ends while natural flow goes on.
#[test]
fn losing_the_right_hand_hump_is_a_rate_jump_and_not_the_end() {
    let path = concat!(env!("CARGO_MANIFEST_DIR"), "/scenarios/injection.toml");
    let scenario = wane::scenario::Document::load(path.as_ref()).unwrap().resolve(None, &[]).unwrap();
    let f = holds(&scenario.field);
    let jump = f.events.iter().find(|e| e.kind == EventKind::RateJump).expect("a rate jump");
    let end = f.wells[0].natural_flow_end.unwrap();
    assert!(jump.days < end.days && end.reason == StopReason::NoCrossing);
    let rate = |days: f64| {
        let i = f.periods.iter().position(|p| p.end_days >= days).unwrap();
        f.wells[0].rows[i].liquid_rate_stb_d.unwrap()
    };
    assert!(rate(jump.days - 31.0) > 1.2 * rate(jump.days + 31.0), "the rate jumps");
    let mut tight = scenario.field.clone();
    tight.tolerance = Tolerance::Tight;
    let t = holds(&tight);
    let again = t.events.iter().find(|e| e.kind == EventKind::RateJump).unwrap();
    assert!((again.days - jump.days).abs() < 0.1, "jump at {} and {}", jump.days, again.days);
    assert!((end_days(&t, 0) - end.days).abs() < 0.1);
}
