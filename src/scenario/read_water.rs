//! Water at the wells: from the tree to plain data.

use super::problem::Problem;
use super::reader::Reader;
use super::schema::Limits;
use super::section::Section;
use super::tree::{Node, Value};
use crate::tank::{Trend, TrendOver, WaterModel, WaterSpec, WaterTrend};
use crate::units::Dimension;
use crate::well::MakesSpec;

const OIL_STB: Limits = Limits { low: 0.0, low_allowed: true, high: 1.0e12 };
const PORE_VOLUMES: Limits = Limits { low: 0.0, low_allowed: true, high: 100.0 };
const WATER_CUT: Limits = Limits { low: 0.0, low_allowed: true, high: 0.9999 };
const WATER_OIL_RATIO: Limits = Limits { low: 0.0, low_allowed: true, high: 1.0e4 };
const GOR_SCF_STB: Limits = Limits { low: 0.0, low_allowed: false, high: 1.0e6 };

/// The second member of a pair.
#[derive(Clone, Copy, PartialEq)]
enum Second {
    WaterCut,
    WaterOilRatio,
    Gor,
}

/// The water model and what it goes by; without a word it is displacement where water flows in.
pub(super) fn tank(reader: &mut Reader, tank: &Section<'_>, water_flows_in: bool) -> (WaterModel, WaterSpec) {
    let section = reader.section(tank, "water");
    let model = match reader.choice(&section, "model", &[]) {
        Some("average") => WaterModel::Average,
        Some("displacement") => WaterModel::Displacement,
        Some("trend") => WaterModel::Trend,
        Some(_) => WaterModel::Connate,
        None if water_flows_in && !section.has("model") => WaterModel::Displacement,
        None => WaterModel::Connate,
    };
    let contacted_fraction = reader.number(&section, "contacted_fraction");
    let water_oil_ratio = reader.choice(&section, "trend_of", &[]) == Some("water-oil-ratio");
    let second = if water_oil_ratio { Second::WaterOilRatio } else { Second::WaterCut };
    // Kept beside another model too: a case or an event may turn to it.
    let trend =
        points(reader, &section, "trend", second).map(|(over, curve)| WaterTrend { over, water_oil_ratio, curve });
    if model == WaterModel::Trend && !section.has("trend") {
        reader.note(
            Problem::new(section.at("model"), "the water model \"trend\" has no table")
                .label("`trend` is expected beside it")
                .help("trend = [[\"0 STB\", 0.0], [\"2 MMSTB\", 0.35], [\"4 MMSTB\", 0.8]]"),
        );
    }
    reader.finish(&section);
    (model, WaterSpec { contacted_fraction, trend })
}

/// What a well makes otherwise than the tank.
pub(super) fn makes(reader: &mut Reader, well: &Section<'_>) -> MakesSpec {
    for (trend, factor) in [("water_trend", "water_factor"), ("gor_trend", "gor_factor")] {
        if well.has(trend) && well.has(factor) {
            reader.note(
                Problem::new(well.at(factor), format!("`{trend}` and `{factor}` exclude each other"))
                    .label("the trend is what the well makes, whole"),
            );
        }
    }
    MakesSpec {
        breakthrough_delay: reader.number(well, "breakthrough_delay"),
        water_cut: points(reader, well, "water_trend", Second::WaterCut).map(|found| found.1),
        gor: points(reader, well, "gor_trend", Second::Gor).map(|found| found.1),
    }
}

/// A list of pairs in order; `None` where it is not there or wrong, which is noted.
fn points(reader: &mut Reader, section: &Section<'_>, key: &str, second: Second) -> Option<(TrendOver, Trend)> {
    let entry = section.get(key)?;
    let path = section.path_of(key);
    let example = match second {
        Second::WaterCut => "[[\"0 STB\", 0.0], [\"2 MMSTB\", 0.35]]",
        Second::WaterOilRatio => "[[\"0 STB\", 0.0], [\"2 MMSTB\", 1.5]]",
        Second::Gor => "[[\"0 STB\", \"620 scf/STB\"], [\"2 MMSTB\", \"900 scf/STB\"]]",
    };
    let rows = match &entry.node.value {
        Value::List(rows) if !rows.is_empty() => rows,
        _ => {
            let problem = Problem::new(entry.node.at.clone(), format!("`{path}` is no list of pairs"));
            reader.note(problem.label(format!("expected: {example}")));
            return None;
        }
    };
    // A bare number in the first pair means pore volumes; only the tank's table may go by them.
    let first = rows.first().and_then(Node::list).and_then(|pair| pair.first());
    let bare = first.is_some_and(|node| matches!(node.value, Value::Number(_))) && section.path == "tank.water";
    let mut list = Vec::with_capacity(rows.len());
    for row in rows {
        let Some([x, y]) = row.list() else {
            reader.note(
                Problem::new(row.at.clone(), format!("a point of `{path}` is a pair"))
                    .label(format!("like those of {example}")),
            );
            return None;
        };
        let x = if bare {
            reader.number_node(x, "injected pore volumes", PORE_VOLUMES)
        } else {
            reader.quantity_node(x, "cumulative oil", Dimension::LiquidVolume, OIL_STB)
        };
        let y = match second {
            Second::WaterCut => reader.number_node(y, "water cut", WATER_CUT),
            Second::WaterOilRatio => reader.number_node(y, "water-oil ratio", WATER_OIL_RATIO),
            Second::Gor => reader.quantity_node(y, "gas-oil ratio", Dimension::GasOilRatio, GOR_SCF_STB),
        };
        if x.is_nan() || y.is_nan() {
            return None;
        }
        list.push((x, y));
    }
    let over = if bare { TrendOver::PoreVolumes } else { TrendOver::Oil };
    match Trend::new(list) {
        Ok(curve) => Some((over, curve)),
        Err(message) => {
            reader.note(
                Problem::new(entry.node.at.clone(), format!("the first members of `{path}` do not rise: {message}"))
                    .label("each must lie above the one before"),
            );
            None
        }
    }
}
