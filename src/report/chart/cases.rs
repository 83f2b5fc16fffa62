//! `compare`: the cases of a scenario laid over each other.

use super::Drawing;
use super::axes::{Span, headings, legend, legend_height};
use super::rates::total_stretches;
use super::style::{Look, look};
use super::timeline::{Timeline, end_labels, stack};
use crate::forecast::Forecast;
use crate::report::Provenance;
use crate::report::human;
use crate::report::labels::{Dimension, label};

const WIDTH: u32 = 1040;

type Points = Vec<(f64, f64)>;

/// Oil rate, reservoir pressure and water cut of several cases, each with its name.
pub fn compare_picture(cases: &[(&str, &Forecast)], provenance: &Provenance) -> Drawing {
    let pressure = label(provenance.units, Dimension::Pressure);
    let rate = label(provenance.units, Dimension::LiquidRate);
    let highest = Span::of(cases.iter().flat_map(|(_, f)| oil_rates(f)).map(|p| rate.of(p.1))).map_or(1.0, |s| s.high);
    let (divisor, word) = human::scale(highest);
    let mut panels_of = vec![
        (
            format!("Oil rate of all wells, calendar day, {word}{}", rate.text),
            true,
            each(cases, |f| oil_rates(f).into_iter().map(|p| (p.0, rate.of(p.1) / divisor)).collect()),
        ),
        (
            format!("Reservoir pressure, {}", pressure.text),
            false,
            each(cases, |f| pressures(f).into_iter().map(|p| (p.0, pressure.of(p.1))).collect()),
        ),
    ];
    let cuts = each(cases, water_cuts);
    if cuts.iter().flatten().any(|p| p.1 > 1e-3) {
        panels_of.push(("Water cut of all wells, fraction of liquid".to_owned(), true, cuts));
    }

    let entries: Vec<(String, Look, bool)> =
        cases.iter().enumerate().map(|(i, (name, _))| ((*name).to_owned(), case_look(i), false)).collect();
    let top = 64.0 + legend_height(WIDTH, &entries);
    let mut d = Drawing::new(WIDTH, (top + 44.0 + 215.0 * panels_of.len() as f64) as u32);
    let height = f64::from(d.size().1);
    headings(&mut d, &provenance.title, "Cases compared", &provenance.footer_of("all cases"));
    legend(&mut d, 64.0, &entries);
    let end = cases.iter().filter_map(|(_, f)| f.periods.last()).map(|p| p.end_days).fold(1.0, f64::max);
    let start = cases.first().map_or_else(jiff::civil::Date::default, |(_, f)| f.start);
    let timeline = Timeline { start, days: Span::new(0.0, end) };
    let ys: Vec<(Span, f64)> = panels_of
        .iter()
        .map(|(title, zero, lines)| (span(lines, *zero, title.starts_with("Water cut")), 1.0))
        .collect();
    let panels = stack(&d, top + 26.0, height - 62.0, 110.0, timeline.days, &ys);
    for (i, ((title, _, lines), panel)) in panels_of.iter().zip(&panels).enumerate() {
        panel.draw_y(&mut d, title, 4, true);
        timeline.draw(&mut d, panel, i + 1 == panels.len());
        panel.draw_frame(&mut d);
        for (case, points) in lines.iter().enumerate() {
            panel.draw_line(&mut d, points.iter().copied(), case_look(case));
            if let Some(last) = points.iter().rfind(|p| p.1.is_finite()) {
                panel.draw_mark(&mut d, *last, case_look(case), 3.6);
            }
        }
        if cases.len() < 8 {
            let labels = lines.iter().enumerate().filter_map(|(case, points)| {
                let last = points.iter().rfind(|p| p.1.is_finite())?;
                // Only lines that reach the right edge have their name there.
                let name = super::axes::fitted(cases.get(case)?.0, 12.0, 96.0);
                (last.0 > 0.9 * end).then_some((last.1, name, case_look(case)))
            });
            end_labels(&mut d, panel, labels.collect());
        }
    }
    d
}

fn each(cases: &[(&str, &Forecast)], points: impl Fn(&Forecast) -> Points) -> Vec<Points> {
    cases.iter().map(|(_, f)| points(f)).collect()
}

fn case_look(index: usize) -> Look {
    Look { width: if index == 0 { 2.8 } else { 1.9 }, ..look(index) }
}

fn span(lines: &[Points], from_zero: bool, fraction: bool) -> Span {
    let span = Span::of(lines.iter().flatten().map(|p| p.1)).unwrap_or(Span::new(0.0, 1.0));
    if from_zero { Span::from_zero(span.high, fraction) } else { span.rounded(false) }
}

/// Steps of the period averages up to the end of the run.
fn oil_rates(forecast: &Forecast) -> Points {
    let stretches = total_stretches(forecast, |t| t.oil_stb);
    stretches.into_iter().flat_map(|(from, to, rate)| [(from, rate), (to, rate)]).collect()
}

fn pressures(forecast: &Forecast) -> Points {
    let rows = forecast.periods.iter().zip(&forecast.tank);
    let ends = rows.map(|(p, t)| (p.run_days.min(p.end_days), t.pressure_psia));
    std::iter::once((0.0, forecast.start_pressure_psia)).chain(ends).collect()
}

fn water_cuts(forecast: &Forecast) -> Points {
    let rows = forecast.periods.iter().zip(&forecast.tank);
    rows.map(|(p, t)| (p.run_days.min(p.end_days), t.water_cut.unwrap_or(f64::NAN))).collect()
}
