//! What a fluid must satisfy before any correlation sees it.

use super::lab::Lab;
use super::saturated::SaturatedOil;
use super::spec::agrees;
use super::viscosity::OilViscosity;
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
    if let Some(bo) = spec.bubble_point_bo_rb_stb {
        between(f, "bubble_point_bo", bo, (1.01, 10.0), " rb/STB", "oil volume factor at the bubble point");
    }
    for (key, cp) in
        [("bubble_point_viscosity", spec.bubble_point_mu_o_cp), ("dead_oil_viscosity", spec.dead_oil_mu_cp)]
    {
        if let Some(cp) = cp {
            between(f, key, cp, (0.01, 1e5), " cp", "oil viscosity");
        }
    }
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

/// Measured values so far from the correlation that no factor is credible.
pub(super) fn of_tuning(spec: &FluidSpec, oil: &SaturatedOil, viscosity: &OilViscosity) -> Vec<Fault> {
    let mut faults = Vec::new();
    let mut check = |key: &str, factor: f64, (low, high): (f64, f64), what: &str| {
        if !(low..=high).contains(&factor) {
            faults.push(
                Fault::new(key, format!("the measured {what} is {factor:.3} times what the correlation gives")).help(
                    format!("a factor outside {low} to {high} cannot be tuned away: check the value and its unit"),
                ),
            );
        }
    };
    check("bubble_point_bo", oil.swell_factor(), (0.4, 2.5), "swell Bo - 1 at the bubble point");
    check("dead_oil_viscosity", viscosity.dead_factor(), (0.05, 20.0), "viscosity without gas");
    check("bubble_point_viscosity", viscosity.live_factor(), (0.05, 20.0), "viscosity at the bubble point");
    if let (Some(dead_cp), Some(live_cp)) = (spec.dead_oil_mu_cp, spec.bubble_point_mu_o_cp)
        && live_cp >= dead_cp
    {
        faults.push(
            Fault::new(
                "bubble_point_viscosity",
                format!("{live_cp} cp at the bubble point is not below the {dead_cp} cp without gas"),
            )
            .help("dissolved gas thins the oil: check the two values"),
        );
    }
    faults
}

/// A laboratory's table that does not describe the fluid as stated.
pub(super) fn of_lab(spec: &FluidSpec, lab: &Lab) -> Vec<Fault> {
    let mut faults = Vec::new();
    let mut agree = |key: &str, stated: Option<f64>, measured: f64, unit: &str| {
        if let Some(stated) = stated
            && !agrees(stated, measured)
        {
            faults.push(
                Fault::new(
                    key,
                    format!("{stated:.0} {unit} differs from the {measured:.0} {unit} of the laboratory's table"),
                )
                .help("both describe the same oil: within 1 % the laboratory's value is used"),
            );
        }
    };
    agree("solution_gor", Some(spec.solution_gor_scf_stb), lab.rs_scf_stb, "scf/STB");
    agree("bubble_point", spec.bubble_point_psia, lab.bubble_point_psia, "psia");
    let [mu_o, ..] = lab.holds();
    for (key, stated) in [
        ("bubble_point_bo", spec.bubble_point_bo_rb_stb.is_some()),
        ("bubble_point_viscosity", spec.bubble_point_mu_o_cp.is_some() && mu_o),
        ("dead_oil_viscosity", spec.dead_oil_mu_cp.is_some() && mu_o),
    ] {
        if stated {
            faults.push(
                Fault::new(key, "the laboratory's table holds this property already")
                    .help("leave the key out: the table rules"),
            );
        }
    }
    faults
}
