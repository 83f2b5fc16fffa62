//! The edge of natural flow: against brute force, against the forecast, and against what must hold for any well.
#![allow(clippy::unwrap_used)]

mod common;

use common::fields;
use common::{all, near};
use std::fs;
use std::path::Path;
use std::process::{Command, Output};
use wane::forecast::{Field, FieldSpec, InjectedFluid, InjectionControl, StopReason};
use wane::inflow::Conditions;
use wane::report::{Provenance, UnitSystem, edge_picture};
use wane::scenario::Document;
use wane::study::{Edge, EdgeLine, EdgeMap, EdgeOptions, Gas, LineOf, Place, Seen, edge_map};
use wane::tubing::Stream;

fn shipped(name: &str) -> FieldSpec {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios").join(format!("{name}.toml"));
    Document::load(&path).unwrap().resolve(None, &[]).unwrap().field
}

fn map(spec: &FieldSpec, options: &EdgeOptions) -> EdgeMap {
    edge_map(spec, options).unwrap()
}

/// The well's own line only.
fn own_only(spec: &FieldSpec) -> EdgeOptions {
    EdgeOptions { line_pressures_psia: vec![spec.wells[0].line_pressure_psia], ..EdgeOptions::default() }
}

/// The largest height of the inflow curve above the tubing curve over 6,000 rates, psi; written here from the parts, without the program's own
/// search.
fn brute_margin(field: &Field, well: usize, pressure_psia: f64, water_cut: f64, gor_scf_stb: f64) -> f64 {
    let well = &field.wells()[well];
    let conditions = Conditions {
        reservoir_psia: pressure_psia,
        bubble_point_psia: pressure_psia.min(field.fluid().initial_bubble_point_psia()),
        oil_mobility_1_cp: f64::NAN,
        water_cut,
    };
    let curve = well.inflow.curve(&conditions, 1.0);
    let height = |rate: f64| {
        let stream = Stream { liquid_rate_stb_d: rate, water_cut, gor_scf_stb };
        let tubing = well.tubing.flowing_pressure(field.fluid(), &stream, well.spec.line_pressure_psia);
        curve.flowing_psia(rate) - tubing.pressure_psia
    };
    let part = |i: u32| 10_f64.powf(-4.0 + 4.0 * f64::from(i) / 6000.0);
    (0..=6000).map(|i| height(part(i) * curve.open_flow_stb_d())).fold(f64::NEG_INFINITY, f64::max)
}

#[test]
fn at_the_edge_the_margin_over_all_rates_is_zero_and_a_psi_beside_it_has_its_sign() {
    // No datum: the perforations see the tank's own pressure. The inflow follows the pressure rule.
    let spec = FieldSpec {
        tank: wane::tank::TankSpec { datum_tvd_ft: None, ..shipped("depletion").tank },
        ..shipped("depletion")
    };
    let field = Field::new(&spec).unwrap();
    let gor = 900.0;
    let options = EdgeOptions { gors_scf_stb: vec![gor], forecast: false, ..own_only(&spec) };
    let map = map(&spec, &options);
    let line = map.wells[0].own().unwrap();
    let mut compared = 0;
    for cut in [0.0, 0.4, 0.8] {
        let edge = line.points.iter().find(|p| (p.water_cut - cut).abs() < 1e-12).unwrap();
        for place in &edge.places {
            assert!(place.margin_psi.abs() <= 0.01, "margin left at the edge at {cut}: {}", place.margin_psi);
            let margin = |p: f64| brute_margin(&field, 0, p, cut, gor);
            let at = margin(place.pressure_psia);
            // Neighbouring rates lie 0.15 % apart: the top of a hump stands no more than 0.02 psi above the best of them. The
            // tubing's own accuracy is 0.02 psi.
            assert!(at.abs() < 0.04, "margin of the dense scan at the edge at {cut}: {at}");
            assert!(margin(place.pressure_psia + 1.0) > 0.0, "it flows a psi above the edge at {cut}");
            assert!(margin(place.pressure_psia - 1.0) < 0.0, "it does not flow a psi below the edge at {cut}");
            compared += 1;
        }
    }
    assert_eq!(compared, 3, "one edge at each water cut");
}

#[test]
fn gaps_and_windows_are_where_margins_at_single_points_have_them() {
    // Each point is a look over all rates of its own; the map finds the same stretches from a coarse look and bracketed zeros.
    let spec = shipped("depletion");
    let seen = |water_cut: f64, i: i32| Seen {
        well: None,
        label: String::new(),
        reservoir_pressure_psia: 130.0 + 70.0 * f64::from(i),
        water_cut,
        line_pressure_psia: None,
        gor_scf_stb: None,
        flowed: false,
    };
    let points = (0..50).flat_map(|i| [0.1, 0.4].map(|cut| seen(cut, i))).collect();
    let map = map(&spec, &EdgeOptions { seen: points, ..own_only(&spec) });
    let well = &map.wells[0];
    let mut gaps = 0;
    for verdict in &well.seen {
        let (pressure, cut) = (verdict.seen.reservoir_pressure_psia, verdict.seen.water_cut);
        let edge = well.own().unwrap().points.iter().find(|p| (p.water_cut - cut).abs() < 1e-12).unwrap();
        let flows = verdict.flow_margin_psi > 0.0;
        assert_eq!(edge.flows(pressure), flows, "at {pressure} psia and {cut}: {edge:?}");
        assert_eq!(verdict.agrees(), !flows);
        gaps += u32::from(!flows && pressure > edge.lowest().unwrap().pressure_psia);
    }
    assert!(gaps >= 5, "the case is chosen for its gap below the bubble point");
}

#[test]
fn the_forecast_ends_on_the_line_of_its_own_line_pressure() {
    for name in ["depletion", "two-wells", "midlife", "shared-line"] {
        let spec = shipped(name);
        let map = map(&spec, &own_only(&spec));
        for well in &map.wells {
            let way = well.way.as_ref().unwrap();
            let end = way.end.unwrap();
            assert_eq!(end.reason, StopReason::NoCrossing, "{name} {}", well.well);
            let last = way.stands.last().unwrap();
            near(last.moment.reservoir_pressure_psia, end.reservoir_pressure_psia, 1e-9, "end of the track");
            // No water flows in these: the point of the line at water cut zero is the one to meet.
            assert!(last.moment.water_cut < 1e-9);
            let at_zero = &well.own().unwrap().points[0];
            let miss = at_zero.lowest().unwrap().pressure_psia - end.reservoir_pressure_psia;
            assert!(miss.abs() < 0.5, "{name} {}: the track misses its line by {miss} psi", well.well);
            let now = way.stands.first().unwrap();
            assert!(now.pressure_margin_psi.unwrap() > 100.0, "{name} {}: it flows at the start", well.well);
            near(way.days_left, end.days - now.moment.days, 1e-9, "days left");
        }
    }
}

#[test]
fn a_well_that_water_ends_stops_on_its_line_too() {
    let spec = shipped("injection");
    let map = map(&spec, &own_only(&spec));
    let way = map.wells[0].way.as_ref().unwrap();
    let last = way.stands.last().unwrap();
    assert!(last.moment.water_cut > 0.05 && way.end.is_some());
    assert!(last.pressure_margin_psi.unwrap().abs() < 0.5, "{last:?}");
    // Before it the well stands on the flowing side of its line.
    let before = &way.stands[..way.stands.len() - 1];
    assert!(before.iter().all(|s| s.pressure_margin_psi.unwrap() > -0.5), "{before:?}");
}

#[test]
fn the_line_of_another_line_pressure_is_where_a_forecast_at_that_pressure_ends() {
    // One well, no injection, no water: the tank's gas-oil ratio depends on its pressure alone (Muskat 1945), whatever the rate. So the
    // map around the forecast at one line pressure foretells the end at another, also where it lies below the end of the first.
    let spec = shipped("depletion");
    let own = spec.wells[0].line_pressure_psia;
    let around = map(&spec, &EdgeOptions { line_pressures_psia: vec![0.4 * own], ..EdgeOptions::default() });
    let foretold = around.wells[0].lines[0].points[0].lowest().unwrap().pressure_psia;
    let mut other = spec.clone();
    other.wells[0].line_pressure_psia = 0.4 * own;
    let forecast = wane::forecast::run(&other).unwrap();
    let end = forecast.wells[0].natural_flow_end.unwrap();
    let first_end = around.wells[0].way.as_ref().unwrap().end.unwrap();
    assert!(end.reservoir_pressure_psia < first_end.reservoir_pressure_psia - 30.0);
    let miss = foretold - end.reservoir_pressure_psia;
    // The depletion beyond the end goes in steps of 15 psi, between which the ratio is taken to be straight.
    assert!(miss.abs() < 1.0, "the forecast ends {miss} psi away from the map");
}

/// Where a line says that the well flows, at the water cuts of every line.
fn flows(line: &EdgeLine, cut: f64, pressure_psia: f64) -> bool {
    line.points.iter().find(|p| (p.water_cut - cut).abs() < 1e-12).unwrap().flows(pressure_psia)
}

#[test]
fn lower_line_pressure_takes_no_flow_away_and_more_water_gives_none() {
    let spec = shipped("two-wells");
    let map = map(&spec, &EdgeOptions::default());
    assert_eq!(map.wells.len(), 2);
    for well in &map.wells {
        let pressures: Vec<f64> = well.lines.iter().map(|l| l.of.line_pressure_psia).collect();
        let own = well.own().unwrap().of.line_pressure_psia;
        for (found, expected) in pressures.iter().zip([0.6 * own, own, 1.5 * own]) {
            near(*found, expected, 1e-12, "line pressure");
        }
        for pair in well.lines.windows(2) {
            for cut in [0.0, 0.1, 0.2, 0.3, 0.5, 0.9] {
                for i in 0..60 {
                    let p = 35.0 + 39.0 * f64::from(i);
                    let lost = flows(&pair[1], cut, p) && !flows(&pair[0], cut, p);
                    assert!(!lost, "{}: at {p} psia and {cut} the higher line pressure flows alone", well.well);
                }
            }
        }
        for line in &well.lines {
            let lowest: Vec<f64> =
                line.points.iter().map(|p| p.lowest().map_or(f64::INFINITY, |e| e.pressure_psia)).collect();
            // What an edge is located to.
            let sinks = lowest.windows(2).any(|w| w[1] < w[0] - 0.01);
            assert!(!sinks, "{}: {lowest:?}", well.well);
            let end = line.no_flow_from.unwrap();
            assert!(line.points.iter().all(|p| (p.water_cut >= end - 1e-12) == p.places.is_empty()), "end of the line");
            let last = line.points.iter().rfind(|p| !p.places.is_empty()).unwrap();
            assert!(end - last.water_cut <= 1e-3, "the end is located to 0.001");
        }
    }
}

#[test]
fn strings_of_one_size_replace_the_wells_own() {
    let spec = shipped("depletion");
    let options = EdgeOptions { diameters_in: vec![1.995, 2.441], ..own_only(&spec) };
    let map = map(&spec, &options);
    let lines = &map.wells[0].lines;
    assert_eq!(lines.iter().map(|l| l.of.diameter_in).collect::<Vec<_>>(), [None, Some(1.995), Some(2.441)]);
    let edges = |line: &EdgeLine| -> Vec<f64> {
        line.points.iter().filter_map(|p| p.lowest()).map(|e| e.pressure_psia).collect()
    };
    // The well's own string has this size: the same line.
    for (a, b) in edges(&lines[0]).into_iter().zip(edges(&lines[2])) {
        near(a, b, 1e-9, "own string and a string of its size");
    }
    // A narrower string lifts the last, slow flow of this well longer: velocity rises with 1/d^2.
    assert!(edges(&lines[1])[0] < edges(&lines[0])[0] - 10.0);
}

#[test]
fn without_free_gas_the_rules_of_the_gas_agree() {
    let spec = shipped("depletion");
    let lines = |forecast: bool, gors: Vec<f64>| {
        let options = EdgeOptions { forecast, gors_scf_stb: gors, ..own_only(&spec) };
        map(&spec, &options).wells.remove(0)
    };
    let (forecast, dissolved) = (lines(true, Vec::new()), lines(false, Vec::new()));
    let given = lines(false, vec![spec.fluid.solution_gor_scf_stb]);
    assert_eq!(forecast.lines[0].of.gas, Gas::Forecast);
    assert_eq!(dissolved.lines[0].of.gas, Gas::Dissolved);
    assert!(forecast.way.is_some() && dissolved.way.is_none());
    assert!(matches!(given.lines[0].of.gas, Gas::Given(_)));
    let mut compared = 0;
    for cut in [0.5, 0.6, 0.7, 0.8, 0.9] {
        let edge = |well: &wane::study::WellEdge| {
            let points = &well.own().unwrap().points;
            points.iter().find(|p| (p.water_cut - cut).abs() < 1e-12).unwrap().places[0].pressure_psia
        };
        // Above the bubble point the tank makes its dissolved gas and nothing else.
        if edge(&forecast) > spec.fluid.bubble_point_psia.unwrap() {
            assert!((edge(&forecast) - edge(&dissolved)).abs() < 0.1, "dissolved at {cut}");
            assert!((edge(&forecast) - edge(&given)).abs() < 0.1, "given at {cut}");
            compared += 1;
        }
    }
    assert!(compared >= 4);
}

#[test]
fn a_forecast_cut_short_by_over_injection_leaves_a_map() {
    let mut spec = fields::one_well();
    spec.injectors = vec![fields::injector("WI", InjectedFluid::Water, InjectionControl::Rate(5e5))];
    let map = map(&spec, &own_only(&spec));
    let well = &map.wells[0];
    assert_eq!(well.way.as_ref().unwrap().end.unwrap().reason, StopReason::BalanceHasNoSolution);
    assert_eq!(well.lines[0].of.gas, Gas::Forecast);
    assert!(well.lines[0].points[0].lowest().is_some());
}

/// An edge made by hand.
fn made(water_cut: f64, flows_at_top: bool, pressures: &[f64]) -> Edge {
    let place = |p: &f64| Place { pressure_psia: *p, rate_stb_d: 100.0, gor_scf_stb: 600.0, margin_psi: 0.0 };
    Edge { water_cut, flows_at_top, places: pressures.iter().map(place).collect() }
}

#[test]
fn windows_and_gaps_of_an_edge_made_by_hand() {
    let edge = made(0.3, true, &[2500.0, 2000.0, 900.0]);
    assert_eq!(edge.windows_psia(), [(2500.0, None), (900.0, Some(2000.0))]);
    assert_eq!(edge.gaps_psia(), [(2000.0, Some(2500.0))]);
    assert_eq!(edge.lowest().unwrap().pressure_psia, 900.0);
    for (pressure, flows) in [(3000.0, true), (2200.0, false), (1500.0, true), (500.0, false)] {
        assert_eq!(edge.flows(pressure), flows, "{pressure}");
    }
    assert_eq!(edge.nearest(2100.0).unwrap().pressure_psia, 2000.0);
    let lower_only = made(0.9, false, &[2000.0, 900.0]);
    assert_eq!(lower_only.windows_psia(), [(900.0, Some(2000.0))]);
    assert_eq!(lower_only.gaps_psia(), [(2000.0, None)]);
    let none = made(0.99, false, &[]);
    assert!(none.windows_psia().is_empty() && none.gaps_psia().is_empty() && none.lowest().is_none());
    assert!(!none.flows(3000.0) && none.nearest(1.0).is_none());
}

#[test]
fn branches_join_what_belongs_together() {
    // One edge; a gap opens above it; window and gap close from below; at last the edge leaves through the top.
    let points = vec![
        made(0.0, true, &[800.0]),
        made(0.1, true, &[2310.0, 2290.0, 900.0]),
        made(0.2, true, &[2500.0, 2000.0, 1000.0]),
        made(0.3, true, &[2700.0, 1510.0, 1490.0]),
        made(0.4, true, &[2900.0]),
        made(0.5, false, &[]),
    ];
    let of = LineOf { line_pressure_psia: 100.0, diameter_in: None, gas: Gas::Dissolved };
    let mut found = EdgeLine { of, own: true, points, no_flow_from: Some(0.5) }.branches();
    found.sort_by(|a, b| a[0].0.total_cmp(&b[0].0).then(b[1].1.total_cmp(&a[1].1)));
    let lower = vec![(0.0, 800.0), (0.1, 900.0), (0.2, 1000.0), (0.3, 1490.0), (0.3, 1500.0)];
    // The two sides of the gap begin where it opens.
    let upper = vec![(0.1, 2300.0), (0.1, 2310.0), (0.2, 2500.0), (0.3, 2700.0), (0.4, 2900.0)];
    let middle = vec![(0.1, 2300.0), (0.1, 2290.0), (0.2, 2000.0), (0.3, 1510.0), (0.3, 1500.0)];
    assert_eq!(found, [lower, upper, middle]);
}

#[test]
fn pictures_cut_nothing_off_and_name_what_they_show() {
    let spec = shipped("two-wells");
    let seen = |label: &str, pressure: f64, flowed: bool| Seen {
        well: Some("BF-2".to_owned()),
        label: label.to_owned(),
        reservoir_pressure_psia: pressure,
        water_cut: 0.97,
        line_pressure_psia: Some(90.0),
        gor_scf_stb: None,
        flowed,
    };
    let seen = vec![
        seen("a neighbour with a long name, dead since 2019", 2900.0, false),
        seen("another neighbour close to it, dead since 2021", 2890.0, false),
        seen("one that flows", 2100.0, true),
    ];
    let options = EdgeOptions { diameters_in: vec![1.995], gors_scf_stb: vec![700.0, 1500.0], seen, ..own_only(&spec) };
    for (options, name) in [(options, "many lines"), (own_only(&spec), "one line")] {
        let map = map(&spec, &options);
        assert_eq!(map.wells[0].seen.len(), 0, "points of the other well");
        for well in &map.wells {
            for units in [UnitSystem::Field, UnitSystem::Metric] {
                let drawing =
                    edge_picture(well, &Provenance { units, title: "Two".to_owned(), ..Provenance::default() });
                assert!(drawing.clipped_texts().is_empty(), "{name} cuts off {:?}", drawing.clipped_texts());
                let svg = String::from_utf8(drawing.to_svg().unwrap()).unwrap();
                assert!(!svg.contains("NaN") && !svg.contains("inf\""), "{name} holds only finite numbers");
                let texts: Vec<&str> = drawing.texts().collect();
                assert!(texts.iter().any(|t| t.contains("ends, no crossing")), "{texts:?}");
                assert_eq!(texts.contains(&"one that flows"), !well.seen.is_empty());
            }
        }
    }
}

fn wane(dir: &Path, args: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_wane")).args(args).current_dir(dir).output().unwrap()
}

#[test]
fn the_command_writes_a_folder_and_refuses_what_it_cannot_draw() {
    let dir = tempfile::tempdir().unwrap();
    let source = Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios/depletion.toml");
    fs::copy(source, dir.path().join("d.toml")).unwrap();
    let write = |name: &str, text: &str| fs::write(dir.path().join(name), text).unwrap();
    write("seen.csv", "label,reservoir,water_cut,state\nX-1,2300 psia,15 %,dead\nX-2,150 bara,0.05,flowing\n");
    write("no-column.csv", "label,reservoir\nX-1,2300 psia\n");
    write("odd-column.csv", "label,reservoir,water_cut,colour\nX-1,2300 psia,0.2,red\n");
    write("no-unit.csv", "reservoir,water_cut\n2300 psia,0.1\n2300,0.1\n");
    write("cut.csv", "reservoir,water_cut\n2300 psia,15\n");
    write("well.csv", "well,reservoir,water_cut\nZZ-9,2300 psia,0.1\n");
    write("state.csv", "reservoir,water_cut,state\n2300 psia,0.1,sleepy\n");
    write("empty.csv", "reservoir,water_cut\n");
    fs::write(dir.path().join("latin.csv"), b"reservoir,water_cut\n2300 psia,\xe9\n").unwrap();

    let many: Vec<String> = (0..30).map(|i| format!("--line-pressure={} psia", 100 + i)).collect();
    let many: Vec<&str> = many.iter().map(String::as_str).collect();
    let refusals: [(&[&str], &str); 15] = [
        (&["--line-pressure", "150"], "has no unit"),
        (&["--line-pressure", "2 psia"], "between 5 and 5000 psia"),
        (&["--line-pressure", "9000 psia"], "between 5 and 5000 psia"),
        (&["--diameter", "2 psia"], "--diameter"),
        (&["--gor", "0 scf/STB"], "--gor"),
        (&["--seen", "missing.csv"], "cannot read missing.csv"),
        (&["--seen", "no-column.csv"], "the column `water_cut` is missing"),
        (&["--seen", "odd-column.csv"], "`colour` is not a known column"),
        (&["--seen", "no-unit.csv"], "line 3, `reservoir`"),
        (&["--seen", "cut.csv"], "a fraction from 0 to below 1"),
        (&["--seen", "well.csv"], "`ZZ-9` is no well of the scenario, which has QM-1"),
        (&["--seen", "state.csv"], "dead or flowing"),
        (&["--seen", "empty.csv"], "holds no point"),
        (&["--seen", "latin.csv"], "is not a text file"),
        (&many, "at most 24"),
    ];
    let before = all(dir.path());
    for (more, words) in refusals {
        let args: Vec<&str> = ["edge", "d.toml", "-o", "out"].into_iter().chain(more.iter().copied()).collect();
        let output = wane(dir.path(), &args);
        let error = String::from_utf8(output.stderr).unwrap();
        assert_eq!(output.status.code(), Some(2), "{more:?}: {error}");
        assert!(error.contains(words) && output.stdout.is_empty(), "{more:?}: {error}");
        assert!(all(dir.path()) == before, "{more:?} wrote something");
    }

    let args = [
        "edge",
        "d.toml",
        "--set",
        "well.QM-1.line_pressure=10 bara",
        "--line-pressure",
        "200 psia",
        "--seen",
        "seen.csv",
    ];
    let run = |more: &[&str]| {
        let output = wane(dir.path(), &[&args, more].concat());
        assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
        output.stdout
    };
    let text = String::from_utf8(run(&["-o", "out"])).unwrap();
    assert!(text.contains("line 145 psia (its own)") && text.contains("X-2") && text.contains("on its line"), "{text}");
    let files: Vec<String> = all(&dir.path().join("out")).into_keys().collect();
    let expected =
        ["d.toml", "edge-QM-1.png", "edge-QM-1.svg", "edge.csv", "edge.json", "manifest.json", "seen.csv", "track.csv"];
    assert_eq!(files, expected);
    let manifest: serde_json::Value =
        serde_json::from_slice(&fs::read(dir.path().join("out/manifest.json")).unwrap()).unwrap();
    assert_eq!(manifest["settings"]["edge line-pressure"], "200 psia");
    let json: serde_json::Value = serde_json::from_slice(&run(&["--json"])).unwrap();
    let well = &json["wells"][0];
    assert_eq!(well["lines"].as_array().unwrap().len(), 2);
    assert_eq!(well["seen"][0]["label"], "X-1");
    assert!(well["track"]["last"]["pressure_margin_psi"].as_f64().unwrap().abs() < 0.5);
    let csv = String::from_utf8(run(&["--csv"])).unwrap();
    assert!(csv.starts_with("well,line_pressure_psia,diameter_in,gas,own,water_cut,edge_pressure_psia,gor_scf_stb,liquid_rate_stb_d,gap_from_psia,gap_to_psia\n"));
    assert_eq!(csv.as_bytes(), fs::read(dir.path().join("out/edge.csv")).unwrap());
    let columns = csv.lines().next().unwrap().split(',').count();
    assert!(csv.lines().all(|l| l.split(',').count() == columns));
}
