//! Hagedorn and Brown (1965) with the no-slip floor and the bubble-flow modification.
//!
//! Slug flow and above: `H = (NLv/NGv^0.575)(p/14.7)^0.1 (CNL/Nd)`, `B = NGv NL^0.38/Nd^2.14`,
//! `HL = (HL/psi)(H) psi(B)`, not below the no-slip holdup; gravity rho_s, friction `f rho_n^2 vm^2/(2 gc d rho_s)`,
//! Moody f at Re = 1488 rho_n vm d/(muL^HL mug^(1-HL)), `Ek = rho_s vm vSg/(gc p)`.
//!
//! Bubble flow, where vSg/vm < LB = 1.071 - 0.2218 vm^2/d (at least 0.13), after Griffith and Wallis (1961):
//! `HL = 1 - 0.5 {1 + vm/vs - sqrt[(1 + vm/vs)^2 - 4 vSg/vs]}`, vs = 0.8 ft/s; friction `f rhoL (vSL/HL)^2/(2 gc d)`
//! at Re = 1488 rhoL (vSL/HL) d/muL.
//!
//! The three charts are replaced by the polynomials of Guo et al. (fit set 1), which agree with an independent
//! rational fit within 3 % (HL/psi, H from 3e-5 to 6e-3), 4 % (psi) and 25 % (CNL, worst near NL = 0.1).
//!
//! # Limitation
//! Fitted to vertical 1 to 1.5 in. tubing of 1,500 ft, 10 to 110 cp. NL is held in 0.002 to 0.4 inside the CNL fit,
//! H in 3e-6 to 6e-3 (below 1e-7 HL/psi falls with H, so that no liquid leaves gas), B below 0.09; psi is 1 up to where
//! its fit exceeds 1 (B = 0.0123). The holdup jumps where bubble flow ends. In deviated pipe only the gravity term changes.
//! Stated range: 1 to 4 in., within 15 degrees of vertical, liquid to 110 cp, NL to 0.4, 5,000 scf/STB of liquid.
//!
//! # Source
//! Hagedorn and Brown, J. Pet. Tech. (April 1965) 475; Griffith and Wallis, J. Heat Transfer 83 (1961) 307; chart
//! fits of Guo, Lyons and Ghalambor (2007).

use super::ValidRange;
use super::groups::LnGroups;
use super::model::{Branch, Course, Flow, Gradient, Hydraulics, Pipe, Range, laminar_bit, laminar_margin};
use std::f64::consts::LN_10;

/// Slip velocity of bubble flow, ft/s.
const BUBBLE_SLIP_FT_S: f64 = 0.8;
const LN_PRESSURE_BASE: f64 = 2.687_847_493_784_690_6; // 14.7 psia

// Branch bits: bubble flow, the sides of three fitted ranges, the floor and the ceiling of the holdup.
const BUBBLE: u32 = 4;
const FLOOR: u32 = 8;
const CEILING: u32 = 16;
/// ln NL within 0.002 and 0.4, the range of the chart: beyond it the quartic turns over.
const VISCOSITY: Range = Range { low: -6.214_608_098_422_191, high: -0.916_290_731_874_155, shift: 5 };
/// ln H within 3e-6 and 6e-3.
const CORRELATING: Range = Range { low: -12.716_898_269_296_165, high: -5.115_995_809_754_082, shift: 7 };
/// ln H from 1e-7 up: below it HL/psi falls in proportion to H, since without liquid it has to vanish.
const VANISHING: Range = Range { low: -16.118_095_650_958_32, high: f64::INFINITY, shift: 11 };
/// ln B from where the fit of psi rises above 1 (B = 0.0123) to 0.09.
const SECONDARY: Range = Range { low: -4.398_143_709_447_593, high: -2.407_945_608_651_872, shift: 9 };

/// The model.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct HagedornBrown;

/// CNL from the natural logarithm of NL, which is held to the range of the chart.
#[inline]
pub fn cnl(ln_viscosity_number: f64) -> f64 {
    (LN_10 * log10_cnl(ln_viscosity_number.clamp(VISCOSITY.low, VISCOSITY.high))).exp()
}

#[inline]
fn log10_cnl(ln_viscosity_number: f64) -> f64 {
    let x = ln_viscosity_number / LN_10 + 3.0;
    -2.698_51 + x * (0.158_41 + x * (-0.551 + x * (0.547_85 - x * 0.121_95)))
}

/// HL/psi from the natural logarithm of the correlating group H, which is held to its range; far below it falls with H.
#[inline]
pub fn holdup_over_psi(ln_h: f64) -> f64 {
    fitted_holdup(ln_h.clamp(CORRELATING.low, CORRELATING.high)) * (ln_h - VANISHING.low).min(0.0).exp()
}

#[inline]
fn fitted_holdup(ln_h: f64) -> f64 {
    let x = ln_h / LN_10 + 6.0;
    -0.103_07 + x * (0.617_77 + x * (-0.632_95 + x * (0.295_98 - x * 0.0401)))
}

/// psi from the secondary group B: the fit from where it exceeds 1 to B = 0.09.
#[inline]
pub fn psi(b: f64) -> f64 {
    fitted_psi(b.clamp(0.01, 0.09)).max(1.0)
}

#[inline]
fn fitted_psi(b: f64) -> f64 {
    0.911_63 + b * (-4.821_76 + b * (1232.25 + b * (-22_253.6 + b * 116_174.3)))
}

/// The gas fraction of the flow below which it is bubble flow.
#[inline]
pub fn bubble_limit(mixture_velocity_ft_s: f64, diameter_ft: f64) -> f64 {
    (1.071 - 0.2218 * mixture_velocity_ft_s * mixture_velocity_ft_s / diameter_ft).max(0.13)
}

/// Holdup of bubble flow (Griffith and Wallis 1961).
#[inline]
pub fn bubble_holdup(mixture_velocity_ft_s: f64, gas_velocity_ft_s: f64) -> f64 {
    let ratio = 1.0 + mixture_velocity_ft_s / BUBBLE_SLIP_FT_S;
    1.0 - 0.5 * (ratio - (ratio * ratio - 4.0 * gas_velocity_ft_s / BUBBLE_SLIP_FT_S).max(0.0).sqrt())
}

/// The correlating groups, as logarithms: NL, H without CNL, B.
#[inline]
fn correlating(flow: &Flow, pipe: &Pipe) -> [f64; 3] {
    let n = LnGroups::new(flow, pipe);
    let pressure = 0.1 * (flow.pressure_psia.ln() - LN_PRESSURE_BASE);
    [
        n.viscosity,
        n.liquid_velocity - 0.575 * n.gas_velocity + pressure - n.diameter,
        n.gas_velocity + 0.38 * n.viscosity - 2.14 * n.diameter,
    ]
}

/// Everything that depends on the branch.
struct State {
    /// HL/psi; 1 in bubble flow.
    over_psi: f64,
    /// Holdup before floor and ceiling.
    correlated: f64,
    holdup: f64,
    density_lb_ft3: f64,
    reynolds: f64,
    margin: f64,
}

/// How far the flow is inside bubble flow.
#[inline]
fn bubble_margin(flow: &Flow, pipe: &Pipe) -> f64 {
    bubble_limit(flow.mixture_velocity_ft_s(), pipe.diameter_ft) - (1.0 - flow.no_slip_holdup)
}

#[inline]
fn in_bubble_flow(flow: &Flow, pipe: &Pipe) -> State {
    let holdup = bubble_holdup(flow.mixture_velocity_ft_s(), flow.gas_velocity_ft_s);
    let liquid = flow.liquid_velocity_ft_s / holdup;
    State {
        over_psi: 1.0,
        correlated: holdup,
        holdup,
        density_lb_ft3: flow.density_at_holdup_lb_ft3(holdup),
        reynolds: pipe.reynolds(flow.liquid_density_lb_ft3, liquid, flow.liquid_viscosity_cp),
        margin: bubble_margin(flow, pipe),
    }
}

#[inline]
fn above_bubble_flow(flow: &Flow, pipe: &Pipe, branch: Branch) -> State {
    let [nl, h, b] = correlating(flow, pipe);
    let (nl, nl_margin) = VISCOSITY.hold(nl, branch);
    let free_h = h + LN_10 * log10_cnl(nl);
    let (h, h_margin) = CORRELATING.hold(free_h, branch);
    let (b, b_margin) = SECONDARY.hold(b, branch);
    let (_, vanishing_margin) = VANISHING.hold(free_h, branch);
    let over_psi = fitted_holdup(h) * if VANISHING.is_below(branch) { (free_h - VANISHING.low).exp() } else { 1.0 };
    let correlated = over_psi * fitted_psi(b.exp());
    let above_floor = correlated - flow.no_slip_holdup;
    let (holdup, holdup_margin) = if branch.has(FLOOR) {
        (flow.no_slip_holdup, -above_floor)
    } else if branch.has(CEILING) {
        (1.0, correlated - 1.0)
    } else {
        (correlated, above_floor.min(1.0 - correlated))
    };
    let ln_viscosity = holdup * flow.liquid_viscosity_cp.ln() + (1.0 - holdup) * flow.gas_viscosity_cp.ln();
    State {
        over_psi,
        correlated,
        holdup,
        density_lb_ft3: flow.density_at_holdup_lb_ft3(holdup),
        reynolds: pipe.reynolds(flow.no_slip_density_lb_ft3(), flow.mixture_velocity_ft_s(), ln_viscosity.exp()),
        margin: nl_margin
            .min(h_margin)
            .min(vanishing_margin)
            .min(b_margin)
            .min(holdup_margin)
            .min(-bubble_margin(flow, pipe)),
    }
}

/// HL/psi and the holdup of slug flow and above, floor and ceiling included.
pub fn slug_holdup(flow: &Flow, pipe: &Pipe) -> (f64, f64) {
    let state = above_bubble_flow(flow, pipe, slug_branch(flow, pipe));
    (state.over_psi, state.holdup)
}

fn slug_branch(flow: &Flow, pipe: &Pipe) -> Branch {
    let [nl, h, b] = correlating(flow, pipe);
    let nl_bits = VISCOSITY.bits(nl);
    let (held, _) = VISCOSITY.hold(nl, Branch(nl_bits));
    let h = h + LN_10 * log10_cnl(held);
    let ranges = nl_bits | CORRELATING.bits(h) | VANISHING.bits(h) | SECONDARY.bits(b);
    let state = above_bubble_flow(flow, pipe, Branch(ranges));
    let limit = if state.correlated < flow.no_slip_holdup {
        FLOOR
    } else if state.correlated > 1.0 {
        CEILING
    } else {
        0
    };
    let state = above_bubble_flow(flow, pipe, Branch(ranges | limit));
    Branch(ranges | limit | laminar_bit(state.reynolds))
}

impl Hydraulics for HagedornBrown {
    fn branch(&self, flow: &Flow, pipe: &Pipe) -> Branch {
        if bubble_margin(flow, pipe) > 0.0 {
            Branch(BUBBLE | laminar_bit(in_bubble_flow(flow, pipe).reynolds))
        } else {
            slug_branch(flow, pipe)
        }
    }

    #[inline]
    fn gradient(&self, flow: &Flow, pipe: &Pipe, branch: Branch) -> Gradient {
        let bubble = branch.has(BUBBLE);
        let laminar = branch.has(Branch::LAMINAR);
        let state = if bubble { in_bubble_flow(flow, pipe) } else { above_bubble_flow(flow, pipe, branch) };
        let moody = pipe.roughness.moody(state.reynolds, laminar);
        let friction_psi_ft = if bubble {
            let liquid = flow.liquid_velocity_ft_s / state.holdup;
            pipe.friction_psi_ft(moody, flow.liquid_density_lb_ft3, liquid)
        } else {
            let no_slip = flow.no_slip_density_lb_ft3();
            pipe.friction_psi_ft(moody, no_slip * no_slip / state.density_lb_ft3, flow.mixture_velocity_ft_s())
        };
        Gradient {
            gravity_psi_ft: pipe.gravity_psi_ft(state.density_lb_ft3),
            friction_psi_ft,
            kinetic: flow.kinetic(state.density_lb_ft3),
            holdup: state.holdup,
            course: Course::FREE,
            margin: laminar_margin(state.reynolds, laminar).min(state.margin),
        }
    }

    fn range(&self) -> ValidRange {
        ValidRange {
            diameter_in: (1.0, 4.0),
            deviation_deg: 15.0,
            liquid_viscosity_cp: 110.0,
            viscosity_number: 0.4,
            gas_liquid_ratio_scf_stb: 5000.0,
            ..ValidRange::OPEN
        }
    }

    fn pattern(&self, flow: &Flow, pipe: &Pipe) -> &'static str {
        if bubble_margin(flow, pipe) > 0.0 { "bubble" } else { "slug or above" }
    }
}
