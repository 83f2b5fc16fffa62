//! What no engineer would accept, though each value alone may pass: faults by path.
//!
//! Comparisons with NaN are false, so a value that could not be read causes no second message.

use crate::fault::Fault;
use crate::fluid::FluidSpec;
use crate::forecast::{InjectionControl, InjectorSpec, PeriodSpec};
use crate::inflow::{Coefficient, drainage_term};
use crate::tank::{TankSpec, WaterModel};
use crate::well::WellSpec;
use jiff::civil::Date;

/// Rounding that two ways of writing one pressure may differ by, psi.
pub(super) const SAME_PRESSURE_PSI: f64 = 0.05;
/// Rounding that depths in a survey may carry, ft.
pub(super) const DEPTH_ROUNDING_FT: f64 = 0.01;

/// The calendar.
pub(super) fn period(period: &PeriodSpec) -> Vec<Fault> {
    let mut out = Vec::new();
    if period.end <= period.start {
        out.push(
            Fault::new(
                "period.end|period.start",
                format!("the period ends on {} but starts on {}", period.end, period.start),
            )
            .help("period.end is the day after the last and must come after period.start"),
        );
    } else if i32::from(period.end.year()) - i32::from(period.start.year()) > 100 {
        out.push(Fault::new("period.end", "the period is longer than a hundred years").help("check the year"));
    }
    out
}

/// Fluid alone and fluid against tank.
pub(super) fn fluid(fluid: &FluidSpec, atmospheric_pressure_psia: f64) -> Vec<Fault> {
    let mut out = Vec::new();
    if fluid.h2s_fraction + fluid.co2_fraction >= 1.0 {
        out.push(
            Fault::new("fluid.co2", "h2s and co2 together leave no hydrocarbon gas")
                .help("they are mole fractions of the gas, with a sum below 1"),
        );
    }
    if let Some(bubble_point_psia) = fluid.bubble_point_psia
        && bubble_point_psia < atmospheric_pressure_psia
    {
        out.push(
            Fault::new("fluid.bubble_point", "the bubble point lies below atmospheric pressure").help("check the unit"),
        );
    }
    out
}

/// The tank, alone and against the fluid.
pub(super) fn tank(tank: &TankSpec, fluid: &FluidSpec, atmospheric_pressure_psia: f64) -> Vec<Fault> {
    let mut out = Vec::new();
    if tank.pressure_psia <= atmospheric_pressure_psia {
        out.push(Fault::new("tank.pressure", "the initial pressure is not above atmospheric").help("check the unit"));
    }
    if let Some(bubble_point_psia) = fluid.bubble_point_psia {
        if bubble_point_psia > tank.pressure_psia + SAME_PRESSURE_PSI {
            out.push(
                Fault::new(
                    "fluid.bubble_point|tank.pressure",
                    format!(
                        "the bubble point ({bubble_point_psia:.1} psia) lies above the initial pressure ({:.1} psia)",
                        tank.pressure_psia
                    ),
                )
                .help("oil above its bubble point holds no free gas: a tank with a gas cap has both pressures equal"),
            );
        } else if tank.gas_cap_ratio > 0.0 && bubble_point_psia < tank.pressure_psia - SAME_PRESSURE_PSI {
            out.push(
                Fault::new(
                    "fluid.bubble_point|tank.gas_cap_ratio|tank.pressure",
                    format!(
                        "there is a gas cap, but the bubble point ({bubble_point_psia:.1} psia) is not the initial \
                         pressure ({:.1} psia)",
                        tank.pressure_psia
                    ),
                )
                .help("oil in contact with a gas cap is saturated: make them equal, or set tank.gas_cap_ratio to 0"),
            );
        }
    }
    let kr = &tank.relative_permeability;
    if tank.connate_water + kr.residual_oil_to_gas + kr.critical_gas >= 1.0 {
        out.push(
            Fault::new(
                "tank.relative_permeability.residual_oil_to_gas|tank.connate_water\
                 |tank.relative_permeability.critical_gas",
                "connate water, residual oil to gas and critical gas leave no mobile oil",
            )
            .help(format!("{} + {} + {} must be below 1", tank.connate_water, kr.residual_oil_to_gas, kr.critical_gas)),
        );
    }
    if tank.connate_water + kr.residual_oil_to_water >= 1.0 {
        out.push(
            Fault::new(
                "tank.relative_permeability.residual_oil_to_water|tank.connate_water",
                "connate water and residual oil to water leave no mobile oil",
            )
            .help(format!("{} + {} must be below 1", tank.connate_water, kr.residual_oil_to_water)),
        );
    }
    if tank.water_model == WaterModel::Displacement && kr.oil_exponent.min(kr.water_exponent) < 1.0 {
        out.push(
            Fault::new(
                "tank.relative_permeability.oil_exponent|tank.relative_permeability.water_exponent|tank.water.model",
                "the water model \"displacement\" needs Corey exponents of at least 1",
            )
            .help("below 1 the fractional flow curve has no single front"),
        );
    }
    if let Some(produced) = &tank.produced {
        if produced.oil_stb >= tank.oil_in_place_stb {
            out.push(
                Fault::new("tank.produced.oil|tank.oil_in_place", "more oil was produced than there was in place")
                    .help("check tank.oil_in_place and the units of both"),
            );
        }
        let all_gas_scf = tank.oil_in_place_stb * fluid.solution_gor_scf_stb;
        if tank.gas_cap_ratio == 0.0 && produced.gas_scf - produced.injected_gas_scf >= all_gas_scf {
            out.push(
                Fault::new(
                    "tank.produced.gas|fluid.solution_gor|tank.oil_in_place",
                    "more gas was produced than there was in solution",
                )
                .help("check fluid.solution_gor and the unit of the produced gas"),
            );
        }
    }
    out
}

/// One well; `path` is where it stands (`well[0]`).
pub(super) fn well(
    path: &str,
    well: &WellSpec,
    period: Option<&PeriodSpec>,
    tank: &TankSpec,
    atmospheric_pressure_psia: f64,
) -> Vec<Fault> {
    let mut out = dates(well.start, well.end, period);
    let line_key = if well.shared_line.is_some() { "line" } else { "line_pressure" };
    if well.line_pressure_psia < atmospheric_pressure_psia - SAME_PRESSURE_PSI {
        out.push(
            Fault::new(
                line_key,
                format!(
                    "the line pressure ({:.2} psia) lies below atmospheric pressure \
                     ({atmospheric_pressure_psia:.2} psia)",
                    well.line_pressure_psia
                ),
            )
            .help("was a gauge pressure meant? write psig or barg"),
        );
    }
    if well.line_pressure_psia >= tank.pressure_psia {
        out.push(
            Fault::new(line_key, "the line pressure is not below the tank's initial pressure: the well can never flow")
                .help("check the unit"),
        );
    }
    if well.minimum_flowing_pressure_psia.is_some_and(|floor_psia| floor_psia >= tank.pressure_psia) {
        out.push(
            Fault::new(
                "minimum_flowing_pressure",
                "the lowest flowing pressure is not below the tank's initial pressure",
            )
            .help("no drawdown is left"),
        );
    }
    if let (Some(target), Some(minimum)) = (well.target_rate_stb_d, well.minimum_rate_stb_d)
        && minimum > target
    {
        out.push(
            Fault::new("minimum_rate", "the minimum rate is above the target rate")
                .help("the well would be given up at once"),
        );
    }
    let log_radii = match well.radii_ft {
        Some((drainage_ft, wellbore_ft)) if drainage_ft <= 3.0 * wellbore_ft => {
            out.push(
                Fault::new("drainage_radius", "the drainage radius is hardly larger than the wellbore's")
                    .help("check the units of both radii"),
            );
            f64::NAN
        }
        radii => drainage_term(radii, well.shape_factor),
    };
    for (key, skin) in [("skin", well.skin), ("skin_at_test", well.skin_at_test)] {
        if skin <= 1.0 - log_radii {
            out.push(
                Fault::new(key, format!("a skin of {skin} makes the inflow infinite or negative"))
                    .help(format!("it must be above {:.2}, which is 1 - r with r = {log_radii:.2}", 1.0 - log_radii)),
            );
        }
    }
    out.extend(inflow(well, atmospheric_pressure_psia).into_iter().map(|fault| fault.under("inflow")));
    out.extend(tubing(well, tank));
    out.extend(super::checks_surveys::flowing(well, tank, atmospheric_pressure_psia));
    out.into_iter().map(|fault| fault.under(path)).collect()
}

fn dates(start: Option<Date>, end: Option<Date>, period: Option<&PeriodSpec>) -> Vec<Fault> {
    let mut out = Vec::new();
    if let (Some(start), Some(end)) = (start, end)
        && end <= start
    {
        out.push(
            Fault::new("end", format!("it ends on {end} but starts on {start}")).help("end is the day after the last"),
        );
    }
    if let Some(period) = period {
        if start.is_some_and(|start| start >= period.end) {
            out.push(
                Fault::new("start", format!("it starts after the forecast has ended on {}", period.end))
                    .help("leave it out, or lengthen the period"),
            );
        }
        if end.is_some_and(|end| end <= period.start) {
            out.push(
                Fault::new("end", format!("it ends before the forecast starts on {}", period.start))
                    .help("leave it out of the scenario"),
            );
        }
    }
    out
}

fn inflow(well: &WellSpec, atmospheric_pressure_psia: f64) -> Vec<Fault> {
    let mut out = Vec::new();
    let Coefficient::Tests(tests) = &well.inflow.coefficient else { return out };
    for (i, test) in tests.iter().enumerate() {
        if let Some(flowing_psia) = test.measured.flowing_psia() {
            if flowing_psia >= test.reservoir_psia {
                out.push(
                    Fault::new(
                        format!("test[{i}].flowing"),
                        format!(
                            "the flowing pressure ({flowing_psia:.1} psia) is not below the reservoir pressure \
                                 ({:.1} psia)",
                            test.reservoir_psia
                        ),
                    )
                    .help("a well flows by the difference: check for swapped values, or gauge against absolute"),
                );
            }
            if flowing_psia < atmospheric_pressure_psia - SAME_PRESSURE_PSI {
                out.push(
                    Fault::new(format!("test[{i}].flowing"), "the flowing pressure lies below atmospheric pressure")
                        .help("check the unit"),
                );
            }
        }
        if let Some((wellhead_psia, _)) = test.measured.separator() {
            if wellhead_psia >= test.reservoir_psia {
                out.push(
                    Fault::new(
                        format!("test[{i}].wellhead"),
                        "the wellhead pressure is not below the reservoir pressure",
                    )
                    .help("check for swapped values"),
                );
            }
            if wellhead_psia < atmospheric_pressure_psia - SAME_PRESSURE_PSI {
                out.push(
                    Fault::new(format!("test[{i}].wellhead"), "the wellhead pressure lies below atmospheric pressure")
                        .help("was a gauge pressure meant? write psig or barg"),
                );
            }
        }
    }
    out
}

fn tubing(well: &WellSpec, tank: &TankSpec) -> Vec<Fault> {
    let mut out = Vec::new();
    let survey = &well.tubing.survey;
    if survey.iter().any(|(measured_ft, vertical_ft)| measured_ft.is_nan() || vertical_ft.is_nan()) {
        return out;
    }
    if let Some(&(measured_ft, vertical_ft)) = survey.first()
        && (measured_ft > DEPTH_ROUNDING_FT || vertical_ft > DEPTH_ROUNDING_FT)
    {
        out.push(
            Fault::new("tubing.survey[0]", "the survey does not begin at the wellhead")
                .help("its first point is [\"0 ft\", \"0 ft\"]"),
        );
    }
    for (i, pair) in survey.windows(2).enumerate() {
        let ((measured_0_ft, vertical_0_ft), (measured_1_ft, vertical_1_ft)) = (pair[0], pair[1]);
        let at = format!("tubing.survey[{}]", i + 1);
        let step = format!("from point {} to point {}", i + 1, i + 2);
        if measured_1_ft <= measured_0_ft {
            out.push(
                Fault::new(at, format!("the survey goes backwards: measured depth falls or stands still {step}"))
                    .help("measured depth must grow from point to point"),
            );
        } else if vertical_1_ft < vertical_0_ft - DEPTH_ROUNDING_FT {
            out.push(
                Fault::new(at, format!("the survey goes backwards: vertical depth falls {step}"))
                    .help("a well that turns upwards is outside this model"),
            );
        } else if vertical_1_ft - vertical_0_ft > measured_1_ft - measured_0_ft + DEPTH_ROUNDING_FT {
            out.push(
                Fault::new(at, format!("vertical depth grows faster than measured depth {step}"))
                    .help("each point is [measured, vertical]: check for swapped values"),
            );
        } else {
            continue;
        }
        // Nothing else about the depths can be judged by a survey that is wrong.
        return out;
    }
    let end_ft = survey.last().map_or(f64::NAN, |point| point.0);
    if survey.last().is_some_and(|point| point.1 <= 0.0) {
        out.push(Fault::new("tubing.survey", "the survey never goes down"));
    }
    if let Some(perforations_ft) = well.perforations_md_ft
        && perforations_ft > end_ft + DEPTH_ROUNDING_FT
    {
        out.push(
            Fault::new(
                "perforations",
                format!("the perforations ({perforations_ft:.1} ft) lie below the end of the survey ({end_ft:.1} ft)"),
            )
            .help("both are measured depths"),
        );
    }
    let bottom_ft = well.perforations_md_ft.unwrap_or(end_ft);
    let sections = &well.tubing.sections;
    for (i, pair) in sections.windows(2).enumerate() {
        if pair[1].to_md_ft <= pair[0].to_md_ft {
            out.push(
                Fault::new(format!("tubing.sections[{}].to", i + 1), "the sections do not go down")
                    .help("`to` must grow from section to section"),
            );
        }
    }
    if let Some(last) = sections.last()
        && last.to_md_ft < bottom_ft - DEPTH_ROUNDING_FT
    {
        out.push(
            Fault::new(
                format!("tubing.sections[{}].to", sections.len() - 1),
                format!(
                    "the last section ends at {:.1} ft, above the perforations at {bottom_ft:.1} ft",
                    last.to_md_ft
                ),
            )
            .help("leave out `to` in the last section to let it reach the perforations"),
        );
    }
    let temperature_key = match (&well.tubing.heat, well.tubing.temperatures.as_slice()) {
        (Some(_), _) => "tubing.heat.surface_temperature",
        (None, []) => "tubing.wellhead_temperature",
        (None, _) => "tubing.temperature[0]",
    };
    if well.tubing.wellhead_temperature_degf > tank.temperature_degf {
        out.push(Fault::new(temperature_key, "the wellhead is hotter than the tank").help("check the unit"));
    }
    out
}

/// One injector.
pub(super) fn injector(
    path: &str,
    injector: &InjectorSpec,
    period: Option<&PeriodSpec>,
    atmospheric_pressure_psia: f64,
) -> Vec<Fault> {
    let mut out = dates(injector.start, injector.end, period);
    if injector.bottomhole_limit_psia.is_some_and(|limit_psia| limit_psia <= atmospheric_pressure_psia) {
        out.push(Fault::new("bottomhole_limit", "the limit lies below atmospheric pressure").help("check the unit"));
    }
    if let (InjectionControl::Rate(rate), Some(limit)) = (injector.control, injector.rate_limit)
        && rate > limit
    {
        out.push(
            Fault::new("rate", "the rate is above the injector's own rate_limit")
                .help("state one of them, or a rate within the limit"),
        );
    }
    out.into_iter().map(|fault| fault.under(path)).collect()
}

/// Names that stand twice; `lists` are pairs of a path and a name.
pub(super) fn duplicate_names(names: &[(String, String)]) -> Vec<Fault> {
    let mut out = Vec::new();
    for (i, (path, name)) in names.iter().enumerate() {
        // Result files are told apart by name on every system, so case does not count.
        if !name.is_empty() && names[..i].iter().any(|(_, earlier)| earlier.eq_ignore_ascii_case(name)) {
            out.push(
                Fault::new(format!("{path}.name"), format!("the name `{name}` stands twice"))
                    .help("wells and injectors need names that differ"),
            );
        }
    }
    out
}
