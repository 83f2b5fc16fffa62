//! What no flowing survey can be: faults by path.

use super::checks::{DEPTH_ROUNDING_FT, SAME_PRESSURE_PSI};
use crate::fault::Fault;
use crate::tank::TankSpec;
use crate::well::WellSpec;

/// The flowing surveys of a well; keys are relative to it.
pub(super) fn flowing(well: &WellSpec, tank: &TankSpec, atmospheric_pressure_psia: f64) -> Vec<Fault> {
    let mut out = Vec::new();
    let survey_end_ft = well.tubing.survey.last().map_or(f64::NAN, |point| point.0);
    let bottom_ft = well.perforations_md_ft.unwrap_or(survey_end_ft);
    for (i, survey) in well.flowing_surveys.iter().enumerate() {
        let at = |key: &str| format!("flowing_survey[{i}].{key}");
        if survey.wellhead_psia < atmospheric_pressure_psia - SAME_PRESSURE_PSI {
            out.push(
                Fault::new(at("wellhead"), "the wellhead pressure lies below atmospheric pressure")
                    .help("was a gauge pressure meant? write psig or barg"),
            );
        }
        if survey.reservoir_psia.is_some_and(|reservoir_psia| survey.wellhead_psia >= reservoir_psia) {
            out.push(
                Fault::new(at("wellhead"), "the wellhead pressure is not below the reservoir pressure")
                    .help("check for swapped values"),
            );
        }
        if survey.wellhead_temperature_degf.is_some_and(|wellhead_degf| wellhead_degf > tank.temperature_degf) {
            out.push(
                Fault::new(at("wellhead_temperature"), "the wellhead is hotter than the tank").help("check the unit"),
            );
        }
        for (j, point) in survey.points.iter().enumerate() {
            if point.md_ft > bottom_ft + DEPTH_ROUNDING_FT {
                out.push(
                    Fault::new(
                        at(&format!("points[{j}]")),
                        format!(
                            "point {} of the survey ({:.1} ft) lies below the perforations ({bottom_ft:.1} ft)",
                            j + 1,
                            point.md_ft
                        ),
                    )
                    .help("depths are measured along the well from the wellhead; below the perforations nothing flows"),
                );
                break;
            }
            if point.pressure_psia < atmospheric_pressure_psia - SAME_PRESSURE_PSI {
                out.push(
                    Fault::new(
                        at(&format!("points[{j}]")),
                        format!("the pressure of point {} lies below atmospheric pressure", j + 1),
                    )
                    .help("was a gauge pressure meant? write psig or barg"),
                );
                break;
            }
        }
        if let Some(j) = survey.points.windows(2).position(|pair| pair[1].md_ft <= pair[0].md_ft) {
            out.push(
                Fault::new(
                    at(&format!("points[{}]", j + 1)),
                    format!(
                        "the survey goes backwards: depth falls or stands still from point {} to point {}",
                        j + 1,
                        j + 2
                    ),
                )
                .help("points go down from the wellhead"),
            );
        }
    }
    out
}
