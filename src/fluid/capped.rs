//! The fluid of one producing gas-oil ratio, as a tubing sees it.

use super::black_oil::{TEMPERATURE_RANGE_DEGF, hold};
use super::by_temperature::AtTemperature;
use super::grid::{Exact, Grid, OF_BOTH, OF_PRESSURE};
use super::lab::Lab;
use super::mccain::McCainWater;
use super::{BlackOil, InSitu, baker_swerdloff};
use crate::elementary::{exp, ln};
use crate::units::constants::DEGF_TO_DEGR;

/// A fluid whose dissolved gas is capped by the producing gas-oil ratio; made by [`BlackOil::capped`].
///
/// What depends on the ratio alone is computed once here, since a traverse asks for a hundred points.
#[derive(Debug, Clone)]
pub struct CappedOil<'a> {
    fluid: &'a BlackOil,
    cap_scf_stb: f64,
    /// The cap's power in the bubble point, (Rs/g)^0.83 by Standing.
    gas_power: f64,
    /// a and b of the live oil's viscosity at the cap.
    live_coefficients: (f64, f64),
    /// `None`: everything from the correlations themselves.
    grid: Option<&'a Grid>,
}

/// Where the properties turn a corner along pressure.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Corners {
    /// Bubble point of the oil at the temperature, psia: of all its gas where it is undersaturated, else the pressure itself.
    pub bubble_point_psia: f64,
    /// Tension between oil and gas before it is held at its floor, dyn/cm.
    pub free_tension_dyn_cm: f64,
}

impl<'a> CappedOil<'a> {
    pub(super) fn new(fluid: &'a BlackOil, gor_limit_scf_stb: f64, grid: Option<&'a Grid>) -> Self {
        let cap_scf_stb = gor_limit_scf_stb.max(0.0);
        Self {
            fluid,
            cap_scf_stb,
            gas_power: fluid.oil.gas_power(cap_scf_stb),
            live_coefficients: fluid.viscosity.live_coefficients(cap_scf_stb),
            grid,
        }
    }

    /// Properties at a pressure and temperature; see [`BlackOil::in_situ`].
    #[inline]
    pub fn in_situ(&self, pressure_psia: f64, temperature_degf: f64) -> InSitu {
        self.in_situ_and_corners(pressure_psia, temperature_degf).0
    }

    /// The properties, and how far they are from their corners.
    #[inline]
    pub fn in_situ_and_corners(&self, pressure_psia: f64, temperature_degf: f64) -> (InSitu, Corners) {
        let fluid = self.fluid;
        let p = fluid.held_pressure(pressure_psia);
        let t = hold(temperature_degf, TEMPERATURE_RANGE_DEGF);
        let temperature_degr = t + DEGF_TO_DEGR;
        let at = fluid.by_temperature.at(t);

        let ln_p = ln(p);
        let prepared = if let Some(grid) = self.grid { grid.at(ln_p, t) } else { None };
        let ([z, mut mu_g_cp, mut bo, ln_a, b], [pressure_power, oil_factor, cool, hot]) = match prepared {
            Some(prepared) => prepared,
            None => (exact_of_both(fluid, p, t), exact_of_pressure(fluid, p)),
        };
        let mut gas = fluid.gas.of_z(z, p, temperature_degr);
        let mut rs = pressure_power * at.dissolved_scf_stb;
        let mut bubble_point_psia = p;
        let mu_o;
        if let Some(lab) = fluid.lab() {
            let (z_ratio, mu_g_ratio) = lab.gas_ratios(p);
            gas = fluid.gas.of_z(z_ratio * z, p, temperature_degr);
            mu_g_cp *= mu_g_ratio;
            (rs, bo, mu_o, bubble_point_psia) = self.of_lab(lab, p, ln_p, t, &at);
        } else if rs > self.cap_scf_stb {
            rs = self.cap_scf_stb;
            bubble_point_psia = fluid.tuned_bubble_point_psia(self.gas_power, at.bubble_factor);
            let (a, b) = self.live_coefficients;
            let mu_b = a * exp(b * at.ln_dead_cp);
            let above = fluid.above_bubble_point(p, ln_p, rs, bubble_point_psia, t, mu_b);
            mu_o = above.viscosity_ratio * mu_b;
            bo = above.volume_ratio * fluid.oil.bo_rb_stb(rs, t);
        } else if fluid.viscosity.has_corner() {
            mu_o = fluid.viscosity.live_cp(at.ln_dead_cp, rs);
        } else {
            mu_o = exp(ln_a + b * at.ln_dead_cp);
        }
        let bw = McCainWater::bw_rb_stb(p, t);
        let free_tension_dyn_cm = baker_swerdloff::dead_oil_dyn_cm(fluid.spec.oil_gravity_api, t) * oil_factor;
        let state = InSitu {
            rs_scf_stb: rs,
            bo_rb_stb: bo,
            oil_density_lb_ft3: (fluid.oil_standard_density_lb_ft3 + fluid.gas_mass_lb_ft3 * rs) / bo,
            mu_o_cp: mu_o,
            bg_ft3_scf: gas.bg_ft3_scf,
            gas_density_lb_ft3: gas.density_lb_ft3,
            mu_g_cp,
            bw_rb_stb: bw,
            water_density_lb_ft3: fluid.water.standard_density_lb_ft3() / bw,
            mu_w_cp: at.water_cp * McCainWater::viscosity_ratio(p),
            sigma_oil_gas_dyn_cm: free_tension_dyn_cm.max(baker_swerdloff::FLOOR_DYN_CM),
            sigma_water_gas_dyn_cm: baker_swerdloff::water_gas_of_dyn_cm(t, cool, hot),
            z: gas.z,
        };
        (state, Corners { bubble_point_psia, free_tension_dyn_cm })
    }

    /// Rs, Bo, viscosity and bubble point from the laboratory's table and the correlations' change with temperature.
    fn of_lab(&self, lab: &Lab, p: f64, ln_p: f64, t: f64, at: &AtTemperature) -> (f64, f64, f64, f64) {
        let fluid = self.fluid;
        let tank_degf = fluid.temperature_degf;
        let dissolved = fluid.dissolved_of_tank(at);
        let saturated = lab.rs_saturated_scf_stb(p) * dissolved;
        let capped = saturated > self.cap_scf_stb;
        let rs = if capped { self.cap_scf_stb } else { saturated };
        let (a, b) = if capped { self.live_coefficients } else { fluid.viscosity.live_coefficients(rs) };
        let mut mu_o = match lab.mu_o_cp(rs) {
            Some(measured) => measured * exp(b * (at.ln_dead_cp - fluid.tank.functions.ln_dead_cp)),
            None => a * exp(b * at.ln_dead_cp),
        };
        let mut bo = lab.bo.at(rs) * fluid.oil.bo_rb_stb(rs, t) / fluid.oil.bo_rb_stb(rs, tank_degf);
        if !capped {
            return (rs, bo, mu_o, p);
        }
        let bubble_point_psia = lab.bubble_point_of_psia(rs / dissolved);
        let above_psi = (p - bubble_point_psia).max(0.0);
        let correlated = fluid.above_bubble_point(p, ln_p, rs, bubble_point_psia, t, mu_o);
        mu_o *= lab.viscosity_ratio(above_psi).unwrap_or(correlated.viscosity_ratio);
        bo *= lab.volume_ratio(above_psi, fluid.strain_of_tank(rs, t)).unwrap_or(correlated.volume_ratio);
        (rs, bo, mu_o, bubble_point_psia)
    }
}

/// By the correlations: z and viscosity of the gas; volume factor of the saturated oil, ln a and b of its viscosity.
fn exact_of_both(fluid: &BlackOil, pressure_psia: f64, temperature_degf: f64) -> [f64; OF_BOTH] {
    let temperature_degr = temperature_degf + DEGF_TO_DEGR;
    let gas = fluid.gas.at(pressure_psia, temperature_degr);
    let mu_g_cp = fluid.gas.viscosity_cp(temperature_degr, gas.density_lb_ft3);
    let rs = fluid.oil.rs_scf_stb(fluid.tuning_factor * pressure_psia, temperature_degf);
    let bo = fluid.oil.bo_rb_stb(rs, temperature_degf);
    let (a, b) = fluid.viscosity.live_coefficients(rs);
    [gas.z, mu_g_cp, bo, ln(a), b]
}

/// The pressure group of the dissolved gas, and the pressure parts of the tensions.
fn exact_of_pressure(fluid: &BlackOil, pressure_psia: f64) -> [f64; OF_PRESSURE] {
    let (cool, hot) = baker_swerdloff::water_gas_ends_dyn_cm(pressure_psia);
    let oil_factor = baker_swerdloff::pressure_factor(pressure_psia);
    [fluid.oil.pressure_power(fluid.tuning_factor * pressure_psia), oil_factor, cool, hot]
}

impl Exact for BlackOil {
    fn of_both(&self, pressure_psia: f64, temperature_degf: f64) -> [f64; OF_BOTH] {
        exact_of_both(self, pressure_psia, temperature_degf)
    }

    fn of_pressure(&self, pressure_psia: f64) -> [f64; OF_PRESSURE] {
        exact_of_pressure(self, pressure_psia)
    }
}
