//! Nonlinear least squares with intervals.
//!
//! # Method
//! Levenberg (1944, Quarterly of Applied Mathematics 2, 164) and Marquardt (1963, J. SIAM 11, 431) in the form of More
//! (1978), from a general library; the Jacobian by central differences. At the optimum the covariance of the parameters is
//! s^2 (J'J)^-1 with s^2 the sum of squares over the degrees of freedom, and an interval is the estimate plus and minus
//! Student's t times the standard error (linear theory, e.g. Draper and Smith 1998). It supposes misses that are independent and of
//! one size.

pub use crate::statistics::{CONFIDENCE, student_t};
use levenberg_marquardt::{LeastSquaresProblem, LevenbergMarquardt, TerminationReason};
use nalgebra::{DMatrix, DVector, Dyn, Owned};

/// Function evaluations allowed are this many times the number of parameters plus one.
const PATIENCE: usize = 40;
/// Reciprocal condition of the scaled normal matrix below which parameters cannot be told apart.
const SINGULAR: f64 = 1e-12;

/// What a fit found.
#[derive(Debug, Clone, PartialEq)]
pub struct Estimates {
    /// The parameters.
    pub values: Vec<f64>,
    /// Their standard errors; `None` where the points do not give them.
    pub standard_errors: Option<Vec<f64>>,
    /// Correlation of the first two parameters.
    pub correlation: Option<f64>,
    /// Sum of squared residuals.
    pub sum_of_squares: f64,
    /// Points less parameters.
    pub degrees_of_freedom: usize,
    /// Whether the search came to rest; it does not where a parameter runs away.
    pub settled: bool,
}

/// How a fit is done.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Settings<'a> {
    /// Size of each parameter: steps are taken of it where the parameter itself is smaller.
    pub typical: &'a [f64],
    /// Relative step of the differences.
    pub step: f64,
    /// Relative change of the sum of squares that ends the search; of the parameters ten times as much.
    pub tolerance: f64,
}

impl Estimates {
    /// Standard deviation of the residuals; `None` without degrees of freedom.
    pub fn residual_deviation(&self) -> Option<f64> {
        (self.degrees_of_freedom > 0).then(|| (self.sum_of_squares / self.degrees_of_freedom as f64).sqrt())
    }

    /// Half the width of the interval of a parameter.
    pub fn half_width(&self, parameter: usize) -> Option<f64> {
        let error = self.standard_errors.as_ref()?.get(parameter)?;
        Some(error * student_t(self.degrees_of_freedom))
    }
}

struct Problem<F> {
    residuals: F,
    at: DVector<f64>,
    step: f64,
    typical: Vec<f64>,
}

impl<F: Fn(&[f64]) -> Vec<f64>> Problem<F> {
    fn value(&self, at: &DVector<f64>) -> Option<DVector<f64>> {
        let out = (self.residuals)(at.as_slice());
        out.iter().all(|r| r.is_finite()).then(|| DVector::from_vec(out))
    }
}

impl<F: Fn(&[f64]) -> Vec<f64>> LeastSquaresProblem<f64, Dyn, Dyn> for Problem<F> {
    type ResidualStorage = Owned<f64, Dyn>;
    type JacobianStorage = Owned<f64, Dyn, Dyn>;
    type ParameterStorage = Owned<f64, Dyn>;

    fn set_params(&mut self, x: &DVector<f64>) {
        self.at.copy_from(x);
    }

    fn params(&self) -> DVector<f64> {
        self.at.clone()
    }

    fn residuals(&self) -> Option<DVector<f64>> {
        self.value(&self.at)
    }

    fn jacobian(&self) -> Option<DMatrix<f64>> {
        let mut columns = Vec::with_capacity(self.at.len());
        for (i, typical) in self.typical.iter().enumerate() {
            let nudge = self.step * self.at[i].abs().max(*typical);
            let (mut low, mut high) = (self.at.clone(), self.at.clone());
            low[i] -= nudge;
            high[i] += nudge;
            columns.push((self.value(&high)? - self.value(&low)?) / (2.0 * nudge));
        }
        Some(DMatrix::from_columns(&columns))
    }
}

/// Minimises the sum of squares of `residuals` from `start`.
///
/// # Errors
/// A sentence when the residuals are not finite somewhere on the way.
pub fn fit(residuals: impl Fn(&[f64]) -> Vec<f64>, start: &[f64], settings: Settings) -> Result<Estimates, String> {
    let Settings { typical, step, tolerance } = settings;
    let problem = Problem { residuals, at: DVector::from_column_slice(start), step, typical: typical.to_vec() };
    let count = problem.residuals().ok_or("the model gives no finite pressure at the start of the fit")?.len();
    if count < start.len() {
        return Err(format!("{count} points cannot fix {} figures", start.len()));
    }
    let search = LevenbergMarquardt::new()
        .with_ftol(tolerance)
        .with_xtol(10.0 * tolerance)
        .with_gtol(tolerance)
        .with_patience(PATIENCE);
    let (problem, report) = search.minimize(problem);
    let settled = match report.termination {
        TerminationReason::ResidualsZero
        | TerminationReason::Orthogonal
        | TerminationReason::Converged { .. }
        // The noise of the residuals is reached: as good as it gets.
        | TerminationReason::NoImprovementPossible(_) => true,
        TerminationReason::LostPatience => false,
        other => return Err(format!("the fit fails ({other:?})")),
    };
    let degrees_of_freedom = count - start.len();
    let sum_of_squares = 2.0 * report.objective_function;
    let covariance = problem
        .jacobian()
        .filter(|_| degrees_of_freedom > 0)
        .and_then(|j| inverse(&j))
        .map(|inverse| inverse * (sum_of_squares / degrees_of_freedom as f64));
    let standard_errors =
        covariance.as_ref().map(|c| (0..start.len()).map(|i| c[(i, i)].max(0.0).sqrt()).collect::<Vec<_>>());
    let correlation = covariance
        .as_ref()
        .filter(|c| c.nrows() > 1)
        .map(|c| c[(0, 1)] / (c[(0, 0)] * c[(1, 1)]).sqrt())
        .filter(|c| c.is_finite());
    Ok(Estimates {
        values: problem.at.as_slice().to_vec(),
        standard_errors,
        correlation,
        sum_of_squares,
        degrees_of_freedom,
        settled,
    })
}

/// (J'J)^-1 by singular values of the columns brought to one length; `None` where parameters cannot be told apart.
fn inverse(jacobian: &DMatrix<f64>) -> Option<DMatrix<f64>> {
    let lengths: Vec<f64> = jacobian.column_iter().map(|c| c.norm()).collect();
    if lengths.iter().any(|l| !(*l > 0.0 && l.is_finite())) {
        return None;
    }
    let mut scaled = jacobian.clone();
    for (mut column, length) in scaled.column_iter_mut().zip(&lengths) {
        column /= *length;
    }
    let svd = scaled.svd(false, true);
    let v = svd.v_t?.transpose();
    let (least, most) = (svd.singular_values.min(), svd.singular_values.max());
    if least * least < SINGULAR * most * most {
        return None;
    }
    let n = lengths.len();
    let mut out = DMatrix::zeros(n, n);
    for i in 0..n {
        for k in 0..n {
            let sum: f64 = (0..n).map(|m| v[(i, m)] * v[(k, m)] / svd.singular_values[m].powi(2)).sum();
            out[(i, k)] = sum / (lengths[i] * lengths[k]);
        }
    }
    Some(out)
}
