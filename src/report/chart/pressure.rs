//! `pressure`: reservoir pressure, gas-oil ratio and water cut over time.

use super::Drawing;
use super::axes::{Span, headings, legend, legend_height};
use super::rates::{NO_WATER, ends_of_flow, timeline, title, water_shows};
use super::style::{Dash, Look, QUIET, TANK, TOTAL, look};
use super::timeline::{draw_moments, moments_height, stack};
use crate::forecast::Forecast;
use crate::report::Provenance;
use crate::report::labels::{Dimension, Label, label};

const WIDTH: u32 = 960;

type Points = Vec<(f64, f64)>;

const BUBBLE: Look = Look { colour: QUIET, width: 1.4, dash: Dash::Long, ..TANK };

/// One panel.
struct State {
    title: String,
    from_zero: bool,
    lines: Vec<(Points, Look)>,
}

/// Pressure, gas-oil ratio and water cut of a forecast, at the ends of the periods.
pub fn pressure_picture(forecast: &Forecast, provenance: &Provenance) -> Drawing {
    let states = states(forecast, provenance);
    let timeline = timeline(forecast);
    let mut entries =
        vec![("tank".to_owned(), TANK, false), ("bubble point of the oil in the tank".to_owned(), BUBBLE, false)];
    if forecast.wells.len() > 1 {
        entries.push(("all wells".to_owned(), TOTAL, false));
        entries.extend(forecast.wells.iter().enumerate().map(|(i, w)| (w.name.clone(), look(i), false)));
    }
    let moments = ends_of_flow(forecast);
    let top = 64.0 + legend_height(WIDTH, &entries);
    let strip = moments_height(WIDTH, 36.0, timeline.days, &moments);
    let height = top + strip + 28.0 + 195.0 * states.len() as f64 + 18.0;

    let mut d = Drawing::new(WIDTH, height as u32);
    let height = f64::from(d.size().1);
    let no_water = if water_shows(forecast) { String::new() } else { format!("; {NO_WATER}") };
    let subtitle = format!("States at the end of each period{no_water}");
    headings(&mut d, &title(provenance), &subtitle, &provenance.footer());
    legend(&mut d, 64.0, &entries);
    let ys: Vec<(Span, f64)> = states.iter().map(|s| (s.span(), 1.0)).collect();
    let panels = stack(&d, top + strip + 28.0, height - 62.0, 36.0, timeline.days, &ys);
    for (i, (state, panel)) in states.iter().zip(&panels).enumerate() {
        panel.draw_y(&mut d, &state.title, 4, true);
        timeline.draw(&mut d, panel, i + 1 == states.len());
        panel.draw_frame(&mut d);
        for (points, look) in &state.lines {
            panel.draw_line(&mut d, points.iter().copied(), *look);
        }
    }
    draw_moments(&mut d, &panels, top, &moments);
    d
}

impl State {
    fn span(&self) -> Span {
        let values = self.lines.iter().flat_map(|(points, _)| points.iter().map(|p| p.1));
        let span = Span::of(values).unwrap_or(Span::new(0.0, 1.0));
        if self.from_zero {
            Span::from_zero(span.high, self.title.starts_with("Water cut"))
        } else {
            span.rounded(false)
        }
    }
}

/// Values at the ends of periods, or at the end of the run inside the last; gaps are not finite.
fn at_ends(forecast: &Forecast, unit: Label, value: impl Fn(usize) -> Option<f64>) -> Points {
    let periods = forecast.periods.iter().enumerate();
    periods.map(|(i, p)| (p.run_days.min(p.end_days), value(i).map_or(f64::NAN, |v| unit.of(v)))).collect()
}

fn states(forecast: &Forecast, provenance: &Provenance) -> Vec<State> {
    let pressure = label(provenance.units, Dimension::Pressure);
    let gor = label(provenance.units, Dimension::GasOilRatio);
    let tank = |pick: fn(&crate::forecast::TankRow) -> Option<f64>| move |i: usize| forecast.tank.get(i).and_then(pick);
    let wells = |unit: Label, pick: fn(&crate::forecast::WellRow) -> Option<f64>| {
        let several = forecast.wells.len() > 1;
        let numbered = forecast.wells.iter().enumerate().filter(move |_| several);
        numbered
            .map(|(w, well)| (at_ends(forecast, unit, |i| well.rows.get(i).and_then(pick)), look(w)))
            .collect::<Vec<_>>()
    };
    let mut tank_pressure = vec![(0.0, pressure.of(forecast.start_pressure_psia))];
    tank_pressure.extend(at_ends(forecast, pressure, tank(|t| Some(t.pressure_psia))));
    let mut bubble = at_ends(forecast, pressure, tank(|t| Some(t.bubble_point_psia)));
    // Oil that starts above its bubble point keeps the same one until it is reached.
    if let (Some(first), Some(tank)) = (bubble.first().copied(), forecast.tank.first())
        && tank.pressure_psia > tank.bubble_point_psia
    {
        bubble.insert(0, (0.0, first.1));
    }
    let all = if forecast.wells.len() > 1 { TOTAL } else { look(0) };
    let mut gor_lines = vec![(at_ends(forecast, gor, tank(|t| t.gor_scf_stb)), all)];
    gor_lines.extend(wells(gor, |r| r.gor_scf_stb));
    let fraction = Label::fraction();
    let mut water_lines = vec![(at_ends(forecast, fraction, tank(|t| t.water_cut)), all)];
    water_lines.extend(wells(fraction, |r| r.water_cut));

    let mut states = vec![
        State {
            title: format!("Reservoir pressure, {}", pressure.text),
            from_zero: false,
            lines: vec![(bubble, BUBBLE), (tank_pressure, TANK)],
        },
        State { title: format!("Producing gas-oil ratio, {}", gor.text), from_zero: true, lines: gor_lines },
    ];
    if water_shows(forecast) {
        states.push(State { title: "Water cut, fraction of liquid".to_owned(), from_zero: true, lines: water_lines });
    }
    states
}
