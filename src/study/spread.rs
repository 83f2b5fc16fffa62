//! How far the end of natural flow moves with the choice of the tubing model.
//!
//! # Method
//! The whole forecast is run again with each other model that applies to at least one well, all wells switched together (they share the
//! tank). A well takes part in the spread with the models that apply to it at the start of its flow: no-slip never, Gray only on gas-rich wells.
//! Published comparisons of tubing models disagree most near the minimum of the tubing curve, where a well dies; this spread is the cheapest
//! honest measure of that doubt.

use crate::forecast::{
    Change, Doubt, DoubtKind, Field, FieldSpec, Forecast, ModelEnd, ModelOutcome, RunError, Spread, WellResult, run,
};
use crate::tubing::TubingMethod;
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
    let runs: Vec<_> = others.par_iter().map(|method| (*method, run(&with_method(spec, *method)))).collect();
    for (w, well) in forecast.wells.iter_mut().enumerate() {
        let own = spec.wells[w].tubing.method;
        let mut models = vec![ModelEnd { method: own.name(), outcome: outcome(well) }];
        for (method, other) in runs.iter().filter(|(m, _)| applies[w].contains(m) && *m != own) {
            let outcome = match other {
                Ok(forecast) => outcome(&forecast.wells[w]),
                Err(error) => ModelOutcome::Failed(error.to_string()),
            };
            models.push(ModelEnd { method: method.name(), outcome });
        }
        let spread = Spread { models };
        forecast.doubts.extend(doubt(&well.name, &spread));
        well.spread = Some(spread);
    }
    Ok(())
}

fn outcome(well: &WellResult) -> ModelOutcome {
    well.natural_flow_end.map_or(ModelOutcome::StillFlows, ModelOutcome::Ends)
}

fn doubt(name: &str, spread: &Spread) -> Option<Doubt> {
    let (first, earliest) = spread.earliest()?;
    let (last, latest) = spread.latest()?;
    let still = spread.still_flowing();
    let days = latest.days - earliest.days;
    if days <= WIDE_DAYS && still.is_empty() {
        return None;
    }
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
        advice: "run a flowing pressure survey at a low rate, and choose the model that meets it".to_owned(),
    })
}

/// The models that apply to each well at the tank's state at the start.
fn applicable(field: &Field) -> Vec<Vec<TubingMethod>> {
    let gauge = Gauge::default();
    field
        .wells()
        .iter()
        .map(|well| {
            let now = well.now(field.fluid(), field.start(), 0.0, &gauge);
            let rate = well.spec.target_rate_stb_d.unwrap_or(0.3 * now.curve.open_flow_stb_d());
            let stream = now.stream(rate);
            TubingMethod::ALL
                .into_iter()
                .filter(|m| well.tubing.applicable(*m, field.fluid(), &stream, now.open_wellhead_psia(rate)))
                .collect()
        })
        .collect()
}

/// The same field with every well on one model, also after dated events.
fn with_method(spec: &FieldSpec, method: TubingMethod) -> FieldSpec {
    let mut other = spec.clone();
    for well in &mut other.wells {
        well.tubing.method = method;
    }
    for change in &mut other.changes {
        if let Change::Well(_, well) = &mut change.change {
            well.tubing.method = method;
        }
    }
    other
}
