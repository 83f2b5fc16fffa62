//! Aquifer laws against published tables and examples, and against superposition of the exact solution.
//!
//! The examples and tables are those of `tests/data/material_balance.json`; each says there where it was published and whether it was
//! retrieved or remembered.
#![allow(clippy::unwrap_used)]

mod common;

use common::aquifer::{superposed, wed};
use common::{case, near, numbers};
use serde_json::Value;
use wane::tank::aquifer::{
    Aquifer, AquiferRock, AquiferSpec, Drive, LinearAquifer, PressureFunction, RadialAquifer, SHORTEST_DAYS,
};

fn number(value: &Value, key: &str) -> f64 {
    value[key].as_f64().unwrap_or_else(|| panic!("no {key}"))
}

fn tolerance(case: &Value) -> f64 {
    number(&case["tolerance"], "rel")
}

/// The aquifer of Dake's exercises 9.2 and 9.3.
fn dake_ring(inputs: &Value) -> RadialAquifer {
    RadialAquifer {
        rock: AquiferRock {
            porosity: number(inputs, "phi"),
            permeability_md: number(inputs, "k_md"),
            thickness_ft: number(inputs, "h_ft"),
            viscosity_cp: number(inputs, "mu_w_cp"),
            compressibility_1_psi: number(inputs, "cw_1_psi") + number(inputs, "cf_1_psi"),
        },
        inner_radius_ft: number(inputs, "ro_ft"),
        angle_deg: number(inputs, "angle_deg"),
    }
}

fn pressure_of(drive: &Drive, pressure_psia: f64) -> f64 {
    drive.conductance_rb_d_psi * (drive.pressure_psia - pressure_psia)
}

/// Integrates an aquifer against a history of pressure over days by Runge and Kutta's rule; influx at each of `ends`.
fn integrate(aquifer: &Aquifer, pressure: impl Fn(f64) -> f64, ends: &[f64], step_days: f64) -> Vec<f64> {
    let slope = |t: f64, we: f64| pressure_of(&aquifer.drive(t, we).unwrap(), pressure(t));
    let (mut t, mut we) = (0.0, 0.0);
    ends.iter()
        .map(|&end| {
            while t < end - 1e-9 {
                let h = step_days.min(end - t);
                let k1 = slope(t, we);
                let k2 = slope(t + 0.5 * h, we + 0.5 * h * k1);
                let k3 = slope(t + 0.5 * h, we + 0.5 * h * k2);
                let k4 = slope(t + h, we + h * k3);
                we += h / 6.0 * (k1 + 2.0 * k2 + 2.0 * k3 + k4);
                t += h;
            }
            we
        })
        .collect()
}

#[test]
fn the_reference_solution_meets_the_published_tables() {
    for (id, ratio) in [
        ("veh_infinite_table", None),
        ("veh_infinite_exact", None),
        ("veh_finite_reD5", Some(5.0)),
        ("veh_finite_reD10", Some(10.0)),
    ] {
        let c = case("material_balance.json", id);
        let within = if id == "veh_infinite_exact" { 1e-4 } else { tolerance(&c) };
        for (time, expected) in numbers(&c["inputs"]["tD"]).iter().zip(numbers(&c["expected"]["WeD"])) {
            near(wed(*time, ratio), expected, within, &format!("{id} at tD {time}"));
        }
    }
    // All that a sealed ring can give: (reD^2 - 1)/2.
    near(wed(4000.0, Some(5.0)), 12.0, 1e-6, "limit of reD 5");
}

#[test]
fn the_pressure_function_meets_the_published_table_and_its_limits() {
    let c = case("material_balance.json", "pD_infinite_table");
    let function = PressureFunction::new();
    for (time, expected) in numbers(&c["inputs"]["tD"]).iter().zip(numbers(&c["expected"]["pD"])) {
        near(function.at(*time).0, expected, tolerance(&c), &format!("pD at tD {time}"));
    }
    // Linear flow early, the line source late; and between them no jump in value or slope at the ends of the table.
    near(function.at(2e-9).0, 2.0 * (2e-9f64 / std::f64::consts::PI).sqrt(), 1e-4, "early");
    near(function.at(1e-4).0, function.at(1.000001e-4).0, 5e-5, "from early times into the table");
    near(function.at(1e-4).1, function.at(1.000001e-4).1, 2e-4, "slope from early times into the table");
    near(function.at(0.999999e6).0, function.at(1.000001e6).0, 1e-5, "from the table to late times");
    near(function.at(0.999999e6).1, function.at(1.000001e6).1, 1e-3, "slope from the table to late times");
    // The slope is that of the value, and the conductance of Carter and Tracy stays positive.
    for i in 1..200 {
        let time = 1e-4 * 10f64.powf(f64::from(i) * 0.0497);
        let (value, slope) = function.at(time);
        let measured = (function.at(1.0005 * time).0 - function.at(0.9995 * time).0) / (1e-3 * time);
        near(slope, measured, 1e-4, &format!("pD' at tD {time}"));
        assert!(value > time * slope, "conductance at tD {time}");
    }
}

#[test]
fn examples_of_superposition_are_met() {
    let c = case("material_balance.json", "craft_veh_constant_pressure");
    let i = &c["inputs"];
    let ring = RadialAquifer {
        rock: AquiferRock {
            porosity: number(i, "phi"),
            permeability_md: number(i, "k_md"),
            thickness_ft: number(i, "h_ft"),
            viscosity_cp: number(i, "mu_cp"),
            compressibility_1_psi: number(i, "ct_1_psi"),
        },
        inner_radius_ft: number(i, "R_ft"),
        angle_deg: number(i, "angle_deg"),
    };
    near(ring.constant_rb_psi(), number(&c["expected"], "B_bbl_psi"), 2e-3, "aquifer constant");
    near(100.0 * ring.time_per_day(), number(&c["expected"], "tD_100"), 2e-3, "dimensionless time");
    for (days, expected) in numbers(&i["days"]).iter().zip(numbers(&c["expected"]["We_bbl"])) {
        let found = 10.0 * ring.constant_rb_psi() * wed(days * ring.time_per_day(), None);
        near(found, expected, tolerance(&c), &format!("influx at {days} days"));
    }
    let two = case("material_balance.json", "craft_veh_two_steps");
    let at = |days: f64| ring.constant_rb_psi() * wed(days * ring.time_per_day(), None);
    near(10.0 * at(400.0) + 20.0 * at(300.0), number(&two["expected"], "We_bbl"), tolerance(&two), "two steps");

    let c = case("material_balance.json", "ahmed_veh_infinite");
    let i = &c["inputs"];
    let ring = RadialAquifer {
        rock: AquiferRock {
            porosity: number(i, "phi"),
            permeability_md: number(i, "k_md"),
            thickness_ft: number(i, "h_ft"),
            viscosity_cp: number(i, "mu_w_cp"),
            compressibility_1_psi: number(i, "ct_1_psi"),
        },
        inner_radius_ft: number(i, "re_ft"),
        angle_deg: 360.0,
    };
    near(ring.time_per_day(), number(&c["expected"], "tD_per_day"), tolerance(&c), "tD per day");
    let expected = numbers(&c["expected"]["WeD"]).into_iter().zip(numbers(&c["expected"]["We_bbl"]));
    for (years, (dimensionless, volume)) in numbers(&i["years"]).iter().zip(expected) {
        let found = wed(365.0 * years * ring.time_per_day(), None);
        near(found, dimensionless, tolerance(&c), "WeD");
        near(10.0 * ring.constant_rb_psi() * found, volume, tolerance(&c), "influx");
    }
}

#[test]
fn dakes_superposed_influx_gives_one_oil_in_place() {
    let c = case("material_balance.json", "dake_9_2_veh_reD5");
    let ring = dake_ring(&c["inputs"]);
    near(ring.constant_rb_psi(), number(&c["expected"], "U_bbl_psi"), 1e-3, "U");
    near(365.0 * ring.time_per_day(), number(&c["inputs"], "tD_per_year"), 1e-3, "tD in a year");
    let pressures = numbers(&c["inputs"]["p_boundary_year_ends_psia"]);
    let years: Vec<f64> = (0..pressures.len()).map(|i| i as f64).collect();
    let found = superposed(ring.constant_rb_psi(), &years, &pressures, 365.0 * ring.time_per_day(), Some(5.0));
    for (we, expected) in found.iter().zip(numbers(&c["expected"]["We_MMrb"])) {
        near(*we, 1e6 * expected, tolerance(&c), "We");
    }
    // The straight line of Havlena and Odeh: F/Eo - We/Eo is the same oil in place in every year.
    let line = case("material_balance.json", "dake_9_2_straight_line");
    let (f, eo) = (numbers(&line["inputs"]["F_MMrb"]), numbers(&line["inputs"]["Eo_rb_stb"]));
    for (i, expected) in numbers(&line["expected"]["N_MMstb"]).into_iter().enumerate() {
        near((f[i] - 1e-6 * found[i]) / eo[i], expected, 5e-3, &format!("N after year {}", i + 1));
    }
}

#[test]
fn fetkovich_meets_dakes_exercise() {
    let c = case("material_balance.json", "dake_9_3_fetkovich");
    let ring = dake_ring(&c["inputs"]);
    let pressures = numbers(&c["inputs"]["p_boundary_year_ends_psia"]);
    let (ratio, initial) = (number(&c["inputs"], "reD"), pressures[0]);
    let spec = AquiferSpec::Fetkovich {
        water_rb: ring.water_rb(ratio),
        compressibility_1_psi: ring.rock.compressibility_1_psi,
        productivity_rb_d_psi: ring.productivity_rb_d_psi(ratio),
    };
    let encroachable = ring.water_rb(ratio) * ring.rock.compressibility_1_psi * initial;
    near(encroachable, 1e6 * number(&c["expected"], "Wei_MMrb"), tolerance(&c), "encroachable water");
    near(ring.productivity_rb_d_psi(ratio), number(&c["expected"], "J_b_d_psi"), tolerance(&c), "J");
    let aquifer = Aquifer::new(spec, initial);
    // The exercise holds the mean pressure of each year; its formula is the exact answer to that.
    let mean = |t: f64| {
        let year = ((t / 365.0 - 1e-9).max(0.0) as usize).min(9);
        0.5 * (pressures[year] + pressures[year + 1])
    };
    let ends: Vec<f64> = (1..=10).map(|year| 365.0 * f64::from(year)).collect();
    let found = integrate(&aquifer, mean, &ends, 1.0);
    let expected = numbers(&c["expected"]["We_MMrb"]).into_iter().zip(numbers(&c["expected"]["p_aquifer_psia"]));
    for (we, (volume, pressure)) in found.iter().zip(expected) {
        near(*we, 1e6 * volume, tolerance(&c), "We");
        near(aquifer.pressure_psia(*we, 0.0).unwrap(), pressure, 1e-3, "aquifer pressure");
    }
}

#[test]
fn carter_tracy_stays_near_the_exact_superposition() {
    let c = case("material_balance.json", "carter_tracy_vs_veh");
    let ring = dake_ring(&c["inputs"]);
    let pressures = numbers(&c["inputs"]["p_boundary_year_ends_psia"]);
    let history = |t: f64| {
        let year = ((t / 365.0) as usize).min(9);
        pressures[year] + (pressures[year + 1] - pressures[year]) * (t / 365.0 - year as f64)
    };
    let times: Vec<f64> = (0..=240).map(|i| 365.0 * f64::from(i) / 24.0).collect();
    let fine: Vec<f64> = times.iter().map(|t| history(*t)).collect();
    let exact = superposed(ring.constant_rb_psi(), &times, &fine, ring.time_per_day(), None);
    let spec = AquiferSpec::CarterTracy {
        constant_rb_psi: ring.constant_rb_psi(),
        time_per_day: ring.time_per_day(),
        age_days: 0.0,
    };
    let aquifer = Aquifer::new(spec, pressures[0]);
    let ends: Vec<f64> = (1..=10).map(|year| 365.0 * f64::from(year)).collect();
    let found = integrate(&aquifer, history, &ends, 1.0);
    for (year, expected) in numbers(&c["expected"]["We_MMrb"]).into_iter().enumerate() {
        // The reference superposes the same steps with the same function.
        near(exact[24 * (year + 1) - 1], 1e6 * expected, 2e-3, &format!("superposition, year {}", year + 1));
        near(found[year], 1e6 * expected, tolerance(&c), &format!("Carter-Tracy, year {}", year + 1));
        assert!(found[year] < 1e6 * expected, "it lags behind the superposition");
        println!("Carter-Tracy after year {}: {:+.2} %", year + 1, 100.0 * (found[year] / 1e6 / expected - 1.0));
    }
    // Finer steps change nothing: the equation, not the integration, makes the difference.
    let finer = integrate(&aquifer, history, &ends, 0.1);
    near(found[0], finer[0], 1e-4, "first year by finer steps");
    near(found[9], finer[9], 1e-6, "last year by finer steps");

    // The published recursion by yearly steps, with this program's pD and pD' in it.
    let yearly = case("material_balance.json", "carter_tracy_annual");
    let function = PressureFunction::new();
    let step = 365.0 * ring.time_per_day();
    let mut we = 0.0;
    for (n, expected) in numbers(&yearly["expected"]["We_MMrb"]).into_iter().enumerate() {
        let (before, now) = (step * n as f64, step * (n + 1) as f64);
        let (value, slope) = function.at(now);
        let fall = pressures[0] - pressures[n + 1];
        we += step * (ring.constant_rb_psi() * fall - we * slope) / (value - before * slope);
        near(we, 1e6 * expected, tolerance(&yearly), &format!("recursion, year {}", n + 1));
    }
}

/// Under one constant drop of pressure a Carter-Tracy aquifer and the exact solution differ by what is known of the method: some per cent.
#[test]
fn carter_tracy_under_one_step_of_pressure() {
    let aquifer =
        Aquifer::new(AquiferSpec::CarterTracy { constant_rb_psi: 1.0, time_per_day: 1.0, age_days: 0.0 }, 1000.0);
    let ends = [1.0, 10.0, 100.0, 1000.0];
    for (found, end) in integrate(&aquifer, |_| 900.0, &ends, 2e-3).iter().zip(ends) {
        let exact = 100.0 * wed(end, None);
        assert!((found / exact - 1.0).abs() < 0.09, "tD {end}: {found} against {exact}");
        println!("Carter-Tracy at tD {end}: {:+.2} %", 100.0 * (found / exact - 1.0));
    }
}

#[test]
fn pot_and_steady_state_meet_their_examples() {
    let c = case("material_balance.json", "ahmed_pot_aquifer");
    let i = &c["inputs"];
    let (inner, outer) = (number(i, "re_ft"), number(i, "ra_ft"));
    let rock = AquiferRock {
        porosity: number(i, "phi"),
        permeability_md: 100.0,
        thickness_ft: number(i, "h_ft"),
        viscosity_cp: 0.5,
        compressibility_1_psi: number(i, "cw_plus_cf_1_psi"),
    };
    let whole = RadialAquifer { rock, inner_radius_ft: inner, angle_deg: 360.0 };
    near(whole.water_rb(outer / inner), 1e6 * number(&c["expected"], "Wi_MMbbl"), tolerance(&c), "water of the ring");
    let part = RadialAquifer { angle_deg: number(i, "angle_deg"), ..whole };
    let pot = Aquifer::new(
        AquiferSpec::Pot { water_rb: part.water_rb(outer / inner), compressibility_1_psi: rock.compressibility_1_psi },
        3000.0,
    );
    near(pot.pot_rb(3000.0 - number(i, "dp_psi")), number(&c["expected"], "We_bbl"), tolerance(&c), "influx");
    assert_eq!(pot.pot_rb(3000.0), 0.0);
    assert!(pot.drive(10.0, 5.0).is_none());

    let c = case("material_balance.json", "ahmed_schilthuis_influx");
    let strength = number(&c["expected"], "C_bbl_d_psi");
    let steady = Aquifer::new(AquiferSpec::Schilthuis { strength_rb_d_psi: strength }, number(&c["inputs"], "pi_psi"));
    let drive = steady.drive(700.0, 1e7).unwrap();
    near(
        pressure_of(&drive, number(&c["inputs"], "p_psi")),
        number(&c["expected"], "ew_rb_d"),
        tolerance(&c),
        "influx",
    );

    let c = case("material_balance.json", "ahmed_schilthuis_cumulative");
    let (p, t) = (numbers(&c["inputs"]["p_psi"]), numbers(&c["inputs"]["t_days"]));
    let steady = Aquifer::new(AquiferSpec::Schilthuis { strength_rb_d_psi: number(&c["inputs"], "C_bbl_d_psi") }, p[0]);
    let history = |day: f64| {
        let i = ((day / 100.0) as usize).min(3);
        p[i] + (p[i + 1] - p[i]) * (day - t[i]) / 100.0
    };
    for (found, expected) in integrate(&steady, history, &t[1..], 1.0).iter().zip(numbers(&c["expected"]["We_bbl"])) {
        near(*found, expected, tolerance(&c), "Schilthuis influx");
    }
}

/// Sealed linear aquifer of length L, width w and thickness h: after a constant drop of pressure the flow's slowest part decays as
/// `exp(-pi^2/4*eta*t/L^2)` (Carslaw and Jaeger 1959), and at a constant rate the mean pressure stands `q*mu*L/(3*k*w*h*0.00112712)` above the face.
#[test]
fn a_linear_aquifer_has_the_pseudo_steady_resistance_of_a_slab() {
    let rock = AquiferRock {
        porosity: 0.25,
        permeability_md: 150.0,
        thickness_ft: 60.0,
        viscosity_cp: 0.5,
        compressibility_1_psi: 7e-6,
    };
    let slab = LinearAquifer { rock, width_ft: 4000.0, length_ft: 9000.0 };
    near(slab.water_rb(), 4000.0 * 9000.0 * 60.0 * 0.25 / 5.614583, 1e-12, "volume");
    // Finite volumes from the face to the sealed end, run at a constant rate until the profile only sinks.
    const CELLS: usize = 200;
    let dx = slab.length_ft / CELLS as f64;
    let conduct = 0.00112712 * rock.permeability_md * slab.width_ft * rock.thickness_ft / (rock.viscosity_cp * dx);
    let store = slab.water_rb() / CELLS as f64 * rock.compressibility_1_psi;
    let rate = 5000.0;
    let mut p = [0.0; CELLS];
    let dt = 0.2 * store / conduct;
    for _ in 0..600_000 {
        let mut flow = [0.0; CELLS + 1];
        flow[0] = rate;
        for i in 1..CELLS {
            flow[i] = conduct * (p[i] - p[i - 1]);
        }
        for i in 0..CELLS {
            p[i] += dt * (flow[i + 1] - flow[i]) / store;
        }
    }
    let face = p[0] - rate / (2.0 * conduct);
    let mean = p.iter().sum::<f64>() / CELLS as f64;
    near(rate / (mean - face), slab.productivity_rb_d_psi(), 2e-3, "J of the slab");
    // The handbooks' rounded constant.
    near(
        slab.productivity_rb_d_psi(),
        0.003381 * rock.permeability_md * slab.width_ft * rock.thickness_ft / (rock.viscosity_cp * slab.length_ft),
        1e-3,
        "J by the handbook",
    );
}

/// Two stores that exchange faster than is followed: in steady decline the held influx is that of the full conductance.
#[test]
fn a_held_conductance_follows_slow_changes() {
    let (store, tank, withdrawal) = (900.0, 400.0, 3000.0);
    let spec = |j: f64| AquiferSpec::Fetkovich {
        water_rb: store / 7e-6,
        compressibility_1_psi: 7e-6,
        productivity_rb_d_psi: j,
    };
    let strong = Aquifer::new(spec(1e6), 4000.0);
    // Exact: both fall at q/(A + T); the tank stands ew/J below the aquifer.
    let influx = withdrawal * store / (store + tank);
    let drive = strong.drive(0.0, 5000.0).unwrap();
    let p = drive.pressure_psia - influx / 1e6;
    near(drive.influx_rb_d(p, tank, withdrawal), influx, 1e-12, "influx in steady decline");
    // Away from it the two come to rest within the shortest time, not faster.
    let off = drive.influx_rb_d(p - 1.0, tank, withdrawal) - influx;
    near(off * (1.0 / store + 1.0 / tank), 1.0 / SHORTEST_DAYS, 1e-9, "rate of return");
    // A weak aquifer is left alone.
    let weak = Aquifer::new(spec(20.0), 4000.0).drive(0.0, 5000.0).unwrap();
    near(weak.influx_rb_d(3500.0, tank, withdrawal), pressure_of(&weak, 3500.0), 1e-12, "a weak aquifer");
}
