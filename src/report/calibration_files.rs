//! Tables of a calibration, and the lines to paste into the scenario.

use super::csv_files::{cell, csv_bytes};
use super::json::Json;
use super::labels::{Dimension, Label, UnitSystem, label};
use super::{Provenance, ReportError};
use crate::inflow::{FutureRule, RateBasis, Shape};
use crate::study::calibrate::{
    BackCalculated, Finding, Fitted, Held, Kind, Measurement, Misses, ModelScore, Score, WellCalibration,
};

/// The fixed wording of a kind of measurement.
pub fn kind_text(kind: Kind) -> &'static str {
    match kind {
        Kind::Survey => "flowing survey",
        Kind::Test => "separator test",
    }
}

/// "flowing survey of 2026-10-06".
pub fn measurement_title(m: &Measurement) -> String {
    m.on.map_or_else(|| kind_text(m.kind).to_owned(), |on| format!("{} of {on}", kind_text(m.kind)))
}

/// The fixed wording of a finding.
pub fn finding_text(finding: Finding) -> &'static str {
    match finding {
        Finding::ExcludesOne => "interval excludes 1",
        Finding::IncludesOne => "interval includes 1",
        Finding::NoInterval => "no interval",
        Finding::UnlikelySlip => "unlikely slip factor",
        Finding::SlipOnBound => "slip factor on its bound",
        Finding::Exchangeable => "slip and roughness exchangeable",
        Finding::MissesFollow => "misses follow each other",
    }
}

/// The fixed wording of why the roughness is held.
pub fn held_text(held: Held) -> &'static str {
    match held {
        Held::TooFewPoints => "too few points",
        Held::NoGain => "no better when free",
        Held::Undetermined => "not determined",
        Held::Unphysical => "unphysical when free",
        Held::Unsettled => "does not settle when free",
    }
}

/// The ways in which a model was tried, with their names.
fn scores(model: &ModelScore) -> impl Iterator<Item = (&'static str, &Score)> {
    [
        Some(("published", &model.published)),
        model.as_stated.as_ref().map(|score| ("as stated", score)),
        model.fitted.as_ref().map(|score| ("fitted", score)),
    ]
    .into_iter()
    .flatten()
}

struct Units {
    pressure: Label,
    difference: Label,
    length: Label,
    roughness: Label,
}

impl Units {
    fn of(units: UnitSystem) -> Self {
        Self {
            pressure: label(units, Dimension::Pressure),
            difference: label(units, Dimension::PressureDifference),
            length: label(units, Dimension::Length),
            roughness: label(units, Dimension::Diameter),
        }
    }
}

/// What every model misses in every measurement: a row per well, model, tuning and measurement, and one for all measurements.
///
/// # Errors
/// When the CSV writer fails.
pub fn calibration_csv(wells: &[WellCalibration], units: UnitSystem) -> Result<Vec<u8>, ReportError> {
    let u = Units::of(units);
    csv_bytes(|w| {
        let header: [String; 14] = [
            "well".into(),
            "method".into(),
            "tuning".into(),
            "slip_factor".into(),
            u.roughness.column("roughness"),
            "measurement".into(),
            "pressures".into(),
            u.difference.column("bias"),
            u.difference.column("mean_absolute"),
            u.difference.column("worst"),
            "bias".into(),
            "mean_absolute".into(),
            "worst".into(),
            "worst_relative".into(),
        ];
        w.write_record(&header)?;
        for well in wells {
            for model in &well.models {
                for (tuning, score) in scores(model) {
                    let named = well.measurements.iter().map(measurement_title).zip(&score.each);
                    for (name, misses) in named.chain(std::iter::once(("all".to_owned(), &score.all))) {
                        let start = [
                            well.well.clone(),
                            model.method.name().to_owned(),
                            tuning.to_owned(),
                            cell(score.tuning.slip_factor),
                            score.tuning.roughness_in.map_or(String::new(), |x| cell(u.roughness.of(x))),
                            name,
                            misses.count.to_string(),
                        ];
                        let psi = [misses.bias_psi, misses.mean_absolute_psi, misses.worst_psi];
                        let part = [misses.bias, misses.mean_absolute, misses.worst, misses.worst_relative];
                        let figures = psi.map(|x| cell(u.difference.of(x))).into_iter().chain(part.map(cell));
                        w.write_record(start.into_iter().chain(figures))?;
                    }
                }
            }
        }
        Ok(())
    })
}

/// Measured and computed pressures, a row per station, model and tuning.
///
/// # Errors
/// When the CSV writer fails.
pub fn stations_csv(wells: &[WellCalibration], units: UnitSystem) -> Result<Vec<u8>, ReportError> {
    let u = Units::of(units);
    csv_bytes(|w| {
        let header: [String; 8] = [
            "well".into(),
            "measurement".into(),
            u.length.column("measured_depth"),
            u.length.column("vertical_depth"),
            u.pressure.column("measured"),
            "method".into(),
            "tuning".into(),
            u.pressure.column("computed"),
        ];
        w.write_record(&header)?;
        for well in wells {
            for model in &well.models {
                for (tuning, score) in scores(model) {
                    for (m, computed) in well.measurements.iter().zip(&score.pressures_psia) {
                        for (station, computed_psia) in m.stations.iter().zip(computed) {
                            w.write_record([
                                well.well.clone(),
                                measurement_title(m),
                                cell(u.length.of(station.md_ft)),
                                cell(u.length.of(station.tvd_ft)),
                                cell(u.pressure.of(station.pressure_psia)),
                                model.method.name().to_owned(),
                                tuning.to_owned(),
                                cell(u.pressure.of(*computed_psia)),
                            ])?;
                        }
                    }
                }
            }
        }
        Ok(())
    })
}

/// The whole calibration.
///
/// # Errors
/// When the JSON writer fails.
pub fn calibration_json(wells: &[WellCalibration], provenance: &Provenance) -> Result<Vec<u8>, ReportError> {
    let mut entries = provenance.entries();
    let list = wells.iter().map(|well| well_json(well, provenance.units)).collect();
    entries.push(("wells".to_owned(), Json::List(list)));
    Ok(Json::Object(entries).to_bytes()?)
}

fn plain(key: &str, value: impl Into<Json>) -> (String, Json) {
    (key.to_owned(), value.into())
}

fn well_json(well: &WellCalibration, units: UnitSystem) -> Json {
    let u = Units::of(units);
    let (rate, gor) = (label(units, Dimension::LiquidRate), label(units, Dimension::GasOilRatio));
    let measurements = well.measurements.iter().map(|m| {
        Json::Object(vec![
            plain("kind", kind_text(m.kind)),
            plain("on", m.on.map_or(Json::Null, |on| Json::text(on.to_string()))),
            (rate.column("rate"), rate.of(m.stream.liquid_rate_stb_d).into()),
            (gor.column("gor"), gor.of(m.stream.gor_scf_stb).into()),
            plain("water_cut", m.stream.water_cut),
            (u.pressure.column("wellhead"), u.pressure.of(m.wellhead_psia).into()),
            plain("pressures", Json::Count(m.stations.len() as u64)),
        ])
    });
    let models = well.models.iter().map(|model| {
        let mut entries = vec![plain("method", model.method.name())];
        entries.extend(scores(model).map(|(name, score)| plain(&name.replace(' ', "_"), score_json(score, well, &u))));
        entries.push(plain(
            "fit",
            match &model.fit {
                Ok(fit) => fit_json(fit, &u),
                Err(why) => Json::object([("failed", Json::text(why.as_str()))]),
            },
        ));
        Json::Object(entries)
    });
    let chosen = well.chosen().map_or(Json::Null, |m| m.method.name().into());
    let tests = |list: &[crate::well::TestCheck]| {
        let rows = list.iter().map(|t| {
            Json::Object(vec![
                plain("on", t.on.map_or(Json::Null, |on| Json::text(on.to_string()))),
                (u.pressure.column("reservoir"), u.pressure.of(t.reservoir_psia).into()),
                (u.pressure.column("flowing"), u.pressure.of(t.flowing_psia).into()),
                plain("flowing_computed", Json::Bool(t.computed)),
                (rate.column("rate"), rate.of(t.rate_stb_d).into()),
                (rate.column("model_rate"), rate.of(t.model_rate_stb_d).into()),
            ])
        });
        Json::List(rows.collect())
    };
    Json::Object(vec![
        plain("name", well.well.as_str()),
        plain("method", well.own.name()),
        plain("chosen", chosen),
        plain("lines", lines_of(well, units).map_or(Json::Null, Json::Text)),
        plain("measurements", Json::List(measurements.collect())),
        plain("models", Json::List(models.collect())),
        plain("inflow", well.inflow.as_ref().map_or(Json::Null, |i| Json::text(units.tell(&i.text)))),
        plain("tests", tests(well.inflow.as_ref().map_or(&[], |i| i.tests.as_slice()))),
        plain("surveys_and_inflow", tests(&well.survey_inflow)),
    ])
}

fn score_json(score: &Score, well: &WellCalibration, u: &Units) -> Json {
    let misses = |m: &Misses| {
        Json::Object(vec![
            (u.difference.column("bias"), u.difference.of(m.bias_psi).into()),
            (u.difference.column("mean_absolute"), u.difference.of(m.mean_absolute_psi).into()),
            (u.difference.column("worst"), u.difference.of(m.worst_psi).into()),
            plain("bias", m.bias),
            plain("mean_absolute", m.mean_absolute),
            plain("worst", m.worst),
            plain("worst_relative", m.worst_relative),
        ])
    };
    let each = well.measurements.iter().zip(&score.each).map(|(_, m)| misses(m));
    Json::object([("all", misses(&score.all)), ("each", Json::List(each.collect()))])
}

fn fit_json(fit: &Fitted, u: &Units) -> Json {
    let pair = |interval: Option<(f64, f64)>| {
        interval.map_or(Json::Null, |(low, high)| Json::List(vec![low.into(), high.into()]))
    };
    let rough = |value: f64| u.roughness.of(value);
    let rough_pair = |interval: Option<(f64, f64)>| pair(interval.map(|(low, high)| (rough(low), rough(high))));
    let held = fit.held.as_ref().map_or(Json::Null, |(why, free)| {
        let mut entries = vec![plain("why", held_text(*why))];
        if let Some(free) = free {
            entries.extend([
                plain("free_slip_factor", free.slip_factor),
                (u.roughness.column("free_roughness"), rough(free.roughness_in).into()),
                (u.roughness.column("free_roughness_interval"), rough_pair(free.roughness_interval_in)),
                plain("free_correlation", free.correlation),
            ]);
        }
        Json::Object(entries)
    });
    Json::Object(vec![
        plain("slip_factor", fit.slip_factor),
        plain("slip_interval", pair(fit.slip_interval)),
        (u.roughness.column("roughness"), fit.roughness_in.map(rough).into()),
        (u.roughness.column("roughness_interval"), rough_pair(fit.roughness_interval_in)),
        plain("roughness_held", held),
        plain("correlation", fit.correlation),
        (u.difference.column("deviation"), fit.deviation_psi.map(|x| u.difference.of(x)).into()),
        plain("degrees_of_freedom", Json::Count(fit.degrees_of_freedom as u64)),
        plain("findings", Json::List(fit.findings.iter().map(|f| finding_text(*f).into()).collect())),
    ])
}

/// The lines to paste, of every well that has any, as TOML.
pub fn lines_toml(wells: &[WellCalibration], units: UnitSystem) -> String {
    let texts: Vec<String> = wells.iter().filter_map(|well| lines_of(well, units)).collect();
    texts.join("\n")
}

/// The lines of one well: its tubing, and its inflow where tests or surveys give a coefficient.
pub fn lines_of(well: &WellCalibration, units: UnitSystem) -> Option<String> {
    let model = well.chosen()?;
    let fit = model.fit.as_ref().ok()?;
    let mut text = format!("[[well]]\nname = {}\n\n[well.tubing]\n", quoted(&well.well));
    text.push_str(&format!(
        "method      = \"{}\"\nslip_factor = {}\n",
        model.method.name(),
        rounded(fit.slip_factor, 4)
    ));
    let mut sections = well.stated_roughness_in.iter();
    let first = sections.next().copied();
    let alike = first.filter(|first| sections.all(|other| other == first));
    let many = well.stated_roughness_in.len() > 1;
    match (fit.roughness_in.or(fit.held_roughness_in), alike) {
        (Some(effective), _) => {
            text.push_str(&format!("roughness   = \"{}\"", rough_text(effective, units)));
            text.push_str(if many { "   # take `roughness` out of the sections\n" } else { "\n" });
        }
        (None, Some(stated)) => text.push_str(&format!("roughness   = \"{}\"\n", rough_text(stated, units))),
        // Stretches of their own roughness keep it.
        (None, None) => {}
    }
    if let Some(inflow) = &well.inflow {
        text.push_str(&inflow_lines(inflow, units));
    }
    Some(text)
}

fn inflow_lines(inflow: &BackCalculated, units: UnitSystem) -> String {
    let origin = if inflow.from_surveys { "from the surveys" } else { "what the tests give with this tubing" };
    let mut text = format!("\n[well.inflow]   # {origin}; in place of what stands there\n");
    let rate = units.unit(Dimension::LiquidRate).factor;
    let (rate_name, pressure_name) = match units {
        UnitSystem::Field => ("STB/d", "psi"),
        UnitSystem::Metric => ("Sm3/d", "bar"),
    };
    let per = units.unit(Dimension::PressureDifference).factor;
    let method = match inflow.shape {
        Shape::Straight => "straight",
        Shape::Vogel | Shape::FlowEfficiency { .. } => "vogel",
        Shape::Wiggins => "wiggins",
        Shape::Jones { .. } => "jones",
        Shape::Composite { .. } => "composite",
        Shape::Fetkovich { .. } => "fetkovich",
    };
    text.push_str(&format!("method      = \"{method}\"\n"));
    match inflow.shape {
        Shape::Fetkovich { n } => {
            // The unit of C hangs on n as it is written.
            let n = rounded(n, 6);
            let c = inflow.coefficient * rate / per.powf(2.0 * n.parse().unwrap_or(1.0));
            text.push_str(&format!("exponent    = {n}\ncoefficient = \"{c:.6e} {rate_name}/{pressure_name}^2n\"\n"));
        }
        shape => {
            if let Shape::FlowEfficiency { efficiency } = shape {
                text.push_str(&format!("flow_efficiency = {}\n", rounded(efficiency, 6)));
            }
            if let Shape::Jones { turbulence_1_psi } = shape {
                let b = turbulence_1_psi / (inflow.coefficient * inflow.coefficient) * per / (rate * rate);
                text.push_str(&format!("turbulence  = \"{b:.6e} {pressure_name}/({rate_name})^2\"\n"));
            }
            let j = inflow.coefficient * rate / per;
            text.push_str(&format!("productivity_index = \"{j:.6e} {rate_name}/{pressure_name}\"\n"));
        }
    }
    if inflow.basis == RateBasis::Oil {
        text.push_str("basis       = \"oil\"\n");
    }
    if inflow.future != FutureRule::Pressure {
        text.push_str(&format!("future      = \"{}\"\n", inflow.future.name()));
    }
    if inflow.loss.yearly > 0.0 {
        text.push_str(&format!("yearly_loss = {}\n", rounded(inflow.loss.yearly, 6)));
    }
    if let Some(since) = inflow.loss.since {
        text.push_str(&format!("loss_since  = {since}\n"));
    }
    let pressure = label(units, Dimension::Pressure);
    text.push_str(&format!(
        "reservoir   = \"{} {}\"\n",
        rounded(pressure.of(inflow.reservoir_psia), 3),
        pressure.suffix
    ));
    text
}

fn rough_text(roughness_in: f64, units: UnitSystem) -> String {
    let unit = label(units, Dimension::Diameter);
    let value = unit.of(roughness_in);
    let decimals = if value > 0.0 { (3.0 - value.log10().floor()).clamp(0.0, 9.0) as usize } else { 0 };
    format!("{} {}", rounded(value, decimals), unit.suffix)
}

/// Without zeros at the end.
fn rounded(value: f64, decimals: usize) -> String {
    let text = format!("{value:.decimals$}");
    if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.').to_owned() } else { text }
}

/// A TOML string.
fn quoted(text: &str) -> String {
    toml::Value::String(text.to_owned()).to_string()
}
