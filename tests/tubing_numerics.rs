//! The traverse as a numerical method: accuracy, smoothness, limits.
#![allow(clippy::unwrap_used)]

mod common;

use common::tubing::string;
use wane::fluid::{BlackOil, FluidSpec};
use wane::tubing::ansari::Ansari;
use wane::tubing::beggs_brill::BeggsBrill;
use wane::tubing::drift_flux::DriftFlux;
use wane::tubing::gray::Gray;
use wane::tubing::hagedorn_brown::HagedornBrown;
use wane::tubing::hasan_kabir::HasanKabir;
use wane::tubing::liquid;
use wane::tubing::model::{Flow, Hydraulics, Pipe};
use wane::tubing::mukherjee_brill::MukherjeeBrill;
use wane::tubing::no_slip::NoSlip;
use wane::tubing::{Stream, Tubing, TubingMethod, TubingSpec};

/// An invented oil: 34 API, gas 0.78, 620 scf/STB, bubble point 2,650 psia at 190 degF.
fn medium_oil() -> BlackOil {
    let spec =
        FluidSpec { bubble_point_psia: Some(2650.0), salinity_ppm: 35_000.0, ..FluidSpec::new(34.0, 0.78, 620.0) };
    BlackOil::new(&spec, 190.0).expect("a sound fluid")
}

/// A heavier, more viscous oil: 22 API, gas 0.68, 180 scf/STB at 140 degF.
fn heavy_oil() -> BlackOil {
    BlackOil::new(&FluidSpec::new(22.0, 0.68, 180.0), 140.0).expect("a sound fluid")
}

const WHOLE: f64 = f64::INFINITY;

/// Wells of the spread: vertical, two sizes, deviated, tapered, cool wellhead, deep, shallow.
fn wells(method: TubingMethod) -> Vec<TubingSpec> {
    vec![
        string(method, &[(WHOLE, 2.441)], &[(0.0, 0.0), (8000.0, 8000.0)], 110.0),
        string(method, &[(WHOLE, 3.958)], &[(0.0, 0.0), (5500.0, 5500.0)], 80.0),
        string(method, &[(WHOLE, 1.995)], &[(0.0, 0.0), (4000.0, 4000.0), (8600.0, 8150.0)], 105.0),
        string(
            method,
            &[(6000.0, 2.992), (WHOLE, 2.441)],
            &[(0.0, 0.0), (2500.0, 2500.0), (4500.0, 4200.0), (12_000.0, 8700.0)],
            60.0,
        ),
    ]
}

fn tubing(spec: &TubingSpec, bottom_degf: f64, accuracy_psi: f64) -> Tubing {
    Tubing::new(spec, None, bottom_degf, accuracy_psi).expect("a sound well")
}

const RATES_STB_D: [f64; 7] = [2.0, 60.0, 250.0, 700.0, 1500.0, 3500.0, 8000.0];
const GORS_SCF_STB: [f64; 6] = [100.0, 400.0, 620.0, 1500.0, 5000.0, 20_000.0];
const WATER_CUTS: [f64; 4] = [0.0, 0.3, 0.7, 0.95];
const WELLHEADS_PSIA: [f64; 3] = [60.0, 200.0, 900.0];

/// Calls `visit` with every fluid, well, stream and wellhead pressure of the spread.
fn spread(method: TubingMethod, mut visit: impl FnMut(&BlackOil, f64, &TubingSpec, Stream, f64)) {
    for (fluid, bottom_degf) in [(medium_oil(), 190.0), (heavy_oil(), 140.0)] {
        for spec in wells(method) {
            for liquid_rate_stb_d in RATES_STB_D {
                for gor_scf_stb in GORS_SCF_STB {
                    for water_cut in WATER_CUTS {
                        for wellhead_psia in WELLHEADS_PSIA {
                            let stream = Stream { liquid_rate_stb_d, water_cut, gor_scf_stb };
                            visit(&fluid, bottom_degf, &spec, stream, wellhead_psia);
                        }
                    }
                }
            }
        }
    }
}

#[test]
fn default_accuracy_is_kept_over_a_spread_of_wells() {
    // The bar is 0.02 psi against the converged value, also where the flow lingers on a border: heavy cold oil at 8,000 STB/d
    // stays at Reynolds number 2,100 for some feet, since laminar flow pushes it up and turbulent flow down.
    for method in TubingMethod::ALL {
        let (mut count, mut steps) = (0_u32, 0_u32);
        let (mut sum, mut worst, mut at) = (0.0, 0.0_f64, String::new());
        spread(method, |fluid, bottom_degf, spec, stream, wellhead_psia| {
            let usual = tubing(spec, bottom_degf, 0.02);
            let found = usual.flowing_pressure(fluid, &stream, wellhead_psia).pressure_psia;
            let converged = tubing(spec, bottom_degf, 1e-5).flowing_pressure(fluid, &stream, wellhead_psia);
            let error = (found - converged.pressure_psia).abs();
            // Beyond the fluid's range its properties are held, with a corner.
            if converged.pressure_psia > 15_000.0 {
                return;
            }
            assert!(error < 0.02, "{}: {error} psi at {spec:?}, {stream:?}, {wellhead_psia} psia", method.name());
            (count, sum, steps) = (count + 1, sum + error, steps + usual.steps(fluid, &stream, wellhead_psia));
            if error > worst {
                (worst, at) = (error, format!("{stream:?}, {wellhead_psia} psia"));
            }
        });
        let (mean, mean_steps) = (sum / f64::from(count), f64::from(steps) / f64::from(count));
        println!(
            "{}: {count} cases, worst {worst:.5} psi, mean {mean:.1e}, {mean_steps:.1} steps: {at}",
            method.name()
        );
        // Forty times better than the bar as a rule.
        assert!(mean < 5e-4, "{}: mean {mean} psi", method.name());
        assert!(mean_steps < 30.0, "{}: {mean_steps} steps", method.name());
    }
}

/// The flow at a point by the definitions (formulas repeated here, not called), for an independent integration.
fn flow_at(fluid: &BlackOil, stream: &Stream, pipe: &Pipe, pressure_psia: f64, temperature_degf: f64) -> Flow {
    let at = fluid.in_situ(pressure_psia, temperature_degf, stream.gor_scf_stb);
    let oil_stb_d = stream.liquid_rate_stb_d * (1.0 - stream.water_cut);
    let water_stb_d = stream.liquid_rate_stb_d * stream.water_cut;
    let area_ft2 = std::f64::consts::PI * pipe.diameter_ft.powi(2) / 4.0;
    let (oil, water) = (5.614_583 * oil_stb_d * at.bo_rb_stb, 5.614_583 * water_stb_d * at.bw_rb_stb);
    let gas = oil_stb_d * (stream.gor_scf_stb - at.rs_scf_stb) * at.bg_ft3_scf;
    let share = oil / (oil + water);
    let mix = |oil: f64, water: f64| oil * share + water * (1.0 - share);
    Flow {
        liquid_velocity_ft_s: (oil + water) / 86_400.0 / area_ft2,
        gas_velocity_ft_s: gas / 86_400.0 / area_ft2,
        no_slip_holdup: (oil + water) / (oil + water + gas),
        liquid_density_lb_ft3: mix(at.oil_density_lb_ft3, at.water_density_lb_ft3),
        gas_density_lb_ft3: at.gas_density_lb_ft3,
        liquid_viscosity_cp: mix(at.mu_o_cp, at.mu_w_cp),
        gas_viscosity_cp: at.mu_g_cp,
        tension_dyn_cm: mix(at.sigma_oil_gas_dyn_cm, at.sigma_water_gas_dyn_cm),
        pressure_psia,
    }
}

#[test]
fn a_plain_integration_agrees() {
    // The middle-point rule in steps of 0.1 ft, the branch chosen anew at every point: no switches, no step control.
    // A step across a jump of 0.1 psi/ft costs 0.005 psi.
    let fluid = medium_oil();
    let stream = Stream { liquid_rate_stb_d: 420.0, water_cut: 0.25, gor_scf_stb: 800.0 };
    for method in TubingMethod::ALL {
        let spec = string(method, &[(WHOLE, 2.441)], &[(0.0, 0.0), (8000.0, 8000.0)], 110.0);
        let pipe = Pipe::new(2.441, 0.0006, 1.0);
        let gradient = |depth_ft: f64, pressure_psia: f64| {
            let flow = flow_at(&fluid, &stream, &pipe, pressure_psia, 110.0 + 0.01 * depth_ft);
            let at = |model: &dyn Hydraulics| model.gradient(&flow, &pipe, model.branch(&flow, &pipe)).total_psi_ft();
            match method {
                _ if flow.gas_velocity_ft_s == 0.0 => {
                    liquid::gradient(&flow, &pipe, liquid::branch(&flow, &pipe)).total_psi_ft()
                }
                TubingMethod::HasanKabir => at(&HasanKabir),
                TubingMethod::HagedornBrown => at(&HagedornBrown),
                TubingMethod::BeggsBrill => at(&BeggsBrill { payne: true }),
                TubingMethod::DriftFlux => at(&DriftFlux),
                TubingMethod::Ansari => at(&Ansari),
                TubingMethod::MukherjeeBrill => at(&MukherjeeBrill),
                TubingMethod::Gray => at(&Gray),
                TubingMethod::NoSlip => at(&NoSlip),
            }
        };
        let mut pressure_psia = 180.0;
        for i in 0..80_000 {
            let top_ft = f64::from(i) * 0.1;
            let middle_psia = pressure_psia + 0.05 * gradient(top_ft, pressure_psia);
            pressure_psia += 0.1 * gradient(top_ft + 0.05, middle_psia);
        }
        let found = tubing(&spec, 190.0, 0.02).flowing_pressure(&fluid, &stream, 180.0).pressure_psia;
        println!("{}: {found} {pressure_psia}", method.name());
        assert!((found - pressure_psia).abs() < 0.02, "{}: {found} {pressure_psia}", method.name());
    }
}

/// The largest second difference of the *error* of the flowing pressure along a fine sweep of one variable: the true
/// curve's own bends, and the corners of the correlations, are not the integration's fault.
fn roughness(usual: &Tubing, fine: &Tubing, fluid: &BlackOil, points: impl Iterator<Item = (Stream, f64)>) -> f64 {
    let errors: Vec<f64> = points
        .map(|(stream, wellhead_psia)| {
            usual.flowing_pressure(fluid, &stream, wellhead_psia).pressure_psia
                - fine.flowing_pressure(fluid, &stream, wellhead_psia).pressure_psia
        })
        .collect();
    errors.windows(3).map(|e| (e[0] - 2.0 * e[1] + e[2]).abs()).fold(0.0, f64::max)
}

#[test]
fn the_flowing_pressure_is_smooth() {
    let fluid = medium_oil();
    let streams = [
        (1500.0, 0.01, 620.0, 300.0),
        (700.0, 0.2, 1500.0, 200.0),
        (150.0, 0.1, 4000.0, 120.0),
        (600.0, 0.7, 700.0, 200.0),
        (300.0, 0.3, 620.0, 150.0),
    ];
    let survey = [(0.0, 0.0), (3000.0, 3000.0), (9000.0, 8000.0)];
    for method in TubingMethod::ALL {
        let spec = string(method, &[(5000.0, 2.992), (WHOLE, 2.441)], &survey, 85.0);
        let (usual, fine) = (tubing(&spec, 190.0, 0.02), tubing(&spec, 190.0, 1e-5));
        let (mut all, mut worst, mut rough) = (0, 0.0_f64, 0);
        for (rate, water_cut, gor, wellhead) in streams {
            for variable in 0..4 {
                let points = (-150..150).map(|i| {
                    let factor = |v: i32| if v == variable { 1.0 + 3e-4 * f64::from(i) } else { 1.0 };
                    let stream = Stream {
                        liquid_rate_stb_d: rate * factor(0),
                        water_cut: water_cut * factor(1),
                        gor_scf_stb: gor * factor(2),
                    };
                    (stream, wellhead * factor(3))
                });
                let found = roughness(&usual, &fine, &fluid, points);
                worst = worst.max(found);
                (all, rough) = (all + 1, rough + i32::from(found > 1e-4));
                println!("{} {rate} {gor} variable {variable}: {found:.1e}", method.name());
            }
        }
        println!("{}: worst {worst:.1e} psi, {rough} of {all} sweeps above 1e-4", method.name());
        // The aim is 1e-4 psi. The steps of the default model follow transitions that no polynomial fits, so that a
        // repeated step may stand out a little more; the others are far smoother.
        let most = if method == TubingMethod::HasanKabir { 3e-4 } else { 1e-4 };
        assert!(worst < most && rough <= 1, "{}: {worst} psi, {rough} of {all} sweeps", method.name());
    }
}
