//! Shared by the tests: reads the reference cases copied into `tests/data`.
#![allow(dead_code, clippy::unwrap_used, missing_docs)]

pub mod aquifer;
pub mod fields;
pub mod tubing;

use serde_json::Value;
use std::collections::BTreeMap;
use std::fs;
use std::path::Path;

/// One case of a reference file, by its id.
pub fn case(file: &str, id: &str) -> Value {
    let path = format!("{}/tests/data/{file}", env!("CARGO_MANIFEST_DIR"));
    let all: Value = serde_json::from_str(&std::fs::read_to_string(path).unwrap()).unwrap();
    all.as_array().unwrap().iter().find(|c| c["id"] == id).unwrap_or_else(|| panic!("no case {id}")).clone()
}

/// The expected value of this name (or the first that begins with it) in a case of `flow.json`.
pub fn flow_item(id: &str, name: &str) -> Value {
    let case = case("flow.json", id);
    let items = case["expected"].as_array().unwrap();
    let exact = items.iter().find(|item| item["name"] == name);
    exact
        .or_else(|| items.iter().find(|i| i["name"].as_str().is_some_and(|n| n.starts_with(name))))
        .expect(name)
        .clone()
}

/// Asserts that `found` is that value, within the tolerance that the file states.
pub fn expect_flow(id: &str, name: &str, found: f64) {
    let item = flow_item(id, name);
    let expected = item["value"].as_f64().unwrap();
    let tolerance =
        item["tol_rel"].as_f64().map(|t| t * expected.abs()).or(item["tol_abs"].as_f64()).expect("a tolerance");
    assert!((found - expected).abs() <= tolerance, "{id} {name}: found {found}, expected {expected}");
}

/// A list of numbers.
pub fn numbers(value: &Value) -> Vec<f64> {
    value.as_array().unwrap().iter().map(|v| v.as_f64().unwrap()).collect()
}

/// Rows of numbers; null becomes NaN.
pub fn rows(value: &Value) -> Vec<Vec<f64>> {
    value
        .as_array()
        .unwrap()
        .iter()
        .map(|r| r.as_array().unwrap().iter().map(|v| v.as_f64().unwrap_or(f64::NAN)).collect())
        .collect()
}

/// Asserts that two numbers agree within a relative tolerance.
pub fn near(found: f64, expected: f64, relative: f64, what: &str) {
    assert!(
        (found - expected).abs() <= relative * expected.abs() + 1e-300,
        "{what}: found {found}, expected {expected} within {relative} relative"
    );
}

/// Names and contents of everything below a folder.
pub fn all(folder: &Path) -> BTreeMap<String, Vec<u8>> {
    fn walk(folder: &Path, root: &Path, out: &mut BTreeMap<String, Vec<u8>>) {
        for entry in fs::read_dir(folder).unwrap() {
            let path = entry.unwrap().path();
            let name = path.strip_prefix(root).unwrap().to_string_lossy().into_owned();
            if path.is_dir() {
                out.insert(name + "/", Vec::new());
                walk(&path, root, out);
            } else {
                out.insert(name, fs::read(&path).unwrap());
            }
        }
    }
    let mut out = BTreeMap::new();
    walk(folder, folder, &mut out);
    out
}
