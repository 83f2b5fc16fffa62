//! `models-WELL`: the tubing curves of all models over one inflow curve.

use super::axes::{Panel, Span, headings, legend, legend_height};
use super::rates::title;
use super::style::{Dash, INK, Look, Mark, look};
use super::{Anchor, Drawing};
use crate::forecast::WellCurves;
use crate::report::Provenance;
use crate::report::human::{month, number};
use crate::report::labels::{Dimension, label};

const WIDTH: u32 = 960;
const INFLOW: Look = Look { colour: INK, width: 3.0, dash: Dash::Solid, mark: Mark::Disc };

/// The tubing curves of one well on one date, the well's own model first, over the inflow curve that they share.
pub fn models_picture(well: &str, curves: &[&WellCurves], provenance: &Provenance) -> Drawing {
    let unit = |dimension| label(provenance.units, dimension);
    let (rate, pressure) = (unit(Dimension::LiquidRate), unit(Dimension::Pressure));
    let difference = unit(Dimension::PressureDifference);
    let mut entries = vec![("inflow".to_owned(), INFLOW, false)];
    entries.extend(curves.iter().enumerate().map(|(i, c)| {
        let margin = difference.of(c.curve.flow_margin_psi);
        let state = match c.curve.operating_point {
            Some((q, _)) => {
                format!("{} {}, margin {} {}", number(rate.of(q), 0), rate.text, number(margin, 0), difference.text)
            }
            None => format!("{} {} short", number(-margin, 0), difference.text),
        };
        (format!("{}: {state}", c.method), look_of(i), true)
    }));
    let top = 64.0 + legend_height(WIDTH, &entries) + 34.0;
    let mut d = Drawing::new(WIDTH, (top + 520.0) as u32);
    let height = f64::from(d.size().1);
    let first = curves.first();
    let when = first.map_or_else(String::new, |c| format!(", {}", month(c.curve.date)));
    let subtitle =
        format!("Inflow and the tubing curve of every model at line pressure{when}; the broad one is the well's own");
    headings(&mut d, &format!("{well} · {}", title(provenance)), &subtitle, &provenance.footer());
    legend(&mut d, 64.0, &entries);

    let points = || curves.iter().flat_map(|c| &c.curve.points);
    let Some(rates) = Span::of(points().map(|p| rate.of(p.0))) else {
        d.text((f64::from(WIDTH) / 2.0, top + 200.0), 14.0, Anchor::Middle, INK, "There is no curve on this date");
        return d;
    };
    let reservoir = Span::of(curves.iter().map(|c| pressure.of(c.curve.reservoir_psia))).map_or(1.0, |s| s.high);
    let panel = Panel {
        left: 84.0,
        top,
        right: f64::from(WIDTH) - 30.0,
        bottom: height - 72.0,
        x: Span::new(0.0, rates.high * 1.02),
        y: Span::new(0.0, reservoir * 1.05).rounded(true),
    };
    panel.draw_y(&mut d, &format!("Flowing pressure, {}", pressure.text), 7, true);
    panel.draw_x(&mut d, &format!("Liquid rate, {}", rate.text), 8);
    panel.draw_frame(&mut d);
    let lines = curves.iter().enumerate().rev();
    for (i, c) in lines {
        panel.draw_line(&mut d, c.curve.points.iter().map(|p| (rate.of(p.0), pressure.of(p.2))), look_of(i));
    }
    if let Some(c) = first {
        panel.draw_line(&mut d, c.curve.points.iter().map(|p| (rate.of(p.0), pressure.of(p.1))), INFLOW);
    }
    for (i, c) in curves.iter().enumerate().rev() {
        if let Some((q, p)) = c.curve.operating_point {
            panel.draw_mark(&mut d, (rate.of(q), pressure.of(p)), look_of(i), 5.0);
        }
    }
    d
}

fn look_of(index: usize) -> Look {
    let base = look(index);
    if index == 0 { Look { width: 3.4, ..base } } else { base }
}
