//! Doubts about tubing models that met no measurement, or miss theirs.

use super::measured::{Measurement, Misses, Tuning};
use super::tuning;
use crate::forecast::{Doubt, DoubtKind, Field, FieldSpec, RunError};
use crate::well::WellModel;

/// A survey that the model misses by more than this part of a pressure is doubted.
const SURVEY_MISS: f64 = 0.05;
/// A stated slip factor this near to the fitted one needs no words.
const SAME_SLIP: f64 = 0.03;
/// Measured temperatures that differ by more than this from those used are doubted, degF.
const TEMPERATURE_DEGF: f64 = 15.0;

/// Doubts about the tubing of every well, by its measurements or the lack of them.
///
/// # Errors
/// [`RunError`] where the field cannot be prepared.
pub fn tubing_doubts(spec: &FieldSpec) -> Result<Vec<Doubt>, RunError> {
    let field = Field::new(spec)?;
    Ok(field.wells().iter().flat_map(|well| of_well(well, &field)).collect())
}

fn of_well(well: &WellModel, field: &Field) -> Vec<Doubt> {
    let about = well.spec.name.as_str();
    let doubt = |kind, seen: String, cause: &str, advice: &str| Doubt {
        kind,
        about: about.to_owned(),
        seen,
        cause: cause.to_owned(),
        advice: advice.to_owned(),
    };
    let measurements = Measurement::of(well, field);
    let method = well.tubing.method();
    if measurements.is_empty() {
        return vec![doubt(
            DoubtKind::ModelChoice,
            format!("its tubing model ({}) met no measurement", method.name()),
            "there is no flowing survey, and no separator test with a gauge",
            "enter [[well.flowing_survey]] and run `wane calibrate`; no model should be trusted in a field before it was tested there",
        )];
    }
    let mut out = Vec::new();
    let stated = Tuning { method, slip_factor: well.spec.tubing.slip_factor, roughness_in: None };
    for m in &measurements {
        let misses = m.misses(field.fluid(), &stated);
        let pairs: Vec<(f64, f64)> = misses.iter().zip(&m.stations).map(|(x, s)| (*x, s.pressure_psia)).collect();
        let found = Misses::of(&pairs);
        // NaN is a miss too.
        if found.worst_relative.is_nan() || found.worst_relative > SURVEY_MISS {
            out.push(doubt(
                DoubtKind::TestMismatch,
                format!(
                    "{} misses pressures of the {} by up to {:.1} %",
                    method.name(),
                    title(m),
                    100.0 * found.worst_relative
                ),
                "the model as tuned does not describe this well, or rate, gas, water or gauge of that day are wrong",
                "run `wane calibrate` and use the lines that it prints",
            ));
        }
        out.extend(temperature(well, m).map(|seen| {
            doubt(
                DoubtKind::TestMismatch,
                seen,
                "the scenario's temperatures are straight lines, the well's are not",
                "state tubing.temperature with the measured ones",
            )
        }));
    }
    let fit = tuning::fit(
        &Tuning::published(method, &well.spec.tubing),
        &measurements,
        field.fluid(),
        super::start_roughness_in(&well.spec.tubing),
    );
    // The slip factor alone, at the roughness that is stated.
    if let Ok(fit) = fit.map(|fit| fit.alone)
        && let Some((low, high)) = fit.1
        && !(low..=high).contains(&stated.slip_factor)
        && (stated.slip_factor - fit.0).abs() > SAME_SLIP
    {
        out.push(doubt(
            DoubtKind::WeakFit,
            format!(
                "a slip factor of {:.3} is used with {}, the measurements give {:.3} ({low:.3} to {high:.3}) at this roughness",
                stated.slip_factor,
                method.name(),
                fit.0
            ),
            "the scenario was not calibrated, or the measurements changed since",
            "run `wane calibrate` and use the lines that it prints",
        ));
    }
    out
}

fn title(m: &Measurement) -> String {
    let what = match m.kind {
        super::Kind::Survey => "flowing survey",
        super::Kind::Test => "separator test",
    };
    m.on.map_or_else(|| what.to_owned(), |on| format!("{what} of {on}"))
}

/// The largest difference between a measured temperature and the one used in the forecast.
fn temperature(well: &WellModel, m: &Measurement) -> Option<String> {
    let apart = |s: &super::Station| Some((s.md_ft, s.temperature_degf?, well.tubing.place(s.md_ft).1));
    let (md_ft, measured, used) = m
        .stations
        .iter()
        .filter_map(apart)
        .max_by(|a, b| (a.1 - a.2).abs().total_cmp(&(b.1 - b.2).abs()))
        .filter(|(_, measured, used)| (measured - used).abs() > TEMPERATURE_DEGF)?;
    Some(format!("the {} found {measured:.0} degF at {md_ft:.0} ft, the forecast uses {used:.0} degF", title(m)))
}
