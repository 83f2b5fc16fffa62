//! Energy in the engine: aquifers, compaction, gas into the cap. Numbers to hold, limits that must be met, runs that must not stall.
#![allow(clippy::unwrap_used)]

mod common;

use common::aquifer::superposed;
use common::fields::{injector, one_well};
use common::{case, near, numbers};
use std::sync::Arc;
use wane::fluid::{BlackOil, FluidTable, FluidTableRow, ReservoirFluid, TableWater};
use wane::forecast::{FieldSpec, Forecast, InjectedFluid, InjectionControl, Tolerance, run};
use wane::rock::{CoreySpec, RelativePermeability};
use wane::tank::{AquiferSpec, Cumulatives, ProducedSpec, Tank, TankSpec, TankState, WaterModel};

/// A small field whose well dies within the period, whatever helps it.
fn small(aquifer: Option<AquiferSpec>) -> FieldSpec {
    let mut spec = one_well();
    spec.wells[0].line_pressure_psia = 120.0;
    spec.wells[0].target_rate_stb_d = Some(900.0);
    spec.tank.oil_in_place_stb = 5e6;
    spec.tank.water_model = WaterModel::Average;
    spec.tank.aquifer = aquifer;
    spec
}

fn aquifers() -> Vec<(&'static str, AquiferSpec)> {
    let finite = |water_rb: f64, productivity_rb_d_psi: f64| AquiferSpec::Fetkovich {
        water_rb,
        compressibility_1_psi: 7e-6,
        productivity_rb_d_psi,
    };
    vec![
        ("pot", AquiferSpec::Pot { water_rb: 60e6, compressibility_1_psi: 7e-6 }),
        ("steady", AquiferSpec::Schilthuis { strength_rb_d_psi: 0.2 }),
        ("strong steady", AquiferSpec::Schilthuis { strength_rb_d_psi: 3e4 }),
        ("finite", finite(80e6, 1.5)),
        ("small and strong", finite(3e6, 1e6)),
        ("without end", AquiferSpec::CarterTracy { constant_rb_psi: 60.0, time_per_day: 0.01, age_days: 0.0 }),
        ("without end, strong", AquiferSpec::CarterTracy { constant_rb_psi: 3000.0, time_per_day: 1.0, age_days: 0.0 }),
    ]
}

fn sum(f: &Forecast) -> f64 {
    let d = f.tank.last().unwrap().drive_indices.unwrap();
    d.depletion + d.gas_cap + d.rock_and_water + d.aquifer + d.injection
}

fn end_days(f: &Forecast) -> f64 {
    f.wells[0].natural_flow_end.map_or(f.end_days, |end| end.days)
}

#[test]
fn every_aquifer_holds_the_numbers() {
    let alone = run(&small(None)).unwrap();
    assert!(alone.tank.iter().all(|t| t.aquifer.is_none()));
    for (name, aquifer) in aquifers() {
        let mut spec = small(Some(aquifer));
        let normal = run(&spec).unwrap();
        spec.tolerance = Tolerance::Tight;
        let tight = run(&spec).unwrap();
        for f in [&normal, &tight] {
            assert!(f.balance_residual <= 1e-8, "{name}: residual {:e}", f.balance_residual);
            for t in &f.tank {
                if let Some(d) = t.drive_indices {
                    let all = d.depletion + d.gas_cap + d.rock_and_water + d.aquifer + d.injection;
                    assert!((all - 1.0).abs() <= 1e-6, "{name}: drive indices sum to {all}");
                    assert!(d.aquifer >= 0.0, "{name}: aquifer index {}", d.aquifer);
                }
            }
            assert!(f.tank.last().unwrap().drive_indices.unwrap().aquifer > 0.005, "{name}: no influx");
        }
        let oil = |f: &Forecast| f.tank.last().unwrap().oil_cum_stb;
        let gap = (end_days(&normal) - end_days(&tight)).abs();
        println!(
            "{name}: {:.2} days, gap {gap:.4}, oil gap {:.1e}, steps {} and {}, index {:.3}",
            end_days(&normal),
            oil(&normal) / oil(&tight) - 1.0,
            normal.work.steps,
            tight.work.steps,
            normal.tank.last().unwrap().drive_indices.unwrap().aquifer
        );
        assert!(gap <= 0.5, "{name}: the end moves by {gap} days");
        near(oil(&normal), oil(&tight), 1e-4, &format!("{name}: oil"));
        // None may cut the run into slivers: some days a step at least.
        assert!(normal.work.steps < 2500, "{name}: {} steps", normal.work.steps);
        // What came in adds up, and it holds the pressure.
        let last = normal.tank.last().unwrap().aquifer.unwrap();
        let made: f64 = normal.tank.iter().map(|t| t.aquifer.unwrap().influx_stb).sum();
        near(made, last.influx_cum_stb, 1e-9, &format!("{name}: influx adds up"));
        let year = 12;
        assert!(normal.tank[year].pressure_psia > alone.tank[year].pressure_psia, "{name} does not hold the pressure");
    }
}

/// The influx of a run against what its own pressures give: by Fetkovich's (1971) steps from month to month, and by superposition of the exact
/// solution of the aquifer without end, of which Carter and Tracy's method is an approximation.
#[test]
fn the_influx_of_a_run_follows_from_its_pressures() {
    let history = |f: &Forecast| {
        let mut times = vec![0.0];
        let mut pressures = vec![f.start_pressure_psia];
        for (period, row) in f.periods.iter().zip(&f.tank) {
            times.push(period.run_days);
            pressures.push(row.pressure_psia);
        }
        (times, pressures)
    };
    let spec = small(None);
    let fluid = BlackOil::new(&spec.fluid, spec.tank.temperature_degf).unwrap();
    let bw = fluid.bw(spec.tank.pressure_psia);

    let (water, ct, j) = (80e6, 7e-6, 1.5);
    // A larger tank, whose pressure runs nearly straight within a month as the steps take it.
    let mut large =
        small(Some(AquiferSpec::Fetkovich { water_rb: water, compressibility_1_psi: ct, productivity_rb_d_psi: j }));
    large.tank.oil_in_place_stb = 20e6;
    let f = run(&large).unwrap();
    let (times, pressures) = history(&f);
    let initial = pressures[0];
    let encroachable = water * ct * initial;
    let mut we = 0.0;
    for n in 1..times.len() {
        let aquifer = initial * (1.0 - we / encroachable);
        let mean = 0.5 * (pressures[n - 1] + pressures[n]);
        let days = times[n] - times[n - 1];
        we += encroachable / initial * (aquifer - mean) * (1.0 - (-j * initial * days / encroachable).exp());
        let found = f.tank[n - 1].aquifer.unwrap().influx_cum_stb * bw;
        // It bends a little all the same, most in the first months: T is about 400 rb/psi here, and J*(1/A + 1/T)*31/6 is 3 % of the influx.
        near(found, we, if n < 12 { 0.04 } else { 5e-3 }, &format!("Fetkovich after month {n}"));
    }

    let (u, rate) = (60.0, 0.01);
    let f =
        run(&small(Some(AquiferSpec::CarterTracy { constant_rb_psi: u, time_per_day: rate, age_days: 0.0 }))).unwrap();
    let (_, pressures) = history(&f);
    // Months taken as equal, which moves dates by a day or two.
    let months = 60;
    let times: Vec<f64> = (0..=months).map(|i| f64::from(i) * 365.25 / 12.0).collect();
    let exact = superposed(u, &times, &pressures[..=months as usize], rate, None);
    for month in [12, 24, 36, 48, 60] {
        let found = f.tank[month - 1].aquifer.unwrap().influx_cum_stb * bw;
        println!("Carter-Tracy in the engine after {month} months: {:+.2} %", 100.0 * (found / exact[month - 1] - 1.0));
        near(found, exact[month - 1], 0.09, &format!("Carter-Tracy after {month} months"));
    }
}

/// A steady aquifer can leave a well for years within a psi of its end: the margin then closes so slowly that a traverse's own 0.02 psi
/// is worth days. The end may move by those, the margin may not.
#[test]
fn a_slowly_closing_margin_is_right_in_psi() {
    let mut spec = small(Some(AquiferSpec::Schilthuis { strength_rb_d_psi: 0.4 }));
    let normal = run(&spec).unwrap();
    spec.tolerance = Tolerance::Tight;
    let tight = run(&spec).unwrap();
    let both = |i: usize| Some((normal.wells[0].rows[i].flow_margin_psi?, tight.wells[0].rows[i].flow_margin_psi?));
    for i in 0..normal.tank.len() {
        let (a, b) = both(i).unwrap();
        assert!((a - b).abs() < 0.02, "margins {a} and {b} in period {i}");
        assert!(
            (normal.tank[i].pressure_psia - tight.tank[i].pressure_psia).abs() < 0.01 || i + 1 == normal.tank.len()
        );
    }
}

/// A finite aquifer of great conductance is a pot, one of great volume a steady one; a steady one of great strength holds the pressure.
#[test]
fn limits_meet() {
    let finite = |water_rb: f64, j: f64| {
        run(&small(Some(AquiferSpec::Fetkovich { water_rb, compressibility_1_psi: 7e-6, productivity_rb_d_psi: j })))
            .unwrap()
    };
    let pot = run(&small(Some(AquiferSpec::Pot { water_rb: 60e6, compressibility_1_psi: 7e-6 }))).unwrap();
    let strong = finite(60e6, 1e7);
    for (a, b) in strong.tank.iter().zip(&pot.tank) {
        assert!((a.pressure_psia - b.pressure_psia).abs() < 0.3, "{} and {}", a.pressure_psia, b.pressure_psia);
    }
    assert!((end_days(&strong) - end_days(&pot)).abs() < 1.0, "{} and {}", end_days(&strong), end_days(&pot));
    near(
        pot.tank.last().unwrap().aquifer.unwrap().pressure_psia.unwrap(),
        pot.tank.last().unwrap().pressure_psia,
        1e-12,
        "p",
    );

    let steady = run(&small(Some(AquiferSpec::Schilthuis { strength_rb_d_psi: 0.4 }))).unwrap();
    let vast = finite(1e15, 0.4);
    for (a, b) in vast.tank.iter().zip(&steady.tank) {
        near(a.pressure_psia, b.pressure_psia, 1e-5, "a vast finite aquifer");
    }

    // q/C below the initial pressure, to within what a month changes.
    let strength = 3e4;
    let spec = small(Some(AquiferSpec::Schilthuis { strength_rb_d_psi: strength }));
    let held = run(&spec).unwrap();
    let fall = spec.tank.pressure_psia - held.tank[24].pressure_psia;
    let (row, days) = (&held.tank[24], 31.0);
    let state_free_withdrawal = row.oil_stb / days * 1.33 + row.water_stb / days;
    near(fall, state_free_withdrawal / strength, 0.1, "pressure below that of a strong steady aquifer");
}

/// How much the held conductance changes: against the same aquifer just at the border where nothing is held.
#[test]
fn a_shut_in_comes_to_rest_at_the_aquifers_pressure() {
    let mut spec =
        small(Some(AquiferSpec::Fetkovich { water_rb: 40e6, compressibility_1_psi: 7e-6, productivity_rb_d_psi: 5.0 }));
    spec.wells[0].end = Some(jiff::civil::date(2029, 1, 1));
    // A second well that starts much later keeps the run going.
    let mut later = spec.wells[0].clone();
    later.name = "OP-2".to_owned();
    later.end = None;
    later.start = Some(jiff::civil::date(2036, 1, 1));
    spec.wells.push(later);
    let f = run(&spec).unwrap();
    let row = &f.tank[12 * 9 - 1];
    let gap = row.aquifer.unwrap().pressure_psia.unwrap() - row.pressure_psia;
    assert!(gap.abs() < 0.05, "tank and aquifer {gap} psi apart after seven years of rest");
    assert!(row.pressure_psia > f.tank[23].pressure_psia + 1.0, "the tank did not fill up");
}

/// What the tank had taken in before the forecast is part of its balance: a run cut in two meets the run in one.
#[test]
fn a_forecast_goes_on_where_another_ended() {
    for (name, aquifer) in aquifers() {
        let whole = run(&small(Some(aquifer))).unwrap();
        let cut = 24;
        let row = &whole.tank[cut - 1];
        let mut second = small(Some(match aquifer {
            AquiferSpec::CarterTracy { constant_rb_psi, time_per_day, .. } => {
                AquiferSpec::CarterTracy { constant_rb_psi, time_per_day, age_days: whole.periods[cut - 1].end_days }
            }
            other => other,
        }));
        second.period.start = whole.periods[cut].start;
        let influx = row.aquifer.unwrap().influx_cum_stb;
        second.tank.produced = Some(ProducedSpec {
            oil_stb: row.oil_cum_stb,
            gas_scf: row.gas_cum_scf,
            water_stb: row.water_cum_stb,
            aquifer_stb: if matches!(aquifer, AquiferSpec::Pot { .. }) { 0.0 } else { influx },
            ..ProducedSpec::default()
        });
        let rest = run(&second).unwrap();
        near(rest.start_pressure_psia, row.pressure_psia, 1e-6, &format!("{name}: pressure at the start"));
        let (a, b) = (end_days(&whole), end_days(&rest) + whole.periods[cut - 1].end_days);
        assert!((a - b).abs() < 0.5, "{name}: ends after {a} and {b} days");
        let total = influx + rest.tank.last().unwrap().aquifer.unwrap().influx_cum_stb;
        near(total, whole.tank.last().unwrap().aquifer.unwrap().influx_cum_stb, 1e-3, &format!("{name}: influx"));
        near(sum(&rest), 1.0, 1e-6, "drive indices");
    }
}

fn two_rows(rows: &[(f64, f64, f64, f64)], water: TableWater) -> Arc<FluidTable> {
    let rows: Vec<FluidTableRow> = rows
        .iter()
        .map(|&(pressure_psia, bo_rb_stb, rs_scf_stb, bg)| FluidTableRow {
            pressure_psia,
            bo_rb_stb,
            rs_scf_stb,
            bg_rb_scf: bg.is_finite().then_some(bg),
            mu_o_cp: 1.0,
            mu_g_cp: bg.is_finite().then_some(0.02),
        })
        .collect();
    Arc::new(FluidTable::new(&rows, water).unwrap())
}

fn spec(oil_stb: f64, pressure_psia: f64, connate_water: f64) -> TankSpec {
    TankSpec { oil_in_place_stb: oil_stb, pressure_psia, connate_water, aquifer: None, ..small(None).tank }
}

/// Ahmed (2001), combination drive: inputs from memory, the arithmetic of the collection (see the file).
#[test]
fn drive_indices_of_a_combination_drive() {
    let c = case("material_balance.json", "ahmed_combination_drive");
    let get = |key: &str| c["inputs"][key].as_f64().unwrap();
    let fluid = two_rows(
        &[
            (get("p_psi") - 300.0, 1.30, 300.0, 0.0019),
            (get("p_psi"), get("Bo"), get("Rs"), get("Bg_rb_scf")),
            (get("pi_psi"), get("Boi"), get("Rsi"), get("Bgi_rb_scf")),
        ],
        TableWater::constant(1.0, 0.5),
    );
    let mut spec = spec(c["expected"]["N_MMstb"].as_f64().unwrap() * 1e6, get("pi_psi"), 0.2);
    spec.gas_cap_ratio = get("gas_zone_acft") / get("oil_zone_acft");
    spec.pore_compressibility_1_psi = 0.0;
    let rel_perm = RelativePermeability::corey(&CoreySpec::default(), 0.2);
    let tank = Tank::new(&spec, fluid, rel_perm, get("Rsi")).unwrap();
    let taken = Cumulatives {
        oil_stb: get("Np_stb"),
        gas_scf: get("Gp_scf"),
        water_stb: get("Wp_bbl"),
        aquifer_stb: get("We_bbl"),
        ..Cumulatives::default()
    };
    let state = tank.state(&tank.inventory(&taken), 2800.0).unwrap();
    near(state.pressure_psia, get("p_psi"), 2e-3, "pressure at which the balance closes");
    let at = TankState {
        pressure_psia: get("p_psi"),
        bo_rb_stb: get("Bo"),
        rs_scf_stb: get("Rs"),
        bg_rb_scf: get("Bg_rb_scf"),
        bw_rb_stb: 1.0,
        ..state
    };
    let balance = tank.balance(&taken, &at).unwrap();
    // The text divides by the hydrocarbon withdrawal, and its water drive is net of the produced water.
    let hydrocarbon = balance.withdrawal_rb - get("Wp_bbl");
    near(balance.depletion * balance.withdrawal_rb / hydrocarbon, 0.5119, 2e-3, "depletion index");
    near(balance.gas_cap * balance.withdrawal_rb / hydrocarbon, 0.2452, 2e-3, "gas-cap index");
    near(
        (balance.aquifer * balance.withdrawal_rb - get("Wp_bbl")) / hydrocarbon,
        0.2430,
        2e-3,
        "water-drive index, net",
    );
    assert!(balance.residual().abs() < 2e-3, "residual {}", balance.residual());
}

/// Undersaturated recovery against rock compressibility: the published table (its rock and water terms are linear), once with a constant
/// compressibility and once with the same rock as a table of multipliers.
#[test]
fn compaction_drive_meets_the_published_table() {
    let c = case("material_balance.json", "compaction_drive_table");
    let get = |key: &str| c["inputs"][key].as_f64().unwrap();
    let (initial, boi, connate) = (get("pi_psia"), get("Boi"), get("Sw"));
    let pressures = numbers(&c["inputs"]["p_abandon_psia"]);
    let bo = numbers(&c["inputs"]["Bo"]);
    let mut rows =
        vec![(15.0, 1.05, 0.0, 0.18), (900.0, boi * (1.0 + get("co_1_psi") * (initial - 900.0)), 500.0, 0.003)];
    rows.extend(pressures.iter().rev().zip(bo.iter().rev()).map(|(&p, &bo)| (p, bo, 500.0, f64::NAN)));
    rows.push((initial, boi, 500.0, f64::NAN));
    let water =
        TableWater { bw_rb_stb: 1.0, reference_psia: initial, compressibility_1_psi: get("cw_1_psi"), mu_w_cp: 0.5 };
    let fluid = two_rows(&rows, water);
    for cf in [3.0, 10.0, 15.0, 20.0, 30.0, 50.0, 100.0, 200.0] {
        let expected = numbers(&c["expected"][format!("cf{cf}")]);
        for table in [false, true] {
            let mut spec = spec(1.0, initial, connate);
            let linear = |p: f64| 1.0 - 1e-6 * cf * (initial - p);
            spec.pore_compressibility_1_psi = if table { 0.0 } else { 1e-6 * cf };
            if table {
                // Any scale: only ratios count.
                spec.compaction =
                    (0..=16).map(|i| 800.0 + 210.0 * f64::from(i)).map(|p| (p, 3.7 * linear(p))).collect();
            }
            let rel_perm = RelativePermeability::corey(&CoreySpec::default(), connate);
            let tank = Tank::new(&spec, fluid.clone(), rel_perm, 500.0).unwrap();
            for (p, (bo, expected)) in pressures.iter().zip(bo.iter().zip(&expected)) {
                let at = |np: f64| {
                    let taken = Cumulatives { oil_stb: np, gas_scf: 500.0 * np, ..Cumulatives::default() };
                    tank.state(&tank.inventory(&taken), *p).map_or(0.0, |s| s.pressure_psia)
                };
                let (mut low, mut high) = (0.0, 0.95);
                for _ in 0..60 {
                    let middle = 0.5 * (low + high);
                    if at(middle) > *p { low = middle } else { high = middle }
                }
                // A constant compressibility acts exponentially here, linearly in the text: the difference is (cf*dp)^2/2 of the pore volume.
                let bend = if table { 0.0 } else { (1e-6 * cf * (initial - p)).powi(2) / 2.0 / 0.75 * boi / bo };
                let allowed = 0.012 * expected + 6e-4 + bend;
                assert!(
                    (low - expected).abs() <= allowed,
                    "cf {cf}, table {table}, {p} psia: {low} against {expected}"
                );
            }
        }
    }
}

#[test]
fn a_compaction_table_is_met_monotone_and_reversible() {
    let mut spec = small(None);
    spec.tank.pore_compressibility_1_psi = 0.0;
    // Rock that yields below 2500 psia: invented.
    spec.tank.compaction =
        vec![(500.0, 0.900), (1500.0, 0.945), (2300.0, 0.981), (2500.0, 0.990), (3000.0, 0.9935), (3800.0, 0.9975)];
    let f = run(&spec).unwrap();
    assert!(f.balance_residual <= 1e-8, "residual {:e}", f.balance_residual);
    near(sum(&f), 1.0, 1e-6, "drive indices");
    let mut stiff = small(None);
    stiff.tank.pore_compressibility_1_psi = (0.9975f64 / 0.9935).ln() / 800.0;
    let g = run(&stiff).unwrap();
    let rock = |f: &Forecast| f.tank.last().unwrap().drive_indices.unwrap().rock_and_water;
    assert!(rock(&f) > 2.0 * rock(&g), "the yielding rock drives no more: {} and {}", rock(&f), rock(&g));
    assert!(end_days(&f) > end_days(&g), "compaction does not lengthen the life");
    spec.tolerance = Tolerance::Tight;
    let tight = run(&spec).unwrap();
    assert!((end_days(&f) - end_days(&tight)).abs() <= 0.5, "{} and {}", end_days(&f), end_days(&tight));
    // A table of one compressibility is that compressibility.
    let mut table = small(None);
    let cf = 4e-6f64;
    table.tank.compaction = [500.0, 1200.0, 2600.0, 3000.0].map(|p: f64| (p, (cf * p).exp())).to_vec();
    let constant = run(&small(None)).unwrap();
    let same = run(&table).unwrap();
    assert!((end_days(&same) - end_days(&constant)).abs() < 0.2, "the same rock as a table");
    // Rows out of order and a pore volume that grows as the pressure falls are refused by their rows.
    for (points, key) in [
        (vec![(2000.0, 0.98), (1500.0, 0.99)], "tank.compaction[1]"),
        (vec![(1500.0, 0.98), (2000.0, 0.99), (2500.0, 0.97)], "tank.compaction[2]"),
        (vec![(1500.0, 0.98)], "tank.compaction"),
    ] {
        spec.tank.compaction = points;
        assert!(run(&spec).unwrap_err().to_string().contains(key), "{key}");
    }
}

/// Gas into the cap keeps away from the oil zone: the balance closes, the cap grows, and the wells see less gas than from dispersed gas.
#[test]
fn gas_into_the_cap_stays_apart() {
    let with = |to_gas_cap: bool| {
        let mut spec = small(None);
        spec.fluid.bubble_point_psia = Some(3800.0);
        spec.tank.gas_cap_ratio = 0.3;
        let mut gas = injector("GI-1", InjectedFluid::Gas, InjectionControl::VoidageReplacement(0.5));
        gas.to_gas_cap = to_gas_cap;
        gas.effective_fraction = 0.9;
        spec.injectors = vec![gas];
        spec
    };
    let (cap, dispersed) = (run(&with(true)).unwrap(), run(&with(false)).unwrap());
    for f in [&cap, &dispersed] {
        assert!(f.balance_residual <= 1e-8, "residual {:e}", f.balance_residual);
        near(sum(f), 1.0, 1e-6, "drive indices");
        assert!(f.tank.last().unwrap().drive_indices.unwrap().injection > 0.1);
    }
    let month = 11;
    let (a, b) = (&cap.tank[month], &dispersed.tank[month]);
    assert!(a.gas_saturation < b.gas_saturation, "{} and {}", a.gas_saturation, b.gas_saturation);
    assert!(a.gor_scf_stb.unwrap() <= b.gor_scf_stb.unwrap());
    let mut tight = with(true);
    tight.tolerance = Tolerance::Tight;
    let tight = run(&tight).unwrap();
    assert!((end_days(&cap) - end_days(&tight)).abs() <= 0.5, "{} and {}", end_days(&cap), end_days(&tight));
    // All gas that was put in and not taken out is there: nothing of the cap's flows to the wells.
    let row = cap.tank.last().unwrap();
    assert!(row.gas_cum_scf <= with(true).tank.oil_in_place_stb * 620.0, "the wells made more than the oil zone held");
}
