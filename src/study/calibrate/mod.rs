//! Tubing models held against flowing surveys and separator tests, and tuned to them.
//!
//! For each well with measured pressures in its tubing: what every applicable model misses as published, the slip factor and
//! roughness that bring it to the points, what it misses then, which one to use, and what the separator tests make of the inflow with it.

mod doubts;
pub mod least_squares;
mod measured;
mod tuning;

pub use doubts::tubing_doubts;
pub use measured::{Kind, Measurement, Misses, Station, Tuning};
pub use tuning::{Finding, Fitted, Free, Held, LIKELY_SLIP, ROUGHEST_IN, fit};

use crate::fluid::BlackOil;
use crate::forecast::{Field, FieldSpec, RunError};
use crate::inflow::{Coefficient, FutureRule, InflowTest, Measured, RateBasis, Shape};
use crate::tubing::{TubingMethod, TubingSpec};
use crate::well::{LossSpec, TestCheck, WellModel, WellSpec};
use rayon::prelude::*;

/// The well's own model stays unless another leaves less than this part of its misses.
const WORTH_CHANGING: f64 = 0.8;

/// What one model misses, in each measurement and in all.
#[derive(Debug, Clone, PartialEq)]
pub struct Score {
    /// The tuning.
    pub tuning: Tuning,
    /// Pressures at the stations of each measurement, psia.
    pub pressures_psia: Vec<Vec<f64>>,
    /// For each measurement the whole traverse from the wellhead to the deepest station, to be drawn: measured depth, ft, and psia.
    pub curves: Vec<Vec<(f64, f64)>>,
    /// In each measurement.
    pub each: Vec<Misses>,
    /// In all together.
    pub all: Misses,
}

impl Score {
    fn of(tuning: Tuning, measurements: &[Measurement], fluid: &BlackOil) -> Self {
        let pressures_psia: Vec<Vec<f64>> = measurements.iter().map(|m| m.pressures(fluid, &tuning)).collect();
        let pairs: Vec<Vec<(f64, f64)>> = measurements
            .iter()
            .zip(&pressures_psia)
            .map(|(m, model)| {
                m.stations.iter().zip(model).map(|(s, p)| (p - s.pressure_psia, s.pressure_psia)).collect()
            })
            .collect();
        let curves = measurements.iter().map(|m| m.curve(fluid, &tuning)).collect();
        let each = pairs.iter().map(|one| Misses::of(one)).collect();
        let all = Misses::of(&pairs.concat());
        Self { tuning, pressures_psia, curves, each, all }
    }
}

/// One model against a well's measurements.
#[derive(Debug, Clone, PartialEq)]
pub struct ModelScore {
    /// The model.
    pub method: TubingMethod,
    /// As published: slip factor 1, roughness as stated, or of new pipe where the stated one is tuned for another model.
    pub published: Score,
    /// As the scenario states it, where that is another tuning; the well's own model only.
    pub as_stated: Option<Score>,
    /// The fit, or why there is none.
    pub fit: Result<Fitted, String>,
    /// With the fit.
    pub fitted: Option<Score>,
}

/// The inflow with the tuned tubing.
#[derive(Debug, Clone, PartialEq)]
pub struct BackCalculated {
    /// Shape of the curve, with Fetkovich's n.
    pub shape: Shape,
    /// Fetkovich's C, STB/d/psi^2n, or J, STB/d/psi.
    pub coefficient: f64,
    /// Whether it belongs to the oil rate alone.
    pub basis: RateBasis,
    /// How it is carried to future pressures.
    pub future: FutureRule,
    /// How fast the well loses it.
    pub loss: LossSpec,
    /// Reservoir pressure at the tank's datum to which it belongs, psia.
    pub reservoir_psia: f64,
    /// In words.
    pub text: String,
    /// Whether it comes from the surveys, since the scenario states no tests.
    pub from_surveys: bool,
    /// Tests beside the model's rates.
    pub tests: Vec<TestCheck>,
}

/// What the measurements of one well tell.
#[derive(Debug, Clone, PartialEq)]
pub struct WellCalibration {
    /// Name of the well.
    pub well: String,
    /// Its own model.
    pub own: TubingMethod,
    /// Roughness of the stretches as stated, in., from the top down.
    pub stated_roughness_in: Vec<f64>,
    /// What was measured.
    pub measurements: Vec<Measurement>,
    /// The models, the well's own first.
    pub models: Vec<ModelScore>,
    /// Which of them to use; `None` without a measurement or a fit.
    pub chosen: Option<usize>,
    /// The inflow with the chosen one; `None` where the scenario states a coefficient and no survey gives one.
    pub inflow: Option<BackCalculated>,
    /// Surveys with a reservoir pressure beside the rates of that inflow.
    pub survey_inflow: Vec<TestCheck>,
}

impl WellCalibration {
    /// The chosen model.
    pub fn chosen(&self) -> Option<&ModelScore> {
        self.models.get(self.chosen?)
    }
}

/// Holds the wells of these names (every well where none is named) against what was measured in them.
///
/// # Errors
/// [`RunError`] where the field cannot be prepared, also with the tuned tubing.
pub fn calibrate(spec: &FieldSpec, names: &[String]) -> Result<Vec<WellCalibration>, RunError> {
    let field = Field::new(spec)?;
    let asked = |w: &usize| names.is_empty() || names.contains(&spec.wells[*w].name);
    (0..spec.wells.len()).filter(asked).map(|w| one_well(spec, &field, w)).collect()
}

/// The models that apply to every measurement, the well's own first in any case.
fn models(well: &WellModel, measurements: &[Measurement], fluid: &BlackOil) -> Vec<TubingMethod> {
    let own = well.tubing.method();
    let applies = |method: &TubingMethod| {
        measurements.iter().all(|m| well.tubing.applicable(*method, fluid, &m.stream, m.wellhead_psia))
    };
    std::iter::once(own).chain(TubingMethod::ALL.into_iter().filter(|m| *m != own && applies(m))).collect()
}

fn one_well(spec: &FieldSpec, field: &Field, w: usize) -> Result<WellCalibration, RunError> {
    let well = &field.wells()[w];
    let fluid = field.fluid();
    let measurements = Measurement::of(well, field);
    let methods = if measurements.is_empty() { Vec::new() } else { models(well, &measurements, fluid) };
    let scores: Vec<ModelScore> =
        methods.par_iter().map(|method| score(*method, &well.spec, &measurements, fluid)).collect();
    let chosen = choose(&scores);
    let mut out = WellCalibration {
        well: well.spec.name.clone(),
        own: well.tubing.method(),
        stated_roughness_in: well.spec.tubing.sections.iter().map(|s| s.roughness_in).collect(),
        measurements,
        models: scores,
        chosen,
        inflow: None,
        survey_inflow: Vec::new(),
    };
    let tuned = out.chosen().and_then(|m| m.fitted.as_ref()).map(|score| score.tuning);
    inflow(spec, w, tuned, &mut out)?;
    Ok(out)
}

fn score(method: TubingMethod, well: &WellSpec, measurements: &[Measurement], fluid: &BlackOil) -> ModelScore {
    let score = |tuning| Score::of(tuning, measurements, fluid);
    let stated = &well.tubing;
    let as_stated = (stated.method == method && stated.slip_factor != 1.0)
        .then(|| score(Tuning { method, slip_factor: stated.slip_factor, roughness_in: None }));
    let published = Tuning::published(method, stated);
    let fit = fit(&published, measurements, fluid, start_roughness_in(stated));
    let fitted = fit.as_ref().ok().map(|fit| score(fit.tuning(method)));
    ModelScore { method, published: score(published), as_stated, fit, fitted }
}

/// Roughness from which a search starts: that of the longest stretch would do as well.
fn start_roughness_in(tubing: &TubingSpec) -> f64 {
    tubing.sections.last().map_or(0.0006, |s| s.roughness_in)
}

/// The model with the least misses left among those whose fit is plausible; the well's own unless another is clearly better.
fn choose(scores: &[ModelScore]) -> Option<usize> {
    let left = |m: &ModelScore, any: bool| -> Option<f64> {
        let fit = m.fit.as_ref().ok().filter(|fit| any || fit.plausible())?;
        let mean = m.fitted.as_ref()?.all.mean_absolute_psi;
        Some(fit.deviation_psi.unwrap_or(mean))
    };
    let best = |any: bool| {
        let all = scores.iter().enumerate().filter_map(|(i, m)| Some((i, left(m, any)?)));
        all.min_by(|a, b| a.1.total_cmp(&b.1))
    };
    let (index, least) = best(false).or_else(|| best(true))?;
    let own = scores.first().and_then(|m| left(m, false));
    Some(if own.is_some_and(|own| WORTH_CHANGING * own <= least) { 0 } else { index })
}

/// The inflow with the tuned tubing, and the surveys beside it.
fn inflow(spec: &FieldSpec, w: usize, tuned: Option<Tuning>, out: &mut WellCalibration) -> Result<(), RunError> {
    let mut with = spec.clone();
    with.changes.clear();
    if let Some(tuned) = tuned {
        with.wells[w].tubing = tuned.applied(&with.wells[w].tubing);
    }
    let field = Field::new(&with)?;
    let around = field.surroundings();
    let bottom = |m: &Measurement, well: &WellModel| {
        m.tubing(&tuned.unwrap_or(Tuning::published(well.tubing.method(), &well.spec.tubing)))
            .unwrap_or_else(|| well.tubing.clone())
            .flowing_pressure(field.fluid(), &m.stream, m.wellhead_psia)
            .pressure_psia
    };
    let surveys: Vec<InflowTest> = out
        .measurements
        .iter()
        .filter(|m| m.kind == Kind::Survey && tuned.is_some())
        .filter_map(|m| {
            Some(InflowTest {
                on: m.on,
                reservoir_psia: m.reservoir_psia?,
                rate_stb_d: m.stream.liquid_rate_stb_d,
                water_cut: m.stream.water_cut,
                measured: Measured::Gauged { flowing_psia: bottom(m, &field.wells()[w]) },
            })
        })
        .collect();
    let well = &field.wells()[w];
    out.survey_inflow = surveys
        .iter()
        .filter_map(|test| {
            let check = well.check_test(test, test.measured.flowing_psia()?, &around);
            Some(TestCheck { computed: true, ..check })
        })
        .collect();
    match &well.spec.inflow.coefficient {
        Coefficient::Tests(tests) => out.inflow = tests.first().map(|t| back_calculated(well, t.reservoir_psia, false)),
        _ => {
            let Some(first) = surveys.first().map(|t| t.reservoir_psia) else { return Ok(()) };
            with.wells[w].inflow.coefficient = Coefficient::Tests(surveys);
            // Surveys that no curve meets are no reason to fail: their misses are told all the same.
            if let Ok(field) = Field::new(&with) {
                out.inflow = Some(back_calculated(&field.wells()[w], first, true));
            }
        }
    }
    Ok(())
}

fn back_calculated(well: &WellModel, reservoir_psia: f64, from_surveys: bool) -> BackCalculated {
    BackCalculated {
        shape: well.inflow.shape,
        coefficient: well.inflow.coefficient,
        basis: well.inflow.basis,
        future: well.inflow.future,
        loss: well.spec.loss,
        reservoir_psia,
        text: well.inflow_text(),
        from_surveys,
        tests: well.tests.clone(),
    }
}

/// A tuned model whose misses still have a larger mean size than this part of the pressures does not describe the well.
const STILL_MISSED: f64 = 0.05;

/// The tuning of each of these models for a well, where its measurements give one; a sentence for a model that does not come to
/// them even tuned.
pub(super) fn tunings(
    well: &WellModel,
    field: &Field,
    methods: &[TubingMethod],
) -> Option<Vec<Result<Tuning, String>>> {
    let measurements = Measurement::of(well, field);
    if measurements.is_empty() {
        return None;
    }
    let stated = &well.spec.tubing;
    let tuned = |method: &TubingMethod| -> Result<Tuning, String> {
        let published = Tuning::published(*method, stated);
        let fit = fit(&published, &measurements, field.fluid(), start_roughness_in(stated))?;
        let score = Score::of(fit.tuning(*method), &measurements, field.fluid());
        if !fit.plausible() {
            return Err(format!("needs a slip factor of {:.2} to come to its measurements", fit.slip_factor));
        }
        if score.all.mean_absolute.is_nan() || score.all.mean_absolute > STILL_MISSED {
            return Err(format!("misses its measurements by {:.0} % even tuned", 100.0 * score.all.mean_absolute));
        }
        Ok(score.tuning)
    };
    Some(methods.par_iter().map(tuned).collect())
}
