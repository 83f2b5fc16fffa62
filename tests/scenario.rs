//! A whole scenario: from the file to the data of a forecast.

#![allow(clippy::unwrap_used)] // a test that unwraps fails with its line

use wane::forecast::{Change, Every, InjectedFluid, InjectionControl, Tolerance};
use wane::inflow::{Coefficient, FutureRule, InflowMethod, Measured, RateBasis};
use wane::scenario::{Document, Scenario, starter};
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

/// Every quantity of the reference, in metric units to seventeen digits by NIST SP 811 definitions.
#[test]
fn a_metric_copy_resolves_to_the_same_field() {
    let psi = 6_894.757_293_168_361_f64; // Pa, from 0.45359237 * 9.80665 / 0.0254^2
    let cubic_foot = 0.028_316_846_592; // m3
    let barrel = 5.614_583 * cubic_foot; // m3, the program's
    let convert = |number: f64, unit: &str| -> Option<(f64, &'static str)> {
        Some(match unit {
            "psia" => (number * psi / 1.0e5, "bara"),
            "scf/STB" => (number * cubic_foot / barrel, "Sm3/Sm3"),
            "MMSTB" => (number * barrel, "million Sm3"),
            "degF" => ((number - 32.0) / 1.8, "degC"),
            "1/psi" => (number * 1.0e5 / psi, "1/bar"),
            "STB/d/psi" => (number * barrel * 1.0e5 / psi, "Sm3/d/bar"),
            "STB/d" => (number * barrel, "Sm3/d"),
            "ft" => (number * 0.3048, "m"),
            "in" => (number * 25.4, "mm"),
            "ppm" => (number * 1.0e-4, "%"),
            // Degrees API, and the units in comments.
            _ => return None,
        })
    };
    // Odd pieces of the split by quotes are the quoted texts (comments of the file hold pairs of quotes too).
    let metric: Vec<String> = REFERENCE
        .split('"')
        .enumerate()
        .map(|(i, piece)| {
            let quantity = piece.split_once(' ').and_then(|(number, unit)| Some((number.parse::<f64>().ok()?, unit)));
            match quantity.filter(|_| i % 2 == 1).and_then(|(number, unit)| convert(number, unit)) {
                Some((number, unit)) => format!("{number:.17e} {unit}"),
                None => piece.to_owned(),
            }
        })
        .collect();
    let metric = metric.join("\"");
    assert!(metric.contains("bara") && metric.contains("million Sm3") && !metric.contains("psia\""));
    let field = reference().resolve(None, &[]).unwrap().field;
    let copy = Document::parse("metric.toml", &metric).unwrap().resolve(None, &[]);
    let copy = copy.unwrap_or_else(|problems| panic!("{problems}")).field;
    let numbers = |text: String| -> Vec<String> {
        text.split(|c: char| !(c.is_ascii_alphanumeric() || ".-_".contains(c))).map(str::to_owned).collect()
    };
    let (field, copy) = (numbers(format!("{field:?}")), numbers(format!("{copy:?}")));
    assert_eq!(field.len(), copy.len());
    let mut compared = 0;
    for (one, other) in field.iter().zip(&copy) {
        match (one.parse::<f64>(), other.parse::<f64>()) {
            (Ok(a), Ok(b)) if a.is_finite() => {
                assert!((a - b).abs() <= 1.0e-9 * a.abs(), "{a} is not {b}");
                compared += 1;
            }
            _ => assert_eq!(one, other),
        }
    }
    assert!(compared > 80, "{compared} numbers were compared");
}

fn resolved(text: &str, case: Option<&str>, sets: &[&str]) -> Scenario {
    let sets: Vec<String> = sets.iter().map(|set| (*set).to_owned()).collect();
    let document = Document::parse("test.toml", text).unwrap_or_else(|problems| panic!("{problems}"));
    document.resolve(case, &sets).unwrap_or_else(|problems| panic!("{problems}"))
}

#[test]
fn settings_go_over_the_case_and_the_case_over_the_file() {
    let text = REFERENCE.replace(
        "set  = { \"injector",
        "set  = { tank.connate_water = 0.3, well.OP-1 = { skin = 1.0 }, \"well.OP-1.uptime\" = 0.5, \"injector",
    );
    let case = Some("no injection");
    let plain = resolved(&text, case, &[]).field;
    assert_eq!((plain.tank.connate_water, plain.wells[0].skin, plain.wells[0].uptime), (0.3, 1.0, 0.5));
    assert_eq!(plain.injectors[0].control, InjectionControl::VoidageReplacement(0.0));
    let scenario = resolved(
        &text,
        case,
        &["tank.connate_water=25 %", "well.OP-1.line_pressure = 15 bara", "well.\"OP-1\".target_rate='900 bopd'"],
    );
    let well = &scenario.field.wells[0];
    assert_eq!((scenario.field.tank.connate_water, well.skin, well.target_rate_stb_d), (0.25, 1.0, Some(900.0)));
    assert!((well.line_pressure_psia - 217.556_6).abs() < 1e-4, "15 bar in psi by NIST SP 811");
    assert_eq!(scenario.settings.len(), 3);
    assert_eq!(scenario.case.as_deref(), case);
}

#[test]
fn alternatives_exclude_each_other_and_the_last_one_set_wins() {
    let field = resolved(REFERENCE, None, &["injector.OI-1.rate=6000 STB/d"]).field;
    assert_eq!(field.injectors[0].control, InjectionControl::Rate(6000.0));
    let sets = ["injector.OI-1.rate=6000 STB/d", "injector.OI-1.voidage_replacement=0.5"];
    let field = resolved(REFERENCE, None, &sets).field;
    assert_eq!(field.injectors[0].control, InjectionControl::VoidageReplacement(0.5));
    let field = resolved(REFERENCE, None, &["well.OP-1.inflow.productivity_index=3 STB/d/psi"]).field;
    let expected = Coefficient::ProductivityIndex { j_stb_d_psi: 3.0, reservoir_psia: 3600.0 };
    assert_eq!(field.wells[0].inflow.coefficient, expected);
    let sections =
        "well.OP-1.tubing.sections=[{ to = \"6000 ft\", diameter = \"2.992 in\" }, { diameter = \"1.995 in\" }]";
    let field = resolved(REFERENCE, None, &[sections]).field;
    let tubing = &field.wells[0].tubing;
    assert_eq!((tubing.sections[0].to_md_ft, tubing.sections[1].to_md_ft), (6000.0, f64::INFINITY));
    assert_eq!((tubing.sections[1].diameter_in, tubing.sections[1].roughness_in), (1.995, 0.0006));
}

#[test]
fn events_add_up_in_the_order_of_their_days() {
    let text = format!(
        "{REFERENCE}\n[[event]]\non = 2029-06-01\nwell = \"OP-1\"\nset = {{ line_pressure = \"150 psia\", skin = 3.0 }}\n\
         [[event]]\non = 2033-06-01\ninjector = \"OI-1\"\nset = {{ rate = \"5000 STB/d\" }}\n\
         [[event]]\non = 2033-06-01\ntank = true\nset = {{ water.model = \"connate\", relative_permeability = {{ oil_end = 0.8 }} }}\n\
         [[case]]\nname = \"more\"\n[[case.event]]\non = 2030-01-01\nwell = \"OP-1\"\nset = {{ tubing.diameter = \"1.995 in\" }}\n"
    );
    let changes = resolved(&text, None, &[]).field.changes;
    let days: Vec<String> = changes.iter().map(|change| change.on.to_string()).collect();
    assert_eq!(days, ["2029-06-01", "2031-06-01", "2033-06-01", "2033-06-01"]);
    let Change::Well(0, first) = &changes[0].change else { panic!("the well") };
    assert_eq!((first.skin, first.line_pressure_psia), (3.0, 150.0));
    let Change::Well(0, second) = &changes[1].change else { panic!("the well") };
    assert_eq!((second.skin, second.line_pressure_psia), (-2.0, 150.0), "the earlier event still holds");
    let Change::Injector(0, injector) = &changes[2].change else { panic!("the injector") };
    assert_eq!(injector.control, InjectionControl::Rate(5000.0));
    let Change::Tank(tank) = &changes[3].change else { panic!("the tank") };
    assert_eq!((tank.water_model, tank.relative_permeability.oil_end), (WaterModel::Connate, 0.8));
    assert_eq!(changes[3].name, "tank");
    assert_eq!(changes[0].text, "line_pressure = \"150 psia\", skin = 3.0");

    let changes = resolved(&text, Some("more"), &[]).field.changes;
    assert_eq!(changes.len(), 5);
    let Change::Well(0, case_event) = &changes[1].change else { panic!("the well") };
    assert_eq!((case_event.tubing.sections[0].diameter_in, case_event.skin), (1.995, 3.0));
    let Change::Well(0, last) = &changes[2].change else { panic!("the well") };
    assert_eq!((last.tubing.sections[0].diameter_in, last.skin), (1.995, -2.0));
}

#[test]
fn a_setting_holds_until_an_event_changes_the_same_key() {
    let field = resolved(REFERENCE, None, &["well.OP-1.skin=4", "well.OP-1.uptime=0.5"]).field;
    let Change::Well(0, after) = &field.changes[0].change else { panic!("the well") };
    assert_eq!((field.wells[0].skin, after.skin, after.uptime), (4.0, -2.0, 0.5));
}

#[test]
fn gauge_pressures_follow_the_stated_atmosphere() {
    let text = REFERENCE.replace("\"220 psia\"", "\"205 psig\"");
    assert_eq!(resolved(&text, None, &[]).field.wells[0].line_pressure_psia, 219.696);
    let high = resolved(&text, None, &["atmospheric_pressure=11.5 psia"]);
    assert_eq!(high.field.wells[0].line_pressure_psia, 216.5);
    assert_eq!(high.atmospheric_pressure_psia, 11.5);
    let gauge = Document::parse("t.toml", &text).unwrap().resolve(None, &["atmospheric_pressure=0 psig".to_owned()]);
    assert!(gauge.map(|_| ()).unwrap_err().to_string().contains("cannot be a gauge pressure"));
}

#[test]
fn every_form_of_inflow_is_read() {
    let cases = [
        (
            "method = \"straight\"\nproductivity_index = \"2.5 STB/d/psi\"",
            InflowMethod::Straight,
            "ProductivityIndex { j_stb_d_psi: 2.5, reservoir_psia: 3600.0 }",
        ),
        (
            "method = \"vogel\"\nopen_flow = \"3000 STB/d\"\nreservoir = \"3000 psia\"",
            InflowMethod::Vogel,
            "OpenFlow { rate_stb_d: 3000.0, reservoir_psia: 3000.0 }",
        ),
        (
            "coefficient = \"0.00079 STB/d/psi^2n\"\nexponent = 0.9\nbasis = \"oil\"",
            InflowMethod::Fetkovich,
            "Fetkovich { c: 0.00079, reservoir_psia: 3600.0 }",
        ),
        (
            "test = [{ on = 2026-11-03, reservoir = \"3570 psia\", wellhead = \"410 psia\", rate = \"1350 STB/d\", gor = \"630 scf/STB\", water_cut = 0.02 }]",
            InflowMethod::Fetkovich,
            "measured: Separator { wellhead_psia: 410.0, gor_scf_stb: 630.0 }",
        ),
    ];
    let start = REFERENCE.find("[well.inflow]").unwrap();
    let end = REFERENCE.find("[well.tubing]").unwrap();
    for (inflow, method, expected) in cases {
        let text = format!("{}[well.inflow]\n{inflow}\n\n{}", &REFERENCE[..start], &REFERENCE[end..]);
        let spec = resolved(&text, None, &[]).field.wells.remove(0).inflow;
        assert_eq!(spec.method, method);
        assert!(format!("{spec:?}").contains(expected), "{spec:?}");
    }
}

#[test]
fn gas_is_injected_in_gas_units() {
    let text = REFERENCE
        .replace("fluid = \"water\"", "fluid = \"gas\"")
        .replace("\"12 STB/d/psi\"", "\"20 Mscf/d/psi\"")
        .replace("voidage_replacement = 0.8 ", "rate = \"2 MMscf/d\"\nrate_limit = \"3 MMscf/d\" ")
        .replace("injector.OI-1.voidage_replacement", "injector.OI-1.effective_fraction")
        .replace("= 0.0 }", "= 0.5 }");
    let injector = resolved(&text, None, &[]).field.injectors.remove(0);
    assert_eq!((injector.fluid, injector.control), (InjectedFluid::Gas, InjectionControl::Rate(2.0e6)));
    assert_eq!((injector.injectivity, injector.rate_limit), (Some(20.0e3), Some(3.0e6)));
}

#[test]
fn a_start_before_the_period_is_no_start() {
    let field = resolved(REFERENCE, None, &["injector.OI-1.start=2020-01-01", "well.OP-1.start=2027-01-01"]).field;
    assert_eq!((field.injectors[0].start, field.wells[0].start), (None, None));
}

#[test]
fn the_hash_is_that_of_the_file() {
    let empty = Document::parse("a/b/name.toml", "# abc").unwrap();
    assert_eq!(empty.title(), "name");
    assert_eq!(empty.sha256().len(), 64);
    let hash = Document::parse("e.toml", "").unwrap().sha256();
    // SHA-256 of the empty message (NIST's published test vector).
    assert_eq!(hash, "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855");
}

#[test]
fn a_fluid_needs_nothing_else() {
    let broken = REFERENCE.replace("\"3600 psia\"\ntemperature", "3600\ntemperature").replace("\"2.441 in\"", "2");
    let document = Document::parse("t.toml", &broken).unwrap();
    assert!(document.resolve(None, &[]).is_err());
    let fluid = document.resolve_fluid(&["fluid.gas_gravity=0.8".to_owned()]).unwrap_or_else(|p| panic!("{p}"));
    assert_eq!((fluid.fluid.gas_gravity, fluid.temperature_degf, fluid.pressure_psia), (0.8, 190.0, None));
    assert!(document.resolve_fluid(&["fluid.gas_gravity=8".to_owned()]).is_err());
}

#[test]
fn water_flows_by_displacement_where_it_came_in_and_nothing_else_is_said() {
    let start = REFERENCE.find("[[injector]]").unwrap();
    let end = REFERENCE.find("[[well]]").unwrap();
    let text = format!("{}{}", &REFERENCE[..start], &REFERENCE[end..])
        .replace("\"injector.OI-1.voidage_replacement\"", "\"well.OP-1.skin\"");
    let text = text.replace("[tank.water]\nmodel = \"average\"", "[tank.water]\n#");
    let document = Document::parse("t.toml", &text).unwrap();
    assert_eq!(document.resolve(None, &[]).unwrap().field.tank.water_model, WaterModel::Connate);
    assert!(document.resolve(None, &["tank.produced.injected_water=0 STB".to_owned()]).is_ok());
    let model = |set: &str| document.resolve(None, &[set.to_owned()]).unwrap().field.tank.water_model;
    assert_eq!(model("tank.produced.injected_water=2 MMSTB"), WaterModel::Displacement);
    assert_eq!(model("tank.water.model=average"), WaterModel::Average);
}
