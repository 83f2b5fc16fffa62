//! Faults that were found by use, each kept away by the smallest field that showed it.
#![allow(clippy::unwrap_used)]

mod common;

use common::fields::{injector, one_well};
use jiff::civil::date;
use wane::forecast::{
    Change, ChangeSpec, EventKind, FieldSpec, Forecast, InjectedFluid, InjectionControl, StopReason, run,
};
use wane::inflow::{Coefficient, InflowCurve, Shape};
use wane::tank::WaterModel;
use wane::well::{LOOK_FROM, survey, survey_above, top_near};

fn flows_only_with_a_margin(f: &Forecast) {
    for w in &f.wells {
        for (row, period) in w.rows.iter().zip(&f.periods) {
            if row.flowing {
                let margin = row.flow_margin_psi.unwrap();
                assert!(margin >= -0.01, "{} flows with {margin} psi at {}", w.name, period.end);
            }
        }
    }
}

/// A tank that is small enough for its injector to lift and drop it within months.
fn restless() -> FieldSpec {
    let mut spec = one_well();
    spec.period.end = date(2032, 1, 1);
    spec.tank.oil_in_place_stb = 3e6;
    spec.wells[0].may_flow_again = true;
    spec
}

#[test]
fn a_well_stopped_by_its_floor_does_not_return_at_the_same_instant() {
    let mut spec = restless();
    (spec.wells[0].target_rate_stb_d, spec.wells[0].minimum_flowing_pressure_psia) = (None, Some(2600.0));
    let f = run(&spec).unwrap();
    let end = f.wells[0].natural_flow_end.expect("the floor ends it");
    assert_eq!(end.reason, StopReason::MinimumFlowingPressure);
    assert_eq!(f.events.iter().filter(|e| e.kind == EventKind::FlowsAgain).count(), 0);
    // And nobody is told that it could.
    spec.wells[0].may_flow_again = false;
    let f = run(&spec).unwrap();
    assert!(!f.events.iter().any(|e| e.kind == EventKind::CouldFlowAgain));
}

#[test]
fn a_dead_well_whose_own_limit_forbids_flow_is_left_alone() {
    // It dies of the heavy column in the dip. Then its target is set to less than it could hold, and injection brings a margin
    // of 1 psi back within two days of its start: it must wait until it can hold that target.
    let mut spec = restless();
    let mut w = spec.wells[0].clone();
    w.target_rate_stb_d = Some(150.0);
    spec.changes.push(ChangeSpec {
        on: date(2028, 6, 1),
        name: w.name.clone(),
        text: "target_rate = 150".to_owned(),
        change: Change::Well(0, Box::new(w)),
    });
    let mut i = injector("I-1", InjectedFluid::Water, InjectionControl::Rate(300.0));
    i.start = Some(date(2029, 1, 1));
    spec.injectors.push(i);
    let f = run(&spec).unwrap();
    flows_only_with_a_margin(&f);
    let back = f.events.iter().find(|e| e.kind == EventKind::FlowsAgain).expect("it comes back in the end");
    assert!(back.days > 731.0 + 5.0, "back on day {}", back.days);
    let row = f.wells[0].rows.iter().find(|r| r.flowing && r.oil_cum_stb > f.wells[0].rows[12].oil_cum_stb).unwrap();
    assert!((row.liquid_rate_stb_d.unwrap() - 150.0).abs() < 1e-6);
}

#[test]
fn a_well_that_comes_and_goes_within_days_is_left_shut() {
    let mut spec = restless();
    spec.tank.oil_in_place_stb = 5e5;
    let mut i = injector("I-1", InjectedFluid::Water, InjectionControl::Rate(60.0));
    i.start = Some(date(2028, 1, 1));
    spec.injectors.push(i);
    let f = run(&spec).unwrap();
    let returns = f.events.iter().filter(|e| e.kind == EventKind::FlowsAgain).count();
    assert!((1..60).contains(&returns), "{returns} returns");
    flows_only_with_a_margin(&f);
}

#[test]
fn perforations_above_all_pressure_give_no_flow_and_no_panic() {
    for shape in [Shape::Straight, Shape::Vogel, Shape::Fetkovich { n: 0.7 }] {
        for (j, pressure) in [(2.0, -40.0), (1e-12, 3000.0), (0.0, 3000.0), (f64::NAN, 3000.0), (2.0, 0.0)] {
            let curve = InflowCurve::new(shape, j, pressure, pressure.min(2500.0));
            assert_eq!(curve.open_flow_stb_d(), 0.0);
            assert_eq!(curve.rate_stb_d(10.0), 0.0);
            assert!(curve.flowing_psia(0.0).is_finite() && curve.flowing_psia(5.0) == 0.0);
        }
    }
    // The datum so far below that the column to the perforations takes the tank's whole pressure late in life.
    let mut spec = restless();
    spec.tank.datum_tvd_ft = Some(13_000.0);
    let f = run(&spec).unwrap();
    assert!(f.wells[0].natural_flow_end.is_some());
}

#[test]
fn a_tank_that_settles_on_its_bubble_point_does_not_stall_the_run() {
    // Voidage replacement of almost one: the tank comes down to its bubble point and is held there.
    let mut spec = one_well();
    spec.tank.water_model = WaterModel::Connate;
    spec.injectors.push(injector("I-1", InjectedFluid::Water, InjectionControl::Rate(1480.0 * 1.37)));
    let f = run(&spec).unwrap();
    assert!(f.work.segments < 200, "{} segments", f.work.segments);
}

#[test]
fn a_tank_that_follows_its_injector_is_not_given_up_as_stiff() {
    let mut spec = one_well();
    spec.period.end = date(2040, 1, 1);
    spec.tank.oil_in_place_stb = 2e4;
    spec.tank.water_model = WaterModel::Connate;
    spec.wells[0].target_rate_stb_d = None;
    spec.wells[0].inflow.coefficient = Coefficient::ProductivityIndex { j_stb_d_psi: 15.0, reservoir_psia: 3800.0 };
    let mut i = injector("I-1", InjectedFluid::Water, InjectionControl::VoidageReplacement(1.0));
    i.injectivity = Some(0.5);
    i.bottomhole_limit_psia = Some(5000.0);
    spec.injectors.push(i);
    flows_only_with_a_margin(&run(&spec).unwrap());
}

#[test]
fn a_prolific_well_may_flow_at_a_small_part_of_its_open_flow() {
    // J so large that its target is a thousandth of the open flow: it flows, and its margin says so.
    let mut spec = one_well();
    spec.period.end = date(2028, 1, 1);
    spec.wells[0].inflow.coefficient = Coefficient::ProductivityIndex { j_stb_d_psi: 200.0, reservoir_psia: 3800.0 };
    spec.wells[0].target_rate_stb_d = Some(400.0);
    flows_only_with_a_margin(&run(&spec).unwrap());
    // A margin that exists below half a percent of open flow only.
    let found = survey(|q: f64| 1.0 - q, 1000.0);
    assert!((found.margin_psi - (1.0 - 1000.0 * LOOK_FROM)).abs() < 1e-3, "{found:?}");
    assert!((found.right_crossing_stb_d.unwrap() - 1.0).abs() < 1e-6);
}

#[test]
fn a_hump_at_rounding_height_is_not_a_place_to_flow() {
    let h = |q: f64| (3.0 - (q - 20.0).abs()).max(5e-4 - 1e-2 * (q - 70.0).powi(2));
    assert!(survey(h, 100.0).right_crossing_stb_d.unwrap() > 69.0);
    assert!((survey_above(h, 100.0, 1e-3).right_crossing_stb_d.unwrap() - 23.0).abs() < 1e-6);
}

#[test]
fn a_shut_injector_injects_nothing_rather_than_less_than_nothing() {
    // The tank stands above the injector's bottom-hole limit until the well has drawn it down.
    let mut spec = one_well();
    spec.period.end = date(2030, 1, 1);
    spec.tank.water_model = WaterModel::Connate;
    let mut i = injector("I-1", InjectedFluid::Water, InjectionControl::Rate(1000.0));
    i.injectivity = Some(40.0);
    i.bottomhole_limit_psia = Some(3000.0);
    spec.injectors.push(i);
    let f = run(&spec).unwrap();
    let rows = &f.injectors[0].rows;
    assert!(rows.iter().all(|r| r.water_stb >= 0.0), "negative volume");
    // As injected, that is without the help of what the rows forgive as rounding: nothing at all before the limit is reached.
    let open = f.tank.iter().position(|t| t.pressure_psia < 3000.0).unwrap();
    assert!(rows[..open].iter().all(|r| r.water_cum_stb == 0.0), "injected above its limit");
    assert_eq!(rows[0].water_stb, 0.0, "shut in above its limit");
    assert!(rows.last().unwrap().water_cum_stb > 0.0, "open once the tank is below the limit");
}

#[test]
fn a_steep_corner_at_a_small_part_of_open_flow_is_found_to_its_top() {
    // 125 psi per STB/d on its right, at 0.4 % of open flow: from either side the same top, to 0.001 psi.
    let corner = 0.4453;
    let h = |q: f64| if q < corner { 0.01 - 2.0 * (corner - q) } else { 0.01 - 125.0 * (q - corner) };
    assert!((survey(h, 104.9).margin_psi - 0.01).abs() < 1e-3);
    for from in [0.3, 0.44, 0.46, 1.0] {
        assert!((top_near(h, from, 0.01, 104.8).1 - 0.01).abs() < 1e-3, "from {from}");
    }
}

#[test]
fn an_event_that_does_not_help_leaves_the_end_of_natural_flow_where_it_was() {
    // The tank stands still from the well's end on, so that its margin is zero to rounding when the event looks at it again.
    let mut spec = restless();
    spec.wells[0].may_flow_again = false;
    let end = run(&spec).unwrap().wells[0].natural_flow_end.unwrap();
    let mut w = spec.wells[0].clone();
    w.minimum_rate_stb_d = Some(1.0);
    spec.changes.push(ChangeSpec {
        on: date(2029, 6, 1),
        name: w.name.clone(),
        text: "minimum_rate = 1".to_owned(),
        change: Change::Well(0, Box::new(w)),
    });
    let f = run(&spec).unwrap();
    assert!((f.wells[0].natural_flow_end.unwrap().days - end.days).abs() < 1e-6);
    assert!(!f.events.iter().any(|e| e.kind == EventKind::FlowsAgain));
}
