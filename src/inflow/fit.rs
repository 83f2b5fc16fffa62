//! Inflow coefficients from measured points.
//!
//! # Method
//! Tests that are all on a saturated reservoir, Fetkovich without a given n: log-log least squares of `q/pr` against
//! `pr^2 - pwf^2` (Fetkovich 1973; dividing by pr lets tests at several reservoir pressures be fitted together). Any other set:
//! the line `q*pe_ref/pe = J*x` through the origin, with n = 1 unless given (convention 4.8(8) of the documentation).

use super::{InflowMethod, Shape};
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
}

/// A fitted coefficient.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Fit {
    /// Shape with the fitted or given n.
    pub shape: Shape,
    /// Fetkovich's C, or J, at `reference_psia`.
    pub coefficient: f64,
    /// min(pr, pb) to which the coefficient belongs, psia.
    pub reference_psia: f64,
    /// Root mean square of the relative rate errors.
    pub rms_relative: f64,
    /// Whether n was fitted.
    pub n_fitted: bool,
}

/// Fits the coefficient to at least one point; all flowing pressures lie below their reservoir pressures.
///
/// # Errors
/// A sentence when the points cannot be fitted (no point, all at one drawdown with n free, a rate that falls with drawdown).
pub fn fit_tests(method: InflowMethod, exponent: Option<f64>, points: &[TestPoint]) -> Result<Fit, String> {
    let Some(first) = points.first() else {
        return Err("at least one test point is needed".to_owned());
    };
    let reference = first.effective_psia;
    let saturated = points.iter().all(|p| p.reservoir_psia <= p.effective_psia * (1.0 + 1e-9));
    let free_n = method == InflowMethod::Fetkovich && exponent.is_none() && saturated && points.len() > 1;
    let (shape, coefficient) = if free_n {
        let (n, c) = log_log(points, |p| (p.reservoir_psia - p.flowing_psia) * (p.reservoir_psia + p.flowing_psia))?;
        (Shape::Fetkovich { n }, c * reference)
    } else {
        let shape = match method {
            InflowMethod::Straight => Shape::Straight,
            InflowMethod::Vogel => Shape::Vogel,
            InflowMethod::Fetkovich => Shape::Fetkovich { n: exponent.unwrap_or(1.0) },
        };
        (shape, coefficient_through_origin(shape, points, reference))
    };
    let squares: f64 = points
        .iter()
        .map(|p| {
            let model = coefficient * unit_rate(shape, p) * p.effective_psia / reference;
            (model / p.rate_stb_d - 1.0).powi(2)
        })
        .sum();
    Ok(Fit {
        shape,
        coefficient,
        reference_psia: reference,
        rms_relative: (squares / points.len() as f64).sqrt(),
        n_fitted: free_n,
    })
}

/// Rate for a coefficient of one at the point's own conditions.
fn unit_rate(shape: Shape, p: &TestPoint) -> f64 {
    let x = shape.drawdown(p.reservoir_psia, p.effective_psia, p.flowing_psia);
    match shape {
        Shape::Fetkovich { n } => x * 2.0 * p.effective_psia.powf(2.0 * n - 1.0),
        Shape::Straight | Shape::Vogel => x,
    }
}

fn coefficient_through_origin(shape: Shape, points: &[TestPoint], reference: f64) -> f64 {
    // Least squares of q against its unit rate, each carried to the reference pressure.
    let (mut xq, mut xx) = (0.0, 0.0);
    for p in points {
        let x = unit_rate(shape, p) * p.effective_psia / reference;
        xq += x * p.rate_stb_d;
        xx += x * x;
    }
    xq / xx
}

/// Saturated tests, perforations below the tank's datum: there pr stands above pe, the tank's pressure, and each rate is
/// `C*[2*pe^(2n-1)*(pr - pe) + (pe^2 - pwf^2)^n]`. Least squares as for other saturated tests with that bracket to the power 1/n in
/// place of `pr^2 - pwf^2`, repeated until n stands; with pe = pr the first pass is the answer.
///
/// # Errors
/// As [`fit_tests`].
pub fn fit_saturated_below_datum(points: &[TestPoint]) -> Result<Fit, String> {
    const PASSES: usize = 50;
    let mut n = log_log(points, |p| (p.reservoir_psia - p.flowing_psia) * (p.reservoir_psia + p.flowing_psia))?.0;
    for _ in 0..PASSES {
        let shape = Shape::Fetkovich { n };
        let next = log_log(points, |p| unit_rate(shape, p).powf(1.0 / n))?.0;
        let change = (next - n).abs();
        n = next;
        if change < 1e-12 {
            break;
        }
    }
    Ok(Fit { n_fitted: true, ..fit_tests(InflowMethod::Fetkovich, Some(n), points)? })
}

/// Exponent and C/pe of the straight line ln(q/pe) = ln(C/pe) + n*ln(squares), the squares being pr^2 - pwf^2 on a saturated reservoir.
fn log_log(points: &[TestPoint], squares: impl Fn(&TestPoint) -> f64) -> Result<(f64, f64), String> {
    let rows = points.len();
    let log_x = |p: &TestPoint| squares(p).ln();
    let mean = points.iter().map(log_x).sum::<f64>() / rows as f64;
    // Centred, so that the two columns are orthogonal and nothing cancels.
    let a = DMatrix::from_fn(rows, 2, |i, j| if j == 0 { 1.0 } else { log_x(&points[i]) - mean });
    let b = DVector::from_fn(rows, |i, _| (points[i].rate_stb_d / points[i].effective_psia).ln());
    let solution = a.svd(true, true).solve(&b, 1e-9).map_err(str::to_owned)?;
    let n = solution[1];
    if !(n.is_finite() && n > 0.05 && n < 5.0) {
        return Err(format!(
            "the points give an exponent n of {n:.3}; state `exponent`, or check that the rate rises with drawdown"
        ));
    }
    Ok((n, (solution[0] - n * mean).exp()))
}
