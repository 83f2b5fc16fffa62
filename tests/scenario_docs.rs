//! The reference in docs/scenario.md and the program agree, key by key, unit by unit, example by example.

use std::collections::BTreeSet;
use wane::rock::CoreySpec;
use wane::scenario::{Document, schema};
use wane::units::{Dimension, units_of};

const DOCS: &str = include_str!("../docs/scenario.md");

/// The blocks of TOML in the text.
fn examples() -> Vec<&'static str> {
    DOCS.split("```toml\n").skip(1).filter_map(|rest| rest.split("```").next()).collect()
}

#[test]
fn every_key_the_reader_accepts_is_documented_and_no_other() {
    let documented: BTreeSet<&str> = DOCS.lines().filter(|line| line.starts_with("| `")).collect();
    let accepted: Vec<String> = schema::KEYS.iter().map(schema::Key::row).collect();
    let accepted: BTreeSet<&str> = accepted.iter().map(String::as_str).collect();
    let missing: Vec<_> = accepted.difference(&documented).collect();
    let stale: Vec<_> = documented.difference(&accepted).collect();
    assert!(missing.is_empty(), "not in docs/scenario.md:\n{missing:#?}");
    assert!(stale.is_empty(), "in docs/scenario.md, but not so in the program:\n{stale:#?}");
}

#[test]
fn every_unit_is_documented() {
    for dimension in Dimension::ALL {
        let names: Vec<_> = units_of(dimension).map(|unit| unit.name).collect();
        let what = dimension.with_article().trim_start_matches("an ").trim_start_matches("a ");
        let row = format!("| {what} | {} |", names.join(", "));
        assert!(DOCS.lines().any(|line| line == row), "missing: {row}");
    }
}

#[test]
fn the_complete_example_resolves_and_is_the_one_that_tests_use() {
    let example = examples()[0];
    assert_eq!(example.trim(), include_str!("data/reference.toml").trim());
    let document = Document::parse("example.toml", example).unwrap_or_else(|problems| panic!("{problems}"));
    document.resolve(None, &[]).unwrap_or_else(|problems| panic!("{problems}"));
}

#[test]
fn the_fluid_example_needs_no_well() {
    let document = Document::parse("fluid.toml", examples()[1]).unwrap_or_else(|problems| panic!("{problems}"));
    let fluid = document.resolve_fluid(&[]).unwrap_or_else(|problems| panic!("{problems}"));
    assert_eq!((fluid.temperature_degf, fluid.pressure_psia), (190.0, None));
    assert!(document.resolve(None, &[]).is_err());
}

#[test]
fn defaults_of_the_reference_are_those_of_the_physics() {
    let corey = CoreySpec::default();
    let expected = [
        ("critical_gas", corey.critical_gas),
        ("residual_oil_to_gas", corey.residual_oil_to_gas),
        ("residual_oil_to_water", corey.residual_oil_to_water),
        ("oil_end", corey.oil_end),
        ("gas_end", corey.gas_end),
        ("water_end", corey.water_end),
        ("oil_exponent", corey.oil_exponent),
        ("gas_exponent", corey.gas_exponent),
        ("water_exponent", corey.water_exponent),
    ];
    for (name, value) in expected {
        let key = schema::find(&format!("tank.relative_permeability.{name}"));
        let Some(schema::Need::Default(text)) = key.map(|key| key.need) else { panic!("{name} has no default") };
        assert_eq!(text.parse(), Ok(value), "{name}");
    }
}
