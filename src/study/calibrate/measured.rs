//! What was measured in a well's tubing, and how far a model misses it.

use crate::fluid::BlackOil;
use crate::forecast::Field;
use crate::inflow::{Coefficient, InflowTest, Measured};
use crate::tubing::{Stream, Tubing, TubingMethod, TubingSpec};
use crate::well::{FlowingSurvey, WellModel};
use jiff::civil::Date;

/// Nearer to the wellhead than this a pressure is the wellhead's own and says nothing of the tubing, ft.
const WELLHEAD_FT: f64 = 1.0;
/// Roughness of new pipe, in.: what a scenario has that states none.
const NEW_PIPE_IN: f64 = 0.0006;
/// Intervals of a traverse that is drawn.
const DRAWN: u32 = 40;
/// Error allowed in a computed pressure, psi: well below what a gauge reads, since differences are taken.
const ACCURACY_PSI: f64 = 1e-3;

/// What kind of measurement.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Kind {
    /// A flowing survey.
    Survey,
    /// A separator test with a gauge at the perforations.
    Test,
}

/// One station.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Station {
    /// Measured depth, ft.
    pub md_ft: f64,
    /// Vertical depth, ft.
    pub tvd_ft: f64,
    /// Measured pressure, psia.
    pub pressure_psia: f64,
    /// Measured temperature, degF.
    pub temperature_degf: Option<f64>,
}

/// One measurement of pressures in the tubing of a well.
#[derive(Debug, Clone, PartialEq)]
pub struct Measurement {
    /// Survey or test.
    pub kind: Kind,
    /// Day.
    pub on: Option<Date>,
    /// What flowed.
    pub stream: Stream,
    /// Flowing wellhead pressure, psia.
    pub wellhead_psia: f64,
    /// Reservoir pressure at the tank's datum, psia, when known.
    pub reservoir_psia: Option<f64>,
    /// The stations below the wellhead, from the top down.
    pub stations: Vec<Station>,
    /// The tubing as stated, with the temperatures of that day where they were measured.
    tubing: TubingSpec,
    perforations_md_ft: f64,
    bottom_temperature_degf: f64,
}

impl Measurement {
    /// All measurements of a well, surveys first.
    pub fn of(well: &WellModel, field: &Field) -> Vec<Self> {
        let temperature_degf = field.surroundings().temperature_degf;
        let surveys =
            well.spec.flowing_surveys.iter().map(|survey| from_survey(well, field.fluid(), survey, temperature_degf));
        let tests = match &well.spec.inflow.coefficient {
            Coefficient::Tests(tests) => tests.as_slice(),
            _ => &[],
        };
        let tests = tests.iter().filter_map(|test| from_test(well, test, temperature_degf));
        surveys.chain(tests).filter(|m| !m.stations.is_empty()).collect()
    }

    /// The tubing of that day with a model, tuned. `None` leaves the roughness as stated.
    pub fn tubing(&self, tuning: &Tuning) -> Option<Tubing> {
        let spec = tuning.applied(&self.tubing);
        Tubing::new(&spec, Some(self.perforations_md_ft), self.bottom_temperature_degf, ACCURACY_PSI).ok()
    }

    /// Smallest hydraulic diameter of the string, in.
    pub(super) fn narrowest_in(&self) -> f64 {
        self.tubing.sections.iter().map(|s| s.diameter_in - s.inner_pipe_in).fold(f64::INFINITY, f64::min)
    }

    /// Pressures of a model at the stations, psia; NaN where the tubing cannot be prepared.
    pub fn pressures(&self, fluid: &BlackOil, tuning: &Tuning) -> Vec<f64> {
        self.tubing(tuning).map_or_else(
            || vec![f64::NAN; self.stations.len()],
            |tubing| {
                tubing.pressures_at(fluid, &self.stream, self.wellhead_psia, self.stations.iter().map(|s| s.md_ft))
            },
        )
    }

    /// The traverse of a model from the wellhead to the deepest station: measured depth, ft, and psia.
    pub(super) fn curve(&self, fluid: &BlackOil, tuning: &Tuning) -> Vec<(f64, f64)> {
        let Some((tubing, deepest)) = self.tubing(tuning).zip(self.stations.last()) else { return Vec::new() };
        let depths: Vec<f64> = (0..=DRAWN).map(|i| deepest.md_ft * f64::from(i) / f64::from(DRAWN)).collect();
        let pressures = tubing.pressures_at(fluid, &self.stream, self.wellhead_psia, depths.iter().copied());
        depths.into_iter().zip(pressures).collect()
    }

    /// What a model misses at the stations, psi: model less measured.
    pub fn misses(&self, fluid: &BlackOil, tuning: &Tuning) -> Vec<f64> {
        let model = self.pressures(fluid, tuning);
        model.iter().zip(&self.stations).map(|(model, station)| model - station.pressure_psia).collect()
    }
}

/// A model and what tunes it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Tuning {
    /// The model.
    pub method: TubingMethod,
    /// Slip factor.
    pub slip_factor: f64,
    /// Effective roughness of the whole string, in.; `None`: as stated.
    pub roughness_in: Option<f64>,
}

impl Tuning {
    /// A model as published in a well's tubing, with the roughness as stated. A stated slip factor tells that the tubing is tuned for
    /// its own model: the roughness beside it belongs to that model too, and the others get that of new pipe.
    pub fn published(method: TubingMethod, stated: &TubingSpec) -> Self {
        let tuned_for_another = method != stated.method && stated.slip_factor != 1.0;
        Self { method, slip_factor: 1.0, roughness_in: tuned_for_another.then_some(NEW_PIPE_IN) }
    }

    /// The same tubing with this model and tuning.
    #[must_use]
    pub fn applied(&self, tubing: &TubingSpec) -> TubingSpec {
        let mut spec = tubing.clone();
        spec.method = self.method;
        spec.slip_factor = self.slip_factor;
        if let Some(roughness_in) = self.roughness_in {
            for section in &mut spec.sections {
                section.roughness_in = roughness_in;
            }
        }
        spec
    }
}

fn from_survey(
    well: &WellModel,
    fluid: &BlackOil,
    survey: &FlowingSurvey,
    bottom_temperature_degf: f64,
) -> Measurement {
    let stream =
        Stream { liquid_rate_stb_d: survey.rate_stb_d, water_cut: survey.water_cut, gor_scf_stb: survey.gor_scf_stb };
    let mut tubing = well.spec.tubing.clone();
    let measured: Vec<(f64, f64)> = survey
        .points
        .iter()
        .filter(|p| p.md_ft >= WELLHEAD_FT)
        .filter_map(|p| Some((p.md_ft, p.temperature_degf?)))
        .collect();
    let top = survey.points.first().filter(|p| p.md_ft < WELLHEAD_FT).and_then(|p| p.temperature_degf);
    let wellhead_degf = survey.wellhead_temperature_degf.or(top);
    if !measured.is_empty() {
        let wellhead_degf = wellhead_degf.unwrap_or_else(|| well.tubing.wellhead_temperature_degf(fluid, &stream));
        // What was measured stands in place of a computed loss of heat.
        tubing.heat = None;
        tubing.temperatures = std::iter::once((0.0, wellhead_degf)).chain(measured).collect();
    } else if let (Some(wellhead_degf), true) = (wellhead_degf, tubing.temperatures.is_empty() && tubing.heat.is_none())
    {
        tubing.wellhead_temperature_degf = wellhead_degf;
    }
    let stations = survey.points.iter().filter(|p| p.md_ft >= WELLHEAD_FT).map(|p| Station {
        md_ft: p.md_ft.min(well.tubing.perforations_md_ft()),
        tvd_ft: well.tubing.place(p.md_ft).0,
        pressure_psia: p.pressure_psia,
        temperature_degf: p.temperature_degf,
    });
    Measurement {
        kind: Kind::Survey,
        on: Some(survey.on),
        stream,
        wellhead_psia: survey.wellhead_psia,
        reservoir_psia: survey.reservoir_psia,
        stations: stations.collect(),
        tubing,
        perforations_md_ft: well.tubing.perforations_md_ft(),
        bottom_temperature_degf,
    }
}

fn from_test(well: &WellModel, test: &InflowTest, bottom_temperature_degf: f64) -> Option<Measurement> {
    let Measured::Both { flowing_psia, wellhead_psia, gor_scf_stb } = test.measured else { return None };
    Some(Measurement {
        kind: Kind::Test,
        on: test.on,
        stream: Stream { liquid_rate_stb_d: test.rate_stb_d, water_cut: test.water_cut, gor_scf_stb },
        wellhead_psia,
        reservoir_psia: Some(test.reservoir_psia),
        stations: vec![Station {
            md_ft: well.tubing.perforations_md_ft(),
            tvd_ft: well.tubing.perforations_tvd_ft(),
            pressure_psia: flowing_psia,
            temperature_degf: None,
        }],
        tubing: well.spec.tubing.clone(),
        perforations_md_ft: well.tubing.perforations_md_ft(),
        bottom_temperature_degf,
    })
}

/// How far a model misses.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Misses {
    /// Stations.
    pub count: usize,
    /// Mean of model less measured, psi.
    pub bias_psi: f64,
    /// Mean of its size, psi.
    pub mean_absolute_psi: f64,
    /// The largest miss, with its sign, psi.
    pub worst_psi: f64,
    /// The same three, each miss over its measured pressure; the worst is that of the same station.
    pub bias: f64,
    /// See [`bias`](Self::bias).
    pub mean_absolute: f64,
    /// See [`bias`](Self::bias).
    pub worst: f64,
    /// Largest size of a miss over its measured pressure.
    pub worst_relative: f64,
}

impl Misses {
    /// From pairs of a miss and a measured pressure, psi and psia.
    pub fn of(pairs: &[(f64, f64)]) -> Self {
        let n = pairs.len().max(1) as f64;
        let mean = |pick: fn(&(f64, f64)) -> f64| pairs.iter().map(pick).sum::<f64>() / n;
        // NaN stands above every number, so that it is seen.
        let worst = pairs.iter().copied().max_by(|a, b| a.0.abs().total_cmp(&b.0.abs())).unwrap_or((0.0, 1.0));
        let relative = pairs.iter().map(|p| (p.0 / p.1).abs()).max_by(f64::total_cmp).unwrap_or(0.0);
        Self {
            count: pairs.len(),
            bias_psi: mean(|p| p.0),
            mean_absolute_psi: mean(|p| p.0.abs()),
            worst_psi: worst.0,
            bias: mean(|p| p.0 / p.1),
            mean_absolute: mean(|p| (p.0 / p.1).abs()),
            worst: worst.0 / worst.1,
            worst_relative: relative,
        }
    }
}
