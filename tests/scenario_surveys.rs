//! Flowing surveys in the scenario and in files beside it: read, refused, doubted.
#![allow(clippy::unwrap_used)]

use wane::forecast::DoubtKind;
use wane::scenario::{Document, data_doubts, starter};
use wane::well::FlowingSurvey;

/// The starter with a flowing survey; its well reaches 8,600 ft.
fn text(survey: &str) -> String {
    starter().replacen("[[injector]]", &format!("[[well.flowing_survey]]\n{survey}\n\n[[injector]]"), 1)
}

const GOOD: &str = r#"on = 2026-11-02
rate = "800 STB/d"
gor = "640 scf/STB"
water_cut = "5 %"
wellhead = "300 psia"
points = [["0 ft", "300 psia"], ["4000 ft", "1290 psia", "150 degF"], ["8000 ft", "2500 psia"]]"#;

fn surveys(text: &str) -> Vec<FlowingSurvey> {
    let document = Document::parse("t.toml", text).unwrap();
    document.resolve(None, &[]).unwrap_or_else(|p| panic!("{p}")).field.wells[0].flowing_surveys.clone()
}

fn problem(survey: &str) -> String {
    let text = text(survey);
    let problems = Document::parse("t.toml", &text)
        .unwrap()
        .resolve(None, &[])
        .err()
        .unwrap_or_else(|| panic!("accepted: {survey}"));
    assert_eq!(problems.list.len(), 1, "{problems}");
    problems.to_string()
}

#[test]
fn a_survey_arrives() {
    let found = surveys(&text(GOOD));
    assert_eq!(found.len(), 1);
    let s = &found[0];
    assert_eq!((s.rate_stb_d, s.gor_scf_stb, s.water_cut, s.wellhead_psia), (800.0, 640.0, 0.05, 300.0));
    assert_eq!(s.points.len(), 3);
    assert_eq!(
        (s.points[1].md_ft, s.points[1].pressure_psia, s.points[1].temperature_degf),
        (4000.0, 1290.0, Some(150.0))
    );
    assert!(s.reservoir_psia.is_none() && s.wellhead_temperature_degf.is_none());
}

#[test]
fn each_slip_is_one_problem_at_its_place() {
    let with = |from: &str, to: &str| {
        assert!(GOOD.contains(from), "{from}");
        problem(&GOOD.replacen(from, to, 1))
    };
    let cases = [
        (with("on = 2026-11-02\n", ""), "`well.flowing_survey.on` is missing"),
        (with("rate = \"800 STB/d\"\n", ""), "`well.flowing_survey.rate` is missing"),
        (with("wellhead = \"300 psia\"\n", ""), "`well.flowing_survey.wellhead` is missing"),
        (with("points =", "point ="), "did you mean `points`?"),
        (with("\"300 psia\"]", "\"300 ft\"]"), "a pressure is expected"),
        (with("\"1290 psia\"", "\"1290 psi\""), "a pressure is expected"),
        (
            with("[\"0 ft\", \"300 psia\"], ", "[\"300 psia\"], "),
            "a point of a flowing survey is a depth and a pressure",
        ),
        (with("\"150 degF\"]", "\"150 degF\", \"1 ft\"]"), "a depth and a pressure"),
        (with("\"4000 ft\"", "\"0 ft\""), "the survey goes backwards"),
        (with("\"8000 ft\"", "\"8700 ft\""), "(8700.0 ft) lies below the perforations (8600.0 ft)"),
        (with("\"1290 psia\"", "\"3 psia\""), "below atmospheric pressure"),
        (with("wellhead = \"300 psia\"", "wellhead = \"3 psia\""), "below atmospheric pressure"),
        (with("on =", "reservoir = \"290 psia\"\non ="), "the wellhead pressure is not below the reservoir pressure"),
        (with("on =", "wellhead_temperature = \"300 degF\"\non ="), "the wellhead is hotter than the tank"),
        (with("\"5 %\"", "1.0"), "`well.flowing_survey.water_cut` is too large"),
        (
            with(
                "points = [[\"0 ft\", \"300 psia\"], [\"4000 ft\", \"1290 psia\", \"150 degF\"], [\"8000 ft\", \"2500 psia\"]]",
                "points = []",
            ),
            "without a point",
        ),
        (
            with(
                "points = [[\"0 ft\", \"300 psia\"], [\"4000 ft\", \"1290 psia\", \"150 degF\"], [\"8000 ft\", \"2500 psia\"]]",
                "points = 7",
            ),
            "`well.flowing_survey.points` is a number",
        ),
        (
            with(
                "points = [[\"0 ft\", \"300 psia\"], [\"4000 ft\", \"1290 psia\", \"150 degF\"], [\"8000 ft\", \"2500 psia\"]]",
                "points = \"none.csv\"",
            ),
            "there is no such file",
        ),
    ];
    for (said, words) in &cases {
        assert!(said.contains(words), "{words:?} is missing in\n{said}");
    }
}

#[test]
fn a_file_beside_the_scenario_serves() {
    let dir = tempfile::tempdir().unwrap();
    let survey = GOOD.split("points").next().unwrap().to_owned() + "points = \"s.csv\"";
    let file = dir.path().join("t.toml");
    std::fs::write(&file, text(&survey)).unwrap();
    let read = |csv: &str| -> Result<Vec<FlowingSurvey>, String> {
        std::fs::write(dir.path().join("s.csv"), csv).unwrap();
        let resolved = Document::load(&file).unwrap().resolve(None, &[]);
        resolved
            .map(|s| {
                assert_eq!(s.files.len(), 1, "the file is among those used");
                s.field.wells[0].flowing_surveys.clone()
            })
            .map_err(|p| p.to_string())
    };
    // 1,200 m = 3,937.0 ft; 80 barg = 80 * 14.5038 + 14.696 psia; 60 degC = 140 degF.
    let found = read("# gauge 7\nmd_m,pressure_barg,temperature_degC\n1200,80,60\n2400, 160,\n").unwrap();
    let p = &found[0].points;
    assert!((p[0].md_ft - 3937.008).abs() < 1e-3 && (p[0].pressure_psia - 1174.999).abs() < 2e-3, "{p:?}");
    assert!((p[0].temperature_degf.unwrap() - 140.0).abs() < 1e-9 && p[1].temperature_degf.is_none(), "{p:?}");
    assert_eq!(read("MD (ft),P (psia)\n1000,520\n").unwrap()[0].points.len(), 1);
    for (csv, words) in [
        ("md_ft\n1000\n", "line 1 has 1 columns where 2 or 3 are expected"),
        ("md_ft,pressure\n1000,500\n", "the column \"pressure\" does not end with a unit of pressure"),
        ("md_ft,pressure_psi\n1000,500\n", "does not end with a unit of pressure"),
        ("md_ft,pressure_psia\n", "it holds no point"),
        ("md_ft,pressure_psia\n1000,500,3\n", "line 2 has 3 columns where 2 are expected"),
        ("md_ft,pressure_psia\n1000,x\n", "line 2"),
        ("md_ft,pressure_psia\n-5,500\n", "line 2: a depth of -5 ft cannot be"),
        ("md_ft,pressure_psia\n1000,-5\n", "line 2: a pressure of -5 psia cannot be"),
        ("md_ft,pressure_psia\n1000,\n", "line 2"),
        ("md_ft,pressure_psia\n9000,2500\n", "lies below the perforations"),
    ] {
        let said = read(csv).err().unwrap_or_else(|| panic!("accepted: {csv}"));
        assert!(said.contains(words), "{words:?} is missing in\n{said}");
    }
}

#[test]
fn unlikely_surveys_are_doubted() {
    let doubts = |survey: &str| {
        let document = Document::parse("t.toml", &text(survey)).unwrap();
        data_doubts(&document.resolve(None, &[]).unwrap_or_else(|p| panic!("{p}")))
    };
    assert_eq!(doubts(GOOD), []);
    let cases = [
        ("2026-11-02", "2024-06-01", DoubtKind::TestMismatch, "31 months old"),
        ("2026-11-02", "2027-06-01", DoubtKind::UnlikelyValue, "after the start of the forecast"),
        ("640 scf/STB", "310 scf/STB", DoubtKind::TestMismatch, "does not fit the oil's"),
        ("\"1290 psia\"", "\"280 psia\"", DoubtKind::UnlikelyValue, "20 psi below the pressure above it"),
        ("\"1290 psia\"", "\"2600 psia\"", DoubtKind::UnlikelyValue, "2300 psi above the pressure 4000 ft higher up"),
        ("on =", "reservoir = \"2400 psia\"\non =", DoubtKind::UnlikelyValue, "not below the reservoir pressure"),
    ];
    for (from, to, kind, seen) in cases {
        let found = doubts(&GOOD.replacen(from, to, 1));
        assert!(found.iter().any(|d| d.kind == kind && d.about == "P-1" && d.seen.contains(seen)), "{to}: {found:#?}");
    }
}
