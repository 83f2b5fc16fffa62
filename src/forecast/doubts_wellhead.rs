//! Doubts about chokes and shared lines.

use super::doubts::{doubt, months};
use super::field::Field;
use super::{Change, Doubt, DoubtKind, Forecast};
use crate::tubing::ChokeMethod;
use crate::well::WellModel;

/// A test of a choke that is missed by more than this is doubted: relations tuned to one field miss by 7 to 9 % on average.
const CHOKE_MISS: f64 = 0.10;

/// What to doubt of a well's choke.
pub(super) fn choke(model: &WellModel, forecast: &Forecast, w: usize, doubts: &mut Vec<Doubt>) {
    let Some(choke) = &model.choke else { return };
    let result = &forecast.wells[w];
    let name = &result.name;
    for check in choke.checks() {
        let miss = check.rate_ratio - 1.0;
        if miss.abs() > CHOKE_MISS {
            doubts.push(doubt(
                DoubtKind::TestMismatch,
                name,
                format!(
                    "the choke's test of {:.0} STB/d lies {:+.0} % off the fitted relation",
                    check.test.rate_stb_d,
                    100.0 * miss
                ),
                "the tests of the choke do not follow one discharge coefficient: wear, wax, or a wrong opening",
                "inspect the choke, or leave the odd test out and see what changes",
            ));
        }
    }
    let subcritical: Vec<usize> =
        result.rows.iter().enumerate().filter(|(_, row)| row.choke_critical == Some(false)).map(|(i, _)| i).collect();
    if choke.method() != ChokeMethod::Sachdeva && !subcritical.is_empty() {
        doubts.push(doubt(
            DoubtKind::OutsideRange,
            name,
            format!("the flow through the choke is not critical: {}", months(forecast, &subcritical)),
            "this relation holds in critical flow alone, where the line's pressure does not reach back to the well",
            "choose the method \"sachdeva\" for the choke, which holds on both sides",
        ));
    }
}

/// What to doubt of a shared line.
pub(super) fn line(field: &Field, forecast: &Forecast, l: usize, doubts: &mut Vec<Doubt>) {
    let line = &field.spec.lines[l];
    let last_psia = line.pressures.last().map_or(f64::INFINITY, |point| point.1);
    let joins = |w: usize| field.spec.wells[w].shared_line.as_deref() == Some(line.name.as_str());
    let beyond = |i: usize| {
        (0..forecast.wells.len())
            .filter(|w| joins(*w))
            .filter_map(|w| forecast.wells[w].rows.get(i)?.line_pressure_psia)
            .any(|psia| psia > last_psia * (1.0 + 1e-9))
    };
    let replaced = field.spec.changes.iter().any(|c| matches!(c.change, Change::Line(changed, _) if changed == l));
    let rows: Vec<usize> = (0..forecast.periods.len()).filter(|i| line.pressures.len() > 1 && beyond(*i)).collect();
    if !rows.is_empty() && !replaced {
        doubts.push(doubt(
            DoubtKind::OutsideRange,
            &line.name,
            format!("the wells make more than the last rate of the line's table: {}", months(forecast, &rows)),
            "beyond the table the pressure goes on with its last slope",
            "add a point to the table at a higher rate",
        ));
    }
}
