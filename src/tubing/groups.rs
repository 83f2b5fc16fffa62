//! The dimensionless groups of Duns and Ros (1963), kept as logarithms: the correlations raise them to powers.
//!
//! `NLv = 1.938 vSL (rhoL/sig)^1/4`, `NGv = 1.938 vSg (rhoL/sig)^1/4`, `Nd = 120.872 d (rhoL/sig)^1/2`,
//! `NL = 0.15726 muL (1/(rhoL sig^3))^1/4` with ft/s, lb/ft3, dyn/cm, ft and cp. The customary constants are kept;
//! exact conversion gives 1.9377, 120.805 and 0.15730.

use super::model::{Flow, Pipe};
use crate::elementary::ln;

/// Constant of the velocity numbers.
pub const VELOCITY: f64 = 1.938;
/// Constant of the diameter number.
pub const DIAMETER: f64 = 120.872;
/// Constant of the viscosity number.
pub const VISCOSITY: f64 = 0.157_26;

// Natural logarithms of the three constants; a test holds them to the constants.
const LN_VELOCITY: f64 = 0.661_656_513_468_574_5;
const LN_DIAMETER: f64 = 4.794_732_134_437_54;
const LN_VISCOSITY: f64 = -1.849_854_792_418_767;

/// Velocity below which the logarithms are held, ft/s: a column at rest.
const REST_FT_S: f64 = 1e-12;

/// Natural logarithms of the groups.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LnGroups {
    /// Liquid velocity number.
    pub liquid_velocity: f64,
    /// Gas velocity number.
    pub gas_velocity: f64,
    /// Diameter number.
    pub diameter: f64,
    /// Liquid viscosity number.
    pub viscosity: f64,
}

impl LnGroups {
    /// The groups of a flow.
    #[inline]
    pub fn new(flow: &Flow, pipe: &Pipe) -> Self {
        let ln_density = ln(flow.liquid_density_lb_ft3);
        let ln_tension = ln(flow.tension_dyn_cm);
        let quarter = 0.25 * (ln_density - ln_tension);
        Self {
            liquid_velocity: LN_VELOCITY + ln(flow.liquid_velocity_ft_s.max(REST_FT_S)) + quarter,
            gas_velocity: LN_VELOCITY + ln(flow.gas_velocity_ft_s.max(REST_FT_S)) + quarter,
            diameter: LN_DIAMETER + pipe.ln_diameter + 2.0 * quarter,
            viscosity: LN_VISCOSITY + ln(flow.liquid_viscosity_cp) - 0.25 * (ln_density + 3.0 * ln_tension),
        }
    }

    /// The liquid velocity number alone, for correlations that need no other.
    #[inline]
    pub fn liquid_velocity_number(flow: &Flow) -> f64 {
        LN_VELOCITY
            + ln(flow.liquid_velocity_ft_s.max(REST_FT_S))
            + 0.25 * ln(flow.liquid_density_lb_ft3 / flow.tension_dyn_cm)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn logarithms_belong_to_the_constants() {
        assert!((LN_VELOCITY - VELOCITY.ln()).abs() < 1e-14, "{}", VELOCITY.ln());
        assert!((LN_DIAMETER - DIAMETER.ln()).abs() < 1e-14, "{}", DIAMETER.ln());
        assert!((LN_VISCOSITY - VISCOSITY.ln()).abs() < 1e-14, "{}", VISCOSITY.ln());
    }
}
