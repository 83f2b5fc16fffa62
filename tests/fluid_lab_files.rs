//! A laboratory's table in its CSV file: what is read, what is refused, what the results say.
#![allow(clippy::unwrap_used)]

use std::path::Path;
use std::process::Command;
use wane::scenario::Document;

const SCENARIO: &str = "[fluid]\noil_gravity = \"36 API\"\ngas_gravity = 0.82\nsolution_gor = \"640 scf/STB\"\n\n\
    [fluid.lab]\ntable = \"lab.csv\"\nBASIS\n\n[tank]\ntemperature = \"205 degF\"\n";
const BASIS: &str = "basis = \"differential\"\nseparator_bo = \"1.405 rb/STB\"\nseparator_gor = \"640 scf/STB\"";

fn csv() -> String {
    std::fs::read_to_string(Path::new(env!("CARGO_MANIFEST_DIR")).join("scenarios/lab.csv")).unwrap()
}

/// Writes scenario and table into a folder of their own.
fn folder(basis: &str, csv: &str) -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    std::fs::write(folder.path().join("s.toml"), SCENARIO.replace("BASIS", basis)).unwrap();
    std::fs::write(folder.path().join("lab.csv"), csv).unwrap();
    folder
}

fn wane(folder: &Path, args: &[&str]) -> (String, String, bool) {
    let output = Command::new(env!("CARGO_BIN_EXE_wane")).current_dir(folder).args(args).output().unwrap();
    let text = |bytes: Vec<u8>| String::from_utf8(bytes).unwrap();
    (text(output.stdout), text(output.stderr), output.status.success())
}

#[test]
fn what_is_wrong_is_named_at_its_place() {
    let table = csv();
    let header = "pressure_psig,rs_scf_stb,bo_rb_stb,mu_o_cp,z,mu_g_cp";
    assert!(table.contains(header));
    let with = |to: &str| table.replace(header, to);
    for (basis, csv, said) in [
        ("", table.clone(), "`fluid.lab.basis` is missing"),
        ("basis = \"differential\"", table.clone(), "`fluid.lab.separator_bo` is missing"),
        ("basis = \"composite\"", table.clone(), "`fluid.lab.basis` cannot be"),
        ("basis = \"flash\"\nseparator_bo = \"1.4 rb/STB\"", table.clone(), "goes with basis = \"differential\""),
        (
            BASIS,
            with("pressure,rs_scf_stb,bo_rb_stb,mu_o_cp,z,mu_g_cp"),
            "\"pressure\" does not end with the unit of a pressure",
        ),
        (BASIS, with("pressure_psig,rs_scf_stb,bo_rb_stb,mu_o_cp,z,colour"), "\"colour\" is none of the columns"),
        (BASIS, with("pressure_psig,rs_scf_stb,mu_g_cp,mu_o_cp,z,mu_o_cp"), "line 1 has no column bo"),
        (BASIS, with("pressure_psig,rs_scf_stb,bo_rb_stb,mu_o_cp,z,bg_rb_scf"), "both z and bg"),
        (BASIS, with("pressure_psig,rs_scf_stb,bo_rb_stb,mu_o_cp,z_cp,mu_g_cp"), "\"z_cp\" has no unit"),
        (BASIS, table.replace("1.388", "much"), "line 8: "),
        (
            BASIS,
            table.replace("1800,531,1.388", "1800,531,"),
            "line 8: the pressure and the oil volume factor cannot be empty",
        ),
        (BASIS, table.replace("0.515,0.842,0.0172", "0.515,0.842"), "line 8 has 5 columns where 6 are expected"),
        (BASIS, table.replace("531", "431"), "does not rise with pressure"),
        (BASIS, String::new(), "laboratory's table lab.csv: "),
    ] {
        let folder = folder(basis, &csv);
        let (_, error, well) = wane(folder.path(), &["fluid", "s.toml"]);
        assert!(!well && error.contains(said), "{said}:\n{error}");
    }
    let folder = folder(BASIS, &table);
    std::fs::remove_file(folder.path().join("lab.csv")).unwrap();
    let (_, error, well) = wane(folder.path(), &["fluid", "s.toml"]);
    assert!(!well && error.contains("there is no such file"), "{error}");
}

#[test]
fn units_and_titles_may_be_written_in_several_ways() {
    let metric: String = csv()
        .lines()
        .filter(|line| !line.starts_with('#') && !line.starts_with("pressure"))
        .map(|line| {
            let cells: Vec<&str> = line.split(',').collect();
            let bar = (cells[0].parse::<f64>().unwrap() + 14.696) / 14.503_773_773;
            let rs = cells[1].parse::<f64>().map_or_else(|_| String::new(), |rs| format!("{}", rs / 5.614_583));
            format!("{rs},{bar},{},{},{},{}\n", cells[2], cells[3], cells[4], cells[5])
        })
        .collect();
    let metric = format!("Rs (Sm3/Sm3),pressure [bara],bo_rm3_sm3,mu_o_mPa.s,z,mu_g (cp)\n{metric}");
    let read = |csv: &str| {
        let folder = folder(BASIS, csv);
        let document = Document::load(&folder.path().join("s.toml")).unwrap_or_else(|e| panic!("{e}"));
        let fluid = document.resolve_fluid(&[]).unwrap_or_else(|problems| panic!("{problems}"));
        fluid.fluid.lab.unwrap()
    };
    let (field, metric) = (read(&csv()), read(&metric));
    assert_eq!(field.rows.len(), 12);
    for (a, b) in field.rows.iter().zip(&metric.rows) {
        assert!((a.pressure_psia / b.pressure_psia - 1.0).abs() < 1e-9, "{a:?} {b:?}");
        assert_eq!((a.bo_rb_stb, a.mu_o_cp, a.z, a.mu_g_cp), (b.bo_rb_stb, b.mu_o_cp, b.z, b.mu_g_cp));
        let rs = |rs: Option<f64>| rs.unwrap_or(-1.0);
        assert!((rs(a.rs_scf_stb) - rs(b.rs_scf_stb)).abs() < 1e-3, "{a:?} {b:?}");
    }
}

#[test]
fn the_screen_the_files_and_the_picture_say_what_came_from_the_laboratory() {
    let folder = folder(BASIS, &csv());
    let (text, error, well) = wane(folder.path(), &["fluid", "s.toml", "--output", "out"]);
    assert!(well, "{error}");
    assert!(text.contains("oil volume factor: lab, at other temperatures by Standing"), "{text}");
    assert!(text.contains("water: correlation, McCain"), "{text}");
    let picture = std::fs::read_to_string(folder.path().join("out/fluid.svg")).unwrap();
    for said in ["laboratory, referred to", "Glaso through this bubble point", "Petrosky-Farshad"] {
        assert!(picture.contains(said), "{said}");
    }
    let (json, ..) = wane(folder.path(), &["fluid", "s.toml", "--json"]);
    let json: serde_json::Value = serde_json::from_str(&json).unwrap();
    assert_eq!(json["sources"][2]["property"], "oil volume factor");
    assert_eq!(json["sources"][2]["from"], "lab");
    // The bubble point row holds the separator's values.
    let bubble = json["bubble_point_psia"].as_f64().unwrap();
    assert!((bubble - 2514.696).abs() < 1e-3);
    let row =
        json["rows"].as_array().unwrap().iter().find(|row| row["pressure_psia"].as_f64() == Some(bubble)).unwrap();
    assert!((row["bo_rb_stb"].as_f64().unwrap() - 1.405).abs() < 1e-9);
    assert!((row["rs_scf_stb"].as_f64().unwrap() - 640.0).abs() < 1e-9);
}
