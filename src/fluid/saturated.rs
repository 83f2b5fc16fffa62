//! Saturated oil by the chosen correlation, in the form that all of them share.
//!
//! In every one the dissolved gas is a function of pressure times one of temperature, so that one pair of prepared functions serves all:
//!
//! ```text
//! Rs = P(p) D(T),   G(Rs) B(T) = Q(p),   G = (Rs/u)^e,   D = u B^(-1/e),   P = Q^(1/e)
//! ```
//!
//! Q is p/c0 + c1 (Standing, Vasquez-Beggs, Al-Marhoun, Petrosky-Farshad) or Glaso's x(p).
//!
//! # Departures
//! Rs and pb are exact inverses of each other in each correlation: Glaso's 1.2255 is 1/0.816, Al-Marhoun's and Petrosky-Farshad's
//! exponents of Rs are the reciprocals of those of pb; Vasquez and Beggs' pb is the inverse of their Rs, not the separate fit.

use super::correlations::OilCorrelation;
use super::standing::Standing;
use super::{al_marhoun, glaso, oil_specific_gravity, petrosky_farshad, vasquez_beggs};
use crate::units::constants::DEGF_TO_DEGR;

/// What each correlation but Standing's puts for the letters above.
#[derive(Debug, Clone, Copy)]
struct Letters {
    exponent: f64,
    /// u.
    unit_gas: f64,
    /// c0, psia, and c1.
    line: (f64, f64),
    /// The constant factor of B.
    factor: f64,
}

/// Saturated oil of one fluid.
#[derive(Debug, Clone, Copy)]
pub(super) struct SaturatedOil {
    family: OilCorrelation,
    standing: Standing,
    letters: Letters,
    oil_gravity_api: f64,
    gas_gravity: f64,
    /// Corrected to a 100 psig separator where that is known.
    separator_gas_gravity: f64,
    /// Measured over correlated swell Bo - 1, less one.
    swell_excess: f64,
}

impl SaturatedOil {
    pub fn new(family: OilCorrelation, oil_gravity_api: f64, gas_gravity: f64, separator_gas_gravity: f64) -> Self {
        let standing = Standing::new(oil_gravity_api, gas_gravity);
        let oil = oil_specific_gravity(oil_gravity_api);
        let letters = match family {
            OilCorrelation::Standing => {
                Letters { exponent: 0.83, unit_gas: gas_gravity, line: (18.2, 1.4), factor: 1.0 }
            }
            OilCorrelation::VasquezBeggs => {
                let (c1, c2, _) = vasquez_beggs::gas_constants(oil_gravity_api);
                let exponent = 1.0 / c2;
                Letters { exponent, unit_gas: separator_gas_gravity, line: (1.0, 0.0), factor: c1.powf(-exponent) }
            }
            OilCorrelation::Glaso => {
                let factor = oil_gravity_api.powf(-0.989);
                Letters { exponent: 0.816, unit_gas: gas_gravity, line: (1.0, 0.0), factor }
            }
            OilCorrelation::AlMarhoun => {
                let factor = 5.380_88e-3 * gas_gravity.powf(-1.877_84) * oil.powf(3.1437);
                Letters { exponent: 0.715_082, unit_gas: 1.0, line: (1.0, 0.0), factor }
            }
            OilCorrelation::PetroskyFarshad => {
                let factor = gas_gravity.powf(-0.8439);
                Letters { exponent: 0.577_421, unit_gas: 1.0, line: (112.727, 1391.051 / 112.727), factor }
            }
        };
        Self { family, standing, letters, oil_gravity_api, gas_gravity, separator_gas_gravity, swell_excess: 0.0 }
    }

    /// The same with the swell Bo - 1 multiplied.
    pub fn swelling(self, factor: f64) -> Self {
        Self { swell_excess: factor - 1.0, ..self }
    }

    pub fn swell_factor(&self) -> f64 {
        1.0 + self.swell_excess
    }

    /// The pressure up to which the correlation has a dissolved gas that rises, psia.
    pub fn highest_pressure_psia(&self) -> f64 {
        // The end of Glaso's curve, where its slope has no limit, and room before it.
        if self.family == OilCorrelation::Glaso { 15_000.0 } else { f64::INFINITY }
    }

    /// Up to where it is smooth enough for the prepared functions, psia.
    pub fn smooth_to_psia(&self) -> f64 {
        if self.family == OilCorrelation::Glaso { 7_500.0 } else { f64::INFINITY }
    }

    /// G.
    #[inline]
    pub fn gas_power(&self, rs_scf_stb: f64) -> f64 {
        if self.family == OilCorrelation::Standing {
            return self.standing.gas_power(rs_scf_stb);
        }
        if rs_scf_stb > 0.0 { (rs_scf_stb / self.letters.unit_gas).powf(self.letters.exponent) } else { 0.0 }
    }

    /// B.
    pub fn bubble_factor(&self, temperature_degf: f64) -> f64 {
        let (letters, t) = (&self.letters, temperature_degf);
        match self.family {
            OilCorrelation::Standing => self.standing.temperature_factor(t),
            OilCorrelation::VasquezBeggs => {
                let (_, _, c3) = vasquez_beggs::gas_constants(self.oil_gravity_api);
                letters.factor * (-letters.exponent * c3 * self.oil_gravity_api / (t + DEGF_TO_DEGR)).exp()
            }
            OilCorrelation::Glaso => letters.factor * t.powf(0.172),
            OilCorrelation::AlMarhoun => letters.factor * (t + al_marhoun::DEGF_TO_DEGR_PRINTED).powf(1.326_57),
            OilCorrelation::PetroskyFarshad => {
                letters.factor * 10f64.powf(-petrosky_farshad::x(self.oil_gravity_api, t))
            }
        }
    }

    /// D, scf/STB.
    pub fn unit_gas_scf_stb(&self, temperature_degf: f64) -> f64 {
        if self.family == OilCorrelation::Standing {
            return self.standing.unit_gas_scf_stb(temperature_degf);
        }
        self.letters.unit_gas * self.bubble_factor(temperature_degf).powf(-1.0 / self.letters.exponent)
    }

    /// P at pressures that are not negative.
    #[inline]
    pub fn pressure_power(&self, pressure_psia: f64) -> f64 {
        match self.family {
            OilCorrelation::Standing => Standing::pressure_power(pressure_psia),
            OilCorrelation::Glaso => glaso::x_of_pressure(pressure_psia).powf(1.0 / self.letters.exponent),
            _ => {
                let (c0_psia, c1) = self.letters.line;
                (pressure_psia / c0_psia + c1).powf(1.0 / self.letters.exponent)
            }
        }
    }

    /// Bubble point, psia, from G and B; perhaps negative for a little gas.
    #[inline]
    pub fn bubble_point_of_psia(&self, gas_power: f64, bubble_factor: f64) -> f64 {
        match self.family {
            OilCorrelation::Standing => Standing::bubble_point_of_psia(gas_power, bubble_factor),
            OilCorrelation::Glaso => glaso::pressure_of_x_psia(gas_power * bubble_factor),
            _ => {
                let (c0_psia, c1) = self.letters.line;
                c0_psia * (gas_power * bubble_factor - c1)
            }
        }
    }

    /// Bubble point of oil that holds `rs_scf_stb`, psia.
    pub fn bubble_point_psia(&self, rs_scf_stb: f64, temperature_degf: f64) -> f64 {
        self.bubble_point_of_psia(self.gas_power(rs_scf_stb), self.bubble_factor(temperature_degf))
    }

    /// Dissolved gas of saturated oil, scf/STB.
    #[inline]
    pub fn rs_scf_stb(&self, pressure_psia: f64, temperature_degf: f64) -> f64 {
        self.pressure_power(pressure_psia) * self.unit_gas_scf_stb(temperature_degf)
    }

    /// Volume factor of saturated oil, rb/STB.
    #[inline]
    pub fn bo_rb_stb(&self, rs_scf_stb: f64, temperature_degf: f64) -> f64 {
        let (rs, t, api) = (rs_scf_stb.max(0.0), temperature_degf, self.oil_gravity_api);
        let bo = match self.family {
            OilCorrelation::Standing => self.standing.bo_rb_stb(rs, t),
            OilCorrelation::VasquezBeggs => vasquez_beggs::bo_rb_stb(rs, t, api, self.separator_gas_gravity),
            OilCorrelation::Glaso => glaso::bo_rb_stb(rs, t, api, self.gas_gravity),
            OilCorrelation::AlMarhoun => al_marhoun::bo_rb_stb(rs, t, api, self.gas_gravity),
            OilCorrelation::PetroskyFarshad => petrosky_farshad::bo_rb_stb(rs, t, api, self.gas_gravity),
        };
        bo + self.swell_excess * (bo - 1.0)
    }

    /// Slope of the volume factor against the dissolved gas at constant temperature, rb/scf.
    pub fn dbo_drs_rb_scf(&self, rs_scf_stb: f64, temperature_degf: f64) -> f64 {
        if self.family == OilCorrelation::Standing {
            return self.swell_factor() * self.standing.dbo_drs_rb_scf(rs_scf_stb, temperature_degf);
        }
        // Smooth functions of several digits: a central difference is good to 1e-8, and this decides only whether Bg exceeds it.
        let step = (1e-5 * rs_scf_stb).max(1e-4);
        let low = (rs_scf_stb - step).max(0.0);
        let high = rs_scf_stb + step;
        (self.bo_rb_stb(high, temperature_degf) - self.bo_rb_stb(low, temperature_degf)) / (high - low)
    }
}
