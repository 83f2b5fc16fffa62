//! Wells and injectors: from the tree to plain data.

use super::flowing_survey;
use super::problem::Problem;
use super::read_inflow::{inflow, shape_factor};
use super::read_line;
use super::read_water;
use super::reader::Reader;
use super::schema::LATER_TUBING_METHODS;
use super::section::Section;
use super::survey;
use crate::forecast::{InjectedFluid, InjectionControl, InjectorSpec};
use crate::tubing::{HeatSpec, RestrictionSpec, TubingMethod, TubingSection, TubingSpec};
use crate::well::{LineSpec, ScreenSpec, WellSpec};

/// Keys of which exactly one may be there; an override that sets one removes the others.
pub(super) const EXCLUSIVE: &[(&str, &[&str])] = &[
    ("injector", &["rate", "voidage_replacement"]),
    ("well.tubing", &["diameter", "sections"]),
    ("well.inflow", &["test", "productivity_index", "permeability", "open_flow", "coefficient"]),
    ("well.tubing", &["wellhead_temperature", "temperature", "heat"]),
    ("well", &["line_pressure", "line"]),
    ("well.choke", &["discharge_coefficient", "test"]),
    ("tank", &["pore_compressibility", "compaction"]),
    ("well", &["drainage_shape", "shape_factor"]),
];

/// Notes when none or several of the alternatives are there.
pub(super) fn exactly_one(reader: &mut Reader, section: &Section<'_>, what: &str, keys: &[&str]) {
    if !section.is_there() {
        return;
    }
    let there: Vec<&str> = keys.iter().copied().filter(|key| section.has(key)).collect();
    match there.as_slice() {
        [_] => {}
        // A slip of the pen is reported as unknown, with its guess: once is enough.
        [] if section.misspelt().any(|word| keys.contains(&word)) => {}
        [] => reader.note(
            Problem::new(section.at(""), format!("{what} is not given"))
                .label(format!("one of {} is expected", keys.join(", "))),
        ),
        [first, second, ..] => reader.note(
            Problem::new(section.at(second), format!("`{first}` and `{second}` exclude each other"))
                .label(format!("only one of {} is expected", keys.join(", "))),
        ),
    }
}

fn both_or_none(reader: &mut Reader, section: &Section<'_>, keys: [&str; 2]) {
    for (one, other) in [(keys[0], keys[1]), (keys[1], keys[0])] {
        if section.has(one) && !section.has(other) {
            reader.note(
                Problem::new(section.at(one), format!("`{one}` stands alone"))
                    .label(format!("`{other}` is expected beside it")),
            );
        }
    }
}

/// One well; `tank_pressure_psia` is that to which a stated coefficient belongs unless it says otherwise.
pub(super) fn well(
    reader: &mut Reader,
    section: &Section<'_>,
    tank_pressure_psia: f64,
    lines: &[LineSpec],
) -> WellSpec {
    let (line_pressure_psia, shared_line) = read_line::line_of(reader, section, lines);
    both_or_none(reader, section, ["drainage_radius", "wellbore_radius"]);
    let drainage_radius_ft = reader.optional_quantity(section, "drainage_radius");
    let wellbore_radius_ft = reader.optional_quantity(section, "wellbore_radius");
    let (inflow, loss) = inflow(reader, section, tank_pressure_psia);
    let spec = WellSpec {
        name: reader.name(section).unwrap_or_default(),
        line_pressure_psia,
        shared_line,
        choke: read_line::choke(reader, section),
        target_rate_stb_d: reader.optional_quantity(section, "target_rate"),
        uptime: reader.number(section, "uptime"),
        perforations_md_ft: reader.optional_quantity(section, "perforations"),
        gor_factor: reader.number(section, "gor_factor"),
        water_factor: reader.number(section, "water_factor"),
        makes: read_water::makes(reader, section),
        start: reader.day(section, "start"),
        end: reader.day(section, "end"),
        may_flow_again: reader.flag(section, "may_flow_again").unwrap_or(false),
        skin: reader.number(section, "skin"),
        skin_at_test: reader.number(section, "skin_at_test"),
        radii_ft: drainage_radius_ft.zip(wellbore_radius_ft),
        shape_factor: shape_factor(reader, section),
        loss,
        minimum_flowing_pressure_psia: reader.optional_quantity(section, "minimum_flowing_pressure"),
        minimum_rate_stb_d: reader.optional_quantity(section, "minimum_rate"),
        maximum_water_cut: reader.optional_number(section, "maximum_water_cut"),
        maximum_gor_scf_stb: reader.optional_quantity(section, "maximum_gor"),
        screens: ScreenSpec {
            heading_margin: reader.number(section, "heading_margin"),
            maximum_velocity_ft_s: reader.optional_quantity(section, "maximum_velocity"),
            erosional_constant: reader.optional_number(section, "erosional_constant"),
        },
        inflow,
        tubing: tubing(reader, section),
        flowing_surveys: flowing_survey::read(reader, section),
    };
    reader.finish(section);
    spec
}

fn tubing(reader: &mut Reader, well: &Section<'_>) -> TubingSpec {
    let section = reader.section(well, "tubing");
    let name = reader.choice(&section, "method", LATER_TUBING_METHODS);
    let method = TubingMethod::ALL.into_iter().find(|method| name == Some(method.name()));
    exactly_one(reader, &section, "the tubing's inside diameter", EXCLUSIVE[1].1);
    exactly_one(reader, &section, "the flowing temperature", EXCLUSIVE[3].1);
    let roughness_in = reader.quantity(&section, "roughness");
    let inner_pipe_in = reader.quantity(&section, "inner_pipe");
    let sections = match reader.optional_quantity(&section, "diameter") {
        Some(diameter_in) => vec![TubingSection { to_md_ft: f64::INFINITY, diameter_in, roughness_in, inner_pipe_in }],
        None if section.has("sections") => tubing_sections(reader, &section, roughness_in, inner_pipe_in),
        None => Vec::new(),
    };
    let temperatures = survey::temperatures(reader, &section);
    let wellhead_temperature_degf = reader.optional_quantity(&section, "wellhead_temperature");
    let heat = section.has("heat").then(|| heat(reader, &section));
    let spec = TubingSpec {
        method: method.unwrap_or(TubingMethod::HasanKabir),
        sections,
        survey: survey::read(reader, &section),
        slip_factor: reader.number(&section, "slip_factor"),
        wellhead_temperature_degf: wellhead_temperature_degf
            .or(temperatures.first().map(|point| point.1))
            .or(heat.map(|heat| heat.surface_temperature_degf))
            .unwrap_or(f64::NAN),
        temperatures,
        heat,
        restrictions: restrictions(reader, &section),
    };
    reader.finish(&section);
    spec
}

fn heat(reader: &mut Reader, tubing: &Section<'_>) -> HeatSpec {
    let section = reader.section(tubing, "heat");
    let spec = HeatSpec {
        surface_temperature_degf: reader.quantity(&section, "surface_temperature"),
        conductivity_btu_h_ft_degf: reader.quantity(&section, "conductivity"),
        diffusivity_ft2_h: reader.quantity(&section, "diffusivity"),
        wellbore_radius_ft: reader.quantity(&section, "wellbore_radius"),
        // Without it the completion holds nothing back.
        transfer_btu_h_ft2_degf: reader.optional_quantity(&section, "transfer").unwrap_or(f64::INFINITY),
        producing_time_d: reader.quantity(&section, "producing_time"),
    };
    reader.finish(&section);
    spec
}

fn restrictions(reader: &mut Reader, tubing: &Section<'_>) -> Vec<RestrictionSpec> {
    if !tubing.has("restrictions") {
        return Vec::new();
    }
    let pieces = reader.sections(tubing, "restrictions");
    let mut out = Vec::with_capacity(pieces.len());
    for piece in pieces {
        out.push(RestrictionSpec {
            at_md_ft: reader.quantity(&piece, "at"),
            diameter_in: reader.quantity(&piece, "diameter"),
            discharge_coefficient: reader.number(&piece, "discharge"),
        });
        reader.finish(&piece);
    }
    out
}

fn tubing_sections(
    reader: &mut Reader,
    tubing: &Section<'_>,
    roughness_in: f64,
    inner_pipe_in: f64,
) -> Vec<TubingSection> {
    let stretches = reader.sections(tubing, "sections");
    let last = stretches.len().saturating_sub(1);
    let mut out = Vec::with_capacity(stretches.len());
    for (i, stretch) in stretches.iter().enumerate() {
        let to_md_ft = reader.optional_quantity(stretch, "to");
        if to_md_ft.is_none() && i < last {
            reader.note(
                Problem::new(stretch.at("to"), "this stretch of tubing does not say where it ends")
                    .label("`to` is expected in all but the last"),
            );
        }
        out.push(TubingSection {
            to_md_ft: to_md_ft.unwrap_or(if i < last { f64::NAN } else { f64::INFINITY }),
            diameter_in: reader.quantity(stretch, "diameter"),
            roughness_in: reader.optional_quantity(stretch, "roughness").unwrap_or(roughness_in),
            inner_pipe_in: reader.optional_quantity(stretch, "inner_pipe").unwrap_or(inner_pipe_in),
        });
        reader.finish(stretch);
    }
    out
}

/// One injector.
pub(super) fn injector(reader: &mut Reader, section: &Section<'_>) -> InjectorSpec {
    let fluid = match reader.choice(section, "fluid", &[]) {
        Some("gas") => InjectedFluid::Gas,
        _ => InjectedFluid::Water,
    };
    let gas = fluid == InjectedFluid::Gas;
    exactly_one(reader, section, "what sets the injector's rate", EXCLUSIVE[0].1);
    let rate = reader.injected_quantity(section, "rate", gas);
    let share = reader.optional_number(section, "voidage_replacement");
    let spec = InjectorSpec {
        name: reader.name(section).unwrap_or_default(),
        fluid,
        start: reader.day(section, "start"),
        end: reader.day(section, "end"),
        control: match (rate, share) {
            (Some(rate), _) => InjectionControl::Rate(rate),
            (None, share) => InjectionControl::VoidageReplacement(share.unwrap_or(f64::NAN)),
        },
        rate_limit: reader.injected_quantity(section, "rate_limit", gas),
        effective_fraction: reader.number(section, "effective_fraction"),
        bottomhole_limit_psia: reader.optional_quantity(section, "bottomhole_limit"),
        injectivity: reader.injected_quantity(section, "injectivity", gas),
        to_gas_cap: reader.choice(section, "gas_to", &[]) == Some("gas-cap") && gas,
        response_days: reader.number(section, "response_days"),
    };
    if !gas && section.has("gas_to") {
        reader
            .note(Problem::new(section.at("gas_to"), "`gas_to` belongs to a gas injector").label("not used by water"));
    }
    reader.finish(section);
    spec
}
