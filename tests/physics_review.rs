//! Found by reading the engine against its equations: each test failed before it was mended.
#![allow(clippy::unwrap_used)]

mod common;

use common::fields::one_well;
use common::near;
use jiff::civil::date;
use wane::forecast::{Change, ChangeSpec, EventKind, FieldSpec, StopReason, curves_on, run};
use wane::inflow::{Coefficient, InflowTest, Measured};
use wane::tubing::TubingMethod;
use wane::well::WellSpec;

fn on(spec: &mut FieldSpec, day: jiff::civil::Date, set: impl FnOnce(&mut WellSpec)) {
    let mut changed = spec.wells[0].clone();
    set(&mut changed);
    let name = changed.name.clone();
    spec.changes.push(ChangeSpec { on: day, name, text: String::new(), change: Change::Well(0, Box::new(changed)) });
}

fn gauged(reservoir_psia: f64, flowing_psia: f64, rate_stb_d: f64) -> InflowTest {
    InflowTest { on: None, reservoir_psia, rate_stb_d, water_cut: 0.0, measured: Measured::Gauged { flowing_psia } }
}

/// A floor that ends a well while higher rates would still flow: it must not come back, nor switch for ever.
#[test]
fn a_floor_that_ended_a_well_still_binds_when_it_may_flow_again() {
    let mut spec = one_well();
    spec.tank.oil_in_place_stb = 6e6;
    spec.wells[0].line_pressure_psia = 110.0;
    spec.wells[0].target_rate_stb_d = Some(800.0);
    spec.wells[0].minimum_flowing_pressure_psia = Some(1400.0);
    let without = run(&spec).unwrap();
    assert_eq!(without.wells[0].natural_flow_end.unwrap().reason, StopReason::MinimumFlowingPressure);
    assert!(without.wells[0].natural_flow_end.unwrap().flow_margin_psi > 100.0, "another rate would flow");
    spec.wells[0].may_flow_again = true;
    let with = run(&spec).unwrap();
    assert_eq!(with.wells[0].natural_flow_end, without.wells[0].natural_flow_end);
    assert!(!with.events.iter().any(|e| matches!(e.kind, EventKind::FlowsAgain | EventKind::CouldFlowAgain)));
}

/// A smaller string, run later, does not reinterpret separator tests, even where they could not have been made in it.
#[test]
fn an_event_that_changes_the_string_leaves_separator_tests_alone() {
    let mut spec = one_well();
    spec.wells[0].inflow.exponent = None;
    spec.wells[0].inflow.coefficient = Coefficient::Tests(
        [(400.0, 1500.0), (700.0, 900.0)]
            .map(|(wellhead_psia, rate_stb_d)| InflowTest {
                on: None,
                reservoir_psia: 3800.0,
                rate_stb_d,
                water_cut: 0.0,
                measured: Measured::Separator { wellhead_psia, gor_scf_stb: 620.0 },
            })
            .into(),
    );
    let before = run(&spec).unwrap();
    on(&mut spec, date(2028, 3, 1), |w| w.tubing.sections[0].diameter_in = 1.05);
    let after = run(&spec).unwrap();
    assert_eq!(before.wells[0].inflow_text, after.wells[0].inflow_text);
    assert!(after.wells[0].rows[20].oil_stb < before.wells[0].rows[20].oil_stb, "the small string holds it back");
    // In the small string from the outset those tests cannot be.
    spec.changes.clear();
    spec.wells[0].tubing.sections[0].diameter_in = 1.05;
    assert!(run(&spec).is_err());
}

/// Perforations below the datum of a saturated tank: the curve on the first day is the one that was tested, and n is fitted.
#[test]
fn tests_of_a_well_below_the_datum_come_back_in_the_forecast() {
    let mut spec = one_well();
    spec.tank.pressure_psia = 2650.0;
    spec.tank.datum_tvd_ft = Some(7650.0);
    spec.wells[0].inflow.exponent = None;
    let tests = [(2400.0, 760.0), (2000.0, 1420.0), (1500.0, 1980.0)];
    spec.wells[0].inflow.coefficient = Coefficient::Tests(tests.map(|(pwf, q)| gauged(2650.0, pwf, q)).into());
    let checks = run(&spec).unwrap().wells[0].tests.clone();
    let rates: Vec<f64> = checks.iter().map(|t| t.model_rate_stb_d).collect();
    let day_one = curves_on(&spec, spec.period.start, &rates, false).unwrap();
    for (point, test) in day_one[0].curve.points.iter().zip(&checks) {
        near(point.1, test.flowing_psia, 1e-6, "flowing pressure of the test on the first day");
        near(test.model_rate_stb_d, test.rate_stb_d, 0.05, "test met");
    }
    // The same at a lower pressure of the tank: the coefficient belongs to the tank's pressure then, not to that of the perforations.
    spec.wells[0].inflow.exponent = Some(1.0);
    spec.wells[0].inflow.coefficient = Coefficient::Tests(vec![gauged(2000.0, 1500.0, 900.0)]);
    let forecast = run(&spec).unwrap();
    let month = forecast.tank.iter().position(|t| t.pressure_psia < 2000.0).unwrap();
    let (p, day) = (forecast.tank[month].pressure_psia, forecast.periods[month].end);
    let shown = curves_on(&spec, day, &[900.0], false).unwrap();
    // By hand: J in proportion to pe, x = (pr - pe) + (pe^2 - pwf^2)/(2 pe).
    let (pr, pe) = (shown[0].curve.reservoir_psia, p);
    let pr_test = forecast.wells[0].tests[0].reservoir_psia;
    let j_test = 900.0 / ((pr_test - 2000.0) + (2000.0_f64.powi(2) - 1500.0_f64.powi(2)) / 4000.0);
    let j = j_test * (pe / 2000.0).powi(2);
    let pwf = (pe * pe - 2.0 * pe * (900.0 / j - (pr - pe))).sqrt();
    near(shown[0].curve.points[0].1, pwf, 1e-9, "inflow by hand");
}

/// Events act from 00:00 of their day, so the curves of that day are those of the new settings, the method included.
#[test]
fn curves_on_the_day_of_an_event_show_its_settings() {
    let mut spec = one_well();
    let day = date(2027, 6, 1);
    let before = curves_on(&spec, day, &[900.0], false).unwrap();
    on(&mut spec, day, |w| {
        w.skin = -3.5;
        w.tubing.method = TubingMethod::HagedornBrown;
    });
    let after = curves_on(&spec, day, &[900.0], false).unwrap();
    assert_eq!((before[0].method, after[0].method), ("hasan-kabir", "hagedorn-brown"));
    // r = 7: half the skin resistance, twice the coefficient; above the bubble point the drawdown halves.
    let drawdown = |c: &wane::forecast::WellCurves| c.curve.reservoir_psia - c.curve.points[0].1;
    near(drawdown(&after[0]), 0.5 * drawdown(&before[0]), 1e-9, "drawdown");
}

/// A dated event that brings a well back to its target is noted like any other return to it.
#[test]
fn a_target_regained_by_an_event_is_noted() {
    let mut spec = one_well();
    spec.tank.oil_in_place_stb = 6e6;
    spec.wells[0].line_pressure_psia = 110.0;
    spec.wells[0].target_rate_stb_d = Some(800.0);
    let lost = run(&spec).unwrap().wells[0].plateau_end.unwrap();
    let day = wane::forecast::date_at(spec.period.start, lost + 20.0);
    on(&mut spec, day, |w| w.skin = -4.0);
    let f = run(&spec).unwrap();
    let days = wane::forecast::days_between(spec.period.start, day);
    assert!(f.events.iter().any(|e| e.kind == EventKind::TargetRegained && e.days == days));
    assert_eq!(f.wells[0].plateau_end, Some(lost), "the first loss is what the summary tells");
    assert!(f.events.iter().filter(|e| e.kind == EventKind::PlateauLost).count() >= 2);
}
