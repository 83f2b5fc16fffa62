//! The traverse as a numerical method: accuracy, smoothness, limits.

use wane::fluid::{BlackOil, FluidSpec};
use wane::tubing::{Stream, Tubing, TubingMethod, TubingSection, TubingSpec};

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

fn well(method: TubingMethod, sections: &[(f64, f64)], survey: &[(f64, f64)], wellhead_degf: f64) -> TubingSpec {
    TubingSpec {
        method,
        sections: sections
            .iter()
            .map(|&(to_md_ft, diameter_in)| TubingSection { to_md_ft, diameter_in, roughness_in: 0.0006 })
            .collect(),
        survey: survey.to_vec(),
        wellhead_temperature_degf: wellhead_degf,
    }
}

const WHOLE: f64 = f64::INFINITY;

/// Wells of the spread: vertical, two sizes, deviated, tapered, cool wellhead, deep, shallow.
fn wells(method: TubingMethod) -> Vec<TubingSpec> {
    vec![
        well(method, &[(WHOLE, 2.441)], &[(0.0, 0.0), (8000.0, 8000.0)], 110.0),
        well(method, &[(WHOLE, 3.958)], &[(0.0, 0.0), (5500.0, 5500.0)], 80.0),
        well(method, &[(WHOLE, 1.995)], &[(0.0, 0.0), (4000.0, 4000.0), (8600.0, 8150.0)], 105.0),
        well(
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

#[test]
fn default_accuracy_is_kept_over_a_spread_of_wells() {
    let mut failures = Vec::new();
    for method in TubingMethod::ALL {
        let (mut worst, mut at) = (0.0_f64, String::new());
        let (mut count, mut over, mut sum) = (0, 0, 0.0);
        let mut steps = 0;
        for (fluid, bottom) in [(medium_oil(), 190.0), (heavy_oil(), 140.0)] {
            for (w, spec) in wells(method).iter().enumerate() {
                let (usual, fine) = (tubing(spec, bottom, 0.02), tubing(spec, bottom, 1e-6));
                for liquid_rate_stb_d in RATES_STB_D {
                    for gor_scf_stb in GORS_SCF_STB {
                        for water_cut in WATER_CUTS {
                            for wellhead in WELLHEADS_PSIA {
                                let stream = Stream { liquid_rate_stb_d, water_cut, gor_scf_stb };
                                let a = usual.flowing_pressure(&fluid, &stream, wellhead);
                                let b = fine.flowing_pressure(&fluid, &stream, wellhead);
                                if b.pressure_psia > 15_000.0 {
                                    continue; // outside the fluid's range
                                }
                                let error = (a.pressure_psia - b.pressure_psia).abs();
                                count += 1;
                                steps += usual.steps(&fluid, &stream, wellhead);
                                sum += error;
                                if error > 0.002 {
                                    over += 1;
                                }
                                if !(error <= worst) {
                                    worst = error;
                                    at = format!("well {w}, {stream:?}, {wellhead} psia: {a:?} {b:?}");
                                }
                            }
                        }
                    }
                }
            }
        }
        println!(
            "{} steps {:.1}: worst {worst:.5} psi, mean {:.1e}, {over}/{count} above 0.002: {at}",
            method.name(),
            steps as f64 / count as f64,
            sum / count as f64
        );
        failures.extend((worst > 0.02).then(|| format!("{}: {worst} psi at {at}", method.name())));
    }
    assert!(failures.is_empty(), "{failures:#?}");
}
