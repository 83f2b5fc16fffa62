//! One traverse of 8,000 ft.
#![allow(clippy::unwrap_used)]

use wane::fluid::{BlackOil, FluidSpec};
use wane::tubing::{Stream, Tubing, TubingMethod, TubingSection, TubingSpec};

fn main() {
    divan::main();
}

fn fluid() -> BlackOil {
    let spec =
        FluidSpec { bubble_point_psia: Some(2650.0), salinity_ppm: 35_000.0, ..FluidSpec::new(34.0, 0.78, 620.0) };
    BlackOil::new(&spec, 190.0).unwrap_or_else(|faults| panic!("{faults:?}"))
}

fn tubing(method: TubingMethod) -> Tubing {
    let spec = TubingSpec {
        method,
        sections: vec![TubingSection {
            to_md_ft: f64::INFINITY,
            diameter_in: 2.441,
            roughness_in: 0.0006,
            inner_pipe_in: 0.0,
        }],
        survey: vec![(0.0, 0.0), (8000.0, 8000.0)],
        slip_factor: 1.0,
        wellhead_temperature_degf: 110.0,
        temperatures: Vec::new(),
        heat: None,
        restrictions: Vec::new(),
    };
    Tubing::new(&spec, None, 190.0, 0.02).unwrap_or_else(|faults| panic!("{faults:?}"))
}

/// Early, late and watered-out life of one well.
const STREAMS: [(&str, Stream, f64); 4] = [
    ("early", Stream { liquid_rate_stb_d: 1500.0, water_cut: 0.0, gor_scf_stb: 620.0 }, 300.0),
    ("mid", Stream { liquid_rate_stb_d: 700.0, water_cut: 0.2, gor_scf_stb: 1500.0 }, 200.0),
    ("late", Stream { liquid_rate_stb_d: 150.0, water_cut: 0.1, gor_scf_stb: 4000.0 }, 120.0),
    ("wet", Stream { liquid_rate_stb_d: 600.0, water_cut: 0.7, gor_scf_stb: 700.0 }, 200.0),
];

#[divan::bench(args = TubingMethod::ALL.map(TubingMethod::name))]
fn down(bencher: divan::Bencher<'_, '_>, name: &str) {
    let method = TubingMethod::ALL.into_iter().find(|m| m.name() == name).unwrap_or(TubingMethod::HasanKabir);
    let (fluid, tubing) = (fluid(), tubing(method));
    let mut i = 0;
    bencher.bench_local(|| {
        i = (i + 1) % STREAMS.len();
        let (_, stream, wellhead) = &STREAMS[i];
        tubing.flowing_pressure(&fluid, divan::black_box(stream), *wellhead)
    });
}

#[divan::bench(args = STREAMS.map(|s| s.0))]
fn down_by_default(bencher: divan::Bencher<'_, '_>, name: &str) {
    let (fluid, tubing) = (fluid(), tubing(TubingMethod::HasanKabir));
    let (_, stream, wellhead) = STREAMS.into_iter().find(|s| s.0 == name).unwrap_or(STREAMS[0]);
    bencher.bench_local(|| tubing.flowing_pressure(&fluid, divan::black_box(&stream), wellhead));
}

#[divan::bench]
fn up_by_default(bencher: divan::Bencher<'_, '_>) {
    let (fluid, tubing) = (fluid(), tubing(TubingMethod::HasanKabir));
    let (_, stream, _) = STREAMS[1];
    bencher.bench_local(|| tubing.wellhead_pressure(&fluid, divan::black_box(&stream), 2000.0));
}

#[divan::bench]
fn in_situ_properties(bencher: divan::Bencher<'_, '_>) {
    let fluid = fluid();
    bencher.bench_local(|| fluid.in_situ(divan::black_box(1200.0), 150.0, 900.0));
}
