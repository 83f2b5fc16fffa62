//! The fluid of published correlations, tuned through its measured bubble point.

use super::beggs_robinson::BeggsRobinson;
use super::by_temperature::{AtTemperature, ByTemperature};
use super::capped::CappedOil;
use super::dranchuk_abou_kassem::{Isotherm, MAXIMUM_PPR, MAXIMUM_TPR};
use super::gas::Gas;
use super::grid::Grid;
use super::lee_gonzalez_eakin::LB_FT3_PER_G_CM3;
use super::mccain::McCainWater;
use super::standing::Standing;
use super::{FluidRow, FluidSpec, InSitu, ReservoirFluid, checks, oil_specific_gravity, osif, vasquez_beggs};
use crate::elementary::ln;
use crate::fault::Fault;
use crate::units::constants::{DEGF_TO_DEGR, FRESH_WATER_LB_FT3, FT3_PER_BBL};
use std::sync::{Arc, OnceLock};

/// The lowest and highest pressures of the model, psia (the upper one falls where z leaves its fit).
const PRESSURE_RANGE_PSIA: (f64, f64) = (14.696, 15_000.0);
/// Properties below this pressure, psia, are those at it: a caller's trial step never meets a pole.
const PRESSURE_FLOOR_PSIA: f64 = 0.5;
/// Temperatures are held to this range, degF.
pub(super) const TEMPERATURE_RANGE_DEGF: (f64, f64) = (32.0, 500.0);
/// Below this pseudo-reduced temperature z bends too much for the grid.
const LEAST_GRID_TPR: f64 = 1.2;
/// The oil above a bubble point lower than this, psia, is compressed from here: A ln(p/pb) has no limit at zero.
const LEAST_BUBBLE_POINT_PSIA: f64 = 14.696;

/// Black oil, gas and water by the default correlations (Standing, Vasquez-Beggs above the bubble point, Beggs-Robinson, Sutton,
/// Wichert-Aziz, Dranchuk-Abou-Kassem, Lee-Gonzalez-Eakin, McCain, Baker-Swerdloff).
///
/// As a [`ReservoirFluid`] it answers at tank temperature; [`in_situ`](Self::in_situ) answers at any pressure and temperature.
#[derive(Debug, Clone)]
pub struct BlackOil {
    pub(super) spec: FluidSpec,
    temperature_degf: f64,
    pub(super) tuning_factor: f64,
    inverse_tuning_factor: f64,
    initial_bubble_point_psia: f64,
    maximum_pressure_psia: f64,
    oil_specific_gravity: f64,
    /// Gas gravity of the Vasquez-Beggs equations: corrected to a 100 psig separator when its conditions are stated.
    separator_gas_gravity: f64,
    pub(super) standing: Standing,
    pub(super) gas: Gas,
    pub(super) water: McCainWater,
    /// Density of stock-tank oil, lb/ft3.
    pub(super) oil_standard_density_lb_ft3: f64,
    /// Mass that a scf adds to a stock-tank barrel, lb/ft3 per scf/STB.
    pub(super) gas_mass_lb_ft3: f64,
    tank: AtTank,
    pub(super) by_temperature: ByTemperature,
    /// Filled at the first use in situ; copies of the fluid share it.
    grid: Arc<OnceLock<Grid>>,
    /// Whether the grid is used at all.
    prepared: bool,
}

/// What depends only on the tank's temperature.
#[derive(Debug, Clone, Copy)]
struct AtTank {
    temperature_degr: f64,
    isotherm: Isotherm,
    functions: AtTemperature,
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
        let standing = Standing::new(spec.oil_gravity_api, spec.gas_gravity);
        let gas = Gas::new(spec);
        let maximum_pressure_psia = PRESSURE_RANGE_PSIA.1.min(MAXIMUM_PPR * gas.pseudo_critical.pressure_psia);
        let correlated_psia = standing.bubble_point_psia(spec.solution_gor_scf_stb, tank_temperature_degf);
        let initial_bubble_point_psia = spec.bubble_point_psia.unwrap_or(correlated_psia);
        let faults = checks::of_bubble_point(spec, correlated_psia, (PRESSURE_RANGE_PSIA.0, maximum_pressure_psia));
        if !faults.is_empty() {
            return Err(faults);
        }
        let tuning_factor = correlated_psia / initial_bubble_point_psia;
        let oil_specific_gravity = oil_specific_gravity(spec.oil_gravity_api);
        let beggs_robinson = BeggsRobinson::new(spec.oil_gravity_api);
        let temperature_degr = tank_temperature_degf + DEGF_TO_DEGR;
        let water = McCainWater::new(spec.salinity_ppm);
        let functions_at = |temperature_degf: f64| {
            let ln_temperature = temperature_degf.ln();
            AtTemperature {
                ln_dead_cp: beggs_robinson.dead_cp(ln_temperature).ln(),
                water_cp: water.atmospheric_cp(ln_temperature),
                bubble_factor: standing.temperature_factor(temperature_degf),
                dissolved_scf_stb: standing.unit_gas_scf_stb(temperature_degf),
            }
        };
        let fluid = Self {
            spec: spec.clone(),
            temperature_degf: tank_temperature_degf,
            tuning_factor,
            inverse_tuning_factor: 1.0 / tuning_factor,
            initial_bubble_point_psia,
            maximum_pressure_psia,
            oil_specific_gravity,
            separator_gas_gravity: match spec.separator {
                Some((psia, degf)) => {
                    vasquez_beggs::separator_gas_gravity(spec.gas_gravity, spec.oil_gravity_api, psia, degf)
                }
                None => spec.gas_gravity,
            },
            standing,
            gas,
            water,
            oil_standard_density_lb_ft3: oil_specific_gravity * FRESH_WATER_LB_FT3,
            gas_mass_lb_ft3: gas.standard_density_lb_scf / FT3_PER_BBL,
            tank: AtTank {
                temperature_degr,
                isotherm: Isotherm::new(gas.reduced_temperature(temperature_degr)),
                functions: functions_at(tank_temperature_degf),
            },
            by_temperature: ByTemperature::new(functions_at),
            grid: Arc::default(),
            prepared: true,
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
        let t = hold(temperature_degf, TEMPERATURE_RANGE_DEGF);
        self.tuned_bubble_point_psia(self.standing.gas_power(rs_scf_stb), self.by_temperature.at(t).bubble_factor)
    }

    /// f of Rs_sat(p, T) = Standing's Rs(f p, T): the correlation's bubble point over the measured one.
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

    pub(super) fn gas(&self) -> &Gas {
        &self.gas
    }

    /// Is Bg above dBo/dRs everywhere below the initial bubble point?
    ///
    /// Where it is not, gas that comes out of solution takes less room than the oil gives up, the volume balance rises with
    /// pressure and has several roots.
    ///
    /// # Errors
    /// A fault at `bubble_point` that names the pressure.
    pub fn closure_is_monotone(&self) -> Result<(), Fault> {
        let limit_psia = self.closure_limit_psia();
        if limit_psia >= self.initial_bubble_point_psia {
            return Ok(());
        }
        Err(Fault::new(
            "bubble_point",
            format!(
                "the bubble point of {:.0} psia is too high for these correlations: from {limit_psia:.0} psia on, gas that \
                 comes out of solution takes less room than the oil loses, so that the volume balance has several solutions",
                self.initial_bubble_point_psia
            ),
        )
        .help("check solution_gor, bubble_point and the gravities; a near-critical fluid needs a lab table"))
    }

    /// The highest pressure, psia, up to which Bg > dBo/dRs on the saturated line at tank temperature; the top of the model's
    /// range when it holds throughout.
    pub fn closure_limit_psia(&self) -> f64 {
        const STEP_PSIA: f64 = 25.0;
        let mut pressure_psia = PRESSURE_RANGE_PSIA.0;
        let mut safe_psia = 0.0;
        while pressure_psia < self.maximum_pressure_psia {
            if !self.closure_falls_at(pressure_psia) {
                return self.closure_limit_between(safe_psia, pressure_psia);
            }
            safe_psia = pressure_psia;
            pressure_psia += STEP_PSIA;
        }
        self.maximum_pressure_psia
    }

    /// Bisects the pressure at which Bg meets dBo/dRs.
    fn closure_limit_between(&self, mut safe_psia: f64, mut unsafe_psia: f64) -> f64 {
        for _ in 0..40 {
            let middle_psia = 0.5 * (safe_psia + unsafe_psia);
            if self.closure_falls_at(middle_psia) {
                safe_psia = middle_psia;
            } else {
                unsafe_psia = middle_psia;
            }
        }
        safe_psia
    }

    fn closure_falls_at(&self, pressure_psia: f64) -> bool {
        let rs_scf_stb = self.rs_saturated(pressure_psia);
        self.bg(pressure_psia) > self.standing.dbo_drs_rb_scf(rs_scf_stb, self.temperature_degf)
    }

    /// The property table's row at tank temperature: saturated below and undersaturated above the initial bubble point.
    pub fn table_row(&self, pressure_psia: f64) -> FluidRow {
        let rs_scf_stb = self.rs_saturated(pressure_psia).min(self.spec.solution_gor_scf_stb);
        let pressure_psia = self.held_pressure(pressure_psia);
        let gas = self.gas.on_isotherm(&self.tank.isotherm, pressure_psia, self.tank.temperature_degr);
        FluidRow {
            pressure_psia,
            rs_scf_stb,
            bo_rb_stb: self.bo(pressure_psia, rs_scf_stb),
            mu_o_cp: self.mu_o(pressure_psia, rs_scf_stb),
            z: gas.z,
            bg_rb_scf: gas.bg_ft3_scf / FT3_PER_BBL,
            mu_g_cp: self.gas.viscosity_cp(self.tank.temperature_degr, gas.density_lb_ft3),
            bw_rb_stb: self.bw(pressure_psia),
            mu_w_cp: self.mu_w(pressure_psia),
        }
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
            let top_psia = RIM_RATIO * self.maximum_pressure_psia;
            Grid::new(self, (LOWEST_PSIA, top_psia), (low_degf, high_degf))
        })
    }

    /// What oil that holds `rs_scf_stb` does between its bubble point and `pressure_psia`.
    #[inline]
    pub(super) fn above_bubble_point(
        &self,
        p: f64,
        ln_p: f64,
        rs_scf_stb: f64,
        bubble_point_psia: f64,
        temperature_degf: f64,
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
            viscosity_ratio: vasquez_beggs::undersaturated_viscosity_ratio(p, ln_p, ln_ratio),
        }
    }

    #[inline]
    pub(super) fn tuned_bubble_point_psia(&self, gas_power: f64, temperature_factor: f64) -> f64 {
        (Standing::bubble_point_of_psia(gas_power, temperature_factor) * self.inverse_tuning_factor).max(0.0)
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

impl ReservoirFluid for BlackOil {
    fn closure_limit_psia(&self) -> f64 {
        Self::closure_limit_psia(self)
    }

    fn rs_saturated(&self, pressure_psia: f64) -> f64 {
        Standing::pressure_power(self.tuning_factor * self.held_pressure(pressure_psia))
            * self.tank.functions.dissolved_scf_stb
    }

    fn bubble_point_psia(&self, rs_scf_stb: f64) -> f64 {
        self.tuned_bubble_point_psia(self.standing.gas_power(rs_scf_stb), self.tank.functions.bubble_factor)
    }

    fn bo(&self, pressure_psia: f64, rs_scf_stb: f64) -> f64 {
        let p = self.held_pressure(pressure_psia);
        let saturated = self.standing.bo_rb_stb(rs_scf_stb, self.temperature_degf);
        let bubble_point_psia = self.bubble_point_psia(rs_scf_stb);
        saturated * self.above_bubble_point(p, ln(p), rs_scf_stb, bubble_point_psia, self.temperature_degf).volume_ratio
    }

    fn mu_o(&self, pressure_psia: f64, rs_scf_stb: f64) -> f64 {
        let p = self.held_pressure(pressure_psia);
        let saturated = BeggsRobinson::live_cp(self.tank.functions.ln_dead_cp, rs_scf_stb);
        let bubble_point_psia = self.bubble_point_psia(rs_scf_stb);
        saturated
            * self.above_bubble_point(p, ln(p), rs_scf_stb, bubble_point_psia, self.temperature_degf).viscosity_ratio
    }

    fn bg(&self, pressure_psia: f64) -> f64 {
        let p = self.held_pressure(pressure_psia);
        self.gas.on_isotherm(&self.tank.isotherm, p, self.tank.temperature_degr).bg_ft3_scf / FT3_PER_BBL
    }

    fn mu_g(&self, pressure_psia: f64) -> f64 {
        let p = self.held_pressure(pressure_psia);
        let gas = self.gas.on_isotherm(&self.tank.isotherm, p, self.tank.temperature_degr);
        self.gas.viscosity_cp(self.tank.temperature_degr, gas.density_lb_ft3)
    }

    fn bw(&self, pressure_psia: f64) -> f64 {
        McCainWater::bw_rb_stb(self.held_pressure(pressure_psia), self.temperature_degf)
    }

    fn mu_w(&self, pressure_psia: f64) -> f64 {
        self.tank.functions.water_cp * McCainWater::viscosity_ratio(self.held_pressure(pressure_psia))
    }

    fn pressure_range_psia(&self) -> (f64, f64) {
        (PRESSURE_RANGE_PSIA.0, self.maximum_pressure_psia)
    }
}
