//! Outside which stated range of its model a traverse runs.
//!
//! Evaluated on demand, never while integrating. A model states what its source states; "none" is infinite.

use super::groups::LnGroups;
use super::model::{Flow, Gradient, Pipe};
use super::traverse::Stream;

/// What a model is said to hold for.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ValidRange {
    /// Smallest and largest inside diameter, in.
    pub diameter_in: (f64, f64),
    /// Largest deviation from vertical, degrees.
    pub deviation_deg: f64,
    /// Largest mixture velocity, ft/s.
    pub mixture_velocity_ft_s: f64,
    /// Largest viscosity of the liquid, cp.
    pub liquid_viscosity_cp: f64,
    /// Largest liquid viscosity number NL.
    pub viscosity_number: f64,
    /// Largest produced gas over produced liquid, scf/STB.
    pub gas_liquid_ratio_scf_stb: f64,
    /// Largest produced liquid over produced gas, bbl/MMscf.
    pub liquid_gas_ratio_bbl_mmscf: f64,
    /// Largest kinetic term Ek: nearer to sonic velocity no model here holds.
    pub kinetic: f64,
}

impl ValidRange {
    /// No limit but that of the kinetic term.
    pub const OPEN: Self = Self {
        diameter_in: (0.0, f64::INFINITY),
        deviation_deg: f64::INFINITY,
        mixture_velocity_ft_s: f64::INFINITY,
        liquid_viscosity_cp: f64::INFINITY,
        viscosity_number: f64::INFINITY,
        gas_liquid_ratio_scf_stb: f64::INFINITY,
        liquid_gas_ratio_bbl_mmscf: f64::INFINITY,
        kinetic: 0.5,
    };
}

/// The quantity that leaves its range.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Limited {
    /// Inside diameter, in.
    Diameter,
    /// Deviation from vertical, degrees.
    Deviation,
    /// Mixture velocity, ft/s.
    MixtureVelocity,
    /// Viscosity of the liquid, cp.
    LiquidViscosity,
    /// Liquid viscosity number NL of Duns and Ros.
    ViscosityNumber,
    /// Produced gas over liquid, scf/STB.
    GasLiquidRatio,
    /// Produced liquid over gas, bbl/MMscf.
    LiquidGasRatio,
    /// Kinetic term Ek.
    Kinetic,
}

impl Limited {
    /// In words, with the unit of the values beside it.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Diameter => "inside diameter (in)",
            Self::Deviation => "deviation from vertical (degrees)",
            Self::MixtureVelocity => "mixture velocity (ft/s)",
            Self::LiquidViscosity => "liquid viscosity (cp)",
            Self::ViscosityNumber => "liquid viscosity number",
            Self::GasLiquidRatio => "gas-liquid ratio (scf/STB)",
            Self::LiquidGasRatio => "liquid-gas ratio (bbl/MMscf)",
            Self::Kinetic => "kinetic term (share of the gradient)",
        }
    }
}

/// One quantity outside the range that the model states.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct OutsideRange {
    /// Which.
    pub what: Limited,
    /// The value farthest outside, along the traverse.
    pub found: f64,
    /// The limit that it passes.
    pub limit: f64,
}

/// Collects what leaves a range.
pub(super) struct RangeCheck {
    range: ValidRange,
    found: Vec<OutsideRange>,
}

impl RangeCheck {
    /// Checks what the stream alone tells.
    pub fn new(range: ValidRange, stream: &Stream) -> Self {
        let mut check = Self { range, found: Vec::new() };
        let gas_scf_stb = stream.gor_scf_stb.max(0.0) * (1.0 - stream.water_cut).clamp(0.0, 1.0);
        check.above(Limited::GasLiquidRatio, gas_scf_stb, range.gas_liquid_ratio_scf_stb);
        check.above(Limited::LiquidGasRatio, 1e6 / gas_scf_stb, range.liquid_gas_ratio_bbl_mmscf);
        check
    }

    /// Checks a point of the traverse. Liquid alone is in every model's range as far as the model goes.
    pub fn point(&mut self, flow: &Flow, pipe: &Pipe, gradient: &Gradient) {
        if flow.gas_velocity_ft_s <= 0.0 {
            return;
        }
        let (least_in, most_in) = self.range.diameter_in;
        // Diameters pass through feet: a little slack, so that a limit itself is inside.
        let diameter_in = pipe.diameter_ft * 12.0;
        self.above(Limited::Diameter, diameter_in, most_in * (1.0 + 1e-9));
        if diameter_in < least_in * (1.0 - 1e-9) {
            self.worst(Limited::Diameter, diameter_in, least_in, |new, old| new < old);
        }
        let deviation_deg = pipe.sin_inclination.clamp(-1.0, 1.0).acos().to_degrees();
        self.above(Limited::Deviation, deviation_deg, self.range.deviation_deg);
        self.above(Limited::MixtureVelocity, flow.mixture_velocity_ft_s(), self.range.mixture_velocity_ft_s);
        self.above(Limited::LiquidViscosity, flow.liquid_viscosity_cp, self.range.liquid_viscosity_cp);
        let viscosity_number = LnGroups::new(flow, pipe).viscosity.exp();
        self.above(Limited::ViscosityNumber, viscosity_number, self.range.viscosity_number);
        self.above(Limited::Kinetic, gradient.kinetic, self.range.kinetic);
    }

    /// What was found.
    pub fn found(self) -> Vec<OutsideRange> {
        self.found
    }

    fn above(&mut self, what: Limited, found: f64, limit: f64) {
        if found > limit {
            self.worst(what, found, limit, |new, old| new > old);
        }
    }

    fn worst(&mut self, what: Limited, found: f64, limit: f64, worse: fn(f64, f64) -> bool) {
        match self.found.iter_mut().find(|known| known.what == what) {
            Some(known) if worse(found, known.found) => (known.found, known.limit) = (found, limit),
            Some(_) => {}
            None => self.found.push(OutsideRange { what, found, limit }),
        }
    }
}
