//! `rates`: oil, gas, water and injection rates over time, each well and the total.

use super::axes::{Span, headings, legend};
use super::style::{Look, TOTAL, look};
use super::timeline::{Moment, Timeline, draw_moments, moments_height, stack};
use super::{Drawing, style::INK};
use crate::forecast::{Forecast, Period};
use crate::report::Provenance;
use crate::report::human::{self, short_month};
use crate::report::labels::{Quantity, label};

const WIDTH: u32 = 960;

/// One line of a panel: a volume for each period.
struct Series {
    look: Look,
    volumes: Vec<f64>,
}

/// One panel: its name, its unit and its lines.
struct Stream {
    name: &'static str,
    quantity: Quantity,
    series: Vec<Series>,
}

/// The rates of a forecast as a picture: averages over the calendar period, drawn as steps.
pub fn rates_picture(forecast: &Forecast, provenance: &Provenance) -> Drawing {
    let streams = streams(forecast);
    let mut d = Drawing::new(WIDTH, (170 + 190 * streams.len().max(1)) as u32);
    let height = f64::from(d.size().1);
    headings(&mut d, &title(provenance), "Calendar-day rates, averages over each period", &provenance.footer());

    let timeline = timeline(forecast);
    let mut top = 64.0;
    if forecast.wells.len() > 1 || !forecast.injectors.is_empty() {
        top += legend(&mut d, top, &legend_entries(forecast));
    }
    let moments = ends_of_flow(forecast);
    let panels_of = |d: &Drawing, top: f64| {
        let ys: Vec<(Span, f64)> = streams.iter().map(|s| (axis(s, forecast, provenance).0, 1.0)).collect();
        stack(d, top, height - 62.0, 36.0, timeline.days, &ys)
    };
    let strip = panels_of(&d, top).first().map_or(0.0, |p| moments_height(&moments, p));
    let panels = panels_of(&d, top + strip + 28.0);
    for (i, (stream, panel)) in streams.iter().zip(&panels).enumerate() {
        let (_, factor, unit) = axis(stream, forecast, provenance);
        panel.draw_y(&mut d, &format!("{} rate, {unit}", stream.name), 4, true);
        timeline.draw(&mut d, panel, i + 1 == streams.len());
        panel.draw_frame(&mut d);
        for series in &stream.series {
            panel.draw_line(&mut d, steps(&forecast.periods, &series.volumes, factor), series.look);
        }
    }
    draw_moments(&mut d, &panels, top, &moments);
    if let (Some(panel), Some(stream)) = (panels.first(), streams.first()) {
        let (_, factor, _) = axis(stream, forecast, provenance);
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

pub(super) fn ends_of_flow(forecast: &Forecast) -> Vec<Moment> {
    let ends = forecast.wells.iter().enumerate().filter_map(|(i, w)| w.natural_flow_end.map(|end| (i, w, end)));
    ends.map(|(i, w, end)| Moment {
        days: end.days,
        text: format!("{} ends {}", w.name, short_month(end.date)),
        look: look(i),
    })
    .collect()
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
    let wells = |pick: fn(&crate::forecast::WellRow) -> f64, total: fn(&crate::forecast::TankRow) -> f64| {
        let mut series = Vec::new();
        if forecast.wells.len() > 1 {
            series.push(Series { look: TOTAL, volumes: forecast.tank.iter().map(total).collect() });
        }
        for (i, well) in forecast.wells.iter().enumerate() {
            series.push(Series { look: look(i), volumes: well.rows.iter().map(pick).collect() });
        }
        series
    };
    let injectors = |pick: fn(&crate::forecast::InjectorRow) -> f64| {
        let numbered = forecast.injectors.iter().enumerate();
        let series = numbered.map(|(i, injector)| Series {
            look: look(forecast.wells.len() + i),
            volumes: injector.rows.iter().map(pick).collect(),
        });
        series.filter(|s| s.volumes.iter().any(|&v| v > 0.0)).collect::<Vec<_>>()
    };
    let all = [
        Stream { name: "Oil", quantity: Quantity::LiquidRate, series: wells(|r| r.oil_stb, |t| t.oil_stb) },
        Stream { name: "Gas", quantity: Quantity::GasRate, series: wells(|r| r.gas_scf, |t| t.gas_scf) },
        Stream { name: "Water", quantity: Quantity::LiquidRate, series: wells(|r| r.water_stb, |t| t.water_stb) },
        Stream { name: "Injected water", quantity: Quantity::LiquidRate, series: injectors(|r| r.water_stb) },
        Stream { name: "Injected gas", quantity: Quantity::GasRate, series: injectors(|r| r.gas_scf) },
    ];
    // A stream that never flows gets no panel; oil always has one.
    let flows = |s: &Stream| s.name == "Oil" || s.series.iter().any(|s| s.volumes.iter().any(|&v| v > 0.0));
    all.into_iter().filter(flows).collect()
}

/// The scale of a stream, the factor from oilfield units to it, and its unit in words.
fn axis(stream: &Stream, forecast: &Forecast, provenance: &Provenance) -> (Span, f64, String) {
    let unit = label(provenance.units, stream.quantity);
    let rates = stream.series.iter().flat_map(|s| {
        s.volumes.iter().zip(&forecast.periods).map(|(v, p)| unit.of(*v) / (p.end_days - p.start_days))
    });
    let highest = Span::of(rates).map_or(1.0, |s| s.high);
    let (divisor, word) = human::scale(highest);
    (Span::new(0.0, highest / divisor).rounded(true), unit.of(1.0) / divisor, format!("{word}{}", unit.text))
}

/// Period averages as a staircase.
fn steps<'a>(periods: &'a [Period], volumes: &'a [f64], factor: f64) -> impl Iterator<Item = (f64, f64)> + 'a {
    periods.iter().zip(volumes).flat_map(move |(p, v)| {
        let rate = v / (p.end_days - p.start_days) * factor;
        [(p.start_days, rate), (p.end_days, rate)]
    })
}

/// Where a well's line ends: its oil rate at the end of natural flow, as a calendar-day rate.
fn last_rate(forecast: &Forecast, index: usize) -> Option<(f64, f64)> {
    let well = forecast.wells.get(index)?;
    let end = well.natural_flow_end?;
    let before = well.rows.iter().zip(&forecast.periods).rfind(|(r, p)| p.end_days <= end.days && r.flowing_days > 0.0);
    let uptime = before.map_or(1.0, |(r, p)| (r.flowing_days / (p.end_days - p.start_days)).min(1.0));
    Some((end.days, end.oil_rate_stb_d * uptime))
}

/// The colour of what is common to all wells.
pub(super) const COMMON: Look = Look { colour: INK, ..TOTAL };
