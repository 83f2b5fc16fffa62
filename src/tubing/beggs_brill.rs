//! Beggs and Brill (1973) with the corrections of Payne et al. (1979).
//!
//! Flow map on lam and NFr = vm^2/(g d): L1 = 316 lam^0.302, L2 = 0.0009252 lam^-2.4684, L3 = 0.10 lam^-1.4516,
//! L4 = 0.5 lam^-6.738. Holdup `HL(0) = a lam^b/NFr^c`, not below lam; inclination
//! `psi = 1 + C [sin(1.8 th) - sin^3(1.8 th)/3]`, `C = (1 - lam) ln(e lam^f NLv^g NFr^h)`, not below 0; HL = HL(0) psi,
//! times 0.924 uphill and 0.685 downhill (Payne), within lam (uphill) and 1. Transition flow interpolates the
//! corrected holdups of segregated and intermittent flow with A = (L3 - NFr)/(L3 - L2).
//! Friction `fn e^S rho_n vm^2/(2 gc d)` with the rough-pipe Moody factor at the no-slip Reynolds number,
//! y = lam/HL^2, `S = ln y/[-0.0523 + 3.182 ln y - 0.8725 (ln y)^2 + 0.01853 (ln y)^4]`, S = ln(2.2 y - 1.2) for
//! 1 < y < 1.2, at most 7. `Ek = rho_s vm vSg/(gc p)`.
//!
//! # Limitation
//! Fitted to air and water in 1 to 1.5 in. acrylic pipe. The holdup jumps at the borders of the map. Segregated flow
//! is tested first. The factor of horizontal pipe is taken as that of uphill flow. Where the liquid vanishes in distributed
//! flow, e^S has no limit. Stated range: 5,000 scf/STB of liquid, any inclination.
//!
//! # Source
//! Beggs and Brill, J. Pet. Tech. (May 1973) 607, with the revised flow map; Payne et al., J. Pet. Tech. (Sept. 1979)
//! 1198.

use super::ValidRange;
use super::groups::LnGroups;
use super::model::{Branch, Course, Flow, Gradient, Hydraulics, Pipe, laminar_bit, laminar_margin};
use super::no_slip;
use crate::units::constants::GRAVITY_FT_S2;

/// The regimes of the flow map.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Regime {
    /// Stratified, wavy, annular.
    Segregated,
    /// Between segregated and intermittent.
    Transition,
    /// Plug and slug.
    Intermittent,
    /// Bubble and mist.
    Distributed,
}

/// The model.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct BeggsBrill {
    /// Whether the holdup is corrected after Payne et al. (1979).
    pub payne: bool,
}

// Branch bits: the regime in two of them, the branch of S in two more, then four for the limits that act on the
// holdup of the regime, and four for those of the other regime of transition flow.
const REGIME_SHIFT: u32 = 2;
const S_WINDOW: u32 = 16;
const S_BELOW_ONE: u32 = 32;
const LIMITS_SHIFT: u32 = 6;
const OTHER_LIMITS_SHIFT: u32 = 10;
/// Above the no-slip holdup at which the border of the regime turns a corner: the flow may pass beyond the tip of it for a
/// few feet only, so the march stops there.
const ABOVE_CORNER: u32 = 1 << 14;
/// HL(0) is the no-slip holdup.
const HORIZONTAL_FLOOR: u32 = 1;
/// C is zero.
const NO_INCLINATION: u32 = 2;
/// HL is at its lower limit.
const FLOOR: u32 = 4;
/// HL is 1.
const CEILING: u32 = 8;

/// Relative change of pressure allowed in a step where S rises from y = 1 downwards, within 2 % of y: at the start, and
/// per ln y.
const LEAST_COURSE: f64 = 0.02;
const COURSE: f64 = 0.5;
/// Keeps logarithms finite.
const LEAST_HOLDUP: f64 = 1e-6;
const LN_0_01: f64 = -4.605_170_185_988_091;
const LN_0_4: f64 = -0.916_290_731_874_155;

/// Logarithms of the no-slip holdup, the Froude number and the borders of the flow map.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Map {
    /// ln lam.
    pub ln_no_slip_holdup: f64,
    /// ln NFr.
    pub ln_froude: f64,
    /// ln L1 to ln L4.
    pub ln_limits: [f64; 4],
}

impl Map {
    /// Where the flow lies.
    #[inline]
    pub fn new(flow: &Flow, pipe: &Pipe) -> Self {
        let velocity = flow.mixture_velocity_ft_s();
        let ln_lam = flow.no_slip_holdup.ln();
        Self {
            ln_no_slip_holdup: ln_lam,
            // A column at rest stays finite.
            ln_froude: (velocity * velocity / (GRAVITY_FT_S2 * pipe.diameter_ft)).max(1e-24).ln(),
            ln_limits: [
                5.755_742_213_586_912 + 0.302 * ln_lam,
                -6.985_500_627_606_99 - 2.4684 * ln_lam,
                -2.302_585_092_994_045_5 - 1.4516 * ln_lam,
                -std::f64::consts::LN_2 - 6.738 * ln_lam,
            ],
        }
    }

    /// How far the flow is inside a regime: positive inside. Its border turns a corner at lam = 0.01 (segregated) or 0.4, on
    /// one side of which the margin is meant.
    #[inline]
    fn margin_on_side(&self, regime: Regime, above: bool) -> f64 {
        let n = self.ln_froude;
        let [l1, l2, l3, l4] = self.ln_limits;
        let above_0_01 = self.ln_no_slip_holdup - LN_0_01;
        let above_0_4 = self.ln_no_slip_holdup - LN_0_4;
        match (regime, above) {
            (Regime::Segregated, false) => (-above_0_01).min(l1 - n),
            (Regime::Segregated, true) => above_0_01.min(l2 - n),
            (Regime::Transition, _) => above_0_01.min(n - l2).min(l3 - n),
            (Regime::Intermittent, false) => above_0_01.min(-above_0_4).min(n - l3).min(l1 - n),
            (Regime::Intermittent, true) => above_0_4.min(n - l3).min(l4 - n),
            (Regime::Distributed, false) => (-above_0_4).min(n - l1),
            (Regime::Distributed, true) => above_0_4.min(n - l4),
        }
    }

    /// On which side of the corner of a regime's border the flow is.
    #[inline]
    fn side(&self, regime: Regime) -> bool {
        match regime {
            Regime::Segregated => self.ln_no_slip_holdup >= LN_0_01,
            _ => self.ln_no_slip_holdup >= LN_0_4,
        }
    }

    /// How far the flow is inside a regime: positive inside.
    pub fn margin(&self, regime: Regime) -> f64 {
        self.margin_on_side(regime, false).max(self.margin_on_side(regime, true))
    }

    /// The regime; segregated flow is tested first.
    #[inline]
    pub fn regime(&self) -> Regime {
        [Regime::Segregated, Regime::Transition, Regime::Intermittent]
            .into_iter()
            .find(|&regime| self.margin(regime) >= 0.0)
            .unwrap_or(Regime::Distributed)
    }

    /// ln HL(0) of segregated, intermittent or distributed flow, before its floor at the no-slip holdup.
    #[inline]
    fn ln_horizontal_holdup(&self, regime: Regime) -> f64 {
        let (ln_a, b, c) = match regime {
            Regime::Segregated | Regime::Transition => (-0.020_202_707_317_519_466, 0.4846, 0.0868),
            Regime::Intermittent => (-0.168_418_651_624_963_15, 0.5351, 0.0173),
            Regime::Distributed => (0.062_974_799_161_388_39, 0.5824, 0.0609),
        };
        ln_a + b * self.ln_no_slip_holdup - c * self.ln_froude
    }

    /// The coefficient C of the inclination correction, before its floor at zero; `ln_nlv` is the logarithm of the
    /// liquid velocity number.
    #[inline]
    fn inclination(&self, regime: Regime, ln_nlv: f64, uphill: bool, no_slip_holdup: f64) -> f64 {
        let (ln_e, f, g, h) = match (uphill, regime) {
            (true, Regime::Distributed) => return -1.0,
            (true, Regime::Segregated | Regime::Transition) => (-4.509_860_006_183_766, -3.768, 3.539, -1.614),
            (true, Regime::Intermittent) => (1.085_189_268_335_969, 0.305, -0.4473, 0.0978),
            (false, _) => (1.547_562_508_716_013_2, -0.3692, 0.1244, -0.5056),
        };
        let ln = ln_e + f * self.ln_no_slip_holdup + g * ln_nlv + h * self.ln_froude;
        (1.0 - no_slip_holdup) * ln
    }
}

/// The exponent S of the two-phase friction factor. The window 1 < y < 1.2 is the caller's choice: it holds the
/// branch.
#[inline]
pub fn friction_exponent(ln_y: f64, window: bool) -> f64 {
    if window {
        return (2.2 * ln_y.exp() - 1.2).max(1e-9).ln();
    }
    let denominator = -0.0523 + ln_y * (3.182 + ln_y * (-0.8725 + 0.018_53 * ln_y * ln_y));
    let s = ln_y / denominator;
    // 0/0 only exactly at the pole, where the fit means nothing.
    if s < 7.0 { s } else { 7.0 }
}

/// HL(0), C, psi and HL of one regime.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Holdup {
    /// HL(0), not below the no-slip holdup.
    pub horizontal: f64,
    /// C, not below zero.
    pub inclination: f64,
    /// psi.
    pub factor: f64,
    /// HL, corrected and limited.
    pub inclined: f64,
    /// How far the flow is from the border where another set of limits acts.
    margin: f64,
}

impl BeggsBrill {
    /// The holdup in one regime other than transition.
    pub fn holdup(&self, map: &Map, regime: Regime, flow: &Flow, pipe: &Pipe) -> Holdup {
        self.limited(map, regime, flow, pipe, self.limits(map, regime, flow, pipe))
    }

    /// Which limits act on the holdup of a regime.
    fn limits(&self, map: &Map, regime: Regime, flow: &Flow, pipe: &Pipe) -> u32 {
        let mut limits = 0;
        if map.ln_horizontal_holdup(regime) < map.ln_no_slip_holdup {
            limits |= HORIZONTAL_FLOOR;
        }
        let ln_nlv = LnGroups::liquid_velocity_number(flow);
        if map.inclination(regime, ln_nlv, pipe.sin_inclination >= 0.0, flow.no_slip_holdup) <= 0.0 {
            limits |= NO_INCLINATION;
        }
        let free = self.limited(map, regime, flow, pipe, limits).inclined;
        if free < self.floor(flow, pipe) {
            limits |= FLOOR;
        } else if free > 1.0 {
            limits |= CEILING;
        }
        limits
    }

    #[inline]
    fn floor(&self, flow: &Flow, pipe: &Pipe) -> f64 {
        if pipe.sin_inclination >= 0.0 { flow.no_slip_holdup } else { LEAST_HOLDUP }
    }

    /// The holdup in one regime other than transition, with a given set of limits.
    #[inline]
    fn limited(&self, map: &Map, regime: Regime, flow: &Flow, pipe: &Pipe, limits: u32) -> Holdup {
        let uphill = pipe.sin_inclination >= 0.0;
        let ln_horizontal = map.ln_horizontal_holdup(regime);
        let above_no_slip = ln_horizontal - map.ln_no_slip_holdup;
        let (horizontal, horizontal_margin) = if limits & HORIZONTAL_FLOOR != 0 {
            (flow.no_slip_holdup, -above_no_slip)
        } else {
            (ln_horizontal.exp(), above_no_slip)
        };
        let ln_nlv = LnGroups::liquid_velocity_number(flow);
        let coefficient = map.inclination(regime, ln_nlv, uphill, flow.no_slip_holdup);
        let (inclination, inclination_margin) =
            if limits & NO_INCLINATION != 0 { (0.0, -coefficient) } else { (coefficient, coefficient) };
        let factor = 1.0 + inclination * pipe.beggs_brill_factor;
        let payne = match (self.payne, uphill) {
            (false, _) => 1.0,
            (true, true) => 0.924,
            (true, false) => 0.685,
        };
        let free = horizontal * factor * payne;
        let floor = self.floor(flow, pipe);
        let (inclined, limit_margin) = if limits & FLOOR != 0 {
            (floor, floor - free)
        } else if limits & CEILING != 0 {
            (1.0, free - 1.0)
        } else {
            (free, (free - floor).min(1.0 - free))
        };
        let margin = horizontal_margin.min(inclination_margin).min(limit_margin);
        Holdup { horizontal, inclination, factor, inclined, margin }
    }

    /// The bits of the limits of a regime; of both regimes in transition flow.
    fn limit_bits(&self, map: &Map, regime: Regime, flow: &Flow, pipe: &Pipe) -> u32 {
        if regime == Regime::Transition {
            (self.limits(map, Regime::Segregated, flow, pipe) << LIMITS_SHIFT)
                | (self.limits(map, Regime::Intermittent, flow, pipe) << OTHER_LIMITS_SHIFT)
        } else {
            self.limits(map, regime, flow, pipe) << LIMITS_SHIFT
        }
    }

    /// HL of any regime and the margin of its limits.
    #[inline]
    fn inclined(&self, map: &Map, regime: Regime, flow: &Flow, pipe: &Pipe, branch: Branch) -> (f64, f64) {
        let limits = (branch.0 >> LIMITS_SHIFT) & 15;
        if regime != Regime::Transition {
            let holdup = self.limited(map, regime, flow, pipe, limits);
            return (holdup.inclined, holdup.margin);
        }
        let other_limits = (branch.0 >> OTHER_LIMITS_SHIFT) & 15;
        let [_, l2, l3, _] = map.ln_limits;
        let weight = (l3.exp() - map.ln_froude.exp()) / (l3.exp() - l2.exp());
        let segregated = self.limited(map, Regime::Segregated, flow, pipe, limits);
        let intermittent = self.limited(map, Regime::Intermittent, flow, pipe, other_limits);
        let holdup = weight * segregated.inclined + (1.0 - weight) * intermittent.inclined;
        // Beyond the borders of the branch the weights leave 0 to 1.
        (holdup.max(LEAST_HOLDUP), segregated.margin.min(intermittent.margin))
    }
}

/// How far ln y is inside its branch of S.
#[inline]
fn exponent_margin(ln_y: f64, branch: Branch) -> f64 {
    const LN_1_2: f64 = 0.182_321_556_793_954_6;
    if branch.has(S_BELOW_ONE) {
        -ln_y
    } else if branch.has(S_WINDOW) {
        ln_y.min(LN_1_2 - ln_y)
    } else {
        ln_y - LN_1_2
    }
}

#[inline]
fn regime_of(branch: Branch) -> Regime {
    match (branch.0 >> REGIME_SHIFT) & 3 {
        0 => Regime::Segregated,
        1 => Regime::Transition,
        2 => Regime::Intermittent,
        _ => Regime::Distributed,
    }
}

impl Hydraulics for BeggsBrill {
    fn branch(&self, flow: &Flow, pipe: &Pipe) -> Branch {
        let map = Map::new(flow, pipe);
        let regime = map.regime();
        let limits = self.limit_bits(&map, regime, flow, pipe);
        let (holdup, _) = self.inclined(&map, regime, flow, pipe, Branch(limits));
        let y = flow.no_slip_holdup / (holdup * holdup);
        let exponent = if y <= 1.0 {
            S_BELOW_ONE
        } else if y < 1.2 {
            S_WINDOW
        } else {
            0
        };
        let reynolds = no_slip::reynolds(flow, pipe, flow.no_slip_density_lb_ft3());
        let side = if map.side(regime) { ABOVE_CORNER } else { 0 };
        Branch(limits | ((regime as u32) << REGIME_SHIFT) | exponent | side | laminar_bit(reynolds))
    }

    #[inline]
    fn gradient(&self, flow: &Flow, pipe: &Pipe, branch: Branch) -> Gradient {
        let map = Map::new(flow, pipe);
        let regime = regime_of(branch);
        let (holdup, limits_margin) = self.inclined(&map, regime, flow, pipe, branch);
        let slip_density = flow.density_at_holdup_lb_ft3(holdup);
        let no_slip_density = flow.no_slip_density_lb_ft3();
        let reynolds = no_slip::reynolds(flow, pipe, no_slip_density);
        let laminar = branch.has(Branch::LAMINAR);
        let ln_y = map.ln_no_slip_holdup - 2.0 * holdup.ln();
        let exponent = friction_exponent(ln_y, branch.has(S_WINDOW));
        let moody = pipe.roughness.moody(reynolds, laminar) * exponent.exp();
        Gradient {
            gravity_psi_ft: pipe.gravity_psi_ft(slip_density),
            friction_psi_ft: pipe.friction_psi_ft(moody, no_slip_density, flow.mixture_velocity_ft_s()),
            kinetic: flow.kinetic(slip_density),
            holdup,
            course: if branch.has(S_BELOW_ONE) {
                Course::both(LEAST_COURSE + COURSE * ln_y.abs())
            } else {
                Course::FREE
            },
            margin: laminar_margin(reynolds, laminar)
                .min(map.margin_on_side(regime, branch.has(ABOVE_CORNER)))
                .min(exponent_margin(ln_y, branch))
                .min(limits_margin),
        }
    }

    fn range(&self) -> ValidRange {
        ValidRange { gas_liquid_ratio_scf_stb: 5000.0, ..ValidRange::OPEN }
    }

    fn pattern(&self, flow: &Flow, pipe: &Pipe) -> &'static str {
        match Map::new(flow, pipe).regime() {
            Regime::Segregated => "segregated",
            Regime::Transition => "transition",
            Regime::Intermittent => "intermittent",
            Regime::Distributed => "distributed",
        }
    }
}
