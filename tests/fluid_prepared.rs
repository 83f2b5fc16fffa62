//! The prepared functions of a fluid against the correlations themselves.
#![allow(clippy::unwrap_used)]

use wane::fluid::{
    BlackOil, Correlations, DeadOilCorrelation, FluidSpec, InSitu, LabBasis, LabReport, LabRow, LiveOilCorrelation,
    OilCorrelation, UndersaturatedCorrelation, ZCorrelation,
};
use wane::tubing::{Stream, Tubing, TubingMethod, TubingSection, TubingSpec};

/// Uniform numbers from 0 to 1 (additive recurrence; no test depends on which).
fn uniform(index: u32, stream: u32) -> f64 {
    let step = [0.819_172_513_396_164_4, 0.671_043_606_703_789_2, 0.549_700_477_901_970_6, 0.450_306_949_446_119];
    (0.5 + f64::from(index) * step[stream as usize]).fract()
}

/// Name, prepared, by the correlations.
fn pairs(a: &InSitu, b: &InSitu) -> [(&'static str, f64, f64); 13] {
    [
        ("rs", a.rs_scf_stb, b.rs_scf_stb),
        ("bo", a.bo_rb_stb, b.bo_rb_stb),
        ("oil density", a.oil_density_lb_ft3, b.oil_density_lb_ft3),
        ("mu_o", a.mu_o_cp, b.mu_o_cp),
        ("bg", a.bg_ft3_scf, b.bg_ft3_scf),
        ("gas density", a.gas_density_lb_ft3, b.gas_density_lb_ft3),
        ("mu_g", a.mu_g_cp, b.mu_g_cp),
        ("bw", a.bw_rb_stb, b.bw_rb_stb),
        ("water density", a.water_density_lb_ft3, b.water_density_lb_ft3),
        ("mu_w", a.mu_w_cp, b.mu_w_cp),
        ("sigma oil", a.sigma_oil_gas_dyn_cm, b.sigma_oil_gas_dyn_cm),
        ("sigma water", a.sigma_water_gas_dyn_cm, b.sigma_water_gas_dyn_cm),
        ("z", a.z, b.z),
    ]
}

/// The fluids, and the first of them by every other correlation.
fn fluids() -> Vec<(&'static str, FluidSpec, f64)> {
    let medium = FluidSpec { bubble_point_psia: Some(2650.0), ..FluidSpec::new(34.0, 0.78, 620.0) };
    let chosen = |correlations| FluidSpec { correlations, ..medium.clone() };
    let default = Correlations::default();
    let mut list = own_fluids();
    list.extend(
        OilCorrelation::ALL[1..].iter().map(|&oil| (oil.word(), chosen(Correlations { oil, ..default }), 190.0)),
    );
    list.extend(
        DeadOilCorrelation::ALL[1..]
            .iter()
            .map(|&dead_oil| (dead_oil.word(), chosen(Correlations { dead_oil, ..default }), 190.0)),
    );
    list.push((
        "chew-connally, beal",
        chosen(Correlations {
            live_oil: LiveOilCorrelation::ChewConnally,
            undersaturated: UndersaturatedCorrelation::Beal,
            ..default
        }),
        190.0,
    ));
    list.push(("hall-yarborough", chosen(Correlations { z: ZCorrelation::HallYarborough, ..default }), 190.0));
    let tuned = FluidSpec {
        bubble_point_bo_rb_stb: Some(1.42),
        bubble_point_mu_o_cp: Some(0.4),
        dead_oil_mu_cp: Some(1.8),
        ..medium.clone()
    };
    list.push(("tuned", tuned, 190.0));
    // An invented laboratory's table: psia, scf/STB, rb/STB, cp, z, gas cp.
    let rows = [
        (14.7, Some(0.0), 1.065, 1.7, None, None),
        (300.0, Some(120.0), 1.152, 1.0, Some(0.955), Some(0.0127)),
        (900.0, Some(255.0), 1.222, 0.74, Some(0.888), Some(0.0142)),
        (1600.0, Some(402.0), 1.289, 0.56, Some(0.839), Some(0.0166)),
        (2100.0, Some(512.0), 1.339, 0.48, Some(0.825), Some(0.0187)),
        (2580.0, Some(620.0), 1.388, 0.42, None, None),
        (4000.0, None, 1.359, 0.51, None, None),
    ];
    let rows = rows.map(|(pressure_psia, rs_scf_stb, bo_rb_stb, mu_o, z, mu_g_cp)| LabRow {
        pressure_psia,
        rs_scf_stb,
        bo_rb_stb,
        mu_o_cp: Some(mu_o),
        z,
        bg_rb_scf: None,
        mu_g_cp,
    });
    let lab = Some(LabReport { basis: LabBasis::Flash, rows: rows.to_vec() });
    list.push(("laboratory", FluidSpec { lab, ..FluidSpec::new(34.0, 0.78, 620.0) }, 190.0));
    list
}

fn own_fluids() -> Vec<(&'static str, FluidSpec, f64)> {
    vec![
        (
            "medium",
            FluidSpec { bubble_point_psia: Some(2650.0), salinity_ppm: 35_000.0, ..FluidSpec::new(34.0, 0.78, 620.0) },
            190.0,
        ),
        ("heavy", FluidSpec::new(22.0, 0.68, 180.0), 140.0),
        ("light", FluidSpec::new(42.0, 0.65, 900.0), 230.0),
        ("rich gas", FluidSpec::new(35.0, 1.2, 500.0), 180.0),
        ("sour", FluidSpec { h2s_fraction: 0.05, co2_fraction: 0.08, ..FluidSpec::new(30.0, 0.85, 400.0) }, 170.0),
    ]
}

#[test]
fn prepared_properties_are_those_of_the_correlations() {
    for (fluid_name, spec, tank_degf) in fluids() {
        let fluid = BlackOil::new(&spec, tank_degf).unwrap();
        let exact = fluid.unprepared();
        let mut worst = [("", 0.0_f64, 0.0, 0.0); 13];
        for i in 0..100_000 {
            let p = 14.0 * (10_000.0_f64 / 14.0).powf(uniform(i, 0));
            let t = 40.0 + (tank_degf + 20.0 - 40.0) * uniform(i, 1);
            let gor = if i % 2 == 0 { f64::INFINITY } else { 1500.0 * uniform(i, 2) };
            let (prepared, exact) = (fluid.capped(gor).in_situ(p, t), exact.capped(gor).in_situ(p, t));
            for ((name, a, b), worst) in pairs(&prepared, &exact).into_iter().zip(&mut worst) {
                assert!(a.is_finite());
                let error = (a / b - 1.0).abs();
                if error >= worst.1 {
                    *worst = (name, error, p, t);
                }
            }
        }
        for (name, error, p, t) in worst {
            println!("{fluid_name}: {name} {error:.1e} at {p:.0} psia, {t:.0} degF");
            assert!(error < 2e-7, "{fluid_name}: {name} {error:.1e}");
        }
    }
}

/// Stretches where a prepared function gives way to the correlation: the edges of the grid, and the pressure where the cap binds.
#[test]
fn nothing_jumps_where_the_preparation_ends() {
    for (fluid_name, spec, tank_degf) in fluids() {
        let fluid = BlackOil::new(&spec, tank_degf).unwrap();
        let capped = fluid.capped(spec.solution_gor_scf_stb);
        let mut worst = ("", 0.0_f64, 0.0, 0.0);
        let mut look = |p: (f64, f64), t: (f64, f64)| {
            let (a, b) = (capped.in_situ(p.0, t.0), capped.in_situ(p.1, t.1));
            for (name, a, b) in pairs(&a, &b) {
                let jump = (a / b - 1.0).abs();
                if jump > worst.1 {
                    worst = (name, jump, p.0, t.0);
                }
            }
        };
        // Steps of 1e-9 over the neighbourhoods: a jump shows above the functions' own change (log-log slopes up to 10).
        for i in 0..4_000 {
            let part = uniform(i, 0);
            let (p, t) = (14.0 * (300.0 * uniform(i, 1)).max(1.0), 52.0 + (tank_degf - 50.0) * uniform(i, 2));
            for edge_psia in [14.0, 14.0 * (1.0 + 1e-12)] {
                look((edge_psia * (1.0 - 1e-9), edge_psia * (1.0 + 1e-9)), (t, t));
            }
            // From 52 degF in steps of 4 to at least 10 above the tank.
            for edge_degf in [52.0, 52.0 + 4.0 * ((tank_degf + 10.0 - 52.0) / 4.0).ceil()] {
                look((p, p), (edge_degf * (1.0 - 1e-9), edge_degf * (1.0 + 1e-9)));
            }
            let bubble_point_psia = fluid.bubble_point_at_psia(spec.solution_gor_scf_stb, t);
            let near_psia = bubble_point_psia * (1.0 + 1e-8 * (part - 0.5));
            look((near_psia * (1.0 - 1e-9), near_psia * (1.0 + 1e-9)), (t, t));
        }
        println!("{fluid_name}: {worst:?}");
        assert!(worst.1 < 3e-7, "{fluid_name}: {worst:?}");
    }
}

#[test]
fn flowing_pressures_are_those_of_the_correlations() {
    for (fluid_name, spec, tank_degf) in fluids() {
        let fluid = BlackOil::new(&spec, tank_degf).unwrap();
        let exact = fluid.unprepared();
        for method in TubingMethod::ALL {
            let (mut worst, mut sum, mut count, mut above) = (0.0_f64, 0.0, 0, 0);
            for i in 0..1_000 {
                let section = TubingSection {
                    to_md_ft: f64::INFINITY,
                    diameter_in: 1.995 + 1.5 * uniform(i, 0),
                    roughness_in: 0.0006,
                    inner_pipe_in: 0.0,
                };
                let depth_ft = 3_000.0 + 7_000.0 * uniform(i, 1);
                let tubing = TubingSpec {
                    method,
                    sections: vec![section],
                    survey: vec![(0.0, 0.0), (depth_ft, 0.9 * depth_ft)],
                    slip_factor: 1.0,
                    temperatures: Vec::new(),
                    heat: None,
                    restrictions: Vec::new(),
                    wellhead_temperature_degf: 45.0 + 75.0 * uniform(i, 2),
                };
                let tubing = Tubing::new(&tubing, None, tank_degf, 0.02).unwrap();
                let stream = Stream {
                    liquid_rate_stb_d: 30.0 * 100.0_f64.powf(uniform(i, 3)),
                    water_cut: 0.8 * uniform(i, 0),
                    gor_scf_stb: 100.0 * 50.0_f64.powf(uniform(i, 1)),
                };
                let wellhead_psia = 60.0 + 500.0 * uniform(i, 3);
                let at = |fluid| tubing.flowing_pressure(fluid, &stream, wellhead_psia).pressure_psia;
                let error = (at(&fluid) - at(&exact)).abs();
                assert!(error.is_finite());
                (worst, sum, count) = (worst.max(error), sum + error, count + 1);
                above += u32::from(error > 0.001);
            }
            let mean = sum / f64::from(count);
            println!("{fluid_name} {}: worst {worst:.1e} psi, mean {mean:.1e}, {above} above 0.001", method.name());
            // The bar is 0.01 psi; nearly all are ten times better.
            let rare = f64::from(above) <= 0.01 * f64::from(count);
            assert!(
                worst < 0.01 && rare && mean < 1e-5,
                "{fluid_name} {}: worst {worst} psi, mean {mean}",
                method.name()
            );
        }
    }
}
