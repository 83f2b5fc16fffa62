//! The fluid as a whole: continuity, limits, faults.

use wane::fluid::{BlackOil, FluidSpec, ReservoirFluid};

fn osprey() -> FluidSpec {
    FluidSpec { bubble_point_psia: Some(2650.0), salinity_ppm: 35_000.0, ..FluidSpec::new(34.0, 0.78, 620.0) }
}

#[test]
fn tuning_passes_through_the_measured_bubble_point() {
    let fluid = BlackOil::new(&osprey(), 190.0).unwrap();
    let rs = fluid.rs_saturated(2650.0);
    assert!((rs - 620.0).abs() < 1e-9, "Rs at the measured bubble point {rs}");
    let pb = fluid.bubble_point_psia(620.0);
    assert!((pb - 2650.0).abs() < 1e-9, "bubble point {pb}");
    for p in [14.7, 100.0, 500.0, 1000.0, 1500.0, 2000.0, 2500.0, 2650.0, 3000.0, 4000.0] {
        println!("{:?}", fluid.table_row(p));
    }
    println!("{:#?}", fluid.in_situ(1000.0, 150.0, 620.0));
    println!("{:#?} {} {}", fluid.range_notes(), fluid.closure_limit_psia(), fluid.tuning_factor());
}
