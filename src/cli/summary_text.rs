//! What `forecast` prints: the answers on one screen.

use super::screen::{Screen, Side};
use crate::forecast::{Doubt, EventKind, Forecast, ModelOutcome, WellResult, date_at};
use crate::inflow::{Figure, Interval};
use crate::report::human::{month, number, short, span, volume};
use crate::report::labels::{Dimension, UnitSystem, label};
use crate::report::{CAUTION, Provenance, doubt_text, recovery, sanity};
use crate::statistics::CONFIDENCE;

/// The summary of a forecast for people; `folder` is where the files are.
pub fn forecast_text(forecast: &Forecast, provenance: &Provenance, folder: Option<&str>) -> String {
    let mut s = Screen::default();
    match &provenance.case {
        Some(case) => s.title(&format!("{} · case {case}", provenance.title)),
        None => s.title(&provenance.title),
    }
    let end = month(last_day(forecast));
    let ended = match forecast.end_text {
        "period ended" => String::new(),
        why => format!(" ({why})"),
    };
    s.paragraph(0, 0, &format!("{} to {end}{ended} · {}", month(forecast.start), provenance.scenario_name));
    ends(&mut s, forecast, provenance.units);
    wells(&mut s, forecast, provenance.units);
    tank(&mut s, forecast, provenance.units);
    tests(&mut s, forecast, provenance.units);
    doubts(&mut s, &forecast.doubts);
    failed(&mut s, &sanity(forecast));
    if let Some(folder) = folder {
        s.line("");
        s.paragraph(0, 2, &format!("Results: {folder} (profile.csv, yearly.csv, events.csv, summary.json, pictures)"));
    }
    s.line("");
    s.quiet(CAUTION);
    s.finish()
}

/// The last day of the run: an end at midnight belongs to the day before.
fn last_day(forecast: &Forecast) -> jiff::civil::Date {
    date_at(forecast.start, (forecast.end_days - 0.01).max(0.0))
}

fn ends(s: &mut Screen, forecast: &Forecast, units: UnitSystem) {
    let rate = label(units, Dimension::LiquidRate);
    s.heading("End of natural flow");
    let dash = || "-".to_owned();
    let rows: Vec<Vec<String>> = forecast
        .wells
        .iter()
        .map(|well| match (well.natural_flow_end, well.flowing_at_end) {
            (Some(end), false) => vec![
                well.name.clone(),
                month(end.date),
                end.reason.text().to_owned(),
                format!("{} {}", number(rate.of(end.oil_rate_stb_d), 0), rate.text),
                span(end.days),
            ],
            (_, true) => vec![
                well.name.clone(),
                month(last_day(forecast)),
                "still flows at the end of the forecast".to_owned(),
                String::new(),
                String::new(),
            ],
            (None, false) => vec![well.name.clone(), "never flowed".to_owned(), dash(), dash(), dash()],
        })
        .collect();
    let header = [
        ("well", Side::Left),
        ("flows until", Side::Left),
        ("reason", Side::Left),
        ("oil rate then", Side::Right),
        ("after", Side::Right),
    ];
    s.table(&header, &rows);
    for well in &forecast.wells {
        for text in spread_text(well).into_iter().chain(rules_text(well)).chain(restart_text(forecast, well)) {
            s.paragraph(2, 2, &text);
        }
        for text in interruptions(forecast, &well.name) {
            s.paragraph(2, 2, &text);
        }
    }
}

/// Between which months the end lies over the tubing models that apply.
fn spread_text(well: &WellResult) -> Option<String> {
    let spread = well.spread.as_ref()?;
    let name = &well.name;
    let failed: Vec<&str> =
        spread.models.iter().filter(|m| matches!(m.outcome, ModelOutcome::Failed(_))).map(|m| m.method).collect();
    let left_out = if failed.is_empty() { String::new() } else { format!("; not counted: {}", failed.join(", ")) };
    let count = spread.models.len() - failed.len();
    let still = spread.still_flowing();
    let text = match (spread.earliest(), spread.latest()) {
        (Some((first, earliest)), Some((last, latest))) if still.is_empty() => {
            format!("between {} ({first}) and {} ({last})", month(earliest.date), month(latest.date))
        }
        (Some((first, earliest)), _) => {
            format!("from {} ({first}) on; it still flows with {}", month(earliest.date), still.join(", "))
        }
        _ => "it still flows at the end of the forecast with every one".to_owned(),
    };
    let tuned = if spread.calibrated { ", each tuned to the measurements" } else { "" };
    Some(format!("{name}, over {count} tubing models{tuned}: {text}{left_out}."))
}

/// The end of natural flow under the other rules for future inflow.
fn rules_text(well: &WellResult) -> Option<String> {
    let (own, others) = well.future_rules.split_first()?;
    let told = |outcome: &ModelOutcome| match outcome {
        ModelOutcome::Ends(end) => month(end.date),
        ModelOutcome::StillFlows => "still flows at the end of the forecast".to_owned(),
        ModelOutcome::Failed(_) => "cannot be run".to_owned(),
    };
    // A well that never flowed has no end under any rule.
    if own.outcome == ModelOutcome::StillFlows && !well.flowing_at_end {
        return None;
    }
    let list: Vec<String> = others.iter().map(|end| format!("{} {}", end.rule, told(&end.outcome))).collect();
    Some(format!("{}, with another rule for future inflow than {}: {}.", well.name, own.rule, list.join(", ")))
}

/// When a shutdown becomes final.
fn restart_text(forecast: &Forecast, well: &WellResult) -> Option<String> {
    let days = well.restart_until?;
    let date = date_at(forecast.start, days);
    let name = &well.name;
    Some(if days <= 0.0 {
        format!("{name}, shut in long enough for its column to die: does not start by itself again.")
    } else {
        format!(
            "{name}, shut in long enough for its column to die: does not start by itself again from {} on.",
            month(date)
        )
    })
}

/// Ends of natural flow after which the well came back.
fn interruptions(forecast: &Forecast, name: &str) -> Vec<String> {
    let mut list = Vec::new();
    let mut ended = None;
    for event in forecast.events.iter().filter(|e| e.name == name) {
        match (event.kind, ended) {
            (EventKind::EndOfNaturalFlow(reason), _) => ended = Some((event.date, reason)),
            (EventKind::FlowsAgain, Some((date, reason))) => {
                let (from, to) = (month(date), month(event.date));
                list.push(format!("{name} also stopped in {from} ({}) and came back in {to}.", reason.text()));
                ended = None;
            }
            _ => {}
        }
    }
    list
}

fn wells(s: &mut Screen, forecast: &Forecast, units: UnitSystem) {
    let (liquid, gor) = (label(units, Dimension::LiquidVolume), label(units, Dimension::GasOilRatio));
    s.heading("Wells");
    let plateau = |well: &WellResult| {
        well.plateau_end.map_or_else(|| "-".to_owned(), |days| month(date_at(forecast.start, days)))
    };
    let rows: Vec<Vec<String>> = forecast
        .wells
        .iter()
        .map(|well| {
            let last = well.rows.last().copied().unwrap_or_default();
            vec![
                well.name.clone(),
                plateau(well),
                volume(liquid.of(last.oil_cum_stb), liquid.text),
                volume(liquid.of(last.water_cum_stb), liquid.text),
                format!("{} {}", number(gor.of(well.peak_gor_scf_stb), 0), gor.text),
            ]
        })
        .collect();
    let header = [
        ("well", Side::Left),
        ("target held until", Side::Left),
        ("oil made", Side::Right),
        ("water made", Side::Right),
        ("peak gas-oil ratio", Side::Right),
    ];
    s.table(&header, &rows);
    for well in &forecast.wells {
        if let Some(days) = forecast.water_breakthrough(&well.name) {
            s.paragraph(
                2,
                2,
                &format!("{}: water breakthrough in {}.", well.name, month(date_at(forecast.start, days))),
            );
        }
    }
}

fn tank(s: &mut Screen, forecast: &Forecast, units: UnitSystem) {
    let (liquid, gas) = (label(units, Dimension::LiquidVolume), label(units, Dimension::GasVolume));
    let pressure = label(units, Dimension::Pressure);
    s.heading("Tank");
    let Some(last) = forecast.tank.last() else { return };
    let mut pairs = vec![
        (
            "pressure",
            format!(
                "{} {} at the start, {} {} at the end",
                number(pressure.of(forecast.start_pressure_psia), 0),
                pressure.text,
                number(pressure.of(last.pressure_psia), 0),
                pressure.text
            ),
        ),
        (
            "oil made",
            format!(
                "{}; recovery {} % of {}",
                volume(liquid.of(last.oil_cum_stb), liquid.text),
                number(100.0 * recovery(forecast, last.oil_cum_stb), 1),
                volume(liquid.of(forecast.oil_in_place_stb), liquid.text)
            ),
        ),
    ];
    let injected = |pick: fn(&crate::forecast::InjectorRow) -> f64| -> f64 {
        forecast.injectors.iter().filter_map(|i| i.rows.last()).map(pick).sum()
    };
    let (water, gas_in) = (injected(|r| r.water_cum_stb), injected(|r| r.gas_cum_scf));
    if water > 0.0 {
        pairs.push(("water injected", volume(liquid.of(water), liquid.text)));
    }
    if gas_in > 0.0 {
        pairs.push(("gas injected", volume(gas.of(gas_in), gas.text)));
    }
    if let Some(aquifer) = last.aquifer {
        let pressure = aquifer.pressure_psia.map_or_else(String::new, |p| {
            let unit = label(units, Dimension::Pressure);
            format!("; its pressure {} {}", number(unit.of(p), 0), unit.text)
        });
        pairs.push((
            "water from the aquifer",
            format!("{}{pressure}", volume(liquid.of(aquifer.influx_cum_stb), liquid.text)),
        ));
    }
    if let Some(replaced) = last.voidage_replacement_cum.filter(|_| water > 0.0 || gas_in > 0.0) {
        pairs.push(("voidage replaced", format!("{} of all that the forecast withdraws", number(replaced, 3))));
    }
    if let Some(d) = last.drive_indices {
        let shares = [
            ("depletion", d.depletion),
            ("gas cap", d.gas_cap),
            ("rock and water", d.rock_and_water),
            ("aquifer", d.aquifer),
            ("injection", d.injection),
        ];
        let shown = shares.iter().filter(|(_, share)| share.abs() >= 5e-4);
        let text: Vec<String> = shown.map(|(name, share)| format!("{name} {} %", number(100.0 * share, 1))).collect();
        pairs.push(("drive", text.join(", ")));
    }
    pairs.push(("balance residual", format!("{:.1e}", forecast.balance_residual)));
    s.pairs(&pairs);
}

fn tests(s: &mut Screen, forecast: &Forecast, units: UnitSystem) {
    let (rate, pressure) = (label(units, Dimension::LiquidRate), label(units, Dimension::Pressure));
    if forecast.wells.iter().all(|w| w.inflow_text.is_empty()) {
        return;
    }
    s.heading("Inflow");
    for well in &forecast.wells {
        s.paragraph(2, 2, &format!("{}: {}", well.name, well.inflow_text));
    }
    for well in &forecast.wells {
        if let Some(text) = intervals_text(well, units) {
            s.paragraph(2, 2, &text);
        }
    }
    for well in &forecast.wells {
        if let Some(choke) = &well.choke_text {
            s.paragraph(2, 2, &format!("{}, choke: {choke}", well.name));
        }
    }
    let mut rows = Vec::new();
    for well in &forecast.wells {
        for test in &well.tests {
            let miss = 100.0 * (test.model_rate_stb_d / test.rate_stb_d - 1.0);
            let computed = if test.computed { " computed" } else { "" };
            rows.push(vec![
                well.name.clone(),
                test.on.map_or_else(|| "-".to_owned(), month),
                format!("{} {}", number(pressure.of(test.reservoir_psia), 0), pressure.text),
                format!("{} {}{computed}", number(pressure.of(test.flowing_psia), 0), pressure.text),
                format!("{} {}", short(rate.of(test.rate_stb_d)), rate.text),
                format!("{} {}", short(rate.of(test.model_rate_stb_d)), rate.text),
                percent(miss),
            ]);
        }
    }
    if !rows.is_empty() {
        let header = [
            ("test", Side::Left),
            ("when", Side::Left),
            ("reservoir", Side::Right),
            ("flowing", Side::Right),
            ("measured", Side::Right),
            ("model", Side::Right),
            ("miss", Side::Right),
        ];
        s.table(&header, &rows);
    }
}

/// The intervals of a fit. C has none of its own here: it says nothing without n.
fn intervals_text(well: &WellResult, units: UnitSystem) -> Option<String> {
    let fit = well.inflow_fit.as_ref()?;
    let percent = 100.0 * CONFIDENCE;
    if fit.intervals.is_empty() {
        // A single test is a doubt of its own.
        let told = well.tests.len() > 1;
        return told.then(|| format!("{}: no intervals, with no more tests than fitted figures", well.name));
    }
    let shown = |i: &Interval| {
        let (name, dimension, digits) = match i.figure {
            Figure::Coefficient => return None,
            Figure::Exponent => return Some(format!("n {} to {}", number(i.low, 3), number(i.high, 3))),
            Figure::ProductivityIndex => ("J", Dimension::ProductivityIndex, 3),
            Figure::Turbulence => ("b", Dimension::Turbulence, 7),
            Figure::OpenFlow => ("open flow", Dimension::LiquidRate, 0),
        };
        let unit = label(units, dimension);
        Some(format!("{name} {} to {} {}", number(unit.of(i.low), digits), number(unit.of(i.high), digits), unit.text))
    };
    let list: Vec<String> = fit.intervals.iter().filter_map(shown).collect();
    Some(format!("{}, intervals of {} %: {}", well.name, number(percent, 0), list.join("; ")))
}

/// "+1.2 %"; what rounds to zero has no sign.
fn percent(value: f64) -> String {
    let text = number(value, 1);
    let plus = if value > 0.0 && text != "0.0" { "+" } else { "" };
    if value.is_finite() { format!("{plus}{text} %") } else { text }
}

/// The list of doubts, each with its cause and what to do.
pub fn doubts(s: &mut Screen, doubts: &[Doubt]) {
    if doubts.is_empty() {
        return;
    }
    s.heading(if doubts.len() == 1 { "One doubt" } else { "Doubts" });
    for doubt in doubts {
        let text = format!(
            "{}: {} Likely cause: {} What to do: {}",
            doubt.about,
            sentence(&doubt.seen),
            sentence(&doubt.cause),
            sentence(&doubt.advice)
        );
        s.warning(&format!("{}.", doubt_text(doubt.kind)), &text);
    }
}

/// What failed.
pub fn failed(s: &mut Screen, failed: &[String]) {
    if failed.is_empty() {
        return;
    }
    s.heading("Failed checks: do not use these results");
    for text in failed {
        s.failure("!", text);
    }
}

/// With a full stop at the end.
fn sentence(text: &str) -> String {
    let text = text.trim();
    if text.is_empty() || text.ends_with(['.', '!', '?']) { text.to_owned() } else { format!("{text}.") }
}
