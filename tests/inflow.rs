//! Inflow curves against published examples; the source of each stands in the reference file and in the test's comment.
#![allow(clippy::unwrap_used)]

mod common;

use common::{case, near, numbers};
use wane::inflow::{
    Conditions, FutureRule, Inflow, InflowCurve, InflowMethod, RateBasis, Shape, TestPoint, fit_saturated_below_datum,
    fit_tests,
};

fn curve(shape: Shape, j: f64, pr: f64, pb: f64) -> InflowCurve {
    InflowCurve::new(shape, j, pr, pr.min(pb))
}

fn point(pr: f64, pb: f64, pwf: f64, q: f64) -> TestPoint {
    TestPoint { reservoir_psia: pr, effective_psia: pr.min(pb), flowing_psia: pwf, rate_stb_d: q, water_cut: 0.0 }
}

fn fetkovich(c: f64, n: f64, pr: f64) -> InflowCurve {
    curve(Shape::Fetkovich { n }, 2.0 * pr.powf(2.0 * n - 1.0) * c, pr, f64::INFINITY)
}

/// Rates asked for in a published table, checked one by one, and each pressure recovered from its rate.
fn table(found: &InflowCurve, pwf: &[f64], q: &[f64], relative: f64, absolute: f64) {
    for (p, q) in pwf.iter().zip(q) {
        let rate = found.rate_stb_d(*p);
        assert!((rate - q).abs() <= relative * q + absolute, "rate at {p}: {rate} against {q}");
        if *p > 0.0 {
            near(found.flowing_psia(rate), *p, 1e-9, "pressure recovered from the rate");
        }
    }
}

/// Vogel (1968), dimensionless curve (from memory of the publication).
#[test]
fn vogel_reference_curve() {
    let c = case("inflow.json", "vogel_reference_curve");
    let (x, y) = (numbers(&c["inputs"]["pwf_over_pr"]), numbers(&c["expected"]["q_over_qmax"]));
    let curve = curve(Shape::Vogel, 1.8, 1.0, f64::INFINITY);
    table(&curve, &x, &y, 1e-9, 1e-12);
}

/// Ahmed (2001), saturated Vogel example, in psig ratios as the book works (from memory).
#[test]
fn vogel_saturated_example() {
    let c = case("inflow.json", "vogel_saturated_ahmed");
    let fit = fit_tests(InflowMethod::Vogel, None, &[point(2500.0, 1e9, 2000.0, 350.0)]).unwrap();
    let found = curve(fit.shape, fit.coefficient, 2500.0, 1e9);
    near(found.open_flow_stb_d(), c["expected"]["qmax_stb_d"].as_f64().unwrap(), 1e-3, "open flow");
    near(found.rate_stb_d(1850.0), c["expected"]["q_at_1850_stb_d"].as_f64().unwrap(), 1e-3, "rate at 1850");
    table(&found, &numbers(&c["inputs"]["pwf_list_psig"]), &numbers(&c["expected"]["q_list"]), 1e-3, 0.1);
}

/// Ahmed (2001), composite curve with the test above the bubble point (from memory).
#[test]
fn vogel_composite_example() {
    let c = case("inflow.json", "vogel_undersaturated_test_above_pb");
    let fit = fit_tests(InflowMethod::Vogel, None, &[point(3000.0, 2130.0, 2500.0, 250.0)]).unwrap();
    near(fit.coefficient, c["expected"]["J_stb_d_psi"].as_f64().unwrap(), 2e-3, "J");
    let found = curve(fit.shape, fit.coefficient, 3000.0, 2130.0);
    table(&found, &numbers(&c["inputs"]["pwf_list_psig"]), &numbers(&c["expected"]["q_list"]), 2e-3, 0.6);
}

/// Ahmed (2001), constant productivity index (from memory).
#[test]
fn constant_productivity_example() {
    let c = case("inflow.json", "constant_pi_ahmed");
    let fit = fit_tests(InflowMethod::Straight, None, &[point(2000.0, 1000.0, 1500.0, 110.0)]).unwrap();
    let found = curve(fit.shape, fit.coefficient, 2000.0, 1000.0);
    near(fit.coefficient, c["expected"]["J"].as_f64().unwrap(), 1e-3, "J");
    near(found.open_flow_stb_d(), c["expected"]["aof_stb_d"].as_f64().unwrap(), 1e-3, "open flow");
    near(found.flowing_psia(250.0), c["expected"]["pwf_for_250_psi"].as_f64().unwrap(), 1e-3, "pressure for 250 STB/d");
}

/// Ahmed (2001), Fetkovich curve with C and n as read from the book's graph, and its future coefficient (from memory).
#[test]
fn fetkovich_example_and_its_future() {
    let c = case("inflow.json", "fetkovich_ahmed_curve");
    let found = fetkovich(0.00079, 0.854, 3600.0);
    table(&found, &numbers(&c["inputs"]["pwf_list_psi"]), &numbers(&c["expected"]["q_list"]), 2e-3, 1.0);
    let future = case("inflow.json", "fetkovich_ahmed_future");
    let inflow = Inflow {
        shape: Shape::Fetkovich { n: 0.854 },
        future: FutureRule::Pressure,
        basis: RateBasis::Liquid,
        coefficient: 0.00079,
        reference_psia: 3600.0,
        reference_mobility_1_cp: 1.0,
    };
    let now = Conditions { reservoir_psia: 2000.0, bubble_point_psia: 1e9, oil_mobility_1_cp: 1.0, water_cut: 0.0 };
    let later = inflow.curve(&now, 1.0);
    near(later.open_flow_stb_d(), future["expected"]["qmax_future_stb_d"].as_f64().unwrap(), 5e-3, "future open flow");
    // Open flow falls as (p2/p1)^(2n+1), Fetkovich (1973).
    near(
        later.open_flow_stb_d() / found.open_flow_stb_d(),
        (2000.0_f64 / 3600.0).powf(2.0 * 0.854 + 1.0),
        1e-12,
        "power law",
    );
}

/// Guo, Lyons and Ghalambor (2007), two-point Fetkovich test and Vogel from the first point (from memory).
#[test]
fn fetkovich_two_point_test() {
    let c = case("inflow.json", "fetkovich_two_point_guo");
    let points = [point(3000.0, 1e9, 2000.0, 500.0), point(3000.0, 1e9, 1000.0, 800.0)];
    let fit = fit_tests(InflowMethod::Fetkovich, None, &points).unwrap();
    let Shape::Fetkovich { n } = fit.shape else { panic!("shape") };
    near(n, c["expected"]["n"].as_f64().unwrap(), 2e-3, "n");
    near(fit.coefficient, c["expected"]["C"].as_f64().unwrap(), 2e-3, "C");
    let vogel = fit_tests(InflowMethod::Vogel, None, &points[..1]).unwrap();
    let open = curve(vogel.shape, vogel.coefficient, 3000.0, 1e9).open_flow_stb_d();
    near(open, c["expected"]["vogel_qmax_from_test1"].as_f64().unwrap(), 2e-3, "Vogel open flow");
}

/// Least squares on Ahmed's four points: the reference's own regression (a comparison of implementations).
#[test]
fn fetkovich_regression() {
    let c = case("inflow.json", "fetkovich_ahmed_regression");
    let (q, p) = (numbers(&c["inputs"]["q_stb_d"]), numbers(&c["inputs"]["pwf_psi"]));
    let points: Vec<TestPoint> = q.iter().zip(&p).map(|(q, p)| point(3600.0, 1e9, *p, *q)).collect();
    let fit = fit_tests(InflowMethod::Fetkovich, None, &points).unwrap();
    let Shape::Fetkovich { n } = fit.shape else { panic!("shape") };
    near(n, c["expected"]["n"].as_f64().unwrap(), 1e-6, "n");
    near(fit.coefficient, c["expected"]["C"].as_f64().unwrap(), 1e-6, "C");
    assert!(fit.n_fitted && fit.rms_relative > 0.0);
}

/// Exact synthetic tests come back: saturated at two reservoir pressures, and straddling the bubble point.
#[test]
fn synthetic_tests_are_recovered() {
    let rate = |pr: f64, pwf: f64| 2e-4 * (pr / 2500.0) * (pr * pr - pwf * pwf).powf(0.8);
    let points: Vec<TestPoint> = [(2500.0, 2000.0), (2500.0, 1200.0), (2100.0, 1500.0), (2100.0, 700.0)]
        .map(|(pr, pwf)| point(pr, 1e9, pwf, rate(pr, pwf)))
        .into();
    let fit = fit_tests(InflowMethod::Fetkovich, None, &points).unwrap();
    let Shape::Fetkovich { n } = fit.shape else { panic!("shape") };
    near(n, 0.8, 1e-9, "n from two reservoir pressures");
    near(fit.coefficient, 2e-4, 1e-9, "C from two reservoir pressures");

    let straddling: Vec<TestPoint> = [3200.0, 2800.0, 1900.0]
        .map(|pwf: f64| {
            let q =
                if pwf >= 2650.0 { 3600.0 - pwf } else { 950.0 + (2650.0_f64.powi(2) - pwf * pwf) / (2.0 * 2650.0) };
            point(3600.0, 2650.0, pwf, 1.7 * q)
        })
        .into();
    let fit = fit_tests(InflowMethod::Fetkovich, None, &straddling).unwrap();
    near(fit.coefficient * 2.0 * 2650.0, 1.7, 1e-12, "J of straddling tests");
}

/// Exact tests of a saturated tank in a well 250 ft below the datum (built from the module's own composite equation by hand) come back.
#[test]
fn saturated_tests_below_the_datum_are_recovered() {
    let (n, c_per_psi) = (0.85, 3e-7);
    let points: Vec<TestPoint> = [(2500.0, 2100.0), (2500.0, 1400.0), (2200.0, 1000.0)]
        .map(|(pe, pwf): (f64, f64)| {
            let pr = pe + 80.0;
            let bracket = 2.0 * pe.powf(2.0 * n - 1.0) * (pr - pe) + (pe * pe - pwf * pwf).powf(n);
            TestPoint {
                reservoir_psia: pr,
                effective_psia: pe,
                flowing_psia: pwf,
                rate_stb_d: c_per_psi * pe * bracket,
                water_cut: 0.0,
            }
        })
        .into();
    let fit = fit_saturated_below_datum(&points).unwrap();
    let Shape::Fetkovich { n: found } = fit.shape else { panic!("shape") };
    near(found, n, 1e-9, "n");
    near(fit.coefficient, c_per_psi * 2500.0, 1e-9, "C at the first test's pressure");
}

/// Practice: the composite curve has one value and one slope at the bubble point (Fetkovich with n = 1, Vogel).
#[test]
fn the_composite_is_smooth_at_the_bubble_point() {
    for shape in [Shape::Vogel, Shape::Fetkovich { n: 1.0 }] {
        let found = curve(shape, 1.3, 3600.0, 2650.0);
        let slope = |p: f64, h: f64| (found.rate_stb_d(p + h) - found.rate_stb_d(p - h)) / (2.0 * h);
        near(found.rate_stb_d(2650.0 - 1e-9), found.rate_stb_d(2650.0 + 1e-9), 1e-9, "value");
        near(slope(2650.1, 1e-3), slope(2649.9, 1e-3), 1e-4, "slope");
    }
}

/// Fetkovich (1973): a quarter less pressure leaves 0.512 of the open flow with n = 1 and 0.560 with n = 0.8 (practice row 19).
#[test]
fn open_flow_of_the_future() {
    for (n, left) in [(1.0, 0.512), (0.8, 0.560)] {
        let inflow = Inflow {
            shape: Shape::Fetkovich { n },
            future: FutureRule::Pressure,
            basis: RateBasis::Liquid,
            coefficient: 1e-4,
            reference_psia: 3000.0,
            reference_mobility_1_cp: 0.5,
        };
        let at = |p: f64| {
            let now = Conditions {
                reservoir_psia: p,
                bubble_point_psia: p,
                oil_mobility_1_cp: 0.5 * p / 3000.0,
                water_cut: 0.0,
            };
            (
                inflow.curve(&now, 1.0).open_flow_stb_d(),
                Inflow { future: FutureRule::Mobility, ..inflow.clone() }.curve(&now, 1.0).open_flow_stb_d(),
            )
        };
        near(at(2400.0).0 / at(3000.0).0, left, 1e-3, "open flow left");
        // With a mobility that is linear in pressure both rules coincide (practice row 20).
        near(at(2400.0).1, at(2400.0).0, 1e-12, "mobility rule");
    }
}

/// Standing (1971) as repeated by Guo et al. (2007): Vogel's curve carried forward by kro/(mu_o*Bo) (from memory).
#[test]
fn future_by_mobility_example_of_standing() {
    let c = case("inflow.json", "future_standing_1971");
    let i = |k: &str| c["inputs"][k].as_f64().unwrap();
    let mobility = |when: &str| i(&format!("kro_{when}")) / (i(&format!("mu_o_{when}_cp")) * i(&format!("Bo_{when}")));
    let inflow = Inflow {
        shape: Shape::Vogel,
        future: FutureRule::Mobility,
        basis: RateBasis::Liquid,
        coefficient: i("Jstar_present"),
        reference_psia: i("pr_present_psig"),
        reference_mobility_1_cp: mobility("present"),
    };
    let at = |when: &str| {
        let p = i(&format!("pr_{when}_psig"));
        let now =
            Conditions { reservoir_psia: p, bubble_point_psia: p, oil_mobility_1_cp: mobility(when), water_cut: 0.0 };
        inflow.curve(&now, 1.0).open_flow_stb_d()
    };
    near(at("present"), c["expected"]["qmax_present"].as_f64().unwrap(), 2e-3, "present open flow");
    near(at("future"), c["expected"]["qmax_future"].as_f64().unwrap(), 3e-3, "future open flow");
}

/// Eickmeier's cubic rule is Fetkovich's with n = 1 (published answer from memory, through Ahmed 2001).
#[test]
fn the_cubic_rule_is_fetkovichs_with_n_of_one() {
    let c = case("inflow.json", "future_eickmeier_cubic");
    let (p0, p1) = (c["inputs"]["pr_present_psig"].as_f64().unwrap(), c["inputs"]["pr_future_psig"].as_f64().unwrap());
    let q0 = c["inputs"]["qmax_present_stb_d"].as_f64().unwrap();
    let inflow = Inflow {
        shape: Shape::Fetkovich { n: 1.0 },
        future: FutureRule::Pressure,
        basis: RateBasis::Liquid,
        coefficient: q0 / (p0 * p0),
        reference_psia: p0,
        reference_mobility_1_cp: 1.0,
    };
    let now = Conditions { reservoir_psia: p1, bubble_point_psia: p1, oil_mobility_1_cp: 1.0, water_cut: 0.0 };
    near(
        inflow.curve(&now, 1.0).open_flow_stb_d(),
        c["expected"]["qmax_future_stb_d"].as_f64().unwrap(),
        1e-3,
        "future open flow",
    );
}
