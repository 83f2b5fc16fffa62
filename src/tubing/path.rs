//! The path of the tubing: survey and sections made into stretches of one diameter, inclination and temperature slope.

use super::model::Pipe;
use super::path_checks::{
    heat_faults, perforation_fault, restriction_faults, section_faults, survey_faults, temperature_faults,
};
use super::restriction::Throat;
use super::{RestrictionSpec, TubingSection, TubingSpec, heat};
use crate::fault::Fault;
use crate::roots::brent;

/// Temperatures at which the surface tension correlations turn a corner, degF (Baker-Swerdloff: oil between 68 and
/// 100, water between 74 and 280). Integration stops there, since it wants smooth functions.
const TENSION_CORNERS_DEGF: [f64; 4] = [68.0, 74.0, 100.0, 280.0];

/// Stretches shorter than this are joined to their neighbour, ft.
pub(super) const LEAST_STRETCH_FT: f64 = 1e-6;
/// Restrictions nearer than this to one another are at one depth, ft.
pub(super) const LEAST_RESTRICTION_GAP_FT: f64 = 1e-4;
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

/// The section at a measured depth.
pub(super) fn section_at(spec: &TubingSpec, md_ft: f64) -> Option<&TubingSection> {
    spec.sections.iter().find(|section| md_ft < section.to_md_ft).or(spec.sections.last())
}

fn area_ft2(section: &TubingSection) -> f64 {
    std::f64::consts::PI * (section.diameter_in.powi(2) - section.inner_pipe_in.powi(2)) / (4.0 * 144.0)
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
