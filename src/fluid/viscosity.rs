//! The oil's viscosity by the chosen correlations, tuned to what was measured.
//!
//! # Tuning
//! A measured dead-oil viscosity multiplies the dead oil's at every temperature. A measured viscosity at the bubble point multiplies the live oil's:
//! by one factor k where the dead oil's was not measured, else by `k^w`, `w = 2 Rs/(Rs + Rsi)`, which is one at the bubble
//! point and fades to the measured dead oil without gas.

use super::beggs_robinson::BeggsRobinson;
use super::correlations::{DeadOilCorrelation, LiveOilCorrelation};
use super::{FluidSpec, beal_standing, chew_connally, glaso};
use crate::elementary::exp;

/// The viscosity of one oil.
#[derive(Debug, Clone, Copy)]
pub(super) struct OilViscosity {
    dead: DeadOilCorrelation,
    live: LiveOilCorrelation,
    beggs_robinson: BeggsRobinson,
    oil_gravity_api: f64,
    ln_dead_factor: f64,
    ln_live_factor: f64,
    /// Rsi of the fading; `None`: one factor for all.
    fades_from_scf_stb: Option<f64>,
}

impl OilViscosity {
    pub fn new(spec: &FluidSpec, tank_temperature_degf: f64) -> Self {
        let mut oil = Self {
            dead: spec.correlations.dead_oil,
            live: spec.correlations.live_oil,
            beggs_robinson: BeggsRobinson::new(spec.oil_gravity_api),
            oil_gravity_api: spec.oil_gravity_api,
            ln_dead_factor: 0.0,
            ln_live_factor: 0.0,
            fades_from_scf_stb: None,
        };
        let rs = spec.solution_gor_scf_stb;
        if let Some(measured_cp) = spec.dead_oil_mu_cp {
            oil.ln_dead_factor = measured_cp.ln() - oil.ln_dead_cp(tank_temperature_degf);
            oil.fades_from_scf_stb = spec.bubble_point_mu_o_cp.map(|_| rs);
        }
        if let Some(measured_cp) = spec.bubble_point_mu_o_cp {
            oil.ln_live_factor = (measured_cp / oil.live_cp(oil.ln_dead_cp(tank_temperature_degf), rs)).ln();
        }
        oil
    }

    /// Measured over correlated dead oil.
    pub fn dead_factor(&self) -> f64 {
        self.ln_dead_factor.exp()
    }

    /// Measured over correlated oil at the bubble point.
    pub fn live_factor(&self) -> f64 {
        self.ln_live_factor.exp()
    }

    /// Logarithm of the dead oil's viscosity in cp.
    pub fn ln_dead_cp(&self, temperature_degf: f64) -> f64 {
        let ln_dead_cp = match self.dead {
            DeadOilCorrelation::BeggsRobinson => self.beggs_robinson.dead_cp(temperature_degf.ln()).ln(),
            DeadOilCorrelation::Beal => {
                beal_standing::dead_oil_viscosity_cp(self.oil_gravity_api, temperature_degf).ln()
            }
            DeadOilCorrelation::Glaso => glaso::dead_oil_viscosity_cp(self.oil_gravity_api, temperature_degf).ln(),
        };
        ln_dead_cp + self.ln_dead_factor
    }

    /// Whether the live oil's coefficients have a corner, which prepared functions would round off.
    #[inline]
    pub fn has_corner(&self) -> bool {
        self.live == LiveOilCorrelation::ChewConnally
    }

    /// a and b of a mu_dead^b.
    #[inline]
    pub fn live_coefficients(&self, rs_scf_stb: f64) -> (f64, f64) {
        let (a, b) = match self.live {
            LiveOilCorrelation::BeggsRobinson => BeggsRobinson::live_coefficients(rs_scf_stb),
            LiveOilCorrelation::ChewConnally => chew_connally::live_coefficients(rs_scf_stb),
        };
        if self.ln_live_factor == 0.0 {
            return (a, b);
        }
        let weight = self.fades_from_scf_stb.map_or(1.0, |rsi| 2.0 * rs_scf_stb / (rs_scf_stb + rsi));
        (a * exp(weight * self.ln_live_factor), b)
    }

    /// Viscosity of saturated oil, cp.
    #[inline]
    pub fn live_cp(&self, ln_dead_cp: f64, rs_scf_stb: f64) -> f64 {
        let (a, b) = self.live_coefficients(rs_scf_stb);
        a * exp(b * ln_dead_cp)
    }
}
