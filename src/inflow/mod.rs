//! Rate against flowing pressure, now and at future reservoir pressures.
//!
//! One form serves all methods. With `pe = min(pr, pb)`, the coefficient J belongs to the straight part above the
//! bubble point, and `x(pr, pwf)` is the drawdown that it multiplies:
//!
//! ```text
//! q = J*x
//! straight    x = pr - pwf
//! Vogel       x = (pr - pe) + pe/1.8*(1 - 0.2*(pwf/pe) - 0.8*(pwf/pe)^2)          below pe, else pr - pwf
//! Wiggins     x = (pr - pe) + pe/1.48*(1 - 0.52*(pwf/pe) - 0.48*(pwf/pe)^2)       below pe, else pr - pwf
//! Standing    x = (pr - pe) + pe/(1.8*FE)*(1.8*y - 0.8*y^2), y = FE*(1 - pwf/pe)  below pe, else pr - pwf
//!             y > 1: the bracket goes on straight, 1 + 0.2*(y - 1)
//! Fetkovich   x = (pr - pe) + (pe^2 - pwf^2)^n/(2*pe^(2n-1))                      below pe, else pr - pwf
//! Jones       x + (b/a^2)*x^2 = pr - pwf, a = 1/J                                 at all pressures
//! composite   pwf = fo*po(x) + fw*(pr - x), po by Vogel; beyond the oil's open flow straight, with the slope of its last 0.1 %
//! ```
//!
//! so that Fetkovich's own coefficient is `C = J/(2*pe^(2n-1))`, q = C*(pr^2 - pwf^2)^n on a saturated reservoir.
//!
//! # Source
//! Vogel (1968), JPT Jan. 1968; Fetkovich (1973), SPE 4529; the composite above the bubble point as the handbooks give it
//! (Neely 1967 for Vogel; the same construction for the other forms). Valid for vertical wells on solution-gas drive in
//! pseudo-steady flow; n between 0.5 and 1. Standing (1970, JPT November) replaces pwf in Vogel's equation by
//! p' = pr - FE*(pr - pwf); his charts end where p' is zero (y = 1). With FE above 1 lower pressures are reached, where the parabola would turn down
//! at y = 1.125: the curve goes on along its tangent at y = 1 instead, so that the rate always rises with drawdown (Brown 1984 gives Harrison's
//! exponential for the same end). J is that of the well as it is, skin included. Jones, Blount and Glaze (1976, SPE 6133): a is the laminar,
//! b the turbulent resistance, of one phase; b is kept while a is carried forward. Composite of oil and water at one total rate: Brown (1984, The
//! Technology of Artificial Lift Methods, vol. 4). Wiggins (1994, SPE Reservoir Engineering, May): the oil's curve where
//! water flows too.

mod curve;
mod drainage;
mod fit;
mod interval;
mod loss;
mod shape;
mod spec;

pub use curve::InflowCurve;
pub use drainage::{CIRCLE, SHAPE_FACTORS, darcy_index_stb_d_psi, drainage_term};
pub use fit::{Fit, TestPoint, fit_jones, fit_saturated_below_datum, fit_shape, fit_tests};
pub use interval::{Figure, Interval};
pub use loss::ProductivityLoss;
pub use shape::Shape;
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
    /// The curve at present conditions. `well_factor` is what skin and the loss since the last stimulation leave of the coefficient,
    /// `(r + s_test)/(r + s)` times the part left.
    ///
    /// Fetkovich's rule: the coefficient (C, or J of the other methods) is proportional to pressure below the bubble
    /// point. Standing's (1971): proportional to kro/(mu_o*Bo). Eickmeier's (1968, World Oil): the open flow of a saturated reservoir to the cube of
    /// pressure, which is J to its square.
    pub fn curve(&self, now: &Conditions, well_factor: f64) -> InflowCurve {
        let effective = now.reservoir_psia.min(now.bubble_point_psia);
        let carried = match (self.future, self.shape) {
            (FutureRule::Pressure, _) => effective / self.reference_psia,
            (FutureRule::Mobility, _) => now.oil_mobility_1_cp / self.reference_mobility_1_cp,
            (FutureRule::Cubic, Shape::Fetkovich { n }) => (effective / self.reference_psia).powf(3.0 - 2.0 * n),
            (FutureRule::Cubic, _) => (effective / self.reference_psia).powi(2),
        };
        let basis = match self.basis {
            RateBasis::Liquid => 1.0,
            RateBasis::Oil => 1.0 / (1.0 - now.water_cut).max(1e-6),
        };
        let factor = carried * well_factor;
        let coefficient = self.coefficient * factor * basis;
        let j = match self.shape {
            Shape::Fetkovich { n } => 2.0 * effective.powf(2.0 * n - 1.0) * coefficient,
            _ => coefficient,
        };
        let shape = match self.shape {
            // b stays. With the rate of oil alone as basis, a and b of the liquid change together.
            Shape::Jones { turbulence_1_psi } => Shape::Jones { turbulence_1_psi: turbulence_1_psi * factor * factor },
            Shape::FlowEfficiency { efficiency } => Shape::FlowEfficiency { efficiency: efficiency * well_factor },
            other => other.at_water_cut(now.water_cut),
        };
        InflowCurve::new(shape, j, now.reservoir_psia, effective)
    }
}
