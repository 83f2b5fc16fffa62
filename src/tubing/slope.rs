//! The right-hand side of the march: the flow at a point, its branch and its gradient.

use super::liquid;
use super::march::March;
use super::model::{Branch, Course, Flow, Gradient, Hydraulics, KINETIC_LIMIT};
use super::path::Stretch;
use crate::fluid::baker_swerdloff::FLOOR_DYN_CM;
use crate::units::constants::FT3_PER_BBL;

/// Kinetic term above which steps go by the distance from 1: so large a relative change of pressure per (1 - Ek)/Ek.
const FAST: f64 = 0.4;
const FAST_COURSE: f64 = 0.3;
/// The kinetic term of a trial that runs beyond the limit.
const KINETIC_BEYOND: f64 = 0.95;
/// No fluid property is asked for below this pressure, psia.
const PROPERTY_FLOOR_PSIA: f64 = 0.5;

/// The flow at one point.
pub(super) struct Local {
    pub flow: Flow,
    /// How far the pressure is above (positive) or below the bubble point, relatively.
    above: f64,
    /// How far the tension of oil is above its floor, relatively.
    above_floor: f64,
}

/// The right-hand side at one point.
#[derive(Clone, Copy)]
pub(super) struct Slope {
    pub psi_ft: f64,
    pub margin: f64,
    pub kinetic: f64,
    pub course: Course,
}

impl<M: Hydraulics> March<'_, M> {
    /// The flow at a point. The tension of oil is free or at its floor as the branch says; without one, as it comes.
    #[inline]
    pub(super) fn local(&self, stretch: &Stretch, md_ft: f64, pressure_psia: f64, branch: Option<Branch>) -> Local {
        let pressure_psia = pressure_psia.max(PROPERTY_FLOOR_PSIA);
        let temperature_degf = stretch.temperature_degf(md_ft);
        let (fluid, corners) = self.fluid.in_situ_and_corners(pressure_psia, temperature_degf);
        // Volumes in ft3 per STB of liquid.
        let oil = FT3_PER_BBL * self.oil_fraction * fluid.bo_rb_stb;
        let water = FT3_PER_BBL * self.water_fraction * fluid.bw_rb_stb;
        let gas = self.oil_fraction * (self.gor_scf_stb - fluid.rs_scf_stb).max(0.0) * fluid.bg_ft3_scf;
        let liquid = oil + water;
        let oil_share = if self.water_fraction == 0.0 { 1.0 } else { oil / liquid };
        let water_share = 1.0 - oil_share;
        let velocity = self.rate_stb_s * stretch.per_area_1_ft2;
        // Below the bubble point the gas still dissolved tells as much, and costs nothing.
        let above = if self.oil_fraction == 0.0 {
            1.0
        } else if fluid.rs_scf_stb < self.gor_scf_stb {
            fluid.rs_scf_stb * self.per_gor_stb_scf - 1.0
        } else {
            (pressure_psia / corners.bubble_point_psia.max(1e-3) - 1.0).clamp(0.0, 1.0)
        };
        let above_floor =
            if self.oil_fraction == 0.0 { f64::INFINITY } else { corners.free_tension_dyn_cm / FLOOR_DYN_CM - 1.0 };
        let floor = branch.map_or(above_floor <= 0.0, |branch| branch.has(Branch::TENSION_FLOOR));
        // A stage beyond the border stays finite.
        let oil_tension = if floor { FLOOR_DYN_CM } else { corners.free_tension_dyn_cm.max(0.1 * FLOOR_DYN_CM) };
        let flow = Flow {
            liquid_velocity_ft_s: velocity * liquid,
            gas_velocity_ft_s: velocity * gas,
            no_slip_holdup: liquid / (liquid + gas),
            liquid_density_lb_ft3: oil_share * fluid.oil_density_lb_ft3 + water_share * fluid.water_density_lb_ft3,
            gas_density_lb_ft3: fluid.gas_density_lb_ft3,
            liquid_viscosity_cp: oil_share * fluid.mu_o_cp + water_share * fluid.mu_w_cp,
            gas_viscosity_cp: fluid.mu_g_cp,
            tension_dyn_cm: oil_share * oil_tension + water_share * fluid.sigma_water_gas_dyn_cm,
            pressure_psia,
        };
        Local { flow, above, above_floor }
    }

    /// The flow as it comes.
    pub(super) fn flow(&self, stretch: &Stretch, md_ft: f64, pressure_psia: f64) -> Flow {
        self.local(stretch, md_ft, pressure_psia, None).flow
    }

    fn choose(&self, local: &Local, stretch: &Stretch) -> Branch {
        let flow = &local.flow;
        if local.above >= 0.0 {
            return liquid::branch(flow, &stretch.pipe);
        }
        let mut branch = self.model.branch(flow, &stretch.pipe);
        if self.slip_factor > 1.0 {
            let holdup = self.model.gradient(flow, &stretch.pipe, branch).holdup;
            branch.0 |= if self.free_holdup(flow, holdup) > 1.0 { Branch::SLIP_CEILING } else { 0 };
        }
        let near_sonic = self.on_model(flow, stretch, branch).kinetic > KINETIC_LIMIT;
        let floor = if local.above_floor <= 0.0 { Branch::TENSION_FLOOR } else { 0 };
        Branch(branch.0 | floor | if near_sonic { Branch::NEAR_SONIC } else { 0 })
    }

    pub(super) fn branch(&self, stretch: &Stretch, md_ft: f64, pressure_psia: f64) -> Branch {
        self.choose(&self.local(stretch, md_ft, pressure_psia, None), stretch)
    }

    #[inline]
    fn gradient(&self, local: &Local, stretch: &Stretch, branch: Branch) -> Gradient {
        let (mut gradient, phase_margin) = if branch.has(Branch::SINGLE_PHASE) {
            (liquid::gradient(&local.flow, &stretch.pipe, branch), local.above)
        } else {
            let floor = if branch.has(Branch::TENSION_FLOOR) { -local.above_floor } else { local.above_floor };
            (self.on_model(&local.flow, stretch, branch), floor.min(-local.above))
        };
        gradient.margin = gradient.margin.min(phase_margin);
        gradient
    }

    /// Holdup with the slip factor, before it is held at 1.
    #[inline]
    fn free_holdup(&self, flow: &Flow, holdup: f64) -> f64 {
        let slip = holdup - flow.no_slip_holdup;
        // Only Ansari's slugs, whose film does not weigh, can be lighter than no slip: left so.
        flow.no_slip_holdup + if slip > 0.0 { self.slip_factor * slip } else { slip }
    }

    /// The model's gradient, its weight and kinetic term brought to the holdup of the slip factor. Friction stays as
    /// the model has it: the roughness is there to tune it.
    #[inline]
    fn on_model(&self, flow: &Flow, stretch: &Stretch, branch: Branch) -> Gradient {
        let mut gradient = self.model.gradient(flow, &stretch.pipe, branch);
        if self.slip_factor != 1.0 {
            let free = self.free_holdup(flow, gradient.holdup);
            let (holdup, margin) =
                if branch.has(Branch::SLIP_CEILING) { (1.0, free - 1.0) } else { (free, 1.0 - free) };
            let difference = flow.liquid_density_lb_ft3 - flow.gas_density_lb_ft3;
            let heavier_lb_ft3 = difference * (holdup - gradient.holdup);
            gradient.gravity_psi_ft += stretch.pipe.gravity_psi_ft(heavier_lb_ft3);
            gradient.kinetic += flow.kinetic(heavier_lb_ft3);
            gradient.holdup = holdup;
            if self.slip_factor > 1.0 {
                gradient.margin = gradient.margin.min(margin);
            }
        }
        gradient
    }

    /// The branch at a point and the slope on it.
    pub(super) fn begin(&self, stretch: &Stretch, md_ft: f64, pressure_psia: f64) -> (Branch, Slope) {
        let local = self.local(stretch, md_ft, pressure_psia, None);
        let branch = self.choose(&local, stretch);
        (branch, self.slope_of(&local, stretch, branch))
    }

    #[inline]
    pub(super) fn slope(&self, stretch: &Stretch, md_ft: f64, pressure_psia: f64, branch: Branch) -> Slope {
        self.slope_of(&self.local(stretch, md_ft, pressure_psia, Some(branch)), stretch, branch)
    }

    #[inline]
    fn slope_of(&self, local: &Local, stretch: &Stretch, branch: Branch) -> Slope {
        let gradient = self.gradient(local, stretch, branch);
        // Where the kinetic term is held begins and ends like any other branch; a stage just beyond stays finite.
        let (held, kinetic_margin) = if branch.has(Branch::NEAR_SONIC) {
            (KINETIC_LIMIT, gradient.kinetic - KINETIC_LIMIT)
        } else {
            (gradient.kinetic.min(KINETIC_BEYOND), KINETIC_LIMIT - gradient.kinetic)
        };
        // Towards sonic velocity the gradient rises as 1/(1 - Ek), and Ek with the square of 1/p.
        let course = if gradient.kinetic > FAST && !branch.has(Branch::NEAR_SONIC) {
            gradient.course.min(Course::both(FAST_COURSE * (1.0 - held) / held))
        } else {
            gradient.course
        };
        Slope {
            psi_ft: (gradient.gravity_psi_ft + gradient.friction_psi_ft) / (1.0 - held),
            margin: gradient.margin.min(kinetic_margin),
            kinetic: gradient.kinetic,
            course,
        }
    }

    /// Flow, gradient and name of the pattern at a point.
    pub fn describe(&self, stretch: &Stretch, md_ft: f64, pressure_psia: f64) -> (Flow, Gradient, &'static str) {
        let local = self.local(stretch, md_ft, pressure_psia, None);
        let branch = self.choose(&local, stretch);
        let pattern = if local.above >= 0.0 { "liquid" } else { self.model.pattern(&local.flow, &stretch.pipe) };
        (local.flow, self.gradient(&local, stretch, branch), pattern)
    }
}
