//! The fluid of published correlations, tuned to what was measured, under a laboratory's table where there is one.

use super::by_temperature::{AtTemperature, ByTemperature};
use super::capped::CappedOil;
use super::correlations::UndersaturatedCorrelation;
use super::dranchuk_abou_kassem::MAXIMUM_TPR;
use super::gas::{Gas, Isotherm};
use super::grid::Grid;
use super::lab::Lab;
use super::lee_gonzalez_eakin::LB_FT3_PER_G_CM3;
use super::mccain::McCainWater;
use super::saturated::SaturatedOil;
use super::viscosity::OilViscosity;
use super::{FluidSpec, InSitu, beal_standing, checks, oil_specific_gravity, osif, vasquez_beggs};
use crate::elementary::ln;
use crate::fault::Fault;
use crate::units::constants::{DEGF_TO_DEGR, FRESH_WATER_LB_FT3, FT3_PER_BBL};
use std::sync::{Arc, OnceLock};

/// The lowest and highest pressures of the model, psia (the upper one falls where z leaves its fit).
pub(super) const PRESSURE_RANGE_PSIA: (f64, f64) = (14.696, 15_000.0);
/// Properties below this pressure, psia, are those at it: a caller's trial step never meets a pole.
const PRESSURE_FLOOR_PSIA: f64 = 0.5;
/// Temperatures are held to this range, degF.
pub(super) const TEMPERATURE_RANGE_DEGF: (f64, f64) = (32.0, 500.0);
/// Below this pseudo-reduced temperature z bends too much for the grid.
const LEAST_GRID_TPR: f64 = 1.2;
/// The oil above a bubble point lower than this, psia, is compressed from here: A ln(p/pb) has no limit at zero.
const LEAST_BUBBLE_POINT_PSIA: f64 = 14.696;

/// Black oil, gas and water by the chosen correlations (unless said otherwise Standing, Vasquez-Beggs above the bubble point, Beggs-Robinson, Sutton,
/// Wichert-Aziz, Dranchuk-Abou-Kassem, Lee-Gonzalez-Eakin, McCain, Baker-Swerdloff).
///
/// As a [`ReservoirFluid`](super::ReservoirFluid) it answers at tank temperature; [`in_situ`](Self::in_situ) answers at any pressure and temperature.
#[derive(Debug, Clone)]
pub struct BlackOil {
    pub(super) spec: FluidSpec,
    pub(super) temperature_degf: f64,
    pub(super) tuning_factor: f64,
    inverse_tuning_factor: f64,
    pub(super) initial_bubble_point_psia: f64,
    pub(super) maximum_pressure_psia: f64,
    oil_specific_gravity: f64,
    /// Gas gravity of the Vasquez-Beggs equations: corrected to a 100 psig separator when its conditions are stated.
    separator_gas_gravity: f64,
    pub(super) oil: SaturatedOil,
    pub(super) viscosity: OilViscosity,
    pub(super) gas: Gas,
    pub(super) water: McCainWater,
    /// Density of stock-tank oil, lb/ft3.
    pub(super) oil_standard_density_lb_ft3: f64,
    /// Mass that a scf adds to a stock-tank barrel, lb/ft3 per scf/STB.
    pub(super) gas_mass_lb_ft3: f64,
    pub(super) tank: AtTank,
    pub(super) by_temperature: ByTemperature,
    /// Filled at the first use in situ; copies of the fluid share it.
    grid: Arc<OnceLock<Grid>>,
    /// Whether the grid is used at all.
    prepared: bool,
    lab: Option<Arc<Lab>>,
}

/// What depends only on the tank's temperature.
#[derive(Debug, Clone, Copy)]
pub(super) struct AtTank {
    pub temperature_degr: f64,
    pub isotherm: Isotherm,
    pub functions: AtTemperature,
}

impl BlackOil {
    /// Checks the fluid and prepares the correlations.
    ///
    /// # Errors
    /// All impossible values, keyed relative to the `[fluid]` table (`temperature` for the tank's), or a closure of the volume
    /// balance that would have several roots (see [`closure_is_monotone`](Self::closure_is_monotone)).
    pub fn new(spec: &FluidSpec, tank_temperature_degf: f64) -> Result<Self, Vec<Fault>> {
        let faults = checks::of_spec(spec, tank_temperature_degf);
        if !faults.is_empty() {
            return Err(faults);
        }
        let separator_gas_gravity = match spec.separator {
            Some((psia, degf)) => {
                vasquez_beggs::separator_gas_gravity(spec.gas_gravity, spec.oil_gravity_api, psia, degf)
            }
            None => spec.gas_gravity,
        };
        let gas = Gas::new(spec);
        let temperature_degr = tank_temperature_degf + DEGF_TO_DEGR;
        let isotherm = gas.isotherm(temperature_degr);
        let lab = prepared_lab(spec, &gas, &isotherm, temperature_degr)?;
        let oil =
            SaturatedOil::new(spec.correlations.oil, spec.oil_gravity_api, spec.gas_gravity, separator_gas_gravity);
        let correlated_psia = oil.bubble_point_psia(spec.solution_gor_scf_stb, tank_temperature_degf);
        let measured_psia = lab.as_ref().map(|lab| lab.bubble_point_psia).or(spec.bubble_point_psia);
        let initial_bubble_point_psia = measured_psia.unwrap_or(correlated_psia);
        let tuning_factor = correlated_psia / initial_bubble_point_psia;
        let maximum_pressure_psia = PRESSURE_RANGE_PSIA
            .1
            .min(gas.highest_pressure_psia())
            .min(oil.highest_pressure_psia() / tuning_factor.max(1.0));
        let faults = checks::of_bubble_point(spec, correlated_psia, (PRESSURE_RANGE_PSIA.0, maximum_pressure_psia));
        if !faults.is_empty() {
            return Err(faults);
        }
        let oil = match spec.bubble_point_bo_rb_stb {
            Some(bo) => {
                let correlated = oil.bo_rb_stb(spec.solution_gor_scf_stb, tank_temperature_degf);
                oil.swelling((bo - 1.0) / (correlated - 1.0))
            }
            None => oil,
        };
        let viscosity = OilViscosity::new(spec, tank_temperature_degf);
        let faults = checks::of_tuning(spec, &oil, &viscosity);
        if !faults.is_empty() {
            return Err(faults);
        }
        let oil_specific_gravity = oil_specific_gravity(spec.oil_gravity_api);
        let water = McCainWater::new(spec.salinity_ppm);
        let functions_at = |temperature_degf: f64| AtTemperature {
            ln_dead_cp: viscosity.ln_dead_cp(temperature_degf),
            water_cp: water.atmospheric_cp(temperature_degf.ln()),
            bubble_factor: oil.bubble_factor(temperature_degf),
            dissolved_scf_stb: oil.unit_gas_scf_stb(temperature_degf),
        };
        let fluid = Self {
            spec: spec.clone(),
            temperature_degf: tank_temperature_degf,
            tuning_factor,
            inverse_tuning_factor: 1.0 / tuning_factor,
            initial_bubble_point_psia,
            maximum_pressure_psia,
            oil_specific_gravity,
            separator_gas_gravity,
            oil,
            viscosity,
            gas,
            water,
            oil_standard_density_lb_ft3: oil_specific_gravity * FRESH_WATER_LB_FT3,
            gas_mass_lb_ft3: gas.standard_density_lb_scf / FT3_PER_BBL,
            tank: AtTank { temperature_degr, isotherm, functions: functions_at(tank_temperature_degf) },
            by_temperature: ByTemperature::new(functions_at),
            grid: Arc::default(),
            prepared: true,
            lab: lab.map(Arc::new),
        };
        fluid.closure_is_monotone().map_err(|fault| vec![fault])?;
        Ok(fluid)
    }

    /// The fluid as stated.
    pub fn spec(&self) -> &FluidSpec {
        &self.spec
    }

    /// The tank's temperature, degF.
    pub fn tank_temperature_degf(&self) -> f64 {
        self.temperature_degf
    }

    /// Bubble point of the initial oil at tank temperature, psia: measured, or the correlation's.
    pub fn initial_bubble_point_psia(&self) -> f64 {
        self.initial_bubble_point_psia
    }

    /// Bubble point of oil that holds `rs_scf_stb` at any temperature, psia.
    #[inline]
    pub fn bubble_point_at_psia(&self, rs_scf_stb: f64, temperature_degf: f64) -> f64 {
        let at = self.by_temperature.at(hold(temperature_degf, TEMPERATURE_RANGE_DEGF));
        match self.lab() {
            None => self.tuned_bubble_point_psia(self.oil.gas_power(rs_scf_stb), at.bubble_factor),
            Some(lab) => lab.bubble_point_of_psia(rs_scf_stb / self.dissolved_of_tank(&at)),
        }
    }

    /// f of Rs_sat(p, T) = correlated Rs(f p, T): the correlation's bubble point over the measured one.
    pub fn tuning_factor(&self) -> f64 {
        self.tuning_factor
    }

    /// Oil gravity, water = 1.
    pub fn oil_specific_gravity(&self) -> f64 {
        self.oil_specific_gravity
    }

    /// Density of the water at standard conditions, lb/ft3.
    pub fn standard_water_density_lb_ft3(&self) -> f64 {
        self.water.standard_density_lb_ft3()
    }

    /// Density of the gas at standard conditions, lb/scf.
    pub fn standard_gas_density_lb_scf(&self) -> f64 {
        self.gas.standard_density_lb_scf
    }

    /// Compressibility of the water by Osif at tank temperature, 1/psi: reported only, the volume factor is McCain's.
    pub fn water_compressibility_1_psi(&self, pressure_psia: f64) -> f64 {
        let density_g_l = 1e3 * self.water.standard_density_lb_ft3() / LB_FT3_PER_G_CM3;
        let salt_g_l = 1e-6 * self.spec.salinity_ppm * density_g_l;
        osif::compressibility_1_psi(self.held_pressure(pressure_psia), self.temperature_degf, salt_g_l)
    }

    /// The laboratory's table.
    #[inline]
    pub(super) fn lab(&self) -> Option<&Lab> {
        self.lab.as_deref()
    }

    /// Dissolved gas at a temperature over that at tank temperature, at equal pressure.
    #[inline]
    pub(super) fn dissolved_of_tank(&self, at: &AtTemperature) -> f64 {
        at.dissolved_scf_stb / self.tank.functions.dissolved_scf_stb
    }

    /// Vasquez and Beggs' A at a temperature over that at tank temperature, held where their fit has no say.
    pub(super) fn strain_of_tank(&self, rs_scf_stb: f64, temperature_degf: f64) -> f64 {
        let group = |degf: f64| {
            let (api, gravity) = (self.spec.oil_gravity_api, self.separator_gas_gravity);
            vasquez_beggs::compressibility_group(rs_scf_stb, degf, api, gravity)
        };
        let at_tank = group(self.temperature_degf);
        if at_tank > 0.0 { (group(temperature_degf) / at_tank).clamp(0.5, 1.5) } else { 1.0 }
    }

    pub(super) fn gas(&self) -> &Gas {
        &self.gas
    }

    /// Properties at any pressure and temperature, with the dissolved gas capped by the producing gas-oil ratio.
    ///
    /// Above the pressure where the cap binds the oil is undersaturated. Everything is continuous there. Pressure and temperature
    /// outside the model's range are held to it.
    pub fn in_situ(&self, pressure_psia: f64, temperature_degf: f64, gor_limit_scf_stb: f64) -> InSitu {
        self.capped(gor_limit_scf_stb).in_situ(pressure_psia, temperature_degf)
    }

    /// The fluid of one producing gas-oil ratio, prepared for many points.
    pub fn capped(&self, gor_limit_scf_stb: f64) -> CappedOil<'_> {
        CappedOil::new(self, gor_limit_scf_stb, self.prepared.then(|| self.grid()))
    }

    /// The same fluid straight from the correlations, twice as slow: the reference for the prepared functions.
    #[must_use]
    pub fn unprepared(&self) -> Self {
        Self { prepared: false, ..self.clone() }
    }

    /// The prepared functions of pressure and temperature: up to a little above the tank's temperature.
    pub(super) fn grid(&self) -> &Grid {
        const LOWEST_PSIA: f64 = 14.0;
        const LOWEST_DEGF: f64 = 52.0;
        const ABOVE_TANK_DEGF: f64 = 10.0;
        // Room for the nodes beyond the edges, before the corners where pressure and temperature are held.
        const RIM_RATIO: f64 = 0.85;
        const RIM_DEGF: f64 = 20.0;
        self.grid.get_or_init(|| {
            let degf = |reduced: f64| reduced * self.gas.pseudo_critical.temperature_degr - DEGF_TO_DEGR;
            let low_degf = LOWEST_DEGF.max(degf(LEAST_GRID_TPR) + RIM_DEGF);
            let high_degf = (self.temperature_degf + ABOVE_TANK_DEGF)
                .min(TEMPERATURE_RANGE_DEGF.1 - RIM_DEGF)
                .min(degf(MAXIMUM_TPR) - RIM_DEGF);
            let smooth_psia = self.oil.smooth_to_psia() * self.inverse_tuning_factor;
            let top_psia = smooth_psia.min(RIM_RATIO * self.maximum_pressure_psia);
            Grid::new(self, (LOWEST_PSIA, top_psia), (low_degf, high_degf))
        })
    }

    /// What oil that holds `rs_scf_stb` does between its bubble point, where its viscosity is `mu_b_cp`, and a pressure by the correlations.
    #[inline]
    pub(super) fn above_bubble_point(
        &self,
        p: f64,
        ln_p: f64,
        rs_scf_stb: f64,
        bubble_point_psia: f64,
        temperature_degf: f64,
        mu_b_cp: f64,
    ) -> AboveBubblePoint {
        let bubble_point_psia = bubble_point_psia.max(LEAST_BUBBLE_POINT_PSIA);
        if p <= bubble_point_psia {
            return AboveBubblePoint { volume_ratio: 1.0, viscosity_ratio: 1.0 };
        }
        let ln_ratio = ln_p - ln(bubble_point_psia);
        let group = vasquez_beggs::compressibility_group(
            rs_scf_stb,
            temperature_degf,
            self.spec.oil_gravity_api,
            self.separator_gas_gravity,
        );
        AboveBubblePoint {
            volume_ratio: vasquez_beggs::undersaturated_volume_ratio(group, p, bubble_point_psia, ln_ratio),
            viscosity_ratio: match self.spec.correlations.undersaturated {
                UndersaturatedCorrelation::VasquezBeggs => {
                    vasquez_beggs::undersaturated_viscosity_ratio(p, ln_p, ln_ratio)
                }
                UndersaturatedCorrelation::Beal => {
                    beal_standing::undersaturated_viscosity_ratio(mu_b_cp, p - bubble_point_psia)
                }
            },
        }
    }

    #[inline]
    pub(super) fn tuned_bubble_point_psia(&self, gas_power: f64, temperature_factor: f64) -> f64 {
        (self.oil.bubble_point_of_psia(gas_power, temperature_factor) * self.inverse_tuning_factor).max(0.0)
    }

    #[inline]
    pub(super) fn held_pressure(&self, pressure_psia: f64) -> f64 {
        hold(pressure_psia, (PRESSURE_FLOOR_PSIA, self.maximum_pressure_psia))
    }
}

pub(super) struct AboveBubblePoint {
    pub volume_ratio: f64,
    pub viscosity_ratio: f64,
}

/// Like `clamp`, but a NaN becomes the lower end.
#[inline]
pub(super) fn hold(value: f64, (low, high): (f64, f64)) -> f64 {
    value.max(low).min(high)
}

/// The laboratory's table, held against the rest of the fluid.
fn prepared_lab(
    spec: &FluidSpec,
    gas: &Gas,
    isotherm: &Isotherm,
    temperature_degr: f64,
) -> Result<Option<Lab>, Vec<Fault>> {
    let Some(report) = &spec.lab else { return Ok(None) };
    let correlated = |pressure_psia: f64| {
        let state = gas.on_isotherm(isotherm, pressure_psia, temperature_degr);
        (state.z, gas.viscosity_cp(temperature_degr, state.density_lb_ft3))
    };
    let z_of_bg = |bg_rb_scf: f64, pressure_psia: f64| {
        bg_rb_scf * FT3_PER_BBL / gas.of_z(1.0, pressure_psia, temperature_degr).bg_ft3_scf
    };
    let lab = Lab::new(report, spec.standard_pressure_psia, correlated, z_of_bg)?;
    let faults = checks::of_lab(spec, &lab);
    if faults.is_empty() { Ok(Some(lab)) } else { Err(faults) }
}
