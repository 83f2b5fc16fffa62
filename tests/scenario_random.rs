//! Random text and random damage: the reader never panics, and every refusal points somewhere.

use proptest::prelude::*;
use wane::scenario::{Document, Problems};

const GOOD: &str = include_str!("data/reference.toml");

/// What scenarios are made of, to get further than noise does.
const WORDS: &[&str] = &[
    "[well]",
    "[[well]]",
    "[tank]",
    "[[event]]",
    "[[case]]",
    "[fluid]",
    "[period]",
    "name",
    "=",
    " = ",
    "\"",
    "'",
    "\n",
    "{",
    "}",
    "[",
    "]",
    ",",
    "set",
    "on",
    "2027-01-01",
    "3600 psia",
    "\"3600 psia\"",
    "0.22",
    "nan",
    "-1e308",
    "1e999",
    "true",
    "test",
    "survey",
    ".",
    "#",
    "\u{feff}",
    "é",
    "\t",
    "\r\n",
    "pressure",
    "tank.pressure",
    "injector",
    "[[injector]]",
    "\"\"\"",
    "🛢",
];

fn look_at(text: &str, sets: &[String]) -> Result<(), TestCaseError> {
    match Document::parse("random.toml", text) {
        Err(problems) => check(&problems),
        Ok(document) => {
            let _ = (document.title(), document.case_names(), document.sha256());
            for case in std::iter::once(None).chain(document.case_names().iter().map(|case| Some(case.as_str()))) {
                if let Err(problems) = document.resolve(case, sets) {
                    check(&problems)?;
                }
            }
            document.resolve_fluid(sets).err().map_or(Ok(()), |problems| check(&problems))
        }
    }
}

fn check(problems: &Problems) -> Result<(), TestCaseError> {
    prop_assert!(!problems.list.is_empty());
    for problem in &problems.list {
        prop_assert!(!problem.message.is_empty());
        let place = problems.line_column(problem);
        prop_assert!(place.is_some_and(|(line, column)| line > 0 && column > 0), "{} points nowhere", problem.message);
        prop_assert!(problems.quoted(problem).is_some());
    }
    let shown = problems.to_string();
    prop_assert!(shown.contains("random.toml"));
    prop_assert!(!shown.chars().any(|c| c.is_control() && c != '\n'), "control characters reach the terminal");
    prop_assert!(!problems.render(true).is_empty());
    Ok(())
}

/// A valid scenario with some stretches cut out, doubled, or replaced.
fn damaged() -> impl Strategy<Value = String> {
    let edit = (
        0..GOOD.len(),
        0..40_usize,
        prop_oneof![
            Just(String::new()),
            prop::sample::select(WORDS).prop_map(str::to_owned),
            "[ -~]{0,6}",
            "\\PC{0,3}",
        ],
    );
    prop::collection::vec(edit, 1..4).prop_map(|edits| {
        let mut text = GOOD.to_owned();
        for (at, length, new) in edits {
            let boundary = |i: usize| (0..=i.min(text.len())).rev().find(|i| text.is_char_boundary(*i)).unwrap_or(0);
            let (from, to) = (boundary(at), boundary(at + length));
            text.replace_range(from..to.max(from), &new);
        }
        text
    })
}

/// A valid scenario in which one value is replaced by a value of another kind or size.
fn revalued() -> impl Strategy<Value = String> {
    let lines: Vec<usize> = GOOD.lines().enumerate().filter(|(_, line)| line.contains(" = ")).map(|(i, _)| i).collect();
    let value = prop_oneof![
        prop::num::f64::ANY.prop_map(|x| format!("{x:?}").replace("NaN", "nan")),
        prop::num::i64::ANY.prop_map(|x| x.to_string()),
        "\"[ -!#-\\[\\]-~]{0,12}\"",
        (prop::num::f64::NORMAL, prop::sample::select(&["psia", "psig", "ft", "m", "STB/d", "1/psi", "degC", "%"][..]))
            .prop_map(|(x, unit)| format!("\"{x:e} {unit}\"")),
        Just("[]".to_owned()),
        Just("{}".to_owned()),
        Just("[[]]".to_owned()),
        Just("[{}]".to_owned()),
        Just("2030-02-28".to_owned()),
        Just("0001-01-01".to_owned()),
        Just("07:32:00".to_owned()),
    ];
    (prop::sample::select(lines), value).prop_map(|(line, value)| {
        let lines = GOOD.lines().enumerate().map(|(i, text)| match text.split_once(" = ") {
            Some((key, _)) if i == line => format!("{key} = {value}"),
            _ => text.to_owned(),
        });
        lines.collect::<Vec<_>>().join("\n")
    })
}

proptest! {
    #![proptest_config(ProptestConfig { failure_persistence: None, cases: 400, ..ProptestConfig::default() })]

    #[test]
    fn random_characters(text in "\\PC{0,80}|[ -~\n\t]{0,200}|(.|\n|\0){0,60}") {
        look_at(&text, &[])?;
    }

    #[test]
    fn random_words(words in prop::collection::vec(prop::sample::select(WORDS), 0..40)) {
        look_at(&words.concat(), &[])?;
    }

    #[test]
    fn random_damage(text in damaged()) {
        look_at(&text, &[])?;
    }

    #[test]
    fn random_values(text in revalued()) {
        look_at(&text, &[])?;
    }

    #[test]
    fn random_settings(key in "[a-zA-Z0-9_.\" -]{0,30}|(well|injector|tank|fluid)(\\.[A-Za-z0-9_-]{1,12}){0,4}", value in "\\PC{0,20}|[0-9a-z {}\\[\\],\"=-]{0,20}") {
        look_at(GOOD, &[format!("{key}={value}"), "well.OP-1.skin=1".to_owned()])?;
    }
}
