//! Intervals of fitted figures.

use special::Beta;

/// Confidence of every interval.
pub const CONFIDENCE: f64 = 0.95;

/// Two-sided quantile of Student's t at [`CONFIDENCE`]; infinite without degrees of freedom.
pub fn student_t(degrees_of_freedom: usize) -> f64 {
    if degrees_of_freedom == 0 {
        return f64::INFINITY;
    }
    // P(|t| > t0) is the incomplete beta function of nu/(nu + t0^2) with nu/2 and 1/2.
    let nu = degrees_of_freedom as f64;
    let (p, q) = (0.5 * nu, 0.5);
    let x = (1.0 - CONFIDENCE).inv_inc_beta(p, q, p.ln_beta(q));
    (nu * (1.0 - x) / x).sqrt()
}
