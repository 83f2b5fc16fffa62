//! Pictures of results made by hand. They are written to cargo's folder for test files, to be looked at.
#![allow(clippy::unwrap_used)]

mod report_support;

use report_support as made;
use std::path::Path;
use wane::report::{Drawing, Provenance, UnitSystem, compare_picture, curves_picture, pressure_picture, rates_picture};

fn keep(name: &str, drawing: &Drawing) {
    let folder = Path::new(env!("CARGO_TARGET_TMPDIR")).join("pictures");
    std::fs::create_dir_all(&folder).unwrap();
    std::fs::write(folder.join(format!("{name}.png")), drawing.to_png().unwrap()).unwrap();
    std::fs::write(folder.join(format!("{name}.svg")), drawing.to_svg().unwrap()).unwrap();
}

fn check(name: &str, drawing: &Drawing) {
    keep(name, drawing);
    assert!(drawing.clipped_texts().is_empty(), "{name} cuts off {:?}", drawing.clipped_texts());
    let svg = String::from_utf8(drawing.to_svg().unwrap()).unwrap();
    assert!(svg.trim_end().ends_with("</svg>"), "{name} is complete");
    assert!(!svg.contains("NaN") && !svg.contains("inf\""), "{name} holds only finite numbers");
}

#[test]
fn rates() {
    check("rates", &rates_picture(&made::forecast(), &made::provenance()));
    check("rates-short", &rates_picture(&made::short_forecast(), &made::provenance()));
    let metric = Provenance { units: UnitSystem::Metric, case: Some("no injection".to_owned()), ..made::provenance() };
    check("rates-metric", &rates_picture(&made::forecast(), &metric));
}

#[test]
fn pressure() {
    check("pressure", &pressure_picture(&made::forecast(), &made::provenance()));
    check("pressure-short", &pressure_picture(&made::short_forecast(), &made::provenance()));
}

#[test]
fn curves() {
    let forecast = made::forecast();
    let well = &forecast.wells[0];
    check("curves", &curves_picture(&well.name, &well.inflow_text, &well.curves, &made::provenance()));
    check("curves-one", &curves_picture(&well.name, &well.inflow_text, &well.curves[..1], &made::provenance()));
}

#[test]
fn compare() {
    let base = made::forecast();
    let short = made::short_forecast();
    let periods = made::months(84, 1e9);
    let more = made::forecast_of(vec![made::well("OP-1", &periods, 2000.0, 1e9, 0.6)], periods, 3000.0);
    let cases = [("base", &base), ("no injection", &short), ("all of it, earlier", &more)];
    check("compare", &compare_picture(&cases, &made::provenance()));
}
