//! The slip factor, the stated ranges of the models and which of them apply.
#![allow(clippy::unwrap_used)]

use wane::fluid::{BlackOil, FluidSpec};
use wane::tubing::{Limited, Stream, Tubing, TubingMethod, TubingSection, TubingSpec};

fn fluid() -> BlackOil {
    let spec = FluidSpec { bubble_point_psia: Some(2650.0), ..FluidSpec::new(34.0, 0.78, 620.0) };
    BlackOil::new(&spec, 190.0).expect("a sound fluid")
}

fn spec(method: TubingMethod, diameter_in: f64) -> TubingSpec {
    TubingSpec {
        method,
        sections: vec![TubingSection {
            to_md_ft: f64::INFINITY,
            diameter_in,
            roughness_in: 0.0006,
            inner_pipe_in: 0.0,
        }],
        survey: vec![(0.0, 0.0), (3000.0, 3000.0), (8600.0, 8150.0)],
        slip_factor: 1.0,
        wellhead_temperature_degf: 110.0,
        temperatures: Vec::new(),
        heat: None,
        restrictions: Vec::new(),
    }
}

fn tubing(spec: &TubingSpec, accuracy_psi: f64) -> Tubing {
    Tubing::new(spec, None, 190.0, accuracy_psi).expect("a sound well")
}

fn stream(liquid_rate_stb_d: f64, water_cut: f64, gor_scf_stb: f64) -> Stream {
    Stream { liquid_rate_stb_d, water_cut, gor_scf_stb }
}

const STREAMS: [(f64, f64, f64, f64); 5] = [
    (1500.0, 0.0, 620.0, 300.0),
    (700.0, 0.2, 1500.0, 200.0),
    (150.0, 0.1, 4000.0, 120.0),
    (600.0, 0.7, 700.0, 200.0),
    (20.0, 0.3, 620.0, 150.0),
];

#[test]
fn the_slip_factor_multiplies_the_holdup_above_no_slip() {
    // At the wellhead all share one pressure, so the definition HL = lam + s (HL_model - lam), at most 1, holds exactly.
    let fluid = fluid();
    for method in TubingMethod::ALL {
        let published = tubing(&spec(method, 2.441), 0.02);
        for (rate, water_cut, gor, wellhead) in STREAMS {
            let flow = stream(rate, water_cut, gor);
            let model = published.profile(&fluid, &flow, wellhead)[0];
            let lam = model.liquid_velocity_ft_s / (model.liquid_velocity_ft_s + model.gas_velocity_ft_s);
            for slip in [0.0, 0.6, 1.0, 1.4, 3.0] {
                let tuned = published.with_slip_factor(slip).profile(&fluid, &flow, wellhead)[0];
                let expected = (lam + slip * (model.holdup - lam)).min(1.0);
                assert!((tuned.holdup - expected).abs() < 1e-12, "{} {slip}: {tuned:?}", method.name());
                assert!((tuned.friction_psi_ft - model.friction_psi_ft).abs() < 1e-15);
                // The weight follows the holdup: between the model's and the pure phases', linear in it.
                assert_eq!(tuned.gravity_psi_ft > model.gravity_psi_ft + 1e-9, expected > model.holdup + 1e-9);
            }
        }
        assert_eq!(published.with_slip_factor(1.0), published);
        assert_eq!(
            published.with_slip_factor(0.7),
            tubing(&TubingSpec { slip_factor: 0.7, ..spec(method, 2.441) }, 0.02)
        );
    }
}

#[test]
fn more_slip_weighs_more_and_stays_accurate() {
    let fluid = fluid();
    for method in TubingMethod::ALL {
        let (usual, fine) = (tubing(&spec(method, 2.441), 0.02), tubing(&spec(method, 2.441), 1e-5));
        for (rate, water_cut, gor, wellhead) in STREAMS {
            let flow = stream(rate, water_cut, gor);
            let mut last = 0.0;
            for slip in [0.0, 0.5, 0.9, 1.0, 1.2, 1.8, 3.0] {
                let well = usual.with_slip_factor(slip);
                let found = well.flowing_pressure(&fluid, &flow, wellhead).pressure_psia;
                let converged = fine.with_slip_factor(slip).flowing_pressure(&fluid, &flow, wellhead).pressure_psia;
                assert!((found - converged).abs() < 0.02, "{} {slip} {flow:?}: {found} {converged}", method.name());
                let back = well.wellhead_pressure(&fluid, &flow, found).expect("it came from the surface");
                assert!((back - wellhead).abs() < 0.02, "{} {slip} {flow:?}: {back}", method.name());
                assert!(found >= last - 0.02, "{} {slip} {flow:?}: {found} {last}", method.name());
                last = found;
            }
        }
    }
}

#[test]
fn a_senseless_slip_factor_is_a_fault() {
    for slip_factor in [-0.1, f64::NAN, f64::INFINITY, 11.0] {
        let spec = TubingSpec { slip_factor, ..spec(TubingMethod::HasanKabir, 2.441) };
        let faults = Tubing::new(&spec, None, 190.0, 0.02).err().unwrap_or_default();
        assert_eq!(faults.iter().map(|fault| fault.key.as_str()).collect::<Vec<_>>(), ["slip_factor"]);
    }
}

/// What leaves the range, with the values.
fn outside(method: TubingMethod, diameter_in: f64, flow: &Stream, wellhead: f64) -> Vec<(Limited, f64, f64)> {
    let found = tubing(&spec(method, diameter_in), 0.02).outside_range(&fluid(), flow, wellhead);
    found.into_iter().map(|o| (o.what, o.found, o.limit)).collect()
}

#[test]
fn stated_ranges_are_watched() {
    let names = |method, diameter, flow: &Stream, wellhead| -> Vec<Limited> {
        outside(method, diameter, flow, wellhead).into_iter().map(|(what, ..)| what).collect()
    };
    let plain = stream(800.0, 0.1, 620.0);
    assert_eq!(names(TubingMethod::HasanKabir, 2.441, &plain, 250.0), []);
    assert_eq!(names(TubingMethod::BeggsBrill, 2.441, &plain, 250.0), []);
    // 36 degrees from vertical below 3,000 ft: sin = 5150/5600.
    assert_eq!(names(TubingMethod::HagedornBrown, 4.5, &plain, 250.0), [Limited::Diameter, Limited::Deviation]);
    let gassy = stream(200.0, 0.1, 6000.0);
    let found = outside(TubingMethod::BeggsBrill, 2.441, &gassy, 150.0);
    assert_eq!(found.len(), 1);
    assert!(found[0].0 == Limited::GasLiquidRatio && (found[0].1 - 5400.0).abs() < 1e-9 && found[0].2 == 5000.0);
    // A rate whose mixture is fast at the wellhead: the worst value there, within what the profile shows.
    let fast = stream(1500.0, 0.0, 1500.0);
    let found = outside(TubingMethod::DriftFlux, 2.441, &fast, 150.0);
    let top = tubing(&spec(TubingMethod::DriftFlux, 2.441), 0.02).profile(&fluid(), &fast, 150.0)[0];
    assert_eq!(found.iter().map(|f| f.0).collect::<Vec<_>>(), [Limited::MixtureVelocity]);
    assert!((found[0].1 - top.liquid_velocity_ft_s - top.gas_velocity_ft_s).abs() < 1e-9, "{found:?}");
    // Near sonic velocity nothing holds.
    let sonic = stream(4000.0, 0.0, 8000.0);
    assert!(names(TubingMethod::HasanKabir, 2.441, &sonic, 30.0).contains(&Limited::Kinetic));
    // No liquid at all is no division by zero.
    assert!(names(TubingMethod::Gray, 2.441, &stream(0.0, 1.0, 0.0), 30.0).contains(&Limited::LiquidGasRatio));
}

#[test]
fn gray_applies_to_gas_rich_wells_alone_and_no_slip_never() {
    let fluid = fluid();
    let mut upright = spec(TubingMethod::HasanKabir, 2.441);
    upright.survey = vec![(0.0, 0.0), (8000.0, 8000.0)];
    let well = tubing(&upright, 0.02);
    let applicable = |flow: &Stream, wellhead: f64| -> Vec<&str> {
        TubingMethod::ALL
            .into_iter()
            .filter(|&method| well.applicable(method, &fluid, flow, wellhead))
            .map(TubingMethod::name)
            .collect()
    };
    let usual = ["hasan-kabir", "drift-flux", "ansari", "hagedorn-brown", "beggs-brill", "mukherjee-brill"];
    assert_eq!(applicable(&stream(800.0, 0.1, 620.0), 250.0), usual);
    // 25 bbl/MMscf.
    let rich = applicable(&stream(25.0, 0.0, 40_000.0), 800.0);
    assert!(rich.contains(&"gray") && !rich.contains(&"no-slip"), "{rich:?}");
    // As rich, but too fast: 8 MMscf/d at 100 psia.
    assert!(!applicable(&stream(200.0, 0.0, 40_000.0), 100.0).contains(&"gray"));
}
