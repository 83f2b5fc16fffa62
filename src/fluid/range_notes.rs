//! Which correlation is used outside the range that its authors published.

use super::dranchuk_abou_kassem::{MAXIMUM_TPR, MINIMUM_TPR};
use super::{BlackOil, sutton};
use crate::units::constants::DEGF_TO_DEGR;

/// One correlation outside its published range.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct RangeNote {
    /// What is computed ("bubble point").
    pub property: &'static str,
    /// By whom ("Standing").
    pub correlation: &'static str,
    /// What is outside which range.
    pub text: String,
}

struct Notes(Vec<RangeNote>);

impl Notes {
    /// Notes `value` of `what` unless it lies between `low` and `high`.
    fn check(
        &mut self,
        (property, correlation): (&'static str, &'static str),
        what: &str,
        value: f64,
        (low, high): (f64, f64),
        unit: &str,
    ) {
        if value < low || value > high {
            let value = if value.abs() >= 100.0 { format!("{value:.0}") } else { format!("{value:.3}") };
            self.0.push(RangeNote {
                property,
                correlation,
                text: format!("{what} {value}{unit} is outside the published range {low} to {high}{unit}"),
            });
        }
    }
}

impl BlackOil {
    /// The correlations that are used outside their published ranges for this fluid at tank temperature.
    pub fn range_notes(&self) -> Vec<RangeNote> {
        let spec = self.spec();
        let api = spec.oil_gravity_api;
        let gravity = spec.gas_gravity;
        let rs = spec.solution_gor_scf_stb;
        let t = self.tank_temperature_degf();
        let pb = self.initial_bubble_point_psia();
        let mut notes = Notes(Vec::new());

        let standing = ("bubble point, solution gas-oil ratio and oil volume factor", "Standing");
        notes.check(standing, "oil gravity", api, (16.5, 63.8), " API");
        notes.check(standing, "gas gravity", gravity, (0.59, 0.95), "");
        notes.check(standing, "temperature", t, (100.0, 258.0), " degF");
        notes.check(standing, "solution gas-oil ratio", rs, (20.0, 1_425.0), " scf/STB");
        notes.check(standing, "bubble point", pb, (130.0, 7_000.0), " psia");
        let tuning = ("bubble point", "tuning of Standing");
        notes.check(tuning, "correlated over measured bubble point", self.tuning_factor(), (0.75, 1.35), "");

        let live = ("oil viscosity", "Beggs-Robinson");
        notes.check(live, "oil gravity", api, (16.0, 58.0), " API");
        notes.check(live, "temperature", t, (70.0, 295.0), " degF");
        notes.check(live, "solution gas-oil ratio", rs, (20.0, 2_070.0), " scf/STB");
        notes.check(live, "bubble point", pb, (15.0, 5_265.0), " psia");

        let above = ("oil above its bubble point", "Vasquez-Beggs");
        notes.check(above, "oil gravity", api, (15.3, 59.5), " API");
        notes.check(above, "gas gravity", gravity, (0.511, 1.351), "");
        notes.check(above, "solution gas-oil ratio", rs, (9.3, 2_199.0), " scf/STB");
        notes.check(above, "temperature", t, (75.0, 294.0), " degF");

        let critical = self.gas().pseudo_critical;
        let hydrocarbons = sutton::hydrocarbon_gravity(gravity, spec.h2s_fraction, spec.co2_fraction);
        notes.check(("gas pseudo-criticals", "Sutton"), "hydrocarbon gas gravity", hydrocarbons, (0.57, 1.68), "");
        if spec.h2s_fraction + spec.co2_fraction > 0.0 {
            let sour = ("gas pseudo-criticals", "Wichert-Aziz");
            notes.check(sour, "hydrogen sulphide", spec.h2s_fraction, (0.0, 0.738), "");
            notes.check(sour, "carbon dioxide", spec.co2_fraction, (0.0, 0.544), "");
            notes.check(sour, "temperature", t, (40.0, 300.0), " degF");
        }
        let z = ("gas compressibility factor", "Dranchuk-Abou-Kassem");
        let reduced = (t + DEGF_TO_DEGR) / critical.temperature_degr;
        notes.check(z, "pseudo-reduced temperature in the tank", reduced, (MINIMUM_TPR, MAXIMUM_TPR), "");
        let surface = (60.0 + DEGF_TO_DEGR) / critical.temperature_degr;
        notes.check(z, "pseudo-reduced temperature at 60 degF", surface, (MINIMUM_TPR, MAXIMUM_TPR), "");

        let viscosity = ("gas viscosity", "Lee-Gonzalez-Eakin");
        notes.check(viscosity, "temperature", t, (100.0, 340.0), " degF");
        notes.check(viscosity, "bubble point", pb, (100.0, 8_000.0), " psia");
        notes.check(viscosity, "hydrogen sulphide", spec.h2s_fraction, (0.0, 0.0), "");
        notes.check(viscosity, "carbon dioxide", spec.co2_fraction, (0.0, 0.032), "");

        let water = ("water volume factor", "McCain");
        notes.check(water, "temperature", t, (60.0, 260.0), " degF");
        notes.check(water, "bubble point", pb, (0.0, 5_000.0), " psia");
        let brine = ("water viscosity", "McCain");
        notes.check(brine, "temperature", t, (100.0, 400.0), " degF");
        notes.check(brine, "salinity", spec.salinity_ppm, (0.0, 260_000.0), " ppm");

        let tension = ("surface tension", "Baker-Swerdloff");
        notes.check(tension, "bubble point", pb, (0.0, 3_600.0), " psia");
        notes.0
    }
}
