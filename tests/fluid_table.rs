//! The fluid given as a table.
#![allow(clippy::unwrap_used)]

use proptest::prelude::*;
use wane::fluid::{FluidTable, FluidTableRow, ReservoirFluid, TableWater};

/// L. P. Dake, "Fundamentals of Reservoir Engineering" (1978), table 2.4, from memory: p psia, Bo, Rs scf/STB, Bg rb/scf.
const DAKE_TABLE: [(f64, f64, f64, Option<f64>); 13] = [
    (4000.0, 1.2417, 510.0, None),
    (3500.0, 1.2480, 510.0, None),
    (3330.0, 1.2511, 510.0, Some(0.000_87)),
    (3000.0, 1.2222, 450.0, Some(0.000_96)),
    (2700.0, 1.2022, 401.0, Some(0.001_07)),
    (2400.0, 1.1822, 352.0, Some(0.001_19)),
    (2100.0, 1.1633, 304.0, Some(0.001_37)),
    (1800.0, 1.1450, 257.0, Some(0.001_61)),
    (1500.0, 1.1287, 214.0, Some(0.001_96)),
    (1200.0, 1.1115, 167.0, Some(0.002_49)),
    (900.0, 1.0940, 122.0, Some(0.003_39)),
    (600.0, 1.0763, 78.0, Some(0.005_19)),
    (300.0, 1.0583, 35.0, Some(0.010_66)),
];

/// Assumed viscosities: 0.50 + 1.5e-4 (3330 - p) below the bubble point, 0.50 + 2e-5 (p - 3330) above; gas 0.012 + 2.5e-6 p.
fn rows() -> Vec<FluidTableRow> {
    DAKE_TABLE
        .iter()
        .map(|&(p, bo, rs, bg)| FluidTableRow {
            pressure_psia: p,
            rs_scf_stb: rs,
            bo_rb_stb: bo,
            mu_o_cp: 0.5 + if p < 3330.0 { 1.5e-4 * (3330.0 - p) } else { 2e-5 * (p - 3330.0) },
            bg_rb_scf: bg,
            mu_g_cp: Some(0.012 + 2.5e-6 * p),
        })
        .collect()
}

fn water() -> TableWater {
    TableWater { bw_rb_stb: 1.02, reference_psia: 4000.0, compressibility_1_psi: 3e-6, mu_w_cp: 0.4 }
}

fn dake() -> FluidTable {
    FluidTable::new(&rows(), water()).unwrap()
}

fn near(got: f64, stated: f64) {
    assert!((got - stated).abs() <= 1e-12 * stated.abs().max(1.0), "{got} against {stated}");
}

#[test]
fn every_row_is_met_exactly() {
    let table = dake();
    near(table.initial_bubble_point_psia(), 3330.0);
    assert_eq!(table.pressure_range_psia(), (300.0, 4000.0));
    for row in rows() {
        let p = row.pressure_psia;
        let rs = table.rs_saturated(p).min(510.0);
        near(rs, row.rs_scf_stb);
        near(table.bo(p, rs), row.bo_rb_stb);
        near(table.mu_o(p, rs), row.mu_o_cp);
        near(table.mu_g(p), row.mu_g_cp.unwrap());
        if let Some(bg) = row.bg_rb_scf {
            near(table.bg(p), bg);
        }
    }
}

#[test]
fn between_rows_every_column_is_straight() {
    let table = dake();
    let middle = |a: f64, b: f64| 0.5 * (a + b);
    let rs = table.rs_saturated(2850.0);
    near(rs, middle(450.0, 401.0));
    near(table.bo(2850.0, rs), middle(1.2222, 1.2022));
    near(table.bg(2850.0), middle(0.000_96, 0.001_07));
    near(table.mu_o(2850.0, rs), 0.5 + 1.5e-4 * 480.0);
    near(table.bo(3750.0, 510.0), middle(1.2480, 1.2417));
    near(table.mu_o(3750.0, 510.0), 0.5 + 2e-5 * 420.0);
}

#[test]
fn oil_that_lost_gas_shrinks_from_its_own_bubble_point() {
    let table = dake();
    near(table.bubble_point_psia(401.0), 2700.0);
    // 670 psi above its bubble point the table's oil has shrunk by 1.2417/1.2511.
    near(table.bo(2700.0 + 670.0, 401.0), 1.2022 * (1.2417 / 1.2511));
    near(table.mu_o(2700.0 + 670.0, 401.0), (0.5 + 1.5e-4 * 630.0) * (0.5 + 2e-5 * 670.0) / 0.5);
}

#[test]
fn oil_that_took_up_gas_follows_the_saturated_line_upwards() {
    let table = dake();
    // The slope of the last saturated stretch: 60 scf/STB and 0.0289 rb/STB in 330 psi.
    near(table.rs_saturated(3660.0), 570.0);
    near(table.bubble_point_psia(570.0), 3660.0);
    near(table.bo(3660.0, 570.0), 1.2511 + 0.0289);
    // Beyond the last row with gas, p Bg is constant.
    near(table.bg(3700.0), 0.000_87 * 3330.0 / 3700.0);
}

#[test]
fn without_undersaturated_rows_the_oil_does_not_yield() {
    let saturated: Vec<_> = rows().into_iter().filter(|row| row.pressure_psia <= 3330.0).collect();
    let table = FluidTable::new(&saturated, TableWater::constant(1.0, 0.4)).unwrap();
    near(table.bo(3900.0, 510.0), 1.2511);
    near(table.mu_o(3900.0, 510.0), 0.5);
    near(table.bo(3000.0, 401.0), 1.2022);
    near(table.bw(100.0), 1.0);
    near(table.bw(4000.0), 1.0);
}

#[test]
fn water_expands_by_its_compressibility() {
    let table = dake();
    near(table.bw(4000.0), 1.02);
    near(table.bw(1000.0), 1.02 * (3e-6 * 3000.0_f64).exp());
    near(table.mu_w(1000.0), 0.4);
}

#[test]
fn impossible_rows_are_faults() {
    type Spoil = fn(&mut Vec<FluidTableRow>);
    let spoils: [(&str, Spoil); 8] = [
        ("at least two rows", |rows| rows.truncate(1)),
        ("not a positive number", |rows| rows[3].bo_rb_stb = f64::NAN),
        ("not a positive number", |rows| rows[3].bg_rb_scf = Some(-1.0)),
        ("two rows have the pressure", |rows| rows[4].pressure_psia = rows[3].pressure_psia),
        ("lower than in the row of lower pressure", |rows| rows[5].rs_scf_stb = 500.0),
        ("solution gas-oil ratio is NaN", |rows| rows[5].rs_scf_stb = f64::NAN),
        ("no row has a gas volume factor", |rows| rows.iter_mut().for_each(|row| row.bg_rb_scf = None)),
        ("rises again above a stretch where it is level", |rows| rows[0].rs_scf_stb = 520.0),
    ];
    for (text, spoil) in spoils {
        let mut rows = rows();
        spoil(&mut rows);
        let faults = FluidTable::new(&rows, water()).unwrap_err();
        assert!(faults.iter().any(|f| f.key == "table" && f.message.contains(text)), "{text}: {faults:?}");
    }
    let dry = TableWater { bw_rb_stb: 0.0, ..water() };
    assert!(FluidTable::new(&rows(), dry).is_err());
}

proptest! {
    #[test]
    fn table_values_are_positive_and_join(p in 1.0..12_000.0_f64, rs in 0.0..700.0_f64) {
        let table = dake();
        let all = |p: f64, rs: f64| [table.bo(p, rs), table.mu_o(p, rs), table.bg(p), table.mu_g(p), table.bw(p)];
        let rs = rs.min(table.rs_saturated(p));
        for (a, b) in all(p, rs).into_iter().zip(all(p * (1.0 + 1e-9), rs)) {
            prop_assert!(a.is_finite() && a > 0.0 && (a / b - 1.0).abs() < 1e-7, "{} and {} at {} psia", a, b, p);
        }
        let pb = table.bubble_point_psia(rs);
        prop_assert!(rs < 1e-9 || (table.rs_saturated(pb) - rs).abs() < 1e-9, "Rs {} of pb {}", table.rs_saturated(pb), pb);
    }

    #[test]
    fn random_rows_never_panic(cells in prop::collection::vec((any::<f64>(), any::<f64>(), any::<f64>(), any::<f64>(), any::<f64>()), 0..6)) {
        let rows: Vec<_> = cells
            .iter()
            .map(|&(p, rs, bo, mu, bg)| FluidTableRow {
                pressure_psia: p, rs_scf_stb: rs, bo_rb_stb: bo, mu_o_cp: mu, bg_rb_scf: Some(bg), mu_g_cp: Some(mu),
            })
            .collect();
        match FluidTable::new(&rows, water()) {
            Ok(table) => prop_assert!(table.initial_bubble_point_psia() > 0.0),
            Err(faults) => prop_assert!(!faults.is_empty()),
        }
    }
}
