//! The prepared functions of a fluid against the correlations themselves.
#![allow(clippy::unwrap_used)]

use wane::fluid::{BlackOil, FluidSpec, InSitu};

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

fn fluids() -> Vec<(&'static str, FluidSpec, f64)> {
    vec![
        ("medium", FluidSpec { bubble_point_psia: Some(2650.0), salinity_ppm: 35_000.0, ..FluidSpec::new(34.0, 0.78, 620.0) }, 190.0),
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
        let mut worst = [("", 0.0_f64, 0.0, 0.0); 13];
        for i in 0..100_000 {
            let p = 14.0 * (10_000.0_f64 / 14.0).powf(uniform(i, 0));
            let t = 40.0 + (tank_degf + 20.0 - 40.0) * uniform(i, 1);
            let gor = if i % 2 == 0 { f64::INFINITY } else { 1500.0 * uniform(i, 2) };
            let (prepared, exact) = (fluid.capped(gor).in_situ(p, t), fluid.capped_by_correlations(gor).in_situ(p, t));
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
            assert!(error < 1e-6);
        }
    }
}
