//! Inflow and tubing curves at chosen instants.

use super::calendar::{date_at, days_between};
use super::dynamics::Dynamics;
use super::field::{Field, RunError};
use super::modes::Mode;
use super::rows::piece_at;
use super::run::{Piece, Trace, trace};
use super::{CurveSet, FieldSpec};
use crate::tubing::{TraversePoint, TubingMethod};
use crate::well::WellNow;
use jiff::civil::Date;

/// Rates of a curve drawn for people.
const POINTS: usize = 80;

/// Curves of one well on a date, with one tubing method.
#[derive(Debug, Clone)]
pub struct WellCurves {
    /// Name of the well.
    pub well: String,
    /// Tubing method.
    pub method: &'static str,
    /// The curves.
    pub curve: CurveSet,
    /// The traverse at the operating point at line pressure; empty where the well does not flow.
    pub profile: Vec<TraversePoint>,
}

/// Curves of every well on a date. `rates_stb_d` picks the liquid rates, in that order; empty: a choice that shows both
/// crossings. With `all_models` every tubing method follows the well's own.
///
/// # Errors
/// [`RunError`]; a date outside the run is an input fault of the key `on`.
pub fn curves_on(
    spec: &FieldSpec,
    on: Date,
    rates_stb_d: &[f64],
    all_models: bool,
) -> Result<Vec<WellCurves>, RunError> {
    let field = Field::new(spec)?;
    let run = trace(&field)?;
    let days = days_between(spec.period.start, on);
    if days < 0.0 || days > run.end_days.max(1e-9) {
        let last = date_at(spec.period.start, run.end_days);
        return Err(RunError::Input(vec![
            crate::fault::Fault::new("on", format!("{on} is outside the forecast"))
                .help(format!("the forecast runs from {} to {last}", spec.period.start)),
        ]));
    }
    let mut list = Vec::new();
    // Events act from 00:00 of their day: what holds from then on is shown.
    let Some(piece) = piece_from(&run.pieces, days) else { return Ok(list) };
    for (w, well) in piece.setup.wells.iter().enumerate() {
        let own = well.tubing.method();
        let others = TubingMethod::ALL.into_iter().filter(|m| *m != own && all_models);
        for method in std::iter::once(own).chain(others) {
            let moment = Moment { piece, days, label: on.to_string() };
            list.push(at(&field, &run, moment, w, rates_stb_d, method)?);
        }
    }
    Ok(list)
}

/// Curves at the start, at mid-life and at the end of natural flow (or of the run).
pub(super) fn life_curves(field: &Field, run: &Trace, w: usize) -> Result<Vec<CurveSet>, RunError> {
    let Some(start) = run.first_flow[w] else { return Ok(Vec::new()) };
    let (end, label) =
        run.flow_ends[w].map_or((run.end_days, "end of the forecast"), |e| (e.days, "end of natural flow"));
    let middle = 0.5 * (start + end);
    let moments = [
        (start, "start", piece_from(&run.pieces, start)),
        (middle, "mid-life", piece_from(&run.pieces, middle)),
        // At its end the well is shown as it flowed last.
        (end, label, piece_at(&run.pieces, end)),
    ];
    let mut list = Vec::new();
    for (days, label, piece) in moments {
        let Some(piece) = piece else { continue };
        let own = piece.setup.wells[w].tubing.method();
        let moment = Moment { piece, days, label: label.to_owned() };
        list.push(at(field, run, moment, w, &[], own)?.curve);
    }
    Ok(list)
}

/// The stretch that begins at an instant or holds it.
fn piece_from(pieces: &[Piece], t_days: f64) -> Option<&Piece> {
    let i = pieces.partition_point(|p| p.stretch.to_days <= t_days + 1e-9);
    pieces.get(i).or_else(|| pieces.last())
}

/// An instant of the run, with the stretch whose settings hold there.
struct Moment<'a> {
    piece: &'a Piece,
    days: f64,
    label: String,
}

fn at(
    field: &Field,
    run: &Trace,
    Moment { piece, days, label }: Moment,
    w: usize,
    rates: &[f64],
    method: TubingMethod,
) -> Result<WellCurves, RunError> {
    let dynamics = Dynamics::new(field, &piece.setup, &piece.modes, &run.memory);
    let y = piece.stretch.at(days);
    let tank = dynamics.tank(days, y.as_slice()).map_err(|source| RunError::TooMuchInjected { days, source })?;
    let own = dynamics.well_now(w, &tank);
    let mut other = piece.setup.wells[w].clone();
    let is_own = method == other.tubing.method();
    let now = if is_own {
        own
    } else {
        other.tubing = other.tubing.with_method(method);
        own.with_well(&other)
    };
    let land = now.survey();
    let operating_rate = match piece.modes.wells[w] {
        Mode::Waiting | Mode::Stopped(_) => None,
        // At the end of natural flow the curves touch at the top of the hump.
        Mode::Line { .. } => Some(land.right_crossing_stb_d.unwrap_or(land.top_rate_stb_d)),
        Mode::Target | Mode::Floor if is_own => Some(dynamics.rate(w, &now)),
        Mode::Target | Mode::Floor => land.right_crossing_stb_d,
    };
    let points = if rates.is_empty() {
        points(&now)
    } else {
        rates.iter().map(|&q| (q, now.curve.flowing_psia(q), now.tubing_psia(q))).collect()
    };
    let profile = operating_rate.map_or_else(Vec::new, |q| now.profile(q));
    Ok(WellCurves {
        well: piece.setup.wells[w].spec.name.clone(),
        method: now.method().name(),
        curve: CurveSet {
            label,
            date: date_at(field.spec.period.start, days),
            days,
            reservoir_psia: now.curve.reservoir_psia(),
            points,
            operating_point: operating_rate.map(|q| (q, now.curve.flowing_psia(q))),
            flow_margin_psi: land.margin_psi,
        },
        profile,
    })
}

fn points(now: &WellNow) -> Vec<(f64, f64, f64)> {
    let open = now.curve.open_flow_stb_d();
    (0..POINTS)
        .map(|i| {
            let s = i as f64 / (POINTS - 1) as f64;
            // Closer at low rates, where the tubing curve turns, and at open flow, where the inflow curve plunges.
            let q = open * (0.002 + 0.998 * s * s * (3.0 - 2.0 * s));
            (q, now.curve.flowing_psia(q), now.tubing_psia(q))
        })
        .collect()
}
