//! The inflow shapes, the rules for the future and the loss of productivity in whole forecasts.
#![allow(clippy::unwrap_used)]

mod common;

use common::fields::{one_well, well};
use common::near;
use jiff::civil::{Date, date};
use wane::forecast::{
    Change, ChangeSpec, DoubtKind, Field, FieldSpec, ModelOutcome, Tolerance, curves_on, natural_flow_ends, run, tracks,
};
use wane::inflow::{Coefficient, FutureRule, InflowMethod, InflowTest, Measured};
use wane::study::{rule_ends, store_rule_ends};
use wane::well::{LossSpec, WellSpec};

/// A field whose well outlives the dip of the gas-oil ratio.
fn long_lived() -> FieldSpec {
    let mut spec = one_well();
    spec.wells[0].line_pressure_psia = 120.0;
    spec.wells[0].target_rate_stb_d = Some(800.0);
    spec.tank.oil_in_place_stb = 7e6;
    spec
}

fn end_days(spec: &FieldSpec) -> f64 {
    natural_flow_ends(spec).unwrap()[0].unwrap_or_else(|| panic!("it still flows")).days
}

fn event(on: Date, to: WellSpec) -> ChangeSpec {
    ChangeSpec { on, name: "OP-1".to_owned(), text: "set".to_owned(), change: Change::Well(0, Box::new(to)) }
}

/// Open flow of the only well on a day, STB/d.
fn open_flow(spec: &FieldSpec, on: Date) -> f64 {
    let curve = &curves_on(spec, on, &[], false).unwrap()[0].curve;
    curve.points.last().unwrap().0
}

/// The promise of half a day between the tolerances, for every new shape, rule and a well that loses its productivity.
#[test]
fn ends_agree_with_tighter_tolerances() {
    let mut fields = Vec::new();
    let mut add = |name: &str, change: &dyn Fn(&mut WellSpec)| {
        let mut spec = long_lived();
        change(&mut spec.wells[0]);
        fields.push((name.to_owned(), spec));
    };
    add("vogel, damaged", &|w| {
        (w.inflow.method, w.inflow.exponent, w.inflow.flow_efficiency) = (InflowMethod::Vogel, None, Some(0.6));
    });
    add("vogel, stimulated, cubic", &|w| {
        (w.inflow.method, w.inflow.exponent, w.inflow.flow_efficiency) = (InflowMethod::Vogel, None, Some(1.6));
        w.inflow.future = FutureRule::Cubic;
    });
    add("wiggins", &|w| (w.inflow.method, w.inflow.exponent) = (InflowMethod::Wiggins, None));
    add("jones, mobility", &|w| {
        (w.inflow.method, w.inflow.exponent) = (InflowMethod::Jones, None);
        (w.inflow.turbulence_psi_d2_stb2, w.inflow.future) = (Some(2e-4), FutureRule::Mobility);
    });
    add("composite", &|w| (w.inflow.method, w.inflow.exponent) = (InflowMethod::Composite, None));
    add("fetkovich, losing", &|w| w.loss.yearly = 0.15);
    add("fetkovich, losing without a target", &|w| (w.loss.yearly, w.target_rate_stb_d) = (0.3, None));
    for (name, mut spec) in fields {
        let normal = run(&spec).unwrap();
        assert!(normal.balance_residual <= 1e-8, "{name}: {}", normal.balance_residual);
        let end = normal.wells[0].natural_flow_end.unwrap_or_else(|| panic!("{name} still flows"));
        assert!(end.flow_margin_psi.abs() <= 0.01, "{name}: margin {} at the end", end.flow_margin_psi);
        spec.tolerance = Tolerance::Tight;
        let tight = end_days(&spec);
        println!("{name}: {:.4} {tight:.4}", end.days);
        assert!((end.days - tight).abs() <= 0.5, "{name}: normal {} against tight {tight} days", end.days);
    }
}

/// A composite well on a tank that makes water: the curve follows the water cut of the instant.
#[test]
fn the_composite_follows_the_water_cut() {
    use common::fields::injector;
    use wane::forecast::{InjectedFluid, InjectionControl};
    let mut spec = one_well();
    (spec.wells[0].inflow.method, spec.wells[0].inflow.exponent) = (InflowMethod::Composite, None);
    spec.tank.water_model = wane::tank::WaterModel::Average;
    spec.injectors = vec![injector("W", InjectedFluid::Water, InjectionControl::VoidageReplacement(1.0))];
    spec.period.end = date(2037, 1, 1);
    let curve = curves_on(&spec, date(2036, 6, 1), &[], false).unwrap().remove(0).curve;
    let forecast = run(&spec).unwrap();
    let row = forecast.periods.iter().position(|p| p.end == date(2036, 6, 1)).unwrap();
    let water_cut = forecast.wells[0].rows[row].water_cut.unwrap();
    assert!(water_cut > 0.05, "{water_cut}");
    // Brown's (1984) end of the curve by hand: J = 1.6, pb = 2650, the last 0.1 % of the oil's open flow.
    let (j, pb, pr) = (1.6, 2650.0, curve.reservoir_psia);
    let oil_open = j * (pr - pb + pb / 1.8);
    let last = 0.001 * oil_open;
    let oil_psia = 0.125 * pb * ((81.0_f64 - 80.0 * (oil_open - last - j * (pr - pb)) / (j * pb / 1.8)).sqrt() - 1.0);
    let slope = (water_cut * last / j + (1.0 - water_cut) * oil_psia) / last;
    let open = oil_open + water_cut * (pr - oil_open / j) / slope;
    near(curve.points.last().unwrap().0, open, 1e-6, "open flow");
}

/// On a tank that does not deplete the open flow falls by the stated part in a year, from the day stated.
#[test]
fn productivity_is_lost_by_the_year() {
    let mut spec = one_well();
    spec.tank.oil_in_place_stb = 1e13;
    spec.wells[0].target_rate_stb_d = Some(300.0);
    spec.period.end = date(2033, 1, 1);
    let whole = open_flow(&spec, date(2027, 1, 1));
    spec.wells[0].loss = LossSpec { yearly: 0.2, since: None };
    near(open_flow(&spec, date(2027, 1, 1)), whole, 1e-12, "nothing lost at the start");
    // 1461 days are four years of 365.25.
    near(open_flow(&spec, date(2031, 1, 1)), whole * 0.8_f64.powi(4), 1e-6, "after four years");
    spec.wells[0].loss.since = Some(date(2026, 1, 1));
    near(open_flow(&spec, date(2027, 1, 1)), whole * 0.8_f64.powf(365.0 / 365.25), 1e-9, "lost before the start");
    spec.wells[0].loss.since = Some(date(2029, 1, 1));
    near(open_flow(&spec, date(2028, 12, 31)), whole, 1e-6, "not lost yet");
    near(open_flow(&spec, date(2030, 1, 1)), whole * 0.8_f64.powf(365.0 / 365.25), 1e-6, "a year later");
    spec.wells[0].loss.since = None;
    spec.wells[0].start = Some(date(2028, 1, 1));
    near(open_flow(&spec, date(2029, 1, 1)), whole * 0.8_f64.powf(366.0 / 365.25), 1e-6, "from its first day");
}

/// What brings productivity back: a skin, a day stated, a new coefficient; and what does not.
#[test]
fn a_stimulation_brings_it_back() {
    let mut spec = one_well();
    spec.tank.oil_in_place_stb = 1e13;
    spec.wells[0].target_rate_stb_d = Some(300.0);
    spec.period.end = date(2033, 1, 1);
    let whole = open_flow(&spec, date(2027, 1, 1));
    spec.wells[0].loss.yearly = 0.2;
    let (on, later) = (date(2029, 1, 1), date(2031, 1, 1));
    let left = |days: f64| 0.8_f64.powf(days / 365.25);
    let with = |change: &dyn Fn(&mut WellSpec)| {
        let mut spec = spec.clone();
        let mut to = spec.wells[0].clone();
        change(&mut to);
        spec.changes = vec![event(on, to)];
        (open_flow(&spec, on) / whole, open_flow(&spec, later) / whole)
    };
    let near2 = |found: (f64, f64), expected: (f64, f64), what: &str| {
        near(found.0, expected.0, 1e-6, what);
        near(found.1, expected.1, 1e-6, what);
    };
    // Skin of -2 with r = 7: 7/5.
    near2(with(&|w| w.skin = -2.0), (1.4, 1.4 * left(730.0)), "skin");
    near2(with(&|w| w.loss.since = Some(on)), (1.0, left(730.0)), "a day");
    let better = Coefficient::ProductivityIndex { j_stb_d_psi: 3.2, reservoir_psia: 3800.0 };
    near2(with(&|w| w.inflow.coefficient = better.clone()), (2.0, 2.0 * left(730.0)), "a new coefficient");
    near2(with(&|w| w.line_pressure_psia = 100.0), (left(731.0), left(1461.0)), "another line");
    near2(with(&|w| w.loss.yearly = 0.0), (left(731.0), left(731.0)), "an inhibitor");
    let half = left(731.0) * 0.9_f64.powf(730.0 / 365.25);
    near2(with(&|w| w.loss.yearly = 0.1), (left(731.0), half), "half the loss");
}

/// Continuous loss against a staircase of monthly events that state the coefficient of the middle of each month.
#[test]
fn continuous_loss_is_the_limit_of_a_staircase() {
    let mut spec = long_lived();
    spec.wells[0].target_rate_stb_d = Some(500.0);
    let unspoilt = end_days(&spec);
    let mut stairs = spec.clone();
    spec.wells[0].loss.yearly = 0.12;
    let smooth = end_days(&spec);
    let first = spec.period.start;
    let mut month = first;
    while month < spec.period.end {
        let next = month.checked_add(jiff::ToSpan::months(1)).unwrap();
        let day = |d: Date| f64::from(first.until((jiff::Unit::Day, d)).unwrap().get_days());
        let years = 0.5 * (day(month) + day(next)) / 365.25;
        let mut to = stairs.wells[0].clone();
        let j_stb_d_psi = 1.6 * 0.88_f64.powf(years);
        to.inflow.coefficient = Coefficient::ProductivityIndex { j_stb_d_psi, reservoir_psia: 3800.0 };
        if month == first {
            stairs.wells[0] = to;
        } else {
            stairs.changes.push(event(month, to));
        }
        month = next;
    }
    let stepped = end_days(&stairs);
    println!("without loss {unspoilt:.1}, smooth {smooth:.1}, staircase {stepped:.1} days");
    assert!(unspoilt - smooth > 100.0, "the loss shortens the life");
    // A step moves the end by up to half a month of its own.
    assert!((smooth - stepped).abs() < 16.0, "{smooth} against {stepped}");
}

/// Each other rule as a run of its own; the well's own comes first.
#[test]
fn ends_under_the_other_rules() {
    let mut spec = long_lived();
    spec.wells[0].inflow.method = InflowMethod::Vogel;
    spec.wells[0].inflow.exponent = None;
    let mut to = spec.wells[0].clone();
    to.skin = 1.0;
    spec.changes = vec![event(date(2028, 3, 1), to)];
    let mut forecast = run(&spec).unwrap();
    store_rule_ends(&spec, &rule_ends(&spec), &mut forecast);
    let found = &forecast.wells[0].future_rules;
    assert_eq!(found.iter().map(|end| end.rule).collect::<Vec<_>>(), ["pressure", "mobility", "cubic"]);
    let mut seen = Vec::new();
    for (end, rule) in found.iter().zip(FutureRule::ALL) {
        let mut own = spec.clone();
        own.wells[0].inflow.future = rule;
        let Change::Well(_, to) = &mut own.changes[0].change else { panic!("a well") };
        to.inflow.future = rule;
        let ModelOutcome::Ends(found) = &end.outcome else { panic!("{:?}", end.outcome) };
        assert_eq!(found.days, end_days(&own));
        seen.push(found.days);
    }
    assert!(seen[0] != seen[1] && seen[0] != seen[2] && seen[1] != seen[2], "{seen:?}");
}

/// With Fetkovich and n of one the cubic rule is the pressure rule (Eickmeier 1968, Fetkovich 1973): open flow to the cube of pressure.
#[test]
fn cubic_and_pressure_coincide_at_n_of_one() {
    let mut spec = long_lived();
    let pressure = end_days(&spec);
    spec.wells[0].inflow.future = FutureRule::Cubic;
    assert!((end_days(&spec) - pressure).abs() < 1e-6);
}

/// Darcy's index is that of the oil at the stated pressure, kro/(mu_o*Bo) of the tank before it produced.
#[test]
fn darcy_index_of_a_well() {
    let mut spec = one_well();
    let w = &mut spec.wells[0];
    (w.inflow.method, w.inflow.exponent, w.skin, w.skin_at_test) = (InflowMethod::Straight, None, 1.0, 3.0);
    w.radii_ft = Some((900.0, 0.35));
    w.inflow.coefficient = Coefficient::Darcy { permeability_md: 60.0, thickness_ft: 40.0, reservoir_psia: 3800.0 };
    let field = Field::new(&spec).unwrap();
    let oil = field.fluid().in_situ(3800.0, 190.0, 620.0);
    let r = (0.472_f64 * 900.0 / 0.35).ln();
    // kro at connate water is the end point 0.9.
    let j = 0.007_08 * 60.0 * 40.0 * 0.9 / (oil.mu_o_cp * oil.bo_rb_stb * (r + 3.0));
    near(field.wells()[0].inflow.coefficient, j, 1e-6, "J");
    // With the skin of today.
    near(open_flow(&spec, date(2027, 1, 1)), 3800.0 * j * (r + 3.0) / (r + 1.0), 1e-4, "open flow");
}

/// Two wells on rules of their own: each is told the rules that it does not follow.
#[test]
fn wells_on_different_rules() {
    let mut spec = long_lived();
    spec.wells.push(well("OP-2"));
    spec.wells[1].inflow.future = FutureRule::Cubic;
    let mut forecast = run(&spec).unwrap();
    let ends = rule_ends(&spec);
    assert_eq!(ends.len(), 3);
    store_rule_ends(&spec, &ends, &mut forecast);
    let names = |w: usize| forecast.wells[w].future_rules.iter().map(|end| end.rule).collect::<Vec<_>>();
    assert_eq!((names(0), names(1)), (vec!["pressure", "mobility", "cubic"], vec!["cubic", "pressure", "mobility"]));
}

/// Around the end of its natural flow a well is drawn with what is then left of it: at that pressure the curves just meet.
#[test]
fn the_edge_knows_what_is_left() {
    let mut spec = long_lived();
    spec.wells[0].target_rate_stb_d = Some(500.0);
    spec.wells[0].loss.yearly = 0.12;
    let end = end_days(&spec);
    let track = tracks(&Field::new(&spec).unwrap()).unwrap().remove(0);
    for days in [0.0, end, 1e4] {
        near(track.model.productivity_left(days), 0.88_f64.powf(end / 365.25), 1e-12, "left at the end");
    }
    let field = Field::new(&spec).unwrap();
    let gauge = wane::well::Gauge::default();
    let last = track.tank.iter().min_by(|a, b| {
        let off = |t: &wane::tank::TankState| (t.pressure_psia - track.end_pressure_psia).abs();
        off(a).total_cmp(&off(b))
    });
    let margin = track.model.now(field.fluid(), last.unwrap(), 0.0, 0.0, &gauge).survey().margin_psi;
    assert!(margin.abs() < 0.1, "{margin}");
}

/// Three tests that scatter leave the open flow wide open, and that is told; three on one curve do not.
#[test]
fn scattered_tests_are_doubted() {
    let with = |rates: [f64; 3]| {
        let mut spec = one_well();
        spec.period.end = date(2027, 3, 1);
        spec.wells[0].inflow.exponent = Some(1.0);
        let test = |(flowing_psia, rate_stb_d): (f64, f64)| InflowTest {
            on: None,
            reservoir_psia: 3800.0,
            rate_stb_d,
            water_cut: 0.0,
            measured: Measured::Gauged { flowing_psia },
        };
        let tests = [3600.0, 3300.0, 2900.0].into_iter().zip(rates).map(test).collect();
        spec.wells[0].inflow.coefficient = Coefficient::Tests(tests);
        let forecast = run(&spec).unwrap();
        forecast.doubts.iter().any(|d| d.kind == DoubtKind::WeakFit && d.seen.contains("leave the open flow"))
    };
    assert!(with([500.0, 300.0, 1500.0]));
    assert!(!with([322.0, 797.0, 1441.0]));
}
