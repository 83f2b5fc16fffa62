//! A choke at the wellhead: the pressure upstream of it that passes a stream into the line.

pub mod critical;
pub mod sachdeva;

mod spec;

pub use spec::{ChokeMethod, ChokeSpec, ChokeTest, Discharge};

use super::Stream;
use crate::fluid::BlackOil;
use crate::roots::brent;
use crate::units::constants::FT3_PER_BBL;
use sachdeva::{Upstream, polytropic_exponent};

/// Ratio of the heat capacities of natural gas (common practice).
const GAS_K: f64 = 1.27;
/// Gas constant, Btu/lbmol/degR, and the molar mass of air, lb/lbmol: `cp - cv = R/M`.
const GAS_CONSTANT_BTU: f64 = 1.986;
const AIR_LB_LBMOL: f64 = 28.97;
/// Heat capacities of oil and water, Btu/lb/degF (handbook figures, rounded).
const OIL_HEAT: f64 = 0.5;
const WATER_HEAT: f64 = 1.0;
/// No stream is pressed through a choke with more than this, psia.
const HIGHEST_PSIA: f64 = 1e6;
/// Relative width to which the pressure upstream is found.
const PRESSURE_WIDTH: f64 = 1e-12;

/// What a choke does to a stream.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ChokeFlow {
    /// Pressure upstream, psia; not below the line's.
    pub upstream_psia: f64,
    /// Whether the flow is critical, so that the line's pressure does not reach back to the well.
    pub critical: bool,
}

/// One test of a choke beside the relation.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ChokeCheck {
    /// The test.
    pub test: ChokeTest,
    /// Measured rate over that of the relation with the fitted coefficient.
    pub rate_ratio: f64,
    /// Whether the relation takes the flow for critical.
    pub critical: bool,
}

/// A choke, its discharge coefficient known.
#[derive(Debug, Clone, PartialEq)]
pub struct Choke {
    method: ChokeMethod,
    size_in: f64,
    discharge: f64,
    checks: Vec<ChokeCheck>,
}

impl Choke {
    /// Prepares the choke; tests give its discharge coefficient as the geometric mean of their rates over those of the relation.
    /// `temperature_degf` tells that of a stream at the wellhead.
    pub fn new(spec: &ChokeSpec, fluid: &BlackOil, temperature_degf: impl Fn(&Stream) -> f64) -> Self {
        let ideal = Self { method: spec.method, size_in: spec.size_in, discharge: 1.0, checks: Vec::new() };
        match &spec.discharge {
            Discharge::Given(discharge) => Self { discharge: *discharge, ..ideal },
            Discharge::Tests(tests) => {
                let found: Vec<(f64, bool)> = tests
                    .iter()
                    .map(|test| {
                        let stream = test.stream();
                        ideal.rate_ratio(fluid, test, &stream, temperature_degf(&stream))
                    })
                    .collect();
                let discharge = (found.iter().map(|f| f.0.ln()).sum::<f64>() / found.len().max(1) as f64).exp();
                let check = |(test, (ratio, critical)): (&ChokeTest, (f64, bool))| ChokeCheck {
                    test: *test,
                    rate_ratio: ratio / discharge,
                    critical,
                };
                Self { discharge, checks: tests.iter().zip(found).map(check).collect(), ..ideal }
            }
        }
    }

    /// The relation.
    pub fn method(&self) -> ChokeMethod {
        self.method
    }

    /// Opening, in.
    pub fn size_in(&self) -> f64 {
        self.size_in
    }

    /// Discharge coefficient: measured rate over that of the relation.
    pub fn discharge(&self) -> f64 {
        self.discharge
    }

    /// The tests that gave the coefficient.
    pub fn checks(&self) -> &[ChokeCheck] {
        &self.checks
    }

    /// The same choke with another opening, in.
    #[must_use]
    pub fn with_size(&self, size_in: f64) -> Self {
        Self { size_in, ..self.clone() }
    }

    /// The pressure upstream that passes a stream into a line.
    pub fn flow(&self, fluid: &BlackOil, stream: &Stream, line_psia: f64, temperature_degf: f64) -> ChokeFlow {
        if stream.liquid_rate_stb_d.is_nan() || stream.liquid_rate_stb_d <= 0.0 {
            return ChokeFlow { upstream_psia: line_psia, critical: false };
        }
        match critical::constants(self.method) {
            Some(constants) => {
                let glr = stream.gor_scf_stb * (1.0 - stream.water_cut);
                let alone =
                    critical::upstream_psia(constants, stream.liquid_rate_stb_d, glr, self.size_in) / self.discharge;
                let upstream_psia = alone.max(line_psia).min(HIGHEST_PSIA.max(line_psia));
                ChokeFlow { upstream_psia, critical: line_psia <= critical::CRITICAL_RATIO * upstream_psia }
            }
            None => self.sachdeva(fluid, stream, line_psia, temperature_degf),
        }
    }

    /// The opening that holds a stream back to a pressure upstream, in.; `None` where none does.
    ///
    /// # Method
    /// The rate of every relation goes with a power of the opening, so that of the present one tells.
    pub fn size_for(
        &self,
        fluid: &BlackOil,
        stream: &Stream,
        upstream_psia: f64,
        line_psia: f64,
        temperature_degf: f64,
    ) -> Option<f64> {
        if !(upstream_psia > line_psia && stream.liquid_rate_stb_d > 0.0) {
            return None;
        }
        let size_in = match critical::constants(self.method) {
            Some((c, m, n)) => {
                let glr = stream.gor_scf_stb * (1.0 - stream.water_cut);
                let alone = c * stream.liquid_rate_stb_d * glr.powf(m) / self.discharge;
                (alone / upstream_psia).powf(1.0 / n) / 64.0
            }
            None => {
                let (mixture, mass_lb_s) = mixture(fluid, stream, upstream_psia, temperature_degf);
                let (flux, _) = mixture.flux_towards_lb_ft2_s(upstream_psia, line_psia);
                let area_ft2 = mass_lb_s / (self.discharge * flux);
                12.0 * (4.0 * area_ft2 / std::f64::consts::PI).sqrt()
            }
        };
        (size_in.is_finite() && size_in > 0.0).then_some(size_in)
    }

    fn area_ft2(&self) -> f64 {
        0.25 * std::f64::consts::PI * (self.size_in / 12.0).powi(2)
    }

    fn sachdeva(&self, fluid: &BlackOil, stream: &Stream, line_psia: f64, temperature_degf: f64) -> ChokeFlow {
        let capacity = self.discharge * self.area_ft2();
        // What the choke passes beyond what it should, at a trial pressure upstream; rises with it.
        let spare = |upstream_psia: f64| {
            let (mixture, mass_lb_s) = mixture(fluid, stream, upstream_psia, temperature_degf);
            capacity * mixture.flux_towards_lb_ft2_s(upstream_psia, line_psia).0 / mass_lb_s - 1.0
        };
        let mut low = (line_psia, -1.0);
        let mut step = 0.02 * line_psia;
        let upstream_psia = loop {
            let trial = low.0 + step;
            if trial >= HIGHEST_PSIA {
                break trial;
            }
            let here = (trial, spare(trial));
            if here.1 >= 0.0 {
                break brent(spare, low, here, PRESSURE_WIDTH * trial);
            }
            low = here;
            step *= 3.0;
        };
        let (mixture, _) = mixture(fluid, stream, upstream_psia, temperature_degf);
        ChokeFlow { upstream_psia, critical: mixture.is_critical(line_psia / upstream_psia) }
    }

    /// Measured rate over that of the relation at the measured pressures, and whether the flow is critical.
    fn rate_ratio(&self, fluid: &BlackOil, test: &ChokeTest, stream: &Stream, temperature_degf: f64) -> (f64, bool) {
        match critical::constants(self.method) {
            Some(constants) => {
                let glr = test.gor_scf_stb * (1.0 - test.water_cut);
                let upstream_psia = critical::upstream_psia(constants, test.rate_stb_d, glr, test.size_in);
                let critical = test.line_psia <= critical::CRITICAL_RATIO * test.wellhead_psia;
                (upstream_psia / test.wellhead_psia, critical)
            }
            None => {
                let (mixture, mass_lb_s) = mixture(fluid, stream, test.wellhead_psia, temperature_degf);
                let (flux, critical) = mixture.flux_towards_lb_ft2_s(test.wellhead_psia, test.line_psia);
                (mass_lb_s / (flux * self.with_size(test.size_in).area_ft2()), critical)
            }
        }
    }

    /// The choke in words and figures.
    pub fn text(&self) -> String {
        let origin = match self.checks.len() {
            0 => "as given".to_owned(),
            1 => "from a single test".to_owned(),
            tests => format!("fitted to {tests} tests, worst {:.0} %", 100.0 * self.worst_miss()),
        };
        format!(
            "{}, {:.4} in ({:.0}/64), discharge coefficient {:.3} {origin}",
            self.method.name(),
            self.size_in,
            64.0 * self.size_in,
            self.discharge
        )
    }

    /// Largest relative miss of a test's rate.
    pub fn worst_miss(&self) -> f64 {
        self.checks.iter().map(|check| (check.rate_ratio - 1.0).abs()).fold(0.0, f64::max)
    }
}

/// The mixture upstream at a pressure, and its mass rate, lb/s.
fn mixture(fluid: &BlackOil, stream: &Stream, upstream_psia: f64, temperature_degf: f64) -> (Upstream, f64) {
    let cut = stream.water_cut;
    let here = fluid.in_situ(upstream_psia, temperature_degf, stream.gor_scf_stb);
    // Per STB of liquid.
    let oil_ft3 = FT3_PER_BBL * (1.0 - cut) * here.bo_rb_stb;
    let water_ft3 = FT3_PER_BBL * cut * here.bw_rb_stb;
    let oil_lb = oil_ft3 * here.oil_density_lb_ft3;
    let water_lb = water_ft3 * here.water_density_lb_ft3;
    let free_gas_scf = (1.0 - cut) * (stream.gor_scf_stb - here.rs_scf_stb).max(0.0);
    let gas_lb = free_gas_scf * fluid.standard_gas_density_lb_scf();
    let total_lb = oil_lb + water_lb + gas_lb;
    let gas_fraction = gas_lb / total_lb;
    let cv = GAS_CONSTANT_BTU / (AIR_LB_LBMOL * fluid.spec().gas_gravity) / (GAS_K - 1.0);
    let liquid_heat = (OIL_HEAT * oil_lb + WATER_HEAT * water_lb) / (oil_lb + water_lb);
    let mixture = Upstream {
        gas_fraction,
        liquid_density_lb_ft3: (oil_lb + water_lb) / (oil_ft3 + water_ft3),
        gas_volume_ft3_lb: 1.0 / here.gas_density_lb_ft3,
        k: GAS_K,
        n: polytropic_exponent(gas_fraction, GAS_K * cv, cv, liquid_heat),
    };
    (mixture, total_lb * stream.liquid_rate_stb_d / 86_400.0)
}
