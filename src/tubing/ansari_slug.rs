//! Slug flow of Ansari et al.: a liquid slug and a Taylor bubble in a falling film, fully developed.
//!
//! ```text
//! vTB  = 1.2 vm + 0.35 sqrt[g d (rhoL - rhog)/rhoL]       HgLS = vSg/(1.394 + 2.65 vm)   (ft/s; 0.425 in m/s)
//! vgLS = 1.2 vm + vs sqrt(HLLS)                           vLLS = (vm - HgLS vgLS)/HLLS
//! vLTB = 9.916 sqrt{g d [1 - sqrt(1 - HLTB)]}             (vTB + vLTB) HLTB = (vTB - vLLS) HLLS
//! beta = (vLLS HLLS - vSL)/(vLLS HLLS + vLTB HLTB)
//! gravity [(1 - beta) rho_LS + beta rhog] g;  friction (1 - beta) f rho_LS vm^2/(2 gc d), Re = 1488 rho_LS vm d/mu_LS
//! ```
//!
//! The weight of the film around the bubble is neglected, as in the paper (some 5 % of the gravity), and the holdup
//! shown is the one that weighs.

use super::hasan_kabir::{long_bubble_ft_s, small_bubble_ft_s};
use super::model::{Course, Flow, Gradient, Pipe, laminar_margin};
use crate::units::constants::GRAVITY_FT_S2;

/// One slug and one Taylor bubble; velocities in ft/s.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Unit {
    /// Velocity of the Taylor bubble.
    pub bubble_ft_s: f64,
    /// Gas share of the slug.
    pub slug_void: f64,
    /// Velocity of the gas in the slug.
    pub slug_gas_ft_s: f64,
    /// Velocity of the liquid in the slug.
    pub slug_liquid_ft_s: f64,
    /// Liquid share beside the Taylor bubble.
    pub film_holdup: f64,
    /// Velocity at which the film falls.
    pub film_ft_s: f64,
    /// Share of the unit's length that the Taylor bubble takes.
    pub bubble_part: f64,
    /// Reynolds number of the slug.
    pub reynolds: f64,
}

/// w = sqrt(1 - sqrt(1 - HLTB)) from `(vTB + k w) w^2 (2 - w^2) = r`, whose left side rises from 0.
#[inline]
fn film_root(bubble_ft_s: f64, k: f64, r: f64) -> f64 {
    if r <= 0.0 {
        return 0.0;
    }
    let (mut low, mut high) = (0.0, 1.0);
    // As if the film fell at no speed and w were small.
    let mut w = (0.5 * r / bubble_ft_s.max(1e-12)).sqrt().min(0.5);
    for _ in 0..80 {
        let square = w * w;
        let share = square * (2.0 - square);
        let fall = bubble_ft_s + k * w;
        let excess = fall * share - r;
        if excess < 0.0 {
            low = w;
        } else {
            high = w;
        }
        let newton = w - excess / (k * share + fall * 4.0 * w * (1.0 - square));
        let next = if newton > low && newton < high { newton } else { 0.5 * (low + high) };
        if (next - w).abs() < 1e-14 {
            return next;
        }
        w = next;
    }
    w
}

impl Unit {
    /// The unit of a flow.
    #[inline]
    pub fn new(flow: &Flow, pipe: &Pipe) -> Self {
        let mixture = flow.mixture_velocity_ft_s();
        let bubble_ft_s = 1.2 * mixture + long_bubble_ft_s(flow, pipe);
        let slug_void = flow.gas_velocity_ft_s / (1.394 + 2.65 * mixture);
        let slug_holdup = 1.0 - slug_void;
        let slug_gas_ft_s = 1.2 * mixture + small_bubble_ft_s(flow) * slug_holdup.sqrt();
        // What the slug carries of liquid, per cross-section.
        let liquid = mixture - slug_void * slug_gas_ft_s;
        let slug_liquid_ft_s = liquid / slug_holdup;
        // The film falls by the component of gravity along the pipe.
        let k = 9.916 * (GRAVITY_FT_S2 * pipe.diameter_ft * pipe.sin_inclination.max(0.0)).sqrt();
        let w = film_root(bubble_ft_s, k, bubble_ft_s * slug_holdup - liquid);
        let film_holdup = w * w * (2.0 - w * w);
        let film_ft_s = k * w;
        let bubble_part = (liquid - flow.liquid_velocity_ft_s) / (liquid + film_ft_s * film_holdup).max(1e-12);
        let slug_density = flow.density_at_holdup_lb_ft3(slug_holdup);
        let viscosity_cp = flow.liquid_viscosity_cp * slug_holdup + flow.gas_viscosity_cp * slug_void;
        Self {
            bubble_ft_s,
            slug_void,
            slug_gas_ft_s,
            slug_liquid_ft_s,
            film_holdup,
            film_ft_s,
            bubble_part,
            reynolds: pipe.reynolds(slug_density, mixture, viscosity_cp),
        }
    }

    /// Liquid holdup that weighs: that of the whole unit without the film.
    #[inline]
    pub fn weighing_holdup(&self) -> f64 {
        (1.0 - self.bubble_part) * (1.0 - self.slug_void)
    }

    /// Liquid holdup of the whole unit.
    pub fn holdup(&self) -> f64 {
        self.weighing_holdup() + self.bubble_part * self.film_holdup
    }

    /// Gas that the unit carries beyond what flows, ft/s: zero, since the liquid balances.
    pub fn gas_residual_ft_s(&self, flow: &Flow) -> f64 {
        // The gas around the falling film moves at the velocity that keeps the volume flux.
        let flux = self.slug_void * self.slug_gas_ft_s + (1.0 - self.slug_void) * self.slug_liquid_ft_s;
        let bubble_gas = flux + self.film_holdup * self.film_ft_s;
        (1.0 - self.bubble_part) * self.slug_void * self.slug_gas_ft_s + self.bubble_part * bubble_gas
            - flow.gas_velocity_ft_s
    }

    /// The gradient.
    #[inline]
    pub(super) fn gradient(&self, flow: &Flow, pipe: &Pipe, laminar: bool) -> Gradient {
        let density = flow.density_at_holdup_lb_ft3(1.0 - self.slug_void);
        let slug_part = 1.0 - self.bubble_part;
        let moody = pipe.roughness.moody(self.reynolds, laminar);
        let holdup = self.weighing_holdup();
        let weight = flow.density_at_holdup_lb_ft3(holdup);
        Gradient {
            gravity_psi_ft: pipe.gravity_psi_ft(weight),
            friction_psi_ft: slug_part * pipe.friction_psi_ft(moody, density, flow.mixture_velocity_ft_s()),
            kinetic: flow.kinetic(weight),
            holdup,
            margin: laminar_margin(self.reynolds, laminar),
            course: Course::FREE,
        }
    }
}
