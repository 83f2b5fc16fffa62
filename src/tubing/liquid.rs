//! Liquid alone: the weight of the column and Darcy-Weisbach friction, `dp/dL = rho sin(th) + f rho v^2/(2 gc d)`.
//!
//! Serves every model where all gas is dissolved: the two-phase correlations divide by the gas velocity.

use super::model::{Branch, Course, Flow, Gradient, Pipe, laminar_bit, laminar_margin};

/// The branch: single phase, laminar or turbulent.
pub fn branch(flow: &Flow, pipe: &Pipe) -> Branch {
    let reynolds = pipe.reynolds(flow.liquid_density_lb_ft3, flow.liquid_velocity_ft_s, flow.liquid_viscosity_cp);
    Branch(Branch::SINGLE_PHASE | laminar_bit(reynolds))
}

/// The gradient of liquid alone.
#[inline]
pub fn gradient(flow: &Flow, pipe: &Pipe, branch: Branch) -> Gradient {
    let laminar = branch.has(Branch::LAMINAR);
    let reynolds = pipe.reynolds(flow.liquid_density_lb_ft3, flow.liquid_velocity_ft_s, flow.liquid_viscosity_cp);
    let moody = pipe.roughness.moody(reynolds, laminar);
    Gradient {
        gravity_psi_ft: pipe.gravity_psi_ft(flow.liquid_density_lb_ft3),
        friction_psi_ft: pipe.friction_psi_ft(moody, flow.liquid_density_lb_ft3, flow.liquid_velocity_ft_s),
        kinetic: 0.0,
        holdup: 1.0,
        course: Course::FREE,
        margin: laminar_margin(reynolds, laminar),
    }
}
