//! Pressure against depth in the tubing of one well.

use super::axes::{Panel, Span, headings, legend};
use super::rates::title;
use super::style::{Look, look};
use super::{Anchor, Drawing, style::INK};
use crate::forecast::WellCurves;
use crate::report::Provenance;
use crate::report::human;
use crate::report::labels::{Dimension, label};

/// The pressure in the tubing of one well from the wellhead down, a line for each tubing method.
pub fn traverse_picture(well: &str, curves: &[&WellCurves], provenance: &Provenance) -> Drawing {
    let (pressure, depth) = (label(provenance.units, Dimension::Pressure), label(provenance.units, Dimension::Length));
    let rate = label(provenance.units, Dimension::LiquidRate);
    let mut d = Drawing::new(720, 720);
    let when = curves.first().map_or_else(String::new, |c| human::month(c.curve.date));
    let subtitle = format!("Pressure in the tubing at line pressure, {when}");
    headings(&mut d, &format!("{well} · {}", title(provenance)), &subtitle, &provenance.footer());
    let entries: Vec<(String, Look, bool)> = curves
        .iter()
        .enumerate()
        .map(|(i, c)| {
            let at = c
                .curve
                .operating_point
                .map_or("does not flow".to_owned(), |(q, _)| format!("{} {}", human::number(rate.of(q), 0), rate.text));
            (format!("{} ({at})", c.method), look(i), false)
        })
        .collect();
    let top = 64.0 + legend(&mut d, 64.0, &entries) + 46.0;
    let points = || curves.iter().flat_map(|c| &c.profile);
    let Some(deepest) = Span::of(points().map(|p| depth.of(p.tvd_ft))) else {
        d.text((360.0, 300.0), 14.0, Anchor::Middle, INK, "No method lets the well flow on this date");
        return d;
    };
    let highest = Span::of(points().map(|p| pressure.of(p.pressure_psia))).map_or(1.0, |s| s.high);
    // Depth grows downwards.
    let y = Span::new(0.0, 1.01 * deepest.high);
    let x = Span::from_zero(highest, false);
    let panel = Panel { left: 84.0, top, right: 690.0, bottom: 650.0, x, y: y.turned() };
    panel.draw_y(&mut d, &format!("True vertical depth, {}", depth.text), 6, true);
    panel.draw_x(&mut d, &format!("Pressure, {}", pressure.text), 6);
    panel.draw_frame(&mut d);
    for (i, c) in curves.iter().enumerate() {
        let line = c.profile.iter().map(|p| (pressure.of(p.pressure_psia), depth.of(p.tvd_ft)));
        panel.draw_line(&mut d, line, look(i));
    }
    d
}
