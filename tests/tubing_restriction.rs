//! A restriction in the string: exact limits, and the equations of Perkins (1993, from memory) as printed there.
#![allow(clippy::unwrap_used)]

mod common;

use common::tubing::string;
use wane::fluid::{BlackOil, FluidSpec};
use wane::tubing::restriction::{DISCHARGE, Mixture};
use wane::tubing::{RestrictionSpec, Stream, Tubing, TubingMethod, TubingSpec};

const WHOLE: f64 = f64::INFINITY;
const AT_FT: f64 = 4000.0;

fn fluid() -> BlackOil {
    let spec = FluidSpec { bubble_point_psia: Some(2650.0), ..FluidSpec::new(34.0, 0.78, 620.0) };
    BlackOil::new(&spec, 190.0).expect("a sound fluid")
}

fn spec(diameters_in: &[f64]) -> TubingSpec {
    let restrictions = diameters_in
        .iter()
        .enumerate()
        .map(|(i, &diameter_in)| RestrictionSpec {
            at_md_ft: AT_FT + 1000.0 * i as f64,
            diameter_in,
            discharge_coefficient: DISCHARGE,
        })
        .collect();
    let survey = [(0.0, 0.0), (3000.0, 3000.0), (9000.0, 8000.0)];
    TubingSpec { restrictions, ..string(TubingMethod::HasanKabir, &[(WHOLE, 2.441)], &survey, 110.0) }
}

fn tubing(spec: &TubingSpec) -> Tubing {
    Tubing::new(spec, None, 190.0, 0.02).expect("a sound well")
}

const STREAM: Stream = Stream { liquid_rate_stb_d: 700.0, water_cut: 0.2, gor_scf_stb: 900.0 };

/// The step that the profile shows at the restriction, psi, and the pressure above it.
fn step(well: &Tubing, fluid: &BlackOil, stream: &Stream, wellhead_psia: f64) -> (f64, f64) {
    let points = well.profile(fluid, stream, wellhead_psia);
    let pair = points.windows(2).find(|pair| pair[0].md_ft == pair[1].md_ft).expect("two points at one depth");
    assert_eq!(pair[0].md_ft, AT_FT);
    (pair[1].pressure_psia - pair[0].pressure_psia, pair[0].pressure_psia)
}

#[test]
fn the_printed_equations_of_critical_and_subcritical_flow_hold() {
    // Perkins' terms as printed, with his example of three phases (C09), but a heat capacity of the gas for which R = cp - cv:
    // fg v1, alpha1 = fl/rhoL/v1, lambda = fg + (fg Cvg + fl Cvl) M/(z R), n from the heat capacities.
    let (fg, fo, fw, k, z, molar) = (0.15, 0.60, 0.25, 1.25, 0.88, 20.3);
    let (psia, degr) = (1000.0, 580.0);
    let v1 = z * 10.7316 * degr / (molar * psia);
    let liquid = fo / 48.0 + fw / 64.0;
    let alpha = liquid / v1;
    // 10.7316 psi ft3 are 10.7316 x 144/778.17 Btu.
    let constant = z * 10.7316 * 144.0 / 778.17 / molar;
    let cvg = constant / (k - 1.0);
    let held = fg * cvg + fo * 0.48 + fw * 1.0;
    let lambda = fg + held / constant;
    let n = (fg * k * cvg + fo * 0.48 + fw * 1.0) / held;
    let liquid_btu = (fo * 0.48 + fw) / (fo + fw);
    let mixture = Mixture::new(fg, (1.0 / v1, (fo + fw) / liquid), psia, degr - 459.67, liquid_btu);
    assert!((mixture.exponent - (n - 1.0) / n).abs() < 1e-9);
    for a in [0.0_f64, 0.0625, 0.5, 0.8] {
        let flux = |y: f64| {
            let b = fg * y.powf(-1.0 / n) + alpha;
            let work = lambda * psia * v1 * (1.0 - y.powf((n - 1.0) / n)) + liquid * psia * (1.0 - y);
            let speed = (288.0 * 32.174 * work / (1.0 - (a * (fg + alpha) / b).powi(2))).sqrt();
            speed / (v1 * b)
        };
        for y in [0.4, 0.6, 0.8, 0.95, 0.999] {
            let found = (2.0 * 32.174 * 144.0 * psia * mixture.flux_squared(y, a)).sqrt();
            assert!((found / flux(y) - 1.0).abs() < 1e-9, "{a} {y}: {found} {}", flux(y));
        }
        // His closed form of the critical ratio, and that it is where the flux is largest.
        let y = mixture.critical_ratio(a);
        let b = fg * y.powf(-1.0 / n) + alpha;
        let approach = 1.0 - (a * (fg + alpha) / b).powi(2);
        let left = (2.0 * lambda * (1.0 - y.powf((n - 1.0) / n)) + 2.0 * alpha * (1.0 - y))
            * (approach * fg / n * y.powf(-(1.0 + n) / n)
                + (a * (fg + alpha)).powi(2) * fg / n * y.powf(-(1.0 + n) / n) / (b * b));
        let right = approach * b * (lambda * (n - 1.0) / n * y.powf(-1.0 / n) + alpha);
        assert!((left / right - 1.0).abs() < 1e-6, "{a}: {left} {right}");
        for other in [0.9 * y, 0.99 * y, 1.0 - 0.99 * (1.0 - y), 1.0 - 0.9 * (1.0 - y)] {
            assert!(flux(other) < flux(y), "{a} {other}");
        }
    }
}

#[test]
fn gas_alone_has_the_critical_ratio_of_a_nozzle() {
    // (2/(k + 1))^(k/(k - 1)), an exact identity; no approach velocity. k = 1.25.
    let mixture = Mixture::new(1.0, (3.0, 50.0), 800.0, 120.0, 0.5);
    let k = 1.25_f64;
    assert!((mixture.exponent - (k - 1.0) / k).abs() < 1e-12);
    let nozzle = (2.0 / (k + 1.0)).powf(k / (k - 1.0));
    assert!((mixture.critical_ratio(0.0) - nozzle).abs() < 1e-9);
    // C04 of the collection lists published ratios; at k = 1.25 the same formula gives 0.5549.
    assert!((nozzle - 0.5549).abs() < 1e-4);
}

#[test]
fn liquid_loses_what_bernoulli_and_the_recovery_leave() {
    // Dead water: p1 - p3 = rho v^2 (1 - a^2)/(2 gc 144 Cd^2) in the throat, of which 1 - beta^1.85 is lost. By hand.
    let fluid = fluid();
    let water = Stream { liquid_rate_stb_d: 4000.0, water_cut: 1.0, gor_scf_stb: 0.0 };
    for diameter_in in [2.3, 1.875, 1.2, 0.8] {
        let well = tubing(&spec(&[diameter_in]));
        let (found, above_psia) = step(&well, &fluid, &water, 200.0);
        let at = fluid.in_situ(above_psia + found, 110.0 + 80.0 * (3000.0 + 5000.0 / 6.0) / 8000.0, 0.0);
        let area_ft2 = std::f64::consts::PI / 4.0 * diameter_in * diameter_in / 144.0;
        let velocity = 4000.0 * 5.614_583 * at.bw_rb_stb / 86_400.0 / area_ft2;
        let beta = diameter_in / 2.441;
        let drop = at.water_density_lb_ft3 * velocity * velocity * (1.0 - beta.powi(4)) / (2.0 * 32.174 * 144.0);
        let lost = drop / (0.826 * 0.826) * (1.0 - beta.powf(1.85));
        assert!((found / lost - 1.0).abs() < 1e-6, "{diameter_in}: {found} {lost}");
    }
}

#[test]
fn a_little_gas_is_bernoulli_of_the_mixture() {
    // Where the loss is small beside the pressure the volume hardly changes: the incompressible formula at the density of the
    // mixture upstream, within the relative loss itself.
    let fluid = fluid();
    let well = tubing(&spec(&[1.2]));
    let (found, above_psia) = step(&well, &fluid, &STREAM, 400.0);
    let at = fluid.in_situ(above_psia + found, 110.0 + 80.0 * (3000.0 + 5000.0 / 6.0) / 8000.0, 900.0);
    let oil = 560.0 * 5.614_583 * at.bo_rb_stb;
    let water = 140.0 * 5.614_583 * at.bw_rb_stb;
    let gas = 560.0 * (900.0 - at.rs_scf_stb) * at.bg_ft3_scf;
    let mass = oil * at.oil_density_lb_ft3 + water * at.water_density_lb_ft3 + gas * at.gas_density_lb_ft3;
    let area_ft2 = std::f64::consts::PI / 4.0 * 1.2_f64.powi(2) / 144.0;
    let velocity = (oil + water + gas) / 86_400.0 / area_ft2;
    let density = mass / (oil + water + gas);
    let beta = 1.2_f64 / 2.441;
    let lost = density * velocity * velocity / (2.0 * 32.174 * 144.0 * 0.826 * 0.826)
        * (1.0 - beta.powi(4))
        * (1.0 - beta.powf(1.85));
    assert!(found > 0.1 && (found / lost - 1.0).abs() < 3.0 * found / above_psia, "{found} {lost} {above_psia}");
}

#[test]
fn no_flow_loses_nothing_and_the_loss_vanishes_with_the_rate() {
    let fluid = fluid();
    let (plain, well) = (tubing(&spec(&[])), tubing(&spec(&[1.5])));
    let still = Stream { liquid_rate_stb_d: 0.0, ..STREAM };
    assert_eq!(step(&well, &fluid, &still, 200.0).0, 0.0);
    let [with, without] = [&well, &plain].map(|well| well.flowing_pressure(&fluid, &still, 200.0));
    assert!((with.pressure_psia - without.pressure_psia).abs() < 0.01, "{with:?} {without:?}");
    // With the square of the rate.
    let at = |rate: f64| step(&well, &fluid, &Stream { liquid_rate_stb_d: rate, ..STREAM }, 300.0).0;
    let small = at(40.0);
    assert!(small > 0.0 && small < 0.01, "{small}");
    // The pressure there changes with the rate too, and the volume of the gas with it: not exactly a quarter.
    assert!((at(20.0) / small - 0.25).abs() < 0.1, "{} {small}", at(20.0));
}

#[test]
fn down_and_up_agree_and_two_losses_add() {
    let fluid = fluid();
    for method in TubingMethod::ALL {
        for diameters in [&[1.875][..], &[1.2], &[2.3, 1.5]] {
            let well = tubing(&TubingSpec { method, ..spec(diameters) });
            for stream in [
                STREAM,
                Stream { liquid_rate_stb_d: 1500.0, water_cut: 0.0, gor_scf_stb: 620.0 },
                Stream { liquid_rate_stb_d: 100.0, water_cut: 0.9, gor_scf_stb: 5000.0 },
            ] {
                let below = well.flowing_pressure(&fluid, &stream, 250.0);
                assert!(!below.choked && !below.near_sonic, "{below:?}");
                let back = well.wellhead_pressure(&fluid, &stream, below.pressure_psia).expect("it came from there");
                assert!((back - 250.0).abs() < 0.02, "{} {stream:?}: {back}", method.name());
            }
        }
    }
    let points = tubing(&spec(&[2.3, 1.5])).profile(&fluid, &STREAM, 250.0);
    let steps: Vec<f64> = points.windows(2).filter(|p| p[0].md_ft == p[1].md_ft).map(|p| p[0].md_ft).collect();
    assert_eq!(steps, [AT_FT, AT_FT + 1000.0]);
    let end = tubing(&spec(&[2.3, 1.5])).flowing_pressure(&fluid, &STREAM, 250.0).pressure_psia;
    assert!((points.last().unwrap().pressure_psia - end).abs() < 0.02);
}

#[test]
fn critical_flow_is_told_and_has_no_jump() {
    // A tight choke deep in a gassy well: below some rate the pressure above matters, beyond it does not.
    let fluid = fluid();
    let well = tubing(&spec(&[0.4]));
    let at = |rate: f64| {
        let stream = Stream { liquid_rate_stb_d: rate, water_cut: 0.0, gor_scf_stb: 3000.0 };
        (well.flowing_pressure(&fluid, &stream, 120.0), stream)
    };
    let (mut before, mut switch) = (at(60.0).0, None);
    assert!(!before.choked);
    for i in 1..2000 {
        let rate = 60.0 + 0.25 * f64::from(i);
        let (next, stream) = at(rate);
        let rise = next.pressure_psia - before.pressure_psia;
        assert!(rise.abs() < 3.0, "{rate}: {before:?} {next:?}");
        if next.choked && !before.choked {
            switch = Some((rate, rise));
        }
        assert_eq!(next.choked, next.near_sonic);
        // What the stream cannot pass from below, it does not pass upwards either.
        if next.choked && i % 100 == 0 {
            assert_eq!(well.wellhead_pressure(&fluid, &stream, 0.9 * next.pressure_psia), None);
        }
        before = next;
    }
    let (rate, rise) = switch.expect("it becomes critical");
    assert!(before.choked && rise < 3.0, "{rate}: {rise}");
    // Critical: the wellhead pressure no longer matters.
    let stream = Stream { liquid_rate_stb_d: 2.0 * rate, water_cut: 0.0, gor_scf_stb: 3000.0 };
    let [low, high] = [100.0, 150.0].map(|wellhead| well.flowing_pressure(&fluid, &stream, wellhead).pressure_psia);
    assert!((low - high).abs() < 0.02, "{low} {high}");
}

#[test]
fn senseless_streams_stay_finite() {
    let fluid = fluid();
    let well = tubing(&spec(&[0.3]));
    for rate in [f64::NAN, -5.0, 1e5, 1e9] {
        for gor in [0.0, 1e9, f64::NAN] {
            for wellhead_psia in [f64::NAN, 0.0, 1e7] {
                let stream = Stream { liquid_rate_stb_d: rate, water_cut: 0.5, gor_scf_stb: gor };
                let found = well.flowing_pressure(&fluid, &stream, wellhead_psia);
                assert!(found.pressure_psia.is_finite(), "{stream:?} {found:?}");
                well.wellhead_pressure(&fluid, &stream, wellhead_psia);
            }
        }
    }
}

#[test]
fn bad_restrictions_are_faults() {
    let keys = |at_md_ft: f64, diameter_in: f64, discharge_coefficient: f64| -> Vec<String> {
        let restrictions = vec![RestrictionSpec { at_md_ft, diameter_in, discharge_coefficient }];
        let spec = TubingSpec { restrictions, ..spec(&[]) };
        Tubing::new(&spec, None, 190.0, 0.02).err().unwrap_or_default().into_iter().map(|f| f.key).collect()
    };
    for at in [0.0, -1.0, 9001.0, f64::NAN] {
        assert_eq!(keys(at, 1.8, 0.8), ["restrictions[0].at"], "{at}");
    }
    for diameter in [0.0, 2.441, 3.0, f64::NAN] {
        assert_eq!(keys(4000.0, diameter, 0.8), ["restrictions[0].diameter"], "{diameter}");
    }
    for discharge in [0.0, 1.1, f64::NAN] {
        assert_eq!(keys(4000.0, 1.8, discharge), ["restrictions[0].discharge"], "{discharge}");
    }
    assert!(keys(9000.0, 1.8, 0.8).is_empty());
    let twice = TubingSpec { restrictions: vec![spec(&[1.8]).restrictions[0]; 2], ..spec(&[]) };
    let faults = Tubing::new(&twice, None, 190.0, 0.02).err().unwrap_or_default();
    assert_eq!(faults.into_iter().map(|f| f.key).collect::<Vec<_>>(), ["restrictions[1].at"]);
}
