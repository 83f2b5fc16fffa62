//! Hall and Yarborough (1973): compressibility factor of natural gas.
//!
//! ```text
//! 0 = -a ppr + (y + y^2 + y^3 - y^4)/(1 - y)^3 - (14.76 t - 9.76 t^2 + 4.58 t^3) y^2
//!     + (90.7 t - 242.2 t^2 + 42.4 t^3) y^(2.18 + 2.82 t)
//! z = a ppr/y,   a = 0.06125 t exp[-1.2 (1 - t)^2],   t = 1/Tpr
//! ```
//!
//! # Method
//! Bisection-guarded Newton for the reduced density y in (0, 1).
//!
//! # Source
//! K. R. Hall and L. Yarborough, "A New Equation of State for Z-factor Calculations", Oil and Gas Journal (18 June 1973).
//!
//! # Range
//! Tpr 1.2 to 3, ppr to about 24. Within about 1.5 % of the Standing-Katz chart. A fluid's Tpr is held to 1.05 to 3.

/// The highest pseudo-reduced pressure of the fit.
pub const MAXIMUM_PPR: f64 = 24.0;

/// The compressibility factor at a pseudo-reduced pressure and temperature.
pub fn z_factor(ppr: f64, tpr: f64) -> f64 {
    let t = 1.0 / tpr;
    let target = 0.061_25 * t * (-1.2 * (1.0 - t) * (1.0 - t)).exp() * ppr;
    if target.is_nan() || target <= 0.0 {
        return 1.0;
    }
    let b = (14.76 + (-9.76 + 4.58 * t) * t) * t;
    let c = (90.7 + (-242.2 + 42.4 * t) * t) * t;
    let exponent = 2.18 + 2.82 * t;
    let (mut low, mut high) = (0.0, 1.0 - 1e-12);
    let mut y = target.min(0.5);
    for _ in 0..100 {
        let hole = 1.0 - y;
        let power = c * y.powf(exponent - 1.0);
        let miss = y * (1.0 + (1.0 + (1.0 - y) * y) * y) / (hole * hole * hole) - b * y * y + power * y - target;
        let slope = (1.0 + (4.0 + (4.0 + (-4.0 + y) * y) * y) * y) / (hole * hole * hole * hole) - 2.0 * b * y
            + exponent * power;
        if miss > 0.0 {
            high = y;
        } else {
            low = y;
        }
        let next = y - miss / slope;
        // Newton converges quadratically: after a step this small the error is below rounding.
        if (next - y).abs() <= 1e-9 * y {
            return target / next;
        }
        y = if next > low && next < high { next } else { 0.5 * (low + high) };
    }
    target / y
}
