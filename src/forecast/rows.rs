//! The finished forecast, read from the trace: period rows, curves, doubts.

use super::calendar::periods;
use super::doubts::{Seen, about_result};
use super::dynamics::Dynamics;
use super::field::{Field, RunError};
use super::modes::Mode;
use super::run::{Piece, Trace, work};
use super::screens::{Look, note_heading, slope_margin};
use super::{
    AquiferRow, DriveIndices, Forecast, InjectedFluid, InjectorResult, InjectorRow, Period, TankRow, Tolerance,
    WellResult, WellRow,
};
use crate::tank::{Cumulatives, TankState};
use crate::tubing::Choke;
use crate::well::{LOOK_FROM, LOOK_TO, Landscape, WellNow, follow_top_within};

/// Height to which the crossings of rows are resolved, psi: far below what a row shows.
const ROW_CROSSING_PSI: f64 = 1e-3;
/// Width to which the top of a row's margin and the minimum of its tubing curve are sought where they stand on a corner, over the rate: the
/// margin is good to some 0.001 psi.
const ROW_TOP_WIDTH: f64 = 1e-5;
const ROW_MINIMUM_WIDTH: f64 = 2e-4;
/// Rows between two looks at other rates; in between the top of the margin is followed.
const ROWS_PER_LOOK: usize = 12;
/// Those other rates, as parts of open flow.
const LOOKS: [f64; 7] = [0.02, 0.05, 0.1, 0.2, 0.35, 0.55, 0.8];

/// Where a well's margin was found last.
#[derive(Clone, Copy, Default)]
struct Margin {
    rate_stb_d: f64,
    age: usize,
}

/// Makes the forecast from its trace.
pub(super) fn forecast(field: &Field, trace: &Trace) -> Result<Forecast, RunError> {
    let spec = &field.spec;
    let mut rows = Rows::new(field, trace);
    let mut list = periods(&spec.period);
    list.retain(|p| p.start_days < trace.end_days);
    for period in &mut list {
        period.run_days = period.end_days.min(trace.end_days);
        rows.add(period)?;
    }
    let Rows { tank, wells, injectors, seen, .. } = rows;
    let results = spec
        .wells
        .iter()
        .enumerate()
        .map(|(w, well)| {
            let model = &field.setup.wells[w];
            let rows: Vec<WellRow> = wells[w].clone();
            Ok(WellResult {
                name: well.name.clone(),
                natural_flow_end: trace.flow_ends[w],
                flowing_at_end: trace.pieces.last().is_some_and(|p| {
                    p.modes.wells[w].flows() && trace.flow_ends[w].is_none_or(|e| e.days < trace.end_days)
                }) && trace.flow_ends[w].is_none(),
                plateau_end: trace.plateau_ends[w],
                restart_until: restart_until(&list, &rows),
                spread: None,
                future_rules: Vec::new(),
                peak_gor_scf_stb: rows.iter().filter_map(|r| r.gor_scf_stb).fold(0.0, f64::max),
                inflow_text: model.inflow_text(),
                inflow_fit: model.fit.clone(),
                choke_text: model.choke.as_ref().map(Choke::text),
                tests: model.tests.clone(),
                curves: Vec::new(),
                rows,
            })
        })
        .collect::<Result<Vec<_>, RunError>>()?;
    let injector_results = spec
        .injectors
        .iter()
        .zip(injectors)
        .map(|(i, rows)| InjectorResult { name: i.name.clone(), fluid: i.fluid, rows })
        .collect();
    let mut forecast = Forecast {
        start: spec.period.start,
        period_end: spec.period.end,
        end_days: trace.end_days,
        end_text: trace.end_text,
        oil_in_place_stb: spec.tank.oil_in_place_stb,
        produced_before_stb: spec.tank.produced.map_or(0.0, |p| p.oil_stb),
        start_pressure_psia: field.start.pressure_psia,
        fluid_sources: field.fluid.sources(),
        balance_residual: tank.iter().map(|r| r.balance_residual.abs()).fold(0.0, f64::max),
        work: work(trace),
        periods: list,
        tank,
        wells: results,
        injectors: injector_results,
        events: trace.events.clone(),
        doubts: Vec::new(),
    };
    note_heading(&mut forecast, &seen.screens);
    forecast.doubts = about_result(field, &forecast, &seen);
    Ok(forecast)
}

/// Days from the start after which a flowing well could no longer start against its own dead column: where the restart margin first
/// falls through zero, straight between period ends. `None` when it never does while the well flows.
fn restart_until(periods: &[Period], rows: &[WellRow]) -> Option<f64> {
    let mut before: Option<(f64, f64)> = None;
    for (period, row) in periods.iter().zip(rows) {
        let Some(margin) = row.restart_margin_psi else { continue };
        if margin < 0.0 {
            return Some(match before {
                Some((days, earlier)) => days + (period.run_days - days) * earlier / (earlier - margin),
                None => period.start_days,
            });
        }
        before = Some((period.run_days, margin));
    }
    None
}

/// The state at an instant: the later of two touching pieces never hides what held at the end of a period.
pub(super) fn piece_at(pieces: &[Piece], t_days: f64) -> Option<&Piece> {
    let i = pieces.partition_point(|p| p.stretch.to_days < t_days - 1e-9);
    pieces.get(i).or_else(|| pieces.last())
}

/// A cumulative volume from its scaled state: where nothing flows, the rounding of the interpolant does not make it fall.
fn grown(scaled: f64, before: f64, scale: f64) -> f64 {
    // Of the order of the absolute tolerance of the integrator.
    const ROUNDING: f64 = 4e-9;
    let cum = scaled * scale;
    if cum < before && before - cum < ROUNDING * scale { before } else { cum }
}

struct Rows<'a> {
    field: &'a Field,
    trace: &'a Trace,
    tank: Vec<TankRow>,
    wells: Vec<Vec<WellRow>>,
    injectors: Vec<Vec<InjectorRow>>,
    margins: Vec<Margin>,
    minima: Vec<f64>,
    voidage_before: (f64, f64),
    last: Cumulatives,
    seen: Seen,
}

impl<'a> Rows<'a> {
    fn new(field: &'a Field, trace: &'a Trace) -> Self {
        let (wells, injectors) = (field.spec.wells.len(), field.spec.injectors.len());
        trace.memory.pressure_psia.set(field.start.pressure_psia);
        if field.spec.tolerance == Tolerance::Normal {
            trace.memory.crossing_psi.set(ROW_CROSSING_PSI);
        }
        // Start from the same warm starts whatever the run did last.
        for spot in trace.memory.spots.borrow_mut().iter_mut() {
            *spot = super::modes::Spot::default();
        }
        trace.memory.into_line.borrow_mut().fill(0.0);
        trace.memory.gives_way.borrow_mut().fill(0.0);
        Self {
            field,
            trace,
            tank: Vec::new(),
            wells: vec![Vec::new(); wells],
            injectors: vec![Vec::new(); injectors],
            margins: vec![Margin::default(); wells],
            minima: vec![0.0; wells],
            voidage_before: (0.0, 0.0),
            last: Cumulatives::default(),
            seen: Seen::new(wells, injectors),
        }
    }

    fn add(&mut self, period: &Period) -> Result<(), RunError> {
        let Some(piece) = piece_at(&self.trace.pieces, period.run_days) else { return Ok(()) };
        let dynamics = Dynamics::new(self.field, &piece.setup, &piece.modes, &self.trace.memory);
        let y = piece.stretch.at(period.run_days);
        let y = y.as_slice();
        let index = self.tank.len();
        let tank = dynamics
            .tank(period.run_days, y)
            .map_err(|source| RunError::TooMuchInjected { days: period.run_days, source })?;
        let mut flows = (0.0, 0.0, 0.0);
        for w in 0..self.wells.len() {
            let row = self.well_row(w, period, piece, &dynamics, &tank, y);
            if let (Some(rate), Some(cut), Some(gor)) = (row.liquid_rate_stb_d, row.water_cut, row.gor_scf_stb) {
                let liquid = rate * piece.setup.wells[w].spec.uptime;
                let oil = liquid * (1.0 - cut);
                flows = (flows.0 + oil, flows.1 + oil * gor, flows.2 + liquid * cut);
            }
            self.wells[w].push(row);
        }
        let withdrawal = tank.voidage_rb(flows.0, flows.1, flows.2);
        for i in 0..self.injectors.len() {
            let row = self.injector_row(i, &dynamics, &tank, y, withdrawal, index);
            self.injectors[i].push(row);
        }
        self.tank_row(&dynamics, &tank, y, flows, index);
        Ok(())
    }

    fn well_row(
        &mut self,
        w: usize,
        period: &Period,
        piece: &Piece,
        dynamics: &Dynamics,
        tank: &TankState,
        y: &[f64],
    ) -> WellRow {
        let (layout, initial) = (dynamics.layout(), self.field.tank().initial());
        let before = self.wells[w].last().copied().unwrap_or_default();
        let oil_cum = grown(y[layout.oil(w)], before.oil_cum_stb, initial.oil_stb);
        let water_cum = grown(y[layout.water(w)], before.water_cum_stb, initial.oil_stb);
        let gas_cum = grown(y[layout.gas(w)], before.gas_cum_scf, initial.gas_scf);
        let mut row = WellRow {
            oil_stb: oil_cum - before.oil_cum_stb,
            water_stb: water_cum - before.water_cum_stb,
            gas_scf: gas_cum - before.gas_cum_scf,
            oil_cum_stb: oil_cum,
            water_cum_stb: water_cum,
            gas_cum_scf: gas_cum,
            flowing_days: self.flowing_days(w, period),
            ..WellRow::default()
        };
        let mode = piece.modes.wells[w];
        if mode == Mode::Waiting {
            return row;
        }
        let now = dynamics.well_now(w, tank);
        row.flow_margin_psi = Some(self.margin(w, &now, mode.flows()));
        row.restart_margin_psi = Some(now.curve.reservoir_psia() - now.dead_column_psia());
        // A well that stopped at the very end of this period no longer flows at its end.
        let stopped_here = self.trace.flow_ends[w].is_some_and(|e| (e.days - period.run_days).abs() < 1e-6);
        if mode.flows() && !stopped_here {
            let rate = dynamics.rate(w, &now);
            let flowing_psia = now.curve.flowing_psia(rate);
            row.flowing = true;
            row.liquid_rate_stb_d = Some(rate);
            row.flowing_pressure_psia = Some(flowing_psia);
            let minimum = self.tubing_minimum(w, &now);
            row.stability_margin = Some(rate / minimum - 1.0);
            row.gor_scf_stb = Some(now.gor_scf_stb);
            row.water_cut = Some(now.water_cut);
            row.line_pressure_psia = Some(now.line_psia(rate));
            let wellhead_psia = match mode {
                Mode::Line { .. } => now.open_wellhead_psia(rate),
                _ => now.wellhead_psia(rate, flowing_psia),
            };
            row.wellhead_pressure_psia = Some(wellhead_psia);
            if let Some(choke) = &piece.setup.wells[w].choke {
                let closed_in = if mode.is_line() { None } else { now.choke_size_for(rate, wellhead_psia) };
                let size_in = closed_in.unwrap_or(choke.size_in()).min(choke.size_in());
                row.choke_size_in = Some(size_in);
                row.choke_critical = Some(now.through_choke(&choke.with_size(size_in), rate).critical);
            }
            row.slope_margin = slope_margin(&now, rate);
            let look = Look {
                field: self.field,
                well: &piece.setup.wells[w],
                now: &now,
                row: self.wells[w].len(),
                rate_stb_d: rate,
                wellhead_psia,
                choked: !mode.is_line(),
                stability_margin: rate / minimum - 1.0,
                slope_margin: row.slope_margin,
            };
            let flow = look.wellhead_flow();
            row.wellhead_velocity_ft_s = flow.map(|flow| flow.mixture_velocity_ft_s());
            self.seen.screens[w].look(&look, flow.as_ref());
        }
        row
    }

    /// The flow margin: followed from the row before, held against other rates once a year, looked for over all rates where it is new.
    /// A flowing well whose followed top has sunk below zero stands on another hump: that, too, calls for the wide look.
    fn margin(&mut self, w: usize, now: &WellNow, flows: bool) -> f64 {
        let open = now.curve.open_flow_stb_d();
        if open <= 0.0 {
            return -now.tubing_psia(0.0);
        }
        let known = &mut self.margins[w];
        // The margin of a dead well may come back on any hump: it is looked for over all rates.
        if flows && known.rate_stb_d > 0.0 && known.rate_stb_d < 0.99 * open {
            let (low, high) = (LOOK_FROM * open, LOOK_TO * open);
            let (rate, margin) = follow_top_within(|q| now.height_psi(q), known.rate_stb_d, low, high, ROW_TOP_WIDTH);
            *known = Margin { rate_stb_d: rate, age: known.age + 1 };
            let elsewhere = |part: f64| now.height_psi(part * open);
            let sunk = margin < 0.0;
            if !sunk && (known.age < ROWS_PER_LOOK || !LOOKS.into_iter().any(|part| elsewhere(part) > margin)) {
                known.age %= ROWS_PER_LOOK;
                return margin;
            }
        }
        let Landscape { margin_psi, margin_rate_stb_d, .. } = now.survey();
        *known = Margin { rate_stb_d: margin_rate_stb_d, age: 1 };
        margin_psi
    }

    /// Rate at which the tubing curve is lowest, STB/d: left of it the flow heads. Sought up to open flow.
    fn tubing_minimum(&mut self, w: usize, now: &WellNow) -> f64 {
        let open = now.curve.open_flow_stb_d();
        let (low, high) = (LOOK_FROM * open, LOOK_TO * open);
        let height = |q: f64| -now.tubing_psia(q);
        let known = &mut self.minima[w];
        if !(*known > low && *known < high) {
            let best = LOOKS.into_iter().map(|part| part * open).map(|q| (q, height(q)));
            *known = best.fold((low, f64::NEG_INFINITY), |a, b| if b.1 > a.1 { b } else { a }).0;
        }
        *known = follow_top_within(height, *known, low, high, ROW_MINIMUM_WIDTH).0;
        *known
    }

    fn flowing_days(&self, w: usize, period: &Period) -> f64 {
        self.trace
            .pieces
            .iter()
            .filter(|p| p.modes.wells[w].flows())
            .map(|p| {
                let overlap = p.stretch.to_days.min(period.run_days) - p.stretch.from_days.max(period.start_days);
                overlap.max(0.0) * p.setup.wells[w].spec.uptime
            })
            .sum()
    }

    fn injector_row(
        &mut self,
        i: usize,
        dynamics: &Dynamics,
        tank: &TankState,
        y: &[f64],
        withdrawal_rb_d: f64,
        index: usize,
    ) -> InjectorRow {
        let (layout, scale) = (dynamics.layout(), dynamics.injected_scale(i));
        let injector = &dynamics.setup.injectors[i];
        let before = self.injectors[i].last().copied().unwrap_or_default();
        let cum_before = before.water_cum_stb + before.gas_cum_scf;
        let total = grown(y[layout.injected(i)], cum_before, scale);
        let asked = y[layout.asked(i)] * scale;
        let asked_before = self.seen.asked[i];
        self.seen.asked[i] = asked;
        let (injected_before, mut row) = match injector.fluid {
            InjectedFluid::Water => {
                (before.water_cum_stb, InjectorRow { water_cum_stb: total, ..InjectorRow::default() })
            }
            InjectedFluid::Gas => (before.gas_cum_scf, InjectorRow { gas_cum_scf: total, ..InjectorRow::default() }),
        };
        let volume = total - injected_before;
        match injector.fluid {
            InjectedFluid::Water => row.water_stb = volume,
            InjectedFluid::Gas => row.gas_scf = volume,
        }
        // Below the slack at which a limit counts as one, the difference is rounding.
        let short = (asked - asked_before) - volume;
        row.shortfall = if short > 2e-6 * (asked - asked_before).abs() { short } else { 0.0 };
        let (_, rate) = dynamics.injection(i, tank, withdrawal_rb_d);
        if let (Some(injectivity), true) = (injector.injectivity, rate > 0.0) {
            let pressure = tank.pressure_psia + rate / injectivity;
            row.bottomhole_pressure_psia = Some(pressure);
            self.seen.injector(i, index, pressure, injector.bottomhole_limit_psia);
        }
        row
    }

    fn tank_row(
        &mut self,
        dynamics: &Dynamics,
        tank: &TankState,
        y: &[f64],
        (oil, gas, water): (f64, f64, f64),
        index: usize,
    ) {
        let balance = self.field.tank().balance(&dynamics.cumulatives(y), tank);
        let mut total = Cumulatives::default();
        for row in self.wells.iter().filter_map(|rows| rows.last()) {
            total.oil_stb += row.oil_cum_stb;
            total.gas_scf += row.gas_cum_scf;
            total.water_stb += row.water_cum_stb;
        }
        let before = self.last;
        self.last = total;
        let held = self.field.tank();
        let aquifer = held.aquifer().map(|_| {
            let stb = |since_start_stb, psia| held.aquifer_influx_stb(since_start_stb, psia);
            let (since_start_stb, p) = (dynamics.cumulatives(y).aquifer_stb, tank.pressure_psia);
            let influx_cum_stb = stb(since_start_stb, p) - stb(0.0, self.field.start.pressure_psia);
            let earlier = self.tank.last().and_then(|row| row.aquifer).map_or(0.0, |row| row.influx_cum_stb);
            AquiferRow {
                influx_stb: influx_cum_stb - earlier,
                influx_cum_stb,
                pressure_psia: held.aquifer_pressure_psia(stb(since_start_stb, p), p),
            }
        });
        let (injected_water_stb, injected_gas_scf) = self
            .injectors
            .iter()
            .filter_map(|rows| rows.last())
            .fold((0.0, 0.0), |sum, row| (sum.0 + row.water_stb, sum.1 + row.gas_scf));
        // Voidage replacement of the period, at the pressure of its end; injected volumes as injected.
        let withdrawn = tank.voidage_rb(
            total.oil_stb - before.oil_stb,
            total.gas_scf - before.gas_scf,
            total.water_stb - before.water_stb,
        );
        let injected = injected_water_stb * tank.bw_rb_stb + injected_gas_scf * tank.bg_rb_scf;
        self.voidage_before.0 += withdrawn;
        self.voidage_before.1 += injected;
        self.tank.push(TankRow {
            oil_stb: total.oil_stb - before.oil_stb,
            water_stb: total.water_stb - before.water_stb,
            gas_scf: total.gas_scf - before.gas_scf,
            injected_water_stb,
            injected_gas_scf,
            oil_cum_stb: total.oil_stb,
            water_cum_stb: total.water_stb,
            gas_cum_scf: total.gas_scf,
            pressure_psia: tank.pressure_psia,
            bubble_point_psia: tank.bubble_point_psia,
            oil_saturation: tank.oil_saturation,
            gas_saturation: tank.gas_saturation,
            water_saturation: tank.water_saturation,
            gor_scf_stb: (oil > 0.0).then(|| gas / oil),
            water_cut: (oil + water > 0.0).then(|| water / (oil + water)),
            voidage_replacement: (withdrawn > 0.0).then(|| injected / withdrawn),
            voidage_replacement_cum: (self.voidage_before.0 > 0.0)
                .then(|| self.voidage_before.1 / self.voidage_before.0),
            aquifer,
            balance_residual: balance.map_or(0.0, |b| b.residual()),
            drive_indices: balance.map(|b| DriveIndices {
                depletion: b.depletion,
                gas_cap: b.gas_cap,
                rock_and_water: b.rock_and_water,
                aquifer: b.aquifer,
                injection: b.injection,
            }),
        });
        self.seen.tank(index, tank);
    }
}
