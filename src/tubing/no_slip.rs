//! Gas and liquid at one velocity: the homogeneous model. READ ME FIRST: the simplest of the models, in the shape of
//! them all.
//!
//! `dp/dL = [rho_n sin(th) + f rho_n vm^2/(2 gc d)]/(1 - Ek)`, Moody f at Re = 1488 rho_n vm d/mu_n with
//! mu_n = lam muL + (1 - lam) mug, Ek = rho_n vm vSg/(gc p).
//!
//! # Limitation
//! The lower bound of what a flowing column weighs; right only where the velocity is high.
//!
//! # Source
//! Textbook; see Brill and Mukherjee, Multiphase Flow in Wells (SPE Monograph 17, 1999), chapter 4.

use super::model::{Branch, Course, Flow, Gradient, Hydraulics, Pipe, laminar_bit, laminar_margin};

/// The no-slip model.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct NoSlip;

/// Reynolds number of the mixture without slip.
#[inline]
pub(crate) fn reynolds(flow: &Flow, pipe: &Pipe, density_lb_ft3: f64) -> f64 {
    let holdup = flow.no_slip_holdup;
    let viscosity_cp = flow.liquid_viscosity_cp * holdup + flow.gas_viscosity_cp * (1.0 - holdup);
    pipe.reynolds(density_lb_ft3, flow.mixture_velocity_ft_s(), viscosity_cp)
}

impl Hydraulics for NoSlip {
    fn branch(&self, flow: &Flow, pipe: &Pipe) -> Branch {
        Branch(laminar_bit(reynolds(flow, pipe, flow.no_slip_density_lb_ft3())))
    }

    #[inline]
    fn gradient(&self, flow: &Flow, pipe: &Pipe, branch: Branch) -> Gradient {
        let density = flow.no_slip_density_lb_ft3();
        let reynolds = reynolds(flow, pipe, density);
        let laminar = branch.has(Branch::LAMINAR);
        let moody = pipe.roughness.moody(reynolds, laminar);
        Gradient {
            gravity_psi_ft: pipe.gravity_psi_ft(density),
            friction_psi_ft: pipe.friction_psi_ft(moody, density, flow.mixture_velocity_ft_s()),
            kinetic: flow.kinetic(density),
            holdup: flow.no_slip_holdup,
            course: Course::FREE,
            margin: laminar_margin(reynolds, laminar),
        }
    }

    fn pattern(&self, _flow: &Flow, _pipe: &Pipe) -> &'static str {
        "homogeneous"
    }
}
