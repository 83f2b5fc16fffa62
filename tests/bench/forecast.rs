//! An operating point, a balance closure and a whole forecast: `cargo bench --bench forecast`.
#![allow(clippy::unwrap_used, missing_docs)]

#[path = "../common/fields.rs"]
mod fields;

use divan::{Bencher, black_box};
use wane::forecast::{Field, run};
use wane::tank::Cumulatives;
use wane::tubing::TubingMethod;
use wane::well::{Gauge, right_crossing};

fn main() {
    divan::main();
}

/// A well looked at from scratch: margin over all rates and right-most crossing.
#[divan::bench]
fn operating_point_from_scratch(bencher: Bencher) {
    let field = Field::new(&fields::one_well()).unwrap();
    let gauge = Gauge::default();
    let now = field.wells()[0].now(field.fluid(), field.start(), 0.0, 0.0, &gauge);
    bencher.bench_local(|| black_box(now.survey()));
}

/// The same crossing followed from a step before, as the right-hand side does.
#[divan::bench]
fn operating_point_followed(bencher: Bencher) {
    let field = Field::new(&fields::one_well()).unwrap();
    let gauge = Gauge::default();
    let now = field.wells()[0].now(field.fluid(), field.start(), 0.0, 0.0, &gauge);
    let rate = now.survey().right_crossing_stb_d.unwrap();
    let slope = (now.height_psi(rate + 0.1) - now.height_psi(rate - 0.1)) / 0.2;
    let open = now.curve.open_flow_stb_d();
    bencher.bench_local(|| right_crossing(|q| now.height_psi(q), black_box(0.995 * rate), slope, 1e-7, (0.0, open)));
}

/// Pressure and flowing ratios of the tank from its inventories.
#[divan::bench]
fn tank_state(bencher: Bencher) {
    let field = Field::new(&fields::one_well()).unwrap();
    let taken = Cumulatives { oil_stb: 2e6, gas_scf: 1.3e9, ..Cumulatives::default() };
    bencher.bench_local(|| field.tank().state(&field.tank().inventory(black_box(&taken)), 2400.0).unwrap());
}

/// One well, undersaturated to dead or to fifteen years, without files.
#[divan::bench(args = [TubingMethod::HasanKabir, TubingMethod::HagedornBrown, TubingMethod::BeggsBrill])]
fn forecast_of_fifteen_years(bencher: Bencher, method: TubingMethod) {
    let mut spec = fields::one_well();
    spec.wells[0].tubing.method = method;
    spec.wells[0].line_pressure_psia = 120.0;
    spec.wells[0].target_rate_stb_d = Some(800.0);
    bencher.bench_local(|| run(black_box(&spec)).unwrap());
}
