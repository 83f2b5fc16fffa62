//! A whole scenario: from the file to the data of a forecast.

#![allow(clippy::unwrap_used)] // a test that unwraps fails with its line

use wane::forecast::{Change, Every, InjectedFluid, InjectionControl, Tolerance};
use wane::inflow::{Coefficient, FutureRule, InflowMethod, Measured, RateBasis};
use wane::scenario::{Document, starter};
use wane::tank::WaterModel;
use wane::tubing::TubingMethod;
use wane::units::UnitSystem;

const REFERENCE: &str = include_str!("data/reference.toml");

fn reference() -> Document {
    Document::parse("reference.toml", REFERENCE).unwrap_or_else(|problems| panic!("{problems}"))
}

fn date(text: &str) -> jiff::civil::Date {
    text.parse().unwrap()
}

#[test]
fn the_example_of_the_reference_resolves_to_what_it_says() {
    let scenario = reference().resolve(None, &[]).unwrap_or_else(|problems| panic!("{problems}"));
    assert_eq!(scenario.title, "Quillmere flank");
    assert_eq!(scenario.units, UnitSystem::Field);
    let field = &scenario.field;
    assert_eq!((field.period.start, field.period.end), (date("2027-01-01"), date("2042-01-01")));
    assert_eq!(field.period.every, Every::Month);
    assert_eq!(field.tolerance, Tolerance::Normal);
    assert_eq!(field.fluid.oil_gravity_api, 34.0);
    assert_eq!(field.fluid.bubble_point_psia, Some(2650.0));
    assert_eq!(field.fluid.standard_temperature_degr, 519.67);
    assert_eq!(field.tank.oil_in_place_stb, 42.0e6);
    assert_eq!(field.tank.pore_compressibility_1_psi, 4.0e-6);
    assert_eq!(field.tank.water_model, WaterModel::Average);
    assert_eq!(field.tank.relative_permeability.critical_gas, 0.04);
    let injector = &field.injectors[0];
    assert_eq!((injector.name.as_str(), injector.fluid), ("OI-1", InjectedFluid::Water));
    assert_eq!(injector.start, Some(date("2029-01-01")));
    assert_eq!(injector.control, InjectionControl::VoidageReplacement(0.8));
    assert_eq!((injector.bottomhole_limit_psia, injector.injectivity), (Some(5200.0), Some(12.0)));
    let well = &field.wells[0];
    assert_eq!((well.line_pressure_psia, well.target_rate_stb_d, well.uptime), (220.0, Some(1800.0), 0.94));
    assert_eq!(well.perforations_md_ft, Some(8600.0));
    assert_eq!((well.inflow.method, well.inflow.future), (InflowMethod::Fetkovich, FutureRule::Pressure));
    assert_eq!((well.inflow.basis, well.inflow.exponent), (RateBasis::Liquid, None));
    let Coefficient::Tests(tests) = &well.inflow.coefficient else { panic!("tests") };
    assert_eq!(tests.len(), 3);
    assert_eq!(tests[2].measured, Measured::Gauged { flowing_psia: 2440.0 });
    assert_eq!(well.tubing.method, TubingMethod::HasanKabir);
    assert_eq!(well.tubing.survey, [(0.0, 0.0), (4000.0, 4000.0), (8600.0, 8150.0)]);
    assert_eq!(well.tubing.sections[0].diameter_in, 2.441);
    assert_eq!(field.changes.len(), 1);
    assert_eq!((field.changes[0].name.as_str(), field.changes[0].text.as_str()), ("OP-1", "skin = -2.0"));
    let Change::Well(0, changed) = &field.changes[0].change else { panic!("well 0") };
    assert_eq!(changed.skin, -2.0);
    assert_eq!(changed.inflow, well.inflow);
}

#[test]
fn a_case_changes_what_it_sets() {
    let document = reference();
    assert_eq!(document.case_names(), ["no injection"]);
    let scenario = document.resolve(Some("no injection"), &[]).unwrap_or_else(|problems| panic!("{problems}"));
    assert_eq!(scenario.field.injectors[0].control, InjectionControl::VoidageReplacement(0.0));
}

#[test]
fn the_starter_resolves_in_every_case() {
    let document = Document::parse("starter.toml", starter()).unwrap_or_else(|problems| panic!("{problems}"));
    for case in std::iter::once(None).chain(document.case_names().iter().map(|name| Some(name.as_str()))) {
        document.resolve(case, &[]).unwrap_or_else(|problems| panic!("{problems}"));
    }
    document.resolve_fluid(&[]).unwrap_or_else(|problems| panic!("{problems}"));
}
