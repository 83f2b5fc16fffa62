//! Inflow coefficients from measured points.
//!
//! # Method
//! Tests that are all on a saturated reservoir, Fetkovich without a given n: log-log least squares of `q/pr` against
//! `pr^2 - pwf^2` (Fetkovich 1973; dividing by pr lets tests at several reservoir pressures be fitted together). Jones, Blount and
//! Glaze (1976): least squares of `(pr - pwf)/q` on q, intercept a and slope b, each a carried to the reference pressure. Any other set:
//! the line `q*pe_ref/pe = J*x` through the origin, with n = 1 unless given (convention 4.8(8) of the documentation).
//!
//! Intervals are Student's t times the standard errors of linear least squares (e.g. Draper and Smith 1998), of ln(C) and ln(open flow) where the
//! line is one of logarithms. They suppose independent errors of one size, in what is fitted, and the right shape of curve.

use super::{Figure, InflowMethod, Interval, Shape};
use nalgebra::{DMatrix, DVector};

/// One measured point, flowing pressure known.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct TestPoint {
    /// Reservoir pressure at the perforations, psia.
    pub reservoir_psia: f64,
    /// min(pr, pb) at the time, psia.
    pub effective_psia: f64,
    /// Flowing pressure at the perforations, psia.
    pub flowing_psia: f64,
    /// Rate of the basis (liquid or oil), STB/d.
    pub rate_stb_d: f64,
    /// Water fraction of the liquid.
    pub water_cut: f64,
}

/// A fitted coefficient.
#[derive(Debug, Clone, PartialEq)]
pub struct Fit {
    /// Shape with the fitted or given figures.
    pub shape: Shape,
    /// Fetkovich's C, or J, at `reference_psia`.
    pub coefficient: f64,
    /// min(pr, pb) to which the coefficient belongs, psia.
    pub reference_psia: f64,
    /// Root mean square of the relative rate errors.
    pub rms_relative: f64,
    /// Whether n was fitted.
    pub n_fitted: bool,
    /// Of the fitted figures and of the open flow; empty with no more tests than figures.
    pub intervals: Vec<Interval>,
}

/// Fits the coefficient to at least one point; all flowing pressures lie below their reservoir pressures.
///
/// # Errors
/// A sentence when the points cannot be fitted (no point, all at one drawdown with n free, a rate that falls with drawdown).
pub fn fit_tests(method: InflowMethod, exponent: Option<f64>, points: &[TestPoint]) -> Result<Fit, String> {
    let saturated = points.iter().all(|p| p.reservoir_psia <= p.effective_psia * (1.0 + 1e-9));
    let free_n = method == InflowMethod::Fetkovich && exponent.is_none() && saturated && points.len() > 1;
    if free_n {
        let squares = |p: &TestPoint| (p.reservoir_psia - p.flowing_psia) * (p.reservoir_psia + p.flowing_psia);
        return Ok(fetkovich_fit(&log_log(points, squares)?, points));
    }
    match method {
        InflowMethod::Straight => fit_shape(Shape::Straight, points),
        InflowMethod::Vogel => fit_shape(Shape::Vogel, points),
        InflowMethod::Wiggins => fit_shape(Shape::Wiggins, points),
        InflowMethod::Fetkovich => fit_shape(Shape::Fetkovich { n: exponent.unwrap_or(1.0) }, points),
        InflowMethod::Composite => fit_shape(Shape::Composite { water_cut: 0.0 }, points),
        InflowMethod::Jones => fit_jones(None, points),
    }
}

/// Fits the coefficient of a known shape: a line through the origin.
///
/// # Errors
/// Without a point.
pub fn fit_shape(shape: Shape, points: &[TestPoint]) -> Result<Fit, String> {
    let first = first(points)?;
    let reference = first.effective_psia;
    // Least squares of q against its unit rate, each carried to the reference pressure.
    let carried = |p: &TestPoint| unit_rate(shape, p) * p.effective_psia / reference;
    let (mut xq, mut xx) = (0.0, 0.0);
    for p in points {
        let x = carried(p);
        xq += x * p.rate_stb_d;
        xx += x * x;
    }
    let coefficient = xq / xx;
    let free = points.len() - 1;
    let mut intervals = Vec::new();
    if free > 0 {
        let squares: f64 = points.iter().map(|p| (p.rate_stb_d - coefficient * carried(p)).powi(2)).sum();
        let error = (squares / free as f64 / xx).sqrt();
        let figure = match shape {
            Shape::Fetkovich { .. } => Figure::Coefficient,
            _ => Figure::ProductivityIndex,
        };
        let open = unit_rate(shape, &TestPoint { flowing_psia: 0.0, ..*first });
        intervals.push(Interval::around(figure, coefficient, error, free).at_least_zero());
        intervals.push(Interval::around(Figure::OpenFlow, coefficient * open, error * open, free).at_least_zero());
    }
    Ok(finished(shape, coefficient, points, intervals, false))
}

/// Fits a and b of Jones, Blount and Glaze, or a alone where b is given, psi/(STB/d)^2.
///
/// # Errors
/// A sentence when the points cannot be fitted: no point, a single one without b, one rate alone, a resistance that falls with rate.
pub fn fit_jones(given_b: Option<f64>, points: &[TestPoint]) -> Result<Fit, String> {
    let first = first(points)?;
    let reference = first.effective_psia;
    let resistance = |p: &TestPoint| (p.reservoir_psia - p.flowing_psia) / p.rate_stb_d;
    // The laminar part is carried as 1/J is, the turbulent one stays.
    let laminar = |p: &TestPoint| reference / p.effective_psia;
    let columns = if given_b.is_some() { 1 } else { 2 };
    if points.len() < columns {
        return Err("a single test cannot fix both a and b: state `turbulence`, or test at another rate".to_owned());
    }
    let (longest, shortest) =
        points.iter().fold((0.0_f64, f64::INFINITY), |(high, low), p| (high.max(p.rate_stb_d), low.min(p.rate_stb_d)));
    if columns == 2 && longest < 1.001 * shortest {
        return Err("the tests were taken at one rate, which cannot fix both a and b: state `turbulence`".to_owned());
    }
    // Columns of like size, so that nothing is lost in the solution.
    let size = [1.0, longest];
    let matrix = DMatrix::from_fn(points.len(), columns, |i, j| {
        if j == 0 { laminar(&points[i]) } else { points[i].rate_stb_d / size[1] }
    });
    let known = given_b.unwrap_or(0.0);
    let right = DVector::from_fn(points.len(), |i, _| resistance(&points[i]) - known * points[i].rate_stb_d);
    let solution = matrix.clone().svd(true, true).solve(&right, 1e-12).map_err(str::to_owned)?;
    let a = solution[0];
    let b = if columns == 2 { solution[1] / size[1] } else { known };
    if !(a > 0.0 && a.is_finite()) {
        return Err(format!(
            "the tests give a laminar resistance a of {a:.4} psi per STB/d, which cannot be: check rates and pressures, or state `turbulence`"
        ));
    }
    if b < 0.0 {
        return Err(format!(
            "the tests give a turbulence b of {b:.3e} psi/(STB/d)^2, below zero: their resistance falls with rate; choose the method straight, or check the tests"
        ));
    }
    let free = points.len() - columns;
    let mut intervals = Vec::new();
    if free > 0
        && let Some(inverse) = (matrix.transpose() * &matrix).try_inverse()
    {
        let deviation = ((&matrix * &solution - &right).norm_squared() / free as f64).sqrt();
        let error = |i: usize, j: usize| inverse[(i, j)] / (size[i] * size[j]);
        let of_a = Interval::around(Figure::ProductivityIndex, a, deviation * error(0, 0).sqrt(), free).at_least_zero();
        intervals.push(of_a.reciprocal(Figure::ProductivityIndex));
        if columns == 2 {
            let of_b = Interval::around(Figure::Turbulence, b, deviation * error(1, 1).sqrt(), free);
            intervals.push(of_b.at_least_zero());
        }
        // pr = a*q0 + b*q0^2: its total differential gives how a and b move the open flow.
        let pr = first.reservoir_psia;
        let open = 2.0 * pr / (a + (a * a + 4.0 * b * pr).sqrt());
        let (by_a, by_b) = (-open / (a + 2.0 * b * open), -open * open / (a + 2.0 * b * open));
        let mut square = by_a * by_a * error(0, 0);
        if columns == 2 {
            square += 2.0 * by_a * by_b * error(0, 1) + by_b * by_b * error(1, 1);
        }
        let of_open = Interval::around(Figure::OpenFlow, open, deviation * square.max(0.0).sqrt(), free);
        intervals.push(of_open.at_least_zero());
    }
    let shape = Shape::Jones { turbulence_1_psi: b / (a * a) };
    Ok(finished(shape, 1.0 / a, points, intervals, false))
}

fn first(points: &[TestPoint]) -> Result<&TestPoint, String> {
    points.first().ok_or_else(|| "at least one test point is needed".to_owned())
}

/// Fit with its rates held against the tests.
fn finished(shape: Shape, coefficient: f64, points: &[TestPoint], intervals: Vec<Interval>, n_fitted: bool) -> Fit {
    let reference_psia = points.first().map_or(f64::NAN, |p| p.effective_psia);
    let squares: f64 = points
        .iter()
        .map(|p| {
            let carried = p.effective_psia / reference_psia;
            let there = match shape {
                Shape::Jones { turbulence_1_psi } => {
                    Shape::Jones { turbulence_1_psi: turbulence_1_psi * carried * carried }
                }
                other => other,
            };
            let model = coefficient * carried * unit_rate(there, p);
            (model / p.rate_stb_d - 1.0).powi(2)
        })
        .sum();
    let rms_relative = (squares / points.len() as f64).sqrt();
    Fit { shape, coefficient, reference_psia, rms_relative, n_fitted, intervals }
}

/// Rate for a coefficient of one at the point's own conditions.
fn unit_rate(shape: Shape, p: &TestPoint) -> f64 {
    let x = shape.at_water_cut(p.water_cut).drawdown(p.reservoir_psia, p.effective_psia, p.flowing_psia);
    match shape {
        Shape::Fetkovich { n } => x * 2.0 * p.effective_psia.powf(2.0 * n - 1.0),
        _ => x,
    }
}

/// Saturated tests, perforations below the tank's datum: there pr stands above pe, the tank's pressure, and each rate is
/// `C*[2*pe^(2n-1)*(pr - pe) + (pe^2 - pwf^2)^n]`. Least squares as for other saturated tests with that bracket to the power 1/n in
/// place of `pr^2 - pwf^2`, repeated until n stands; with pe = pr the first pass is the answer.
///
/// # Errors
/// As [`fit_tests`].
pub fn fit_saturated_below_datum(points: &[TestPoint]) -> Result<Fit, String> {
    const PASSES: usize = 50;
    let mut line = log_log(points, |p| (p.reservoir_psia - p.flowing_psia) * (p.reservoir_psia + p.flowing_psia))?;
    for _ in 0..PASSES {
        let n = line.n;
        let shape = Shape::Fetkovich { n };
        line = log_log(points, |p| unit_rate(shape, p).powf(1.0 / n))?;
        if (line.n - n).abs() < 1e-12 {
            break;
        }
    }
    let with_n = fit_tests(InflowMethod::Fetkovich, Some(line.n), points)?;
    Ok(Fit { n_fitted: true, intervals: fetkovich_fit(&line, points).intervals, ..with_n })
}

/// The straight line ln(q/pe) = ln(C/pe) + n*ln(squares), the squares being pr^2 - pwf^2 on a saturated reservoir.
struct LogLine {
    n: f64,
    /// ln(q/pe) at the mean of ln(squares).
    height: f64,
    mean: f64,
    /// Sum of squares of ln(squares) around its mean.
    spread: f64,
    /// Standard deviation of ln(q); `None` with two points.
    deviation: Option<f64>,
    points: usize,
}

fn log_log(points: &[TestPoint], squares: impl Fn(&TestPoint) -> f64) -> Result<LogLine, String> {
    let rows = points.len();
    let log_x = |p: &TestPoint| squares(p).ln();
    let mean = points.iter().map(log_x).sum::<f64>() / rows as f64;
    // Centred, so that the two columns are orthogonal and nothing cancels.
    let a = DMatrix::from_fn(rows, 2, |i, j| if j == 0 { 1.0 } else { log_x(&points[i]) - mean });
    let b = DVector::from_fn(rows, |i, _| (points[i].rate_stb_d / points[i].effective_psia).ln());
    let solution = a.clone().svd(true, true).solve(&b, 1e-9).map_err(str::to_owned)?;
    let n = solution[1];
    if !(n.is_finite() && n > 0.05 && n < 5.0) {
        return Err(format!(
            "the points give an exponent n of {n:.3}; state `exponent`, or check that the rate rises with drawdown"
        ));
    }
    let deviation = (rows > 2).then(|| ((&a * &solution - &b).norm_squared() / (rows - 2) as f64).sqrt());
    Ok(LogLine { n, height: solution[0], mean, spread: a.column(1).norm_squared(), deviation, points: rows })
}

fn fetkovich_fit(line: &LogLine, points: &[TestPoint]) -> Fit {
    let reference = points.first().map_or(f64::NAN, |p| p.effective_psia);
    let n = line.n;
    let shape = Shape::Fetkovich { n };
    let coefficient = (line.height - n * line.mean).exp() * reference;
    let mut intervals = Vec::new();
    if let (Some(deviation), Some(first)) = (line.deviation, points.first()) {
        let free = line.points - 2;
        let error_at =
            |log_x: f64| deviation * (1.0 / line.points as f64 + (log_x - line.mean).powi(2) / line.spread).sqrt();
        intervals.push(Interval::around(Figure::Exponent, n, deviation / line.spread.sqrt(), free));
        intervals.push(Interval::around_log(Figure::Coefficient, coefficient, error_at(0.0), free));
        let open = coefficient * unit_rate(shape, &TestPoint { flowing_psia: 0.0, ..*first });
        let log_x = unit_rate(shape, &TestPoint { flowing_psia: 0.0, ..*first }).ln() / n;
        intervals.push(Interval::around_log(Figure::OpenFlow, open, error_at(log_x), free));
    }
    finished(shape, coefficient, points, intervals, true)
}
