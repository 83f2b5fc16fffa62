//! Which property comes from where.

use super::BlackOil;
use super::correlations::OilCorrelation;

/// Where a property of the fluid comes from.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Source {
    /// The property ("oil volume factor").
    pub property: &'static str,
    /// "lab" or "correlation".
    pub from: &'static str,
    /// By whom, and how it is tuned.
    pub detail: String,
}

impl BlackOil {
    /// Where each property at tank temperature comes from. In the tubing the correlations carry the laboratory's values to other
    /// temperatures.
    pub fn sources(&self) -> Vec<Source> {
        let spec = self.spec();
        let chosen = spec.correlations;
        let [mu_o, volume, thickening, z, mu_g] = self.lab().map_or([false; 5], |lab| lab.holds());
        let has_lab = self.lab().is_some();
        let mut list = Vec::new();
        let mut say = |property, lab: bool, detail: String| {
            let from = if lab { "lab" } else { "correlation" };
            list.push(Source { property, from, detail });
        };
        let carried = |authors: &str| format!("at other temperatures by {authors}");
        let oil = chosen.oil.authors();
        let times = |factor: f64| if factor == 1.0 { String::new() } else { format!(", times {factor:.4}") };
        let tuned = if spec.bubble_point_psia.is_some() {
            format!("{oil}, pressures times {:.4} to meet the measured bubble point", self.tuning_factor())
        } else {
            oil.to_owned()
        };
        let oil_of = |own: String| if has_lab { carried(oil) } else { own };
        say("bubble point", has_lab, oil_of(tuned.clone()));
        say("solution gas-oil ratio", has_lab, oil_of(tuned));
        let swell = self.oil.swell_factor();
        let swell = if swell == 1.0 { oil.to_owned() } else { format!("{oil}, Bo - 1 times {swell:.4}") };
        say("oil volume factor", has_lab, oil_of(swell));
        let (dead, live) = (chosen.dead_oil.authors(), chosen.live_oil.authors());
        let viscosity = if mu_o {
            carried(&format!("{dead} (dead) and {live} (live)"))
        } else {
            let factors = (times(self.viscosity.dead_factor()), times(self.viscosity.live_factor()));
            format!("{dead} (dead{}) and {live} (live{})", factors.0, factors.1)
        };
        say("oil viscosity", mu_o, viscosity);
        say(
            "oil volume above the bubble point",
            volume,
            if volume { carried("Vasquez-Beggs") } else { "Vasquez-Beggs".to_owned() },
        );
        let under = chosen.undersaturated.authors();
        let under = if thickening { "the same at other temperatures".to_owned() } else { under.to_owned() };
        say("oil viscosity above the bubble point", thickening, under);
        let gas = chosen.z.authors();
        say("gas deviation factor and volume factor", z, if z { carried(gas) } else { gas.to_owned() });
        let lee = "Lee-Gonzalez-Eakin";
        say("gas viscosity", mu_g, if mu_g { carried(lee) } else { lee.to_owned() });
        say("water", false, "McCain".to_owned());
        list
    }

    /// The same fluid by another correlation for pb, Rs and Bo, through the same bubble point and without a laboratory's table or
    /// a measured volume factor: what would be had without them. `None` where that cannot be used.
    pub fn by_correlation(&self, oil: OilCorrelation) -> Option<Self> {
        let mut spec = self.spec().clone();
        spec.correlations.oil = oil;
        spec.bubble_point_psia = Some(self.initial_bubble_point_psia());
        spec.lab = None;
        spec.bubble_point_bo_rb_stb = None;
        Self::new(&spec, self.tank_temperature_degf()).ok()
    }
}
