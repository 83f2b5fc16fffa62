//! Rate against flowing pressure, now and at future reservoir pressures.
//!
//! One form serves all methods. With `pe = min(pr, pb)`, the coefficient J belongs to the straight part above the
//! bubble point, and `x(pr, pwf)` is the drawdown that it multiplies:
//!
//! ```text
//! q = J*x
//! straight    x = pr - pwf
//! Vogel       x = (pr - pe) + pe/1.8*(1 - 0.2*(pwf/pe) - 0.8*(pwf/pe)^2)          below pe, else pr - pwf
//! Fetkovich   x = (pr - pe) + (pe^2 - pwf^2)^n/(2*pe^(2n-1))                      below pe, else pr - pwf
//! ```
//!
//! so that Fetkovich's own coefficient is `C = J/(2*pe^(2n-1))`, q = C*(pr^2 - pwf^2)^n on a saturated reservoir.
//!
//! # Source
//! Vogel (1968), JPT Jan. 1968; Fetkovich (1973), SPE 4529; the composite above the bubble point as the handbooks give it
//! (Neely 1967 for Vogel; the same construction for Fetkovich's form). Valid for vertical wells on solution-gas drive in
//! pseudo-steady flow; n between 0.5 and 1.

mod curve;
mod fit;
mod spec;

pub use curve::{InflowCurve, Shape};
pub use fit::{Fit, TestPoint, fit_saturated_below_datum, fit_tests};
pub use spec::{Coefficient, FutureRule, InflowMethod, InflowSpec, InflowTest, Measured, RateBasis};

/// What the inflow of a well follows as the tank changes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Conditions {
    /// Reservoir pressure at the perforations, psia.
    pub reservoir_psia: f64,
    /// Bubble point of the oil in the tank now, psia.
    pub bubble_point_psia: f64,
    /// kro/(mu_o*Bo) now, 1/cp.
    pub oil_mobility_1_cp: f64,
    /// Water fraction of the liquid.
    pub water_cut: f64,
}

/// The inflow of one well: a coefficient at reference conditions and the rule that carries it forward.
#[derive(Debug, Clone, PartialEq)]
pub struct Inflow {
    /// Shape of the curve, with Fetkovich's n.
    pub shape: Shape,
    /// Rule for the future.
    pub future: FutureRule,
    /// Which rate the coefficient belongs to.
    pub basis: RateBasis,
    /// Fetkovich's C (STB/d/psi^2n), or J (STB/d/psi), at the reference pressure and `skin_at_test`.
    pub coefficient: f64,
    /// min(pr, pb) at which the coefficient was found, psia.
    pub reference_psia: f64,
    /// kro/(mu_o*Bo) at which the coefficient was found, 1/cp.
    pub reference_mobility_1_cp: f64,
}

impl Inflow {
    /// The curve at present conditions. `skin_factor` is `(r + s_test)/(r + s)`.
    ///
    /// Fetkovich's rule: the coefficient (C, or J of the other methods) is proportional to pressure below the bubble
    /// point. Standing's (1971): proportional to kro/(mu_o*Bo).
    pub fn curve(&self, now: &Conditions, skin_factor: f64) -> InflowCurve {
        let effective = now.reservoir_psia.min(now.bubble_point_psia);
        let carried = match self.future {
            FutureRule::Pressure => effective / self.reference_psia,
            FutureRule::Mobility => now.oil_mobility_1_cp / self.reference_mobility_1_cp,
        };
        let basis = match self.basis {
            RateBasis::Liquid => 1.0,
            RateBasis::Oil => 1.0 / (1.0 - now.water_cut).max(1e-6),
        };
        let coefficient = self.coefficient * carried * basis * skin_factor;
        let j = match self.shape {
            Shape::Fetkovich { n } => 2.0 * effective.powf(2.0 * n - 1.0) * coefficient,
            Shape::Straight | Shape::Vogel => coefficient,
        };
        InflowCurve::new(self.shape, j, now.reservoir_psia, effective)
    }
}
