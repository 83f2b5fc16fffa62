//! Wellhead chokes against published numbers and identities.
//!
//! `tests/data/flow.json` says of each case where its numbers come from: Gilbert's example is recalled from a handbook, the constants of the
//! other critical relations from Guo, Lyons and Ghalambor (2007), the nozzle ratios are those of gas dynamics; no worked example of the
//! two-phase relation of Sachdeva et al. was at hand, so that its limits and an identity guard it.
#![allow(clippy::unwrap_used)]

mod common;

use common::{expect_flow, near};
use proptest::prelude::*;
use wane::fluid::{BlackOil, FluidSpec};
use wane::tubing::choke::critical;
use wane::tubing::choke::sachdeva::{Upstream, polytropic_exponent};
use wane::tubing::{Choke, ChokeMethod, ChokeSpec, ChokeTest, Discharge, Stream};

/// Highest pressure of the fluid model, psia.
const FLUID_ENDS_PSIA: f64 = 10_000.0;

fn oil() -> BlackOil {
    BlackOil::new(&FluidSpec { bubble_point_psia: Some(2650.0), ..FluidSpec::new(34.0, 0.78, 620.0) }, 190.0).unwrap()
}

fn choke(method: ChokeMethod, size_in: f64, discharge: f64) -> Choke {
    Choke::new(&ChokeSpec { method, size_in, discharge: Discharge::Given(discharge) }, &oil(), |_| 110.0)
}

fn stream(rate: f64, gor: f64, cut: f64) -> Stream {
    Stream { liquid_rate_stb_d: rate, water_cut: cut, gor_scf_stb: gor }
}

#[test]
fn critical_relations_give_the_published_pressures() {
    use ChokeMethod::{Achong, Baxendell, Gilbert, Pilehvari, Ros};
    let upstream =
        |method: ChokeMethod| critical::upstream_psia(critical::constants(method).unwrap(), 400.0, 800.0, 12.0 / 64.0);
    // C01 is the published example; C02a to d are recomputed from the published constants.
    for (id, method) in [("C01", Gilbert), ("C02a", Ros), ("C02b", Baxendell), ("C02c", Achong), ("C02d", Pilehvari)] {
        expect_flow(id, "pwh psia", upstream(method));
    }
    let (c, m, n) = critical::constants(Gilbert).unwrap();
    expect_flow("C03", "q STB/d", 800.0 * 24_f64.powf(n) / (c * 600_f64.powf(m)));
}

#[test]
fn all_gas_gives_the_nozzle_ratio() {
    for (id, k) in [("C04a", 1.25), ("C04b", 1.3), ("C04c", 1.4)] {
        let gas = Upstream { gas_fraction: 1.0, liquid_density_lb_ft3: 48.0, gas_volume_ft3_lb: 0.27, k, n: k };
        expect_flow(id, "yc", gas.critical_ratio());
        near(gas.critical_ratio(), (2.0 / (k + 1.0)).powf(k / (k - 1.0)), 1e-12, "isentropic nozzle");
    }
    let nearly =
        Upstream { gas_fraction: 0.999_999, liquid_density_lb_ft3: 48.0, gas_volume_ft3_lb: 0.27, k: 1.3, n: 1.3 };
    expect_flow("C07", "yc", nearly.critical_ratio());
}

#[test]
fn sachdeva_follows_its_equations() {
    // C08a, C08b: recomputed from the equations of the paper, so a second implementation and no more.
    let (x, cp, cv, liquid) = (0.15, 0.55, 0.43, 0.50);
    let n = polytropic_exponent(x, cp, cv, liquid);
    expect_flow("C08a", "n", n);
    let gas_density = 2.6988 * 0.7 * 1000.0 / (0.88 * 580.0);
    let mixture =
        Upstream { gas_fraction: x, liquid_density_lb_ft3: 48.0, gas_volume_ft3_lb: 1.0 / gas_density, k: cp / cv, n };
    expect_flow("C08a", "yc", mixture.critical_ratio());
    let area_ft2 = 0.25 * std::f64::consts::PI * (0.5_f64 / 12.0).powi(2);
    let mass = |p2: f64| {
        let (flux, critical) = mixture.flux_towards_lb_ft2_s(1000.0, p2);
        (0.75 * area_ft2 * flux, critical)
    };
    let (low, high) = (mass(200.0), mass(800.0));
    assert!(low.1 && !high.1);
    expect_flow("C08a", "w lbm/s", low.0);
    expect_flow("C08b", "w lbm/s", high.0);
}

#[test]
fn with_n_equal_to_k_the_critical_ratio_is_that_of_the_largest_flux() {
    // An identity of the equations (C08c): strong evidence that both are written down rightly.
    for x in [0.02, 0.15, 0.5, 0.9] {
        let m = Upstream { gas_fraction: x, liquid_density_lb_ft3: 48.0, gas_volume_ft3_lb: 0.27, k: 1.279, n: 1.279 };
        let best = (1..200_000)
            .map(|i| f64::from(i) / 200_000.0)
            .max_by(|a, b| m.flux_lb_ft2_s(1000.0, *a).total_cmp(&m.flux_lb_ft2_s(1000.0, *b)));
        assert!((m.critical_ratio() - best.unwrap()).abs() < 1e-5, "x {x}: {} {best:?}", m.critical_ratio());
    }
}

#[test]
fn without_gas_the_flux_is_that_of_an_orifice() {
    // Torricelli and Bernoulli: G = sqrt(2 gc rho dp), dp in lbf/ft2.
    let m = Upstream { gas_fraction: 0.0, liquid_density_lb_ft3: 50.0, gas_volume_ft3_lb: 0.27, k: 1.27, n: 1.0 };
    let (flux, critical) = m.flux_towards_lb_ft2_s(500.0, 300.0);
    assert!(!critical);
    near(flux, (2.0 * 32.174_05 * 50.0 * 200.0 * 144.0_f64).sqrt(), 1e-12, "orifice");
}

#[test]
fn tests_of_a_choke_give_back_its_coefficient() {
    let fluid = oil();
    for method in ChokeMethod::ALL {
        let truth = choke(method, 0.5, 0.77);
        let tests: Vec<ChokeTest> = [(600.0, 620.0, 0.0), (1500.0, 900.0, 0.3), (2500.0, 700.0, 0.1)]
            .into_iter()
            .map(|(rate, gor, cut)| {
                let s = stream(rate, gor, cut);
                let wellhead_psia = truth.flow(&fluid, &s, 120.0, 110.0).upstream_psia;
                ChokeTest {
                    on: None,
                    size_in: 0.5,
                    wellhead_psia,
                    line_psia: 120.0,
                    rate_stb_d: rate,
                    gor_scf_stb: gor,
                    water_cut: cut,
                }
            })
            .collect();
        let fitted =
            Choke::new(&ChokeSpec { method, size_in: 0.3, discharge: Discharge::Tests(tests) }, &fluid, |_| 110.0);
        near(fitted.discharge(), 0.77, 1e-8, method.name());
        assert!(fitted.worst_miss() < 1e-8 && fitted.size_in() == 0.3);
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 300, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn chokes_behave(
        method in prop::sample::select(&ChokeMethod::ALL[..]),
        size in 0.1..2.0_f64, rate in 5.0..8000.0_f64, gor in 0.0..8000.0_f64, cut in 0.0..1.0_f64, line in 20.0..1500.0_f64,
    ) {
        let (fluid, c, s) = (oil(), choke(method, size, 0.85), stream(rate, gor, cut));
        let here = c.flow(&fluid, &s, line, 110.0);
        prop_assert!(here.upstream_psia.is_finite() && here.upstream_psia >= line);
        // Beyond the fluid's range its properties are held, and a choke so small is none.
        prop_assume!(here.upstream_psia < FLUID_ENDS_PSIA);
        // More rate, a smaller opening or a higher line pressure never ask for less.
        let more = c.flow(&fluid, &stream(1.05 * rate, gor, cut), line, 110.0);
        let smaller = c.with_size(0.95 * size).flow(&fluid, &s, line, 110.0);
        let against = c.flow(&fluid, &s, 1.05 * line, 110.0);
        prop_assert!(more.upstream_psia >= here.upstream_psia && smaller.upstream_psia >= here.upstream_psia);
        prop_assert!(against.upstream_psia >= here.upstream_psia - 1e-6 * line);
        // In critical flow the line does not reach back.
        if here.critical && against.critical {
            near(against.upstream_psia, here.upstream_psia, 1e-9, "critical");
        }
        // The opening that holds a stream back to a pressure is the one that asks for it.
        if here.upstream_psia > 1.001 * line {
            near(c.size_for(&fluid, &s, here.upstream_psia, line, 110.0).unwrap(), size, 1e-6, "size");
        }
        prop_assert_eq!(c.flow(&fluid, &stream(0.0, gor, cut), line, 110.0).upstream_psia, line);
    }

    #[test]
    fn sachdeva_has_no_jump_where_the_flow_turns_critical(
        size in 0.1..1.5_f64, rate in 5.0..8000.0_f64, gor in 50.0..8000.0_f64, cut in 0.0..0.98_f64,
    ) {
        let (fluid, c, s) = (oil(), choke(ChokeMethod::Sachdeva, size, 0.85), stream(rate, gor, cut));
        let up = |line: f64| c.flow(&fluid, &s, line, 110.0);
        let (mut low, mut high) = (15.0, 5000.0);
        prop_assume!(up(low).critical && !up(high).critical);
        for _ in 0..60 {
            let middle = 0.5 * (low + high);
            if up(middle).critical { low = middle } else { high = middle }
        }
        prop_assume!(up(low).upstream_psia < FLUID_ENDS_PSIA);
        prop_assert!((up(low).upstream_psia - up(high).upstream_psia).abs() < 1e-5 * high);
    }
}
