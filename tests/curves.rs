//! Curves and traverses of every model on a date, and their pictures.
#![allow(clippy::unwrap_used)]

mod common;

use common::all;
use jiff::civil::date;
use std::path::Path;
use std::process::Command;
use wane::forecast::{WellCurves, curves_on};
use wane::report::{Drawing, Provenance, UnitSystem, depth_picture, models_picture, traverse_picture};
use wane::scenario::Document;
use wane::tubing::TubingMethod;

fn curves(name: &str, all_models: bool) -> Vec<WellCurves> {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios").join(format!("{name}.toml"));
    let field = Document::load(&path).unwrap().resolve(None, &[]).unwrap().field;
    curves_on(&field, date(2030, 1, 1), &[], all_models).unwrap()
}

fn provenance(units: UnitSystem) -> Provenance {
    Provenance {
        title: "Quillmere, a name that is rather long for a picture".to_owned(),
        units,
        ..Provenance::default()
    }
}

fn check(name: &str, drawing: &Drawing) {
    assert!(drawing.clipped_texts().is_empty(), "{name} cuts off {:?}", drawing.clipped_texts());
    let svg = String::from_utf8(drawing.to_svg().unwrap()).unwrap();
    assert!(!svg.contains("NaN") && !svg.contains("inf\""), "{name} holds only finite numbers");
}

#[test]
fn the_parts_of_the_gradient_add_up_to_the_pressure_along_every_model() {
    let curves = curves("depletion", true);
    assert_eq!(curves.len(), TubingMethod::ALL.len());
    for c in &curves {
        let points = &c.profile;
        assert!(points.len() > 60, "{}", c.method);
        let sum: f64 = points
            .windows(2)
            .map(|w| {
                let gradient = |i: usize| w[i].gravity_psi_ft + w[i].friction_psi_ft;
                0.5 * (gradient(0) + gradient(1)) * (w[1].md_ft - w[0].md_ft)
            })
            .sum();
        let whole = points[points.len() - 1].pressure_psia - points[0].pressure_psia;
        // The trapezoidal rule over 60 intervals, and the kinetic part of a percent near the wellhead, which is in neither part.
        assert!((sum / whole - 1.0).abs() < 0.02, "{}: {sum} of {whole} psi", c.method);
        let (rate, flowing) = c.curve.operating_point.unwrap();
        assert!(rate > 0.0 && (points[points.len() - 1].pressure_psia - flowing).abs() < 1.0, "{}", c.method);
        for p in points {
            assert!((0.0..=1.0).contains(&p.holdup) && !p.pattern.is_empty(), "{} {p:?}", c.method);
            // Gas slips past the liquid on the way up: it never takes more of the pipe than of the flow.
            let no_slip = p.liquid_velocity_ft_s / (p.liquid_velocity_ft_s + p.gas_velocity_ft_s);
            assert!(p.holdup >= no_slip - 1e-6, "{} at {} ft: {} below {no_slip}", c.method, p.md_ft, p.holdup);
        }
    }
}

#[test]
fn pictures_hold_every_model_and_cut_nothing_off() {
    let curves = curves("depletion", true);
    let all: Vec<&WellCurves> = curves.iter().collect();
    for units in [UnitSystem::Field, UnitSystem::Metric] {
        let drawing = models_picture("QM-1", &all, &provenance(units));
        check("models", &drawing);
        for method in TubingMethod::ALL {
            assert!(drawing.texts().any(|t| t.starts_with(method.name())), "{} is missing", method.name());
        }
        check("traverse", &traverse_picture("QM-1", &all, &provenance(units)));
        for c in &curves {
            let drawing = depth_picture(c, &provenance(units));
            check("depth", &drawing);
            assert!(drawing.texts().any(|t| t == c.profile[30].pattern), "{}: its flow pattern is named", c.method);
        }
    }
    for c in self::curves("two-wells", false) {
        check("depth of a tapered string", &depth_picture(&c, &provenance(UnitSystem::Field)));
    }
}

#[test]
fn a_well_that_does_not_flow_has_a_picture_that_says_so() {
    let mut none = curves("depletion", false).remove(0);
    none.profile.clear();
    none.curve.operating_point = None;
    none.curve.flow_margin_psi = -12.0;
    let drawing = depth_picture(&none, &provenance(UnitSystem::Field));
    check("depth-none", &drawing);
    assert!(drawing.texts().any(|t| t.contains("does not flow")));
    let drawing = models_picture("QM-1", &[&none], &provenance(UnitSystem::Field));
    check("models-none", &drawing);
    assert!(drawing.texts().any(|t| t.contains("12 psi short")));
    none.curve.points.clear();
    check("models-empty", &models_picture("QM-1", &[&none], &provenance(UnitSystem::Field)));
    check("models-nothing", &models_picture("QM-1", &[], &provenance(UnitSystem::Field)));
}

#[test]
fn the_folder_holds_a_picture_of_all_models_and_one_along_depth() {
    let dir = tempfile::tempdir().unwrap();
    let scenario = Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios/depletion.toml");
    let run = |more: &[&str], folder: &str| {
        let output = Command::new(env!("CARGO_BIN_EXE_wane"))
            .args(["curves", scenario.to_str().unwrap(), "--on", "2030-01-01", "-q", "-o", folder])
            .args(more)
            .current_dir(dir.path())
            .output()
            .unwrap();
        assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
        let files = all(&dir.path().join(folder)).into_keys();
        files.filter_map(|f| f.strip_suffix(".svg").map(str::to_owned)).collect::<Vec<_>>()
    };
    assert_eq!(run(&["--all-models"], "all"), ["curves-QM-1", "depth-QM-1", "models-QM-1", "traverse-QM-1"]);
    assert_eq!(run(&[], "own"), ["curves-QM-1", "depth-QM-1", "traverse-QM-1"]);
}
