//! The right-hand side of one stretch and its watches: state -> tank -> wells -> rates.

use super::field::{Field, Setup, injected_fvf, injection_limit, to_cap};
use super::integrate::Problem;
use super::modes::{Layout, Memory, Mode, Modes, Spot, Watch};
use super::{InjectedFluid, InjectionControl};
use crate::roots::brent;
use crate::tank::{ClosureError, Cumulatives, TankState, ratio_of_cut};
use crate::well::{LOOK_TO, WellNow, follow_top, oil_gradient_psi_ft, right_crossing, top_near};

/// Time over which the wells feel that more or less of what they take is replaced by water, days. It keeps a well's rate and its water cut
/// from hanging on each other at one instant.
const SPLIT_LAG_DAYS: f64 = 30.0;

/// One stretch.
pub(super) struct Dynamics<'a> {
    pub field: &'a Field,
    pub setup: &'a Setup,
    pub modes: &'a Modes,
    pub memory: &'a Memory,
    pub watches: Vec<Watch>,
    layout: Layout,
}

impl<'a> Dynamics<'a> {
    pub fn new(field: &'a Field, setup: &'a Setup, modes: &'a Modes, memory: &'a Memory) -> Self {
        let mut watches = vec![Watch::BubblePoint];
        if setup.tank.relative_permeability().critical_gas() > 0.0 {
            watches.push(Watch::CriticalGas);
        }
        for (w, mode) in modes.wells.iter().enumerate() {
            let spec = &setup.wells[w].spec;
            match mode {
                Mode::Waiting => {}
                Mode::Stopped(_) => {
                    if modes.watch_return[w] {
                        watches.push(Watch::FlowAgain(w));
                    }
                }
                Mode::Target | Mode::Floor => watches.push(Watch::CapLost(w)),
                Mode::Line { .. } => watches.extend([Watch::MarginGone(w), Watch::RightHump(w), Watch::Valley(w)]),
            }
            if !modes.broken_through[w] {
                watches.push(Watch::Breakthrough(w));
            }
            if mode.flows() {
                if spec.target_rate_stb_d.is_some() && *mode != Mode::Target {
                    watches.push(Watch::TargetAbove(w));
                }
                if spec.minimum_flowing_pressure_psia.is_some() && *mode != Mode::Floor {
                    watches.push(Watch::FloorAbove(w));
                }
                if spec.minimum_rate_stb_d.is_some() {
                    watches.push(Watch::MinimumRate(w));
                }
                if spec.maximum_water_cut.is_some() {
                    watches.push(Watch::WaterCut(w));
                }
                if spec.maximum_gor_scf_stb.is_some() {
                    watches.push(Watch::GasOilRatio(w));
                }
            }
        }
        for i in (0..setup.injectors.len()).filter(|&i| modes.injecting[i]) {
            watches.push(Watch::InjectorLimit(i));
            if setup.injectors[i].bottomhole_limit_psia.is_some() && setup.injectors[i].injectivity.is_some() {
                watches.push(Watch::InjectorShut(i));
            }
        }
        Self { field, setup, modes, memory, watches, layout: field.layout() }
    }

    pub fn layout(&self) -> Layout {
        self.layout
    }

    /// Cumulative volumes of the whole tank since the start, from the scaled state.
    pub fn cumulatives(&self, y: &[f64]) -> Cumulatives {
        let (layout, initial) = (self.layout(), self.setup.tank.initial());
        let sum = |at: fn(Layout, usize) -> usize| (0..layout.wells).map(|w| y[at(layout, w)]).sum::<f64>();
        Cumulatives {
            oil_stb: sum(Layout::oil) * initial.oil_stb,
            gas_scf: sum(Layout::gas) * initial.gas_scf,
            water_stb: sum(Layout::water) * initial.oil_stb,
            injected_water_stb: y[layout.effective_water()] * initial.oil_stb,
            injected_gas_scf: y[layout.effective_gas()] * initial.gas_scf,
            injected_cap_gas_scf: layout.cap_gas().map_or(0.0, |at| y[at] * initial.gas_scf),
            aquifer_stb: layout.aquifer().map_or(0.0, |at| y[at] * initial.oil_stb),
        }
    }

    /// Scale of an injector's volumes in the state vector.
    pub fn injected_scale(&self, i: usize) -> f64 {
        let initial = self.setup.tank.initial();
        match self.setup.injectors[i].fluid {
            InjectedFluid::Water => initial.oil_stb,
            InjectedFluid::Gas => initial.gas_scf,
        }
    }

    /// The tank at an instant and its state; wells are looked at then until the next call.
    pub fn tank(&self, t_days: f64, y: &[f64]) -> Result<TankState, ClosureError> {
        self.memory.at_days.set(t_days);
        self.memory.closures.set(self.memory.closures.get() + 1);
        let tank = &self.setup.tank;
        let mut state = tank.state_after(&self.cumulatives(y), self.memory.pressure_psia.get())?;
        self.memory.pressure_psia.set(state.pressure_psia);
        let layout = self.layout;
        if let (Some(flood), true) = (state.flood, layout.flood) {
            let flood = flood.replacing(y[layout.replaced()]);
            state.water_oil_ratio = flood.water_oil_ratio_of_tank();
            state.flood = Some(flood);
        }
        for (w, oil_stb) in self.memory.oil_stb.borrow_mut().iter_mut().enumerate() {
            *oil_stb = y[layout.oil(w)] * tank.initial().oil_stb;
        }
        self.settle_lines(&state);
        Ok(state)
    }

    /// A well facing the tank state looked at.
    pub fn well_now(&self, w: usize, tank: &TankState) -> WellNow<'_> {
        let spec = &self.field.spec;
        let gradient = spec.tank.datum_tvd_ft.map_or(0.0, |_| {
            oil_gradient_psi_ft(&self.field.fluid, tank.pressure_psia, spec.tank.temperature_degf, tank.rs_scf_stb)
        });
        let offer = self.offer(w, tank);
        let days = self.memory.at_days.get();
        let mut now = self.setup.wells[w].now(&self.field.fluid, &offer, days, gradient, &self.memory.gauge);
        if let Some(gor) = &self.setup.wells[w].spec.makes.gor {
            now.gor_scf_stb = gor.at(self.memory.oil_stb.borrow()[w]);
        }
        now.against(self.line(w))
    }

    /// The tank as one well sees it: the flood's water once it has been reached, or its own measured water.
    pub fn offer(&self, w: usize, tank: &TankState) -> TankState {
        let makes = &self.setup.wells[w].spec.makes;
        let dry = !self.modes.broken_through[w] && self.before_breakthrough(w, tank).is_some();
        let water_oil_ratio = match (&makes.water_cut, &tank.flood) {
            // So also in a trial step beyond the first water: the step is smooth.
            _ if dry => 0.0,
            (Some(trend), _) => ratio_of_cut(trend.at(self.memory.oil_stb.borrow()[w])),
            (None, Some(flood)) => flood.water_oil_ratio(makes.breakthrough_delay),
            (None, None) => tank.water_oil_ratio,
        };
        TankState { water_oil_ratio, ..*tank }
    }

    /// How far a well is from its first injected or tabulated water: positive before. `None` where the water model has no such instant.
    pub fn before_breakthrough(&self, w: usize, tank: &TankState) -> Option<f64> {
        let makes = &self.setup.wells[w].spec.makes;
        match (&makes.water_cut, &tank.flood) {
            (Some(trend), _) => Some(trend.before_water(self.memory.oil_stb.borrow()[w])),
            (None, Some(flood)) => Some(flood.before_breakthrough(makes.breakthrough_delay)),
            (None, None) => self.setup.tank.before_trend(tank),
        }
    }

    /// The rate that the flowing-pressure floor allows, STB/d.
    pub(super) fn floor_rate(&self, w: usize, now: &WellNow) -> f64 {
        self.setup.wells[w].spec.minimum_flowing_pressure_psia.map_or(f64::INFINITY, |p| now.curve.rate_stb_d(p))
    }

    /// Producing-day liquid rate in the present mode, STB/d.
    pub fn rate(&self, w: usize, now: &WellNow) -> f64 {
        let spec = &self.setup.wells[w].spec;
        match self.modes.wells[w] {
            Mode::Waiting | Mode::Stopped(_) => 0.0,
            Mode::Target => spec.target_rate_stb_d.unwrap_or(0.0).min(0.999_999 * now.curve.open_flow_stb_d()),
            Mode::Floor => self.floor_rate(w, now),
            Mode::Line { low, high } => {
                let cap = self.floor_rate(w, now).min(spec.target_rate_stb_d.unwrap_or(f64::INFINITY));
                self.line_rate(w, now, low, high).min(cap)
            }
        }
    }

    /// Right-most crossing on the present hump; the top of the hump where the curves have parted, so that the integrator can
    /// step over the end of natural flow and find it between two valid states.
    fn line_rate(&self, w: usize, now: &WellNow, low: f64, high: f64) -> f64 {
        let open = now.curve.open_flow_stb_d();
        let spot = self.memory.spots.borrow()[w];
        let bounds = (spot.left_end(low, open), high * open);
        let height = |q: f64| now.height_psi(q);
        let reservoir = now.curve.reservoir_psia();
        let conditions = Some([reservoir, open, now.gor_scf_stb, now.water_cut, now.line().idle_psia()]);
        if spot.found_under == conditions {
            return spot.rate_stb_d;
        }
        // The rate moves with the pressure much as it did last time.
        let moved = reservoir - spot.pressure_psia;
        let start =
            spot.rate_stb_d + (spot.per_pressure * moved).max(-0.05 * spot.rate_stb_d).min(0.05 * spot.rate_stb_d);
        if let Some((rate, slope)) = right_crossing(height, start, spot.slope, self.memory.crossing_psi.get(), bounds) {
            self.remember(w, |s| {
                if moved.abs() > 1e-3 {
                    s.per_pressure = (rate - s.rate_stb_d) / moved;
                }
                (s.rate_stb_d, s.slope, s.pressure_psia) = (rate, slope, reservoir);
                s.found_under = conditions;
            });
            return rate;
        }
        let guess = if spot.top_rate_stb_d > 0.0 { spot.top_rate_stb_d } else { 0.3 * open };
        let (top_rate, top) = follow_top(height, guess, bounds.0, bounds.1.min(LOOK_TO * open));
        if top <= 0.0 {
            self.remember(w, |s| s.top_rate_stb_d = top_rate);
            return top_rate;
        }
        // Near its end a hump is a parabola: through its top and one point beyond it.
        let beyond = spot.rate_stb_d;
        if beyond > 1.001 * top_rate && beyond < bounds.1 {
            let bend = (top - height(beyond)) / (beyond - top_rate).powi(2);
            let reach = (top / bend).sqrt();
            if bend > 0.0
                && let Some((rate, slope)) = right_crossing(
                    height,
                    top_rate + reach,
                    -2.0 * bend * reach,
                    self.memory.crossing_psi.get(),
                    bounds,
                )
            {
                self.remember(w, |s| {
                    (s.rate_stb_d, s.slope, s.top_rate_stb_d) = (rate, slope, top_rate);
                    (s.pressure_psia, s.per_pressure, s.found_under) = (reservoir, 0.0, conditions);
                });
                return rate;
            }
        }
        let right = (bounds.1, height(bounds.1));
        let rate = if right.1 >= 0.0 { right.0 } else { brent(height, (top_rate, top), right, 1e-11 * open) };
        let slope = now.height_slope(rate);
        self.remember(w, |s| {
            (s.rate_stb_d, s.slope, s.top_rate_stb_d) = (rate, slope, top_rate);
            (s.pressure_psia, s.per_pressure, s.found_under) = (reservoir, 0.0, conditions);
        });
        rate
    }

    pub fn remember(&self, w: usize, change: impl FnOnce(&mut Spot)) {
        change(&mut self.memory.spots.borrow_mut()[w]);
    }

    /// Top of the hump on which the well flows, rate and height.
    pub fn top(&self, w: usize, now: &WellNow, low: f64, high: f64) -> (f64, f64) {
        let open = now.curve.open_flow_stb_d();
        if open <= 0.0 {
            return (0.0, now.survey().margin_psi);
        }
        let spot = self.memory.spots.borrow()[w];
        let guess = if spot.top_rate_stb_d > 0.0 { spot.top_rate_stb_d } else { 0.3 * open };
        let left = spot.left_end(low, open);
        let top = top_near(|q| now.height_psi(q), guess, left, (high * open).min(LOOK_TO * open).max(left));
        self.remember(w, |s| s.top_rate_stb_d = top.0);
        if low > 0.0 {
            // The valley on the left moves too.
            let valley = top_near(|q| -now.height_psi(q), left, 0.5 * left, top.0.max(0.6 * left));
            self.remember(w, |s| s.low_rate_stb_d = valley.0);
        }
        top
    }

    /// Asked and allowed surface rate of an injector, STB/d or scf/d.
    pub fn injection(&self, i: usize, tank: &TankState, withdrawal_rb_d: f64) -> (f64, f64) {
        if !self.modes.injecting[i] {
            return (0.0, 0.0);
        }
        let injector = &self.setup.injectors[i];
        let asked = match injector.control {
            InjectionControl::Rate(rate) => rate,
            InjectionControl::VoidageReplacement(part) => part * withdrawal_rb_d / injected_fvf(injector.fluid, tank),
        };
        if self.modes.held_shut[i] {
            // Also in a trial step beyond the limit, so that the step is smooth and its interpolant does not swing below zero.
            return (asked, 0.0);
        }
        (asked, asked.min(injection_limit(injector, tank.pressure_psia)))
    }

    /// Calendar-average oil, gas and water rates of one well.
    fn well_rates(&self, w: usize, tank: &TankState) -> (f64, f64, f64) {
        if !self.modes.wells[w].flows() {
            return (0.0, 0.0, 0.0);
        }
        let now = self.well_now(w, tank);
        let liquid = self.rate(w, &now) * self.setup.wells[w].spec.uptime;
        let oil = liquid * (1.0 - now.water_cut);
        (oil, oil * now.gor_scf_stb, liquid * now.water_cut)
    }

    /// Total calendar-average withdrawal at reservoir conditions, rb/d.
    pub fn withdrawal_rb_d(&self, tank: &TankState) -> f64 {
        (0..self.setup.wells.len())
            .map(|w| {
                let (oil, gas, water) = self.well_rates(w, tank);
                tank.voidage_rb(oil, gas, water)
            })
            .sum()
    }
}

impl Problem for Dynamics<'_> {
    type Error = ClosureError;

    fn derivative(&self, t_days: f64, y: &[f64], dy: &mut [f64]) -> Result<(), ClosureError> {
        let tank = self.tank(t_days, y)?;
        let (layout, initial) = (self.layout, self.setup.tank.initial());
        dy.fill(0.0);
        let mut withdrawal = 0.0;
        for w in 0..layout.wells {
            let (oil, gas, water) = self.well_rates(w, &tank);
            dy[layout.oil(w)] = oil / initial.oil_stb;
            dy[layout.gas(w)] = gas / initial.gas_scf;
            dy[layout.water(w)] = water / initial.oil_stb;
            withdrawal += tank.voidage_rb(oil, gas, water);
        }
        let mut net = withdrawal;
        for i in 0..layout.injectors {
            let (asked, rate) = self.injection(i, &tank, withdrawal);
            let (injector, scale) = (&self.setup.injectors[i], self.injected_scale(i));
            dy[layout.injected(i)] = rate / scale;
            dy[layout.asked(i)] = asked / scale;
            let total = match injector.fluid {
                InjectedFluid::Water => layout.effective_water(),
                InjectedFluid::Gas => match layout.cap_gas() {
                    Some(at) if to_cap(injector) => at,
                    _ => layout.effective_gas(),
                },
            };
            let supporting = rate * injector.effective_fraction;
            let arriving = if layout.transit && injector.lags() {
                let arriving = y[layout.in_transit(i)] / injector.response_days;
                dy[layout.in_transit(i)] = supporting / scale - arriving;
                arriving
            } else {
                supporting / scale
            };
            dy[total] += arriving;
            net -= arriving * scale * injected_fvf(injector.fluid, &tank);
        }
        if let Some(at) = layout.aquifer() {
            let (p, cumulatives) = (tank.pressure_psia, self.cumulatives(y));
            let held = &self.setup.tank;
            let inventory = held.inventory(&cumulatives);
            dy[at] = held.aquifer_rate_stb_d(t_days, &inventory, cumulatives.aquifer_stb, p, net) / initial.oil_stb;
        }
        if layout.flood && withdrawal > 0.0 {
            let influx = layout.aquifer().map_or(0.0, |at| dy[at]);
            let held = &self.setup.tank;
            let pot_rb_d = net.max(0.0) * held.pot_share(&held.inventory(&self.cumulatives(y)), tank.pressure_psia);
            let inflow_rb_d = (dy[layout.effective_water()] + influx) * initial.oil_stb * tank.bw_rb_stb + pot_rb_d;
            let part = (inflow_rb_d / withdrawal).clamp(0.0, 1.0);
            dy[layout.replaced()] = (part - y[layout.replaced()]) / SPLIT_LAG_DAYS;
        }
        Ok(())
    }

    fn watch_count(&self) -> usize {
        self.watches.len()
    }

    fn watches(&self, t_days: f64, y: &[f64], out: &mut [f64]) -> Result<(), ClosureError> {
        let tank = self.tank(t_days, y)?;
        for (value, watch) in out.iter_mut().zip(&self.watches) {
            *value = self.margin_of(*watch, &tank);
        }
        Ok(())
    }

    fn watch(&self, index: usize, t_days: f64, y: &[f64]) -> Result<f64, ClosureError> {
        Ok(self.margin_of(self.watches[index], &self.tank(t_days, y)?))
    }
}
