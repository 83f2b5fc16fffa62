//! Fluid, tank, calendar: from the tree to plain data.

use super::problem::Problem;
use super::read_aquifer;
use super::read_lab;
use super::read_onsets;
use super::read_water;
use super::read_wells::exactly_one;
use super::reader::Reader;
use super::section::Section;
use crate::fluid::FluidSpec;
use crate::forecast::{Every, OnsetSpec, PeriodSpec, Tolerance};
use crate::rock::CoreySpec;
use crate::tank::{ProducedSpec, TankSpec};
use crate::units::constants::DEGF_TO_DEGR;
use crate::units::{Dimension, UnitSystem, parse};
use jiff::civil::Date;

/// The pressure that turns gauge into absolute; it is read before everything else.
pub(super) fn atmospheric_pressure_psia(reader: &mut Reader, root: &Section<'_>) -> f64 {
    let pressure_psia = reader.quantity(root, "atmospheric_pressure");
    if let Some(entry) = root.get("atmospheric_pressure")
        && let Some(text) = entry.node.text()
        && parse(text, Dimension::Pressure, 0.0) != parse(text, Dimension::Pressure, 1.0)
    {
        reader.note(
            Problem::new(entry.node.at.clone(), "the atmospheric pressure cannot be a gauge pressure")
                .label("an absolute pressure is expected, like \"14.696 psia\""),
        );
    }
    pressure_psia
}

pub(super) fn units(reader: &mut Reader, root: &Section<'_>) -> UnitSystem {
    match reader.choice(root, "units", &[]) {
        Some("metric") => UnitSystem::Metric,
        _ => UnitSystem::Field,
    }
}

/// `None` when a date is missing or wrong, which is noted.
pub(super) fn period(reader: &mut Reader, root: &Section<'_>) -> Option<PeriodSpec> {
    let section = reader.section(root, "period");
    let (start, end) = (reader.day(&section, "start"), reader.day(&section, "end"));
    let every = match reader.choice(&section, "every", &[]) {
        Some("quarter") => Every::Quarter,
        Some("year") => Every::Year,
        _ => Every::Month,
    };
    reader.finish(&section);
    Some(PeriodSpec { start: start?, end: end?, every })
}

pub(super) fn tolerance(reader: &mut Reader, root: &Section<'_>) -> Tolerance {
    let section = reader.section(root, "numerics");
    let word = reader.choice(&section, "tolerance", &[]);
    reader.finish(&section);
    if word == Some("tight") { Tolerance::Tight } else { Tolerance::Normal }
}

/// The fluid, and the onsets of deposits that stand beside its properties.
pub(super) fn fluid(reader: &mut Reader, root: &Section<'_>) -> (FluidSpec, OnsetSpec) {
    let standard = reader.section(root, "standard");
    let standard_pressure_psia = reader.quantity(&standard, "pressure");
    let standard_temperature_degf = reader.quantity(&standard, "temperature");
    reader.finish(&standard);

    let section = reader.section(root, "fluid");
    let separator_pressure_psia = reader.optional_quantity(&section, "separator_pressure");
    let separator_temperature_degf = reader.optional_quantity(&section, "separator_temperature");
    for (one, other) in
        [("separator_pressure", "separator_temperature"), ("separator_temperature", "separator_pressure")]
    {
        if section.has(one) && !section.has(other) {
            reader.note(
                Problem::new(section.at(one), format!("`fluid.{one}` stands alone"))
                    .label(format!("`{other}` is expected beside it")),
            );
        }
    }
    let lab = read_lab::lab(reader, &section);
    let mut spec = FluidSpec {
        oil_gravity_api: reader.quantity(&section, "oil_gravity"),
        gas_gravity: reader.number(&section, "gas_gravity"),
        solution_gor_scf_stb: reader.quantity(&section, "solution_gor"),
        bubble_point_psia: reader.optional_quantity(&section, "bubble_point"),
        salinity_ppm: reader.quantity(&section, "salinity"),
        h2s_fraction: reader.number(&section, "h2s"),
        co2_fraction: reader.number(&section, "co2"),
        separator: separator_pressure_psia.zip(separator_temperature_degf),
        standard_pressure_psia,
        // Rounded, so that 60 degF gives the constant 519.67 and not its neighbour.
        standard_temperature_degr: ((standard_temperature_degf + DEGF_TO_DEGR) * 1.0e9).round() / 1.0e9,
        correlations: read_lab::correlations(reader, &section),
        bubble_point_bo_rb_stb: reader.optional_quantity(&section, "bubble_point_bo"),
        bubble_point_mu_o_cp: reader.optional_quantity(&section, "bubble_point_viscosity"),
        dead_oil_mu_cp: reader.optional_quantity(&section, "dead_oil_viscosity"),
        lab,
    };
    spec.take_lab_values();
    let onsets = read_onsets::read(reader, &section);
    reader.finish(&section);
    (spec, onsets)
}

/// The tank; `water_injected`: whether the scenario injects water, so that water flows by displacement unless the scenario says otherwise, as with an aquifer.
pub(super) fn tank(reader: &mut Reader, section: &Section<'_>, water_injected: bool, start: Option<Date>) -> TankSpec {
    exactly_one(reader, section, "the tank's pore volume against pressure", &["pore_compressibility", "compaction"]);
    let aquifer = read_aquifer::aquifer(reader, section, start);
    read_aquifer::check_produced(reader, section, aquifer.as_ref());
    let produced = produced(reader, section);
    let water_injected = water_injected || produced.is_some_and(|produced| produced.injected_water_stb > 0.0);
    let (water_model, water) = read_water::tank(reader, section, water_injected || aquifer.is_some());
    let spec = TankSpec {
        oil_in_place_stb: reader.quantity(section, "oil_in_place"),
        pressure_psia: reader.quantity(section, "pressure"),
        temperature_degf: reader.quantity(section, "temperature"),
        connate_water: reader.number(section, "connate_water"),
        pore_compressibility_1_psi: reader.optional_quantity(section, "pore_compressibility").unwrap_or(0.0),
        compaction: read_aquifer::compaction(reader, section),
        aquifer,
        gas_cap_ratio: reader.number(section, "gas_cap_ratio"),
        datum_tvd_ft: reader.optional_quantity(section, "datum"),
        produced,
        water_model,
        water,
        relative_permeability: relative_permeability(reader, section),
    };
    reader.finish(section);
    spec
}

fn produced(reader: &mut Reader, tank: &Section<'_>) -> Option<ProducedSpec> {
    let section = reader.section(tank, "produced");
    if !section.is_there() {
        return None;
    }
    let spec = ProducedSpec {
        oil_stb: reader.quantity(&section, "oil"),
        gas_scf: reader.quantity(&section, "gas"),
        water_stb: reader.quantity(&section, "water"),
        injected_water_stb: reader.quantity(&section, "injected_water"),
        injected_gas_scf: reader.quantity(&section, "injected_gas"),
        aquifer_stb: reader.quantity(&section, "aquifer_influx"),
        measured_pressure_psia: reader.optional_quantity(&section, "measured_pressure"),
    };
    reader.finish(&section);
    Some(spec)
}

fn relative_permeability(reader: &mut Reader, tank: &Section<'_>) -> CoreySpec {
    let section = reader.section(tank, "relative_permeability");
    let spec = CoreySpec {
        critical_gas: reader.number(&section, "critical_gas"),
        residual_oil_to_gas: reader.number(&section, "residual_oil_to_gas"),
        residual_oil_to_water: reader.number(&section, "residual_oil_to_water"),
        oil_end: reader.number(&section, "oil_end"),
        gas_end: reader.number(&section, "gas_end"),
        water_end: reader.number(&section, "water_end"),
        oil_exponent: reader.number(&section, "oil_exponent"),
        gas_exponent: reader.number(&section, "gas_exponent"),
        water_exponent: reader.number(&section, "water_exponent"),
    };
    reader.finish(&section);
    spec
}
