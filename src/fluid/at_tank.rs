//! The black oil as the tank sees it: at tank temperature, the laboratory's table first.

use super::black_oil::{AboveBubblePoint, BlackOil, PRESSURE_RANGE_PSIA};
use super::gas::GasState;
use super::mccain::McCainWater;
use super::{FluidRow, LabRow, ReservoirFluid};
use crate::elementary::ln;
use crate::fault::Fault;
use crate::units::constants::FT3_PER_BBL;

impl BlackOil {
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
        .help(if self.lab().is_some() {
            "check rs and bo of the laboratory's table there; a near-critical fluid is no black oil"
        } else {
            "check solution_gor, bubble_point and the gravities; a near-critical fluid needs a lab table"
        }))
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
        let slope = match self.lab() {
            None => self.oil.dbo_drs_rb_scf(rs_scf_stb, self.temperature_degf),
            Some(lab) => lab.bo.slope_at(rs_scf_stb),
        };
        self.bg(pressure_psia) > slope
    }

    /// The property table's row at tank temperature: saturated below and undersaturated above the initial bubble point.
    pub fn table_row(&self, pressure_psia: f64) -> FluidRow {
        let rs_scf_stb = self.rs_saturated(pressure_psia).min(self.spec.solution_gor_scf_stb);
        let pressure_psia = self.held_pressure(pressure_psia);
        FluidRow {
            pressure_psia,
            rs_scf_stb,
            bo_rb_stb: self.bo(pressure_psia, rs_scf_stb),
            mu_o_cp: self.mu_o(pressure_psia, rs_scf_stb),
            z: self.gas_at_tank(pressure_psia).z,
            bg_rb_scf: self.bg(pressure_psia),
            mu_g_cp: self.mu_g(pressure_psia),
            bw_rb_stb: self.bw(pressure_psia),
            mu_w_cp: self.mu_w(pressure_psia),
        }
    }

    /// The laboratory's rows by rising pressure, referred to the separator's oil; empty without a table.
    pub fn lab_rows(&self) -> &[LabRow] {
        self.lab().map_or(&[], |lab| &lab.rows)
    }

    /// The gas at a held pressure, by the correlations.
    fn correlated_gas(&self, pressure_psia: f64) -> GasState {
        self.gas.on_isotherm(&self.tank.isotherm, pressure_psia, self.tank.temperature_degr)
    }

    /// The gas at a held pressure.
    fn gas_at_tank(&self, pressure_psia: f64) -> GasState {
        let gas = self.correlated_gas(pressure_psia);
        match self.lab() {
            None => gas,
            Some(lab) => {
                self.gas.of_z(lab.gas_ratios(pressure_psia).0 * gas.z, pressure_psia, self.tank.temperature_degr)
            }
        }
    }

    fn above_at_tank(&self, p: f64, rs_scf_stb: f64, bubble_point_psia: f64, mu_b_cp: f64) -> AboveBubblePoint {
        self.above_bubble_point(p, ln(p), rs_scf_stb, bubble_point_psia, self.temperature_degf, mu_b_cp)
    }

    fn saturated_bo(&self, rs_scf_stb: f64) -> f64 {
        match self.lab() {
            None => self.oil.bo_rb_stb(rs_scf_stb, self.temperature_degf),
            Some(lab) => lab.bo.at(rs_scf_stb),
        }
    }

    fn saturated_mu_o(&self, rs_scf_stb: f64) -> f64 {
        let lab = self.lab().and_then(|lab| lab.mu_o_cp(rs_scf_stb));
        lab.unwrap_or_else(|| self.viscosity.live_cp(self.tank.functions.ln_dead_cp, rs_scf_stb))
    }
}

impl ReservoirFluid for BlackOil {
    fn closure_limit_psia(&self) -> f64 {
        Self::closure_limit_psia(self)
    }

    fn rs_saturated(&self, pressure_psia: f64) -> f64 {
        let p = self.held_pressure(pressure_psia);
        match self.lab() {
            None => self.oil.pressure_power(self.tuning_factor * p) * self.tank.functions.dissolved_scf_stb,
            Some(lab) => lab.rs_saturated_scf_stb(p),
        }
    }

    fn bubble_point_psia(&self, rs_scf_stb: f64) -> f64 {
        match self.lab() {
            None => self.tuned_bubble_point_psia(self.oil.gas_power(rs_scf_stb), self.tank.functions.bubble_factor),
            Some(lab) => lab.bubble_point_of_psia(rs_scf_stb),
        }
    }

    fn bo(&self, pressure_psia: f64, rs_scf_stb: f64) -> f64 {
        let p = self.held_pressure(pressure_psia);
        let saturated = self.saturated_bo(rs_scf_stb);
        let bubble_point_psia = self.bubble_point_psia(rs_scf_stb);
        let lab = self.lab().and_then(|lab| lab.volume_ratio((p - bubble_point_psia).max(0.0), 1.0));
        saturated * lab.unwrap_or_else(|| self.above_at_tank(p, rs_scf_stb, bubble_point_psia, 1.0).volume_ratio)
    }

    fn mu_o(&self, pressure_psia: f64, rs_scf_stb: f64) -> f64 {
        let p = self.held_pressure(pressure_psia);
        let saturated = self.saturated_mu_o(rs_scf_stb);
        let bubble_point_psia = self.bubble_point_psia(rs_scf_stb);
        let lab = self.lab().and_then(|lab| lab.viscosity_ratio((p - bubble_point_psia).max(0.0)));
        saturated
            * lab.unwrap_or_else(|| self.above_at_tank(p, rs_scf_stb, bubble_point_psia, saturated).viscosity_ratio)
    }

    fn bg(&self, pressure_psia: f64) -> f64 {
        self.gas_at_tank(self.held_pressure(pressure_psia)).bg_ft3_scf / FT3_PER_BBL
    }

    fn mu_g(&self, pressure_psia: f64) -> f64 {
        let p = self.held_pressure(pressure_psia);
        let density_lb_ft3 = self.correlated_gas(p).density_lb_ft3;
        let correlated = self.gas.viscosity_cp(self.tank.temperature_degr, density_lb_ft3);
        self.lab().map_or(correlated, |lab| lab.gas_ratios(p).1 * correlated)
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
