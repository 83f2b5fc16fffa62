//! Onsets of asphaltene and wax against the traverse: months, depths, and what is refused.
#![allow(clippy::unwrap_used)]

mod common;

use common::fields::one_well;
use common::near;
use jiff::civil::date;
use wane::forecast::{Doubt, DoubtKind, FieldSpec, Forecast, OnsetSpec, curves_on, run};
use wane::scenario::Document;

/// A well at line pressure whose tank falls from 3800 psia through both onsets within its life.
fn open() -> FieldSpec {
    let mut spec = one_well();
    spec.wells[0].line_pressure_psia = 120.0;
    spec.wells[0].target_rate_stb_d = None;
    spec.tank.oil_in_place_stb = 7e6;
    spec.period.end = date(2029, 1, 1);
    spec
}

fn deposits(f: &Forecast) -> Vec<&Doubt> {
    f.doubts.iter().filter(|d| d.kind == DoubtKind::Deposits).collect()
}

fn month(f: &Forecast, row: usize) -> String {
    f.periods[row].start.strftime("%B %Y").to_string()
}

/// The two depths of "between 0 ft and 2038 ft of measured depth".
fn depths(text: &str) -> (f64, f64) {
    let words: Vec<&str> = text.split("in the tubing between ").nth(1).unwrap().split(' ').collect();
    assert_eq!((words[1], words[4]), ("ft", "ft"), "{text}");
    (words[0].parse().unwrap(), words[3].parse().unwrap())
}

#[test]
fn without_onsets_nothing_is_compared_and_with_them_the_forecast_is_the_same() {
    let plain = run(&open()).unwrap();
    assert!(deposits(&plain).is_empty());
    let mut spec = open();
    spec.onsets = OnsetSpec {
        asphaltene_upper: vec![(0.0, 3500.0)],
        asphaltene_lower: vec![(0.0, 1200.0)],
        wax_appearance_degf: Some(120.0),
    };
    let f = run(&spec).unwrap();
    assert_eq!(deposits(&f).len(), 2, "one for asphaltene, one for wax");
    assert_eq!(f.wells[0].rows, plain.wells[0].rows);
    // Wax above every temperature met, asphaltene below every pressure met: nothing to tell.
    spec.onsets = OnsetSpec {
        asphaltene_upper: vec![(0.0, 50.0)],
        asphaltene_lower: Vec::new(),
        wax_appearance_degf: Some(90.0),
    };
    assert!(deposits(&run(&spec).unwrap()).is_empty());
}

/// The temperature is straight against vertical depth from 110 degF at the wellhead to 190 degF at 8150 ft, so by hand the flow is cooler than
/// 120 degF down to 8150*10/80 = 1018.75 ft, and than 170 degF down to 6112.5 ft of vertical depth, which the survey has at
/// 4000 + 4600*(6112.5 - 4000)/4150 = 6341.6 ft of measured depth.
#[test]
fn wax_is_told_down_to_the_depth_at_which_the_flow_is_warm_enough() {
    for (appearance_degf, depth_ft) in [(120.0, 1018.75), (170.0, 6341.566)] {
        let mut spec = open();
        spec.onsets.wax_appearance_degf = Some(appearance_degf);
        let f = run(&spec).unwrap();
        let seen = &deposits(&f)[0].seen;
        let (top, bottom) = depths(seen);
        assert_eq!(top, 0.0);
        assert!((bottom - depth_ft).abs() <= 0.51, "{bottom} ft, by hand {depth_ft} ft");
        let flowing = f.wells[0].rows.iter().filter(|r| r.flowing).count();
        assert!(seen.contains(&format!("({flowing} periods)")) && seen.contains("down to 110 degF"), "{seen}");
        assert!(!seen.contains("perforations") && !seen.contains("reservoir"), "{seen}");
    }
    // Cooler rock than that: everywhere.
    let mut spec = open();
    spec.onsets.wax_appearance_degf = Some(195.0);
    let f = run(&spec).unwrap();
    let seen = &deposits(&f)[0].seen;
    assert_eq!(depths(seen), (0.0, 8600.0));
    assert!(seen.contains("at the perforations") && seen.contains("in the reservoir"), "{seen}");
}

#[test]
fn asphaltene_is_told_between_the_depths_and_from_the_months_at_which_the_onset_is_passed() {
    const ONSET_PSIA: f64 = 3500.0;
    let mut spec = open();
    spec.tank.oil_in_place_stb = 20e6;
    spec.onsets.asphaltene_upper = vec![(0.0, ONSET_PSIA)];
    let f = run(&spec).unwrap();
    let doubt = deposits(&f)[0];
    let rows = &f.wells[0].rows;
    assert!(f.tank[0].pressure_psia > ONSET_PSIA, "the reservoir begins above the onset");
    let first = |below: &dyn Fn(usize) -> bool| (0..rows.len()).find(|i| rows[*i].flowing && below(*i)).unwrap();
    let reservoir = first(&|i| f.tank[i].pressure_psia < ONSET_PSIA);
    assert!(reservoir > 0);
    assert!(doubt.seen.contains(&format!("in the reservoir from {} on", month(&f, reservoir))), "{}", doubt.seen);
    // Flowing wide open, the perforations are below it from the first month: the whole string is.
    assert!(rows[0].flowing_pressure_psia.unwrap() < ONSET_PSIA);
    assert!(doubt.seen.contains("at the perforations"), "{}", doubt.seen);
    assert_eq!(depths(&doubt.seen), (0.0, 8600.0));
}

/// One month, so that the traverse of its end is the one that counts: the depth at which it has each onset pressure.
#[test]
fn upper_and_lower_onset_bound_the_stretch_of_tubing() {
    let mut spec = open();
    spec.period.end = date(2027, 2, 1);
    let profile = &curves_on(&spec, date(2027, 2, 1), &[], false).unwrap()[0].profile;
    let depth_at = |psia: f64| {
        let i = profile.iter().position(|p| p.pressure_psia > psia).unwrap();
        let (a, b) = (profile[i - 1], profile[i]);
        a.md_ft + (b.md_ft - a.md_ft) * (psia - a.pressure_psia) / (b.pressure_psia - a.pressure_psia)
    };
    let bottom = profile.last().unwrap().pressure_psia;
    let (lower, upper) = (0.3 * bottom, 0.8 * bottom);
    spec.onsets.asphaltene_upper = vec![(0.0, upper)];
    spec.onsets.asphaltene_lower = vec![(0.0, lower)];
    let f = run(&spec).unwrap();
    let seen = &deposits(&f)[0].seen;
    let (top_ft, bottom_ft) = depths(seen);
    assert!((top_ft - depth_at(lower)).abs() < 2.0 && (bottom_ft - depth_at(upper)).abs() < 2.0, "{seen}");
    assert!(seen.contains("January 2027") && !seen.contains("perforations") && !seen.contains("reservoir"), "{seen}");
    // As a table over temperature that has the same pressures where the tubing is.
    spec.onsets.asphaltene_upper = vec![(60.0, upper), (110.0, upper), (190.0, upper), (200.0, 1.0)];
    assert_eq!(run(&spec).unwrap().doubts, f.doubts);
    // One that falls with temperature to below the lower onset at 150 degF ends the stretch at half the vertical depth, 4075 ft.
    spec.onsets.asphaltene_upper = vec![(149.0, 20_000.0), (151.0, 1.0)];
    spec.onsets.asphaltene_lower = vec![(0.0, 100.0)];
    let f = run(&spec).unwrap();
    let (top_ft, bottom_ft) = depths(&deposits(&f)[0].seen);
    let half_ft = 4000.0 + 4600.0 * 75.0 / 4150.0;
    assert!(top_ft == 0.0 && (bottom_ft - half_ft).abs() < 150.0, "{top_ft} to {bottom_ft}");
}

#[test]
fn onsets_are_read_with_their_units_and_refused_with_their_line() {
    let good = include_str!("data/reference.toml");
    let with = |lines: &str| good.replacen("gas_gravity  = 0.78", &format!("gas_gravity  = 0.78\n{lines}"), 1);
    let read = |lines: &str| Document::parse("o.toml", &with(lines)).unwrap().resolve(None, &[]).unwrap().field.onsets;
    assert_eq!(read("asphaltene_onset = \"4200 psia\"").asphaltene_upper, [(0.0, 4200.0)]);
    let table = read(
        "asphaltene_onset = [[\"120 degF\", \"4500 psia\"], [\"190 degF\", \"4200 psia\"]]\nwax_appearance = \"35 degC\"",
    );
    assert_eq!(table.asphaltene_upper, [(120.0, 4500.0), (190.0, 4200.0)]);
    near(table.wax_appearance_degf.unwrap(), 95.0, 1e-12, "35 degC");
    assert!(read("").is_empty());
    for (lines, said) in [
        ("asphaltene_onset = 4200", "`fluid.asphaltene_onset` has no unit"),
        ("asphaltene_onset = \"4200 psi\"", "absolute or gauge"),
        ("asphaltene_onset = true", "`fluid.asphaltene_onset` is true or false"),
        ("asphaltene_onset = []", "`fluid.asphaltene_onset` is an empty list"),
        ("asphaltene_onset = [\"4200 psia\"]", "a point of `fluid.asphaltene_onset` is a pair"),
        ("asphaltene_onset = [[\"4500 psia\", \"120 degF\"]]", "temperature"),
        ("asphaltene_onset = [[\"190 degF\", \"4200 psia\"], [\"120 degF\", \"4500 psia\"]]", "do not rise"),
        ("asphaltene_lower_onset = \"1200 psia\"", "`fluid.asphaltene_lower_onset` stands alone"),
        ("asphaltene_lower_onset = \"4300 psia\"\nasphaltene_onset = \"4200 psia\"", "is not below the upper one"),
        ("wax_appearance = \"95 psia\"", "a temperature is expected"),
        ("wax_apearance = \"95 degF\"", "did you mean `wax_appearance`?"),
    ] {
        let text = with(lines);
        let first = lines.lines().next().unwrap();
        let number = text.lines().position(|l| l.starts_with(first)).unwrap() + 1;
        let problems =
            Document::parse("o.toml", &text).unwrap().resolve(None, &[]).map(|_| ()).unwrap_err().to_string();
        assert!(problems.contains(said) && problems.contains(&format!("o.toml:{number}:")), "{lines}: {problems}");
    }
}
