//! The fit with intervals against certified results, closed forms and printed tables.
#![allow(clippy::unwrap_used)]

mod common;

use common::near;
use wane::study::calibrate::least_squares::{Settings, fit, student_t};

/// Pressure against volume of the National Institute of Standards and Technology's Statistical Reference Datasets, "Misra1a"
/// (nonlinear regression, lower level of difficulty): y and x. Data and certified values from memory; the certified sum of
/// squares, which the data must reproduce to ten digits, guards both.
const MISRA1A: [(f64, f64); 14] = [
    (10.07, 77.6),
    (14.73, 114.9),
    (17.94, 141.1),
    (23.93, 190.8),
    (29.61, 239.9),
    (35.18, 289.0),
    (40.02, 332.8),
    (44.82, 378.4),
    (50.76, 434.8),
    (55.05, 477.3),
    (61.01, 536.8),
    (66.40, 593.1),
    (75.47, 689.1),
    (81.78, 760.0),
];

#[test]
fn a_certified_nonlinear_fit_is_reproduced_from_both_starts() {
    let residuals = |b: &[f64]| MISRA1A.iter().map(|(y, x)| b[0] * (1.0 - (-b[1] * x).exp()) - y).collect::<Vec<_>>();
    for start in [[500.0, 1e-4], [250.0, 5e-4]] {
        let settings = Settings { typical: &[1.0, 1e-5], step: 1e-5, tolerance: 1e-14 };
        let found = fit(residuals, &start, settings).unwrap();
        assert!(found.settled);
        near(found.values[0], 2.389_421_291_8e2, 1e-7, "b1");
        near(found.values[1], 5.501_564_318_1e-4, 1e-7, "b2");
        near(found.sum_of_squares, 1.245_513_889_4e-1, 1e-9, "residual sum of squares");
        near(found.residual_deviation().unwrap(), 1.018_787_633_0e-1, 1e-9, "residual standard deviation");
        assert_eq!(found.degrees_of_freedom, 12);
        let errors = found.standard_errors.as_ref().unwrap();
        near(errors[0], 2.707_007_524_1, 1e-5, "standard error of b1");
        near(errors[1], 7.266_868_843_6e-6, 1e-5, "standard error of b2");
        near(
            found.half_width(0).unwrap(),
            2.179 * 2.707_007_524_1,
            1e-3,
            "interval of b1, t of 12 degrees of freedom from a table",
        );
    }
}

#[test]
fn a_straight_line_has_the_errors_of_its_closed_form() {
    // y = a + b x: b = Sxy/Sxx, s_b^2 = s^2/Sxx, s_a^2 = s^2 (1/n + xm^2/Sxx), correlation -xm/sqrt(sum x^2/n); any text on
    // regression. Numbers of our own.
    let points = [(1.0, 2.3), (2.0, 3.9), (4.0, 8.4), (5.0, 9.6), (7.0, 14.5), (9.0, 17.7), (12.0, 24.9)];
    let n = points.len() as f64;
    let xm = points.iter().map(|p| p.0).sum::<f64>() / n;
    let ym = points.iter().map(|p| p.1).sum::<f64>() / n;
    let sxx: f64 = points.iter().map(|p| (p.0 - xm).powi(2)).sum();
    let b = points.iter().map(|p| (p.0 - xm) * (p.1 - ym)).sum::<f64>() / sxx;
    let a = ym - b * xm;
    let s2 = points.iter().map(|p| (p.1 - a - b * p.0).powi(2)).sum::<f64>() / (n - 2.0);
    let settings = Settings { typical: &[1.0, 1.0], step: 1e-4, tolerance: 1e-14 };
    let found = fit(|v| points.iter().map(|p| v[0] + v[1] * p.0 - p.1).collect(), &[0.0, 0.0], settings).unwrap();
    near(found.values[0], a, 1e-9, "a");
    near(found.values[1], b, 1e-10, "b");
    let errors = found.standard_errors.as_ref().unwrap();
    near(errors[0], (s2 * (1.0 / n + xm * xm / sxx)).sqrt(), 1e-8, "standard error of a");
    near(errors[1], (s2 / sxx).sqrt(), 1e-8, "standard error of b");
    let mean_square = points.iter().map(|p| p.0 * p.0).sum::<f64>() / n;
    near(found.correlation.unwrap(), -xm / mean_square.sqrt(), 1e-8, "correlation");
}

#[test]
fn students_t_is_that_of_the_tables() {
    // Two-sided 95 %, as printed in tables since Fisher (1925).
    for (degrees, t) in [
        (1, 12.706),
        (2, 4.303),
        (3, 3.182),
        (4, 2.776),
        (5, 2.571),
        (8, 2.306),
        (10, 2.228),
        (12, 2.179),
        (20, 2.086),
        (30, 2.042),
        (60, 2.000),
        (120, 1.980),
    ] {
        assert!((student_t(degrees) - t).abs() < 6e-4, "{degrees}: {} against {t}", student_t(degrees));
    }
    assert!((student_t(100_000) - 1.960).abs() < 1e-3, "the normal's");
    assert!(student_t(0).is_infinite());
}

#[test]
fn parameters_that_cannot_be_told_apart_have_no_errors() {
    let settings = Settings { typical: &[1.0, 1.0], step: 1e-4, tolerance: 1e-12 };
    let points = [(1.0, 2.0), (2.0, 4.1), (3.0, 5.9)];
    let same = fit(|v| points.iter().map(|p| (v[0] + v[1]) * p.0 - p.1).collect(), &[0.5, 0.5], settings).unwrap();
    assert!(same.standard_errors.is_none() && same.correlation.is_none(), "{same:?}");
    // As many points as parameters: met, without any measure of error.
    let exact = fit(|v| vec![v[0] - 1.0, v[1] - 2.0], &[0.0, 0.0], settings).unwrap();
    assert!(exact.residual_deviation().is_none() && exact.half_width(0).is_none(), "{exact:?}");
    assert!(fit(|v| vec![v[0]], &[0.0, 0.0], settings).is_err(), "one point, two figures");
    assert!(fit(|_| vec![f64::NAN; 4], &[0.0, 0.0], settings).is_err(), "nothing finite");
}
