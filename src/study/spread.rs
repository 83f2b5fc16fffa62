//! How far the end of natural flow moves with the choice of the tubing model.
//!
//! # Method
//! The whole forecast is run again with each other model that applies to at least one well, all wells switched together (they share the
//! tank). A well takes part in the spread with the models that apply to it at the start of its flow: no-slip never, Gray only on gas-rich wells.
//! Each model carries its own calibration: on a well with measured pressures in its tubing it runs with the slip factor and roughness
//! that bring it to them, and is left out where even these do not; without any as published (a stated slip factor belongs to the well's
//! own model alone). The well's own model always runs as the scenario states it.
//! Published comparisons of tubing models disagree most near the minimum of the tubing curve, where a well dies; this spread is the cheapest
//! honest measure of that doubt.

use super::calibrate::{Tuning, tunings};
use crate::forecast::{
    Change, Doubt, DoubtKind, Field, FieldSpec, FlowEnd, Forecast, ModelEnd, ModelOutcome, RunError, Spread,
    natural_flow_ends,
};
use crate::tubing::{TubingMethod, TubingSpec};
use crate::well::Gauge;
use rayon::prelude::*;

/// Spread above which the choice of the model is doubted, days (practice: a year).
const WIDE_DAYS: f64 = 365.25;

/// Computes the spread of every well of a finished forecast and stores it there, with the doubts that it raises. Runs in
/// parallel; the result does not depend on the number of threads. A model with which the field cannot be run is named and left out.
///
/// # Errors
/// [`RunError`] where the field itself cannot be prepared.
pub fn add_spread(spec: &FieldSpec, forecast: &mut Forecast) -> Result<(), RunError> {
    let field = Field::new(spec)?;
    let applies = applicable(&field);
    let others: Vec<TubingMethod> = TubingMethod::ALL
        .into_iter()
        .filter(|m| applies.iter().zip(&spec.wells).any(|(list, well)| list.contains(m) && well.tubing.method != *m))
        .collect();
    let tuned: Vec<Option<Vec<Result<Tuning, String>>>> =
        field.wells().iter().map(|well| tunings(well, &field, &others)).collect();
    // A well that a model does not describe runs with it as published beside those that it does describe.
    let with = |m: usize, method: TubingMethod| -> Vec<Tuning> {
        let own = |list: &Option<Vec<Result<Tuning, String>>>| list.as_ref().and_then(|list| list[m].clone().ok());
        let wells = tuned.iter().zip(&spec.wells);
        wells.map(|(list, well)| own(list).unwrap_or_else(|| Tuning::published(method, &well.tubing))).collect()
    };
    let runs: Vec<_> = others
        .par_iter()
        .enumerate()
        .map(|(m, method)| (*method, natural_flow_ends(&with_tunings(spec, &with(m, *method)))))
        .collect();
    for (w, well) in forecast.wells.iter_mut().enumerate() {
        let own = spec.wells[w].tubing.method;
        let mut models = vec![ModelEnd { method: own.name(), outcome: outcome(well.natural_flow_end) }];
        for (m, (method, other)) in runs.iter().enumerate().filter(|(_, (m, _))| applies[w].contains(m) && *m != own) {
            let missed = tuned[w].as_ref().and_then(|list| list[m].as_ref().err());
            let outcome = match other {
                _ if missed.is_some() => ModelOutcome::Failed(missed.cloned().unwrap_or_default()),
                Ok(ends) => outcome(ends[w]),
                Err(error) => ModelOutcome::Failed(error.to_string()),
            };
            models.push(ModelEnd { method: method.name(), outcome });
        }
        let spread = Spread { models, calibrated: tuned[w].is_some() };
        forecast.doubts.extend(doubt(&well.name, &spread));
        well.spread = Some(spread);
    }
    Ok(())
}

fn outcome(end: Option<FlowEnd>) -> ModelOutcome {
    end.map_or(ModelOutcome::StillFlows, ModelOutcome::Ends)
}

fn doubt(name: &str, spread: &Spread) -> Option<Doubt> {
    let (first, earliest) = spread.earliest()?;
    let (last, latest) = spread.latest()?;
    let still = spread.still_flowing();
    let days = latest.days - earliest.days;
    if days <= WIDE_DAYS && still.is_empty() {
        return None;
    }
    let advice = if spread.calibrated {
        "every model counted comes to the measurements: survey again at a lower rate and a higher gas-oil ratio, nearer to the end"
    } else {
        "run a flowing pressure survey at a low rate, and choose the model that meets it"
    };
    let seen = if still.is_empty() {
        format!("the end of natural flow lies {:.0} months apart between {first} and {last}", days / 30.436_875)
    } else {
        format!("natural flow ends with {first} and still goes on at the end of the forecast with {}", still.join(", "))
    };
    Some(Doubt {
        kind: DoubtKind::ModelChoice,
        about: name.to_owned(),
        seen,
        cause: "tubing models disagree most near the minimum of the tubing curve, where a well dies".to_owned(),
        advice: advice.to_owned(),
    })
}

/// The models that apply to each well at the tank's state at the start.
fn applicable(field: &Field) -> Vec<Vec<TubingMethod>> {
    let gauge = Gauge::default();
    field
        .wells()
        .iter()
        .map(|well| {
            let now = well.now(field.fluid(), field.start(), 0.0, 0.0, &gauge);
            let rate = well.spec.target_rate_stb_d.unwrap_or(0.3 * now.curve.open_flow_stb_d());
            let stream = now.stream(rate);
            TubingMethod::ALL
                .into_iter()
                .filter(|m| well.tubing.applicable(*m, field.fluid(), &stream, now.open_wellhead_psia(rate)))
                .collect()
        })
        .collect()
}

/// The same field with every well on the model and tuning given for it, also after dated events.
fn with_tunings(spec: &FieldSpec, tunings: &[Tuning]) -> FieldSpec {
    let mut other = spec.clone();
    for (well, tuning) in other.wells.iter_mut().zip(tunings) {
        well.tubing = tuning.applied(&well.tubing);
    }
    for change in &mut other.changes {
        let Change::Well(w, well) = &mut change.change else { continue };
        let Some(tuning) = tunings.get(*w) else { continue };
        // A string that an event puts in has a roughness of its own.
        let same_string = |own: &TubingSpec| own.sections == well.tubing.sections;
        let kept = spec.wells.get(*w).is_some_and(|before| same_string(&before.tubing));
        let tuning = if kept { *tuning } else { Tuning { roughness_in: None, ..*tuning } };
        well.tubing = tuning.applied(&well.tubing);
    }
    other
}
