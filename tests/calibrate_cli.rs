//! `wane calibrate` from outside, and its lines pasted back.
#![allow(clippy::unwrap_used)]

mod common;

use common::all;
use serde_json::Value;
use std::path::Path;
use std::process::{Command, Output};
use wane::scenario::Document;
use wane::study::calibrate::calibrate;

const SHIPPED: &str = concat!(env!("CARGO_MANIFEST_DIR"), "/scenarios/calibrated.toml");

fn wane(dir: &Path, args: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_wane")).args(args).current_dir(dir).output().unwrap()
}

fn out(output: &Output) -> String {
    String::from_utf8(output.stdout.clone()).unwrap()
}

fn err(output: &Output) -> String {
    String::from_utf8(output.stderr.clone()).unwrap()
}

/// The shipped scenario with the published model in another tubing method, as a file of its own.
fn untuned(dir: &Path, units: &str) -> String {
    let text = std::fs::read_to_string(SHIPPED).unwrap();
    let tuned = ["method      =", "slip_factor =", "roughness   ="];
    let lines: Vec<&str> = text.lines().filter(|line| tuned.iter().all(|key| !line.starts_with(key))).collect();
    let text = lines.join("\n").replace("units = \"field\"", &format!("units = \"{units}\""));
    std::fs::write(dir.join("well.toml"), text).unwrap();
    "well.toml".to_owned()
}

/// Turns the tables of the printed lines into settings.
fn settings(lines: &toml::Table) -> Vec<String> {
    let wells = lines["well"].as_array().unwrap();
    let mut out = Vec::new();
    for well in wells {
        let name = well["name"].as_str().unwrap();
        for table in ["tubing", "inflow"] {
            for (key, value) in well.get(table).and_then(toml::Value::as_table).into_iter().flatten() {
                out.push(format!("well.{name}.{table}.{key}={value}"));
            }
        }
    }
    out
}

#[test]
fn everything_is_written_at_once_and_again_the_same() {
    let dir = tempfile::tempdir().unwrap();
    let run = |args: &[&str]| {
        let output = wane(dir.path(), &[&["calibrate", SHIPPED], args].concat());
        assert_eq!(output.status.code(), Some(0), "{}", err(&output));
        output
    };
    let shown = out(&run(&[]));
    for words in
        ["flowing survey of 2026-10-06", "separator test of 2026-10-09", "95 % interval", "excludes 1", "slip_factor ="]
    {
        assert!(shown.contains(words), "{words:?} is missing in\n{shown}");
    }
    assert!(shown.lines().all(|line| line.chars().count() <= 100));
    let first = all(&dir.path().join("results/calibrated-calibration"));
    let names: Vec<&str> = first.keys().map(String::as_str).collect();
    let expected = [
        "calibrated.toml",
        "calibration-LM-3.png",
        "calibration-LM-3.svg",
        "calibration.csv",
        "calibration.json",
        "lines.toml",
        "manifest.json",
        "stations.csv",
    ];
    assert_eq!(names, expected);
    assert!(out(&run(&["-q"])).is_empty());
    assert_eq!(all(&dir.path().join("results/calibrated-calibration")), first, "the same bytes");

    let json: Value = serde_json::from_slice(&run(&["--json"]).stdout).unwrap();
    let well = &json["wells"][0];
    assert_eq!((well["name"].as_str(), well["chosen"].as_str()), (Some("LM-3"), Some("hasan-kabir")));
    let fit = &well["models"][0]["fit"];
    let slip = fit["slip_factor"].as_f64().unwrap();
    let interval = fit["slip_interval"].as_array().unwrap();
    assert!(interval[0].as_f64().unwrap() < slip && slip < interval[1].as_f64().unwrap());

    // A row for every station, model and tuning: the csv and the json agree about the worst miss.
    let mut rows = csv::Reader::from_reader(first["stations.csv"].as_slice());
    let mut worst = 0.0_f64;
    for row in rows.records() {
        let row = row.unwrap();
        if &row[5] == "hasan-kabir" && &row[6] == "fitted" {
            let (measured, computed): (f64, f64) = (row[4].parse().unwrap(), row[7].parse().unwrap());
            worst = worst.max((computed / measured - 1.0).abs());
        }
    }
    let told = well["models"][0]["fitted"]["all"]["worst_relative"].as_f64().unwrap();
    assert!((worst - told).abs() < 1e-9 && worst < 0.02, "{worst} {told}");
}

#[test]
fn the_printed_lines_can_be_pasted_and_bring_the_model_to_the_surveys() {
    for units in ["field", "metric"] {
        let dir = tempfile::tempdir().unwrap();
        let file = untuned(dir.path(), units);
        let output =
            wane(dir.path(), &["calibrate", &file, "-o", "out", "--set", "well.LM-3.tubing.method=beggs-brill"]);
        assert_eq!(output.status.code(), Some(0), "{}", err(&output));
        assert!(out(&output).contains("leaves clearly less than beggs-brill"), "{}", out(&output));
        let lines = std::fs::read_to_string(dir.path().join("out/lines.toml")).unwrap();
        let table: toml::Table = lines.parse().unwrap();
        let settings = settings(&table);
        assert!(settings.iter().any(|set| set.contains("tubing.slip_factor")), "{settings:?}");
        assert!(settings.iter().any(|set| set.contains("inflow.coefficient")), "{settings:?}");

        let document = Document::load(&dir.path().join(&file)).unwrap();
        let with_tests = |sets: &[String]| {
            let sets: Vec<String> = sets.iter().filter(|s| !s.contains(".inflow.")).cloned().collect();
            document.resolve(None, &sets).unwrap_or_else(|p| panic!("{p}")).field
        };
        let tuned = with_tests(&settings);
        let well = calibrate(&tuned, &[]).unwrap().remove(0);
        assert_eq!(well.chosen, Some(0));
        assert!(well.models[0].as_stated.as_ref().unwrap().all.worst_relative < 0.02, "{units}");

        // With the coefficient in place of the tests the forecast is the same: figures are printed with six digits or so.
        let frozen = document.resolve(None, &settings).unwrap_or_else(|p| panic!("{p}")).field;
        assert!(!matches!(frozen.wells[0].inflow.coefficient, wane::inflow::Coefficient::Tests(_)));
        let end = |field| wane::forecast::run(field).unwrap().wells[0].natural_flow_end.unwrap().days;
        let (a, b) = (end(&tuned), end(&frozen));
        assert!((a - b).abs() < 0.5, "{units}: {a} against {b} days");
    }
}

#[test]
fn what_cannot_be_calibrated_is_refused_and_writes_nothing() {
    let dir = tempfile::tempdir().unwrap();
    let refused = |args: &[&str], words: &str| {
        let before = all(dir.path());
        let output = wane(dir.path(), args);
        assert_eq!(output.status.code(), Some(2), "{args:?}: {}", err(&output));
        assert!(err(&output).contains(words), "{args:?}: {words:?} is missing in {}", err(&output));
        assert!(out(&output).is_empty() && all(dir.path()) == before, "{args:?}");
    };
    assert_eq!(wane(dir.path(), &["new", "demo"]).status.code(), Some(0));
    refused(&["calibrate", "demo/scenario.toml"], "nothing to calibrate to");
    refused(&["calibrate", SHIPPED, "--well", "LM-4"], "there is no such well (wells: LM-3)");
    refused(&["calibrate", "missing.toml"], "no file missing.toml");
    refused(&["calibrate", SHIPPED, "-o", "demo"], "demo holds files that wane did not write");
    refused(&["calibrate", SHIPPED, "--case", "none"], "none");
}

#[test]
fn the_forecast_tells_of_the_calibration_and_doubts_wells_without_one() {
    let dir = tempfile::tempdir().unwrap();
    let shown = out(&wane(dir.path(), &["forecast", SHIPPED]));
    let shown = shown.replace("\n    ", " ");
    assert!(shown.contains("each tuned to the measurements: between"), "{shown}");
    assert!(shown.contains("not counted: hagedorn-brown"), "{shown}");
    assert!(!shown.contains("met no measurement"), "{shown}");
    let file = untuned(dir.path(), "metric");
    let shown = out(&wane(dir.path(), &["forecast", &file, "--no-spread"]));
    assert!(shown.contains("misses pressures of the flowing survey of 2026-10-08"), "{shown}");
    assert!(shown.contains("a slip factor of 1.000 is used"), "{shown}");
    let depletion = concat!(env!("CARGO_MANIFEST_DIR"), "/scenarios/depletion.toml");
    let shown = out(&wane(dir.path(), &["forecast", depletion, "--no-spread"]));
    assert!(shown.contains("its tubing model (hasan-kabir) met no measurement"), "{shown}");
}

/// Every figure that a shape has, the rule for the future and the loss are in the lines: pasted they give the same forecast.
#[test]
fn the_printed_lines_hold_what_the_inflow_has() {
    for (units, inflow) in [
        (
            "field",
            "method = \"vogel\"\nflow_efficiency = 0.8\nfuture = \"mobility\"\nyearly_loss = 0.05\nloss_since = 2026-10-09",
        ),
        ("metric", "method = \"jones\"\nturbulence = \"4e-4 psi/(STB/d)^2\"\nfuture = \"cubic\""),
        ("metric", "method = \"composite\"\nyearly_loss = 0.1"),
    ] {
        let dir = tempfile::tempdir().unwrap();
        let file = untuned(dir.path(), units);
        let text = std::fs::read_to_string(dir.path().join(&file)).unwrap();
        assert!(text.contains("exponent = 1.0"));
        std::fs::write(dir.path().join(&file), text.replace("exponent = 1.0", inflow)).unwrap();
        let output = wane(dir.path(), &["calibrate", &file, "-o", "out"]);
        assert_eq!(output.status.code(), Some(0), "{}", err(&output));
        let lines = std::fs::read_to_string(dir.path().join("out/lines.toml")).unwrap();
        let printed = settings(&lines.parse().unwrap());
        // Pasted lines stand in place of the whole table: nothing of the old one may help.
        let stripped = text.replace("exponent = 1.0", "");
        std::fs::write(dir.path().join("bare.toml"), stripped).unwrap();
        let field = |name: &str, sets: &[String]| {
            let document = Document::load(&dir.path().join(name)).unwrap();
            document.resolve(None, sets).unwrap_or_else(|p| panic!("{p}")).field
        };
        let tubing: Vec<String> = printed.iter().filter(|s| s.contains(".tubing.")).cloned().collect();
        let ends = |field| wane::forecast::natural_flow_ends(&field).unwrap()[0].unwrap().days;
        let (tuned, pasted) = (ends(field(&file, &tubing)), ends(field("bare.toml", &printed)));
        assert!((tuned - pasted).abs() < 0.5, "{inflow}: {tuned} against {pasted} days\n{lines}");
    }
}
