//! The program from outside: exit status, messages, files.
#![allow(clippy::unwrap_used)]

mod common;

use common::all;
use std::fs;
use std::path::Path;
use std::process::{Command, Output, Stdio};
use tempfile::TempDir;

fn wane(dir: &Path, args: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_wane")).args(args).current_dir(dir).output().unwrap()
}

fn out(output: &Output) -> String {
    String::from_utf8(output.stdout.clone()).unwrap()
}

fn err(output: &Output) -> String {
    String::from_utf8(output.stderr.clone()).unwrap()
}

fn code(output: &Output) -> i32 {
    output.status.code().unwrap()
}

/// A folder with the starter scenario as `demo/scenario.toml`.
fn starter() -> TempDir {
    let dir = tempfile::tempdir().unwrap();
    let output = wane(dir.path(), &["new", "demo"]);
    assert_eq!(code(&output), 0, "{}", err(&output));
    dir
}

/// The ends under the other rules for future inflow come with the spread and go with it.
#[test]
fn the_other_rules_come_with_the_spread() {
    let dir = starter();
    let rules = |args: &[&str]| {
        let output = wane(dir.path(), &[&["forecast", "demo/scenario.toml", "--json"], args].concat());
        assert_eq!(code(&output), 0, "{}", err(&output));
        let summary: serde_json::Value = serde_json::from_slice(&output.stdout).unwrap();
        let list = summary["wells"][0]["future_rules"].as_array().unwrap().clone();
        list.iter().map(|end| end["rule"].as_str().unwrap().to_owned()).collect::<Vec<_>>()
    };
    assert_eq!(rules(&[]), ["pressure", "mobility", "cubic"]);
    assert!(rules(&["--no-spread"]).is_empty());
    let shown = out(&wane(dir.path(), &["forecast", "demo/scenario.toml"]));
    assert!(shown.contains("with another rule for future inflow than pressure: mobility "), "{shown}");
}

/// Runs what must fail with `status`: a message on standard error, nothing on standard output, nothing written.
fn refused(dir: &Path, args: &[&str], status: i32, words: &str) {
    let before = all(dir);
    let output = wane(dir, args);
    assert_eq!(code(&output), status, "{args:?}: {}", err(&output));
    assert!(err(&output).contains(words), "{args:?}: {words:?} is missing in {:?}", err(&output));
    assert!(out(&output).is_empty(), "{args:?} prints on standard output");
    assert!(!err(&output).contains("panicked"), "{args:?}");
    assert!(all(dir) == before, "{args:?} changed files");
}

#[test]
fn files_that_are_no_scenario_are_answered_once_and_change_nothing() {
    let dir = tempfile::tempdir().unwrap();
    let write = |name: &str, bytes: &[u8]| fs::write(dir.path().join(name), bytes).unwrap();
    fs::create_dir(dir.path().join("folder")).unwrap();
    write("empty.toml", b"");
    write("binary.toml", &[0x7f, b'E', b'L', b'F', 0, 1, 2, 0xff, 0]);
    write("latin.toml", b"title = \"d\xe9j\xe0\"\n");
    write("words.toml", b"this is a letter to the asset team\n");
    for command in ["forecast", "check", "compare", "fluid"] {
        refused(dir.path(), &[command, "missing.toml"], 2, "no file missing.toml");
        refused(dir.path(), &[command, "folder"], 2, "folder is a directory");
        refused(dir.path(), &[command, "empty.toml"], 2, "empty.toml is empty");
        refused(dir.path(), &[command, "binary.toml"], 2, "binary.toml is not a text file");
        refused(dir.path(), &[command, "latin.toml"], 2, "latin.toml:1:11");
        refused(dir.path(), &[command, "words.toml"], 2, "words.toml:1:");
        refused(dir.path(), &[command, "\u{1b}[31mred.toml"], 2, "no file");
    }
    refused(dir.path(), &["curves", "missing.toml", "--on", "2028-01-01"], 2, "no file missing.toml");
}

#[test]
fn values_that_cannot_be_are_refused() {
    let dir = starter();
    let set = |value: &str, words: &str| {
        refused(dir.path(), &["forecast", "demo/scenario.toml", "--set", value], 2, words);
    };
    set("tank.pressure=3600 degF", "tank.pressure");
    set("tank.pressure=3600", "unit");
    set("tank.pressure=nan psia", "not a finite number");
    set("tank.pressure=inf psia", "not a finite number");
    set("tank.oil_in_place=1e300 STB", "too large");
    set("tank.presure=3600 psia", "pressure");
    set("tank.pressure", "tank.pressure");
    refused(dir.path(), &["forecast", "demo/scenario.toml", "--case", "none such"], 2, "none such");
    refused(dir.path(), &["forecast", "demo/scenario.toml", "--colour"], 2, "--colour");
}

#[test]
fn results_go_only_where_they_may() {
    let dir = starter();
    let at = dir.path();
    fs::create_dir(at.join("theirs")).unwrap();
    fs::write(at.join("theirs/profile.csv"), "theirs").unwrap();
    for command in ["forecast", "compare"] {
        refused(at, &[command, "demo/scenario.toml", "-o", "theirs"], 2, "theirs holds files that wane did not write");
        refused(at, &[command, "demo/scenario.toml", "-o", "theirs/profile.csv"], 2, "is not a folder");
        refused(at, &[command, "demo/scenario.toml", "-o", "theirs/profile.csv/x"], 2, "cannot write results to");
        refused(at, &[command, "demo/scenario.toml", "-o", "."], 2, "is the current folder");
        refused(at, &[command, "demo/scenario.toml", "-o", "demo"], 2, "demo holds files");
    }
    // The default folder is checked as well.
    fs::write(at.join("results"), "a file").unwrap();
    refused(at, &["forecast", "demo/scenario.toml"], 2, "cannot write results to results/scenario");
}

#[test]
fn a_starter_scenario_is_never_overwritten() {
    let dir = starter();
    refused(dir.path(), &["new", "demo"], 2, "exists already");
    refused(dir.path(), &["new", "demo/scenario.toml"], 2, "is not a folder");
    let output = wane(dir.path(), &["check", "demo/scenario.toml"]);
    assert_eq!(code(&output), 0, "{}", err(&output));
    assert!(out(&output).contains("can be run"));
}

#[test]
fn a_forecast_writes_everything_and_again_the_same() {
    let dir = starter();
    let run = |args: &[&str]| {
        let output = wane(dir.path(), &[&["forecast", "demo/scenario.toml"], args].concat());
        assert_eq!(code(&output), 0, "{}", err(&output));
        output
    };
    let text = out(&run(&[]));
    assert!(!text.contains('\u{1b}'), "no styles outside a terminal");
    for words in ["End of natural flow", "recovery", "balance residual", "results/scenario", "They do not replace"] {
        assert!(text.contains(words), "{words} in {text}");
    }
    let first = all(&dir.path().join("results/scenario"));
    for name in [
        "profile.csv",
        "yearly.csv",
        "events.csv",
        "summary.json",
        "manifest.json",
        "scenario.toml",
        "rates.svg",
        "rates.png",
        "pressure.svg",
        "pressure.png",
    ] {
        assert!(first.contains_key(name), "{name} in {:?}", first.keys());
    }
    assert!(first.keys().any(|k| k.starts_with("curves-") && k.ends_with(".svg")));
    assert_eq!(first["scenario.toml"], fs::read(dir.path().join("demo/scenario.toml")).unwrap());
    assert!(first["rates.png"].starts_with(b"\x89PNG"));

    assert!(out(&run(&["--quiet"])).is_empty());
    assert!(first == all(&dir.path().join("results/scenario")), "the same again, byte by byte");

    // Machine-readable output is the summary file.
    let json = run(&["--json", "-o", "elsewhere/deep"]).stdout;
    assert_eq!(json, first["summary.json"]);
    assert!(all(&dir.path().join("elsewhere/deep")) == first, "the folder does not matter");
    assert!(all(dir.path()).keys().all(|k| !k.contains(".partial") && !k.contains(".previous")), "no traces");
}

#[test]
fn the_manifest_tells_where_results_come_from() {
    let dir = starter();
    let args = ["forecast", "demo/scenario.toml", "-q", "-o", "r", "--set", "period.end=2032-01-01"];
    let output = wane(dir.path(), &args);
    assert_eq!(code(&output), 0, "{}", err(&output));
    let json = |name: &str| -> serde_json::Value {
        serde_json::from_slice(&fs::read(dir.path().join("r").join(name)).unwrap()).unwrap()
    };
    let manifest = json("manifest.json");
    assert_eq!(manifest["program"], "wane");
    assert_eq!(manifest["version"], env!("CARGO_PKG_VERSION"));
    assert_eq!(manifest["settings"]["set period.end"], "2032-01-01");
    assert_eq!(manifest["sha256"], json("summary.json")["sha256"]);
    // The scenario's digest is that of its copy, which is listed with the other files.
    let files = manifest["files"].as_array().unwrap();
    let copy = files.iter().find(|f| f["path"] == "scenario.toml").unwrap();
    assert_eq!(copy["sha256"], manifest["sha256"]);
    let profile = String::from_utf8(fs::read(dir.path().join("r/profile.csv")).unwrap()).unwrap();
    assert!(profile.starts_with("period_start,period_end,name,"));
    assert!(!profile.contains("2032-01-01,2032-"), "the setting acts");
}

#[test]
fn cases_are_compared_each_in_its_folder() {
    let dir = starter();
    let args = ["compare", "demo/scenario.toml", "-o", "c", "--set", "period.end=2032-01-01"];
    let output = wane(dir.path(), &args);
    assert_eq!(code(&output), 0, "{}", err(&output));
    let text = out(&output);
    assert!(text.lines().all(|l| l.chars().count() <= 100), "{text}");
    let written = all(&dir.path().join("c"));
    for name in [
        "compare.csv",
        "compare.json",
        "compare.svg",
        "compare.png",
        "manifest.json",
        "base/profile.csv",
        "base/summary.json",
    ] {
        assert!(written.contains_key(name), "{name} in {:?}", written.keys());
    }
    let document: toml::Table =
        toml::from_str(&fs::read_to_string(dir.path().join("demo/scenario.toml")).unwrap()).unwrap();
    let names: Vec<&str> = document["case"].as_array().unwrap().iter().map(|c| c["name"].as_str().unwrap()).collect();
    let csv = String::from_utf8(written["compare.csv"].clone()).unwrap();
    for name in names {
        assert!(text.contains(&name[..8.min(name.len())]) && csv.contains(name), "{name}");
        // The case alone gives the same numbers as inside the comparison.
        let alone = wane(
            dir.path(),
            &["forecast", "demo/scenario.toml", "--case", name, "-q", "-o", "one", "--set", "period.end=2032-01-01"],
        );
        assert_eq!(code(&alone), 0, "{}", err(&alone));
        let folder = name.replace(' ', "_");
        let profile = fs::read(dir.path().join("one/profile.csv")).unwrap();
        assert!(written[&format!("{folder}/profile.csv")] == profile, "{name}");
    }
}

#[test]
fn the_fluid_table_has_the_fixed_columns_and_the_asked_pressures() {
    let dir = starter();
    let args = ["fluid", "demo/scenario.toml", "--csv", "--at", "3000 psia", "--at", "100 bara", "--at", "500 psig"];
    let output = wane(dir.path(), &args);
    assert_eq!(code(&output), 0, "{}", err(&output));
    let text = out(&output);
    let lines: Vec<&str> = text.lines().collect();
    assert_eq!(lines[0], "pressure_psia,rs_scf_stb,bo_rb_stb,mu_o_cp,z,bg_rb_scf,mu_g_cp,bw_rb_stb,mu_w_cp");
    let first: Vec<f64> = lines[1..].iter().map(|l| l.split(',').next().unwrap().parse().unwrap()).collect();
    // 1 bar = 14.5037738 psi; the standard atmosphere of the program is 14.696 psia.
    assert_eq!(first[0], 3000.0);
    assert!((first[1] - 1_450.377_38).abs() < 1e-4 && (first[2] - 514.696).abs() < 1e-9, "{first:?}");
    refused(dir.path(), &["fluid", "demo/scenario.toml", "--at", "2500 psi"], 2, "--at \"2500 psi\"");
    refused(dir.path(), &["fluid", "demo/scenario.toml", "--at", "90000 psia"], 2, "fluid model");
    let output = wane(dir.path(), &["fluid", "demo/scenario.toml", "-o", "f"]);
    assert_eq!(code(&output), 0, "{}", err(&output));
    assert!(out(&output).lines().all(|l| l.chars().count() <= 100));
    assert!(dir.path().join("f/fluid.svg").is_file() && dir.path().join("f/fluid.csv").is_file());
}

#[test]
fn curves_keep_the_asked_rates_in_their_order() {
    let dir = starter();
    let curves = |args: &[&str]| {
        let output = wane(dir.path(), &[&["curves", "demo/scenario.toml", "--on", "2027-06-01"], args].concat());
        assert_eq!(code(&output), 0, "{}", err(&output));
        out(&output)
    };
    let text = curves(&["--csv", "--rate", "900 STB/d", "--rate", "300 STB/d"]);
    let lines: Vec<Vec<&str>> = text.lines().map(|l| l.split(',').collect()).collect();
    assert_eq!(lines[0], ["well", "rate_stb_d", "inflow_psia", "tubing_psia"]);
    assert_eq!((lines[1][1], lines[2][1]), ("900", "300"));
    assert_eq!(lines.len(), 3);
    let inflow: Vec<f64> = lines[1..].iter().map(|l| l[2].parse().unwrap()).collect();
    assert!(inflow[0] < inflow[1], "inflow pressure falls with rate");
    let several = curves(&["--csv", "--all-models", "--rate", "900 STB/d"]);
    assert_eq!(several.lines().next().unwrap(), "well,rate_stb_d,inflow_psia,tubing_psia,method");
    assert!(several.lines().count() > 2);
    curves(&["-q", "--all-models", "-o", "k"]);
    let written = all(&dir.path().join("k"));
    assert!(written.contains_key("curves.csv") && written.contains_key("traverse.csv"));
    assert!(written.keys().any(|k| k.starts_with("traverse-") && k.ends_with(".png")));
    let base = ["curves", "demo/scenario.toml"];
    refused(dir.path(), &[&base[..], &["--on", "1999-01-01"]].concat(), 2, "outside the forecast");
    refused(dir.path(), &[&base[..], &["--on", "June 2027"]].concat(), 2, "2031-06-01");
    refused(dir.path(), &[&base[..], &["--on", "2027-06-01", "--rate", "900"]].concat(), 2, "--rate \"900\"");
    refused(dir.path(), &[&base[..], &["--on", "2027-06-01", "--rate", "0 STB/d"]].concat(), 2, "above zero");
}

#[test]
fn help_states_the_caution_and_a_closed_pipe_is_no_error() {
    let dir = starter();
    for args in [&["--help"][..], &["forecast", "--help"], &["compare", "--help"]] {
        let output = wane(dir.path(), args);
        assert_eq!(code(&output), 0);
        let words: Vec<String> = out(&output).split_whitespace().map(str::to_owned).collect();
        assert!(words.join(" ").contains("They do not replace well-integrity"), "{args:?}");
    }
    let mut child = Command::new(env!("CARGO_BIN_EXE_wane"))
        .args(["fluid", "demo/scenario.toml", "--csv"])
        .current_dir(dir.path())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap();
    drop(child.stdout.take());
    let output = child.wait_with_output().unwrap();
    assert_eq!((code(&output), err(&output).as_str()), (0, ""));
}
