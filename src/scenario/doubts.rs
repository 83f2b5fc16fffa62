//! Doubts about the data of a scenario, found without running it.
//!
//! Each names what was seen, the likely cause and what to do. Thresholds are those at which an experienced reader
//! asks a question; none of them stops a run.

use super::document::Scenario;
use super::doubts_lab;
use super::doubts_wells;
use crate::fluid::FluidSpec;
use crate::forecast::{Doubt, DoubtKind, FieldSpec, InjectedFluid};
use crate::tank::{TankSpec, WaterModel};

/// Values outside a usual range: what they are called, in which unit, and what is usually behind it.
pub(super) struct Usual {
    pub what: &'static str,
    pub unit: &'static str,
    pub low: f64,
    pub high: f64,
    pub cause: &'static str,
}

impl Usual {
    /// A doubt when the value lies outside.
    pub fn judge(&self, about: &str, value: f64) -> Option<Doubt> {
        let Self { what, unit, low, high, cause } = self;
        let unit = if unit.is_empty() { String::new() } else { format!(" {unit}") };
        (value < *low || value > *high).then(|| {
            doubt(
                DoubtKind::UnlikelyValue,
                about,
                format!("{what} is {}{unit}, usual are {low} to {high}{unit}", short(value)),
                *cause,
                "check the value and its unit",
            )
        })
    }
}

/// Four significant digits, plainly where that is readable.
pub(super) fn short(value: f64) -> String {
    let digits = value.abs().log10().floor();
    if value == 0.0 || !(-4.0..7.0).contains(&digits) {
        return format!("{value:.3e}");
    }
    let decimals = (3.0 - digits).clamp(0.0, 7.0) as usize;
    let text = format!("{value:.decimals$}");
    if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.').to_owned() } else { text }
}

pub(super) fn doubt(
    kind: DoubtKind,
    about: &str,
    seen: impl Into<String>,
    cause: impl Into<String>,
    advice: impl Into<String>,
) -> Doubt {
    Doubt { kind, about: about.to_owned(), seen: seen.into(), cause: cause.into(), advice: advice.into() }
}

/// Everything about the data that an experienced reader would ask about.
pub fn data_doubts(scenario: &Scenario) -> Vec<Doubt> {
    let field = &scenario.field;
    let mut out = fluid(&field.fluid);
    out.extend(doubts_lab::lab(&field.fluid, field.tank.temperature_degf));
    out.extend(tank(&field.tank, &field.fluid));
    if !scenario.states("tank.relative_permeability") {
        out.push(doubt(
            DoubtKind::UnlikelyValue,
            "tank",
            "no relative permeability is given, the default curves are used",
            "no special core analysis at hand",
            "take curves of an analogue rock, and see what other curves do to the gas-oil ratio",
        ));
    }
    for well in &field.wells {
        out.extend(doubts_wells::well(well, field));
    }
    out.extend(injection(field));
    if field.tank.water_model == WaterModel::Displacement && !scenario.states("tank.water.contacted_fraction") {
        out.push(doubt(
            DoubtKind::UnlikelyValue,
            "tank",
            format!(
                "no contacted fraction is given: water is taken to sweep {} of the oil zone",
                field.tank.water.contacted_fraction
            ),
            "no water cut has been matched yet",
            "the date of breakthrough goes with it: state tank.water.contacted_fraction and run cases of 0.4 and 0.8",
        ));
    }
    for well in &field.wells {
        if well.makes.breakthrough_delay != 1.0 && field.tank.water_model != WaterModel::Displacement {
            out.push(doubt(
                DoubtKind::NotModelled,
                &well.name,
                "breakthrough_delay is given, but the water model has no front for it to act on",
                "the water model is another than \"displacement\"",
                "set tank.water.model = \"displacement\", or leave the delay out",
            ));
        }
    }
    out
}

fn fluid(fluid: &FluidSpec) -> Vec<Doubt> {
    let about = "fluid";
    let usual = [
        (
            fluid.oil_gravity_api,
            Usual {
                what: "the oil gravity",
                unit: "API",
                low: 5.0,
                high: 60.0,
                cause: "a density or specific gravity taken for degrees API, or a condensate",
            },
        ),
        (
            fluid.gas_gravity,
            Usual {
                what: "the gas gravity",
                unit: "",
                low: 0.55,
                high: 1.5,
                cause: "a density or molar mass taken for a gravity",
            },
        ),
        (
            fluid.solution_gor_scf_stb,
            Usual {
                what: "the solution gas-oil ratio",
                unit: "scf/STB",
                low: 20.0,
                high: 2500.0,
                cause: "Sm3/Sm3 written as scf/STB or the other way round, or not a black oil",
            },
        ),
    ];
    let mut out: Vec<Doubt> = usual.iter().filter_map(|(value, usual)| usual.judge(about, *value)).collect();
    if fluid.solution_gor_scf_stb > 2000.0 || (45.0..=60.0).contains(&fluid.oil_gravity_api) {
        out.push(doubt(
            DoubtKind::NotModelled,
            about,
            format!(
                "{} scf/STB and {} API point to a volatile oil",
                short(fluid.solution_gor_scf_stb),
                short(fluid.oil_gravity_api)
            ),
            "the volume factor is probably above 2, where oil vaporised in the gas counts",
            "black-oil figures are a rough guide here: use a compositional study for decisions",
        ));
    }
    if fluid.bubble_point_psia.is_none() {
        out.push(doubt(
            DoubtKind::OutsideRange,
            about,
            "no bubble point is given, the correlation's own is used",
            "no laboratory study at hand; correlations miss bubble points by 15 % and more",
            "measure it, or run with a bubble point 15 % higher and lower",
        ));
    }
    out
}

fn tank(tank: &TankSpec, fluid: &FluidSpec) -> Vec<Doubt> {
    let about = "tank";
    let usual = [
        (
            tank.temperature_degf,
            Usual {
                what: "the temperature",
                unit: "degF",
                low: 60.0,
                high: 400.0,
                cause: "degC written as degF or the other way round",
            },
        ),
        (
            tank.connate_water,
            Usual {
                what: "the connate water saturation",
                unit: "",
                low: 0.03,
                high: 0.6,
                cause: "a water saturation of another rock, or a slip of the decimal point",
            },
        ),
        (
            tank_compressibility_1_psi(tank) * 1.0e6,
            Usual {
                what: "the pore compressibility",
                unit: "in 1e-6 1/psi",
                low: 1.0,
                high: 100.0,
                cause: "1/bar written as 1/psi or the other way round, or a bulk compressibility",
            },
        ),
    ];
    let mut out: Vec<Doubt> = usual.iter().filter_map(|(value, usual)| usual.judge(about, *value)).collect();
    if tank.gas_cap_ratio > 0.0 {
        out.push(doubt(
            DoubtKind::NotModelled,
            about,
            format!("there is a gas cap of {} oil-zone volumes", short(tank.gas_cap_ratio)),
            "gas coning and cusping towards the perforations are not modelled",
            "hold rates below a coning estimate; expect gas earlier than computed",
        ));
    }
    if let Some(aquifer) = &tank.aquifer {
        out.push(doubt(
            DoubtKind::NotModelled,
            about,
            format!("there is a {} aquifer", aquifer.name()),
            "water coning towards the perforations is not modelled",
            "hold rates below a coning estimate; expect water earlier than computed",
        ));
    }
    if let Some(produced) = &tank.produced {
        if produced.measured_pressure_psia.is_none() {
            out.push(doubt(
                DoubtKind::PressureMismatch,
                about,
                "the tank has produced, but no measured pressure says whether the computed one is right",
                "no survey close to the start of the forecast",
                "state tank.produced.measured_pressure",
            ));
        }
        let ratio_scf_stb = (produced.gas_scf - produced.injected_gas_scf) / produced.oil_stb;
        if produced.oil_stb > 0.0 && ratio_scf_stb < 0.5 * fluid.solution_gor_scf_stb {
            out.push(doubt(
                DoubtKind::UnlikelyValue,
                about,
                format!(
                    "the produced gas is {} scf for each barrel of oil, the oil held {}",
                    short(ratio_scf_stb),
                    short(fluid.solution_gor_scf_stb)
                ),
                "gas that was not metered or a thousand lost in the unit",
                "check tank.produced.gas",
            ));
        }
    }
    out
}

/// The stated compressibility, or the mean of a compaction table.
fn tank_compressibility_1_psi(tank: &TankSpec) -> f64 {
    match (tank.compaction.first(), tank.compaction.last()) {
        (Some(first), Some(last)) => (last.1 / first.1).ln() / (last.0 - first.0),
        _ => tank.pore_compressibility_1_psi,
    }
}

fn injection(field: &FieldSpec) -> Vec<Doubt> {
    let mut out = Vec::new();
    for injector in &field.injectors {
        let about = injector.name.as_str();
        if injector.fluid == InjectedFluid::Water && field.tank.water_model == WaterModel::Connate {
            out.push(doubt(
                DoubtKind::NotModelled,
                about,
                "water is injected, but the water model \"connate\" never lets it reach a well",
                "chosen for an early forecast, before breakthrough",
                "use the model \"displacement\" for anything after breakthrough",
            ));
        }
        if injector.to_gas_cap && field.tank.gas_cap_ratio == 0.0 {
            out.push(doubt(
                DoubtKind::NotModelled,
                about,
                "gas is injected into a gas cap, but the tank has none at the start",
                "a new cap forms: its gas is taken not to dissolve, and coning of it into the wells is not modelled",
                "compare with the gas dispersed (gas_to = \"oil-zone\"); expect gas earlier than computed",
            ));
        }
        match (injector.bottomhole_limit_psia, injector.injectivity) {
            (Some(_), None) => out.push(doubt(
                DoubtKind::NotModelled,
                about,
                "a bottom-hole limit is given, but no injectivity: the limit cannot act",
                "no injection test at hand",
                "state the injectivity, so that the pressure can be computed and held",
            )),
            (None, _) => out.push(doubt(
                DoubtKind::NotModelled,
                about,
                "no bottom-hole limit is given: nothing holds the injection below fracture pressure",
                "no fracture figure at hand",
                "state bottomhole_limit from a leak-off or step-rate test, with its injectivity",
            )),
            (Some(limit_psia), Some(_)) if limit_psia < field.tank.pressure_psia => out.push(doubt(
                DoubtKind::InjectionPressure,
                about,
                format!(
                    "the bottom-hole limit ({} psia) lies below the tank's initial pressure ({} psia)",
                    short(limit_psia),
                    short(field.tank.pressure_psia)
                ),
                "a surface pressure taken for a bottom-hole one",
                "check the limit: nothing is injected until the tank has fallen below it",
            )),
            _ => {}
        }
        if injector.fluid == InjectedFluid::Water && injector.effective_fraction == 1.0 {
            out.push(doubt(
                DoubtKind::UnlikelyValue,
                about,
                "all injected water is taken to support the tank",
                "effective_fraction is 1",
                "losses of 5 to 30 % out of the zone are common: see what they cost",
            ));
        }
    }
    out
}
