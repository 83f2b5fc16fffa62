//! `rates`: oil, gas, water and injection rates over time, each well and the total.

use super::Drawing;
use super::axes::{Span, headings, legend, legend_height};
use super::style::{Look, TOTAL, look};
use super::timeline::{Moment, Timeline, draw_moments, moments_height, stack};
use crate::forecast::{EventKind, EventRecord, Forecast, InjectorRow, Period, TankRow, WellResult, WellRow};
use crate::report::Provenance;
use crate::report::human::{self, short_month};
use crate::report::labels::{Dimension, label};

const WIDTH: u32 = 960;

/// One line of a panel: stretches of time, days from the start, with the mean rate in each.
struct Series {
    look: Look,
    stretches: Vec<(f64, f64, f64)>,
}

/// One panel: its name, its unit and its lines.
struct Stream {
    name: &'static str,
    dimension: Dimension,
    series: Vec<Series>,
}

/// The rates of a forecast as a picture: averages over the calendar period, drawn as steps.
pub fn rates_picture(forecast: &Forecast, provenance: &Provenance) -> Drawing {
    let streams = streams(forecast);
    let timeline = timeline(forecast);
    let several = forecast.wells.len() > 1 || !forecast.injectors.is_empty();
    let entries = if several { legend_entries(forecast) } else { Vec::new() };
    let moments = ends_of_flow(forecast);
    let top = 64.0 + if several { legend_height(WIDTH, &entries) } else { 0.0 };
    let strip = moments_height(WIDTH, 36.0, timeline.days, &moments);
    let height = top + strip + 28.0 + 190.0 * streams.len().max(1) as f64 + 18.0;

    let mut d = Drawing::new(WIDTH, height as u32);
    let height = f64::from(d.size().1);
    let no_water = if water_shows(forecast) { String::new() } else { format!("; {NO_WATER}") };
    let subtitle = format!("Calendar-day rates, averages over the part of each period with flow{no_water}");
    headings(&mut d, &title(provenance), &subtitle, &provenance.footer());
    if several {
        legend(&mut d, 64.0, &entries);
    }
    let ys: Vec<(Span, f64)> = streams.iter().map(|s| (axis(s, provenance).0, 1.0)).collect();
    let panels = stack(&d, top + strip + 28.0, height - 62.0, 36.0, timeline.days, &ys);
    for (i, (stream, panel)) in streams.iter().zip(&panels).enumerate() {
        let (_, factor, unit) = axis(stream, provenance);
        panel.draw_y(&mut d, &format!("{} rate, {unit}", stream.name), 4, true);
        timeline.draw(&mut d, panel, i + 1 == streams.len());
        panel.draw_frame(&mut d);
        for series in &stream.series {
            panel.draw_line(&mut d, series.steps(factor), series.look);
        }
    }
    draw_moments(&mut d, &panels, top, &moments);
    if let (Some(panel), Some(stream)) = (panels.first(), streams.first()) {
        let (_, factor, _) = axis(stream, provenance);
        for i in 0..forecast.wells.len() {
            if let Some((days, rate)) = last_rate(forecast, i) {
                panel.draw_mark(&mut d, (days, rate * factor), look(i), 4.5);
            }
        }
    }
    d
}

/// Title and case.
pub(super) fn title(provenance: &Provenance) -> String {
    match &provenance.case {
        Some(case) => format!("{} · case {case}", provenance.title),
        None => provenance.title.clone(),
    }
}

pub(super) fn timeline(forecast: &Forecast) -> Timeline {
    let end = forecast.periods.last().map_or(forecast.end_days, |p| p.end_days);
    Timeline { start: forecast.start, days: Span::new(0.0, end) }
}

/// Every end of natural flow, also of wells that came back.
pub(super) fn ends_of_flow(forecast: &Forecast) -> Vec<Moment> {
    let mut moments = Vec::new();
    for (i, well) in forecast.wells.iter().enumerate() {
        let is_end = |e: &&EventRecord| matches!(e.kind, EventKind::EndOfNaturalFlow(_)) && e.name == well.name;
        let last = timeline(forecast).days.high;
        let mut ends: Vec<_> = forecast.events.iter().filter(is_end).map(|e| (e.days, e.date)).collect();
        if ends.is_empty() {
            ends.extend(well.natural_flow_end.map(|end| (end.days, end.date)));
        }
        let text = |date| format!("{} ends {}", well.name, short_month(date));
        let inside = ends.into_iter().filter(|(days, _)| (0.0..=last).contains(days));
        moments.extend(inside.map(|(days, date)| Moment { days, text: text(date), look: look(i) }));
    }
    moments
}

fn legend_entries(forecast: &Forecast) -> Vec<(String, Look, bool)> {
    let mut entries: Vec<(String, Look, bool)> = Vec::new();
    if forecast.wells.len() > 1 {
        entries.push(("all wells".to_owned(), TOTAL, false));
    }
    for (i, well) in forecast.wells.iter().enumerate() {
        entries.push((well.name.clone(), look(i), well.natural_flow_end.is_some()));
    }
    for (i, injector) in forecast.injectors.iter().enumerate() {
        entries.push((format!("injector {}", injector.name), look(forecast.wells.len() + i), false));
    }
    entries
}

fn streams(forecast: &Forecast) -> Vec<Stream> {
    let wells = |pick: fn(&WellRow) -> f64, total: fn(&TankRow) -> f64| {
        let mut series = Vec::new();
        if forecast.wells.len() > 1 {
            series.push(Series { look: TOTAL, stretches: total_stretches(forecast, total) });
        }
        for (i, well) in forecast.wells.iter().enumerate() {
            series.push(Series { look: look(i), stretches: well_stretches(forecast, well, pick) });
        }
        series
    };
    let injectors = |pick: fn(&InjectorRow) -> f64| {
        let numbered = forecast.injectors.iter().enumerate();
        let series = numbered.map(|(i, injector)| Series {
            look: look(forecast.wells.len() + i),
            stretches: forecast.periods.iter().zip(&injector.rows).map(|(p, r)| mean(p, p.run_days, pick(r))).collect(),
        });
        series.filter(Series::flows).collect::<Vec<_>>()
    };
    let all = [
        Stream { name: "Oil", dimension: Dimension::LiquidRate, series: wells(|r| r.oil_stb, |t| t.oil_stb) },
        Stream { name: "Gas", dimension: Dimension::GasRate, series: wells(|r| r.gas_scf, |t| t.gas_scf) },
        Stream { name: "Water", dimension: Dimension::LiquidRate, series: wells(|r| r.water_stb, |t| t.water_stb) },
        Stream { name: "Injected water", dimension: Dimension::LiquidRate, series: injectors(|r| r.water_stb) },
        Stream { name: "Injected gas", dimension: Dimension::GasRate, series: injectors(|r| r.gas_scf) },
    ];
    // A stream that never flows gets no panel; oil always has one.
    let shown = |s: &Stream| match s.name {
        "Oil" => true,
        "Water" => water_shows(forecast),
        _ => s.series.iter().any(Series::flows),
    };
    all.into_iter().filter(shown).collect()
}

/// Whether water ever exceeds a thousandth of a period's liquid; less is the connate water's own expansion.
pub(super) fn water_shows(forecast: &Forecast) -> bool {
    forecast.tank.iter().any(|t| t.water_stb > 1e-3 * (t.oil_stb + t.water_stb))
}

/// What is said where the water has no panel.
pub(super) const NO_WATER: &str = "water stays below 0.1 % of the liquid";

impl Series {
    fn flows(&self) -> bool {
        self.stretches.iter().any(|s| s.2 > 0.0)
    }

    /// A staircase, broken where there is no rate.
    fn steps(&self, factor: f64) -> impl Iterator<Item = (f64, f64)> + '_ {
        self.stretches.iter().flat_map(move |&(from, to, rate)| [(from, rate * factor), (to, rate * factor)])
    }
}

/// The mean rate from the start of `period` to `until`.
fn mean(period: &Period, until: f64, volume: f64) -> (f64, f64, f64) {
    let length = until - period.start_days;
    (period.start_days, until, if length > 0.0 { volume / length } else { f64::NAN })
}

/// The tank's mean rates over the part of each period in which any well flows; periods without flow are gaps.
pub(super) fn total_stretches(forecast: &Forecast, pick: fn(&TankRow) -> f64) -> Vec<(f64, f64, f64)> {
    let intervals: Vec<_> = forecast.wells.iter().flat_map(|w| flow_intervals(forecast, w)).collect();
    let rows = forecast.periods.iter().zip(&forecast.tank);
    rows.map(|(p, t)| {
        let flows = t.oil_stb + t.water_stb > 0.0;
        flowing_mean(p, &intervals, if flows { pick(t) } else { f64::NAN })
    })
    .collect()
}

/// When a well flows, days from the start, as the events tell; without any, up to its end.
fn flow_intervals(forecast: &Forecast, well: &WellResult) -> Vec<(f64, f64)> {
    let mut list = Vec::new();
    let mut since = None;
    for event in forecast.events.iter().filter(|e| e.name == well.name) {
        match event.kind {
            EventKind::WellStarted | EventKind::FlowsAgain => {
                since.get_or_insert(event.days);
            }
            EventKind::EndOfNaturalFlow(_) => list.push((since.take().unwrap_or(0.0), event.days)),
            _ => {}
        }
    }
    list.extend(since.map(|from| (from, f64::INFINITY)));
    if list.is_empty() && well.rows.iter().any(|r| r.flowing_days > 0.0) {
        list.push((0.0, well.natural_flow_end.map_or(f64::INFINITY, |end| end.days)));
    }
    list
}

/// A well's mean rates over the part of each period in which it flows; periods without flow are gaps.
fn well_stretches(forecast: &Forecast, well: &WellResult, pick: fn(&WellRow) -> f64) -> Vec<(f64, f64, f64)> {
    let intervals = flow_intervals(forecast, well);
    let rows = forecast.periods.iter().zip(&well.rows);
    rows.map(|(p, r)| flowing_mean(p, &intervals, if r.flowing_days > 0.0 { pick(r) } else { f64::NAN })).collect()
}

/// The mean rate of a volume over the part of a period between the first and the last flow in it.
fn flowing_mean(period: &Period, intervals: &[(f64, f64)], volume: f64) -> (f64, f64, f64) {
    let run = period.run_days.min(period.end_days);
    let inside = intervals.iter().filter(|(from, to)| *from < run && *to > period.start_days);
    let hull = inside.fold(None, |hull: Option<(f64, f64)>, (from, to)| {
        Some(hull.map_or((*from, *to), |(a, b)| (a.min(*from), b.max(*to))))
    });
    let (from, to) = hull.map_or((period.start_days, run), |(a, b)| (a.max(period.start_days), b.min(run)));
    (from, to, if to > from { volume / (to - from) } else { f64::NAN })
}

/// The scale of a stream, the factor from oilfield units to it, and its unit in words.
fn axis(stream: &Stream, provenance: &Provenance) -> (Span, f64, String) {
    let unit = label(provenance.units, stream.dimension);
    let rates = stream.series.iter().flat_map(|s| s.stretches.iter().map(|s| unit.of(s.2)));
    let highest = Span::of(rates).map_or(1.0, |s| s.high);
    let (divisor, word) = human::scale(highest);
    (Span::from_zero(highest / divisor, false), unit.of(1.0) / divisor, format!("{word}{}", unit.text))
}

/// Where a well's line ends: its oil rate at the end of natural flow, as a calendar-day rate.
fn last_rate(forecast: &Forecast, index: usize) -> Option<(f64, f64)> {
    let well = forecast.wells.get(index)?;
    let end = well.natural_flow_end?;
    let before = well.rows.iter().zip(&forecast.periods).rfind(|(r, p)| p.end_days <= end.days && r.flowing_days > 0.0);
    let uptime = before.map_or(1.0, |(r, p)| (r.flowing_days / (p.end_days - p.start_days)).min(1.0));
    Some((end.days, end.oil_rate_stb_d * uptime))
}
