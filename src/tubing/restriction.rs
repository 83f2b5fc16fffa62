//! Pressure loss across a short piece of smaller inside diameter.
//!
//! Homogeneous flow of frozen composition through a throat, the gas expanding as a polytrope of the mixture:
//!
//! ```text
//! n  = 1 + fg z R/M / (fg Cvg + fl Cl)                         Cvg = z R/[M (k - 1)]
//! V  = fg v1 y^(-1/n) + fl/rhoL                                volume of a pound at the pressure ratio y = p3/p1
//! e  = fg v1 n/(n - 1) (1 - y^((n-1)/n)) + fl/rhoL (1 - y)     work of expansion over p1
//! G  = Cd [2 gc 144 p1 e/(V^2 - a^2 V1^2)]^1/2                 mass flux in the throat; a: throat over approach
//! p1 - p4 = (p1 - p3) (1 - beta^1.85)                          what the widening above does not give back
//! ```
//!
//! fg, fl mass shares, v1 and V1 volumes of gas and mixture upstream (p1), p3 in the throat, p4 after recovery, beta throat over pipe
//! diameter. G has its maximum at a critical y; a stream that needs more flux than that raises p1 until it passes, and
//! is told. Given p4 (the march down) p1 follows, given p1 (up) p4.
//!
//! # Limitation
//! Sharp and short pieces with both phases mixed; no slip, no flashing within the throat, no friction along its length. k = 1.25;
//! oil holds 0.5 and water 1 Btu/lb/degF: the loss depends on them little. Cd = 0.826 is the mean of Perkins' 1,432 tests of
//! chokes; a smooth nipple may reach 0.95, and where a test exists it should set it.
//!
//! # Source
//! Perkins, SPE Drilling and Completion (Dec. 1993) 271: equations, recovery and Cd, from memory of the paper.

use super::march::March;
use super::model::{Hydraulics, IN2_PER_FT2};
use super::path::Stretch;
use crate::roots::brent;
use crate::units::constants::{DEGF_TO_DEGR, GRAVITY_FT_S2};

/// Mean coefficient of discharge of Perkins' tests.
pub const DISCHARGE: f64 = 0.826;
/// Ratio of the heat capacities of hydrocarbon gas.
const GAS_EXPONENT: f64 = 1.25;
/// ft lbf in a Btu.
const FT_LBF_PER_BTU: f64 = 778.17;
/// Exponent of the recovery.
const RECOVERY: f64 = 1.85;
/// A throat that would need more is taken as closed, psia.
const MOST_PRESSURE_PSIA: f64 = 1e6;
/// Smallest ratio that the critical one is looked for at.
const LEAST_RATIO: f64 = 1e-4;

/// The mixture upstream of a throat.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Mixture {
    /// Volume of the gas in a pound of mixture, ft3/lb.
    pub gas_ft3_lb: f64,
    /// Volume of the liquid in a pound of mixture, ft3/lb.
    pub liquid_ft3_lb: f64,
    /// (n - 1)/n of the polytrope.
    pub exponent: f64,
}

impl Mixture {
    /// A mixture with the mass share `gas_share` of gas, of density in lb/ft3, at a pressure, psia, and a temperature, degF;
    /// the liquid holds `liquid_btu_lb_degf`.
    pub fn new(
        gas_share: f64,
        (gas_lb_ft3, liquid_lb_ft3): (f64, f64),
        pressure_psia: f64,
        temperature_degf: f64,
        liquid_btu_lb_degf: f64,
    ) -> Self {
        let gas_constant =
            pressure_psia * IN2_PER_FT2 / (gas_lb_ft3 * (temperature_degf + DEGF_TO_DEGR)) / FT_LBF_PER_BTU;
        let held = gas_share * gas_constant / (GAS_EXPONENT - 1.0) + (1.0 - gas_share) * liquid_btu_lb_degf;
        let excess = gas_share * gas_constant / held;
        Self {
            gas_ft3_lb: gas_share / gas_lb_ft3,
            liquid_ft3_lb: (1.0 - gas_share) / liquid_lb_ft3,
            exponent: excess / (1.0 + excess),
        }
    }

    /// V^2 - a^2 V1^2, e and -V dV/dy at a pressure ratio.
    fn terms(&self, ratio: f64, approach: f64) -> (f64, f64, f64) {
        let ln = ratio.ln();
        let m = self.exponent;
        // y^(-1/n) = y^(m - 1)
        let expanded = self.gas_ft3_lb * ((m - 1.0) * ln).exp();
        let volume = expanded + self.liquid_ft3_lb;
        let before = self.gas_ft3_lb + self.liquid_ft3_lb;
        let series = if m > 1e-9 { -(m * ln).exp_m1() / m } else { -ln };
        let work = self.gas_ft3_lb * series + self.liquid_ft3_lb * (1.0 - ratio);
        let per_ratio = (1.0 - m) * expanded / ratio;
        (volume * volume - (approach * before).powi(2), work, per_ratio)
    }

    /// Square of the frictionless mass flux over 2 gc 144 p1, lb2/ft6.
    pub fn flux_squared(&self, ratio: f64, approach: f64) -> f64 {
        let (squares, work, _) = self.terms(ratio, approach);
        work / squares
    }

    /// Positive on the side of the critical ratio where a lower pressure behind draws more; relative.
    fn above_critical(&self, ratio: f64, approach: f64) -> f64 {
        let (squares, work, per_ratio) = self.terms(ratio, approach);
        1.0 - 2.0 * work * per_ratio / squares
    }

    /// The pressure ratio of the largest flux.
    pub fn critical_ratio(&self, approach: f64) -> f64 {
        let at = |ratio: f64| self.above_critical(ratio, approach);
        let (low, high) = (at(LEAST_RATIO), at(1.0));
        if low >= 0.0 { LEAST_RATIO } else { brent(at, (LEAST_RATIO, low), (1.0, high), 1e-12) }
    }

    /// A ratio, or the critical one if it is lower than that.
    fn held_ratio(&self, ratio: f64, approach: f64) -> (f64, bool) {
        if ratio > LEAST_RATIO && self.above_critical(ratio, approach) >= 0.0 {
            (ratio, false)
        } else {
            (self.critical_ratio(approach), true)
        }
    }
}

/// A restriction between two stretches, prepared.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Throat {
    /// Cross-section over that of the pipe above.
    share_above: f64,
    /// Cross-section over that of the pipe below.
    approach: f64,
    /// Share of the drop to the throat that is lost.
    lost: f64,
    discharge: f64,
}

impl Throat {
    /// `above_ft2` and `below_ft2` are the cross-sections of the pipe on both sides.
    pub fn new(diameter_in: f64, discharge: f64, above_ft2: f64, below_ft2: f64) -> Self {
        let area_ft2 = std::f64::consts::PI * diameter_in * diameter_in / (4.0 * IN2_PER_FT2);
        let share_above = area_ft2 / above_ft2;
        Self { share_above, approach: area_ft2 / below_ft2, lost: 1.0 - share_above.powf(0.5 * RECOVERY), discharge }
    }

    /// Mixture at the throat for a pressure below it, and the square of its mass flux over 2 gc 144 Cd^2, psi lb/ft3.
    fn upstream<M: Hydraulics>(
        &self,
        march: &March<'_, M>,
        stretch: &Stretch,
        md_ft: f64,
        psia: f64,
    ) -> (Mixture, f64) {
        let flow = march.flow(stretch, md_ft, psia);
        let gas = flow.gas_velocity_ft_s * flow.gas_density_lb_ft3;
        let flux = gas + flow.liquid_velocity_ft_s * flow.liquid_density_lb_ft3;
        let mixture = Mixture::new(
            gas / flux,
            (flow.gas_density_lb_ft3, flow.liquid_density_lb_ft3),
            flow.pressure_psia,
            stretch.temperature_degf(md_ft),
            march.liquid_btu_lb_degf(),
        );
        let in_throat = flux / (self.share_above * self.discharge);
        (mixture, in_throat * in_throat / (2.0 * GRAVITY_FT_S2 * IN2_PER_FT2))
    }

    /// Pressure below the restriction from the one above it, psia, and whether the flow in it is critical.
    pub fn down<M: Hydraulics>(&self, march: &March<'_, M>, stretch: &Stretch, md_ft: f64, psia: f64) -> (f64, bool) {
        if march.at_rest() {
            return (psia, false);
        }
        let mut critical = false;
        // Positive where the flux that the pressures draw is more than the stream's.
        let mut margin = |below_psia: f64| {
            let (mixture, needed) = self.upstream(march, stretch, md_ft, below_psia);
            let ratio = 1.0 - (1.0 - psia / below_psia) / self.lost;
            let (ratio, held) = mixture.held_ratio(ratio, self.approach);
            critical = held;
            below_psia * mixture.flux_squared(ratio, self.approach) - needed
        };
        let mut low = (psia, margin(psia));
        let mut step = {
            let (mixture, needed) = self.upstream(march, stretch, md_ft, psia);
            let volume = mixture.gas_ft3_lb + mixture.liquid_ft3_lb;
            1.2 * self.lost * needed * volume * (1.0 - self.approach * self.approach) + 1e-9
        };
        loop {
            let high_psia = (low.0 + step).min(MOST_PRESSURE_PSIA);
            let high = (high_psia, margin(high_psia));
            if high.1 >= 0.0 {
                let below_psia = brent(&mut margin, low, high, 1e-10 * high_psia);
                margin(below_psia);
                return (below_psia, critical);
            }
            if high_psia >= MOST_PRESSURE_PSIA {
                return (MOST_PRESSURE_PSIA, true);
            }
            low = high;
            step *= 2.0;
        }
    }

    /// Pressure above the restriction from the one below it; `None`: the stream does not pass.
    pub fn up<M: Hydraulics>(&self, march: &March<'_, M>, stretch: &Stretch, md_ft: f64, psia: f64) -> Option<f64> {
        if march.at_rest() {
            return Some(psia);
        }
        let (mixture, needed) = self.upstream(march, stretch, md_ft, psia);
        let margin = |ratio: f64| psia * mixture.flux_squared(ratio, self.approach) - needed;
        let critical = mixture.critical_ratio(self.approach);
        let most = margin(critical);
        if most < 0.0 {
            return None;
        }
        let ratio = brent(margin, (critical, most), (1.0, -needed), 1e-13);
        Some(psia * (1.0 - self.lost * (1.0 - ratio)))
    }
}
