//! Ansari et al.: a mechanistic model of bubble, dispersed bubble, slug and annular flow.
//!
//! The pattern is chosen in this order (consistent units; vs = 1.53 [g sig' (rhoL - rhog)/rhoL^2]^1/4, Harmathy):
//!
//! ```text
//! annular    vSg > 3.1 [sig' g (rhoL - rhog)/rhog^2]^1/4, the film does not bridge the pipe and is stable (see the
//!            annular part)
//! dispersed  2 [0.4 sig'/((rhoL - rhog) g)]^1/2 (rhoL/sig')^0.6 [f/(2 d)]^0.4 vm^1.2 > 0.725 + 4.15 (vSg/vm)^1/2, vSg < 3.17 vSL
//! bubble     d > 19.01 [(rhoL - rhog) sig'/(rhoL^2 g)]^1/2, vSg < 0.25 vs + 0.333 vSL
//! slug       the rest
//! ```
//!
//! Bubble flow: `vs HL^1/2 = vSg/(1 - HL) - 1.2 vm`, dispersed bubble flow: HL = lam; friction f rho_s vm^2/(2 gc d) at
//! Re = 1488 rho_s vm d/mu_s, mu_s = HL muL + (1 - HL) mug. Slug flow and annular flow are in files of their own.
//! Ek = rho_s vm vSg/(gc p).
//!
//! # Limitation
//! Vertical flow; the data bank of its evaluation holds pipes of 1 to 8 in. Departures: slug flow is always fully
//! developed (the branch for short Taylor bubbles is left out, as the least reproducible part); the paper's
//! acceleration terms are replaced by Ek; the turbulent friction factor, at Re 2,100 or more, serves the dispersed
//! bubble criterion; in deviated pipe gravity acts by its component along the pipe and long bubbles rise as in the
//! default model. The gradient jumps between patterns, by up to some 0.1 psi/ft. Coefficients from memory.
//! Stated range: 1 to 8 in., within 15 degrees of vertical.
//!
//! # Source
//! Ansari, Sylvester, Sarica, Shoham and Brill, SPE Production and Facilities (May 1994) 143.

use super::ValidRange;
use super::ansari_annular::{self as annular, Film};
use super::ansari_slug as slug;
use super::hasan_kabir::small_bubble_ft_s;
use super::model::{Branch, Course, DYN_CM_PER_LBM_S2, Flow, Gradient, Hydraulics, Pipe, laminar_bit, laminar_margin};
use super::no_slip;
use crate::units::constants::GRAVITY_FT_S2;

/// The model.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Ansari;

/// The flow patterns.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Pattern {
    /// Taylor bubbles and liquid slugs.
    Slug,
    /// Small bubbles that rise through the liquid.
    Bubble,
    /// Small bubbles that turbulence keeps apart.
    DispersedBubble,
    /// A gas core with droplets in a liquid film.
    Annular,
}

const PATTERN_SHIFT: u32 = 2;
/// Branch bit of slug flow whose turbulence would disperse the bubbles, were they not so many. The patch of dispersed flow
/// between the two borders may be short: so each is located, though one of them changes nothing.
const TURBULENT: u32 = 128;
/// Branch bit of other patterns where droplets would be carried, so that the film alone decides against annular flow. The
/// film jumps where it turns laminar and where FE passes 0.9, and annular flow may come back there for a few feet: so
/// its branch is held too.
const CARRIED: u32 = 256;
const FILM_SHIFT: u32 = 9;

/// Beyond this relative distance from a border its margin is not worked out: it is held there.
const FAR: f64 = 0.2;

#[inline]
fn pattern_of(branch: Branch) -> Pattern {
    match (branch.0 >> PATTERN_SHIFT) & 3 {
        0 => Pattern::Slug,
        1 => Pattern::Bubble,
        2 => Pattern::DispersedBubble,
        _ => Pattern::Annular,
    }
}

/// Surface tension, lbm/s2.
#[inline]
fn tension(flow: &Flow) -> f64 {
    flow.tension_dyn_cm * (1.0 / DYN_CM_PER_LBM_S2)
}

/// Density difference, lb/ft3, above zero.
#[inline]
fn difference(flow: &Flow) -> f64 {
    (flow.liquid_density_lb_ft3 - flow.gas_density_lb_ft3).max(1e-6)
}

/// How far the flow is inside bubble flow.
#[inline]
fn bubble_margin(flow: &Flow, pipe: &Pipe, rise_ft_s: f64) -> f64 {
    let border = 0.25 * rise_ft_s + 0.333 * flow.liquid_velocity_ft_s;
    let density = flow.liquid_density_lb_ft3;
    let least_ft = 19.01 * (difference(flow) * tension(flow) / GRAVITY_FT_S2).sqrt() / density;
    (1.0 - flow.gas_velocity_ft_s / border.max(1e-12)).min(pipe.diameter_ft / least_ft - 1.0).clamp(-FAR, FAR)
}

/// How far the flow is beyond the two borders of dispersed bubble flow: turbulence that breaks bubbles up, and bubbles
/// that are not yet packed.
#[inline]
fn dispersion(flow: &Flow, pipe: &Pipe) -> (f64, f64) {
    let packed = 1.0 - flow.gas_velocity_ft_s / (3.17 * flow.liquid_velocity_ft_s).max(1e-12);
    let mixture = flow.mixture_velocity_ft_s().max(1e-12);
    let reynolds = no_slip::reynolds(flow, pipe, flow.no_slip_density_lb_ft3());
    let moody = pipe.roughness.turbulent(reynolds.max(super::friction::LAMINAR_REYNOLDS));
    let tension = tension(flow);
    // The powers 0.6, 0.4 and 1.2 as one fifth root.
    let ratio = flow.liquid_density_lb_ft3 / tension;
    let shear = moody / (2.0 * pipe.diameter_ft) * mixture * mixture * mixture;
    let powers = (ratio * ratio * ratio * shear * shear).powf(0.2);
    let breaking = 2.0 * (0.4 * tension / (difference(flow) * GRAVITY_FT_S2)).sqrt() * powers;
    let joining = 0.725 + 4.15 * (flow.gas_velocity_ft_s / mixture).sqrt();
    ((breaking / joining - 1.0).clamp(-FAR, FAR), packed.clamp(-FAR, FAR))
}

fn is_annular(flow: &Flow, pipe: &Pipe) -> bool {
    annular::droplet_margin(flow) > 0.0 && Film::new(flow, pipe, annular::bits(flow, pipe)).margin() > 0.0
}

/// How far the flow is inside a pattern.
#[inline]
fn margin(flow: &Flow, pipe: &Pipe, branch: Branch, film: Option<&Film>) -> f64 {
    let pattern = pattern_of(branch);
    let carried = annular::droplet_margin(flow);
    if let Some(film) = film {
        return carried.min(film.margin()).clamp(-FAR, FAR);
    }
    let not_annular = if branch.has(CARRIED) {
        let film = Film::new(flow, pipe, branch.0 >> FILM_SHIFT);
        carried.min(-film.margin()).min(film.branch_margin)
    } else {
        -carried
    };
    let (turbulent, packed) = dispersion(flow, pipe);
    if pattern == Pattern::DispersedBubble {
        return turbulent.min(packed).min(not_annular);
    }
    let bubble = bubble_margin(flow, pipe, small_bubble_ft_s(flow));
    if pattern == Pattern::Bubble {
        return bubble.min(-turbulent.min(packed)).min(not_annular);
    }
    let dispersed = if branch.has(TURBULENT) { turbulent.min(-packed) } else { -turbulent };
    dispersed.min(-bubble).min(not_annular)
}

/// The bits of the film that a flow outside annular flow would have.
fn film_bits(flow: &Flow, pipe: &Pipe) -> u32 {
    if annular::droplet_margin(flow) > 0.0 { CARRIED | annular::bits(flow, pipe) << FILM_SHIFT } else { 0 }
}

/// The flow pattern, and whether turbulence would disperse bubbles.
fn choose(flow: &Flow, pipe: &Pipe) -> (Pattern, bool) {
    if is_annular(flow, pipe) {
        return (Pattern::Annular, false);
    }
    let (turbulent, packed) = dispersion(flow, pipe);
    if turbulent.min(packed) > 0.0 {
        (Pattern::DispersedBubble, true)
    } else if bubble_margin(flow, pipe, small_bubble_ft_s(flow)) > 0.0 {
        (Pattern::Bubble, turbulent > 0.0)
    } else {
        (Pattern::Slug, turbulent > 0.0)
    }
}

/// The flow pattern.
pub fn pattern(flow: &Flow, pipe: &Pipe) -> Pattern {
    choose(flow, pipe).0
}

/// Holdup of bubble flow: the void fraction is the one root of `alpha (1.2 vm + vs sqrt(1 - alpha)) = vSg`, whose left
/// side is concave.
#[inline]
pub fn bubble_holdup(flow: &Flow) -> f64 {
    let (gas, rise) = (flow.gas_velocity_ft_s, small_bubble_ft_s(flow));
    let carried = 1.2 * flow.mixture_velocity_ft_s();
    if gas <= 0.0 {
        return 1.0;
    }
    let (mut low, mut high) = (0.0, 1.0);
    // Too small a void fraction, from which Newton's steps stay below the root of a concave function.
    let mut void = gas / (carried + rise).max(gas);
    for _ in 0..60 {
        let root = (1.0 - void).sqrt();
        let excess = void * (carried + rise * root) - gas;
        if excess < 0.0 {
            low = void;
        } else {
            high = void;
        }
        let slope = carried + rise * (root - 0.5 * void / root.max(1e-9));
        let newton = void - excess / slope;
        let next = if newton >= low && newton <= high { newton } else { 0.5 * (low + high) };
        if (next - void).abs() < 1e-14 {
            return 1.0 - next;
        }
        void = next;
    }
    1.0 - void
}

/// Gradient of a mixture of small bubbles at a holdup.
#[inline]
fn bubbly(flow: &Flow, pipe: &Pipe, holdup: f64, laminar: bool) -> (Gradient, f64) {
    let density = flow.density_at_holdup_lb_ft3(holdup);
    let viscosity_cp = flow.liquid_viscosity_cp * holdup + flow.gas_viscosity_cp * (1.0 - holdup);
    let velocity = flow.mixture_velocity_ft_s();
    let reynolds = pipe.reynolds(density, velocity, viscosity_cp);
    let moody = pipe.roughness.moody(reynolds, laminar);
    let gradient = Gradient {
        gravity_psi_ft: pipe.gravity_psi_ft(density),
        friction_psi_ft: pipe.friction_psi_ft(moody, density, velocity),
        kinetic: flow.kinetic(density),
        holdup,
        margin: laminar_margin(reynolds, laminar),
        course: Course::FREE,
    };
    (gradient, reynolds)
}

impl Hydraulics for Ansari {
    fn branch(&self, flow: &Flow, pipe: &Pipe) -> Branch {
        let (pattern, turbulent) = choose(flow, pipe);
        let bits = match pattern {
            Pattern::Annular => annular::bits(flow, pipe),
            Pattern::Slug => laminar_bit(slug::Unit::new(flow, pipe).reynolds) | if turbulent { TURBULENT } else { 0 },
            Pattern::Bubble => laminar_bit(bubbly(flow, pipe, bubble_holdup(flow), false).1),
            Pattern::DispersedBubble => laminar_bit(bubbly(flow, pipe, flow.no_slip_holdup, false).1),
        };
        let film = if pattern == Pattern::Annular { 0 } else { film_bits(flow, pipe) };
        Branch(bits | film | ((pattern as u32) << PATTERN_SHIFT))
    }

    #[inline]
    fn gradient(&self, flow: &Flow, pipe: &Pipe, branch: Branch) -> Gradient {
        let laminar = branch.has(Branch::LAMINAR);
        let pattern = pattern_of(branch);
        let mut film = None;
        let mut gradient = match pattern {
            Pattern::Annular => film.insert(Film::new(flow, pipe, branch.0)).gradient(flow, pipe),
            Pattern::Slug => slug::Unit::new(flow, pipe).gradient(flow, pipe, laminar),
            Pattern::Bubble => bubbly(flow, pipe, bubble_holdup(flow), laminar).0,
            Pattern::DispersedBubble => bubbly(flow, pipe, flow.no_slip_holdup, laminar).0,
        };
        gradient.margin = gradient.margin.min(margin(flow, pipe, branch, film.as_ref()));
        gradient
    }

    fn range(&self) -> ValidRange {
        ValidRange { diameter_in: (1.0, 8.0), deviation_deg: 15.0, ..ValidRange::OPEN }
    }

    fn pattern(&self, flow: &Flow, pipe: &Pipe) -> &'static str {
        match pattern(flow, pipe) {
            Pattern::Slug => "slug",
            Pattern::Bubble => "bubble",
            Pattern::DispersedBubble => "dispersed bubble",
            Pattern::Annular => "annular",
        }
    }
}
