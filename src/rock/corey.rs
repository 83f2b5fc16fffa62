//! Corey's power-law relative permeabilities.
//!
//! ```text
//! krg  = gas_end  *((Sg - Sgc)/(1 - Swc - Sorg - Sgc))^ng      zero up to Sgc
//! krog = oil_end  *((So - Sorg)/(1 - Swc - Sorg))^no
//! krow = oil_end  *((So - Sorw)/(1 - Swc - Sorw))^no
//! krw  = water_end*((Sw - Swc)/(1 - Swc - Sorw))^nw            each clipped to [0, end]
//! ```
//!
//! # Source
//! Corey (1954), Producers Monthly; end points and exponents as customary since Brooks and Corey (1964).

use super::FractionalFlow;

/// End points and exponents of Corey's curves; saturations and relative permeabilities are fractions.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CoreySpec {
    /// Gas saturation up to which free gas does not flow.
    pub critical_gas: f64,
    /// Oil left behind by gas.
    pub residual_oil_to_gas: f64,
    /// Oil left behind by water.
    pub residual_oil_to_water: f64,
    /// Oil relative permeability at connate water.
    pub oil_end: f64,
    /// Gas relative permeability at residual oil.
    pub gas_end: f64,
    /// Water relative permeability at residual oil.
    pub water_end: f64,
    /// Exponent of the oil curves.
    pub oil_exponent: f64,
    /// Exponent of the gas curve.
    pub gas_exponent: f64,
    /// Exponent of the water curve.
    pub water_exponent: f64,
}

impl Default for CoreySpec {
    /// Figures of the right order for a water-wet sandstone; a common-practice starting point, not data.
    fn default() -> Self {
        Self {
            critical_gas: 0.05,
            residual_oil_to_gas: 0.25,
            residual_oil_to_water: 0.28,
            oil_end: 0.9,
            gas_end: 0.7,
            water_end: 0.35,
            oil_exponent: 2.5,
            gas_exponent: 2.0,
            water_exponent: 3.0,
        }
    }
}

/// Corey's curves, prepared for one connate water saturation.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Corey {
    spec: CoreySpec,
    connate_water: f64,
    gas_range: f64,
    oil_gas_range: f64,
    oil_water_range: f64,
}

impl Corey {
    /// Prepares the curves; the ranges are positive in a checked scenario.
    pub fn new(spec: &CoreySpec, connate_water: f64) -> Self {
        Self {
            spec: *spec,
            connate_water,
            gas_range: 1.0 - connate_water - spec.residual_oil_to_gas - spec.critical_gas,
            oil_gas_range: 1.0 - connate_water - spec.residual_oil_to_gas,
            oil_water_range: 1.0 - connate_water - spec.residual_oil_to_water,
        }
    }

    pub(super) fn krg(&self, sg: f64) -> f64 {
        power(self.spec.gas_end, (sg - self.spec.critical_gas) / self.gas_range, self.spec.gas_exponent)
    }

    pub(super) fn krog(&self, so: f64) -> f64 {
        power(self.spec.oil_end, (so - self.spec.residual_oil_to_gas) / self.oil_gas_range, self.spec.oil_exponent)
    }

    fn krow(&self, so: f64) -> f64 {
        power(self.spec.oil_end, (so - self.spec.residual_oil_to_water) / self.oil_water_range, self.spec.oil_exponent)
    }

    pub(super) fn krw(&self, sw: f64) -> f64 {
        power(self.spec.water_end, (sw - self.connate_water) / self.oil_water_range, self.spec.water_exponent)
    }

    pub(super) fn kro(&self, so: f64, sg: f64, sw: f64) -> f64 {
        let water = (sw - self.connate_water).max(0.0);
        let gas = sg.max(0.0);
        if water <= 0.0 {
            self.krog(so)
        } else if gas <= 0.0 {
            self.krow(so)
        } else {
            (water * self.krow(so) + gas * self.krog(so)) / (water + gas)
        }
    }

    pub(super) fn displacement(&self, mu_o_cp: f64, mu_w_cp: f64) -> FractionalFlow {
        let ratio = self.spec.water_end * mu_o_cp / (self.spec.oil_end * mu_w_cp);
        FractionalFlow::new(ratio, self.spec.water_exponent, self.spec.oil_exponent)
    }

    pub(super) fn movable_to_water(&self) -> f64 {
        self.oil_water_range
    }

    pub(super) fn critical_gas(&self) -> f64 {
        self.spec.critical_gas
    }

    pub(super) fn residual_oil_to_gas(&self) -> f64 {
        self.spec.residual_oil_to_gas
    }
}

fn power(end: f64, x: f64, exponent: f64) -> f64 {
    if x <= 0.0 { 0.0 } else { end * x.min(1.0).powf(exponent) }
}
