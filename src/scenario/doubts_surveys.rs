//! Doubts about flowing surveys as they stand in the scenario.

use super::doubts::{doubt, short};
use super::doubts_wells::age;
use crate::forecast::{Doubt, DoubtKind, FieldSpec};
use crate::well::{FlowingSurvey, WellSpec};

/// Steeper than this no flowing column is: heavy brine at rest, psi/ft of vertical depth.
const STEEPEST_PSI_FT: f64 = 0.55;
/// Rounding of a gauge, psi.
const GAUGE_PSI: f64 = 2.0;

/// Doubts about the flowing surveys of a well.
pub(super) fn flowing(well: &WellSpec, field: &FieldSpec) -> Vec<Doubt> {
    well.flowing_surveys.iter().flat_map(|survey| one(well, survey, field)).collect()
}

fn one(well: &WellSpec, survey: &FlowingSurvey, field: &FieldSpec) -> Vec<Doubt> {
    let mut out = Vec::new();
    let about = well.name.as_str();
    let when = format!("the flowing survey of {}", survey.on);
    let advice = "slip changes little with age, but gas and water do: survey again before lift is ordered";
    out.extend(age(about, &when, survey.on, field, "no newer survey", advice));
    out.extend(pressures(about, &when, well, survey));
    let solution = field.fluid.solution_gor_scf_stb;
    if survey.gor_scf_stb < 0.8 * solution {
        out.push(doubt(
            DoubtKind::TestMismatch,
            about,
            format!(
                "the gas-oil ratio of {when} ({} scf/STB) does not fit the oil's ({} scf/STB)",
                short(survey.gor_scf_stb),
                short(solution)
            ),
            "gas that was not metered, or a unit",
            "check the separator's gas meter and fluid.solution_gor: the fit takes missing gas for slip",
        ));
    }
    out
}

/// The first thing about the pressures that no column of flowing oil shows.
fn pressures(about: &str, when: &str, well: &WellSpec, survey: &FlowingSurvey) -> Option<Doubt> {
    let mut above = (0.0, survey.wellhead_psia);
    for (i, point) in survey.points.iter().enumerate() {
        let rise_psi = point.pressure_psia - above.1;
        let height_ft = vertical_ft(well, point.md_ft) - vertical_ft(well, above.0);
        let station =
            format!("point {} of {when} ({} psia at {} ft)", i + 1, short(point.pressure_psia), short(point.md_ft));
        if rise_psi < -GAUGE_PSI {
            return Some(doubt(
                DoubtKind::UnlikelyValue,
                about,
                format!("{station} lies {} psi below the pressure above it", short(-rise_psi)),
                "a gauge that had not settled, swapped points, or a rate that changed during the survey",
                "leave the point out, or check gauge and clock",
            ));
        }
        if rise_psi > STEEPEST_PSI_FT * height_ft + 4.0 * GAUGE_PSI + 0.02 * survey.wellhead_psia {
            return Some(doubt(
                DoubtKind::UnlikelyValue,
                about,
                format!("{station} lies {} psi above the pressure {} ft higher up", short(rise_psi), short(height_ft)),
                "steeper than a column of brine: a slip in depth or pressure, gauge against absolute, or a restriction",
                "check the point and its units",
            ));
        }
        above = (point.md_ft, point.pressure_psia);
    }
    let reservoir_psia = survey.reservoir_psia?;
    (above.1 >= reservoir_psia).then(|| {
        doubt(
            DoubtKind::UnlikelyValue,
            about,
            format!("the deepest pressure of {when} is not below the reservoir pressure"),
            "the well did not flow, or another datum",
            "check the reservoir pressure and its depth",
        )
    })
}

/// Vertical depth by the survey of the path, ft.
fn vertical_ft(well: &WellSpec, md_ft: f64) -> f64 {
    let path = &well.tubing.survey;
    let pair = path.windows(2).find(|pair| md_ft <= pair[1].0).or(path.windows(2).last());
    pair.map_or(md_ft, |pair| pair[0].1 + (md_ft - pair[0].0) / (pair[1].0 - pair[0].0) * (pair[1].1 - pair[0].1))
}
