//! Moody friction factor of a rough pipe.
//!
//! Turbulent flow after Colebrook (1939), `1/sqrt(f) = -2 log10(eps/(3.7 d) + 2.51/(Re sqrt(f)))`, started from
//! Haaland (1983) and improved by two steps of Newton's with one slope: within 1e-8 of the exact solution for Re from 2,100 to 1e8 and
//! eps/d up to 0.05, and as smooth as the equation itself. Laminar flow `f = 64/Re` below Re 2,100: the factor
//! jumps there (as 64/Re and Colebrook do), which the traverse treats as a switch of the flow regime.

use crate::elementary::ln;
use std::f64::consts::LN_10;

/// Reynolds number at which laminar flow gives way to turbulent flow.
pub const LAMINAR_REYNOLDS: f64 = 2100.0;

/// The roughness of one pipe, prepared for repeated use.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Roughness {
    /// eps/(3.7 d).
    colebrook: f64,
    /// (eps/(3.7 d))^1.11.
    haaland: f64,
}

impl Roughness {
    /// Prepares the roughness relative to the diameter.
    pub fn new(relative: f64) -> Self {
        let colebrook = relative / 3.7;
        Self { colebrook, haaland: colebrook.powf(1.11) }
    }

    /// Moody factor of turbulent flow, Colebrook (1939).
    #[inline]
    pub fn turbulent(&self, reynolds: f64) -> f64 {
        let scale = -2.0 / LN_10;
        let inverse = 1.0 / reynolds;
        let viscous = 2.51 * inverse;
        // Haaland (1983), within 1.4 % of Colebrook.
        let start = 0.9 * scale * ln(6.9 * inverse + self.haaland);
        let argument = self.colebrook + viscous * start;
        let excess = start - scale * ln(argument);
        // One over the slope 1 - scale viscous/a, and 1/a with the same division. The second step takes the logarithm's change
        // as a series.
        let slope = argument - scale * viscous;
        let per_both = 1.0 / (argument * slope);
        let (per_argument, step) = (per_both * slope, per_both * argument * argument);
        let mut shift = -excess * step;
        let w = viscous * per_argument * shift;
        let rise = w * (1.0 + w * (-0.5 + w * (1.0 / 3.0)));
        shift -= (excess + shift - scale * rise) * step;
        let x = start + shift;
        1.0 / (x * x)
    }

    /// Moody factor of laminar (64/Re) or turbulent flow, as the caller has found the flow to be.
    #[inline]
    pub fn moody(&self, reynolds: f64, laminar: bool) -> f64 {
        // The lower bound serves a column at rest: no velocity, no friction, whatever the factor.
        if laminar { 64.0 / reynolds.max(1e-9) } else { self.turbulent(reynolds.max(100.0)) }
    }
}

/// Moody factor at the fully rough limit, `1/sqrt(f) = 1.74 - 2 log10(2 eps/d)` (Nikuradse 1933).
pub fn fully_rough(relative_roughness: f64) -> f64 {
    let root = 1.74 - 2.0 * (2.0 * relative_roughness).log10();
    1.0 / (root * root)
}
