//! Drift flux of Shi et al. (2005), with the parameters that they fitted.
//!
//! In consistent units (sig' = tension in lbm/s2, th from vertical):
//!
//! ```text
//! alpha (C0 vm + Vd) = vSg,  HL = 1 - alpha
//! Vd   = (1 - alpha C0) C0 K Vc m(th)/[alpha C0 sqrt(rhog/rhoL) + 1 - alpha C0]
//! Vc   = [sig' g (rhoL - rhog)/rhoL^2]^1/4,  m(th) = m0 (cos th)^n1 (1 + sin th)^n2
//! K    = 1.53/C0 for alpha <= a1, Ku for alpha >= a2, straight between
//! C0   = A/[1 + (A - 1) gam^2],  gam = (beta - B)/(1 - B) within 0 and 1
//! beta = max(alpha, Fv alpha vm/vsgf),  vsgf = Ku sqrt(rhoL/rhog) Vc
//! ```
//!
//! Ku, the critical Kutateladze number, is a table in d sqrt[g (rhoL - rhog)/sig'], straight between its points. The
//! model uses the fitted set: A = 1 (so that C0 = 1, and B and Fv have no part), a1 = 0.06, a2 = 0.21, m0 = 1.85,
//! n1 = 0.21, n2 = 0.95; the earlier one ([`Parameters::EARLIER`]) is there for comparison. A and m0 belong together.
//!
//! # Method
//! alpha is implicit. With C0 = 1 and constant K it is the smaller root of a quadratic; between a1 and a2, where K
//! rises, a bracketed Newton iteration finds it. There is one root: alpha Vd rises up to a2 and is concave beyond it,
//! while vSg - alpha vm falls.
//!
//! The paper gives no friction: here `f rho_s vm^2/(2 gc d)`, Moody f at Re = 1488 rho_s vm d/mu_m with
//! mu_m = HL muL + (1 - HL) mug, and `Ek = rho_s vm vSg/(gc p)`.
//!
//! # Limitation
//! Fitted to water, kerosene and nitrogen in 6 in. pipe, from vertical to 88 degrees from it, at mixture velocities up
//! to about 12 ft/s; smaller pipe and annular flow are extrapolation. Exactly horizontal pipe has no slip (m = 0). The
//! gradient is continuous, with corners at a1, a2 and the points of the table of Ku. Parameters and table from memory.
//!
//! # Source
//! Shi, Holmes, Durlofsky, Aziz, Diaz, Alkaya and Oddie, SPE Journal 10 (March 2005) 24.

use super::ValidRange;
use super::model::{
    Branch, Course, DYN_CM_PER_LBM_S2, Flow, Gradient, Hydraulics, Pipe, Range, laminar_bit, laminar_margin,
};
use crate::units::constants::GRAVITY_FT_S2;

/// The model.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct DriftFlux;

/// A set of the paper's parameters.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Parameters {
    /// Distribution coefficient at low void fraction.
    pub a: f64,
    /// Void fraction at which the distribution coefficient begins to fall.
    pub b: f64,
    /// Weight of the velocity in that fall.
    pub fv: f64,
    /// Void fraction at which bubble rise ends.
    pub a1: f64,
    /// Void fraction at which the flooding curve begins.
    pub a2: f64,
    /// m of vertical pipe.
    pub m0: f64,
    /// Exponent of cos th, from vertical.
    pub n1: f64,
    /// Exponent of 1 + sin th.
    pub n2: f64,
}

impl Parameters {
    /// Fitted by Shi et al. to their experiments: those of the model.
    pub const FITTED: Self = Self { a: 1.0, b: 0.3, fv: 1.0, a1: 0.06, a2: 0.21, m0: 1.85, n1: 0.21, n2: 0.95 };
    /// In use before.
    pub const EARLIER: Self = Self { a: 1.2, b: 0.3, fv: 1.0, a1: 0.2, a2: 0.4, m0: 1.0, n1: 0.0, n2: 0.0 };

    /// m(th), from the sine and cosine of the angle from horizontal.
    pub fn inclination(&self, sin: f64, cos: f64) -> f64 {
        if sin > 0.0 { self.m0 * sin.powf(self.n1) * (1.0 + cos).powf(self.n2) } else { 0.0 }
    }
}

/// Dimensionless diameter and Ku.
const KU: [(f64, f64); 7] = [(2.0, 0.0), (4.0, 1.0), (10.0, 2.1), (14.0, 2.5), (20.0, 2.8), (28.0, 3.0), (50.0, 3.2)];
/// K of bubbles, Harmathy (1960).
const BUBBLE_K: f64 = 1.53;

/// a1 to a2 of the fitted set; its bits in the branch.
const RAMP: Range = Range { low: 0.06, high: 0.21, shift: 2 };
const KU_SHIFT: u32 = 4;

/// The stretch of the table of Ku: 0 below it, 7 above.
fn ku_stretch(diameter: f64) -> u32 {
    KU.iter().filter(|(at, _)| diameter >= *at).count() as u32
}

/// Ku and how far the diameter is inside its stretch, relatively.
#[inline]
fn ku_on(diameter: f64, stretch: u32) -> (f64, f64) {
    let i = stretch as usize;
    match (i.checked_sub(1).and_then(|i| KU.get(i)), KU.get(i)) {
        (Some((low, at_low)), Some((high, at_high))) => {
            let part = (diameter - low) / (high - low);
            (at_low + part * (at_high - at_low), (diameter / low - 1.0).min(1.0 - diameter / high))
        }
        (None, _) => (KU[0].1, 1.0 - diameter / KU[0].0),
        (_, None) => (KU[KU.len() - 1].1, diameter / KU[KU.len() - 1].0 - 1.0),
    }
}

/// The critical Kutateladze number of a dimensionless diameter.
pub fn kutateladze(diameter: f64) -> f64 {
    ku_on(diameter, ku_stretch(diameter)).0
}

/// What the void fraction is solved from.
#[derive(Clone, Copy)]
struct Terms {
    mixture: f64,
    gas: f64,
    /// Vc, ft/s.
    velocity: f64,
    /// sqrt(rhog/rhoL).
    root: f64,
    diameter: f64,
}

#[inline]
fn terms(flow: &Flow, pipe: &Pipe) -> Terms {
    let (liquid, gas) = (flow.liquid_density_lb_ft3, flow.gas_density_lb_ft3);
    let buoyancy = GRAVITY_FT_S2 * (liquid - gas).max(0.0);
    let tension = flow.tension_dyn_cm * (1.0 / DYN_CM_PER_LBM_S2);
    Terms {
        mixture: flow.mixture_velocity_ft_s(),
        gas: flow.gas_velocity_ft_s,
        velocity: (tension * buoyancy).sqrt().sqrt() / liquid.sqrt(),
        root: (gas / liquid).min(1.0).sqrt(),
        diameter: pipe.diameter_ft * (buoyancy / tension).sqrt(),
    }
}

/// The slip at a void fraction.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Void {
    /// Gas share of the pipe.
    pub fraction: f64,
    /// Distribution coefficient C0.
    pub distribution: f64,
    /// Drift velocity Vd, ft/s.
    pub drift_ft_s: f64,
    /// Critical Kutateladze number.
    pub kutateladze: f64,
}

/// The void fraction with any set of parameters, by bisection of the full equations.
pub fn void(flow: &Flow, pipe: &Pipe, set: &Parameters) -> Void {
    let terms = terms(flow, pipe);
    let kutateladze = kutateladze(terms.diameter);
    let inclination = set.inclination(pipe.sin_inclination, pipe.cos_inclination);
    let flooding = kutateladze * terms.velocity / terms.root.max(1e-9);
    let at = |fraction: f64| {
        let beta = fraction.max(set.fv * fraction * terms.mixture / flooding.max(1e-9));
        let gam = ((beta - set.b) / (1.0 - set.b)).clamp(0.0, 1.0);
        let distribution = set.a / (1.0 + (set.a - 1.0) * gam * gam);
        let part = ((fraction - set.a1) / (set.a2 - set.a1)).clamp(0.0, 1.0);
        let bubble = BUBBLE_K / distribution;
        let k = bubble + part * (kutateladze - bubble);
        let free = (1.0 - fraction * distribution).max(0.0);
        let weight = fraction * distribution * terms.root + free;
        let drift_ft_s = if free > 0.0 { free * distribution * k * terms.velocity * inclination / weight } else { 0.0 };
        Void { fraction, distribution, drift_ft_s, kutateladze }
    };
    let (mut low, mut high) = (0.0, 1.0);
    for _ in 0..60 {
        let middle = at(0.5 * (low + high));
        if middle.fraction * (middle.distribution * terms.mixture + middle.drift_ft_s) < terms.gas {
            low = middle.fraction;
        } else {
            high = middle.fraction;
        }
    }
    at(0.5 * (low + high))
}

/// vSg that a void fraction carries, less the true one, with the fitted set and a given K Vc m.
#[inline]
fn excess(terms: &Terms, fraction: f64, drift: f64) -> f64 {
    let free = 1.0 - fraction;
    fraction * (terms.mixture + drift * free / (fraction * terms.root + free).max(1e-12)) - terms.gas
}

/// The root at constant K Vc m: (1 - root) vm + V times alpha^2 less (vm + (1 - root) vSg + V) alpha plus vSg is zero.
#[inline]
fn at_constant_drift(terms: &Terms, drift: f64) -> f64 {
    let s = 1.0 - terms.root;
    let a = s * terms.mixture + drift;
    let b = terms.mixture + s * terms.gas + drift;
    let root = (b * b - 4.0 * a * terms.gas).max(0.0).sqrt();
    // No flow and no drift: the limit of little gas.
    if b + root > 0.0 { 2.0 * terms.gas / (b + root) } else { 0.0 }
}

/// The root where K rises with alpha.
#[inline]
fn on_ramp(terms: &Terms, bubble: f64, flooding: f64) -> f64 {
    let slope = (flooding - bubble) / (RAMP.high - RAMP.low);
    let drift = |fraction: f64| bubble + slope * (fraction - RAMP.low);
    let (mut low, mut high) = (0.0, 1.0);
    let mut x = 0.5 * (RAMP.low + RAMP.high);
    for _ in 0..60 {
        let f = excess(terms, x, drift(x));
        if f < 0.0 {
            low = x;
        } else {
            high = x;
        }
        let free = 1.0 - x;
        let weight = x * terms.root + free;
        // d/dx of x (1 - x)/(1 - (1 - root) x).
        let shape = x * free / weight;
        let shape_slope = ((1.0 - 2.0 * x) * weight + x * free * (1.0 - terms.root)) / (weight * weight);
        let derivative = terms.mixture + slope * shape + drift(x) * shape_slope;
        let newton = x - f / derivative;
        let next = if newton > low && newton < high { newton } else { 0.5 * (low + high) };
        if (next - x).abs() < 1e-14 {
            return next;
        }
        x = next;
    }
    x
}

/// Everything that depends on the branch.
struct State {
    fraction: f64,
    margin: f64,
}

#[inline]
fn state(flow: &Flow, pipe: &Pipe, branch: Branch) -> State {
    let terms = terms(flow, pipe);
    let (ku, ku_margin) = ku_on(terms.diameter, (branch.0 >> KU_SHIFT) & 7);
    let unit = terms.velocity * pipe.drift_flux_factor;
    let fraction = match (branch.0 >> RAMP.shift) & 3 {
        1 => at_constant_drift(&terms, BUBBLE_K * unit),
        2 => at_constant_drift(&terms, ku * unit),
        _ => on_ramp(&terms, BUBBLE_K * unit, ku * unit),
    };
    State { fraction, margin: RAMP.hold(fraction, branch).1.min(ku_margin) }
}

fn void_branch(flow: &Flow, pipe: &Pipe) -> Branch {
    let terms = terms(flow, pipe);
    let stretch = ku_stretch(terms.diameter);
    let unit = terms.velocity * pipe.drift_flux_factor;
    let ramp = if excess(&terms, RAMP.low, BUBBLE_K * unit) >= 0.0 {
        1
    } else if excess(&terms, RAMP.high, ku_on(terms.diameter, stretch).0 * unit) <= 0.0 {
        2
    } else {
        0
    };
    Branch((ramp << RAMP.shift) | (stretch << KU_SHIFT))
}

#[inline]
fn reynolds(flow: &Flow, pipe: &Pipe, holdup: f64, density_lb_ft3: f64) -> f64 {
    let viscosity_cp = flow.liquid_viscosity_cp * holdup + flow.gas_viscosity_cp * (1.0 - holdup);
    pipe.reynolds(density_lb_ft3, flow.mixture_velocity_ft_s(), viscosity_cp)
}

impl Hydraulics for DriftFlux {
    fn branch(&self, flow: &Flow, pipe: &Pipe) -> Branch {
        let branch = void_branch(flow, pipe);
        let holdup = 1.0 - state(flow, pipe, branch).fraction;
        let reynolds = reynolds(flow, pipe, holdup, flow.density_at_holdup_lb_ft3(holdup));
        Branch(branch.0 | laminar_bit(reynolds))
    }

    #[inline]
    fn gradient(&self, flow: &Flow, pipe: &Pipe, branch: Branch) -> Gradient {
        let state = state(flow, pipe, branch);
        let holdup = 1.0 - state.fraction;
        let density = flow.density_at_holdup_lb_ft3(holdup);
        let reynolds = reynolds(flow, pipe, holdup, density);
        let laminar = branch.has(Branch::LAMINAR);
        let moody = pipe.roughness.moody(reynolds, laminar);
        Gradient {
            gravity_psi_ft: pipe.gravity_psi_ft(density),
            friction_psi_ft: pipe.friction_psi_ft(moody, density, flow.mixture_velocity_ft_s()),
            kinetic: flow.kinetic(density),
            holdup,
            margin: laminar_margin(reynolds, laminar).min(state.margin),
            course: Course::FREE,
        }
    }

    fn range(&self) -> ValidRange {
        ValidRange { deviation_deg: 88.0, mixture_velocity_ft_s: 12.0, ..ValidRange::OPEN }
    }

    fn pattern(&self, flow: &Flow, pipe: &Pipe) -> &'static str {
        match (void_branch(flow, pipe).0 >> RAMP.shift) & 3 {
            1 => "bubbly",
            2 => "slug or above",
            _ => "between bubbly and slug",
        }
    }
}
