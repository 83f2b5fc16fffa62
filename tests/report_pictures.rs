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
    let drawing = rates_picture(&made::forecast(), &made::provenance());
    check("rates", &drawing);
    // Both wells together start at 2,750 STB/d: a month that is divided by a part of its flow would exceed the axis.
    let texts: Vec<&str> = drawing.texts().collect();
    assert!(texts.contains(&"Oil rate, STB/d") && texts.contains(&"3,000") && !texts.contains(&"4,000"), "{texts:?}");
    assert!(texts.contains(&"OP-1 ends Oct 2032"));
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

/// Eight wells with long names that end close together, over forty years.
fn crowded() -> wane::forecast::Forecast {
    let periods = made::months(480, 1e9);
    let names = ["North Flank Producer Number One", "B-2", "C-3", "D-4", "E-5", "F-6", "G-7", "H-8"];
    let wells = (0..8)
        .map(|i| made::well(names[i], &periods, 900.0 + 130.0 * i as f64, 2000.0 + 90.0 * i as f64, 0.1 * i as f64));
    let wells = wells.collect();
    made::forecast_of(wells, periods, 60000.0)
}

#[test]
fn many_wells_and_long_times() {
    check("rates-crowded", &rates_picture(&crowded(), &made::provenance()));
    check("pressure-crowded", &pressure_picture(&crowded(), &made::provenance()));
    let forecast = crowded();
    let names: Vec<String> = (0..12).map(|i| format!("case number {i} with a rather long name")).collect();
    let cases: Vec<_> = names.iter().map(|n| (n.as_str(), &forecast)).collect();
    check("compare-crowded", &compare_picture(&cases, &made::provenance()));
}

#[test]
fn a_single_month_and_values_that_are_none() {
    let periods = made::months(1, 1e9);
    let mut tiny = made::forecast_of(vec![made::well("OP-1", &periods, 1800.0, 1e9, 0.0)], periods, 0.0);
    check("rates-month", &rates_picture(&tiny, &made::provenance()));
    check("pressure-month", &pressure_picture(&tiny, &made::provenance()));
    tiny.tank[0].pressure_psia = f64::NAN;
    tiny.wells[0].rows[0].oil_stb = f64::INFINITY;
    tiny.wells[0].curves[0].points[4].1 = f64::NAN;
    tiny.wells[0].curves[0].flow_margin_psi = f64::NAN;
    check("rates-none", &rates_picture(&tiny, &made::provenance()));
    check("pressure-none", &pressure_picture(&tiny, &made::provenance()));
    check("curves-none", &curves_picture("OP-1", "", &tiny.wells[0].curves, &made::provenance()));
    tiny.periods.clear();
    tiny.tank.clear();
    tiny.wells.clear();
    check("rates-empty", &rates_picture(&tiny, &made::provenance()));
    check("pressure-empty", &pressure_picture(&tiny, &made::provenance()));
    check("compare-empty", &compare_picture(&[("base", &tiny)], &made::provenance()));
    check("curves-empty", &curves_picture("OP-1", "", &[], &made::provenance()));
}
