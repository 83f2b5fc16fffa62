//! Measured pressures along depth beside what the models make of them.

use super::axes::{Panel, Span, headings, legend, legend_height, mark};
use super::rates::title;
use super::style::{Dash, INK, Look, Mark, QUIET, look};
use super::{Anchor, Drawing};
use crate::report::Provenance;
use crate::report::calibration_files::measurement_title;
use crate::report::human;
use crate::report::labels::{Dimension, Label, label};
use crate::study::calibrate::{Measurement, WellCalibration};

const WIDTH: u32 = 1000;
const ROW: f64 = 380.0;
/// Measurements drawn; further ones are named.
const MOST: usize = 4;

/// The chosen model after its fit: broad and pale, so that the measured points stand out on it.
const CHOSEN: Look = Look { colour: [158, 190, 186], width: 7.0, dash: Dash::Solid, mark: Mark::Disc };
/// What was measured.
const MEASURED: Look = Look { colour: INK, width: 0.0, dash: Dash::Solid, mark: Mark::Disc };

/// One row for each measurement of a well: pressure against depth, and what each model misses; depth grows downwards.
pub fn calibration_picture(well: &WellCalibration, provenance: &Provenance) -> Drawing {
    let chosen = well.chosen().filter(|m| m.fitted.is_some());
    // A single station is drawn as a mark for each model.
    let single = well.measurements.iter().any(|m| m.stations.len() == 1);
    let mut entries: Vec<(String, Look, bool)> = well
        .models
        .iter()
        .enumerate()
        .map(|(i, m)| (m.method.name().to_owned(), Look { width: 1.6, ..look(i) }, single))
        .collect();
    if let Some(fit) = chosen.and_then(|m| Some((m.method, m.fit.as_ref().ok()?))) {
        entries.push((
            format!("{} tuned, slip factor {}", fit.0.name(), human::number(fit.1.slip_factor, 2)),
            CHOSEN,
            false,
        ));
    }
    entries.push(("measured".to_owned(), MEASURED, true));
    let drawn = order(&well.measurements);
    let legend_room = legend_height(WIDTH, &entries);
    let height = 64.0 + legend_room + ROW * drawn.len().clamp(1, MOST) as f64 + 34.0;
    let mut d = Drawing::new(WIDTH, height.ceil() as u32);
    let left_out = drawn.len().saturating_sub(MOST);
    let more =
        if left_out > 0 { format!("; {left_out} further measurements are in stations.csv") } else { String::new() };
    let subtitle = format!("Tubing models as published, and the chosen one tuned to the measurements{more}");
    headings(&mut d, &format!("{} · {}", well.well, title(provenance)), &subtitle, &provenance.footer());
    legend(&mut d, 64.0, &entries);
    for (row, index) in drawn.into_iter().take(MOST).enumerate() {
        let top = 64.0 + legend_room + ROW * row as f64;
        draw_row(&mut d, well, index, top, provenance);
    }
    d
}

/// Surveys with the most stations first; the order of the file among equals.
fn order(measurements: &[Measurement]) -> Vec<usize> {
    let mut list: Vec<usize> = (0..measurements.len()).collect();
    list.sort_by_key(|i| std::cmp::Reverse(measurements[*i].stations.len().min(3)));
    list
}

fn draw_row(d: &mut Drawing, well: &WellCalibration, index: usize, top: f64, provenance: &Provenance) {
    let unit = |dimension| label(provenance.units, dimension);
    let (pressure, depth) = (unit(Dimension::Pressure), unit(Dimension::Length));
    let (difference, rate, gor) =
        (unit(Dimension::PressureDifference), unit(Dimension::LiquidRate), unit(Dimension::GasOilRatio));
    let m = &well.measurements[index];
    let words = measurement_title(m);
    let mut heading = words.chars();
    let heading: String =
        heading.next().map(|c| c.to_uppercase().collect::<String>()).unwrap_or_default() + heading.as_str();
    let stream = format!(
        "{} {}, {} {}, water cut {} %",
        human::number(rate.of(m.stream.liquid_rate_stb_d), 0),
        rate.text,
        human::number(gor.of(m.stream.gor_scf_stb), 0),
        gor.text,
        human::number(100.0 * m.stream.water_cut, 0)
    );
    d.text((24.0, top + 12.0), 14.0, Anchor::Left, INK, heading);
    d.text((976.0, top + 12.0), 12.5, Anchor::Right, QUIET, stream);
    let chosen = well.chosen().and_then(|model| model.fitted.as_ref());
    let deepest = m.stations.last().map_or(1.0, |s| depth.of(s.md_ft));
    let y = Span::new(0.0, 1.03 * deepest).turned();
    let along = |curve: &[(f64, f64)]| -> Vec<(f64, f64)> {
        curve.iter().map(|(md_ft, psia)| (pressure.of(*psia), depth.of(*md_ft))).collect()
    };
    let curves = || well.models.iter().map(|model| &model.published.curves[index]);
    let measured = || m.stations.iter().map(|s| pressure.of(s.pressure_psia));
    let computed = curves().flatten().map(|p| pressure.of(p.1));
    let highest = Span::of(computed.chain(measured())).map_or(1.0, |s| s.high);
    let (panel_top, panel_bottom) = (top + 52.0, top + ROW - 62.0);
    let panel =
        Panel { left: 84.0, top: panel_top, right: 556.0, bottom: panel_bottom, x: Span::from_zero(highest, false), y };
    panel.draw_y(d, &format!("Measured depth, {}", depth.text), 5, true);
    panel.draw_x(d, &format!("Pressure, {}", pressure.text), 6);
    panel.draw_frame(d);
    if let Some(score) = chosen {
        panel.draw_line(d, along(&score.curves[index]), CHOSEN);
    }
    for (i, curve) in curves().enumerate() {
        panel.draw_line(d, along(curve), Look { width: 1.6, ..look(i) });
    }
    for s in &m.stations {
        mark(d, panel.at((pressure.of(s.pressure_psia), depth.of(s.md_ft))), Mark::Disc, 4.0, INK);
    }
    draw_misses(d, well, index, (panel_top, panel_bottom, y), &depth, &difference);
}

/// What each model misses at each station.
fn draw_misses(
    d: &mut Drawing,
    well: &WellCalibration,
    index: usize,
    (top, bottom, y): (f64, f64, Span),
    depth: &Label,
    difference: &Label,
) {
    let m = &well.measurements[index];
    let chosen = well.chosen().and_then(|model| model.fitted.as_ref());
    let misses = |values: &[f64]| -> Vec<(f64, f64)> {
        let stations =
            m.stations.iter().zip(values).map(|(s, p)| (difference.of(p - s.pressure_psia), depth.of(s.md_ft)));
        std::iter::once((0.0, 0.0)).chain(stations).collect()
    };
    let lists = || {
        well.models.iter().map(|model| &model.published).chain(chosen).map(|score| misses(&score.pressures_psia[index]))
    };
    let span = Span::of(lists().flatten().map(|p| p.0)).unwrap_or(Span::new(-1.0, 1.0));
    let room = 0.06 * (span.high - span.low);
    let x = Span::new(span.low - room, span.high + room).rounded(false);
    let panel = Panel { left: 610.0, top, right: 976.0, bottom, x, y };
    panel.draw_y(d, "Model less measured", 5, false);
    panel.draw_x(d, &format!("Miss, {}", difference.text), 5);
    panel.draw_frame(d);
    let zero = panel.at_x(0.0);
    d.line(vec![(zero, top), (zero, bottom)], 1.2, QUIET);
    let draw = |d: &mut Drawing, values: &[f64], look: Look| match misses(values).as_slice() {
        // One station makes no line.
        [_, only] => mark(d, panel.at(*only), look.mark, 4.6, look.colour),
        line => panel.draw_line(d, line.iter().copied(), look),
    };
    if let Some(score) = chosen {
        draw(d, &score.pressures_psia[index], Look { mark: Mark::Square, ..CHOSEN });
    }
    for (i, model) in well.models.iter().enumerate() {
        draw(d, &model.published.pressures_psia[index], Look { width: 1.6, ..look(i) });
    }
    // The measured points are where nothing is missed.
    for s in &m.stations {
        let at = panel.at((0.0, depth.of(s.md_ft)));
        mark(d, at, Mark::Disc, 2.6, INK);
    }
}
