//! Inflow of a well: from the tree to plain data.

use super::problem::Problem;
use super::read_wells::{EXCLUSIVE, exactly_one};
use super::reader::Reader;
use super::section::Section;
use super::tree::Value;
use crate::inflow::{
    CIRCLE, Coefficient, FutureRule, InflowMethod, InflowSpec, InflowTest, Measured, RateBasis, SHAPE_FACTORS,
};
use crate::units::parse_flow_coefficient;
use crate::well::LossSpec;

/// Shape factor of the drainage area, by word or number.
pub(super) fn shape_factor(reader: &mut Reader, well: &Section<'_>) -> f64 {
    let word = reader.choice(well, "drainage_shape", &[]);
    let number = reader.optional_number(well, "shape_factor");
    if word.is_some() && number.is_some() {
        reader.note(
            Problem::new(well.at("shape_factor"), "`drainage_shape` and `shape_factor` exclude each other")
                .label("only one of them is expected"),
        );
    }
    let named = word.and_then(|word| SHAPE_FACTORS.iter().find(|row| row.0 == word)).map(|row| row.1);
    number.or(named).unwrap_or(CIRCLE)
}

/// The inflow, and how fast the well loses it.
pub(super) fn inflow(reader: &mut Reader, well: &Section<'_>, tank_pressure_psia: f64) -> (InflowSpec, LossSpec) {
    let section = reader.section(well, "inflow");
    let method = match reader.choice(&section, "method", &[]) {
        Some("straight") => InflowMethod::Straight,
        Some("vogel") => InflowMethod::Vogel,
        Some("wiggins") => InflowMethod::Wiggins,
        Some("jones") => InflowMethod::Jones,
        Some("composite") => InflowMethod::Composite,
        _ => InflowMethod::Fetkovich,
    };
    let future = match reader.choice(&section, "future", &[]) {
        Some("mobility") => FutureRule::Mobility,
        Some("cubic") => FutureRule::Cubic,
        _ => FutureRule::Pressure,
    };
    let basis = match reader.choice(&section, "basis", &[]) {
        Some("oil") => RateBasis::Oil,
        _ => RateBasis::Liquid,
    };
    let exponent = reader.optional_number(&section, "exponent");
    exactly_one(reader, &section, "the inflow's coefficient", EXCLUSIVE[2].1);
    let flow_efficiency = reader.optional_number(&section, "flow_efficiency");
    let turbulence_psi_d2_stb2 = reader.optional_quantity(&section, "turbulence");
    for (key, owner, name) in [
        ("exponent", InflowMethod::Fetkovich, "fetkovich"),
        ("flow_efficiency", InflowMethod::Vogel, "vogel"),
        ("turbulence", InflowMethod::Jones, "jones"),
    ] {
        if section.has(key) && method != owner {
            reader.note(
                Problem::new(section.at(key), format!("`{key}` belongs to the method {name} alone"))
                    .label("not used by this method"),
            );
        }
    }
    if method == InflowMethod::Composite && basis == RateBasis::Oil {
        reader.note(
            Problem::new(section.at("basis"), "the composite of oil and water belongs to the rate of liquid")
                .label("basis = \"liquid\" is expected with this method"),
        );
    }
    if method == InflowMethod::Jones && !section.has("test") && !section.has("turbulence") {
        reader.note(
            Problem::new(section.at(""), "the method jones needs its turbulence b, or tests that give it")
                .label("`turbulence` is expected beside a stated coefficient"),
        );
    }
    let reservoir_psia = reader.optional_quantity(&section, "reservoir").unwrap_or(tank_pressure_psia);
    let tests: Vec<InflowTest> = if section.has("test") {
        reader.sections(&section, "test").iter().map(|test| inflow_test(reader, test)).collect()
    } else {
        Vec::new()
    };
    if section.has("test") && section.has("reservoir") {
        reader.note(
            Problem::new(section.at("reservoir"), "each test states its own reservoir pressure")
                .label("belongs to a stated coefficient alone"),
        );
    }
    // A thickness may be left behind by an override that sets another coefficient.
    if section.has("permeability") && !section.has("thickness") {
        reader.note(
            Problem::new(section.at("permeability"), "`permeability` stands alone")
                .label("`thickness` is expected beside it"),
        );
    }
    let permeability_md = reader.optional_quantity(&section, "permeability");
    let thickness_ft = reader.optional_quantity(&section, "thickness");
    if section.has("permeability")
        && !section.has("test")
        && !(well.has("drainage_radius") && well.has("wellbore_radius"))
    {
        reader.note(
            Problem::new(section.at("permeability"), "Darcy's productivity index needs the radii of drainage and well")
                .label("`drainage_radius` and `wellbore_radius` are expected in the well"),
        );
    }
    let index = reader.optional_quantity(&section, "productivity_index");
    let open_flow = reader.optional_quantity(&section, "open_flow");
    let c = flow_coefficient(reader, &section, method, exponent);
    let coefficient = if let Some(j_stb_d_psi) = index {
        Coefficient::ProductivityIndex { j_stb_d_psi, reservoir_psia }
    } else if let Some(permeability_md) = permeability_md {
        Coefficient::Darcy { permeability_md, thickness_ft: thickness_ft.unwrap_or(f64::NAN), reservoir_psia }
    } else if let Some(rate_stb_d) = open_flow {
        Coefficient::OpenFlow { rate_stb_d, reservoir_psia }
    } else if let Some(c) = c {
        Coefficient::Fetkovich { c, reservoir_psia }
    } else {
        Coefficient::Tests(tests)
    };
    let loss = LossSpec { yearly: reader.number(&section, "yearly_loss"), since: reader.day(&section, "loss_since") };
    reader.finish(&section);
    let spec = InflowSpec { method, future, basis, exponent, flow_efficiency, turbulence_psi_d2_stb2, coefficient };
    (spec, loss)
}

fn flow_coefficient(
    reader: &mut Reader,
    section: &Section<'_>,
    method: InflowMethod,
    exponent: Option<f64>,
) -> Option<f64> {
    let entry = section.get("coefficient")?;
    let at = entry.node.at.clone();
    let example = "0.00079 STB/d/psi^2n";
    if method != InflowMethod::Fetkovich {
        reader.note(
            Problem::new(at, "`coefficient` belongs to the method fetkovich alone")
                .label("not used by this method")
                .help("state productivity_index or open_flow"),
        );
        return Some(f64::NAN);
    }
    let Some(text) = entry.node.text() else {
        let what = match entry.node.value {
            Value::Number(_) => "has no unit".to_owned(),
            ref other => format!("is {}", other.kind()),
        };
        reader.note(
            Problem::new(at, format!("`well.inflow.coefficient` {what}"))
                .label(format!("a flow coefficient is expected, like \"{example}\"")),
        );
        return Some(f64::NAN);
    };
    let Some(exponent) = exponent else {
        reader.note(
            Problem::new(at, "the unit of `coefficient` depends on the exponent n, which is not given")
                .label("`exponent` is expected beside it"),
        );
        return Some(f64::NAN);
    };
    match parse_flow_coefficient(text, exponent) {
        Ok(c) if c > 0.0 && c.is_finite() => return Some(c),
        Ok(_) if exponent.is_nan() => {}
        Ok(_) => reader.note(
            Problem::new(at, "`well.inflow.coefficient` must be above 0")
                .label("a positive flow coefficient is expected"),
        ),
        Err(error) => {
            let mut problem = Problem::new(at, format!("`well.inflow.coefficient`: {}", error.message))
                .label("a flow coefficient is expected");
            problem.help = error.help;
            reader.note(problem);
        }
    }
    Some(f64::NAN)
}

fn inflow_test(reader: &mut Reader, section: &Section<'_>) -> InflowTest {
    if !section.has("flowing") && !section.has("wellhead") {
        reader.note(
            Problem::new(section.at(""), "the test's pressure is not given")
                .label("flowing, wellhead, or both are expected"),
        );
    }
    let flowing_psia = reader.optional_quantity(section, "flowing");
    let wellhead_psia = reader.optional_quantity(section, "wellhead");
    let gor_scf_stb = reader.optional_quantity(section, "gor");
    if section.has("wellhead") && !section.has("gor") {
        reader.note(
            Problem::new(
                section.at("wellhead"),
                "a separator test needs its gas-oil ratio to compute the pressure along the tubing",
            )
            .label("`gor` is expected beside it"),
        );
    }
    let measured = match (flowing_psia, wellhead_psia) {
        (None, Some(wellhead_psia)) => {
            Measured::Separator { wellhead_psia, gor_scf_stb: gor_scf_stb.unwrap_or(f64::NAN) }
        }
        (Some(flowing_psia), Some(wellhead_psia)) => {
            Measured::Both { flowing_psia, wellhead_psia, gor_scf_stb: gor_scf_stb.unwrap_or(f64::NAN) }
        }
        (flowing_psia, None) => Measured::Gauged { flowing_psia: flowing_psia.unwrap_or(f64::NAN) },
    };
    let test = InflowTest {
        on: reader.day(section, "on"),
        reservoir_psia: reader.quantity(section, "reservoir"),
        rate_stb_d: reader.quantity(section, "rate"),
        water_cut: reader.number(section, "water_cut"),
        measured,
    };
    reader.finish(section);
    test
}
