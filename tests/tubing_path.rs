//! Path of the tubing: temperatures and annuli.
#![allow(clippy::unwrap_used)]

use wane::fluid::{BlackOil, FluidSpec};
use wane::tubing::{Stream, Tubing, TubingMethod, TubingSection, TubingSpec};

fn fluid() -> BlackOil {
    let spec = FluidSpec { bubble_point_psia: Some(2650.0), ..FluidSpec::new(34.0, 0.78, 620.0) };
    BlackOil::new(&spec, 190.0).expect("a sound fluid")
}

fn spec() -> TubingSpec {
    TubingSpec {
        method: TubingMethod::HasanKabir,
        sections: vec![TubingSection {
            to_md_ft: f64::INFINITY,
            diameter_in: 2.441,
            roughness_in: 0.0006,
            inner_pipe_in: 0.0,
        }],
        survey: vec![(0.0, 0.0), (3000.0, 3000.0), (9000.0, 8000.0)],
        slip_factor: 1.0,
        wellhead_temperature_degf: 110.0,
        temperatures: Vec::new(),
        heat: None,
        restrictions: Vec::new(),
    }
}

fn tubing(spec: &TubingSpec) -> Tubing {
    Tubing::new(spec, None, 190.0, 0.02).expect("a sound well")
}

const STREAM: Stream = Stream { liquid_rate_stb_d: 700.0, water_cut: 0.2, gor_scf_stb: 900.0 };

#[test]
fn temperatures_follow_the_table() {
    // Straight between points against measured depth; from the last one straight against vertical depth to the tank's.
    let table = TubingSpec { temperatures: vec![(0.0, 105.0), (1500.0, 140.0), (4500.0, 150.0)], ..spec() };
    let points = tubing(&table).profile(&fluid(), &STREAM, 200.0);
    // TVD at 4,500 ft is 4,250 ft; the bottom is at 8,000.
    let expected = |md_ft: f64, tvd_ft: f64| {
        if md_ft <= 1500.0 {
            105.0 + md_ft * 35.0 / 1500.0
        } else if md_ft <= 4500.0 {
            140.0 + (md_ft - 1500.0) * 10.0 / 3000.0
        } else {
            150.0 + (tvd_ft - 4250.0) * 40.0 / 3750.0
        }
    };
    for point in &points {
        let degf = expected(point.md_ft, point.tvd_ft);
        assert!((point.temperature_degf - degf).abs() < 1e-9, "{point:?}: {degf}");
    }
    // A table down to the perforations leaves nothing to the tank's temperature.
    let whole = TubingSpec { temperatures: vec![(0.0, 105.0), (9000.0, 170.0)], ..spec() };
    let points = tubing(&whole).profile(&fluid(), &STREAM, 200.0);
    assert!((points.last().unwrap().temperature_degf - 170.0).abs() < 1e-9);
}

#[test]
fn a_table_that_says_the_same_gives_the_same() {
    // The default line against vertical depth, written as a table at the corner of the survey.
    let plain = tubing(&spec()).flowing_pressure(&fluid(), &STREAM, 200.0).pressure_psia;
    for temperatures in
        [vec![(0.0, 110.0)], vec![(0.0, 110.0), (3000.0, 140.0)], vec![(0.0, 110.0), (3000.0, 140.0), (9000.0, 190.0)]]
    {
        let found = tubing(&TubingSpec { temperatures, ..spec() }).flowing_pressure(&fluid(), &STREAM, 200.0);
        assert!((found.pressure_psia - plain).abs() < 0.005, "{} {plain}", found.pressure_psia);
    }
}

#[test]
fn bad_tables_of_temperature_are_faults() {
    let keys = |temperatures: Vec<(f64, f64)>| -> Vec<String> {
        let faults = Tubing::new(&TubingSpec { temperatures, ..spec() }, None, 190.0, 0.02).err().unwrap_or_default();
        faults.into_iter().map(|fault| fault.key).collect()
    };
    assert_eq!(keys(vec![(10.0, 110.0)]), ["temperature[0]"]);
    assert_eq!(keys(vec![(0.0, 110.0), (0.0, 120.0)]), ["temperature[1]"]);
    assert_eq!(keys(vec![(0.0, 110.0), (f64::NAN, 120.0)]), ["temperature[1]"]);
    assert_eq!(keys(vec![(0.0, 110.0), (5000.0, f64::NAN)]), ["temperature[1]"]);
}

fn annulus(outer_in: f64, inner_in: f64) -> TubingSpec {
    let mut spec = spec();
    (spec.sections[0].diameter_in, spec.sections[0].inner_pipe_in) = (outer_in, inner_in);
    spec
}

#[test]
fn an_annulus_has_its_cross_section_and_its_hydraulic_diameter() {
    // Dead water, so that single-phase friction can be written down: f rho v^2/(2 gc dh), Colebrook at Re = rho v dh/mu.
    let fluid = fluid();
    let water = Stream { liquid_rate_stb_d: 9000.0, water_cut: 1.0, gor_scf_stb: 0.0 };
    let (outer_in, inner_in) = (6.366, 2.875);
    let points = tubing(&annulus(outer_in, inner_in)).profile(&fluid, &water, 200.0);
    let top = points[0];
    let at = fluid.in_situ(200.0, 110.0, 0.0);
    let area_ft2 = std::f64::consts::PI / 4.0 * (outer_in * outer_in - inner_in * inner_in) / 144.0;
    let velocity = 9000.0 * 5.614_583 * at.bw_rb_stb / 86_400.0 / area_ft2;
    assert!((top.liquid_velocity_ft_s / velocity - 1.0).abs() < 1e-9, "{top:?} {velocity}");
    let hydraulic_ft = (outer_in - inner_in) / 12.0;
    let reynolds = 1488.0 * at.water_density_lb_ft3 * velocity * hydraulic_ft / at.mu_w_cp;
    // Colebrook by fixed point.
    let mut x = 7.0_f64;
    for _ in 0..60 {
        x = -2.0 * (0.0006 / (outer_in - inner_in) / 3.7 + 2.51 * x / reynolds).log10();
    }
    let friction = at.water_density_lb_ft3 * velocity * velocity / (x * x * 2.0 * 32.174 * hydraulic_ft * 144.0);
    assert!((top.friction_psi_ft / friction - 1.0).abs() < 1e-4, "{top:?} {friction}");
}

#[test]
fn a_pipe_that_does_not_go_in_is_a_fault() {
    for inner_in in [-1.0, 2.3, 5.0, f64::NAN] {
        let faults = Tubing::new(&annulus(2.441, inner_in), None, 190.0, 0.02).err().unwrap_or_default();
        assert_eq!(faults.iter().map(|fault| fault.key.as_str()).collect::<Vec<_>>(), ["inner_pipe"], "{inner_in}");
    }
}
