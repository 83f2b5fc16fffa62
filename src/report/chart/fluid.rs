//! The fluid's properties against pressure.

use super::axes::{Panel, Span, headings};
use super::style::{Dash, Look, Mark, QUIET, TUBING, look};
use super::{Anchor, Drawing, axes};
use crate::fluid::{FluidRow, LabRow};
use crate::report::labels::{Dimension, label};
use crate::report::{FluidSheet, Provenance};

type Computed<'a> = Box<dyn Fn(&FluidRow) -> f64 + 'a>;
type Measured<'a> = Box<dyn Fn(&LabRow) -> Option<f64> + 'a>;

/// One panel: its title, a value of a row, the laboratory's value, whether the scale begins at zero, and whether the correlations differ in it.
struct Plot<'a> {
    title: String,
    value: Computed<'a>,
    measured: Measured<'a>,
    zero: bool,
    of_oil: bool,
}

const WIDTH: u32 = 1080;

/// The look of the correlations beside a laboratory's table: thin and broken.
fn beside(index: usize) -> Look {
    let dash = [Dash::Long, Dash::Mixed, Dash::Short][index % 3];
    Look { width: 1.3, dash, ..look(index + 1) }
}

/// Solution gas-oil ratio, volume factors and viscosities against pressure; the laboratory's points and the correlations
/// without them where there is a table.
pub fn fluid_picture(table: &FluidSheet, provenance: &Provenance) -> Drawing {
    let used = Look { width: 2.2, dash: Dash::Solid, mark: Mark::Disc, ..look(0) };
    let point = Look { mark: Mark::Diamond, colour: TUBING, ..used };
    let has_lab = !table.lab.is_empty();
    let mut entries: Vec<(String, Look, bool)> = Vec::new();
    if has_lab {
        entries.push(("used here: laboratory, monotone between its points".to_owned(), used, false));
        let marked = "laboratory, referred to the separator\u{2019}s oil".to_owned();
        entries.push((marked, Look { width: 0.0, ..point }, true));
        let names = table.by_correlation.iter().enumerate();
        entries.extend(names.map(|(i, (name, _))| (format!("{name} through this bubble point"), beside(i), false)));
    }
    let room = if has_lab { axes::legend_height(WIDTH, &entries) } else { 0.0 };
    let mut d = Drawing::new(WIDTH, (790.0 + room) as u32);
    let pressure = label(provenance.units, Dimension::Pressure);
    let degrees = label(provenance.units, Dimension::Temperature);
    let subtitle = format!(
        "At tank temperature, {} {}: saturated below, undersaturated above the bubble point (dashed)",
        crate::report::human::number(degrees.of(table.temperature_degf), 1),
        degrees.text
    );
    headings(&mut d, &provenance.title, &subtitle, &provenance.footer_of(""));
    axes::legend(&mut d, 64.0, &entries);
    let x = table.rows.iter().map(|r| pressure.of(r.pressure_psia));
    let x = Span::of(x).unwrap_or(Span::new(0.0, 1.0));
    let x = Span::new(0.0, x.high);
    let width = (f64::from(WIDTH) - 84.0 - 28.0 - 2.0 * 76.0) / 3.0;
    for (i, plot) in plots(provenance).iter().enumerate() {
        let (row, column) = (i / 3, i % 3);
        let (left, top) = (84.0 + column as f64 * (width + 76.0), 104.0 + room + row as f64 * 330.0);
        let lines = |rows: &[FluidRow]| -> Vec<(f64, f64)> {
            rows.iter().map(|r| (pressure.of(r.pressure_psia), (plot.value)(r))).collect()
        };
        let own = lines(&table.rows);
        let measured = |row: &LabRow| Some((pressure.of(row.pressure_psia), (plot.measured)(row)?));
        let points: Vec<(f64, f64)> = table.lab.iter().filter_map(measured).collect();
        let shown = if plot.of_oil { usize::MAX } else { 1 };
        let others: Vec<_> = table.by_correlation.iter().take(shown).map(|(_, rows)| lines(rows)).collect();
        let all = own.iter().chain(&points).chain(others.iter().flatten());
        let span = Span::of(all.map(|(_, v)| *v)).unwrap_or(Span::new(0.0, 1.0));
        let y = if plot.zero { Span::new(0.0, span.high).rounded(true) } else { span.rounded(false) };
        let panel = Panel { left, top, right: left + width, bottom: top + 240.0, x, y };
        panel.draw_y(&mut d, &axes::fitted(&plot.title, 13.0, width + 60.0), 5, true);
        panel.draw_x(&mut d, &format!("Pressure, {}", pressure.text), 4);
        panel.draw_frame(&mut d);
        let bubble = panel.at_x(pressure.of(table.bubble_point_psia));
        if (panel.left..=panel.right).contains(&bubble) {
            axes::dashed(&mut d, &[(bubble, panel.top), (bubble, panel.bottom)], 1.0, Dash::Short, QUIET);
        }
        for (i, other) in others.into_iter().enumerate() {
            panel.draw_line(&mut d, other, beside(i));
        }
        panel.draw_line(&mut d, own, used);
        for at in points {
            panel.draw_mark(&mut d, at, point, 3.6);
        }
    }
    let bubble = crate::report::human::number(pressure.of(table.bubble_point_psia), 0);
    let note = format!("bubble point {bubble} {}", pressure.text);
    d.text((1052.0, 49.0), 13.0, Anchor::Right, QUIET, note);
    d
}

fn plots(provenance: &Provenance) -> [Plot<'static>; 6] {
    let gor = label(provenance.units, Dimension::GasOilRatio);
    let volume = label(provenance.units, Dimension::GasVolumeFactor);
    let (above, below) = volume.text.split_once('/').unwrap_or(("", ""));
    [
        Plot {
            title: format!("Solution gas-oil ratio, {}", gor.text),
            value: Box::new(move |r| gor.of(r.rs_scf_stb)),
            measured: Box::new(move |r| r.rs_scf_stb.map(|rs| gor.of(rs))),
            zero: true,
            of_oil: true,
        },
        Plot {
            title: "Oil volume factor, reservoir over stock tank".to_owned(),
            value: Box::new(|r| r.bo_rb_stb),
            measured: Box::new(|r| Some(r.bo_rb_stb)),
            zero: false,
            of_oil: true,
        },
        Plot {
            title: "Oil viscosity, cp".to_owned(),
            value: Box::new(|r| r.mu_o_cp),
            measured: Box::new(|r| r.mu_o_cp),
            zero: true,
            of_oil: true,
        },
        Plot {
            title: "Gas deviation factor z".to_owned(),
            value: Box::new(|r| r.z),
            measured: Box::new(|r| r.z),
            zero: false,
            of_oil: false,
        },
        Plot {
            title: format!("Gas expansion, {below}/{above}"),
            value: Box::new(move |r| 1.0 / volume.of(r.bg_rb_scf)),
            measured: Box::new(move |r| r.bg_rb_scf.map(|bg| 1.0 / volume.of(bg))),
            zero: true,
            of_oil: false,
        },
        Plot {
            title: "Gas viscosity, cp".to_owned(),
            value: Box::new(|r| r.mu_g_cp),
            measured: Box::new(|r| r.mu_g_cp),
            zero: true,
            of_oil: false,
        },
    ]
}
