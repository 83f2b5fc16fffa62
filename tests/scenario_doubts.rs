//! Doubts about data: a sound scenario raises none, each slip raises its own.

#![allow(clippy::unwrap_used)] // a test that unwraps fails with its line

use wane::forecast::{Doubt, DoubtKind};
use wane::scenario::{Document, data_doubts, starter};

fn doubts(sets: &[&str]) -> Vec<Doubt> {
    let sets: Vec<String> = sets.iter().map(|set| (*set).to_owned()).collect();
    let document = Document::parse("starter.toml", starter()).unwrap();
    data_doubts(&document.resolve(None, &sets).unwrap_or_else(|problems| panic!("{problems}")))
}

#[test]
fn the_starter_raises_no_doubt() {
    assert_eq!(doubts(&[]), []);
}

#[test]
fn each_slip_raises_its_own_doubt() {
    use DoubtKind as K;
    let one_test = |what: &str| {
        format!("well.P-1.inflow.test=[{{ on = 2026-10-12, reservoir = \"3600 psia\", rate = \"796 STB/d\", {what} }}]")
    };
    let gauged = one_test("flowing = \"3170 psia\"");
    let separator = one_test("wellhead = \"410 psia\", gor = \"310 scf/STB\"");
    let low_wellhead = one_test("wellhead = \"60 psia\", gor = \"620 scf/STB\"");
    let old = gauged.replace("2026-10-12", "2024-10-12");
    let late = gauged.replace("2026-10-12", "2027-10-12");
    let other_pressure = gauged.replace("3600 psia", "3210 psia");
    let alike = "well.P-1.inflow.test=[{ reservoir = \"3600 psia\", flowing = \"3170 psia\", rate = \"796 STB/d\" }, \
                 { reservoir = \"3600 psia\", flowing = \"3100 psia\", rate = \"910 STB/d\" }]";
    // Rows S17, S26, S34, S39 and R81 of the list of practices, and what else is asked in a review.
    let cases: Vec<(Vec<&str>, K, &str, &str)> = vec![
        (vec!["fluid.oil_gravity=62 API"], K::UnlikelyValue, "fluid", "oil gravity is 62 API, usual are 5 to 60"),
        (vec!["fluid.gas_gravity=1.6"], K::UnlikelyValue, "fluid", "gas gravity is 1.6"),
        (vec!["fluid.solution_gor=2600 scf/STB"], K::UnlikelyValue, "fluid", "gas-oil ratio is 2600 scf/STB"),
        (vec!["fluid.solution_gor=2100 scf/STB"], K::NotModelled, "fluid", "volatile oil"),
        (vec!["fluid.oil_gravity=48 API"], K::NotModelled, "fluid", "volatile oil"),
        (vec!["tank.temperature=430 degF"], K::UnlikelyValue, "tank", "temperature is 430 degF"),
        (vec!["tank.connate_water=0.022"], K::UnlikelyValue, "tank", "connate water"),
        (vec!["tank.pore_compressibility=4e-4 1/psi"], K::UnlikelyValue, "tank", "pore compressibility is 400"),
        (vec!["tank.gas_cap_ratio=0.5", "fluid.bubble_point=3600 psia"], K::NotModelled, "tank", "gas cap of 0.5"),
        (
            vec!["tank.produced.oil=1 MMSTB", "tank.produced.gas=620 MMscf"],
            K::PressureMismatch,
            "tank",
            "no measured pressure",
        ),
        (
            vec!["tank.produced.oil=1 MMSTB", "tank.produced.gas=620 Mscf"],
            K::UnlikelyValue,
            "tank",
            "produced gas is 0.62 scf",
        ),
        (vec!["tank.pressure=1000 bar", "fluid.bubble_point=2650 psia"], K::UnlikelyValue, "P-1", "psi/ft"),
        (vec!["well.P-1.tubing.diameter=24.41 in"], K::UnlikelyValue, "P-1", "inside diameter is 24.41 in"),
        (vec!["well.P-1.skin=-5.8"], K::UnlikelyValue, "P-1", "skin is -5.8"),
        (
            vec![
                "well.P-1.inflow.method=vogel",
                "well.P-1.inflow.flow_efficiency=7",
                "well.P-1.inflow.open_flow=900 STB/d",
            ],
            K::UnlikelyValue,
            "P-1",
            "flow efficiency is 7",
        ),
        (vec!["well.P-1.inflow.yearly_loss=0.5"], K::UnlikelyValue, "P-1", "yearly loss of productivity is 0.5"),
        (vec!["well.P-1.uptime=1.0"], K::UnlikelyValue, "P-1", "uptime of 1"),
        (vec!["well.P-1.inflow.exponent=0.4"], K::WeakFit, "P-1", "exponent n is 0.4"),
        (
            vec!["well.P-1.tubing.survey=[[\"0 ft\",\"0 ft\"],[\"8150 ft\",\"8100 ft\"],[\"9600 ft\",\"8150 ft\"]]"],
            K::NotModelled,
            "P-1",
            "horizontal",
        ),
        (vec![&gauged], K::WeakFit, "P-1", "single test"),
        (vec![alike], K::WeakFit, "P-1", "same drawdown"),
        (vec![&old], K::TestMismatch, "P-1", "2024-10-12 was 27 months old"),
        (vec![&late], K::UnlikelyValue, "P-1", "after the start of the forecast"),
        (vec![&other_pressure], K::PressureMismatch, "P-1", "-11 % off"),
        (vec![&separator], K::TestMismatch, "P-1", "gas-oil ratio of the test of 2026-10-12 (310 scf/STB)"),
        (vec![&low_wellhead], K::TestMismatch, "P-1", "below the line pressure"),
        (vec!["tank.water.model=connate"], K::NotModelled, "I-1", "never lets it reach a well"),
        (vec!["tank.water.model=displacement"], K::UnlikelyValue, "tank", "no contacted fraction is given"),
        (vec!["well.P-1.breakthrough_delay=1.5"], K::NotModelled, "P-1", "no front for it to act on"),
        (vec!["injector.I-1.effective_fraction=1.0"], K::UnlikelyValue, "I-1", "all injected water"),
        (
            vec!["injector.I-1.bottomhole_limit=3000 psia"],
            K::InjectionPressure,
            "I-1",
            "below the tank's initial pressure",
        ),
    ];
    for (sets, kind, about, seen) in cases {
        let found = doubts(&sets);
        let hit = found.iter().find(|doubt| doubt.kind == kind && doubt.about == about && doubt.seen.contains(seen));
        let hit = hit.unwrap_or_else(|| panic!("{sets:?}: {found:#?}"));
        assert!(!hit.cause.is_empty() && !hit.advice.is_empty(), "{sets:?}");
    }
}

#[test]
fn a_stated_front_raises_no_doubt_of_the_data() {
    let sets =
        ["tank.water.model=displacement", "tank.water.contacted_fraction=0.5", "well.P-1.breakthrough_delay=1.5"];
    let found = doubts(&sets);
    assert!(found.is_empty(), "{found:#?}");
}

#[test]
fn what_is_left_out_raises_a_doubt() {
    let cut = |from: &str, to: &str| {
        let text = starter();
        let (start, end) = (text.find(from).unwrap(), text.find(to).unwrap());
        format!("{}{}", &text[..start], &text[end..])
    };
    let cases = [
        (cut("bubble_point =", "salinity"), "no bubble point is given"),
        (cut("[tank.relative_permeability]", "[[well]]"), "no relative permeability is given"),
        (cut("bottomhole_limit", "injectivity "), "nothing holds the injection below fracture pressure"),
        (cut("injectivity ", "[[event]]"), "the limit cannot act"),
    ];
    for (text, seen) in cases {
        let scenario = Document::parse("t.toml", &text).unwrap().resolve(None, &[]).unwrap_or_else(|p| panic!("{p}"));
        let found = data_doubts(&scenario);
        assert_eq!(found.len(), 1, "{found:#?}");
        assert!(found[0].seen.contains(seen), "{found:#?}");
    }
}
