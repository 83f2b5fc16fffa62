//! Wells behind chokes and on shared lines: the engine against arithmetic and against itself.
#![allow(clippy::unwrap_used)]

mod common;

use common::fields::{one_well, well};
use common::near;
use jiff::civil::date;
use wane::forecast::{Change, ChangeSpec, EventKind, FieldSpec, Forecast, StopReason, Tolerance, run};
use wane::tubing::{ChokeMethod, ChokeSpec, Discharge};
use wane::well::{LineRate, LineSpec};

fn end_days(f: &Forecast, w: usize) -> f64 {
    f.wells[w].natural_flow_end.unwrap_or_else(|| panic!("{} still flows", f.wells[w].name)).days
}

fn line(rate: LineRate, pressures: &[(f64, f64)]) -> LineSpec {
    LineSpec { name: "header".to_owned(), rate, pressures: pressures.to_vec() }
}

/// Two wells on one line; the second has a poorer inflow and lies lower in the water.
fn two_on_a_line(line: LineSpec) -> FieldSpec {
    let mut spec = one_well();
    spec.tank.oil_in_place_stb = 12e6;
    let mut second = well("OP-2");
    second.skin = 4.0;
    second.target_rate_stb_d = None;
    spec.wells[0].target_rate_stb_d = None;
    spec.wells.push(second);
    for well in &mut spec.wells {
        (well.shared_line, well.line_pressure_psia) = (Some("header".to_owned()), line.pressures[0].1);
    }
    spec.lines = vec![line];
    spec
}

#[test]
fn a_level_line_is_a_fixed_line_pressure() {
    // Practice row 32: fixed pressure recovers the base.
    let mut fixed = two_on_a_line(line(LineRate::Liquid, &[(0.0, 150.0)]));
    fixed.lines.clear();
    for well in &mut fixed.wells {
        (well.shared_line, well.line_pressure_psia) = (None, 150.0);
    }
    let base = run(&fixed).unwrap();
    for table in
        [&[(0.0, 150.0)][..], &[(0.0, 150.0), (1e4, 150.0)], &[(500.0, 150.0), (1000.0, 150.0), (2000.0, 150.0)]]
    {
        let shared = run(&two_on_a_line(line(LineRate::Liquid, table))).unwrap();
        for w in 0..2 {
            // Two runs that settle by other ways: the integrator's tolerance lies between them.
            let apart = (end_days(&base, w) - end_days(&shared, w)).abs();
            assert!(apart < 0.1, "{apart} days apart");
        }
    }
}

#[test]
fn rows_obey_the_table_of_the_line() {
    let liquid = line(LineRate::Liquid, &[(0.0, 100.0), (1000.0, 130.0), (3000.0, 260.0)]);
    let gas = line(LineRate::Gas, &[(0.0, 100.0), (2e6, 220.0)]);
    for table in [liquid, gas] {
        let f = run(&two_on_a_line(table.clone())).unwrap();
        let mut seen = 0;
        for (a, b) in f.wells[0].rows.iter().zip(&f.wells[1].rows) {
            let brings = |row: &wane::forecast::WellRow| {
                let (Some(q), Some(cut), Some(gor)) = (row.liquid_rate_stb_d, row.water_cut, row.gor_scf_stb) else {
                    return 0.0;
                };
                if table.rate == LineRate::Liquid { q } else { q * (1.0 - cut) * gor }
            };
            let total = brings(a) + brings(b);
            for row in [a, b].into_iter().filter(|row| row.flowing) {
                // By hand: straight between the two points that hold the total, or on with the last slope.
                let points = &table.pressures;
                let i = (1..points.len() - 1).find(|&i| total <= points[i].0).unwrap_or(points.len() - 1);
                let ((q0, p0), (q1, p1)) = (points[i - 1], points[i]);
                let expected = p0 + (p1 - p0) * (total - q0) / (q1 - q0);
                assert!((row.line_pressure_psia.unwrap() - expected).abs() < 0.01, "{row:?} {expected}");
                near(row.wellhead_pressure_psia.unwrap(), row.line_pressure_psia.unwrap(), 1e-12, "no choke");
                seen += 1;
            }
        }
        assert!(seen > 24, "{seen} rows");
    }
}

#[test]
fn when_one_well_dies_the_line_relieves_the_other() {
    let steep = line(LineRate::Liquid, &[(0.0, 80.0), (2000.0, 300.0)]);
    let f = run(&two_on_a_line(steep)).unwrap();
    let (first, last) = if end_days(&f, 0) < end_days(&f, 1) { (0, 1) } else { (1, 0) };
    let row = f.periods.iter().position(|p| p.end_days > end_days(&f, first)).unwrap();
    let rate = |i: usize| f.wells[last].rows[i].liquid_rate_stb_d.unwrap();
    assert!(end_days(&f, last) - end_days(&f, first) > 60.0);
    assert!(rate(row) > rate(row - 1), "{} then {}", rate(row - 1), rate(row));
    for w in 0..2 {
        let end = f.wells[w].natural_flow_end.unwrap();
        assert!(end.reason == StopReason::NoCrossing && end.flow_margin_psi.abs() < 0.01, "{end:?}");
    }
}

#[test]
fn shared_lines_hold_the_tolerance() {
    let spec = two_on_a_line(line(LineRate::Liquid, &[(0.0, 80.0), (2000.0, 300.0)]));
    let tight = run(&FieldSpec { tolerance: Tolerance::Tight, ..spec.clone() }).unwrap();
    let normal = run(&spec).unwrap();
    for w in 0..2 {
        let apart = (end_days(&normal, w) - end_days(&tight, w)).abs();
        println!("well {w}: {} days, {apart} apart", end_days(&normal, w));
        assert!(apart <= 0.5);
    }
    let oil = |f: &Forecast| f.tank.last().unwrap().oil_cum_stb;
    near(oil(&normal), oil(&tight), 1e-4, "oil");
}

#[test]
fn an_event_on_the_line_concerns_all_its_wells() {
    let mut spec = two_on_a_line(line(LineRate::Liquid, &[(0.0, 150.0), (2000.0, 300.0)]));
    let base = run(&spec).unwrap();
    let on = date(2027, 7, 1);
    let relieved = line(LineRate::Liquid, &[(0.0, 80.0), (2000.0, 100.0)]);
    spec.changes = vec![ChangeSpec {
        on,
        name: "header".to_owned(),
        text: "pressure".to_owned(),
        change: Change::Line(0, relieved),
    }];
    let f = run(&spec).unwrap();
    for w in 0..2 {
        assert!(end_days(&f, w) > end_days(&base, w) + 30.0);
    }
    assert!(f.events.iter().any(|e| e.kind == EventKind::Scheduled && e.name == "header" && e.days == 181.0));
}

/// A single well behind a choke.
fn choked(method: ChokeMethod, size_in: f64) -> FieldSpec {
    let mut spec = one_well();
    spec.tank.oil_in_place_stb = 12e6;
    spec.wells[0].line_pressure_psia = 100.0;
    spec.wells[0].target_rate_stb_d = None;
    spec.wells[0].choke = Some(ChokeSpec { method, size_in, discharge: Discharge::Given(1.0) });
    spec
}

#[test]
fn gilberts_wellhead_pressure_stands_in_every_row() {
    let f = run(&choked(ChokeMethod::Gilbert, 24.0 / 64.0)).unwrap();
    let mut seen = 0;
    for row in f.wells[0].rows.iter().filter(|row| row.flowing) {
        let glr = row.gor_scf_stb.unwrap() * (1.0 - row.water_cut.unwrap());
        // Gilbert (1954), by hand.
        let expected = (10.0 * row.liquid_rate_stb_d.unwrap() * glr.powf(0.546) / 24_f64.powf(1.89)).max(100.0);
        near(row.wellhead_pressure_psia.unwrap(), expected, 1e-6, "wellhead");
        assert_eq!(row.choke_critical, Some(100.0 <= 0.55 * expected));
        near(row.choke_size_in.unwrap(), 24.0 / 64.0, 1e-12, "size");
        seen += 1;
    }
    assert!(seen > 12);
}

#[test]
fn a_wide_choke_is_no_choke_and_a_narrow_one_costs_rate() {
    let mut open = choked(ChokeMethod::Sachdeva, 8.0);
    let wide = run(&open).unwrap();
    let narrow = run(&choked(ChokeMethod::Sachdeva, 20.0 / 64.0)).unwrap();
    open.wells[0].choke = None;
    let none = run(&open).unwrap();
    assert!((end_days(&wide, 0) - end_days(&none, 0)).abs() < 0.5);
    let first = |f: &Forecast| f.wells[0].rows[0].liquid_rate_stb_d.unwrap();
    assert!(first(&narrow) < 0.9 * first(&none));
    assert!(narrow.wells[0].rows.iter().any(|r| r.choke_critical == Some(true)));
    let end = narrow.wells[0].natural_flow_end.unwrap();
    assert!(end.flow_margin_psi.abs() < 0.01);
    let tight = run(&FieldSpec { tolerance: Tolerance::Tight, ..choked(ChokeMethod::Sachdeva, 20.0 / 64.0) }).unwrap();
    assert!((end.days - end_days(&tight, 0)).abs() < 0.5);
}

#[test]
fn a_target_tells_the_opening_that_holds_it() {
    let mut spec = choked(ChokeMethod::Sachdeva, 1.0);
    spec.wells[0].target_rate_stb_d = Some(600.0);
    let f = run(&spec).unwrap();
    let size = |i: usize| f.wells[0].rows[i].choke_size_in.unwrap();
    assert!(size(0) < 0.5 && size(0) > 0.1, "{}", size(0));
    let plateau = f.wells[0].plateau_end.unwrap();
    let last = f.periods.iter().position(|p| p.end_days > plateau).unwrap();
    assert!(size(last - 1) > size(0), "the choke is opened as the well weakens");
    near(size(last), 1.0, 1e-12, "wide open after the plateau");
    // The same opening, held, asks at 600 STB/d for the wellhead pressure of the row.
    let row = &f.wells[0].rows[0];
    spec.wells[0].target_rate_stb_d = None;
    spec.wells[0].choke.as_mut().unwrap().size_in = size(0);
    spec.period.end = date(2027, 2, 1);
    let held = run(&spec).unwrap();
    near(held.wells[0].rows[0].liquid_rate_stb_d.unwrap(), row.liquid_rate_stb_d.unwrap(), 1e-2, "held");
}

#[test]
fn opening_the_choke_is_an_event() {
    let mut spec = choked(ChokeMethod::Sachdeva, 16.0 / 64.0);
    let mut opened = spec.wells[0].clone();
    opened.choke.as_mut().unwrap().size_in = 48.0 / 64.0;
    let on = date(2028, 1, 1);
    spec.changes = vec![ChangeSpec {
        on,
        name: "OP-1".to_owned(),
        text: "choke.size".to_owned(),
        change: Change::Well(0, Box::new(opened)),
    }];
    let f = run(&spec).unwrap();
    let rate = |i: usize| f.wells[0].rows[i].liquid_rate_stb_d.unwrap();
    assert!(rate(12) > 1.2 * rate(11), "{} then {}", rate(11), rate(12));
}
