//! Fluid properties at a point: `cargo bench --bench fluid`.
//!
//! Every figure is for a batch of 1,000 different points (pressure and temperature as along a tubing); divide by 1,000.

use divan::{Bencher, black_box};
use wane::fluid::{BlackOil, FluidSpec, ReservoirFluid, dranchuk_abou_kassem};

const POINTS: usize = 1_000;

fn fluid() -> BlackOil {
    let spec =
        FluidSpec { bubble_point_psia: Some(2_650.0), salinity_ppm: 35_000.0, ..FluidSpec::new(34.0, 0.78, 620.0) };
    BlackOil::new(&spec, 190.0).expect("a valid fluid")
}

/// Pressure, psia, and temperature, degF, from wellhead to perforations.
fn points(low_psia: f64, high_psia: f64) -> Vec<(f64, f64)> {
    (0..POINTS)
        .map(|i| {
            let part = i as f64 / (POINTS - 1) as f64;
            (low_psia + part * (high_psia - low_psia), 110.0 + 80.0 * part)
        })
        .collect()
}

#[divan::bench]
fn in_situ_saturated(bencher: Bencher) {
    let (fluid, points) = (fluid(), points(200.0, 2_300.0));
    bencher.bench(|| points.iter().map(|&(p, t)| black_box(fluid.in_situ(p, t, 620.0)).bo_rb_stb).sum::<f64>());
}

#[divan::bench]
fn in_situ_undersaturated(bencher: Bencher) {
    let (fluid, points) = (fluid(), points(2_700.0, 4_500.0));
    bencher.bench(|| points.iter().map(|&(p, t)| black_box(fluid.in_situ(p, t, 620.0)).bo_rb_stb).sum::<f64>());
}

#[divan::bench]
fn compressibility_factor(bencher: Bencher) {
    bencher.bench(|| {
        (0..POINTS)
            .map(|i| dranchuk_abou_kassem::z_factor(black_box(0.2 + 0.008 * i as f64), black_box(1.6)))
            .sum::<f64>()
    });
}

#[divan::bench]
fn tank_properties(bencher: Bencher) {
    let (fluid, points) = (fluid(), points(500.0, 4_000.0));
    bencher.bench(|| {
        points
            .iter()
            .map(|&(p, _)| {
                let rs = fluid.rs_saturated(p).min(620.0);
                fluid.bo(p, rs) + fluid.bg(p) + fluid.bw(p) + fluid.mu_o(p, rs) + fluid.mu_g(p) + fluid.mu_w(p)
            })
            .sum::<f64>()
    });
}

fn main() {
    divan::main();
}
