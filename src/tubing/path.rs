//! The path of the tubing: survey and sections made into stretches of one diameter, inclination and temperature slope.

use super::model::Pipe;
use super::restriction::Throat;
use super::{HeatSpec, RestrictionSpec, TubingSection, TubingSpec, heat};
use crate::fault::Fault;
use crate::roots::brent;

/// Temperatures at which the surface tension correlations turn a corner, degF (Baker-Swerdloff: oil between 68 and
/// 100, water between 74 and 280). Integration stops there, since it wants smooth functions.
const TENSION_CORNERS_DEGF: [f64; 4] = [68.0, 74.0, 100.0, 280.0];

/// Stretches shorter than this are joined to their neighbour, ft.
const LEAST_STRETCH_FT: f64 = 1e-6;
/// Restrictions nearer than this to one another are at one depth, ft.
const LEAST_RESTRICTION_GAP_FT: f64 = 1e-4;
/// Largest cross-section of a restriction relative to the pipe's.
const MOST_RESTRICTION: f64 = 0.999;
/// Nearer to a corner the march stands on it, degF.
const LEAST_CORNER_DEGF: f64 = 1e-6;

/// A straight stretch of pipe of one diameter.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Stretch {
    pub top_md_ft: f64,
    pub bottom_md_ft: f64,
    pub top_tvd_ft: f64,
    pub top_temperature_degf: f64,
    /// Temperature rise per foot of measured depth.
    pub temperature_slope_degf_ft: f64,
    /// What the stream has above that line at the bottom; it fades upwards over a relaxation length.
    pub excess_degf: f64,
    pub per_relaxation_1_ft: f64,
    /// Relaxation length per heat capacity of the stream; 0 where the temperature is given.
    pub heat_resistance_ft_h_degf_btu: f64,
    pub pipe: Pipe,
    /// Reciprocal of the cross-section, 1/ft2.
    pub per_area_1_ft2: f64,
    /// A restriction at the bottom.
    pub throat: Option<Throat>,
}

impl Stretch {
    #[inline]
    pub fn temperature_degf(&self, md_ft: f64) -> f64 {
        let line_degf = self.top_temperature_degf + self.temperature_slope_degf_ft * (md_ft - self.top_md_ft);
        if self.excess_degf == 0.0 {
            return line_degf;
        }
        line_degf + self.excess_degf * ((md_ft - self.bottom_md_ft) * self.per_relaxation_1_ft).exp()
    }

    /// Where the march from one depth to another has to stop first: the temperature passes a corner there. Stretches of
    /// given temperature are cut at them beforehand.
    pub fn next_stop_ft(&self, from_md_ft: f64, to_md_ft: f64) -> f64 {
        if self.excess_degf == 0.0 {
            return to_md_ft;
        }
        let (from, to) = (self.temperature_degf(from_md_ft), self.temperature_degf(to_md_ft));
        let part = |corner: f64| (corner - from) / (to - from);
        let Some(corner) = TENSION_CORNERS_DEGF
            .into_iter()
            .filter(|&corner| (corner - from).abs() > LEAST_CORNER_DEGF && part(corner) > 0.0 && part(corner) < 1.0)
            .min_by(|a, b| part(*a).total_cmp(&part(*b)))
        else {
            return to_md_ft;
        };
        let miss = |md_ft: f64| self.temperature_degf(md_ft) - corner;
        brent(miss, (from_md_ft, from - corner), (to_md_ft, to - corner), 1e-9)
    }

    pub fn tvd_ft(&self, md_ft: f64) -> f64 {
        self.top_tvd_ft + self.pipe.sin_inclination * (md_ft - self.top_md_ft)
    }
}

/// The whole path, from the wellhead to the perforations.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Path {
    pub stretches: Vec<Stretch>,
    pub perforations_md_ft: f64,
    pub perforations_tvd_ft: f64,
    /// Whether the temperature comes from the heat that the stream loses.
    pub loses_heat: bool,
}

impl Path {
    /// Checks the tubing and cuts it into stretches.
    pub fn new(
        spec: &TubingSpec,
        perforations_md_ft: Option<f64>,
        bottom_temperature_degf: f64,
    ) -> Result<Self, Vec<Fault>> {
        let mut faults = survey_faults(&spec.survey);
        let survey_is_good = faults.is_empty();
        let end_md_ft = spec.survey.last().map_or(0.0, |&(md_ft, _)| md_ft);
        let bottom_md_ft = perforations_md_ft.unwrap_or(end_md_ft);
        if survey_is_good {
            faults.extend(perforation_fault(bottom_md_ft, end_md_ft));
        }
        faults.extend(section_faults(spec, survey_is_good.then_some(bottom_md_ft)));
        faults.extend(temperature_faults(spec, bottom_temperature_degf));
        faults.extend(spec.heat.as_ref().map_or_else(Vec::new, |heat| heat_faults(heat, bottom_temperature_degf)));
        if faults.is_empty() {
            faults.extend(restriction_faults(spec, bottom_md_ft));
        }
        if !(0.0..=10.0).contains(&spec.slip_factor) {
            faults.push(
                Fault::new("slip_factor", format!("{} is no slip factor", spec.slip_factor))
                    .help("between 0 (no slip) and 10; 1 leaves the model as published"),
            );
        }
        if faults.is_empty() { Ok(cut(spec, bottom_md_ft, bottom_temperature_degf)) } else { Err(faults) }
    }
}

fn survey_faults(survey: &[(f64, f64)]) -> Vec<Fault> {
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

fn temperature_faults(spec: &TubingSpec, bottom_temperature_degf: f64) -> Vec<Fault> {
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

fn heat_faults(heat: &HeatSpec, bottom_temperature_degf: f64) -> Vec<Fault> {
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
fn restriction_faults(spec: &TubingSpec, bottom_md_ft: f64) -> Vec<Fault> {
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

/// The section at a measured depth.
fn section_at(spec: &TubingSpec, md_ft: f64) -> Option<&TubingSection> {
    spec.sections.iter().find(|section| md_ft < section.to_md_ft).or(spec.sections.last())
}

fn area_ft2(section: &TubingSection) -> f64 {
    std::f64::consts::PI * (section.diameter_in.powi(2) - section.inner_pipe_in.powi(2)) / (4.0 * 144.0)
}

fn perforation_fault(bottom_md_ft: f64, end_md_ft: f64) -> Option<Fault> {
    if bottom_md_ft.is_nan() || bottom_md_ft < 1.0 {
        return Some(Fault::new("perforations", format!("{bottom_md_ft} ft is no depth of perforations")));
    }
    // The slack of rounded tables again.
    (bottom_md_ft > end_md_ft + 0.01).then(|| {
        Fault::new("perforations", format!("{bottom_md_ft} ft lies below the end of the survey at {end_md_ft} ft"))
            .help("measured depth; extend the survey down to it")
    })
}

fn section_faults(spec: &TubingSpec, bottom_md_ft: Option<f64>) -> Vec<Fault> {
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

/// Vertical depth at a measured depth.
fn tvd_at(survey: &[(f64, f64)], md_ft: f64) -> f64 {
    let pair = survey.windows(2).find(|pair| md_ft <= pair[1].0).unwrap_or(&survey[survey.len() - 2..]);
    let fraction = (md_ft - pair[0].0) / (pair[1].0 - pair[0].0);
    pair[0].1 + fraction * (pair[1].1 - pair[0].1)
}

/// Temperature at a measured depth, and at every other depth of a path.
struct Temperatures<'a> {
    spec: &'a TubingSpec,
    bottom_md_ft: f64,
    bottom_tvd_ft: f64,
    bottom_degf: f64,
}

impl Temperatures<'_> {
    /// Linear against vertical depth down to the tank's: from the wellhead, or from the last point of the table, between
    /// whose points it is linear against measured depth.
    fn at_degf(&self, md_ft: f64) -> f64 {
        let table = &self.spec.temperatures;
        if let Some(i) = table.iter().position(|&(below_ft, _)| md_ft <= below_ft) {
            let (below_ft, below_degf) = table[i];
            let (above_ft, above_degf) = table[i.saturating_sub(1)];
            let part = if below_ft > above_ft { (md_ft - above_ft) / (below_ft - above_ft) } else { 1.0 };
            return above_degf + part * (below_degf - above_degf);
        }
        let wellhead_degf =
            self.spec.heat.map_or(self.spec.wellhead_temperature_degf, |heat| heat.surface_temperature_degf);
        let (top_ft, top_degf) = table.last().copied().unwrap_or((0.0, wellhead_degf));
        let top_tvd_ft = tvd_at(&self.spec.survey, top_ft);
        let height_ft = self.bottom_tvd_ft - top_tvd_ft;
        // A path without any depth has the upper temperature throughout.
        let slope_degf_ft = if height_ft > 0.0 { (self.bottom_degf - top_degf) / height_ft } else { 0.0 };
        top_degf + slope_degf_ft * (tvd_at(&self.spec.survey, md_ft) - top_tvd_ft)
    }

    /// Adds the depths at which the temperature passes a corner of the tension correlations; `ends` are all depths
    /// between which it is straight.
    fn add_corners(&self, ends: &mut Vec<f64>) {
        let mut corners = Vec::new();
        let mut above_ft = 0.0;
        for &below_ft in ends.iter().filter(|&&end_ft| end_ft <= self.bottom_md_ft) {
            let (top_degf, bottom_degf) = (self.at_degf(above_ft), self.at_degf(below_ft));
            for corner_degf in TENSION_CORNERS_DEGF {
                let fraction = (corner_degf - top_degf) / (bottom_degf - top_degf);
                if fraction > 0.0 && fraction < 1.0 {
                    corners.push(above_ft + fraction * (below_ft - above_ft));
                }
            }
            above_ft = below_ft;
        }
        ends.extend(corners);
    }
}

/// Sorts depths within the path and joins those that nearly coincide; the last is the bottom.
fn tidy(ends: &mut Vec<f64>, bottom_md_ft: f64) {
    ends.retain(|&md_ft| md_ft > LEAST_STRETCH_FT && md_ft < bottom_md_ft - LEAST_STRETCH_FT);
    ends.push(bottom_md_ft);
    ends.sort_by(f64::total_cmp);
    ends.dedup_by(|below, above| *below - *above < LEAST_STRETCH_FT);
}

fn cut(spec: &TubingSpec, bottom_md_ft: f64, bottom_temperature_degf: f64) -> Path {
    let survey = &spec.survey;
    let bottom_tvd_ft = tvd_at(survey, bottom_md_ft);
    let temperatures = Temperatures { spec, bottom_md_ft, bottom_tvd_ft, bottom_degf: bottom_temperature_degf };

    let mut ends: Vec<f64> = survey.iter().map(|&(md_ft, _)| md_ft).collect();
    ends.extend(spec.sections.iter().map(|section| section.to_md_ft));
    ends.extend(spec.temperatures.iter().map(|&(md_ft, _)| md_ft));
    ends.extend(spec.restrictions.iter().map(|restriction| restriction.at_md_ft));
    tidy(&mut ends, bottom_md_ft);
    if spec.heat.is_none() {
        temperatures.add_corners(&mut ends);
    }
    tidy(&mut ends, bottom_md_ft);

    let mut stretches = Vec::with_capacity(ends.len());
    let (mut top_md_ft, mut top_tvd_ft) = (0.0, 0.0);
    for end_md_ft in ends {
        let end_tvd_ft = tvd_at(survey, end_md_ft);
        let length_ft = end_md_ft - top_md_ft;
        let middle_ft = top_md_ft + 0.5 * length_ft;
        if let Some(section) = section_at(spec, middle_ft) {
            // An annulus: its hydraulic diameter in the correlations, its true cross-section in the velocities.
            let (outer_in, inner_in) = (section.diameter_in, section.inner_pipe_in);
            let sin_inclination = (end_tvd_ft - top_tvd_ft) / length_ft;
            let pipe = Pipe::new(outer_in - inner_in, section.roughness_in, sin_inclination);
            let (top_degf, end_degf) = (temperatures.at_degf(top_md_ft), temperatures.at_degf(end_md_ft));
            stretches.push(Stretch {
                top_md_ft,
                bottom_md_ft: end_md_ft,
                top_tvd_ft,
                top_temperature_degf: top_degf,
                temperature_slope_degf_ft: (end_degf - top_degf) / length_ft,
                pipe,
                excess_degf: 0.0,
                per_relaxation_1_ft: 0.0,
                heat_resistance_ft_h_degf_btu: spec
                    .heat
                    .map_or(0.0, |heat| heat::resistance_ft_h_degf_btu(&heat, outer_in / 24.0)),
                per_area_1_ft2: 1.0 / area_ft2(section),
                throat: throat_at(spec, end_md_ft, section),
            });
        }
        (top_md_ft, top_tvd_ft) = (end_md_ft, end_tvd_ft);
    }
    Path {
        stretches,
        perforations_md_ft: bottom_md_ft,
        perforations_tvd_ft: bottom_tvd_ft,
        loses_heat: spec.heat.is_some(),
    }
}

/// The restriction at the end of a stretch in `above`.
fn throat_at(spec: &TubingSpec, end_md_ft: f64, above: &TubingSection) -> Option<Throat> {
    let at = |restriction: &&RestrictionSpec| (restriction.at_md_ft - end_md_ft).abs() < LEAST_RESTRICTION_GAP_FT;
    let restriction = spec.restrictions.iter().find(at)?;
    let below = section_at(spec, end_md_ft + LEAST_RESTRICTION_GAP_FT)?;
    let (diameter_in, discharge) = (restriction.diameter_in, restriction.discharge_coefficient);
    Some(Throat::new(diameter_in, discharge, area_ft2(above), area_ft2(below)))
}
