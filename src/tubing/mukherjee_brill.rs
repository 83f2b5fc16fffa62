//! Mukherjee and Brill: one holdup for every upward flow, with the pattern deciding the friction.
//!
//! ```text
//! HL    = exp{[-0.380113 + 0.129875 sin th - 0.119788 sin^2 th + 2.343227 NL^2] NGv^0.475686/NLv^0.288657}
//! NGvSM = 10^(1.401 - 2.694 NL + 0.521 NLv^0.329)                                      annular above it
//! NLvBS = 10^(log NGv + 0.940 + 0.074 sin th - 0.855 sin^2 th + 3.695 NL)               bubble above it
//! bubble, slug: f rho_s vm^2/(2 gc d)
//! annular:      f fR rho_n vm^2/(2 gc d), fR from a table in HR = lam/HL
//! ```
//!
//! with the Moody factor of the rough pipe at the no-slip Reynolds number, and `Ek = rho_s vm vSg/(gc p)`. The groups
//! are those of Duns and Ros.
//!
//! # Limitation
//! Fitted to kerosene and lubricating oil with air in 1.5 in. pipe, at every inclination. Upward and horizontal flow
//! only: the downhill coefficients serve no producer, and a path that climbs on its way down is refused. HL is held within
//! lam and 1: the sum in brackets turns positive for viscous liquids (NL above 0.4 in vertical pipe). The holdup is
//! continuous, the friction jumps where annular flow begins. The two lines of the map hold outside the data too, where
//! nothing supports them. Stated range: NL to 0.4.
//!
//! # Source
//! Mukherjee and Brill, J. Can. Pet. Tech. (July 1983) 85 (holdup) and J. Energy Resour. Technol. 107 (1985) 549
//! (gradient and flow patterns). Coefficients from memory of the papers.

use super::ValidRange;
use super::groups::LnGroups;
use super::model::{Branch, Course, Flow, Gradient, Hydraulics, Pipe, laminar_bit, laminar_margin};
use super::no_slip;
use std::f64::consts::LN_10;

/// The model.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct MukherjeeBrill;

// Branch bits; the stretch of the table of fR in three more.
const ANNULAR: u32 = 4;
const FLOOR: u32 = 8;
const CEILING: u32 = 16;
const RATIO_SHIFT: u32 = 5;

/// HR = lam/HL and fR, straight between.
const RATIO: [(f64, f64); 7] = [(0.01, 1.0), (0.2, 0.98), (0.3, 1.2), (0.4, 1.25), (0.5, 1.3), (0.7, 1.25), (1.0, 1.0)];

/// Logarithms of the groups and of the two borders of the map.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Map {
    /// The groups.
    pub groups: LnGroups,
    /// Liquid viscosity number.
    pub viscosity_number: f64,
    /// ln NGvSM, above which the flow is annular.
    pub ln_annular: f64,
}

impl Map {
    /// Where the flow lies.
    #[inline]
    pub fn new(flow: &Flow, pipe: &Pipe) -> Self {
        let groups = LnGroups::new(flow, pipe);
        let viscosity_number = groups.viscosity.exp();
        let ln_annular = LN_10 * (1.401 - 2.694 * viscosity_number + 0.521 * (0.329 * groups.liquid_velocity).exp());
        Self { groups, viscosity_number, ln_annular }
    }

    /// ln NLvBS, above which the flow is bubble flow.
    pub fn ln_bubble(&self, pipe: &Pipe) -> f64 {
        let sin = pipe.sin_inclination;
        self.groups.gas_velocity + LN_10 * (0.940 + 0.074 * sin - 0.855 * sin * sin + 3.695 * self.viscosity_number)
    }

    /// The correlated holdup, without limits.
    #[inline]
    pub fn correlated_holdup(&self, pipe: &Pipe) -> f64 {
        let sin = pipe.sin_inclination;
        let nl = self.viscosity_number;
        let sum = -0.380_113 + 0.129_875 * sin - 0.119_788 * sin * sin + 2.343_227 * nl * nl;
        // Viscous liquid at high gas velocity would overflow; whatever lies above 1 is held there.
        (sum * (0.475_686 * self.groups.gas_velocity - 0.288_657 * self.groups.liquid_velocity).exp()).min(2.0).exp()
    }

    /// How far the flow is inside annular flow.
    #[inline]
    fn annular_margin(&self) -> f64 {
        self.groups.gas_velocity - self.ln_annular
    }
}

/// The holdup on a branch, and how far inside its limits.
#[inline]
fn holdup(map: &Map, flow: &Flow, pipe: &Pipe, branch: Branch) -> (f64, f64) {
    let free = map.correlated_holdup(pipe);
    let above_floor = free - flow.no_slip_holdup;
    if branch.has(FLOOR) {
        (flow.no_slip_holdup, -above_floor)
    } else if branch.has(CEILING) {
        (1.0, free - 1.0)
    } else {
        (free, above_floor.min(1.0 - free))
    }
}

/// The stretch of the table on which a ratio lies: 0 below the table, 7 above it.
fn stretch(ratio: f64) -> u32 {
    RATIO.iter().filter(|(at, _)| ratio >= *at).count() as u32
}

/// fR and how far the ratio is inside its stretch.
#[inline]
fn friction_ratio(ratio: f64, stretch: u32) -> (f64, f64) {
    let i = stretch as usize;
    match (i.checked_sub(1).and_then(|i| RATIO.get(i)), RATIO.get(i)) {
        (Some((low, at_low)), Some((high, at_high))) => {
            let part = (ratio - low) / (high - low);
            (at_low + part * (at_high - at_low), (ratio - low).min(high - ratio))
        }
        (None, _) => (1.0, RATIO[0].0 - ratio),
        (_, None) => (1.0, ratio - RATIO[RATIO.len() - 1].0),
    }
}

/// fR of the friction of annular flow from HR = lam/HL.
pub fn annular_friction_ratio(ratio: f64) -> f64 {
    friction_ratio(ratio, stretch(ratio)).0
}

impl Hydraulics for MukherjeeBrill {
    fn branch(&self, flow: &Flow, pipe: &Pipe) -> Branch {
        let map = Map::new(flow, pipe);
        let free = map.correlated_holdup(pipe);
        let limit = if free < flow.no_slip_holdup {
            FLOOR
        } else if free > 1.0 {
            CEILING
        } else {
            0
        };
        let annular = if map.annular_margin() > 0.0 {
            let ratio = flow.no_slip_holdup / holdup(&map, flow, pipe, Branch(limit)).0;
            // On the floor HR is 1 by definition, whatever rounding says.
            let stretch = if limit == FLOOR { RATIO.len() as u32 } else { stretch(ratio) };
            ANNULAR | (stretch << RATIO_SHIFT)
        } else {
            0
        };
        let reynolds = no_slip::reynolds(flow, pipe, flow.no_slip_density_lb_ft3());
        Branch(limit | annular | laminar_bit(reynolds))
    }

    #[inline]
    fn gradient(&self, flow: &Flow, pipe: &Pipe, branch: Branch) -> Gradient {
        let map = Map::new(flow, pipe);
        let (holdup, mut margin) = holdup(&map, flow, pipe, branch);
        let density = flow.density_at_holdup_lb_ft3(holdup);
        let no_slip_density = flow.no_slip_density_lb_ft3();
        let reynolds = no_slip::reynolds(flow, pipe, no_slip_density);
        let laminar = branch.has(Branch::LAMINAR);
        let moody = pipe.roughness.moody(reynolds, laminar);
        let velocity = flow.mixture_velocity_ft_s();
        let friction_psi_ft = if branch.has(ANNULAR) {
            let stretch = (branch.0 >> RATIO_SHIFT) & 7;
            let (ratio, ratio_margin) = friction_ratio(flow.no_slip_holdup / holdup, stretch);
            margin = margin.min(map.annular_margin());
            if !branch.has(FLOOR) {
                margin = margin.min(ratio_margin);
            }
            pipe.friction_psi_ft(moody * ratio, no_slip_density, velocity)
        } else {
            margin = margin.min(-map.annular_margin());
            pipe.friction_psi_ft(moody, density, velocity)
        };
        Gradient {
            gravity_psi_ft: pipe.gravity_psi_ft(density),
            friction_psi_ft,
            kinetic: flow.kinetic(density),
            holdup,
            margin: margin.min(laminar_margin(reynolds, laminar)),
            course: Course::FREE,
        }
    }

    fn range(&self) -> ValidRange {
        ValidRange { viscosity_number: 0.4, ..ValidRange::OPEN }
    }

    fn pattern(&self, flow: &Flow, pipe: &Pipe) -> &'static str {
        let map = Map::new(flow, pipe);
        if map.annular_margin() > 0.0 {
            "annular"
        } else if map.groups.liquid_velocity > map.ln_bubble(pipe) {
            "bubble"
        } else {
            "slug"
        }
    }
}
