//! The fluid's properties against pressure.

use super::axes::{Panel, Span, headings};
use super::style::{Dash, Look, Mark, QUIET, look};
use super::{Anchor, Drawing, axes};
use crate::report::labels::{Dimension, label};
use crate::report::{FluidSheet, Provenance};

/// Solution gas-oil ratio, volume factors and viscosities against pressure.
pub fn fluid_picture(table: &FluidSheet, provenance: &Provenance) -> Drawing {
    let mut d = Drawing::new(1080, 790);
    let pressure = label(provenance.units, Dimension::Pressure);
    let degrees = label(provenance.units, Dimension::Temperature);
    let subtitle = format!(
        "At tank temperature, {} {}: saturated below, undersaturated above the bubble point (dashed)",
        crate::report::human::number(degrees.of(table.temperature_degf), 1),
        degrees.text
    );
    headings(&mut d, &provenance.title, &subtitle, &provenance.footer_of(""));
    let gor = label(provenance.units, Dimension::GasOilRatio);
    let volume = label(provenance.units, Dimension::GasVolumeFactor);
    let (above, below) = volume.text.split_once('/').unwrap_or(("", ""));
    let panels = [
        (format!("Solution gas-oil ratio, {}", gor.text), table.line(|r| gor.of(r.rs_scf_stb)), true),
        ("Oil volume factor, reservoir over stock tank".to_owned(), table.line(|r| r.bo_rb_stb), false),
        ("Oil viscosity, cp".to_owned(), table.line(|r| r.mu_o_cp), true),
        ("Gas deviation factor z".to_owned(), table.line(|r| r.z), false),
        (format!("Gas expansion, {below}/{above}"), table.line(|r| 1.0 / volume.of(r.bg_rb_scf)), true),
        ("Gas viscosity, cp".to_owned(), table.line(|r| r.mu_g_cp), true),
    ];
    let x = Span::of(table.rows.iter().map(|r| pressure.of(r.pressure_psia))).unwrap_or(Span::new(0.0, 1.0));
    let x = Span::new(0.0, x.high);
    let width = (1080.0 - 84.0 - 28.0 - 2.0 * 76.0) / 3.0;
    for (i, (title, values, zero)) in panels.iter().enumerate() {
        let (row, column) = (i / 3, i % 3);
        let (left, top) = (84.0 + column as f64 * (width + 76.0), 104.0 + row as f64 * 330.0);
        let span = Span::of(values.iter().copied()).unwrap_or(Span::new(0.0, 1.0));
        let y = if *zero { Span::new(0.0, span.high).rounded(true) } else { span.rounded(false) };
        let panel = Panel { left, top, right: left + width, bottom: top + 240.0, x, y };
        panel.draw_y(&mut d, &axes::fitted(title, 13.0, width + 60.0), 5, true);
        panel.draw_x(&mut d, &format!("Pressure, {}", pressure.text), 4);
        panel.draw_frame(&mut d);
        let bubble = panel.at_x(pressure.of(table.bubble_point_psia));
        if (panel.left..=panel.right).contains(&bubble) {
            axes::dashed(&mut d, &[(bubble, panel.top), (bubble, panel.bottom)], 1.0, Dash::Short, QUIET);
        }
        let look = Look { width: 2.2, dash: Dash::Solid, mark: Mark::Disc, ..look(0) };
        let points = table.rows.iter().zip(values).map(|(r, v)| (pressure.of(r.pressure_psia), *v));
        panel.draw_line(&mut d, points, look);
    }
    let bubble = crate::report::human::number(pressure.of(table.bubble_point_psia), 0);
    let note = format!("bubble point {bubble} {}", pressure.text);
    d.text((1052.0, 49.0), 13.0, Anchor::Right, QUIET, note);
    d
}
