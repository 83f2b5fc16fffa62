//! Corey's power-law relative permeabilities.

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

/// Placeholder until the curves are written.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct RelativePermeability;
