//! What is wrong with a tubing as the user states it.

use super::path::{LEAST_RESTRICTION_GAP_FT, LEAST_STRETCH_FT, section_at};
use super::{HeatSpec, RestrictionSpec, TubingSpec};
use crate::fault::Fault;

/// Largest cross-section of a restriction relative to the pipe's.
const MOST_RESTRICTION: f64 = 0.999;

pub(super) fn survey_faults(survey: &[(f64, f64)]) -> Vec<Fault> {
    let fault = |message: String, help: &str| vec![Fault::new("survey", message).help(help)];
    if survey.len() < 2 {
        return fault(
            format!("a survey needs two points or more, this one has {}", survey.len()),
            "from [\"0 ft\", \"0 ft\"] at the wellhead to the perforations",
        );
    }
    if survey.iter().any(|&(md_ft, tvd_ft)| !md_ft.is_finite() || !tvd_ft.is_finite() || md_ft.abs() > 1e5) {
        return fault("a depth is not a number, or beyond 100,000 ft".into(), "pairs of measured and vertical depth");
    }
    if survey[0] != (0.0, 0.0) {
        return fault(
            format!("begins at {} ft measured, {} ft vertical", survey[0].0, survey[0].1),
            "begin with [\"0 ft\", \"0 ft\"] at the wellhead",
        );
    }
    for (i, pair) in survey.windows(2).enumerate() {
        let (length_ft, height_ft) = (pair[1].0 - pair[0].0, pair[1].1 - pair[0].1);
        let (md_ft, tvd_ft) = pair[1];
        let point = i + 2;
        if length_ft <= 0.0 {
            return fault(
                format!("measured depth goes backwards at point {point}: {md_ft} ft after {} ft", pair[0].0),
                "measured depths must rise",
            );
        }
        if height_ft < 0.0 {
            return fault(
                format!("vertical depth goes backwards at point {point}: {tvd_ft} ft after {} ft", pair[0].1),
                "flow that runs downhill towards the wellhead is outside the models",
            );
        }
        // A little slack for rounded tables.
        if height_ft > length_ft * 1.001 + 0.01 {
            return fault(
                format!("vertical depth grows by {height_ft} ft over {length_ft} ft of pipe up to point {point}"),
                "each pair is [measured, vertical]; are they exchanged?",
            );
        }
    }
    Vec::new()
}

pub(super) fn temperature_faults(spec: &TubingSpec, bottom_temperature_degf: f64) -> Vec<Fault> {
    let mut faults = Vec::new();
    let mut check = |key: String, value: f64| {
        if !(value > 0.0 && value < 700.0) {
            faults.push(
                Fault::new(key, format!("{value} degF is no temperature of a flowing well"))
                    .help("between 0 and 700 degF"),
            );
        }
    };
    if spec.temperatures.is_empty() && spec.heat.is_none() {
        check("wellhead_temperature".into(), spec.wellhead_temperature_degf);
    }
    for (i, &(_, temperature_degf)) in spec.temperatures.iter().enumerate() {
        check(format!("temperature[{i}]"), temperature_degf);
    }
    check("bottom_temperature".into(), bottom_temperature_degf);
    let depths = || spec.temperatures.iter().map(|point| point.0);
    if depths().next().is_some_and(|first_ft| first_ft != 0.0) {
        faults.push(
            Fault::new("temperature[0]", "the temperatures do not begin at the wellhead")
                .help("the first point lies at 0 ft of measured depth"),
        );
    }
    if let Some(i) =
        depths().zip(depths().skip(1)).position(|(above_ft, below_ft)| below_ft.is_nan() || below_ft <= above_ft)
    {
        faults.push(
            Fault::new(format!("temperature[{}]", i + 1), "the temperatures do not go down from point to point")
                .help("each point is [measured depth, temperature], from the wellhead down"),
        );
    }
    faults
}

pub(super) fn heat_faults(heat: &HeatSpec, bottom_temperature_degf: f64) -> Vec<Fault> {
    let mut faults = Vec::new();
    let surface_degf = heat.surface_temperature_degf;
    if surface_degf.is_nan() || surface_degf < -40.0 || surface_degf > bottom_temperature_degf {
        faults.push(
            Fault::new("heat.surface_temperature", format!("{surface_degf} degF is not that of ground above the tank"))
                .help("between -40 degF and the tank's temperature"),
        );
    }
    for (name, value) in [
        ("conductivity", heat.conductivity_btu_h_ft_degf),
        ("diffusivity", heat.diffusivity_ft2_h),
        ("wellbore_radius", heat.wellbore_radius_ft),
        ("producing_time", heat.producing_time_d),
    ] {
        if !(value > 0.0 && value < f64::INFINITY) {
            faults.push(Fault::new(format!("heat.{name}"), format!("{value} is not above 0")));
        }
    }
    // Infinite: the completion holds nothing back.
    if heat.transfer_btu_h_ft2_degf.is_nan() || heat.transfer_btu_h_ft2_degf <= 0.0 {
        faults.push(Fault::new("heat.transfer", format!("{} is not above 0", heat.transfer_btu_h_ft2_degf)));
    }
    faults
}

/// Of a tubing that is sound otherwise.
pub(super) fn restriction_faults(spec: &TubingSpec, bottom_md_ft: f64) -> Vec<Fault> {
    let mut faults = Vec::new();
    for (i, restriction) in spec.restrictions.iter().enumerate() {
        let RestrictionSpec { at_md_ft, diameter_in, discharge_coefficient } = *restriction;
        let key = |name: &str| format!("restrictions[{i}].{name}");
        if !(at_md_ft > LEAST_STRETCH_FT && at_md_ft <= bottom_md_ft) {
            faults.push(
                Fault::new(key("at"), format!("{at_md_ft} ft lies outside the tubing"))
                    .help("below the wellhead, down to the perforations"),
            );
            continue;
        }
        if spec.restrictions[..i].iter().any(|above| (above.at_md_ft - at_md_ft).abs() < LEAST_RESTRICTION_GAP_FT) {
            faults.push(
                Fault::new(key("at"), format!("there are two restrictions at {at_md_ft} ft"))
                    .help("state the smaller one alone"),
            );
        }
        // The pipe on both sides of it; an annulus by its cross-section.
        let least_in2 = [-1.0, 1.0]
            .into_iter()
            .filter_map(|side| section_at(spec, at_md_ft + side * LEAST_STRETCH_FT))
            .map(|section| section.diameter_in.powi(2) - section.inner_pipe_in.powi(2))
            .fold(f64::INFINITY, f64::min);
        if !(diameter_in > 0.0 && diameter_in * diameter_in < MOST_RESTRICTION * least_in2) {
            faults.push(
                Fault::new(key("diameter"), format!("{diameter_in} in does not restrict the tubing there"))
                    .help(format!("above 0 and below the {:.3} in of the tubing", least_in2.sqrt())),
            );
        }
        if !(discharge_coefficient > 0.0 && discharge_coefficient <= 1.0) {
            faults.push(
                Fault::new(key("discharge"), format!("{discharge_coefficient} is no coefficient of discharge"))
                    .help("above 0 and at most 1"),
            );
        }
    }
    faults
}

pub(super) fn perforation_fault(bottom_md_ft: f64, end_md_ft: f64) -> Option<Fault> {
    if bottom_md_ft.is_nan() || bottom_md_ft < 1.0 {
        return Some(Fault::new("perforations", format!("{bottom_md_ft} ft is no depth of perforations")));
    }
    // The slack of rounded tables again.
    (bottom_md_ft > end_md_ft + 0.01).then(|| {
        Fault::new("perforations", format!("{bottom_md_ft} ft lies below the end of the survey at {end_md_ft} ft"))
            .help("measured depth; extend the survey down to it")
    })
}

pub(super) fn section_faults(spec: &TubingSpec, bottom_md_ft: Option<f64>) -> Vec<Fault> {
    if spec.sections.is_empty() {
        return vec![Fault::new("diameter", "no diameter is given").help("diameter = \"2.441 in\", or sections")];
    }
    // One stretch without an end was stated as plain diameter and roughness.
    let plain = spec.sections.len() == 1 && spec.sections[0].to_md_ft.is_infinite();
    let key = |i: usize, name: &str| if plain { name.to_owned() } else { format!("sections[{i}].{name}") };
    let mut faults = Vec::new();
    let mut above_ft = 0.0;
    for (i, section) in spec.sections.iter().enumerate() {
        let (diameter_in, roughness_in) = (section.diameter_in, section.roughness_in);
        if !(0.25..=30.0).contains(&diameter_in) {
            faults.push(
                Fault::new(key(i, "diameter"), format!("{diameter_in} in is no inside diameter of tubing"))
                    .help("between 0.25 and 30 in"),
            );
        } else if !(0.0..=0.05 * diameter_in).contains(&roughness_in) {
            faults.push(
                Fault::new(key(i, "roughness"), format!("{roughness_in} in is outside the friction factor's range"))
                    .help("between 0 and 5 % of the diameter; 0.0006 in is usual"),
            );
        } else if !(0.0..=diameter_in - 0.25).contains(&section.inner_pipe_in) {
            faults.push(
                Fault::new(
                    key(i, "inner_pipe"),
                    format!("a pipe of {} in does not go into {diameter_in} in", section.inner_pipe_in),
                )
                .help("its outside diameter leaves at least 0.25 in of the inside diameter around it"),
            );
        }
        if section.to_md_ft.is_nan() || section.to_md_ft <= above_ft {
            faults.push(
                Fault::new(
                    key(i, "to"),
                    format!("ends at {} ft, above its own top at {above_ft} ft", section.to_md_ft),
                )
                .help("sections run from the wellhead down"),
            );
        }
        above_ft = section.to_md_ft;
    }
    if let Some(bottom_md_ft) = bottom_md_ft
        && above_ft < bottom_md_ft - 0.01
    {
        faults.push(
            Fault::new(
                key(spec.sections.len() - 1, "to"),
                format!("the last section ends at {above_ft} ft, above the perforations at {bottom_md_ft} ft"),
            )
            .help("the last section reaches the perforations; it may have no end"),
        );
    }
    faults
}
