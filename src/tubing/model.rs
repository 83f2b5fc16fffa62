//! What every hydraulics model gets and gives.

use super::ValidRange;
use super::friction::{LAMINAR_REYNOLDS, Roughness};
use crate::units::constants::GRAVITY_FT_S2;

/// lbm/s2 in a dyn/cm is its reciprocal.
pub(crate) const DYN_CM_PER_LBM_S2: f64 = 453.592;
/// Square inches in a square foot.
pub(crate) const IN2_PER_FT2: f64 = 144.0;
/// Reynolds number constant for lb/ft3, ft/s, ft and cp.
pub(crate) const REYNOLDS: f64 = 1488.0;

/// A stretch of pipe as the models see it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Pipe {
    /// Inside diameter, ft.
    pub diameter_ft: f64,
    /// Friction.
    pub roughness: Roughness,
    /// Sine of the angle from horizontal, 1 = vertical upward flow.
    pub sin_inclination: f64,
    /// Cosine of the angle from horizontal.
    pub cos_inclination: f64,
    /// Rise velocity of long bubbles against that in vertical pipe: sqrt(sin)*(1 + cos)^1.2, 0 for downward flow.
    pub long_bubble_factor: f64,
    /// m(th) of the drift flux of Shi et al.
    pub drift_flux_factor: f64,
    /// Absolute roughness, ft.
    pub roughness_ft: f64,
    /// sin(1.8 th) - sin(1.8 th)^3/3 of Beggs and Brill.
    pub beggs_brill_factor: f64,
    /// 1/(2 gc d 144), the constant of the friction gradient.
    friction_constant: f64,
    /// Natural logarithm of the diameter in ft.
    pub ln_diameter: f64,
}

impl Pipe {
    /// A pipe of the given inside diameter and absolute roughness, in., at an angle from horizontal given by its sine.
    pub fn new(diameter_in: f64, roughness_in: f64, sin_inclination: f64) -> Self {
        let sin = sin_inclination.clamp(-1.0, 1.0);
        let cos = (1.0 - sin * sin).sqrt();
        let reduced = (1.8 * sin.asin()).sin();
        let diameter_ft = diameter_in / 12.0;
        Self {
            diameter_ft,
            roughness: Roughness::new(roughness_in / diameter_in),
            sin_inclination: sin,
            cos_inclination: cos,
            long_bubble_factor: sin.max(0.0).sqrt() * (1.0 + cos).powf(1.2),
            drift_flux_factor: super::drift_flux::Parameters::FITTED.inclination(sin, cos),
            roughness_ft: roughness_in / 12.0,
            beggs_brill_factor: reduced - reduced.powi(3) / 3.0,
            friction_constant: 1.0 / (2.0 * GRAVITY_FT_S2 * IN2_PER_FT2 * diameter_ft),
            ln_diameter: diameter_ft.ln(),
        }
    }

    /// Friction gradient `f rho v^2/(2 gc d)`, psi/ft, with the Moody factor.
    #[inline]
    pub(crate) fn friction_psi_ft(&self, moody: f64, density_lb_ft3: f64, velocity_ft_s: f64) -> f64 {
        moody * density_lb_ft3 * velocity_ft_s * velocity_ft_s * self.friction_constant
    }

    /// Gravity gradient along the pipe, psi/ft.
    #[inline]
    pub(crate) fn gravity_psi_ft(&self, density_lb_ft3: f64) -> f64 {
        density_lb_ft3 * self.sin_inclination * (1.0 / IN2_PER_FT2)
    }

    /// Reynolds number.
    #[inline]
    pub(crate) fn reynolds(&self, density_lb_ft3: f64, velocity_ft_s: f64, viscosity_cp: f64) -> f64 {
        REYNOLDS * density_lb_ft3 * velocity_ft_s * self.diameter_ft / viscosity_cp
    }
}

/// The flow at one point of the pipe.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Flow {
    /// Superficial velocity of liquid, ft/s.
    pub liquid_velocity_ft_s: f64,
    /// Superficial velocity of gas, ft/s.
    pub gas_velocity_ft_s: f64,
    /// Liquid share of the flowing volume; stated apart from the velocities, since it has a value at zero rate too.
    pub no_slip_holdup: f64,
    /// Density of the liquid, lb/ft3.
    pub liquid_density_lb_ft3: f64,
    /// Density of the gas, lb/ft3.
    pub gas_density_lb_ft3: f64,
    /// Viscosity of the liquid, cp.
    pub liquid_viscosity_cp: f64,
    /// Viscosity of the gas, cp.
    pub gas_viscosity_cp: f64,
    /// Surface tension between gas and liquid, dyn/cm.
    pub tension_dyn_cm: f64,
    /// Pressure, psia.
    pub pressure_psia: f64,
}

impl Flow {
    /// Velocity of the mixture, ft/s.
    #[inline]
    pub fn mixture_velocity_ft_s(&self) -> f64 {
        self.liquid_velocity_ft_s + self.gas_velocity_ft_s
    }

    /// Density of the mixture at a liquid holdup, lb/ft3.
    #[inline]
    pub fn density_at_holdup_lb_ft3(&self, holdup: f64) -> f64 {
        self.liquid_density_lb_ft3 * holdup + self.gas_density_lb_ft3 * (1.0 - holdup)
    }

    /// Density of the mixture without slip, lb/ft3.
    #[inline]
    pub fn no_slip_density_lb_ft3(&self) -> f64 {
        self.density_at_holdup_lb_ft3(self.no_slip_holdup)
    }

    /// The kinetic term Ek = rho vm vSg/(gc p), with the mixture density that the model uses.
    #[inline]
    pub fn kinetic(&self, density_lb_ft3: f64) -> f64 {
        density_lb_ft3 * self.mixture_velocity_ft_s() * self.gas_velocity_ft_s * (1.0 / (GRAVITY_FT_S2 * IN2_PER_FT2))
            / self.pressure_psia
    }
}

/// Which branch of its piecewise formulas a model is on: a bit set whose meaning is the model's own, apart from
/// the two lowest bits and those from the seventeenth on.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Branch(pub u32);

impl Branch {
    /// No free gas.
    pub const SINGLE_PHASE: u32 = 1;
    /// Reynolds number below 2,100.
    pub const LAMINAR: u32 = 2;
    /// Holdup held at 1 by the slip factor; set and used by the march, not by the models.
    pub const SLIP_CEILING: u32 = 0x1_0000;
    /// Kinetic term held at its limit; set and used by the march, not by the models.
    pub const NEAR_SONIC: u32 = 0x2_0000;
    /// Tension of oil at its floor; set and used by the march, not by the models.
    pub const TENSION_FLOOR: u32 = 0x4_0000;

    /// Whether a bit is set.
    #[inline]
    pub fn has(self, bit: u32) -> bool {
        self.0 & bit != 0
    }
}

/// Relative changes of pressure that a step may make.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Course {
    /// Upwards in pressure: on the march down.
    pub rise: f64,
    /// Downwards in pressure: on the march up.
    pub fall: f64,
}

impl Course {
    /// No limit.
    pub const FREE: Self = Self { rise: f64::INFINITY, fall: f64::INFINITY };

    /// The same limit both ways.
    #[inline]
    pub fn both(change: f64) -> Self {
        Self { rise: change, fall: change }
    }

    /// The smaller of two.
    #[inline]
    pub fn min(self, other: Self) -> Self {
        Self { rise: self.rise.min(other.rise), fall: self.fall.min(other.fall) }
    }
}

/// The parts of the pressure gradient at one point.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Gradient {
    /// Weight of the mixture along the pipe, psi/ft.
    pub gravity_psi_ft: f64,
    /// Friction, psi/ft.
    pub friction_psi_ft: f64,
    /// Kinetic term Ek; the total gradient is (gravity + friction)/(1 - Ek).
    pub kinetic: f64,
    /// Liquid holdup.
    pub holdup: f64,
    /// How far inside its branch the flow is: positive inside, zero on the border, negative beyond it; continuous,
    /// of the order of a relative distance. It is by its sign change that the traverse finds the switches.
    pub margin: f64,
    /// The relative change of pressure over which the gradient may be expected to change its course; free where
    /// nothing but the fluid bends it.
    pub course: Course,
}

/// Ek at which the kinetic term is held (convention 4.8(13)).
pub const KINETIC_LIMIT: f64 = 0.9;

impl Gradient {
    /// Total gradient in the direction of increasing depth, psi/ft of pipe.
    #[inline]
    pub fn total_psi_ft(&self) -> f64 {
        (self.gravity_psi_ft + self.friction_psi_ft) / (1.0 - self.kinetic.min(KINETIC_LIMIT))
    }
}

/// A hydraulics model: the local flow gives the gradient.
///
/// The branch is chosen once and then held by the caller, who asks for the gradient on *that* branch also a
/// little beyond its border; the margin tells where the border is. Inside one branch the gradient is smooth.
pub trait Hydraulics {
    /// The branch that the flow is on.
    fn branch(&self, flow: &Flow, pipe: &Pipe) -> Branch;

    /// The gradient on a given branch.
    fn gradient(&self, flow: &Flow, pipe: &Pipe, branch: Branch) -> Gradient;

    /// What the model is said to hold for.
    fn range(&self) -> ValidRange {
        ValidRange::OPEN
    }

    /// Name of the flow pattern.
    fn pattern(&self, flow: &Flow, pipe: &Pipe) -> &'static str;
}

/// How far inside its flow regime a Reynolds number is, laminar or turbulent; saturated, so that it stays of the
/// order of one.
#[inline]
pub(crate) fn laminar_margin(reynolds: f64, laminar: bool) -> f64 {
    let above = (reynolds * (1.0 / LAMINAR_REYNOLDS) - 1.0).min(1.0);
    if laminar { -above } else { above }
}

/// The laminar bit of a Reynolds number.
#[inline]
pub(crate) fn laminar_bit(reynolds: f64) -> u32 {
    if reynolds < LAMINAR_REYNOLDS { Branch::LAMINAR } else { 0 }
}

/// A value that a fit holds to a range: which side of it the value lies on is part of the branch, since the corner
/// there would spoil a step across it.
#[derive(Clone, Copy)]
pub(crate) struct Range {
    pub low: f64,
    pub high: f64,
    /// Position of its two bits in the branch.
    pub shift: u32,
}

impl Range {
    /// The two bits of a value: within, below, above.
    #[inline]
    pub fn bits(self, x: f64) -> u32 {
        let code = if x < self.low {
            1
        } else if x > self.high {
            2
        } else {
            0
        };
        code << self.shift
    }

    /// Whether a branch is the one below the range.
    #[inline]
    pub fn is_below(self, branch: Branch) -> bool {
        (branch.0 >> self.shift) & 3 == 1
    }

    /// The value to use on a branch, and the margin to its border.
    #[inline]
    pub fn hold(self, x: f64, branch: Branch) -> (f64, f64) {
        match (branch.0 >> self.shift) & 3 {
            1 => (self.low, self.low - x),
            2 => (self.high, x - self.high),
            _ => (x, (x - self.low).min(self.high - x)),
        }
    }
}
