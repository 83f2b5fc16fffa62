//! `summary.json`: the answers in one small file.

use super::json::Json;
use super::labels::{Dimension, Label, UnitSystem, label};
use super::table::recovery;
use super::{Provenance, ReportError, sanity};
use crate::forecast::{Doubt, FlowEnd, Forecast, FutureEnd, InjectorResult, ModelOutcome, Spread, WellResult, date_at};
use crate::inflow::{Figure, Fit, Shape};
use crate::statistics::CONFIDENCE;

/// `summary.json`.
///
/// # Errors
/// When the JSON writer fails.
pub fn summary_json(forecast: &Forecast, provenance: &Provenance) -> Result<Vec<u8>, ReportError> {
    Ok(summary(forecast, provenance).to_bytes()?)
}

/// The labels that the summary needs.
struct Units {
    system: UnitSystem,
    liquid: Label,
    gas: Label,
    liquid_rate: Label,
    pressure: Label,
    difference: Label,
    gor: Label,
}

fn entry(label: Label, stem: &str, value: Option<f64>) -> (String, Json) {
    (label.column(stem), value.map(|v| label.of(v)).into())
}

fn plain(key: &str, value: impl Into<Json>) -> (String, Json) {
    (key.to_owned(), value.into())
}

fn summary(forecast: &Forecast, provenance: &Provenance) -> Json {
    let units = Units {
        system: provenance.units,
        liquid: label(provenance.units, Dimension::LiquidVolume),
        gas: label(provenance.units, Dimension::GasVolume),
        liquid_rate: label(provenance.units, Dimension::LiquidRate),
        pressure: label(provenance.units, Dimension::Pressure),
        difference: label(provenance.units, Dimension::PressureDifference),
        gor: label(provenance.units, Dimension::GasOilRatio),
    };
    let mut entries = provenance.entries();
    entries.extend([
        plain("start", forecast.start.to_string().as_str()),
        plain("end", date_at(forecast.start, forecast.end_days).to_string().as_str()),
        plain("end_days", forecast.end_days),
        plain("end_reason", forecast.end_text),
        plain("tank", tank(forecast, &units)),
        plain("fluid", super::curve_files::sources_json(&forecast.fluid_sources)),
        plain("wells", Json::List(forecast.wells.iter().map(|w| well(forecast, w, &units)).collect())),
        plain("injectors", Json::List(forecast.injectors.iter().map(|i| injector(i, &units)).collect())),
        plain("doubts", Json::List(forecast.doubts.iter().map(doubt).collect())),
        plain("failed_checks", Json::List(sanity(forecast).into_iter().map(Json::Text).collect())),
        plain(
            "work",
            Json::object([
                ("steps", Json::Count(forecast.work.steps)),
                ("right_hand_sides", Json::Count(forecast.work.right_hand_sides)),
                ("traverses", Json::Count(forecast.work.traverses)),
                ("closure_solves", Json::Count(forecast.work.closure_solves)),
                ("segments", Json::Count(forecast.work.segments)),
            ]),
        ),
    ]);
    Json::Object(entries)
}

fn tank(forecast: &Forecast, units: &Units) -> Json {
    let last = forecast.tank.last();
    let injected = |pick: fn(&crate::forecast::InjectorRow) -> f64| -> f64 {
        // An empty sum is -0.0.
        0.0 + forecast.injectors.iter().filter_map(|i| i.rows.last()).map(pick).sum::<f64>()
    };
    let oil_cum_stb = last.map_or(0.0, |t| t.oil_cum_stb);
    let drive = last.and_then(|t| t.drive_indices).map_or(Json::Null, |d| {
        Json::object([
            ("depletion", d.depletion.into()),
            ("gas_cap", d.gas_cap.into()),
            ("rock_and_water", d.rock_and_water.into()),
            ("aquifer", d.aquifer.into()),
            ("injection", d.injection.into()),
        ])
    });
    Json::Object(vec![
        entry(units.pressure, "pressure", Some(last.map_or(forecast.start_pressure_psia, |t| t.pressure_psia))),
        entry(units.pressure, "start_pressure", Some(forecast.start_pressure_psia)),
        entry(units.liquid, "oil_in_place", Some(forecast.oil_in_place_stb)),
        entry(units.liquid, "produced_before", Some(forecast.produced_before_stb)),
        entry(units.liquid, "oil_cum", Some(oil_cum_stb)),
        entry(units.liquid, "water_cum", Some(last.map_or(0.0, |t| t.water_cum_stb))),
        entry(units.gas, "gas_cum", Some(last.map_or(0.0, |t| t.gas_cum_scf))),
        entry(units.liquid, "injected_water_cum", Some(injected(|r| r.water_cum_stb))),
        entry(units.gas, "injected_gas_cum", Some(injected(|r| r.gas_cum_scf))),
        entry(units.liquid, "aquifer_influx_cum", last.and_then(|t| t.aquifer).map(|a| a.influx_cum_stb)),
        plain("recovery", recovery(forecast, oil_cum_stb)),
        plain("voidage_replacement_cum", last.and_then(|t| t.voidage_replacement_cum)),
        plain("balance_residual", forecast.balance_residual),
        plain("drive_indices", drive),
    ])
}

fn well(forecast: &Forecast, well: &WellResult, units: &Units) -> Json {
    let last = well.rows.last();
    let end = well.natural_flow_end.map_or(Json::Null, |end| {
        Json::Object(vec![
            plain("date", end.date.to_string().as_str()),
            plain("days", end.days),
            plain("reason", end.reason.text()),
            entry(units.liquid_rate, "oil_rate", Some(end.oil_rate_stb_d)),
            entry(units.liquid_rate, "liquid_rate", Some(end.liquid_rate_stb_d)),
            entry(units.difference, "flow_margin", Some(end.flow_margin_psi)),
            entry(units.pressure, "reservoir_pressure", Some(end.reservoir_pressure_psia)),
        ])
    });
    let tests = well
        .tests
        .iter()
        .map(|t| {
            Json::Object(vec![
                plain("on", t.on.map_or(Json::Null, |on| Json::text(on.to_string()))),
                entry(units.pressure, "reservoir", Some(t.reservoir_psia)),
                entry(units.pressure, "flowing", Some(t.flowing_psia)),
                plain("flowing_computed", Json::Bool(t.computed)),
                entry(units.liquid_rate, "rate", Some(t.rate_stb_d)),
                entry(units.liquid_rate, "model_rate", Some(t.model_rate_stb_d)),
            ])
        })
        .collect();
    let plateau_end = day_or_null(forecast, well.plateau_end);
    Json::Object(vec![
        plain("name", well.name.as_str()),
        plain("natural_flow_end", end),
        plain("flowing_at_end", Json::Bool(well.flowing_at_end)),
        plain("water_breakthrough", day_or_null(forecast, forecast.water_breakthrough(&well.name))),
        plain("water_breakthrough_days", forecast.water_breakthrough(&well.name)),
        plain("plateau_end", plateau_end),
        plain("plateau_end_days", well.plateau_end),
        plain("restart_until", day_or_null(forecast, well.restart_until)),
        plain("restart_until_days", well.restart_until),
        plain("spread", well.spread.as_ref().map_or(Json::Null, spread)),
        entry(units.liquid, "oil_cum", Some(last.map_or(0.0, |r| r.oil_cum_stb))),
        entry(units.liquid, "water_cum", Some(last.map_or(0.0, |r| r.water_cum_stb))),
        entry(units.gas, "gas_cum", Some(last.map_or(0.0, |r| r.gas_cum_scf))),
        entry(units.gor, "peak_gor", Some(well.peak_gor_scf_stb)),
        plain("future_rules", Json::List(well.future_rules.iter().map(future_rule).collect())),
        plain("inflow", well.inflow_text.as_str()),
        plain("inflow_fit", well.inflow_fit.as_ref().map_or(Json::Null, |fit| inflow_fit(fit, units.system))),
        plain("choke", well.choke_text.as_deref().map_or(Json::Null, Json::text)),
        plain("tests", Json::List(tests)),
    ])
}

fn day_or_null(forecast: &Forecast, days: Option<f64>) -> Json {
    days.map_or(Json::Null, |days| Json::text(date_at(forecast.start, days).to_string()))
}

/// `earliest` and `latest` are dates; `latest` is null while the well still flows with one of the models.
fn spread(spread: &Spread) -> Json {
    let date =
        |end: Option<(&'static str, &FlowEnd)>| end.map_or(Json::Null, |(_, end)| Json::text(end.date.to_string()));
    let latest = if spread.still_flowing().is_empty() { spread.latest() } else { None };
    let models = spread
        .models
        .iter()
        .map(|m| {
            let (date, text) = outcome(&m.outcome);
            Json::Object(vec![
                plain("method", m.method),
                plain("natural_flow_end", date),
                plain("reason", text.as_str()),
            ])
        })
        .collect();
    Json::Object(vec![
        plain("earliest", date(spread.earliest())),
        plain("latest", date(latest)),
        plain("calibrated", Json::Bool(spread.calibrated)),
        plain("models", Json::List(models)),
    ])
}

/// Date of the end, or null, and why.
fn outcome(outcome: &ModelOutcome) -> (Json, String) {
    match outcome {
        ModelOutcome::Ends(end) => (Json::text(end.date.to_string()), end.reason.text().to_owned()),
        ModelOutcome::StillFlows => (Json::Null, "still flows".to_owned()),
        ModelOutcome::Failed(why) => (Json::Null, why.clone()),
    }
}

fn future_rule(end: &FutureEnd) -> Json {
    let (date, text) = outcome(&end.outcome);
    Json::Object(vec![plain("rule", end.rule), plain("natural_flow_end", date), plain("reason", text.as_str())])
}

/// The fit of the inflow with its intervals.
fn inflow_fit(fit: &Fit, units: UnitSystem) -> Json {
    let intervals = fit
        .intervals
        .iter()
        .map(|i| {
            let plain_number = |name: &'static str| (name, String::new(), 1.0);
            let of = |name: &'static str, dimension: Dimension| {
                let label = label(units, dimension);
                (name, format!("_{}", label.suffix), label.of(1.0))
            };
            let (name, suffix, factor) = match (i.figure, fit.shape) {
                (Figure::Exponent, _) => plain_number("n"),
                (Figure::Coefficient, Shape::Fetkovich { n }) => {
                    let rate = label(units, Dimension::LiquidRate);
                    let pressure = label(units, Dimension::PressureDifference);
                    let suffix = format!("_{}_{}2n", rate.suffix, pressure.suffix);
                    ("c", suffix, rate.of(1.0) / pressure.of(1.0).powf(2.0 * n))
                }
                (Figure::Coefficient, _) => plain_number("c"),
                (Figure::ProductivityIndex, _) => of("productivity_index", Dimension::ProductivityIndex),
                (Figure::Turbulence, _) => of("turbulence", Dimension::Turbulence),
                (Figure::OpenFlow, _) => of("open_flow", Dimension::LiquidRate),
            };
            Json::Object(vec![
                plain("figure", name),
                plain(&format!("value{suffix}"), factor * i.value),
                plain(&format!("low{suffix}"), factor * i.low),
                plain(&format!("high{suffix}"), factor * i.high),
            ])
        })
        .collect();
    Json::Object(vec![
        plain("rms_relative", fit.rms_relative),
        plain("confidence", CONFIDENCE),
        plain("intervals", Json::List(intervals)),
    ])
}

fn injector(injector: &InjectorResult, units: &Units) -> Json {
    let last = injector.rows.last();
    let gas = last.is_some_and(|r| r.gas_cum_scf > 0.0);
    let fluid = if gas { units.gas } else { units.liquid };
    Json::Object(vec![
        plain("name", injector.name.as_str()),
        entry(units.liquid, "injected_water_cum", Some(last.map_or(0.0, |r| r.water_cum_stb))),
        entry(units.gas, "injected_gas_cum", Some(last.map_or(0.0, |r| r.gas_cum_scf))),
        entry(fluid, "shortfall", Some(injector.rows.iter().map(|r| r.shortfall).sum())),
    ])
}

fn doubt(doubt: &Doubt) -> Json {
    Json::object([
        ("kind", super::doubt_text(doubt.kind).into()),
        ("about", doubt.about.as_str().into()),
        ("seen", doubt.seen.as_str().into()),
        ("cause", doubt.cause.as_str().into()),
        ("advice", doubt.advice.as_str().into()),
    ])
}

/// The doubts about a scenario's data as JSON.
///
/// # Errors
/// When the JSON writer fails.
pub fn doubts_json(doubts: &[Doubt], provenance: &Provenance) -> Result<Vec<u8>, ReportError> {
    let mut entries = provenance.entries();
    entries.push(plain("doubts", Json::List(doubts.iter().map(doubt).collect())));
    Ok(Json::Object(entries).to_bytes()?)
}
