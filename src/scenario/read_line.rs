//! Shared lines and wellhead chokes: from the tree to plain data.

use super::overrides::unknown_name;
use super::problem::Problem;
use super::reader::Reader;
use super::schema::Limits;
use super::section::Section;
use super::tree::Node;
use crate::tubing::{ChokeMethod, ChokeSpec, ChokeTest, Discharge};
use crate::units::{Dimension, parse};
use crate::well::{LineRate, LineSpec};

const PRESSURE_PSIA: Limits = Limits { low: 0.0, low_allowed: false, high: 30_000.0 };
/// Totals of a line: a thousand of the largest wells.
const LIQUID_STB_D: Limits = Limits { low: 0.0, low_allowed: true, high: 1.0e9 };
const GAS_SCF_D: Limits = Limits { low: 0.0, low_allowed: true, high: 1.0e13 };

/// One shared line.
pub(super) fn line(reader: &mut Reader, section: &Section<'_>) -> LineSpec {
    let name = reader.name(section).unwrap_or_default();
    let example = "[[\"0 STB/d\", \"150 psia\"], [\"6000 STB/d\", \"240 psia\"]]";
    let mut spec = LineSpec { name, rate: LineRate::Liquid, pressures: Vec::new() };
    if let Some(entry) = reader.look(section, "pressure", example).0 {
        match entry.node.list() {
            Some(rows) if !rows.is_empty() => {
                // The unit of the first rate tells what the table goes by.
                let gas = rows.first().and_then(Node::list).and_then(|pair| pair.first()).is_some_and(is_gas_rate);
                spec.rate = if gas { LineRate::Gas } else { LineRate::Liquid };
                spec.pressures = rows.iter().map(|row| point(reader, row, gas)).collect();
            }
            _ => {
                let problem = Problem::new(entry.node.at.clone(), "`line.pressure` is no list of pairs");
                reader.note(problem.label(format!("expected: {example}")));
                spec.pressures.push((f64::NAN, f64::NAN));
            }
        }
    }
    reader.finish(section);
    spec
}

fn is_gas_rate(node: &Node) -> bool {
    node.text().is_some_and(|text| {
        parse(text, Dimension::GasRate, 0.0).is_ok() && parse(text, Dimension::LiquidRate, 0.0).is_err()
    })
}

fn point(reader: &mut Reader, row: &Node, gas: bool) -> (f64, f64) {
    let Some([rate, pressure]) = row.list() else {
        reader.note(
            Problem::new(row.at.clone(), "a point of a line's table is a pair")
                .label("[total rate, pressure] is expected, like [\"6000 STB/d\", \"240 psia\"]"),
        );
        return (f64::NAN, f64::NAN);
    };
    let (dimension, limits) = if gas { (Dimension::GasRate, GAS_SCF_D) } else { (Dimension::LiquidRate, LIQUID_STB_D) };
    (
        reader.quantity_node(rate, "total rate", dimension, limits),
        reader.quantity_node(pressure, "line pressure", Dimension::Pressure, PRESSURE_PSIA),
    )
}

/// The line into which a well flows: its pressure (the lowest of a shared one), psia, and the name of a shared one.
pub(super) fn line_of(reader: &mut Reader, well: &Section<'_>, lines: &[LineSpec]) -> (f64, Option<String>) {
    super::read_wells::exactly_one(reader, well, "the line into which the well flows", &["line_pressure", "line"]);
    let own_psia = reader.optional_quantity(well, "line_pressure");
    let shared = well.has("line") && !well.has("line_pressure");
    let Some(name) = shared.then(|| reader.text(well, "line")).flatten() else {
        return (own_psia.unwrap_or(f64::NAN), None);
    };
    match lines.iter().find(|line| line.name == name) {
        Some(line) => (line.pressures.first().map_or(f64::NAN, |point| point.1), Some(name)),
        None => {
            let names: Vec<String> = lines.iter().map(|line| line.name.clone()).collect();
            reader.note(unknown_name("line", &name, &names, well.at("line")));
            (f64::NAN, None)
        }
    }
}

/// The choke of a well.
pub(super) fn choke(reader: &mut Reader, well: &Section<'_>) -> Option<ChokeSpec> {
    if !well.has("choke") {
        return None;
    }
    let section = reader.section(well, "choke");
    let name = reader.choice(&section, "method", &[]);
    let method =
        ChokeMethod::ALL.into_iter().find(|method| name == Some(method.name())).unwrap_or(ChokeMethod::Sachdeva);
    let size_in = reader.quantity(&section, "size");
    let given = reader.optional_number(&section, "discharge_coefficient");
    if section.has("test") && section.has("discharge_coefficient") {
        reader.note(
            Problem::new(section.at("discharge_coefficient"), "`test` and `discharge_coefficient` exclude each other")
                .label("the tests give the coefficient"),
        );
    }
    let discharge = if section.has("test") {
        Discharge::Tests(
            reader.sections(&section, "test").iter().map(|test| choke_test(reader, test, size_in)).collect(),
        )
    } else {
        Discharge::Given(given.unwrap_or(method.usual_discharge()))
    };
    reader.finish(&section);
    Some(ChokeSpec { method, size_in, discharge })
}

fn choke_test(reader: &mut Reader, section: &Section<'_>, size_in: f64) -> ChokeTest {
    let test = ChokeTest {
        on: reader.day(section, "on"),
        size_in: reader.optional_quantity(section, "size").unwrap_or(size_in),
        wellhead_psia: reader.quantity(section, "wellhead"),
        line_psia: reader.quantity(section, "line"),
        rate_stb_d: reader.quantity(section, "rate"),
        gor_scf_stb: reader.quantity(section, "gor"),
        water_cut: reader.number(section, "water_cut"),
    };
    if test.line_psia >= test.wellhead_psia {
        reader.note(
            Problem::new(section.at("line"), "the pressure downstream of the choke is not below that upstream of it")
                .label("a pressure below `wellhead` is expected"),
        );
    }
    reader.finish(section);
    test
}
