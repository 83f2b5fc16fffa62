//! What a fluid must satisfy before any correlation sees it.

use super::{FluidSpec, sutton};
use crate::fault::Fault;

/// Adds a fault unless `value` is a number between `low` and `high`.
fn between(faults: &mut Vec<Fault>, key: &str, value: f64, (low, high): (f64, f64), unit: &str, what: &str) {
    if !(low..=high).contains(&value) {
        faults.push(
            Fault::new(key, format!("{value} is not a possible {what}"))
                .help(format!("expected between {low} and {high}{unit}")),
        );
    }
}

/// Impossible values of the fluid as stated.
pub(super) fn of_spec(spec: &FluidSpec, tank_temperature_degf: f64) -> Vec<Fault> {
    let mut faults = Vec::new();
    let f = &mut faults;
    between(f, "oil_gravity", spec.oil_gravity_api, (5.0, 75.0), " API", "stock-tank oil gravity");
    between(f, "gas_gravity", spec.gas_gravity, (0.5, 1.9), " (air = 1)", "gas gravity");
    between(f, "solution_gor", spec.solution_gor_scf_stb, (1.0, 10_000.0), " scf/STB", "solution gas-oil ratio");
    between(f, "salinity", spec.salinity_ppm, (0.0, 300_000.0), " ppm", "salinity");
    between(f, "h2s", spec.h2s_fraction, (0.0, 0.8), " (mole fraction)", "share of hydrogen sulphide");
    between(f, "co2", spec.co2_fraction, (0.0, 0.8), " (mole fraction)", "share of carbon dioxide");
    if let Some(psia) = spec.bubble_point_psia {
        between(f, "bubble_point", psia, (15.0, 15_000.0), " psia", "bubble point");
    }
    if let Some((psia, degf)) = spec.separator {
        between(f, "separator_pressure", psia, (14.0, 3_000.0), " psia", "separator pressure");
        between(f, "separator_temperature", degf, (0.0, 300.0), " degF", "separator temperature");
    }
    between(f, "standard_pressure", spec.standard_pressure_psia, (13.0, 16.0), " psia", "standard pressure");
    between(f, "standard_temperature", spec.standard_temperature_degr, (485.0, 560.0), " degR", "standard temperature");
    between(f, "temperature", tank_temperature_degf, (33.0, 450.0), " degF", "tank temperature");
    if faults.is_empty() {
        composition(&mut faults, spec);
    }
    faults
}

/// The hydrocarbons that are left beside hydrogen sulphide and carbon dioxide cannot be lighter than methane.
fn composition(faults: &mut Vec<Fault>, spec: &FluidSpec) {
    let (h2s, co2) = (spec.h2s_fraction, spec.co2_fraction);
    if h2s + co2 > 0.8 {
        let key = if h2s > co2 { "h2s" } else { "co2" };
        faults.push(
            Fault::new(key, format!("hydrogen sulphide and carbon dioxide together are {} of the gas", h2s + co2))
                .help("expected at most 0.8 (mole fraction)"),
        );
        return;
    }
    let rest = sutton::hydrocarbon_gravity(spec.gas_gravity, h2s, co2);
    if h2s + co2 > 0.0 && !(0.5..=1.9).contains(&rest) {
        faults.push(
            Fault::new(
                "gas_gravity",
                format!("with {h2s} hydrogen sulphide and {co2} carbon dioxide the rest of the gas would have gravity {rest:.3}"),
            )
            .help("the gas gravity includes hydrogen sulphide (1.18) and carbon dioxide (1.52); methane has 0.554"),
        );
    }
}

/// A bubble point that the correlation cannot be tuned through.
pub(super) fn of_bubble_point(spec: &FluidSpec, correlated_psia: f64, (low, high): (f64, f64)) -> Vec<Fault> {
    let mut faults = Vec::new();
    if correlated_psia.is_nan() || correlated_psia <= low {
        faults.push(
            Fault::new(
                "solution_gor",
                format!(
                    "{} scf/STB is so little gas that the bubble point is below atmospheric pressure",
                    spec.solution_gor_scf_stb
                ),
            )
            .help("an oil without gas does not flow by solution-gas drive"),
        );
        return faults;
    }
    let stated = spec.bubble_point_psia;
    let psia = stated.unwrap_or(correlated_psia);
    if psia > high {
        let key = if stated.is_some() { "bubble_point" } else { "solution_gor" };
        faults.push(
            Fault::new(key, format!("the bubble point of {psia:.0} psia is above the range of the gas correlations"))
                .help(format!("expected at most {high:.0} psia")),
        );
    } else if !(0.2..=5.0).contains(&(correlated_psia / psia)) {
        faults.push(
            Fault::new(
                "bubble_point",
                format!("{psia:.0} psia is far from the {correlated_psia:.0} psia that the gravities and the solution gas-oil ratio suggest"),
            )
            .help("a factor above 5 cannot be tuned away: check the units of bubble_point and solution_gor"),
        );
    }
    faults
}
