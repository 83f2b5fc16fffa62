//! A laboratory's table: conversion, interpolation, checks.
//!
//! Textbook case: the differential vaporisation and separator test of the "Good Oil Company" report in W. D. McCain, "The Properties of
//! Petroleum Fluids" (1990), chapter 10, at 220 degF; recalled from memory, as are its worked answers.
#![allow(clippy::unwrap_used)]

use proptest::prelude::*;
use wane::fluid::{BlackOil, FluidSpec, LabBasis, LabReport, LabRow, MonotoneCurve, OilCorrelation, ReservoirFluid};

fn row(psig: f64, rs: Option<f64>, bo: f64) -> LabRow {
    LabRow {
        pressure_psia: psig + 14.7,
        rs_scf_stb: rs,
        bo_rb_stb: bo,
        mu_o_cp: None,
        z: None,
        bg_rb_scf: None,
        mu_g_cp: None,
    }
}

/// psig, Rsd scf/residual bbl, Bod; above the bubble point relative volume times 1.600.
const MCCAIN: [(f64, Option<f64>, f64); 16] = [
    (5000.0, None, 0.9639 * 1.600),
    (4500.0, None, 0.9703 * 1.600),
    (4000.0, None, 0.9771 * 1.600),
    (3500.0, None, 0.9846 * 1.600),
    (2620.0, Some(854.0), 1.600),
    (2350.0, Some(763.0), 1.554),
    (2100.0, Some(684.0), 1.515),
    (1850.0, Some(612.0), 1.479),
    (1600.0, Some(544.0), 1.445),
    (1350.0, Some(479.0), 1.412),
    (1100.0, Some(416.0), 1.382),
    (850.0, Some(354.0), 1.351),
    (600.0, Some(292.0), 1.320),
    (350.0, Some(223.0), 1.283),
    (159.0, Some(157.0), 1.244),
    (0.0, Some(0.0), 1.075),
];

/// The separator at 100 psig and 75 degF: Bofb 1.474, Rsfb 676 + 92.
fn mccain() -> LabReport {
    let basis = LabBasis::Differential { separator_bo_rb_stb: 1.474, separator_gor_scf_stb: 768.0 };
    LabReport { basis, rows: MCCAIN.iter().map(|&(p, rs, bo)| row(p, rs, bo)).collect() }
}

#[test]
fn the_textbook_report_is_converted_to_its_rounding() {
    let rows = mccain().converted().unwrap();
    let at = |psig: f64| rows.iter().find(|row| (row.pressure_psia - psig - 14.7).abs() < 1e-9).unwrap();
    // Worked in the book: at 2,100 psig Rs = 768 - (854 - 684) 1.474/1.600 = 611, Bo = 1.515 * 1.474/1.600 = 1.396; at 5,000 psig
    // Bo = 0.9639 * 1.474 = 1.421.
    assert!((at(2100.0).rs_scf_stb.unwrap() - 611.0).abs() < 0.5);
    assert!((at(2100.0).bo_rb_stb - 1.396).abs() < 0.0005);
    assert!((at(5000.0).bo_rb_stb - 1.421).abs() < 0.0005);
    assert_eq!(at(5000.0).rs_scf_stb, Some(768.0));
    assert_eq!((at(2620.0).rs_scf_stb, at(2620.0).bo_rb_stb), (Some(768.0), 1.474));
    // The rest by the formula of the handbooks; the row at atmospheric pressure has no gas.
    for &(psig, rsd, bod) in &MCCAIN {
        let got = at(psig);
        assert!((got.bo_rb_stb - bod * 1.474 / 1.600).abs() < 1e-12);
        if let Some(rsd) = rsd.filter(|_| psig > 0.0) {
            assert!((got.rs_scf_stb.unwrap() - (768.0 - (854.0 - rsd) * 1.474 / 1.600)).abs() < 1e-10);
        }
    }
    assert_eq!(at(0.0).rs_scf_stb, Some(0.0));
}

/// psig, rs, bo, mu_o, z, mu_g.
type Row = (f64, Option<f64>, f64, f64, Option<f64>, Option<f64>);

/// The invented report of scenarios/lab.toml.
const INVENTED: [Row; 12] = [
    (5000.0, None, 1.421, 0.583, None, None),
    (4000.0, None, 1.438, 0.522, None, None),
    (3000.0, None, 1.458, 0.462, None, None),
    (2500.0, Some(712.0), 1.470, 0.432, None, None),
    (2150.0, Some(620.0), 1.428, 0.470, Some(0.835), Some(0.0187)),
    (1800.0, Some(531.0), 1.388, 0.515, Some(0.842), Some(0.0172)),
    (1450.0, Some(446.0), 1.350, 0.571, Some(0.858), Some(0.0159)),
    (1100.0, Some(362.0), 1.313, 0.642, Some(0.880), Some(0.0148)),
    (750.0, Some(277.0), 1.275, 0.736, Some(0.909), Some(0.0139)),
    (400.0, Some(185.0), 1.231, 0.872, Some(0.945), Some(0.0131)),
    (150.0, Some(103.0), 1.180, 1.04, Some(0.976), Some(0.0125)),
    (0.0, Some(0.0), 1.072, 1.63, None, None),
];

fn invented_rows() -> Vec<LabRow> {
    INVENTED
        .iter()
        .map(|&(psig, rs, bo, mu_o, z, mu_g)| LabRow { mu_o_cp: Some(mu_o), z, mu_g_cp: mu_g, ..row(psig, rs, bo) })
        .collect()
}

fn invented() -> FluidSpec {
    let basis = LabBasis::Differential { separator_bo_rb_stb: 1.405, separator_gor_scf_stb: 640.0 };
    let lab = Some(LabReport { basis, rows: invented_rows() });
    FluidSpec { lab, ..FluidSpec::new(36.0, 0.82, 640.0) }
}

const TANK_DEGF: f64 = 205.0;

fn every_family() -> impl Iterator<Item = BlackOil> {
    OilCorrelation::ALL.iter().map(|&oil| {
        let mut spec = invented();
        spec.correlations.oil = oil;
        BlackOil::new(&spec, TANK_DEGF).unwrap()
    })
}

#[test]
fn every_laboratory_point_is_met_in_the_tank_and_in_the_tubing() {
    for fluid in every_family() {
        let rows = fluid.lab_rows().to_vec();
        assert_eq!(rows.len(), 12);
        for measured in rows {
            let p = measured.pressure_psia;
            let rs = measured.rs_scf_stb.unwrap();
            let near = |what: &str, got: f64, stated: f64| {
                assert!((got - stated).abs() <= 1e-9 * stated.abs().max(1e-3), "{what} at {p}: {got} against {stated}");
            };
            near("rs", fluid.rs_saturated(p).min(640.0), rs);
            near("bo", fluid.bo(p, rs), measured.bo_rb_stb);
            near("mu_o", fluid.mu_o(p, rs), measured.mu_o_cp.unwrap());
            let in_situ = fluid.unprepared().in_situ(p, TANK_DEGF, 640.0);
            near("rs in situ", in_situ.rs_scf_stb, rs);
            near("bo in situ", in_situ.bo_rb_stb, measured.bo_rb_stb);
            near("mu_o in situ", in_situ.mu_o_cp, measured.mu_o_cp.unwrap());
            if let Some(z) = measured.z {
                near("z", fluid.table_row(p).z, z);
                near("z in situ", in_situ.z, z);
                // Bg = (psc/Tsc) z T/p.
                // 1e-7: the program's barrel has seven digits.
                let bg = 14.696 / 519.67 * z * (TANK_DEGF + 459.67) / p / (42.0 * 231.0 / 1728.0);
                assert!((fluid.bg(p) / bg - 1.0).abs() < 1e-7);
                near("mu_g", fluid.mu_g(p), measured.mu_g_cp.unwrap());
                near("mu_g in situ", in_situ.mu_g_cp, measured.mu_g_cp.unwrap());
            }
        }
    }
}

#[test]
fn tank_and_tubing_are_one_fluid_at_tank_temperature_and_nothing_jumps() {
    for fluid in every_family() {
        for (name, fluid, near) in [("by itself", fluid.unprepared(), 1e-9), ("prepared", fluid.clone(), 3e-7)] {
            for i in 0..4000 {
                let p = 15.0 * (6000.0_f64 / 15.0).powf(f64::from(i) / 3999.0);
                let (tank, tubing) = (fluid.table_row(p), fluid.in_situ(p, TANK_DEGF, 640.0));
                for (what, a, b) in [
                    ("rs", tank.rs_scf_stb, tubing.rs_scf_stb),
                    ("bo", tank.bo_rb_stb, tubing.bo_rb_stb),
                    ("mu_o", tank.mu_o_cp, tubing.mu_o_cp),
                    ("z", tank.z, tubing.z),
                    ("mu_g", tank.mu_g_cp, tubing.mu_g_cp),
                ] {
                    assert!((a - b).abs() <= near * a.abs().max(1e-3), "{name} {what} at {p}: {a} and {b}");
                }
                for degf in [60.0, 120.0, 200.0] {
                    let pb = fluid.bubble_point_at_psia(640.0, degf);
                    let (below, above) =
                        (fluid.in_situ(pb * (1.0 - 1e-9), degf, 640.0), fluid.in_situ(pb * (1.0 + 1e-9), degf, 640.0));
                    assert!((below.bo_rb_stb / above.bo_rb_stb - 1.0).abs() < 1e-7);
                    assert!((below.mu_o_cp / above.mu_o_cp - 1.0).abs() < 1e-6);
                    assert!((below.rs_scf_stb - 640.0).abs() < 1e-4);
                }
            }
        }
    }
}

#[test]
fn gas_and_bubble_point_are_inverse_and_the_oil_is_monotone() {
    for fluid in every_family() {
        let mut before = fluid.table_row(14.7);
        for i in 1..3000 {
            let p = 14.7 + f64::from(i) * 1.5;
            let rs = fluid.rs_saturated(p);
            assert!((fluid.bubble_point_psia(rs) / p - 1.0).abs() < 1e-7, "{p}");
            let row = fluid.table_row(p);
            if p <= fluid.initial_bubble_point_psia() {
                assert!(
                    row.rs_scf_stb > before.rs_scf_stb
                        && row.bo_rb_stb > before.bo_rb_stb
                        && row.mu_o_cp < before.mu_o_cp
                );
            } else if before.pressure_psia >= fluid.initial_bubble_point_psia() {
                assert!(
                    row.rs_scf_stb == before.rs_scf_stb
                        && row.bo_rb_stb < before.bo_rb_stb
                        && row.mu_o_cp > before.mu_o_cp
                );
            }
            assert!(row.bg_rb_scf < before.bg_rb_scf);
            before = row;
        }
        // Total volume falls with pressure everywhere: one solution of the balance.
        assert!(fluid.closure_limit_psia() >= fluid.initial_bubble_point_psia());
    }
}

#[test]
fn the_sound_report_raises_no_doubt_but_the_known_one() {
    let fluid = BlackOil::new(&invented(), TANK_DEGF).unwrap();
    let notes = fluid.lab_notes();
    println!("{notes:#?}");
    assert!(notes.is_empty(), "{notes:#?}");
}

fn noted(change: impl Fn(&mut Vec<LabRow>)) -> String {
    let mut spec = invented();
    change(&mut spec.lab.as_mut().unwrap().rows);
    let fluid = BlackOil::new(&spec, TANK_DEGF).unwrap();
    fluid.lab_notes().iter().map(|note| note.seen.clone()).collect::<Vec<_>>().join("\n")
}

#[test]
fn unlikely_rows_are_doubted() {
    assert!(noted(|rows| rows[5].mu_o_cp = Some(0.66)).contains("oil viscosity goes from"));
    assert!(noted(|rows| rows[7].rs_scf_stb = Some(420.0)).contains("straight Y function"));
    assert!(noted(|rows| rows[11].bo_rb_stb = 1.03).contains("below one"));
}

fn refused(change: impl Fn(&mut FluidSpec)) -> String {
    let mut spec = invented();
    change(&mut spec);
    let faults = BlackOil::new(&spec, TANK_DEGF).unwrap_err();
    faults.iter().map(|fault| format!("{}: {}", fault.key, fault.message)).collect::<Vec<_>>().join("\n")
}

#[test]
fn impossible_rows_are_refused() {
    let rows = |change: fn(&mut Vec<LabRow>)| refused(move |spec| change(&mut spec.lab.as_mut().unwrap().rows));
    for (text, said) in [
        (rows(|rows| rows[6].rs_scf_stb = Some(350.0)), "does not rise with pressure"),
        (rows(|rows| rows[6].bo_rb_stb = 1.30), "oil volume factor does not rise"),
        (rows(|rows| rows[1].bo_rb_stb = 1.48), "does not fall with pressure"),
        (rows(|rows| rows[4].pressure_psia = rows[5].pressure_psia), "two rows"),
        (rows(|rows| rows[6].rs_scf_stb = None), "has no solution gas-oil ratio"),
        (rows(|rows| rows[6].bo_rb_stb = -1.3), "oil volume factor is -1.3"),
        (rows(|rows| rows.truncate(4)), "fewer than three rows"),
        (rows(|rows| rows.clear()), "has 0 rows"),
        (refused(|spec| spec.solution_gor_scf_stb = 700.0), "solution_gor: 700"),
        (refused(|spec| spec.bubble_point_psia = Some(2300.0)), "bubble_point: 2300"),
        (refused(|spec| spec.bubble_point_mu_o_cp = Some(0.4)), "bubble_point_viscosity: "),
        (
            refused(|spec| {
                let lab = spec.lab.as_mut().unwrap();
                lab.basis = LabBasis::Differential { separator_bo_rb_stb: 1.405, separator_gor_scf_stb: 560.0 };
                spec.solution_gor_scf_stb = 560.0;
            }),
            "referred to the separator's oil",
        ),
        // Oil that gives up more room than its gas takes: several roots of the balance.
        (rows(|rows| (rows[3].bo_rb_stb, rows[2].bo_rb_stb) = (1.68, 1.67)), "several solutions"),
    ] {
        assert!(text.contains(said), "{said}: {text}");
    }
}

#[test]
fn a_gas_volume_factor_serves_as_well_as_z() {
    let by_z = BlackOil::new(&invented(), TANK_DEGF).unwrap();
    let mut spec = invented();
    for row in &mut spec.lab.as_mut().unwrap().rows {
        row.bg_rb_scf = row.z.map(|z| 14.696 / 519.67 * z * (TANK_DEGF + 459.67) / row.pressure_psia / 5.614_583);
        row.z = None;
    }
    let by_bg = BlackOil::new(&spec, TANK_DEGF).unwrap();
    for p in [100.0, 164.7, 1000.0, 1814.7, 4000.0] {
        assert!((by_bg.bg(p) / by_z.bg(p) - 1.0).abs() < 1e-9);
        assert!((by_bg.table_row(p).z / by_z.table_row(p).z - 1.0).abs() < 1e-9);
    }
}

#[test]
fn what_the_table_does_not_hold_comes_from_correlations_and_is_said() {
    let said = |fluid: &BlackOil| {
        fluid.sources().iter().map(|s| format!("{}: {}, {}", s.property, s.from, s.detail)).collect::<Vec<_>>()
    };
    let full = BlackOil::new(&invented(), TANK_DEGF).unwrap();
    let list = said(&full);
    assert_eq!(list.iter().filter(|line| line.contains(": lab, ")).count(), list.len() - 1, "{list:#?}");
    assert!(list.last().unwrap().contains("water: correlation, McCain"));
    // Rs and Bo below the bubble point alone, and a measured viscosity.
    let mut spec = invented();
    let lab = spec.lab.as_mut().unwrap();
    lab.rows.drain(..3);
    for row in &mut lab.rows {
        (row.mu_o_cp, row.z, row.mu_g_cp) = (None, None, None);
    }
    spec.bubble_point_mu_o_cp = Some(0.44);
    let bare = BlackOil::new(&spec, TANK_DEGF).unwrap();
    let list = said(&bare);
    assert_eq!(list.iter().filter(|line| line.contains(": lab, ")).count(), 3, "{list:#?}");
    assert!(
        list.iter()
            .any(|line| line.starts_with("oil viscosity: correlation, Beggs-Robinson") && line.contains("times"))
    );
    assert!((bare.mu_o(2514.7, 640.0) / 0.44 - 1.0).abs() < 1e-3);
    // Above the bubble point Vasquez and Beggs' closed form.
    let a = 1e-5 * (-1433.0 + 5.0 * 640.0 + 17.2 * TANK_DEGF - 1180.0 * 0.82 + 12.61 * 36.0);
    let pb = bare.initial_bubble_point_psia();
    assert!((bare.bo(4000.0, 640.0) / (1.405 * (pb / 4000.0).powf(a)) - 1.0).abs() < 1e-9);
    let plain =
        BlackOil::new(&FluidSpec { bubble_point_psia: Some(pb), ..FluidSpec::new(36.0, 0.82, 640.0) }, TANK_DEGF);
    assert!((bare.bg(1500.0) / plain.unwrap().bg(1500.0) - 1.0).abs() < 1e-12);
}

proptest! {
    /// Through every point, between its neighbours everywhere, inverse to itself; sorted random data.
    #[test]
    fn monotone_curves_stay_between_their_points(
        steps in prop::collection::vec((1e-3..10.0f64, 1e-3..10.0f64), 2..12),
        rises in prop::bool::ANY,
        parts in prop::collection::vec(0.0..1.0f64, 8),
    ) {
        let (mut x, mut y, mut points) = (0.3, 0.7, Vec::new());
        for (dx, dy) in steps {
            points.push((x, y));
            x += dx;
            y += if rises { dy } else { -dy };
        }
        let curve = MonotoneCurve::new(&points).unwrap();
        for pair in points.windows(2) {
            let ((x0, y0), (x1, y1)) = (pair[0], pair[1]);
            prop_assert!((curve.at(x0) - y0).abs() <= 1e-12 * y0.abs().max(1.0));
            prop_assert!((curve.at(x1) - y1).abs() <= 1e-12 * y1.abs().max(1.0));
            let mut sorted = parts.clone();
            sorted.sort_by(f64::total_cmp);
            let mut before = y0;
            for part in sorted {
                let x = x0 + part * (x1 - x0);
                let y = curve.at(x);
                let room = 1e-12 * y.abs().max(1.0);
                let inside = if rises { y >= before - room && y <= y1 + room } else { y <= before + room && y >= y1 - room };
                prop_assert!(inside);
                before = y;
                if rises {
                    prop_assert!((curve.at(curve.inverse(y)) - y).abs() <= 1e-10 * y.abs().max(1.0));
                }
                // The slope against a difference.
                let h = 1e-6 * (x1 - x0);
                let (a, b) = (x.max(x0 + h) - h, x.min(x1 - h) + h);
                let difference = (curve.at(b) - curve.at(a)) / (b - a);
                let scale = (y1 - y0).abs() / (x1 - x0);
                prop_assert!((curve.slope_at(0.5 * (a + b)) - difference).abs() <= 1e-4 * scale.max(difference.abs()));
            }
        }
    }
}

#[test]
fn level_stretches_stay_level_and_bad_points_are_refused() {
    let curve = MonotoneCurve::new(&[(0.0, 1.0), (1.0, 1.0), (2.0, 3.0), (3.0, 2.0)]).unwrap();
    for i in 0..=10 {
        let x = f64::from(i) / 10.0;
        assert_eq!(curve.at(x), 1.0);
        assert!((1.0..=3.0).contains(&curve.at(1.0 + x)) && (2.0..=3.0).contains(&curve.at(2.0 + x)));
    }
    assert!(curve.at(f64::NAN).is_nan());
    assert!(MonotoneCurve::new(&[]).is_none());
    assert!(MonotoneCurve::new(&[(0.0, 1.0), (0.0, 2.0)]).is_none());
    assert!(MonotoneCurve::new(&[(0.0, 1.0), (1.0, f64::NAN)]).is_none());
    let one = MonotoneCurve::new(&[(1.0, 5.0)]).unwrap();
    assert_eq!((one.at(0.0), one.at(1.0), one.at(9.0), one.slope_at(1.0)), (5.0, 5.0, 5.0, 0.0));
}
