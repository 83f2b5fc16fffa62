//! The exact solution of van Everdingen and Hurst (1949), for the tests.
#![allow(dead_code, missing_docs)]

use std::f64::consts::LN_2;

/// Modified Bessel functions of order 0 and 1, by series and by Abramowitz and Stegun (1964) 9.6.24.
struct Bessel {
    i0: f64,
    i1: f64,
    k0: f64,
    k1: f64,
}

fn bessel(x: f64) -> Bessel {
    let (mut i0, mut i1, mut term) = (0.0, 0.0, 1.0);
    for k in 1..400 {
        i0 += term;
        i1 += term * 0.5 * x / f64::from(k);
        term *= 0.25 * x * x / f64::from(k).powi(2);
    }
    let (mut k0, mut k1) = (0.5 * (-x).exp(), 0.5 * (-x).exp());
    let step = 0.01;
    for n in 1..3000 {
        let u = f64::from(n) * step;
        let weight = (-x * u.cosh()).exp();
        k0 += weight;
        k1 += weight * u.cosh();
        if weight < 1e-30 {
            break;
        }
    }
    Bessel { i0, i1, k0: k0 * step, k1: k1 * step }
}

/// Stehfest (1970), twelve terms.
fn invert(transform: impl Fn(f64) -> f64, t: f64) -> f64 {
    const N: i32 = 12;
    let factorial = |n: i32| (1..=n).map(f64::from).product::<f64>();
    (1..=N)
        .map(|i| {
            let sum: f64 = ((i + 1) / 2..=i.min(N / 2))
                .map(|k| {
                    f64::from(k).powi(N / 2) * factorial(2 * k)
                        / (factorial(N / 2 - k)
                            * factorial(k)
                            * factorial(k - 1)
                            * factorial(i - k)
                            * factorial(2 * k - i))
                })
                .sum();
            let sign = if (i + N / 2) % 2 == 0 { 1.0 } else { -1.0 };
            sign * sum * transform(f64::from(i) * LN_2 / t)
        })
        .sum::<f64>()
        * LN_2
        / t
}

/// van Everdingen and Hurst (1949): cumulative influx at constant terminal pressure, infinite or sealed at `ratio`.
pub fn wed(time: f64, ratio: Option<f64>) -> f64 {
    if time <= 0.0 {
        return 0.0;
    }
    let transform = |s: f64| {
        let root = s.sqrt();
        let a = bessel(root);
        let rate = match ratio {
            None => a.k1 / a.k0,
            Some(ratio) => {
                let b = bessel(ratio * root);
                (b.i1 * a.k1 - b.k1 * a.i1) / (a.i0 * b.k1 + a.k0 * b.i1)
            }
        };
        rate / (s * root)
    };
    invert(transform, time)
}

/// Superposition of steps that halve each change of pressure, as Dake (1978) does; times in the same unit as `per_time`.
pub fn superposed(constant: f64, times: &[f64], pressures: &[f64], time_scale: f64, ratio: Option<f64>) -> Vec<f64> {
    let steps: Vec<f64> = (0..pressures.len() - 1)
        .map(|j| if j == 0 { 0.5 * (pressures[0] - pressures[1]) } else { 0.5 * (pressures[j - 1] - pressures[j + 1]) })
        .collect();
    let table: Vec<f64> = times.iter().map(|t| wed(time_scale * t, ratio)).collect();
    (1..times.len()).map(|n| constant * (0..n).map(|j| steps[j] * table[n - j]).sum::<f64>()).collect()
}
