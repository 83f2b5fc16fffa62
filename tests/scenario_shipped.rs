//! The scenarios that ship with the program: each resolves in every case, and its first comment tells its story.
#![allow(clippy::unwrap_used)]

use std::path::Path;
use wane::scenario::{Document, data_doubts};

#[test]
fn every_shipped_scenario_resolves_in_every_case() {
    for name in ["depletion", "injection", "two-wells", "midlife", "calibrated", "lab"] {
        let path = format!("{}/scenarios/{name}.toml", env!("CARGO_MANIFEST_DIR"));
        let document = Document::load(Path::new(&path)).unwrap_or_else(|error| panic!("{error}"));
        assert!(document.text().starts_with("# "), "{name} begins with its story");
        for case in std::iter::once(None).chain(document.case_names().iter().map(|case| Some(case.as_str()))) {
            let scenario = document.resolve(case, &[]).unwrap_or_else(|problems| panic!("{problems}"));
            for doubt in data_doubts(&scenario) {
                println!("{name} {case:?}: {}: {} / {} / {}", doubt.about, doubt.seen, doubt.cause, doubt.advice);
            }
        }
    }
}
