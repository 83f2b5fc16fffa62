//! The inflow of a well, given or fitted to its tests, and in words.

use super::{Surroundings, WellModel, WellSpec, oil_gradient_psi_ft};
use crate::fault::Fault;
use crate::inflow::{
    Coefficient, Fit, Inflow, InflowMethod, InflowSpec, Measured, RateBasis, Shape, TestPoint, darcy_index_stb_d_psi,
    drainage_term, fit_jones, fit_saturated_below_datum, fit_shape, fit_tests,
};
use crate::tubing::{Stream, Tubing};

/// Bubble point of the oil in the tank when its pressure was this, psia: below the first one the pressure itself, as in the forecast.
pub(super) fn bubble_point_then(datum_psia: f64, around: &Surroundings) -> f64 {
    around.fluid.initial_bubble_point_psia().min(datum_psia)
}

/// kro/(mu_o*Bo) that goes with a coefficient found at this pressure of the tank: undisturbed oil above the bubble point, the
/// saturations at the start of the forecast below it (those at the time of the test are not known).
pub(super) fn reference_mobility(reservoir_psia: f64, around: &Surroundings) -> f64 {
    let undisturbed = around.tank.undisturbed_mobility_1_cp(reservoir_psia);
    if reservoir_psia >= around.fluid.initial_bubble_point_psia() {
        undisturbed
    } else {
        let start = around.start;
        start.oil_mobility_1_cp * undisturbed / around.tank.undisturbed_mobility_1_cp(start.pressure_psia)
    }
}

pub(super) fn fit_inflow(
    spec: &WellSpec,
    tubing: &Tubing,
    depth_below_datum_ft: f64,
    around: &Surroundings,
) -> Result<(Inflow, Option<Fit>, Vec<TestPoint>), Vec<Fault>> {
    let inflow = &spec.inflow;
    let bubble_point = around.fluid.initial_bubble_point_psia();
    let at_perforations = |datum_psia: f64| {
        let rs = around.fluid.spec().solution_gor_scf_stb;
        datum_psia + depth_below_datum_ft * oil_gradient_psi_ft(around.fluid, datum_psia, around.temperature_degf, rs)
    };
    let n = inflow.exponent.unwrap_or(1.0);
    let turbulence = inflow.turbulence_psi_d2_stb2.unwrap_or(0.0);
    // Of a coefficient J, which Jones's shape alone looks at.
    let shape_at = |j: f64| match inflow.method {
        InflowMethod::Straight => Shape::Straight,
        InflowMethod::Vogel => vogel(inflow),
        InflowMethod::Wiggins => Shape::Wiggins,
        InflowMethod::Fetkovich => Shape::Fetkovich { n },
        InflowMethod::Jones => Shape::Jones { turbulence_1_psi: turbulence * j * j },
        InflowMethod::Composite => Shape::Composite { water_cut: 0.0 },
    };
    let effective = |datum_psia: f64| at_perforations(datum_psia).min(bubble_point_then(datum_psia, around));
    let carried = |shape: Shape, coefficient: f64, datum_psia: f64| Inflow {
        shape,
        future: inflow.future,
        basis: inflow.basis,
        coefficient,
        reference_psia: effective(datum_psia),
        reference_mobility_1_cp: reference_mobility(datum_psia, around),
    };
    // From J of the general form to the method's own coefficient.
    let given = |j: f64, datum_psia: f64| {
        let shape = shape_at(j);
        let coefficient = match shape {
            Shape::Fetkovich { n } => j / (2.0 * effective(datum_psia).powf(2.0 * n - 1.0)),
            _ => j,
        };
        Ok((carried(shape, coefficient, datum_psia), None, Vec::new()))
    };
    match &inflow.coefficient {
        Coefficient::ProductivityIndex { j_stb_d_psi, reservoir_psia } => given(*j_stb_d_psi, *reservoir_psia),
        Coefficient::Darcy { permeability_md, thickness_ft, reservoir_psia } => {
            let r = drainage_term(spec.radii_ft, spec.shape_factor);
            let mobility = reference_mobility(*reservoir_psia, around);
            let j = darcy_index_stb_d_psi(*permeability_md, *thickness_ft, mobility, r, spec.skin_at_test);
            given(j, *reservoir_psia)
        }
        Coefficient::OpenFlow { rate_stb_d, reservoir_psia } => {
            let pr = at_perforations(*reservoir_psia);
            let j = if inflow.method == InflowMethod::Jones {
                let laminar_psi = pr - turbulence * rate_stb_d * rate_stb_d;
                if laminar_psi <= 0.0 {
                    let message = "at this open flow the turbulence alone takes more than the reservoir pressure";
                    return Err(vec![Fault::new("inflow.turbulence", message)]);
                }
                rate_stb_d / laminar_psi
            } else {
                rate_stb_d / shape_at(1.0).drawdown(pr, effective(*reservoir_psia), 0.0)
            };
            given(j, *reservoir_psia)
        }
        Coefficient::Fetkovich { c, reservoir_psia } => {
            Ok((carried(Shape::Fetkovich { n }, *c, *reservoir_psia), None, Vec::new()))
        }
        Coefficient::Tests(tests) => {
            let mut faults = Vec::new();
            let mut points = Vec::new();
            for (i, test) in tests.iter().enumerate() {
                let reservoir_psia = at_perforations(test.reservoir_psia);
                let flowing_psia = match test.measured {
                    Measured::Gauged { flowing_psia } | Measured::Both { flowing_psia, .. } => flowing_psia,
                    Measured::Separator { wellhead_psia, gor_scf_stb } => {
                        let stream =
                            Stream { liquid_rate_stb_d: test.rate_stb_d, water_cut: test.water_cut, gor_scf_stb };
                        tubing.flowing_pressure(around.fluid, &stream, wellhead_psia).pressure_psia
                    }
                };
                if flowing_psia >= reservoir_psia {
                    faults.push(
                        Fault::new(
                            format!("inflow.test[{i}]"),
                            format!("flowing pressure {flowing_psia:.0} psia at the perforations is not below the reservoir's {reservoir_psia:.0} psia"),
                        )
                        .help("check the wellhead pressure, the rate, the gas-oil ratio and the tubing of this test"),
                    );
                }
                let rate_stb_d = match inflow.basis {
                    RateBasis::Liquid => test.rate_stb_d,
                    RateBasis::Oil => test.rate_stb_d * (1.0 - test.water_cut),
                };
                points.push(TestPoint {
                    reservoir_psia,
                    effective_psia: effective(test.reservoir_psia),
                    flowing_psia,
                    rate_stb_d,
                    water_cut: test.water_cut,
                });
            }
            if !faults.is_empty() {
                return Err(faults);
            }
            let saturated = tests.iter().all(|t| t.reservoir_psia <= bubble_point * (1.0 + 1e-9));
            let fit =
                fit_points(inflow, &points, saturated).map_err(|message| vec![Fault::new("inflow.test", message)])?;
            Ok((carried(fit.shape, fit.coefficient, tests[0].reservoir_psia), Some(fit), points))
        }
    }
}

/// Vogel's curve, of a damaged or stimulated well where that is stated.
fn vogel(inflow: &InflowSpec) -> Shape {
    inflow.flow_efficiency.map_or(Shape::Vogel, |efficiency| Shape::FlowEfficiency { efficiency })
}

/// Fits the points. Perforations below the datum stand above the bubble point of a saturated tank: its tests give n all the same.
fn fit_points(inflow: &InflowSpec, points: &[TestPoint], saturated: bool) -> Result<Fit, String> {
    let below_datum = points.iter().any(|p| p.reservoir_psia > p.effective_psia * (1.0 + 1e-9));
    let free_n = inflow.method == InflowMethod::Fetkovich && inflow.exponent.is_none() && points.len() > 1;
    match inflow.method {
        InflowMethod::Vogel => fit_shape(vogel(inflow), points),
        InflowMethod::Jones => fit_jones(inflow.turbulence_psi_d2_stb2, points),
        _ if saturated && below_datum && free_n => fit_saturated_below_datum(points),
        method => fit_tests(method, inflow.exponent, points),
    }
}

impl WellModel {
    /// The inflow equation in words and figures.
    pub fn inflow_text(&self) -> String {
        let at = self.inflow.reference_psia;
        let basis = match self.inflow.basis {
            RateBasis::Liquid => "liquid",
            RateBasis::Oil => "oil",
        };
        let origin = match &self.fit {
            Some(fit) if fit.n_fitted => format!("fitted to {} tests", self.tests.len()),
            Some(_) if self.tests.len() == 1 => "from a single test".to_owned(),
            Some(_) => format!("fitted to {} tests", self.tests.len()),
            None if matches!(self.spec.inflow.coefficient, Coefficient::Darcy { .. }) => {
                "from permeability and thickness".to_owned()
            }
            None => "as given".to_owned(),
        };
        let origin = match 100.0 * self.spec.loss.yearly {
            0.0 => origin,
            lost => format!("{origin}, less {lost:.1} % in every year"),
        };
        let c = self.inflow.coefficient;
        let name = match self.inflow.shape {
            Shape::Fetkovich { n } => {
                return format!("Fetkovich, C = {c:.4e} STB/d/psi^2n ({basis}), n = {n:.3} at {at:.0} psia, {origin}");
            }
            Shape::Straight => "straight line".to_owned(),
            Shape::Vogel => "Vogel".to_owned(),
            Shape::Wiggins => "Wiggins".to_owned(),
            Shape::FlowEfficiency { efficiency } => format!("Vogel at a flow efficiency of {efficiency:.3}"),
            Shape::Jones { turbulence_1_psi } => {
                let b = turbulence_1_psi / (c * c);
                format!("Jones, Blount and Glaze, b = {b:.3e} psi/(STB/d)^2")
            }
            Shape::Composite { .. } => "composite of oil by Vogel and straight water".to_owned(),
        };
        format!("{name}, J = {c:.4} STB/d/psi ({basis}) at {at:.0} psia, {origin}")
    }
}
