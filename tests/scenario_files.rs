//! Files: what cannot be loaded is named, what a scenario names is read beside it, and neither is touched.

#![allow(clippy::unwrap_used)] // a test that unwraps fails with its line

use std::fs;
use std::path::{Path, PathBuf};
use tempfile::TempDir;
use wane::scenario::{Document, LoadError};

const GOOD: &str = include_str!("data/reference.toml");

fn folder() -> TempDir {
    TempDir::new().unwrap()
}

fn write(folder: &TempDir, name: &str, bytes: impl AsRef<[u8]>) -> PathBuf {
    let path = folder.path().join(name);
    fs::write(&path, bytes).unwrap();
    path
}

fn refusal(path: &Path) -> LoadError {
    Document::load(path).map(|_| ()).expect_err("should not load")
}

#[test]
fn what_cannot_be_loaded_is_named_in_one_line() {
    let folder = folder();
    write(&folder, "osier.toml", GOOD);
    let missing = refusal(&folder.path().join("osier.tml"));
    assert!(
        missing.to_string().contains("there is no file") && missing.to_string().contains("osier.toml?"),
        "{missing}"
    );
    let directory = refusal(folder.path());
    assert!(
        directory.to_string().contains("is a directory") && directory.to_string().contains("osier.toml?"),
        "{directory}"
    );
    let cases: [(&str, &[u8], &str); 8] = [
        ("empty", b"", "is empty"),
        ("blank", b" \n\t\n", "is empty"),
        ("marked", b"\xef\xbb\xbf\n", "is empty"),
        ("binary", b"a = 1\n\x00\x01\x02", "is not a text file: byte 6 is zero"),
        ("utf16", b"\xff\xfea\x00 \x00=\x00", "UTF-16?"),
        ("latin1", b"# ok\ntitle = \"Gr\xf6\"\n", "latin1.toml:2:12: byte 0xf6 is not valid UTF-8"),
        ("cut", b"title = \"\xe2\x82", "cut.toml:1:10: byte 0xe2"),
        ("toml", b"a = = 1\n", "toml.toml:1:"),
    ];
    for (name, bytes, words) in cases {
        let path = write(&folder, &format!("{name}.toml"), bytes);
        let error = refusal(&path).to_string();
        assert!(error.contains(words), "{name}: {error}");
        assert_eq!(fs::read(&path).unwrap(), bytes, "left as it was");
    }
    let large = folder.path().join("large.toml");
    fs::File::create(&large).unwrap().set_len(20 << 20).unwrap();
    assert!(matches!(refusal(&large), LoadError::TooLarge { .. }));
}

#[cfg(unix)]
#[test]
fn what_is_no_file_is_not_read() {
    assert!(matches!(refusal(Path::new("/dev/zero")), LoadError::NotAFile { .. }));
}

#[test]
fn a_mark_at_the_beginning_of_the_text_does_no_harm() {
    let folder = folder();
    let path = write(&folder, "marked.toml", format!("\u{feff}{}", GOOD.replace('\n', "\r\n")));
    let document = Document::load(&path).unwrap_or_else(|error| panic!("{error}"));
    document.resolve(None, &[]).unwrap_or_else(|problems| panic!("{problems}"));
}

fn with_survey(folder: &TempDir, survey: &str) -> Result<Vec<(f64, f64)>, String> {
    write(folder, "op1.csv", survey);
    let start = GOOD.find("survey    = [").unwrap();
    let end = start + GOOD[start..].find('\n').unwrap();
    let text = format!("{}survey = \"op1.csv\"{}", &GOOD[..start], &GOOD[end..]);
    let path = write(folder, "scenario.toml", text);
    let scenario = Document::load(&path).unwrap().resolve(None, &[]).map_err(|problems| {
        assert_eq!(problems.quoted(&problems.list[0]), Some("\"op1.csv\""));
        problems.to_string()
    })?;
    assert_eq!((scenario.files.len(), scenario.files[0].path.as_str()), (1, "op1.csv"));
    Ok(scenario.field.wells[0].tubing.survey.clone())
}

fn with_survey_of(folder: &TempDir, survey: &str) -> Vec<(f64, f64)> {
    // Perforations and the rest of the scenario fit deeper wells only: the survey is looked at alone.
    let longer = format!("{survey}8600,45{}\n", if survey.contains("azimuth") { ",30" } else { "" });
    with_survey(folder, &longer).unwrap_or_else(|said| panic!("{said}"))
}

#[test]
fn a_survey_is_read_from_the_folder_of_the_scenario() {
    let folder = folder();
    let expected = Ok(vec![(0.0, 0.0), (4000.0, 4000.0), (8600.0, 8150.0)]);
    assert_eq!(with_survey(&folder, "md_ft,tvd_ft\n0,0\n4000,4000\n8600,8150\n"), expected);
    assert_eq!(with_survey(&folder, "# by wireline\nMD (ft), TVD [ft]\n0, 0\n4000.0, 4e3\n8600, 8150"), expected);
    let metric = with_survey(&folder, "md_m,tvd_m\n0,0\n3048,3000\n").unwrap();
    // By hand: 45 degrees hold for 1,000 ft fall by 1000 cos 45, at any azimuth.
    let held = "md_ft,inclination_deg\n0,45\n1000,45\n";
    let turned = "md_ft,inclination_deg,azimuth_deg\n0,45,30\n1000,45,30\n";
    for directional in [held, turned] {
        let found = with_survey_of(&folder, directional);
        assert!((found[1].1 - 1000.0 * 0.5_f64.sqrt()).abs() < 1.0e-9, "{found:?}");
    }
    // 3048 m are 10000 ft by the definition of the foot.
    assert!((metric[1].0 - 10_000.0).abs() < 1.0e-9, "{metric:?}");
}

#[test]
fn a_bad_survey_file_is_named_with_its_line() {
    let folder = folder();
    let cases = [
        ("md,tvd\n0,0\n1,1\n", "line 1: the column \"md\" does not end with its unit"),
        ("md_ft\n0\n1\n", "line 1 has 1 columns where 2 are expected"),
        ("md_ft,tvd_ft\n0,0\n1,2,3\n", "line 3 has 3 columns where 2 are expected"),
        ("md_ft,tvd_ft\n0,0\nx,8150\n", "line 3: `x` does not begin with a number"),
        ("md_ft,tvd_ft\n0,0\n8600,NaN\n", "line 3: `NaN` is not a finite number"),
        ("md_ft,tvd_ft\n0,0\n-5,3\n", "line 3: depth -5 is not between 0 and 50000 ft"),
        ("md_ft,tvd_ft\n0,0\n", "fewer than two points"),
        ("md_ft,inclination_deg\n0,0\n5000,95\n", "line 3: inclination 95 is not between 0 and 90 deg"),
        ("md_ft,inclination_deg,azimuth\n0,0,0\n", "the column \"azimuth\" does not end with its unit"),
        ("", "columns where 2 are expected"),
        ("md_ft,tvd_ft\n0,0\n8600,8150\n8500,8100\n", "the survey goes backwards"),
    ];
    for (survey, words) in cases {
        let said = with_survey(&folder, survey).expect_err(survey);
        assert!(said.contains(words), "{survey:?}\n{said}");
        assert!(said.contains("scenario.toml:73:"), "{said}");
    }
    fs::remove_file(folder.path().join("op1.csv")).unwrap();
    let path = folder.path().join("scenario.toml");
    let said = Document::load(&path).unwrap().resolve(None, &[]).map(|_| ()).unwrap_err().to_string();
    assert!(said.contains("survey file op1.csv: there is no such file"), "{said}");
}
