//! The fluid as a whole: tuning, continuity, limits, faults.
#![allow(clippy::unwrap_used)]

use proptest::prelude::*;
use wane::fluid::{BlackOil, FluidSpec, InSitu, ReservoirFluid};
use wane::units::constants::FT3_PER_BBL;

fn osprey() -> FluidSpec {
    FluidSpec { bubble_point_psia: Some(2650.0), salinity_ppm: 35_000.0, ..FluidSpec::new(34.0, 0.78, 620.0) }
}

fn numbers(s: &InSitu) -> [(&'static str, f64); 13] {
    [
        ("rs", s.rs_scf_stb),
        ("bo", s.bo_rb_stb),
        ("oil density", s.oil_density_lb_ft3),
        ("mu_o", s.mu_o_cp),
        ("bg", s.bg_ft3_scf),
        ("gas density", s.gas_density_lb_ft3),
        ("mu_g", s.mu_g_cp),
        ("bw", s.bw_rb_stb),
        ("water density", s.water_density_lb_ft3),
        ("mu_w", s.mu_w_cp),
        ("oil tension", s.sigma_oil_gas_dyn_cm),
        ("water tension", s.sigma_water_gas_dyn_cm),
        ("z", s.z),
    ]
}

/// The largest relative change between two states and its property.
fn change(a: &InSitu, b: &InSitu) -> (f64, &'static str) {
    let mut worst = (0.0, "none");
    for ((name, x), (_, y)) in numbers(a).into_iter().zip(numbers(b)) {
        let relative = (x - y).abs() / x.abs().max(1e-3);
        if relative > worst.0 {
            worst = (relative, name);
        }
    }
    worst
}

#[test]
fn tuning_passes_through_the_measured_bubble_point() {
    let fluid = BlackOil::new(&osprey(), 190.0).unwrap();
    let rs = fluid.rs_saturated(2650.0);
    assert!((rs - 620.0).abs() < 1e-9, "Rs at the measured bubble point {rs}");
    let pb = fluid.bubble_point_psia(620.0);
    assert!((pb - 2650.0).abs() < 1e-9, "bubble point {pb}");
    // Standing's own bubble point by hand: 18.2 [(620/0.78)^0.83 10^(0.00091*190 - 0.0125*34) - 1.4].
    let standing = 18.2 * ((620.0_f64 / 0.78).powf(0.83) * 10f64.powf(0.00091 * 190.0 - 0.0125 * 34.0) - 1.4);
    assert!((fluid.tuning_factor() - standing / 2650.0).abs() < 1e-12, "f {}", fluid.tuning_factor());
}

#[test]
fn without_a_measured_bubble_point_the_correlations_own_serves() {
    let spec = FluidSpec { bubble_point_psia: None, ..osprey() };
    let fluid = BlackOil::new(&spec, 190.0).unwrap();
    assert!((fluid.tuning_factor() - 1.0).abs() < 1e-15);
    assert!((fluid.rs_saturated(fluid.initial_bubble_point_psia()) - 620.0).abs() < 1e-9);
}

#[test]
fn the_table_is_saturated_below_and_undersaturated_above_the_bubble_point() {
    let fluid = BlackOil::new(&osprey(), 190.0).unwrap();
    let below = fluid.table_row(1500.0);
    assert!((below.rs_scf_stb - fluid.rs_saturated(1500.0)).abs() < 1e-9);
    let (at, above) = (fluid.table_row(2650.0), fluid.table_row(4000.0));
    assert!((above.rs_scf_stb - 620.0).abs() < 1e-9);
    // Vasquez-Beggs by hand: A = 1e-5 (-1433 + 5*620 + 17.2*190 - 1180*0.78 + 12.61*34), Bo = Bob (pb/p)^A.
    let a = 1e-5 * (-1433.0 + 3100.0 + 3268.0 - 920.4 + 428.74);
    let bo = at.bo_rb_stb * (2650.0_f64 / 4000.0).powf(a);
    assert!((above.bo_rb_stb / bo - 1.0).abs() < 1e-12, "{} against {bo}", above.bo_rb_stb);
    let m = 2.6 * 4000.0_f64.powf(1.187) * (-11.513 - 8.98e-5 * 4000.0_f64).exp();
    let mu = at.mu_o_cp * (4000.0_f64 / 2650.0).powf(m);
    assert!((above.mu_o_cp / mu - 1.0).abs() < 1e-12, "{} against {mu}", above.mu_o_cp);
}

#[test]
fn the_tank_and_the_tubing_see_the_same_fluid_at_tank_temperature() {
    let fluid = BlackOil::new(&osprey(), 190.0).unwrap();
    for p in [50.0, 500.0, 2000.0, 2649.0, 2651.0, 3600.0, 9000.0] {
        let row = fluid.table_row(p);
        let exact = fluid.unprepared();
        // The functions prepared for the tubing are good to 1e-7.
        let both = [(exact.capped(620.0), 1e-11), (fluid.capped(620.0), 1e-7)];
        for (name, tank, tubing, tolerance) in both.into_iter().flat_map(|(capped, tolerance)| {
            let s = capped.in_situ(p, 190.0);
            [
                ("rs", row.rs_scf_stb, s.rs_scf_stb),
                ("bo", row.bo_rb_stb, s.bo_rb_stb),
                ("mu_o", row.mu_o_cp, s.mu_o_cp),
                ("z", row.z, s.z),
                ("bg", row.bg_rb_scf * FT3_PER_BBL, s.bg_ft3_scf),
                ("mu_g", row.mu_g_cp, s.mu_g_cp),
                ("bw", row.bw_rb_stb, s.bw_rb_stb),
                ("mu_w", row.mu_w_cp, s.mu_w_cp),
            ]
            .map(|(name, tank, tubing)| (name, tank, tubing, tolerance))
        }) {
            assert!((tank / tubing - 1.0).abs() < tolerance, "{name} at {p} psia: {tank} and {tubing}");
        }
    }
}

/// At standard conditions a cubic foot is a cubic foot, and oil, gas and water weigh what they weigh in the tank.
#[test]
fn near_standard_conditions_the_volume_factors_are_near_one() {
    let fluid = BlackOil::new(&FluidSpec { salinity_ppm: 0.0, ..osprey() }, 190.0).unwrap();
    let s = fluid.in_situ(14.696, 60.0, 620.0);
    // z is taken as 1 at standard conditions: its own value there, 0.996, remains.
    assert!((s.bg_ft3_scf / s.z - 1.0).abs() < 1e-12, "Bg {}", s.bg_ft3_scf);
    // Standing's Bo of dead oil at 60 degF is 0.9759 + 0.00012 (75)^1.2 = 0.997, and some gas stays dissolved.
    assert!((s.bo_rb_stb - 1.0).abs() < 5e-3, "Bo {}", s.bo_rb_stb);
    assert!((s.bw_rb_stb - 1.0).abs() < 2e-3, "Bw {}", s.bw_rb_stb);
    // 34 API is 0.855 g/cm3; air at 60 degF and 14.696 psia weighs 0.0764 lb/ft3 (handbook values).
    assert!((s.oil_density_lb_ft3 / 62.366 - 0.855).abs() < 5e-3, "oil {}", s.oil_density_lb_ft3);
    assert!((s.gas_density_lb_ft3 * s.z / 0.78 - 0.0764).abs() < 1e-4, "gas {}", s.gas_density_lb_ft3);
}

/// Mass is conserved when gas dissolves: density times volume factor is oil plus dissolved gas.
#[test]
fn the_oil_carries_the_mass_of_its_gas() {
    let fluid = BlackOil::new(&osprey(), 190.0).unwrap();
    for (p, t, gor) in [(500.0, 120.0, 620.0), (3000.0, 180.0, 620.0), (3000.0, 180.0, 100.0)] {
        let s = fluid.in_situ(p, t, gor);
        let mass_lb_stb = s.oil_density_lb_ft3 * s.bo_rb_stb * FT3_PER_BBL;
        let gas_lb_scf = 14.696 * 28.97 * 0.78 / (10.7316 * 519.67);
        let stated = 141.5 / (131.5 + 34.0) * 62.366 * FT3_PER_BBL + gas_lb_scf * s.rs_scf_stb;
        assert!((mass_lb_stb / stated - 1.0).abs() < 1e-12, "{mass_lb_stb} against {stated}");
    }
}

/// Gradients known by heart in the trade: gas 0.01875 g p/(z T) psi/ft, fresh water 0.433 psi/ft, 35 API oil 0.368 psi/ft.
#[test]
fn densities_give_the_gradients_of_the_trade() {
    let fluid = BlackOil::new(&FluidSpec::new(35.0, 0.7, 400.0), 180.0).unwrap();
    let s = fluid.in_situ(1500.0, 150.0, 400.0);
    let gas_psi_ft = 0.018_75 * 0.7 * 1500.0 / (s.z * (150.0 + 459.67));
    assert!((s.gas_density_lb_ft3 / 144.0 / gas_psi_ft - 1.0).abs() < 5e-4, "gas {}", s.gas_density_lb_ft3);
    let water_psi_ft = fluid.standard_water_density_lb_ft3() / 144.0;
    assert!((water_psi_ft - 0.433).abs() < 5e-4, "water {water_psi_ft}");
    let oil_psi_ft = fluid.oil_specific_gravity() * 62.366 / 144.0;
    assert!((oil_psi_ft - 0.368).abs() < 5e-4, "oil {oil_psi_ft}");
}

/// Separator conditions act on the Vasquez-Beggs group only: by hand, gs = 0.78 [1 + 5.912e-5*34*75 log10(64.7/114.7)].
#[test]
fn separator_conditions_correct_the_gas_gravity_of_the_compressibility() {
    let plain = BlackOil::new(&osprey(), 190.0).unwrap();
    let stated = BlackOil::new(&FluidSpec { separator: Some((64.7, 75.0)), ..osprey() }, 190.0).unwrap();
    assert_eq!(plain.table_row(2000.0), stated.table_row(2000.0));
    let gravity = 0.78 * (1.0 + 5.912e-5 * 34.0 * 75.0 * (64.7_f64 / 114.7).log10());
    let shift = -1e-5 * 1180.0 * (gravity - 0.78) * (4000.0_f64 / 2650.0).ln();
    let got = (plain.bo(4000.0, 620.0) / stated.bo(4000.0, 620.0)).ln();
    assert!(shift > 1e-4 && (got - shift).abs() < 1e-12, "{got} against {shift}");
}

/// Osif takes grams per litre: 100,000 ppm of a brine of 66.914 lb/ft3 (McCain by hand) is 107.19 g/L.
#[test]
fn water_compressibility_is_osifs_at_the_salt_per_litre() {
    let spec = FluidSpec { salinity_ppm: 100_000.0, ..FluidSpec::new(35.0, 0.7, 400.0) };
    let compressibility = BlackOil::new(&spec, 220.0).unwrap().water_compressibility_1_psi(3000.0);
    let by_hand = 1.0 / (7.033 * 3000.0 + 541.5 * 107.19 - 537.0 * 220.0 + 403_300.0);
    assert!((compressibility / by_hand - 1.0).abs() < 1e-5, "{compressibility} against {by_hand}");
}

#[test]
fn an_oil_whose_closure_would_have_several_roots_is_refused() {
    // A light oil with 1,900 scf/STB: Standing gives a bubble point near 5,500 psia, where dBo/dRs passes Bg.
    let faults = BlackOil::new(&FluidSpec::new(38.0, 0.75, 1_900.0), 230.0).unwrap_err();
    assert_eq!(faults.len(), 1, "{faults:?}");
    assert_eq!(faults[0].key, "bubble_point");
    assert!(faults[0].message.contains("several solutions"), "{}", faults[0]);
}

#[test]
fn each_impossible_value_is_a_fault_at_its_key() {
    type Spoil = fn(&mut FluidSpec, f64);
    let fields: [(&str, Spoil); 9] = [
        ("oil_gravity", |s, v| s.oil_gravity_api = v),
        ("gas_gravity", |s, v| s.gas_gravity = v),
        ("solution_gor", |s, v| s.solution_gor_scf_stb = v),
        ("bubble_point", |s, v| s.bubble_point_psia = Some(v)),
        ("salinity", |s, v| s.salinity_ppm = v),
        ("h2s", |s, v| s.h2s_fraction = v),
        ("co2", |s, v| s.co2_fraction = v),
        ("standard_pressure", |s, v| s.standard_pressure_psia = v),
        ("standard_temperature", |s, v| s.standard_temperature_degr = v),
    ];
    for (key, spoil) in fields {
        for value in [f64::NAN, f64::INFINITY, f64::NEG_INFINITY, -1.0, 1e300] {
            let mut spec = osprey();
            spoil(&mut spec, value);
            let faults = BlackOil::new(&spec, 190.0).unwrap_err();
            assert_eq!(faults.len(), 1, "{key} = {value}: {faults:?}");
            assert_eq!(faults[0].key, key);
            assert!(faults[0].help.is_some(), "{key}: no hint");
        }
    }
    for value in [f64::NAN, f64::INFINITY, -500.0, 1e9] {
        assert_eq!(BlackOil::new(&osprey(), value).unwrap_err()[0].key, "temperature");
    }
}

#[test]
fn all_faults_are_reported_at_once() {
    let spec = FluidSpec { oil_gravity_api: 300.0, gas_gravity: -1.0, salinity_ppm: 2e6, ..osprey() };
    let keys: Vec<_> = BlackOil::new(&spec, 190.0).unwrap_err().into_iter().map(|fault| fault.key).collect();
    assert_eq!(keys, ["oil_gravity", "gas_gravity", "salinity"]);
}

#[test]
fn a_bubble_point_in_the_wrong_unit_is_a_fault() {
    // 2650 psia is 183 bar: taken for psia, the tuning factor would be 14.
    let spec = FluidSpec { bubble_point_psia: Some(183.0), ..osprey() };
    let faults = BlackOil::new(&spec, 190.0).unwrap_err();
    assert_eq!(faults[0].key, "bubble_point");
}

#[test]
fn a_gas_lighter_than_its_carbon_dioxide_allows_is_a_fault() {
    let spec = FluidSpec { gas_gravity: 0.65, co2_fraction: 0.3, ..osprey() };
    assert_eq!(BlackOil::new(&spec, 190.0).unwrap_err()[0].key, "gas_gravity");
}

#[test]
fn range_notes_name_the_correlations_that_are_stretched() {
    assert_eq!(BlackOil::new(&osprey(), 190.0).unwrap().range_notes(), []);
    let named = |spec: FluidSpec, t: f64| -> Vec<&'static str> {
        BlackOil::new(&spec, t).unwrap().range_notes().into_iter().map(|note| note.correlation).collect()
    };
    let heavy = named(FluidSpec::new(13.0, 0.7, 150.0), 150.0);
    assert_eq!(heavy, ["Standing", "Beggs-Robinson", "Vasquez-Beggs"]);
    let rich_gas = named(FluidSpec::new(35.0, 1.3, 500.0), 180.0);
    assert_eq!(rich_gas, ["Standing", "Dranchuk-Abou-Kassem"]);
    let hot = named(FluidSpec::new(35.0, 0.8, 400.0), 297.0);
    assert_eq!(hot, ["Standing", "Beggs-Robinson", "Vasquez-Beggs", "McCain"]);
    let sour = named(FluidSpec { h2s_fraction: 0.02, ..osprey() }, 190.0);
    assert_eq!(sour, ["Lee-Gonzalez-Eakin"]);
}

prop_compose! {
    /// Fluids over and beyond the correlations' ranges; many are refused for their bubble point.
    fn specs()(
        api in 10.0..58.0_f64, gas in 0.56..1.5_f64, gor in 10.0..1_800.0_f64, tune in 0.6..1.6_f64,
        measured in any::<bool>(), ppm in 0.0..290_000.0_f64, h2s in 0.0..0.1_f64, co2 in 0.0..0.1_f64, sour in any::<bool>(),
    )(spec in Just(FluidSpec {
        bubble_point_psia: measured.then(|| tune * 18.2 * ((gor / gas).powf(0.83) * 10f64.powf(0.15 - 0.0125 * api))),
        salinity_ppm: ppm,
        h2s_fraction: if sour { h2s } else { 0.0 },
        co2_fraction: if sour { co2 } else { 0.0 },
        ..FluidSpec::new(api, gas, gor)
    })) -> FluidSpec { spec }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 3_000, max_global_rejects: 60_000, ..ProptestConfig::default() })]

    #[test]
    fn properties_are_positive_and_do_not_jump(
        spec in specs(), tank in 60.0..300.0_f64, ln_p in 14.7_f64.ln()..10_000.0_f64.ln(), t in 60.0..300.0_f64, cap in 0.0..1.0_f64,
    ) {
        let fluid = BlackOil::new(&spec, tank);
        prop_assume!(fluid.is_ok());
        let fluid = fluid.unwrap();
        let gor = spec.solution_gor_scf_stb * (0.02 + 1.5 * cap);
        let p = ln_p.exp();
        let here = fluid.in_situ(p, t, gor);
        for (name, value) in numbers(&here) {
            prop_assert!(value.is_finite() && value > 0.0, "{} = {} at {} psia, {} degF", name, value, p, t);
        }
        // A step of 1e-7 may change nothing by more than the steepest log-log slope (viscosity of cool heavy oil, below 60) times it.
        for (q, s) in [(p * (1.0 + 1e-7), t), (p, t * (1.0 + 1e-7))] {
            let (worst, name) = change(&here, &fluid.in_situ(q, s, gor));
            prop_assert!(worst < 6e-6, "{} changes by {} at {} psia, {} degF", name, worst, p, t);
        }
    }

    #[test]
    fn properties_join_at_the_pressure_where_the_gas_cap_binds(spec in specs(), tank in 60.0..300.0_f64, t in 60.0..300.0_f64, cap in 0.1..1.2_f64) {
        let fluid = BlackOil::new(&spec, tank);
        prop_assume!(fluid.is_ok());
        let fluid = fluid.unwrap();
        let gor = spec.solution_gor_scf_stb * cap;
        // The crossing by bisection on the dissolved gas itself.
        let (mut low, mut high) = (14.7, fluid.pressure_range_psia().1);
        prop_assume!(fluid.in_situ(low, t, f64::INFINITY).rs_scf_stb < gor && fluid.in_situ(high, t, f64::INFINITY).rs_scf_stb > gor);
        for _ in 0..80 {
            let mid = 0.5 * (low + high);
            if fluid.in_situ(mid, t, f64::INFINITY).rs_scf_stb < gor { low = mid } else { high = mid }
        }
        let (worst, name) = change(&fluid.in_situ(low * (1.0 - 1e-9), t, gor), &fluid.in_situ(high * (1.0 + 1e-9), t, gor));
        prop_assert!(worst < 1e-7, "{} jumps by {} at its bubble point {} psia, {} degF", name, worst, low, t);
    }

    #[test]
    fn dissolved_gas_and_bubble_point_are_inverse_and_trends_are_right(spec in specs(), tank in 60.0..300.0_f64, ln_p in 14.7_f64.ln()..9_900.0_f64.ln()) {
        let fluid = BlackOil::new(&spec, tank);
        prop_assume!(fluid.is_ok());
        let fluid = fluid.unwrap();
        let p = ln_p.exp();
        let rs = fluid.rs_saturated(p);
        prop_assert!((fluid.bubble_point_psia(rs) - p).abs() < 1e-7 * p, "pb {} of Rs {}", fluid.bubble_point_psia(rs), rs);
        let q = p * 1.01;
        prop_assert!(fluid.rs_saturated(q) > rs, "saturated gas must rise with pressure");
        prop_assert!(fluid.bg(q) < fluid.bg(p), "gas must shrink under pressure");
        prop_assert!(fluid.bo(q, rs) < fluid.bo(p, rs), "undersaturated oil must shrink under pressure");
        prop_assert!(fluid.bw(q) < fluid.bw(p), "water must shrink under pressure");
        prop_assert!(fluid.mu_o(q, rs) >= fluid.mu_o(p, rs), "undersaturated oil must thicken under pressure");
        // Below the initial bubble point the closure's slope keeps its sign.
        if q < fluid.initial_bubble_point_psia() {
            let slope = (fluid.bo(q, fluid.rs_saturated(q)) - fluid.bo(p, rs)) / (fluid.rs_saturated(q) - rs);
            prop_assert!(slope < fluid.bg(p), "dBo/dRs {} against Bg {}", slope, fluid.bg(p));
        }
    }

    /// Rounding noise must stay far below what an integrator resolves: second differences over 1e-3 psi are curvature plus noise.
    #[test]
    fn properties_are_smooth_to_rounding(spec in specs(), tank in 100.0..300.0_f64, p in 50.0..9_000.0_f64, t in 60.0..300.0_f64) {
        let fluid = BlackOil::new(&spec, tank);
        prop_assume!(fluid.is_ok());
        let fluid = fluid.unwrap();
        let h = 1e-3;
        let at = |q: f64| numbers(&fluid.in_situ(q, t, f64::INFINITY));
        for (((name, low), (_, mid)), (_, high)) in at(p - h).into_iter().zip(at(p)).zip(at(p + h)) {
            let second = (high - 2.0 * mid + low).abs() / mid;
            prop_assert!(second < 1e-11 + 100.0 * (h / p) * (h / p), "{} has noise {} at {} psia, {} degF", name, second, p, t);
        }
    }

    #[test]
    fn nothing_panics_on_any_input(
        numbers_in in prop::collection::vec(any::<f64>(), 9), tank in any::<f64>(), p in any::<f64>(), t in any::<f64>(), gor in any::<f64>(),
        keep in 0u32..1024,
    ) {
        // Half of the fields keep a sensible value, so that the odd one out reaches the later checks too.
        let pick = |i: usize, sensible: f64| if keep & (1 << i) != 0 { sensible } else { numbers_in[i] };
        let spec = FluidSpec {
            oil_gravity_api: pick(0, 34.0),
            gas_gravity: pick(1, 0.78),
            solution_gor_scf_stb: pick(2, 620.0),
            bubble_point_psia: (keep & 512 != 0).then(|| pick(3, 2_650.0)),
            salinity_ppm: pick(4, 0.0),
            h2s_fraction: pick(5, 0.0),
            co2_fraction: pick(6, 0.0),
            separator: Some((pick(7, 100.0), pick(8, 80.0))),
            ..FluidSpec::new(34.0, 0.78, 620.0)
        };
        match BlackOil::new(&spec, if keep & 1 != 0 { 190.0 } else { tank }) {
            Ok(fluid) => {
                for (name, value) in numbers(&fluid.in_situ(p, t, gor)) {
                    prop_assert!(value.is_finite() && value >= 0.0, "{} = {}", name, value);
                }
            }
            Err(faults) => prop_assert!(!faults.is_empty()),
        }
    }
}
