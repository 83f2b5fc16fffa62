//! Which correlation is used outside the range that its authors published.

use super::dranchuk_abou_kassem::{MAXIMUM_TPR, MINIMUM_TPR};
use super::{
    BlackOil, DeadOilCorrelation, LiveOilCorrelation, OilCorrelation, ReservoirFluid, UndersaturatedCorrelation,
    ZCorrelation, sutton,
};
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

        self.saturated_notes(&mut notes);
        self.viscosity_notes(&mut notes);

        let above = ("volume of oil above its bubble point", "Vasquez-Beggs");
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
        let z = ("gas compressibility factor", spec.correlations.z.authors());
        let lowest_tpr = match spec.correlations.z {
            ZCorrelation::DranchukAbouKassem => MINIMUM_TPR,
            ZCorrelation::HallYarborough => 1.2,
        };
        let reduced = (t + DEGF_TO_DEGR) / critical.temperature_degr;
        notes.check(z, "pseudo-reduced temperature in the tank", reduced, (lowest_tpr, MAXIMUM_TPR), "");
        let surface = (60.0 + DEGF_TO_DEGR) / critical.temperature_degr;
        notes.check(z, "pseudo-reduced temperature at 60 degF", surface, (lowest_tpr, MAXIMUM_TPR), "");

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

    /// Bubble point, dissolved gas and volume factor of saturated oil.
    fn saturated_notes(&self, notes: &mut Notes) {
        let spec = self.spec();
        let (rs, pb, t) = (spec.solution_gor_scf_stb, self.initial_bubble_point_psia(), self.tank_temperature_degf());
        let family = spec.correlations.oil;
        let who = ("bubble point, solution gas-oil ratio and oil volume factor", family.authors());
        // API, gas gravity, degF, scf/STB, psia: as handbooks quote the papers.
        let [api, gravity, temperature, gas, pressure] = match family {
            OilCorrelation::Standing => [(16.5, 63.8), (0.59, 0.95), (100.0, 258.0), (20.0, 1_425.0), (130.0, 7_000.0)],
            OilCorrelation::VasquezBeggs => {
                [(15.3, 59.5), (0.511, 1.351), (75.0, 294.0), (0.0, 2_199.0), (15.0, 6_055.0)]
            }
            OilCorrelation::Glaso => [(22.3, 48.1), (0.65, 1.276), (80.0, 280.0), (90.0, 2_637.0), (165.0, 7_142.0)],
            OilCorrelation::AlMarhoun => {
                [(19.4, 44.6), (0.752, 1.367), (74.0, 240.0), (26.0, 1_602.0), (130.0, 3_573.0)]
            }
            OilCorrelation::PetroskyFarshad => {
                [(16.3, 45.0), (0.578, 0.852), (114.0, 288.0), (217.0, 1_406.0), (1_574.0, 6_523.0)]
            }
        };
        notes.check(who, "oil gravity", spec.oil_gravity_api, api, " API");
        notes.check(who, "gas gravity", spec.gas_gravity, gravity, "");
        notes.check(who, "temperature", t, temperature, " degF");
        notes.check(who, "solution gas-oil ratio", rs, gas, " scf/STB");
        notes.check(who, "bubble point", pb, pressure, " psia");
        if family == OilCorrelation::PetroskyFarshad && self.lab().is_none() {
            let left = self.rs_saturated(spec.standard_pressure_psia);
            notes.0.push(RangeNote {
                property: who.0,
                correlation: who.1,
                text: format!(
                    "it was fitted above 1574 psia only and leaves {left:.0} scf/STB in the oil at atmospheric pressure, so that \
                     depletion and tubing go far below its range"
                ),
            });
        }
        if self.lab().is_some() {
            return;
        }
        let tuning = ("bubble point", "its tuning");
        notes.check(tuning, "correlated over measured bubble point", self.tuning_factor(), (0.75, 1.35), "");
        let swell = ("oil volume factor", "its tuning");
        notes.check(swell, "measured over correlated swell Bo - 1", self.oil.swell_factor(), (0.8, 1.25), "");
    }

    /// Viscosity of the oil.
    fn viscosity_notes(&self, notes: &mut Notes) {
        let spec = self.spec();
        let (api, rs, t) = (spec.oil_gravity_api, spec.solution_gor_scf_stb, self.tank_temperature_degf());
        let pb = self.initial_bubble_point_psia();
        let dead = ("oil viscosity without gas", spec.correlations.dead_oil.authors());
        let (gravity, temperature) = match spec.correlations.dead_oil {
            DeadOilCorrelation::BeggsRobinson => ((16.0, 58.0), (70.0, 295.0)),
            DeadOilCorrelation::Beal => ((10.1, 52.5), (98.0, 250.0)),
            DeadOilCorrelation::Glaso => ((20.1, 48.1), (50.0, 300.0)),
        };
        notes.check(dead, "oil gravity", api, gravity, " API");
        notes.check(dead, "temperature", t, temperature, " degF");
        let live = ("oil viscosity", spec.correlations.live_oil.authors());
        let (gas, pressure) = match spec.correlations.live_oil {
            LiveOilCorrelation::BeggsRobinson => ((20.0, 2_070.0), (15.0, 5_265.0)),
            LiveOilCorrelation::ChewConnally => ((51.0, 3_544.0), (132.0, 5_645.0)),
        };
        notes.check(live, "solution gas-oil ratio", rs, gas, " scf/STB");
        notes.check(live, "bubble point", pb, pressure, " psia");
        if spec.correlations.live_oil == LiveOilCorrelation::ChewConnally {
            let dead_cp = self.viscosity.ln_dead_cp(t).exp();
            notes.check(live, "viscosity without gas", dead_cp, (0.377, 50.0), " cp");
        }
        let at_bubble_cp = self.mu_o(pb, rs);
        let (above, viscosity) = match spec.correlations.undersaturated {
            UndersaturatedCorrelation::VasquezBeggs => ("Vasquez-Beggs", (0.117, 148.0)),
            UndersaturatedCorrelation::Beal => ("Beal", (0.142, 127.0)),
        };
        let above = ("oil viscosity above the bubble point", above);
        notes.check(above, "viscosity at the bubble point", at_bubble_cp, viscosity, " cp");
        notes.check(
            ("oil viscosity", "its tuning"),
            "measured over correlated viscosity at the bubble point",
            self.viscosity.live_factor(),
            (0.5, 2.0),
            "",
        );
        let factor = self.viscosity.dead_factor();
        notes.check(
            ("oil viscosity", "its tuning"),
            "measured over correlated viscosity without gas",
            factor,
            (0.5, 2.0),
            "",
        );
    }
}
