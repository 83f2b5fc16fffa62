//! Onsets of asphaltene and wax: from the tree to plain data.

use super::problem::Problem;
use super::reader::Reader;
use super::schema::Limits;
use super::section::Section;
use super::tree::{Node, Value};
use crate::forecast::OnsetSpec;
use crate::units::Dimension;

/// Onset pressures, psia.
const PRESSURE_PSIA: Limits = Limits { low: 0.0, low_allowed: false, high: 30_000.0 };
/// Temperatures of a table, degF.
const TEMPERATURE_DEGF: Limits = Limits { low: -40.0, low_allowed: true, high: 600.0 };

/// The onsets of `[fluid]`; empty where none is given.
pub(super) fn read(reader: &mut Reader, fluid: &Section<'_>) -> OnsetSpec {
    let onsets = OnsetSpec {
        asphaltene_upper: pressures(reader, fluid, "asphaltene_onset"),
        asphaltene_lower: pressures(reader, fluid, "asphaltene_lower_onset"),
        wax_appearance_degf: reader.optional_quantity(fluid, "wax_appearance"),
    };
    if fluid.has("asphaltene_lower_onset") && !fluid.has("asphaltene_onset") {
        reader.note(
            Problem::new(fluid.at("asphaltene_lower_onset"), "`fluid.asphaltene_lower_onset` stands alone")
                .label("`asphaltene_onset` is expected beside it"),
        );
    }
    // Straight between their points, so that the points tell whether the lines cross.
    let crossed = onsets.asphaltene_lower.iter().chain(&onsets.asphaltene_upper).find_map(|&(degf, _)| {
        let (lower, upper) = (onsets.lower_psia(degf)?, onsets.upper_psia(degf)?);
        (lower >= upper).then_some((lower, upper))
    });
    if let Some((lower, upper)) = crossed {
        reader.note(
            Problem::new(
                fluid.at("asphaltene_lower_onset"),
                format!("the lower onset ({lower:.1} psia) is not below the upper one ({upper:.1} psia)"),
            )
            .label("a pressure below asphaltene_onset is expected"),
        );
    }
    onsets
}

/// Temperature, degF, and pressure, psia; one point holds at every temperature.
fn pressures(reader: &mut Reader, fluid: &Section<'_>, key: &str) -> Vec<(f64, f64)> {
    let Some(entry) = fluid.get(key) else { return Vec::new() };
    let path = fluid.path_of(key);
    let expected = "a pressure is expected, or [[\"120 degF\", \"4500 psia\"], [\"190 degF\", \"4200 psia\"]]";
    match &entry.node.value {
        Value::List(rows) => {
            if rows.is_empty() {
                reader.note(Problem::new(entry.node.at.clone(), format!("`{path}` is an empty list")).label(expected));
            }
            let points: Vec<(f64, f64)> = rows.iter().map(|row| point(reader, row, &path)).collect();
            for (row, pair) in rows.iter().skip(1).zip(points.windows(2)) {
                if pair[1].0 <= pair[0].0 {
                    reader.note(
                        Problem::new(row.at.clone(), format!("the temperatures of `{path}` do not rise"))
                            .label("a higher temperature than in the point before is expected"),
                    );
                }
            }
            points
        }
        Value::Text(_) | Value::Number(_) => {
            vec![(0.0, reader.quantity_node(&entry.node, &path, Dimension::Pressure, PRESSURE_PSIA))]
        }
        other => {
            reader.note(Problem::new(entry.node.at.clone(), format!("`{path}` is {}", other.kind())).label(expected));
            Vec::new()
        }
    }
}

fn point(reader: &mut Reader, row: &Node, path: &str) -> (f64, f64) {
    if let Some([temperature, pressure]) = row.list() {
        return (
            reader.quantity_node(temperature, "temperature", Dimension::Temperature, TEMPERATURE_DEGF),
            reader.quantity_node(pressure, "onset pressure", Dimension::Pressure, PRESSURE_PSIA),
        );
    }
    reader.note(
        Problem::new(row.at.clone(), format!("a point of `{path}` is a pair"))
            .label("[temperature, pressure] is expected, like [\"120 degF\", \"4500 psia\"]"),
    );
    (f64::NAN, f64::NAN)
}
