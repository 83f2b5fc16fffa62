//! The tank as the user states it.

use super::AquiferSpec;
use super::WaterTrend;
use crate::rock::CoreySpec;

/// How the water that flows to the wells is computed.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum WaterModel {
    /// None flows: the water in the tank is connate.
    Connate,
    /// Fractional flow at the tank's average saturation.
    Average,
    /// A front through the contacted volume, by Buckley, Leverett and Welge.
    Displacement,
    /// A table that the user states.
    Trend,
}

/// What the water models go by.
#[derive(Debug, Clone, PartialEq)]
pub struct WaterSpec {
    /// Part of the oil zone's pore volume that inflowing water comes to; of the model "displacement".
    pub contacted_fraction: f64,
    /// Table of the model "trend".
    pub trend: Option<WaterTrend>,
}

impl Default for WaterSpec {
    /// A volumetric sweep of 0.6, as waterfloods at moderate mobility ratios come to: a common-practice figure, not data.
    fn default() -> Self {
        Self { contacted_fraction: 0.6, trend: None }
    }
}

/// What the tank had made before the forecast begins; surface volumes.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct ProducedSpec {
    /// Oil, STB.
    pub oil_stb: f64,
    /// Gas, scf.
    pub gas_scf: f64,
    /// Water, STB.
    pub water_stb: f64,
    /// Water injected that supports the tank, STB: without what was lost elsewhere.
    pub injected_water_stb: f64,
    /// Gas injected that supports the tank, scf.
    pub injected_gas_scf: f64,
    /// Water that had come from the aquifer, STB; a pot's follows from the pressure.
    pub aquifer_stb: f64,
    /// Measured reservoir pressure at the start of the forecast, psia: compared, not imposed.
    pub measured_pressure_psia: Option<f64>,
}

/// The tank as the user states it, in oilfield units.
#[derive(Debug, Clone, PartialEq)]
pub struct TankSpec {
    /// Oil initially in place, STB.
    pub oil_in_place_stb: f64,
    /// Initial pressure at the datum, psia.
    pub pressure_psia: f64,
    /// Temperature, degF.
    pub temperature_degf: f64,
    /// Connate water saturation, fraction.
    pub connate_water: f64,
    /// Pore compressibility, 1/psi; unused where there is a compaction table.
    pub pore_compressibility_1_psi: f64,
    /// Pressure, psia, and pore volume over that at any one pressure, by rising pressure; empty: the constant compressibility.
    pub compaction: Vec<(f64, f64)>,
    /// Aquifer.
    pub aquifer: Option<AquiferSpec>,
    /// Primary gas-cap volume over oil-zone volume at initial conditions.
    pub gas_cap_ratio: f64,
    /// True vertical depth at which the pressure is stated, ft; `None`: each well's perforations.
    pub datum_tvd_ft: Option<f64>,
    /// What the tank made before the forecast begins.
    pub produced: Option<ProducedSpec>,
    /// How water reaches the wells.
    pub water_model: WaterModel,
    /// What the water model goes by.
    pub water: WaterSpec,
    /// Relative permeability.
    pub relative_permeability: CoreySpec,
}
