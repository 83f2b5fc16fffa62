//! Aquifers, compaction and gas into the cap in the scenario file: every way to state them arrives, every wrong one is told.
#![allow(clippy::unwrap_used)]

mod common;

use common::near;
use wane::forecast::DoubtKind;
use wane::scenario::{Document, Scenario, data_doubts, schema};
use wane::tank::AquiferSpec;

const BASE: &str = include_str!("data/reference.toml");

/// Each law, stated in each way.
const STATED: &[(&str, &str)] = &[
    ("pot by volume", "method = \"pot\"\nwater = \"60 MMbbl\"\ncompressibility = \"7e-6 1/psi\""),
    (
        "pot by ring",
        "method = \"pot\"\ninner_radius = \"2600 ft\"\nradius_ratio = 3.84615384615\nthickness = \"25 ft\"\nporosity = 0.12\n\
         compressibility = \"7e-6 1/psi\"\nangle = \"80 deg\"",
    ),
    ("schilthuis", "method = \"schilthuis\"\nstrength = \"130 bbl/d/psi\""),
    (
        "fetkovich by volume",
        "method = \"fetkovich\"\nwater = \"60 MMbbl\"\ncompressibility = \"7e-6 1/psi\"\nproductivity = \"116.5 bbl/d/psi\"",
    ),
    (
        "fetkovich by ring",
        "method = \"fetkovich\"\ninner_radius = \"9200 ft\"\nradius_ratio = 5\nthickness = \"100 ft\"\nporosity = 0.25\n\
         permeability = \"200 mD\"\nviscosity = \"0.55 cp\"\ncompressibility = \"7e-6 1/psi\"\nangle = \"140 deg\"",
    ),
    (
        "fetkovich by slab",
        "method = \"fetkovich\"\nshape = \"linear\"\nwidth = \"4000 ft\"\nlength = \"9000 ft\"\nthickness = \"60 ft\"\nporosity = 0.25\n\
         permeability = \"150 mD\"\nviscosity = \"0.5 cp\"\ncompressibility = \"7e-6 1/psi\"",
    ),
    (
        "carter-tracy",
        "method = \"carter-tracy\"\ninner_radius = \"9200 ft\"\nthickness = \"100 ft\"\nporosity = 0.25\npermeability = \"200 mD\"\n\
         viscosity = \"0.55 cp\"\ncompressibility = \"7e-6 1/psi\"\nangle = \"140 deg\"\nsince = 2026-01-01",
    ),
];

fn with(aquifer: &str) -> String {
    format!("{BASE}\n[tank.aquifer]\n{aquifer}\n")
}

fn read(text: &str) -> Scenario {
    Document::parse("a.toml", text).and_then(|d| d.resolve(None, &[])).unwrap_or_else(|problems| panic!("{problems}"))
}

fn problems(text: &str) -> String {
    match Document::parse("a.toml", text).and_then(|d| d.resolve(None, &[])) {
        Ok(_) => panic!("accepted:\n{text}"),
        Err(problems) => problems.to_string(),
    }
}

fn aquifer(which: &str) -> AquiferSpec {
    let text = STATED.iter().find(|(name, _)| *name == which).unwrap().1;
    read(&with(text)).field.tank.aquifer.unwrap()
}

#[test]
fn every_way_to_state_an_aquifer_arrives() {
    assert_eq!(aquifer("pot by volume"), AquiferSpec::Pot { water_rb: 60e6, compressibility_1_psi: 7e-6 });
    // Ahmed (2001), pot aquifer: 156.5 MMbbl in the whole ring, of which 80 of 360 degrees (from memory, tests/data).
    let AquiferSpec::Pot { water_rb, .. } = aquifer("pot by ring") else { panic!() };
    near(water_rb, 156.5e6 * 80.0 / 360.0, 1e-3, "water of the ring");
    assert_eq!(aquifer("schilthuis"), AquiferSpec::Schilthuis { strength_rb_d_psi: 130.0 });
    assert_eq!(
        aquifer("fetkovich by volume"),
        AquiferSpec::Fetkovich { water_rb: 60e6, compressibility_1_psi: 7e-6, productivity_rb_d_psi: 116.5 }
    );
    // Dake (1978) exercise 9.3: Wei = 211.9 MMrb at 2740 psia, J = 116.5 b/d/psi (tests/data).
    let AquiferSpec::Fetkovich { water_rb, compressibility_1_psi, productivity_rb_d_psi } =
        aquifer("fetkovich by ring")
    else {
        panic!()
    };
    near(water_rb * compressibility_1_psi * 2740.0, 211.9e6, 2e-3, "encroachable water");
    near(productivity_rb_d_psi, 116.5, 2e-3, "J");
    let AquiferSpec::Fetkovich { water_rb, productivity_rb_d_psi, .. } = aquifer("fetkovich by slab") else { panic!() };
    near(water_rb, 4000.0 * 9000.0 * 60.0 * 0.25 / 5.614583, 1e-9, "water of the slab");
    near(productivity_rb_d_psi, 0.003381 * 150.0 * 4000.0 * 60.0 / (0.5 * 9000.0), 1e-3, "J of the slab");
    // Dake (1978) exercise 9.2: U = 6446 bbl/psi, 5.669 a year; and a year and a day from 2026-01-01 to the start.
    let AquiferSpec::CarterTracy { constant_rb_psi, time_per_day, age_days } = aquifer("carter-tracy") else {
        panic!()
    };
    near(constant_rb_psi, 6446.0, 1e-3, "U");
    near(365.0 * time_per_day, 5.669, 1e-3, "tD in a year");
    assert_eq!(age_days, 365.0);
}

#[test]
fn every_key_of_an_aquifer_is_stated_above() {
    for (name, _) in schema::children("tank.aquifer") {
        let key = name.rsplit('.').next().unwrap();
        assert!(STATED.iter().any(|(_, text)| text.lines().any(|line| line.starts_with(&format!("{key} =")))), "{key}");
    }
}

#[test]
fn the_example_of_the_reference_is_read() {
    let docs = include_str!("../docs/scenario.md");
    let example = docs.split("```\n").find(|block| block.starts_with("[tank.aquifer]")).unwrap();
    let body = example.strip_prefix("[tank.aquifer]\n").unwrap();
    assert!(matches!(read(&with(body)).field.tank.aquifer, Some(AquiferSpec::Fetkovich { .. })));
}

#[test]
fn every_aquifer_raises_the_doubt_of_coning() {
    for (name, text) in STATED {
        let doubts = data_doubts(&read(&with(text)));
        assert!(doubts.iter().any(|d| d.kind == DoubtKind::NotModelled && d.cause.contains("water coning")), "{name}");
    }
    assert!(!data_doubts(&read(BASE)).iter().any(|d| d.cause.contains("water coning")));
}

#[test]
fn wrong_aquifers_are_told() {
    let ring = STATED.iter().find(|(name, _)| *name == "fetkovich by ring").unwrap().1;
    let carter = STATED.iter().find(|(name, _)| *name == "carter-tracy").unwrap().1;
    let cases: Vec<(String, &[&str])> = vec![
        (with("water = \"60 MMbbl\""), &["method", "missing"]),
        (with("method = \"infinite\""), &["pot, schilthuis, fetkovich, carter-tracy"]),
        (with("method = \"schilthuis\""), &["`tank.aquifer.strength` is missing", "a schilthuis aquifer needs it"]),
        (with("method = \"schilthuis\"\nstrength = \"130 psi\""), &["liquid rate per pressure"]),
        (
            with("method = \"schilthuis\"\nstrength = \"130 bbl/d/psi\"\nwater = \"1 MMbbl\""),
            &["`tank.aquifer.water` is not used here"],
        ),
        (with("method = \"pot\"\nwater = \"60 MMbbl\""), &["`tank.aquifer.compressibility` is missing"]),
        (with("method = \"pot\"\ncompressibility = \"7e-6 1/psi\""), &["or state `water`"]),
        (with(&ring.replace("= 5", "= 1.5")), &["too thin", "pot"]),
        (with(&ring.replace("radius_ratio = 5", "radius_rato = 5")), &["did you mean `radius_ratio`?"]),
        (with(&ring.replace("140 deg", "400 deg")), &["at most 360 deg"]),
        (with(&format!("{ring}\nwidth = \"10 ft\"")), &["`tank.aquifer.width` is not used here"]),
        (with(&format!("{carter}\nshape = \"linear\"")), &["a carter-tracy aquifer is radial"]),
        (with(&carter.replace("2026-01-01", "2036-01-01")), &["after the start of the forecast"]),
        (
            format!(
                "{}\n[tank.produced]\noil = \"1 MMSTB\"\ngas = \"600 MMscf\"\n",
                with("method = \"schilthuis\"\nstrength = \"1 bbl/d/psi\"")
            ),
            &["aquifer_influx is expected"],
        ),
        (
            format!(
                "{}\n[tank.produced]\noil = \"1 MMSTB\"\ngas = \"600 MMscf\"\naquifer_influx = \"1 MSTB\"\n",
                with(&carter.replace("since = 2026-01-01", ""))
            ),
            &["since is expected"],
        ),
        (
            format!("{}\n[tank.produced]\naquifer_influx = \"1 MSTB\"\n", with(STATED[0].1)),
            &["follows from the pressure"],
        ),
        (format!("{BASE}\n[tank.produced]\naquifer_influx = \"1 MSTB\"\n"), &["there is no aquifer"]),
    ];
    for (text, told) in cases {
        let found = problems(&text);
        for part in told {
            assert!(found.contains(part), "`{part}` is not told:\n{found}");
        }
    }
}

#[test]
fn compaction_tables_arrive_or_are_told() {
    let table = |pairs: &str| BASE.replace("pore_compressibility = \"4e-6 1/psi\"", &format!("compaction = {pairs}"));
    let tank = read(&table("[[\"1000 psia\", 0.952], [\"2500 psia\", 0.981], [\"3600 psia\", 1.0]]")).field.tank;
    assert_eq!(tank.compaction, [(1000.0, 0.952), (2500.0, 0.981), (3600.0, 1.0)]);
    for (pairs, told) in [
        ("[]", "no list of pairs"),
        ("[[\"1000 psia\", \"0.9\"], [\"2000 psia\", 1.0]]", "no pore-volume multiplier"),
        ("[[\"1000 psia\"], [\"2000 psia\", 1.0]]", "is a pair"),
        ("[[\"2000 psia\", 0.9], [\"1000 psia\", 1.0]]", "do not rise"),
        ("[[\"1000 psia\", 1.0], [\"2000 psia\", 0.9]]", "falls with rising pressure"),
    ] {
        let found = problems(&table(pairs));
        assert!(found.contains(told), "`{told}` is not told:\n{found}");
    }
    let both = BASE.replace(
        "pore_compressibility =",
        "compaction = [[\"1000 psia\", 0.9], [\"2000 psia\", 1.0]]\npore_compressibility =",
    );
    assert!(problems(&both).contains("compaction"), "both");
    let none = BASE.replace("pore_compressibility = \"4e-6 1/psi\"", "");
    assert!(problems(&none).contains("one of pore_compressibility, compaction is expected"));
}

#[test]
fn gas_goes_where_it_is_sent() {
    let injector =
        |more: &str| format!("{BASE}\n[[injector]]\nname = \"GI\"\nfluid = \"gas\"\nrate = \"1 MMscf/d\"\n{more}\n");
    let to_cap = |text: &str| read(text).field.injectors.iter().find(|i| i.name == "GI").unwrap().to_gas_cap;
    assert!(!to_cap(&injector("")));
    assert!(!to_cap(&injector("gas_to = \"oil-zone\"")));
    assert!(to_cap(&injector("gas_to = \"gas-cap\"")));
    let water = injector("gas_to = \"gas-cap\"").replace("\"gas\"\n", "\"water\"\n").replace("MMscf/d", "MSTB/d");
    assert!(problems(&water).contains("belongs to a gas injector"));
}
