//! Dimensionless pressure at the inner edge of an infinite radial aquifer that gives water at a constant rate.
//!
//! ```text
//! L[pD](s) = K0(sqrt s) / (s^1.5 * K1(sqrt s)),   pD' = d pD/d tD,   tD = 0.0063283*k*t/(phi*mu*ct*ro^2), t in days
//! ```
//!
//! # Source
//! van Everdingen and Hurst (1949). The transform is inverted by Stehfest's algorithm (1970) at points evenly spaced in ln tD and
//! interpolated by cubics that take the exact slopes, within 2e-5 of the exact function between [`SMALLEST`] and [`LARGEST`]. Below, the
//! first terms of its expansion about linear flow, `2*sqrt(tD/pi) - tD/2 + tD*sqrt(tD/pi)/2`; above, the line source `(ln(4*tD) - 0.57722)/2`. The Bessel functions are integrals of
//! `exp(-x*cosh u)*cosh(n*u)` (Abramowitz and Stegun 1964, 9.6.24) by the trapezoidal rule, which converges faster than any power here.

use std::f64::consts::{LN_2, PI};

/// Smallest dimensionless time of the table.
const SMALLEST: f64 = 1e-4;
/// Largest.
const LARGEST: f64 = 1e6;
/// Points in the table.
const POINTS: usize = 201;
/// Terms of Stehfest's sum.
const TERMS: usize = 14;
/// Euler's constant.
const EULER: f64 = 0.577_215_664_901_532_9;

/// `exp(x)*K0(x)` and `exp(x)*K1(x)`.
fn bessel_k01_scaled(x: f64) -> (f64, f64) {
    // Beyond this the integrand is below 1e-17 of its start.
    let end = (1.0 + 40.0 / x).acosh();
    const STEPS: usize = 80;
    let step = end / STEPS as f64;
    let mut sums = (0.5, 0.5);
    for i in 1..=STEPS {
        let cosh = (i as f64 * step).cosh();
        let weight = (-x * (cosh - 1.0)).exp();
        sums = (sums.0 + weight, sums.1 + weight * cosh);
    }
    (sums.0 * step, sums.1 * step)
}

/// Stehfest's weights.
fn stehfest_weights() -> [f64; TERMS] {
    let factorial = |n: usize| (1..=n).map(|i| i as f64).product::<f64>();
    let half = TERMS / 2;
    std::array::from_fn(|i| {
        let n = i + 1;
        let sum: f64 = (n.div_ceil(2)..=n.min(half))
            .map(|k| {
                (k as f64).powi(half as i32) * factorial(2 * k)
                    / (factorial(half - k) * factorial(k) * factorial(k - 1) * factorial(n - k) * factorial(2 * k - n))
            })
            .sum();
        if (n + half).is_multiple_of(2) { sum } else { -sum }
    })
}

/// pD and tD*pD' over ln tD.
#[derive(Debug, Clone, PartialEq)]
pub struct PressureFunction {
    /// pD at each point, and its change with ln tD.
    points: Vec<(f64, f64)>,
    first_ln: f64,
    step_ln: f64,
}

impl Default for PressureFunction {
    fn default() -> Self {
        Self::new()
    }
}

impl PressureFunction {
    /// Prepares the table.
    pub fn new() -> Self {
        let weights = stehfest_weights();
        let first_ln = SMALLEST.ln();
        let step_ln = (LARGEST.ln() - first_ln) / (POINTS - 1) as f64;
        let points = (0..POINTS)
            .map(|i| {
                let t = (first_ln + step_ln * i as f64).exp();
                let mut value = 0.0;
                let mut slope = 0.0;
                for (n, weight) in weights.iter().enumerate() {
                    let s = LN_2 * (n + 1) as f64 / t;
                    let (k0, k1) = bessel_k01_scaled(s.sqrt());
                    // Of the derivative: s times that of pD, which starts at zero.
                    let derivative = k0 / (s.sqrt() * k1);
                    value += weight * derivative / s;
                    slope += weight * derivative;
                }
                (value * LN_2 / t, slope * LN_2)
            })
            .collect();
        Self { points, first_ln, step_ln }
    }

    /// pD and pD' at a dimensionless time above zero.
    pub fn at(&self, time: f64) -> (f64, f64) {
        if time <= SMALLEST {
            let root = time.sqrt();
            return (
                2.0 * root / PI.sqrt() - 0.5 * time + 0.5 * time * root / PI.sqrt(),
                1.0 / (PI.sqrt() * root) - 0.5 + 0.75 * root / PI.sqrt(),
            );
        }
        if time >= LARGEST {
            return (0.5 * ((4.0 * time).ln() - EULER), 0.5 / time);
        }
        let x = (time.ln() - self.first_ln) / self.step_ln;
        let i = (x as usize).min(POINTS - 2);
        let (u, h) = (x - i as f64, self.step_ln);
        let ((a, da), (b, db)) = (self.points[i], self.points[i + 1]);
        // Hermite's cubic.
        let rise = b - a;
        let (c, d) = (3.0 * rise - h * (2.0 * da + db), h * (da + db) - 2.0 * rise);
        let value = a + u * (h * da + u * (c + u * d));
        let slope = (h * da + u * (2.0 * c + 3.0 * u * d)) / h;
        (value, slope / time)
    }
}
