//! Strings and flows of the tubing tests.
#![allow(dead_code, missing_docs)]

use wane::tubing::model::Flow;
use wane::tubing::{TubingMethod, TubingSection, TubingSpec};

/// A string of sections (end, ft; diameter, in) along a survey (measured, vertical, ft).
pub fn string(method: TubingMethod, sections: &[(f64, f64)], survey: &[(f64, f64)], wellhead_degf: f64) -> TubingSpec {
    TubingSpec {
        method,
        sections: sections
            .iter()
            .map(|&(to_md_ft, diameter_in)| TubingSection {
                to_md_ft,
                diameter_in,
                roughness_in: 0.0006,
                inner_pipe_in: 0.0,
            })
            .collect(),
        survey: survey.to_vec(),
        slip_factor: 1.0,
        wellhead_temperature_degf: wellhead_degf,
        temperatures: Vec::new(),
        heat: None,
        restrictions: Vec::new(),
    }
}

/// A flow in situ: velocities ft/s, densities lb/ft3, viscosities cp, tension dyn/cm, pressure psia.
#[allow(clippy::too_many_arguments)]
pub fn flow(vsl: f64, vsg: f64, rhol: f64, rhog: f64, mul: f64, mug: f64, sigma: f64, p: f64) -> Flow {
    Flow {
        liquid_velocity_ft_s: vsl,
        gas_velocity_ft_s: vsg,
        no_slip_holdup: vsl / (vsl + vsg),
        liquid_density_lb_ft3: rhol,
        gas_density_lb_ft3: rhog,
        liquid_viscosity_cp: mul,
        gas_viscosity_cp: mug,
        tension_dyn_cm: sigma,
        pressure_psia: p,
    }
}

/// An expected value of `tests/data/flow.json`, and the absolute tolerance that the file states.
pub fn expected(id: &str, name: &str) -> (f64, f64) {
    let file = std::fs::File::open("tests/data/flow.json").expect("test data");
    let cases: serde_json::Value = serde_json::from_reader(std::io::BufReader::new(file)).expect("valid json");
    let case = cases.as_array().expect("a list").iter().find(|case| case["id"] == id).expect(id);
    let item = case["expected"].as_array().expect("values").iter().find(|item| item["name"] == name).expect(name);
    let value = item["value"].as_f64().expect("a number");
    (value, item["tol_abs"].as_f64().unwrap_or_else(|| item["tol_rel"].as_f64().expect("one") * value.abs()))
}
