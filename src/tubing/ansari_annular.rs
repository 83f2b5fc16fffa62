//! Annular flow of Ansari et al.: a core of gas and droplets in a liquid film.
//!
//! ```text
//! vcrit = 1e4 (vSg mug/sig')(rhog/rhoL)^1/2,  FE = 1 - exp[-0.125 (vcrit - 1.5)], not below 0
//! lamLC = FE vSL/(vSg + FE vSL),  vSC = vSg + FE vSL;  rho_c and mu_c by lamLC
//! Z     = 1 + 300 dl for FE > 0.9, else 1 + 24 (rhoL/rhog)^1/3 dl        dl: film thickness over d
//! SC    = fSC rho_c vSC^2/(2 d)                                          core alone in the pipe
//! XM^2  = (1 - FE)^2 (fF/fSL) SL/SC,  YM = g (rhoL - rho_c) sin th/SC
//! YM - Z/[x (1 - x)^2.5] + XM^2/x^3 = 0,  x = 4 dl (1 - dl)              film and core share one pressure gradient
//! dp/dL = Z SC/(1 - 2 dl)^5 + rho_c g sin th,  HL = x + lamLC (1 - x)
//! ```
//!
//! Gravity is shown as that of the whole mixture, rho_s, and the rest of dp/dL as friction: that at the wall.
//!
//! fF at the Reynolds number of the film, 1488 rhoL vSL (1 - FE) d/muL, which does not depend on its thickness. The
//! smallest root x is the film. Slug flow where HL > 0.12 (bridging) or where the film is unstable (Barnea 1987):
//! YM > XM^2 (2 - 1.5 x)/[x^3 (1 - 1.5 x)].

use super::model::{Branch, Course, DYN_CM_PER_LBM_S2, Flow, Gradient, IN2_PER_FT2, Pipe, laminar_bit, laminar_margin};

/// lbm/(ft s) in a cp.
const LBM_FT_S_PER_CP: f64 = 6.719_69e-4;
/// Holdup above which the film bridges the pipe.
const BRIDGING: f64 = 0.12;
/// vcrit below which no liquid is entrained, and above which FE exceeds 0.9.
const ENTRAINMENT_BEGINS: f64 = 1.5;
const THIN_FILM: f64 = ENTRAINMENT_BEGINS + 8.0 * std::f64::consts::LN_10;
/// Film thickest in the search, as its share of the cross-section.
const THICKEST: f64 = 0.5;

// Branch bits beside the pattern; that of laminar flow is the core's.
const NO_ENTRAINMENT: u32 = 16;
const THIN: u32 = 32;
const LAMINAR_FILM: u32 = 64;

/// Relative distance of the gas velocity above that which carries droplets (Taitel, Barnea and Dukler 1980).
#[inline]
pub(super) fn droplet_margin(flow: &Flow) -> f64 {
    flow.gas_velocity_ft_s / super::hasan_kabir::droplet_ft_s(flow).max(1e-12) - 1.0
}

#[inline]
fn critical_velocity(flow: &Flow) -> f64 {
    let (liquid, gas) = (flow.liquid_density_lb_ft3, flow.gas_density_lb_ft3);
    let tension = flow.tension_dyn_cm * (1.0 / DYN_CM_PER_LBM_S2);
    1e4 * flow.gas_velocity_ft_s * flow.gas_viscosity_cp * LBM_FT_S_PER_CP / tension * (gas / liquid).sqrt()
}

/// Film and core.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Film {
    /// Share of the liquid that flows as droplets, FE.
    pub entrained: f64,
    /// Share of the cross-section that the film takes, x.
    pub share: f64,
    /// Liquid share of the core.
    pub core_holdup: f64,
    /// Density of the core, lb/ft3.
    pub core_density_lb_ft3: f64,
    /// Friction of the core alone, psi/ft.
    pub core_friction_psi_ft: f64,
    /// Z.
    pub interface: f64,
    /// Modified Lockhart-Martinelli parameter XM^2.
    pub x_squared: f64,
    /// Modified parameter YM.
    pub y: f64,
    /// How far the flow is inside its branch of this pattern.
    pub(super) branch_margin: f64,
    /// Whether a film was found.
    found: bool,
}

/// The branch bits of a flow that is annular.
pub fn bits(flow: &Flow, pipe: &Pipe) -> u32 {
    let velocity = critical_velocity(flow);
    let entrainment = if velocity < ENTRAINMENT_BEGINS {
        NO_ENTRAINMENT
    } else if velocity > THIN_FILM {
        THIN
    } else {
        0
    };
    let entrained = entrained(velocity, entrainment);
    let film = if film_reynolds(flow, pipe, entrained) < super::friction::LAMINAR_REYNOLDS { LAMINAR_FILM } else { 0 };
    entrainment | film | laminar_bit(Core::new(flow, pipe, entrained).reynolds)
}

#[inline]
fn entrained(velocity: f64, bits: u32) -> f64 {
    if bits & NO_ENTRAINMENT != 0 { 0.0 } else { 1.0 - (-0.125 * (velocity - ENTRAINMENT_BEGINS)).exp() }
}

#[inline]
fn film_reynolds(flow: &Flow, pipe: &Pipe, entrained: f64) -> f64 {
    let velocity = flow.liquid_velocity_ft_s * (1.0 - entrained);
    pipe.reynolds(flow.liquid_density_lb_ft3, velocity, flow.liquid_viscosity_cp)
}

struct Core {
    holdup: f64,
    density: f64,
    velocity: f64,
    reynolds: f64,
}

impl Core {
    #[inline]
    fn new(flow: &Flow, pipe: &Pipe, entrained: f64) -> Self {
        let droplets = entrained.max(0.0) * flow.liquid_velocity_ft_s;
        let velocity = flow.gas_velocity_ft_s + droplets;
        let holdup = droplets / velocity.max(1e-12);
        let density = flow.density_at_holdup_lb_ft3(holdup);
        let viscosity_cp = flow.liquid_viscosity_cp * holdup + flow.gas_viscosity_cp * (1.0 - holdup);
        Self { holdup, density, velocity, reynolds: pipe.reynolds(density, velocity, viscosity_cp) }
    }
}

/// The smallest root x of the combined balance with Z = 1 + `roughening` dl, by Newton's method in 1/x from a larger value,
/// whence it comes down without overshoot. False where the film finds no balance: x is then about the thickest possible.
#[inline]
fn film_share(x_squared: f64, y: f64, roughening: f64) -> (f64, bool) {
    if x_squared < 1e-24 {
        return (0.0, true);
    }
    let interface = |x: f64| {
        let root = (1.0 - x).sqrt();
        let rest = (1.0 - x) * (1.0 - x) * root;
        let z = 1.0 + roughening * 0.5 * (1.0 - root);
        // Z/(1 - x)^2.5 and its derivative.
        let derivative = 0.25 * roughening / (root * rest) + 2.5 * z / (rest * (1.0 - x));
        (z / rest, derivative)
    };
    // Below the root: the interface term rises with x, and YM x^3 is not negative.
    let first = x_squared.sqrt().min(THICKEST);
    let mut x = (x_squared / interface(first).0).sqrt().min(THICKEST);
    for _ in 0..50 {
        let u = 1.0 / x;
        let (z, slope) = interface(x);
        let excess = (x_squared * u * u - z) * u + y;
        let derivative = 3.0 * x_squared * u * u - z + slope * x;
        let next = u - excess / derivative;
        if derivative <= 0.0 || next * THICKEST < 1.0 {
            return (x, false);
        }
        let next = 1.0 / next;
        if (next - x).abs() <= 1e-13 * x {
            return (next, true);
        }
        x = next;
    }
    (x, true)
}

impl Film {
    /// The film of a flow on a branch.
    #[inline]
    pub fn new(flow: &Flow, pipe: &Pipe, bits: u32) -> Self {
        let velocity = critical_velocity(flow);
        let entrained = entrained(velocity, bits);
        let core = Core::new(flow, pipe, entrained);
        let laminar = bits & Branch::LAMINAR != 0;
        let core_moody = pipe.roughness.moody(core.reynolds, laminar);
        let core_friction_psi_ft = pipe.friction_psi_ft(core_moody, core.density, core.velocity);
        let in_film = flow.liquid_velocity_ft_s * (1.0 - entrained);
        let film_reynolds = film_reynolds(flow, pipe, entrained);
        let laminar_film = bits & LAMINAR_FILM != 0;
        let film_moody = pipe.roughness.moody(film_reynolds, laminar_film);
        let per_core = 1.0 / core_friction_psi_ft.max(1e-12);
        let x_squared = pipe.friction_psi_ft(film_moody, flow.liquid_density_lb_ft3, in_film) * per_core;
        let buoyancy = (flow.liquid_density_lb_ft3 - core.density).max(0.0) * pipe.sin_inclination.max(0.0);
        let y = buoyancy * per_core / IN2_PER_FT2;
        let roughening = if bits & THIN != 0 {
            300.0
        } else {
            24.0 * (flow.liquid_density_lb_ft3 / flow.gas_density_lb_ft3.max(1e-6)).cbrt()
        };
        let (share, found) = film_share(x_squared, y, roughening);
        let entrainment = if bits & NO_ENTRAINMENT != 0 {
            1.0 - velocity / ENTRAINMENT_BEGINS
        } else if bits & THIN != 0 {
            velocity / THIN_FILM - 1.0
        } else {
            (velocity / ENTRAINMENT_BEGINS - 1.0).min(1.0 - velocity / THIN_FILM)
        };
        Self {
            entrained,
            share,
            core_holdup: core.holdup,
            core_density_lb_ft3: core.density,
            core_friction_psi_ft,
            interface: 1.0 + roughening * 0.5 * (1.0 - (1.0 - share).sqrt()),
            x_squared,
            y,
            branch_margin: entrainment
                .min(laminar_margin(core.reynolds, laminar))
                .min(laminar_margin(film_reynolds, laminar_film)),
            found,
        }
    }

    /// Film thickness over the diameter.
    pub fn thickness(&self) -> f64 {
        0.5 * (1.0 - (1.0 - self.share).sqrt())
    }

    /// Liquid holdup of film and droplets.
    #[inline]
    pub fn holdup(&self) -> f64 {
        self.share + self.core_holdup * (1.0 - self.share)
    }

    /// How far the film is from bridging the pipe and from falling back.
    #[inline]
    pub(super) fn margin(&self) -> f64 {
        if !self.found {
            return -1.0;
        }
        let x = self.share;
        let bridging = 1.0 - self.holdup() / BRIDGING;
        let limit = self.x_squared * (2.0 - 1.5 * x);
        let falling = if limit > 0.0 { 1.0 - self.y * x * x * x * (1.0 - 1.5 * x) / limit } else { 1.0 };
        bridging.min(falling)
    }

    /// Pressure gradient as the core feels it and as the film does, psi/ft: equal where the film balances.
    pub fn balances_psi_ft(&self, flow: &Flow, pipe: &Pipe) -> (f64, f64) {
        let (x, rest) = (self.share, 1.0 - self.share);
        let core = self.interface * self.core_friction_psi_ft / (rest * rest * rest.sqrt());
        let wall = self.x_squared * self.core_friction_psi_ft / (x * x * x);
        let interface = core * rest / x;
        let weight = pipe.gravity_psi_ft(flow.liquid_density_lb_ft3);
        (core + pipe.gravity_psi_ft(self.core_density_lb_ft3), wall - interface + weight)
    }

    /// The gradient; its margin is that of the branch within this pattern.
    #[inline]
    pub(super) fn gradient(&self, flow: &Flow, pipe: &Pipe) -> Gradient {
        let rest = 1.0 - self.share;
        let holdup = self.holdup();
        let density = flow.density_at_holdup_lb_ft3(holdup);
        // The balance of the core gives the total; what the whole mixture does not weigh is friction at the wall.
        let interface = self.interface * self.core_friction_psi_ft / (rest * rest * rest.sqrt());
        let gravity_psi_ft = pipe.gravity_psi_ft(density);
        Gradient {
            gravity_psi_ft,
            friction_psi_ft: (interface + pipe.gravity_psi_ft(self.core_density_lb_ft3) - gravity_psi_ft).max(0.0),
            kinetic: flow.kinetic(density),
            holdup,
            margin: self.branch_margin,
            course: Course::FREE,
        }
    }
}
