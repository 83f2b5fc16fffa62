//! What `calibrate` prints.

use super::screen::{Screen, Side};
use crate::report::human::{number, short};
use crate::report::labels::{Dimension, UnitSystem, label};
use crate::report::{CAUTION, Provenance, lines_of, measurement_title};
use crate::study::calibrate::{
    Finding, Fitted, Free, Held, LIKELY_SLIP, Measurement, Misses, ModelScore, ROUGHEST_IN, WellCalibration,
};
use crate::tubing::TubingMethod;
use crate::well::TestCheck;

/// A calibration for people; `folder` is where the files are.
pub fn calibrate_text(wells: &[WellCalibration], provenance: &Provenance, folder: Option<&str>) -> String {
    let mut s = Screen::default();
    match &provenance.case {
        Some(case) => s.title(&format!("{} · case {case}", provenance.title)),
        None => s.title(&provenance.title),
    }
    for well in wells {
        if well.measurements.is_empty() {
            s.heading(&well.well);
            s.paragraph(2, 2, "Nothing was measured in its tubing: no flowing survey, no separator test with a gauge.");
            continue;
        }
        of_well(&mut s, well, provenance.units);
    }
    if let Some(folder) = folder {
        s.line("");
        s.paragraph(
            0,
            2,
            &format!("Results: {folder} (calibration.json, calibration.csv, stations.csv, lines.toml, pictures)"),
        );
    }
    s.line("");
    s.quiet(CAUTION);
    s.finish()
}

fn of_well(s: &mut Screen, well: &WellCalibration, units: UnitSystem) {
    for (i, m) in well.measurements.iter().enumerate() {
        s.heading(&format!("{}, {}", well.well, measurement_title(m)));
        s.paragraph(2, 2, &stream(m, units));
        misses(s, well, units, |score| &score.each[i]);
    }
    if well.measurements.len() > 1 {
        s.heading(&format!("{}, all measurements", well.well));
        misses(s, well, units, |score| &score.all);
    }
    fits(s, well, units);
    chosen(s, well, units);
}

fn stream(m: &Measurement, units: UnitSystem) -> String {
    let (rate, gor) = (label(units, Dimension::LiquidRate), label(units, Dimension::GasOilRatio));
    let pressure = label(units, Dimension::Pressure);
    let count = m.stations.len();
    format!(
        "{} {}, {} {}, water cut {} %, wellhead {} {}; {count} pressure{}",
        number(rate.of(m.stream.liquid_rate_stb_d), 0),
        rate.text,
        number(gor.of(m.stream.gor_scf_stb), 0),
        gor.text,
        number(100.0 * m.stream.water_cut, 0),
        number(pressure.of(m.wellhead_psia), decimals(units)),
        pressure.text,
        if count == 1 { "" } else { "s" }
    )
}

/// Decimals of a pressure.
fn decimals(units: UnitSystem) -> usize {
    if units == UnitSystem::Field { 0 } else { 1 }
}

/// A table of what the models miss.
fn misses(
    s: &mut Screen,
    well: &WellCalibration,
    units: UnitSystem,
    pick: impl Fn(&crate::study::calibrate::Score) -> &Misses,
) {
    let difference = label(units, Dimension::PressureDifference);
    let decimals = decimals(units);
    let signed = |psi: f64, part: f64| {
        let plus = if psi > 0.0 { "+" } else { "" };
        format!("{plus}{} ({} %)", number(difference.of(psi), decimals), number(100.0 * part, 1))
    };
    let plain =
        |psi: f64, part: f64| format!("{} ({} %)", number(difference.of(psi), decimals), number(100.0 * part, 1));
    let mut rows = Vec::new();
    for m in &well.models {
        let published = pick(&m.published);
        let dash = || "-".to_owned();
        let tuned = m.fitted.as_ref().map(&pick);
        rows.push(vec![
            m.method.name().to_owned(),
            signed(published.bias_psi, published.bias),
            plain(published.mean_absolute_psi, published.mean_absolute),
            signed(published.worst_psi, published.worst),
            tuned.map_or_else(dash, |t| plain(t.mean_absolute_psi, t.mean_absolute)),
            tuned.map_or_else(dash, |t| signed(t.worst_psi, t.worst)),
        ]);
        if let Some(stated) = m.as_stated.as_ref().map(&pick) {
            rows.push(vec![
                "  as stated".to_owned(),
                signed(stated.bias_psi, stated.bias),
                plain(stated.mean_absolute_psi, stated.mean_absolute),
                signed(stated.worst_psi, stated.worst),
                String::new(),
                String::new(),
            ]);
        }
    }
    let names = [format!("bias, {}", difference.text)];
    let header = [
        ("model", Side::Left),
        (names[0].as_str(), Side::Right),
        ("mean size", Side::Right),
        ("worst", Side::Right),
        ("tuned: size", Side::Right),
        ("worst", Side::Right),
    ];
    s.table(&header, &rows);
}

fn fits(s: &mut Screen, well: &WellCalibration, units: UnitSystem) {
    let (rough, difference) = (label(units, Dimension::Diameter), label(units, Dimension::PressureDifference));
    s.heading(&format!("{}, fits", well.well));
    let mut rows = Vec::new();
    for m in &well.models {
        let Ok(fit) = &m.fit else { continue };
        let interval = |pair: Option<(f64, f64)>, show: &dyn Fn(f64) -> String| {
            pair.map_or_else(|| "-".to_owned(), |(low, high)| format!("{} to {}", show(low), show(high)))
        };
        rows.push(vec![
            m.method.name().to_owned(),
            number(fit.slip_factor, 3),
            interval(fit.slip_interval, &|x| number(x, 3)),
            fit.roughness_in.map_or_else(|| "held".to_owned(), |x| short(rough.of(x))),
            interval(fit.roughness_interval_in, &|x| short(rough.of(x))),
            fit.deviation_psi.map_or_else(|| "-".to_owned(), |x| short(difference.of(x))),
        ]);
    }
    let names = [format!("roughness, {}", rough.text), format!("left, {}", difference.text)];
    let header = [
        ("model", Side::Left),
        ("slip factor", Side::Right),
        ("95 % interval", Side::Right),
        (names[0].as_str(), Side::Right),
        ("95 % interval", Side::Right),
        (names[1].as_str(), Side::Right),
    ];
    s.table(&header, &rows);
    // What is to be said of several models is said once.
    let mut said: Vec<(String, Vec<&str>)> = Vec::new();
    for m in &well.models {
        let Ok(fit) = &m.fit else { continue };
        for text in told(fit, units) {
            match said.iter_mut().find(|(known, _)| *known == text) {
                Some((_, models)) => models.push(m.method.name()),
                None => said.push((text, vec![m.method.name()])),
            }
        }
    }
    for (text, models) in said {
        let who =
            if models.len() == well.models.len() && models.len() > 1 { "all".to_owned() } else { models.join(", ") };
        s.paragraph(2, 2, &format!("{who}: {text}."));
    }
    for m in &well.models {
        if let Err(why) = &m.fit {
            s.warning("!", &format!("{}: {why}", m.method.name()));
        }
    }
}

/// What is to be known of a fit.
fn told(fit: &Fitted, units: UnitSystem) -> Vec<String> {
    let mut out: Vec<String> = fit.findings.iter().map(|finding| finding_words(*finding, fit)).collect();
    if let Some((why, free)) = &fit.held {
        out.push(held_words(*why, free.as_ref(), units));
    }
    out
}

fn finding_words(finding: Finding, fit: &Fitted) -> String {
    let (low, high) = LIKELY_SLIP;
    match finding {
        Finding::ExcludesOne => {
            "the interval of the slip factor excludes 1: as published it does not describe this well".to_owned()
        }
        Finding::IncludesOne => "the interval of the slip factor includes 1: as published it will do".to_owned(),
        Finding::NoInterval => "too few points for an interval".to_owned(),
        Finding::UnlikelySlip => format!(
            "unphysical: a slip factor of {} is outside {low} to {high}, it repairs rate, gas, water, depth or \
             temperature rather than slip",
            number(fit.slip_factor, 2)
        ),
        Finding::SlipOnBound => {
            "unphysical: no slip factor brings it to the points, the search ended on its bound".to_owned()
        }
        Finding::Exchangeable => format!(
            "slip and roughness do nearly the same to these points (correlation {}): trust the pressures, not the \
             two figures",
            number(fit.correlation.unwrap_or(f64::NAN), 3)
        ),
        Finding::MissesFollow => {
            "what is left follows depth, it is the model's form and not the gauge: intervals are too narrow".to_owned()
        }
    }
}

fn held_words(why: Held, free: Option<&Free>, units: UnitSystem) -> String {
    let rough = label(units, Dimension::Diameter);
    let free_value = free.map_or_else(String::new, |f| {
        format!(
            " ({} {} with a slip factor of {})",
            short(rough.of(f.roughness_in)),
            rough.text,
            number(f.slip_factor, 3)
        )
    });
    match why {
        Held::TooFewPoints => "roughness held: too few points for two figures".to_owned(),
        Held::NoGain => "roughness held: free it makes the fit no better".to_owned(),
        Held::Undetermined => format!("roughness held: the points cannot tell it from slip{free_value}"),
        Held::Unphysical => match free {
            Some(f) if f.roughness_in > ROUGHEST_IN => format!(
                "roughness held: free it becomes unphysical{free_value}; no tubing is rougher than {} {}",
                short(rough.of(ROUGHEST_IN)),
                rough.text
            ),
            _ => format!("roughness held: free it becomes smoother than any pipe{free_value}"),
        },
        Held::Unsettled => "roughness held: the fit of both does not settle".to_owned(),
    }
}

fn chosen(s: &mut Screen, well: &WellCalibration, units: UnitSystem) {
    let Some((model, fit)) = well.chosen().and_then(|m: &ModelScore| Some((m, m.fit.as_ref().ok()?))) else {
        s.heading(&format!("{}: no model can be tuned", well.well));
        return;
    };
    s.heading(&format!("{}, lines for the scenario", well.well));
    s.paragraph(2, 2, &reason(model.method, fit, well));
    s.line("");
    for line in lines_of(well, units).unwrap_or_default().lines() {
        s.line(&if line.is_empty() { String::new() } else { format!("    {line}") });
    }
    inflow(s, well, units);
}

fn reason(method: TubingMethod, fit: &Fitted, well: &WellCalibration) -> String {
    let name = method.name();
    if !fit.plausible() {
        return format!(
            "{name} leaves the least, but no model meets the points with a plausible slip factor: look for the fault in \
             rate, gas-oil ratio, water cut, gauge or depth before using these lines."
        );
    }
    if method == well.own {
        format!("{name} stays: no other model leaves clearly less. The survey stays in the scenario.")
    } else {
        format!("{name} leaves clearly less than {}. The survey stays in the scenario.", well.own.name())
    }
}

fn inflow(s: &mut Screen, well: &WellCalibration, units: UnitSystem) {
    let tests: Vec<(&str, &TestCheck)> = well
        .inflow
        .iter()
        .filter(|inflow| !inflow.from_surveys)
        .flat_map(|inflow| inflow.tests.iter().map(|t| ("test", t)))
        .chain(well.survey_inflow.iter().map(|t| ("survey", t)))
        .collect();
    if let Some(inflow) = &well.inflow {
        s.heading(&format!("{}, inflow with the tuned tubing", well.well));
        s.paragraph(2, 2, &units.tell(&inflow.text));
    }
    if tests.is_empty() {
        return;
    }
    let (rate, pressure) = (label(units, Dimension::LiquidRate), label(units, Dimension::Pressure));
    let rows: Vec<Vec<String>> = tests
        .iter()
        .map(|(kind, t)| {
            let miss = 100.0 * (t.model_rate_stb_d / t.rate_stb_d - 1.0);
            vec![
                (*kind).to_owned(),
                t.on.map_or_else(|| "-".to_owned(), |on| on.to_string()),
                number(pressure.of(t.reservoir_psia), decimals(units)),
                format!(
                    "{}{}",
                    number(pressure.of(t.flowing_psia), decimals(units)),
                    if t.computed { " computed" } else { "" }
                ),
                short(rate.of(t.rate_stb_d)),
                short(rate.of(t.model_rate_stb_d)),
                format!("{}{} %", if miss > 0.05 { "+" } else { "" }, number(miss, 1)),
            ]
        })
        .collect();
    let names = [
        format!("reservoir, {}", pressure.text),
        format!("flowing, {}", pressure.text),
        format!("measured, {}", rate.text),
        format!("inflow, {}", rate.text),
    ];
    let header = [
        ("what", Side::Left),
        ("when", Side::Left),
        (names[0].as_str(), Side::Right),
        (names[1].as_str(), Side::Right),
        (names[2].as_str(), Side::Right),
        (names[3].as_str(), Side::Right),
        ("miss", Side::Right),
    ];
    s.table(&header, &rows);
}
