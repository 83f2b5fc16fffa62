//! Gray: wells that make gas with some liquid.
//!
//! ```text
//! N1 = rho_n^2 vm^4/(g sig' (rhoL - rhog)),  N2 = g d^2 (rhoL - rhog)/sig',  Rv = vSL/vSg
//! N3 = 0.0814 [1 - 0.0554 ln(1 + 730 Rv/(Rv + 1))]
//! HL = 1 - {1 - exp[-2.314 (N1 (1 + 205/N2))^N3]}/(Rv + 1)
//! k0 = 28.5 sig'/(rho_n vm^2);  ke = k0 for Rv >= 0.007, else eps + Rv (k0 - eps)/0.007;  ke >= 2.77e-5 ft
//! ```
//!
//! Friction `f rho_n vm^2/(2 gc d)` with the Moody factor of the effective roughness ke at Re = 1e7; gravity rho_s;
//! `Ek = rho_s vm vSg/(gc p)`. sig' is the tension in lbm/s2 and the rest in lb, ft and s, so that N1 and N2 are pure
//! numbers. Since Rv/(Rv + 1) = lam, the holdup never falls below lam.
//!
//! # Limitation
//! Gas wells: mixture below 50 ft/s, tubing below 3.5 in., condensate below 50 bbl/MMscf. The digits 2.314, 0.0814, 0.0554
//! and 0.007 are from memory and no worked example was found to check them: 2.314 lower by 3.6 % changes the gradient of
//! a wet-gas point by 1 %. ke is held to 5 % of the diameter, the range of the friction factor (it grows without limit
//! towards rest). At rest the holdup goes to 1, but with the 0.05th to 0.08th power of N1: at no measurable rate is it near 1.
//! Friction does not join that of liquid alone where the last gas dissolves. The rest is continuous.
//!
//! # Source
//! Gray (1974), in the user manual of the American Petroleum Institute for sizing subsurface safety valves, API 14B
//! (1978).

use super::ValidRange;
use super::friction::Roughness;
use super::model::{Branch, Course, DYN_CM_PER_LBM_S2, Flow, Gradient, Hydraulics, Pipe};
use crate::units::constants::GRAVITY_FT_S2;

/// The model.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Gray;

/// The Reynolds number at which the friction factor is taken.
const REYNOLDS: f64 = 1e7;
/// Liquid over gas velocity above which the roughness is k0.
const RICH_RATIO: f64 = 0.007;
/// Least effective roughness, ft.
const LEAST_ROUGHNESS_FT: f64 = 2.77e-5;
/// Largest effective roughness relative to the diameter.
const MOST_RELATIVE_ROUGHNESS: f64 = 0.05;

// Branch bits.
const RICH: u32 = 4;
const ROUGHNESS_FLOOR: u32 = 8;
const ROUGHNESS_CEILING: u32 = 16;

/// The numbers of the holdup.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Numbers {
    /// N1.
    pub velocity: f64,
    /// N2.
    pub diameter: f64,
    /// N3.
    pub exponent: f64,
    /// HL.
    pub holdup: f64,
}

/// The numbers of a flow.
#[inline]
pub fn numbers(flow: &Flow, pipe: &Pipe) -> Numbers {
    let tension = flow.tension_dyn_cm / DYN_CM_PER_LBM_S2;
    let difference = (flow.liquid_density_lb_ft3 - flow.gas_density_lb_ft3).max(1e-3);
    let momentum = flow.no_slip_density_lb_ft3() * flow.mixture_velocity_ft_s().powi(2);
    let velocity = momentum * momentum / (GRAVITY_FT_S2 * tension * difference);
    let diameter = GRAVITY_FT_S2 * pipe.diameter_ft * pipe.diameter_ft * difference / tension;
    let lam = flow.no_slip_holdup;
    let exponent = 0.0814 * (1.0 - 0.0554 * (1.0 + 730.0 * lam).ln());
    // A column at rest stays finite.
    let power = (exponent * (velocity * (1.0 + 205.0 / diameter)).max(1e-300).ln()).exp();
    Numbers { velocity, diameter, exponent, holdup: lam + (1.0 - lam) * (-2.314 * power).exp() }
}

/// ke before its limits, ft, and Rv/0.007.
#[inline]
fn free_roughness(flow: &Flow, pipe: &Pipe, rich: Option<bool>) -> (f64, f64) {
    let momentum = flow.no_slip_density_lb_ft3() * flow.mixture_velocity_ft_s().powi(2);
    let wavy_ft = 28.5 * flow.tension_dyn_cm / (DYN_CM_PER_LBM_S2 * momentum.max(1e-12));
    let part = flow.no_slip_holdup / ((1.0 - flow.no_slip_holdup).max(1e-12) * RICH_RATIO);
    if rich.unwrap_or(part >= 1.0) {
        (wavy_ft, part)
    } else {
        (pipe.roughness_ft + part * (wavy_ft - pipe.roughness_ft), part)
    }
}

/// The effective roughness, ft.
pub fn effective_roughness_ft(flow: &Flow, pipe: &Pipe) -> f64 {
    let free_ft = free_roughness(flow, pipe, None).0;
    free_ft.min(MOST_RELATIVE_ROUGHNESS * pipe.diameter_ft).max(LEAST_ROUGHNESS_FT)
}

impl Hydraulics for Gray {
    fn branch(&self, flow: &Flow, pipe: &Pipe) -> Branch {
        let (free_ft, part) = free_roughness(flow, pipe, None);
        let limit = if free_ft > MOST_RELATIVE_ROUGHNESS * pipe.diameter_ft {
            ROUGHNESS_CEILING
        } else if free_ft < LEAST_ROUGHNESS_FT {
            ROUGHNESS_FLOOR
        } else {
            0
        };
        Branch(limit | if part >= 1.0 { RICH } else { 0 })
    }

    #[inline]
    fn gradient(&self, flow: &Flow, pipe: &Pipe, branch: Branch) -> Gradient {
        let rich = branch.has(RICH);
        let (free_ft, part) = free_roughness(flow, pipe, Some(rich));
        let above_floor = free_ft / LEAST_ROUGHNESS_FT - 1.0;
        let below_ceiling = 1.0 - free_ft / (MOST_RELATIVE_ROUGHNESS * pipe.diameter_ft);
        let (roughness_ft, limit_margin) = if branch.has(ROUGHNESS_CEILING) {
            (MOST_RELATIVE_ROUGHNESS * pipe.diameter_ft, -below_ceiling)
        } else if branch.has(ROUGHNESS_FLOOR) {
            (LEAST_ROUGHNESS_FT, -above_floor)
        } else {
            (free_ft.max(0.0), above_floor.min(below_ceiling))
        };
        let rich_margin = if rich { part - 1.0 } else { 1.0 - part };
        let moody = Roughness::new(roughness_ft / pipe.diameter_ft).turbulent(REYNOLDS);
        let holdup = numbers(flow, pipe).holdup;
        let density = flow.density_at_holdup_lb_ft3(holdup);
        Gradient {
            gravity_psi_ft: pipe.gravity_psi_ft(density),
            friction_psi_ft: pipe.friction_psi_ft(moody, flow.no_slip_density_lb_ft3(), flow.mixture_velocity_ft_s()),
            kinetic: flow.kinetic(density),
            holdup,
            margin: rich_margin.min(limit_margin).min(1.0),
            course: Course::FREE,
        }
    }

    fn range(&self) -> ValidRange {
        ValidRange {
            diameter_in: (0.0, 3.5),
            deviation_deg: 15.0,
            mixture_velocity_ft_s: 50.0,
            liquid_gas_ratio_bbl_mmscf: 50.0,
            ..ValidRange::OPEN
        }
    }

    fn pattern(&self, _flow: &Flow, _pipe: &Pipe) -> &'static str {
        "gas with liquid"
    }
}
