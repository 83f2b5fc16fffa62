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
//! H in 3e-6 to 6e-3, B below 0.09; psi is 1 for B up to 0.01 and never below. The holdup jumps where bubble flow
//! ends. In deviated pipe only the gravity term changes.
//!
//! # Source
//! Hagedorn and Brown, J. Pet. Tech. (April 1965) 475; Griffith and Wallis, J. Heat Transfer 83 (1961) 307; chart
//! fits of Guo, Lyons and Ghalambor (2007).

use super::groups::LnGroups;
use super::model::{Branch, Flow, Gradient, Hydraulics, Pipe, laminar_bit, laminar_margin};
use std::f64::consts::LN_10;

/// Slip velocity of bubble flow, ft/s.
const BUBBLE_SLIP_FT_S: f64 = 0.8;
const BUBBLE: u16 = 4;
const LN_PRESSURE_BASE: f64 = 2.687_847_493_784_690_6; // 14.7 psia

/// The model.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct HagedornBrown;

/// log10 of CNL from the natural logarithm of NL.
#[inline]
pub fn log10_cnl(ln_viscosity_number: f64) -> f64 {
    // NL within 0.002 and 0.4, the range of the chart: beyond it the quartic turns over.
    let x = (ln_viscosity_number / LN_10).clamp(-2.698_970_004_336_019, -0.397_940_008_672_037_6) + 3.0;
    -2.698_51 + x * (0.158_41 + x * (-0.551 + x * (0.547_85 - x * 0.121_95)))
}

/// HL/psi from log10 of the correlating group H.
#[inline]
pub fn holdup_over_psi(log10_h: f64) -> f64 {
    // H within 3e-6 and 6e-3.
    let x = log10_h.clamp(-5.522_878_745_280_338, -2.221_848_749_616_356) + 6.0;
    (-0.103_07 + x * (0.617_77 + x * (-0.632_95 + x * (0.295_98 - x * 0.0401)))).clamp(0.0, 1.0)
}

/// psi from the secondary group B.
#[inline]
pub fn psi(b: f64) -> f64 {
    if b <= 0.01 {
        return 1.0;
    }
    let b = b.min(0.09);
    (0.911_63 + b * (-4.821_76 + b * (1232.25 + b * (-22_253.6 + b * 116_174.3)))).max(1.0)
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

/// HL/psi and the holdup of slug flow and above, before and after the no-slip floor.
#[inline]
pub fn holdup(flow: &Flow, pipe: &Pipe) -> (f64, f64) {
    let n = LnGroups::new(flow, pipe);
    let ln_h =
        n.liquid_velocity - 0.575 * n.gas_velocity + 0.1 * (flow.pressure_psia.ln() - LN_PRESSURE_BASE) - n.diameter;
    let over_psi = holdup_over_psi(ln_h / LN_10 + log10_cnl(n.viscosity));
    let b = (n.gas_velocity + 0.38 * n.viscosity - 2.14 * n.diameter).exp();
    (over_psi, (over_psi * psi(b)).max(flow.no_slip_holdup).min(1.0))
}

/// Everything that depends on whether the flow is bubble flow.
struct State {
    holdup: f64,
    density_lb_ft3: f64,
    reynolds: f64,
}

#[inline]
fn state(flow: &Flow, pipe: &Pipe, bubble: bool) -> State {
    let velocity = flow.mixture_velocity_ft_s();
    if bubble {
        let holdup = bubble_holdup(velocity, flow.gas_velocity_ft_s);
        let liquid = flow.liquid_velocity_ft_s / holdup;
        State {
            holdup,
            density_lb_ft3: flow.density_at_holdup_lb_ft3(holdup),
            reynolds: pipe.reynolds(flow.liquid_density_lb_ft3, liquid, flow.liquid_viscosity_cp),
        }
    } else {
        let (_, holdup) = holdup(flow, pipe);
        let ln_viscosity = holdup * flow.liquid_viscosity_cp.ln() + (1.0 - holdup) * flow.gas_viscosity_cp.ln();
        State {
            holdup,
            density_lb_ft3: flow.density_at_holdup_lb_ft3(holdup),
            reynolds: pipe.reynolds(flow.no_slip_density_lb_ft3(), velocity, ln_viscosity.exp()),
        }
    }
}

/// How far the flow is inside bubble flow.
#[inline]
fn bubble_margin(flow: &Flow, pipe: &Pipe) -> f64 {
    bubble_limit(flow.mixture_velocity_ft_s(), pipe.diameter_ft) - (1.0 - flow.no_slip_holdup)
}

impl Hydraulics for HagedornBrown {
    fn branch(&self, flow: &Flow, pipe: &Pipe) -> Branch {
        let bubble = bubble_margin(flow, pipe) > 0.0;
        Branch(if bubble { BUBBLE } else { 0 } | laminar_bit(state(flow, pipe, bubble).reynolds))
    }

    #[inline]
    fn gradient(&self, flow: &Flow, pipe: &Pipe, branch: Branch) -> Gradient {
        let bubble = branch.has(BUBBLE);
        let laminar = branch.has(Branch::LAMINAR);
        let state = state(flow, pipe, bubble);
        let moody = pipe.roughness.moody(state.reynolds, laminar);
        let friction_psi_ft = if bubble {
            let liquid = flow.liquid_velocity_ft_s / state.holdup;
            pipe.friction_psi_ft(moody, flow.liquid_density_lb_ft3, liquid)
        } else {
            let no_slip = flow.no_slip_density_lb_ft3();
            pipe.friction_psi_ft(moody, no_slip * no_slip / state.density_lb_ft3, flow.mixture_velocity_ft_s())
        };
        let inside = bubble_margin(flow, pipe);
        Gradient {
            gravity_psi_ft: pipe.gravity_psi_ft(state.density_lb_ft3),
            friction_psi_ft,
            kinetic: flow.kinetic(state.density_lb_ft3),
            holdup: state.holdup,
            margin: laminar_margin(state.reynolds, laminar).min(if bubble { inside } else { -inside }),
        }
    }

    fn pattern(&self, flow: &Flow, pipe: &Pipe) -> &'static str {
        if bubble_margin(flow, pipe) > 0.0 { "bubble" } else { "slug or above" }
    }
}
