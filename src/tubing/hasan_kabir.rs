//! Drift flux with blended transitions, after Hasan and Kabir: the default model.
//!
//! In consistent units (sig' = tension in lbm/s2, th from horizontal):
//!
//! ```text
//! v_b   = 1.53 [g sig' (rhoL - rhog)/rhoL^2]^1/4                           small bubbles (Harmathy 1960)
//! v_T   = 0.35 sqrt[g d (rhoL - rhog)/rhoL] sqrt(sin th) (1 + cos th)^1.2  long bubbles
//! vgb   = (1.2 vSL + v_b)/(4 - 1.2) sin th                                 end of bubbly flow
//! vgc   = 3.1 [g sig' (rhoL - rhog)/rhog^2]^1/4                            droplets are carried
//! E1    = exp[-0.1 vgb/(vSg - vgb)] for vSg > vgb, else 0
//! E2    = exp[-0.1 vgc/(vSg - vgc)] w for vSg > vgc, else 0
//! C0    = 1.2 (1 - E2) + E2,   v = [v_b (1 - E1) + v_T E1] (1 - E2)
//! alpha = vSg/(C0 vm + v),     HL = 1 - alpha
//! dp/dL = [rho_s sin th + f rho_s vm^2/(2 gc d)]/(1 - Ek),  Ek = rho_s vm vSg/(gc p)
//! ```
//!
//! with the Moody factor at Re = 1488 rho_s vm d/mu_m, mu_m = x mug + (1 - x) muL, x the gas share of the mass.
//!
//! # Limitation
//! Upward flow, 0 to about 80 degrees from vertical. Two departures from the papers: churn flow (C0 = 1.15) is not
//! kept apart, and the droplet criterion acts only where the void fraction of slug flow agrees: w rises from 0 at
//! 0.6 to 1 at 0.8 (a cubic), since the criterion alone calls bubbly flow of dense gas annular.
//!
//! # Source
//! Hasan and Kabir, SPE Production Engineering (1988) 263 and 474 (mechanistic model, deviated wells); Hasan, Kabir
//! and Sayarpour, J. Pet. Sci. Eng. 71 (2010) 114 (blended void fraction). Constants from memory of the papers.

use super::ValidRange;
use super::model::{
    Branch, Course, DYN_CM_PER_LBM_S2, Flow, Gradient, Hydraulics, Pipe, Range, laminar_bit, laminar_margin,
};
use crate::elementary::exp;
use crate::units::constants::GRAVITY_FT_S2;

/// Distribution coefficient of bubbly and slug flow.
const C0: f64 = 1.2;

/// Branch bits: void fraction of slug flow between which the droplet criterion gains weight.
const WEIGHT: Range = Range { low: 0.6, high: 0.8, shift: 4 };

// The transitions are smooth, yet no power series holds at their onset: steps go by the distance from it. So many relative
// changes of pressure are allowed per relative distance above it, below it (where nothing happens yet), and at it.
const COURSE: f64 = 0.15;
const COURSE_BELOW: f64 = 0.5;
const COURSE_LEAVING: f64 = 5.0;
const LEAST_COURSE: f64 = 0.01;
/// Droplets begin more mildly: steps may be so much longer.
const DROPLETS_COURSE: f64 = 3.0;

/// The default model.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct HasanKabir;

/// Rise velocity of small bubbles, ft/s (Harmathy 1960).
#[inline]
pub fn small_bubble_ft_s(flow: &Flow) -> f64 {
    let liquid = flow.liquid_density_lb_ft3;
    1.53 * quarter_power(GRAVITY_FT_S2 * tension_lbm_s2(flow) * density_difference(flow) / (liquid * liquid))
}

/// Rise velocity of long bubbles, ft/s (Dumitrescu 1943, Davies and Taylor 1950; inclination after Hasan and Kabir).
#[inline]
pub fn long_bubble_ft_s(flow: &Flow, pipe: &Pipe) -> f64 {
    0.35 * (GRAVITY_FT_S2 * pipe.diameter_ft * density_difference(flow) / flow.liquid_density_lb_ft3).sqrt()
        * pipe.long_bubble_factor
}

/// Superficial gas velocity above which droplets are carried, ft/s (Taitel, Barnea and Dukler 1980).
#[inline]
pub fn droplet_ft_s(flow: &Flow) -> f64 {
    let gas = flow.gas_density_lb_ft3;
    3.1 * quarter_power(GRAVITY_FT_S2 * tension_lbm_s2(flow) * density_difference(flow) / (gas * gas))
}

#[inline]
fn tension_lbm_s2(flow: &Flow) -> f64 {
    flow.tension_dyn_cm * (1.0 / DYN_CM_PER_LBM_S2)
}

#[inline]
fn density_difference(flow: &Flow) -> f64 {
    (flow.liquid_density_lb_ft3 - flow.gas_density_lb_ft3).max(0.0)
}

#[inline]
fn quarter_power(x: f64) -> f64 {
    x.sqrt().sqrt()
}

/// Void fraction and the weights of the slug and annular regimes.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Void {
    /// Gas share of the pipe.
    pub fraction: f64,
    /// E1: 0 bubbly, towards 1 slug.
    pub slug: f64,
    /// E2: 0 bubbly or slug, towards 1 annular.
    pub annular: f64,
}

/// The void fraction.
pub fn void(flow: &Flow, pipe: &Pipe) -> Void {
    state(flow, pipe, void_branch(flow, pipe)).void
}

/// Everything that depends on the branch.
struct State {
    void: Void,
    margin: f64,
    course: Course,
    /// Void fraction of slug flow.
    in_slug: f64,
}

#[inline]
fn state(flow: &Flow, pipe: &Pipe, branch: Branch) -> State {
    let gas = flow.gas_velocity_ft_s;
    let mixture = flow.mixture_velocity_ft_s();
    let liquid = flow.liquid_density_lb_ft3;
    // The two rise velocities share what costs time.
    let per_liquid = 1.0 / liquid;
    let buoyancy = GRAVITY_FT_S2 * density_difference(flow) * per_liquid;
    let small = 1.53 * quarter_power(buoyancy * tension_lbm_s2(flow) * per_liquid);
    let bubbly_end = (C0 * flow.liquid_velocity_ft_s + small) * (1.0 / (4.0 - C0)) * pipe.sin_inclination.max(0.0);
    // In horizontal pipe bubbly flow ends at once.
    let above_bubbly = gas / bubbly_end.max(1e-9) - 1.0;
    let (mut slug, mut drift, mut course) = (0.0, small, course_of(above_bubbly, 1.0));
    if above_bubbly > 0.0 {
        slug = blend(above_bubbly);
        let long = 0.35 * (buoyancy * pipe.diameter_ft).sqrt() * pipe.long_bubble_factor;
        drift = small + (long - small) * slug;
    }
    let in_slug = gas / (C0 * mixture + drift);
    let (held, margin) = WEIGHT.hold(in_slug, branch);
    let mut void = Void { fraction: in_slug, slug, annular: 0.0 };
    if !WEIGHT.is_below(branch) {
        let droplet = DROPLETS_OVER_SMALL * small * (liquid / flow.gas_density_lb_ft3).sqrt();
        let above_droplets = gas / droplet - 1.0;
        course = course.min(course_of(above_droplets, DROPLETS_COURSE));
        if above_droplets > 0.0 {
            void.annular = smooth_step((held - WEIGHT.low) / (WEIGHT.high - WEIGHT.low)) * blend(above_droplets);
            void.fraction = gas / ((C0 - (C0 - 1.0) * void.annular) * mixture + drift * (1.0 - void.annular));
        }
    }
    // At rest gas/0 cannot occur, since small bubbles rise. Only a fluid without density difference leaves 0/0.
    if void.fraction.is_nan() {
        void.fraction = 0.0;
    }
    State { void, margin, course, in_slug }
}

/// Near the onset of a transition steps go by its distance. Below it nothing happens yet: only a step towards it, up the
/// well, must not overlook it.
#[inline]
fn course_of(above: f64, times: f64) -> Course {
    if above > 0.0 {
        Course::both(times * (LEAST_COURSE + COURSE * above))
    } else {
        Course {
            rise: times * (LEAST_COURSE - COURSE_LEAVING * above),
            fall: times * (LEAST_COURSE - COURSE_BELOW * above),
        }
    }
}

fn void_branch(flow: &Flow, pipe: &Pipe) -> Branch {
    Branch(WEIGHT.bits(state(flow, pipe, Branch(0)).in_slug))
}

/// Velocity of droplets over that of small bubbles, both being quarter powers of g sig' (rhoL - rhog), over sqrt(rhoL/rhog).
const DROPLETS_OVER_SMALL: f64 = 3.1 / 1.53;

/// exp(-0.1/x) of the relative distance above an onset: zero with all its derivatives at the onset, one far above.
#[inline]
fn blend(above: f64) -> f64 {
    if above > 0.0 { exp(-0.1 / above) } else { 0.0 }
}

/// Cubic step from 0 to 1.
#[inline]
fn smooth_step(x: f64) -> f64 {
    let x = x.clamp(0.0, 1.0);
    x * x * (3.0 - 2.0 * x)
}

/// Reynolds number of the mixture, its viscosity taken by mass.
#[inline]
fn reynolds(flow: &Flow, pipe: &Pipe, density_lb_ft3: f64) -> f64 {
    let gas = flow.gas_density_lb_ft3 * (1.0 - flow.no_slip_holdup);
    let liquid = flow.liquid_density_lb_ft3 * flow.no_slip_holdup;
    let viscosity_times_mass = flow.gas_viscosity_cp * gas + flow.liquid_viscosity_cp * liquid;
    pipe.reynolds(density_lb_ft3 * (gas + liquid), flow.mixture_velocity_ft_s(), viscosity_times_mass)
}

impl Hydraulics for HasanKabir {
    fn branch(&self, flow: &Flow, pipe: &Pipe) -> Branch {
        let branch = void_branch(flow, pipe);
        let density = flow.density_at_holdup_lb_ft3(1.0 - state(flow, pipe, branch).void.fraction);
        Branch(branch.0 | laminar_bit(reynolds(flow, pipe, density)))
    }

    #[inline]
    fn gradient(&self, flow: &Flow, pipe: &Pipe, branch: Branch) -> Gradient {
        let state = state(flow, pipe, branch);
        let holdup = 1.0 - state.void.fraction;
        let density = flow.density_at_holdup_lb_ft3(holdup);
        let velocity = flow.mixture_velocity_ft_s();
        let reynolds = reynolds(flow, pipe, density);
        let laminar = branch.has(Branch::LAMINAR);
        let moody = pipe.roughness.moody(reynolds, laminar);
        Gradient {
            gravity_psi_ft: pipe.gravity_psi_ft(density),
            friction_psi_ft: pipe.friction_psi_ft(moody, density, velocity),
            kinetic: flow.kinetic(density),
            holdup,
            margin: laminar_margin(reynolds, laminar).min(state.margin),
            course: state.course,
        }
    }

    fn range(&self) -> ValidRange {
        ValidRange { deviation_deg: 80.0, ..ValidRange::OPEN }
    }

    fn pattern(&self, flow: &Flow, pipe: &Pipe) -> &'static str {
        let void = void(flow, pipe);
        if void.annular > 0.5 {
            "annular"
        } else if void.slug > 0.5 {
            "slug"
        } else {
            "bubbly"
        }
    }
}
