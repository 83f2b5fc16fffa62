//! What the flow of each well is held against at period ends. Nothing here changes or ends a flow.
//!
//! # Screens
//! - *Heading.* A well at line pressure is said to head where its rate stands less than a margin above the rate at the minimum of the
//!   tubing curve, or left of it (Gilbert 1954, Drilling and Production Practice, API); where the slope of the tubing curve less that of the inflow
//!   curve has come down to half the steepness of the inflow curve, so that a disturbance of pressure moves the rate twice as far as the inflow
//!   alone would (the static criterion of Ledinegg 1938, which asks for a difference above zero); and, on a gas-rich stream, where the gas at the
//!   wellhead is slower than what lifts drops of the liquid (Turner, Hubbard and Dukler 1969, JPT November, with their 20 %). A choke that holds
//!   a target steadies the flow, so the first two are not asked of a choked well.
//! - *Velocity* at the wellhead against the user's own figure, or against C/sqrt(density of the mixture without slip), the form of API RP 14E
//!   (1991), with the user's own C.
//! - *Ranges* that the tubing model states, *near-sonic* flow, and the *onsets* of deposits.

use super::calendar::date_at;
use super::field::Field;
use super::onsets::OnsetSpec;
use super::{EventKind, EventRecord, Forecast};
use crate::tubing::model::Flow;
use crate::tubing::{Limited, Stream, TubingMethod};
use crate::well::{WellModel, WellNow};

/// Part of the inflow curve's steepness below which the difference of slopes counts as small.
pub(super) const SMALL_SLOPE_MARGIN: f64 = 0.5;
/// Rates to both sides of the operating point between which slopes are taken, relative.
const NUDGE: f64 = 5e-3;
/// Largest ratio of liquid to gas in the data of Turner, Hubbard and Dukler, bbl/MMscf.
const MOST_LIQUID_BBL_MMSCF: f64 = 130.0;

/// A flowing well at the end of a period.
pub(super) struct Look<'a> {
    pub field: &'a Field,
    /// As it is set up in this period.
    pub well: &'a WellModel,
    pub now: &'a WellNow<'a>,
    pub row: usize,
    pub rate_stb_d: f64,
    pub wellhead_psia: f64,
    /// Whether a target or a floor holds it back.
    pub choked: bool,
    pub stability_margin: f64,
    pub slope_margin: Option<f64>,
}

impl Look<'_> {
    fn stream(&self) -> Stream {
        self.now.stream(self.rate_stb_d)
    }

    /// The flow at the wellhead.
    pub fn wellhead_flow(&self) -> Option<Flow> {
        self.well.tubing.flow_at_wellhead(&self.field.fluid, &self.stream(), self.wellhead_psia)
    }
}

/// Rows in which a limit is passed, and the worst of them.
#[derive(Debug, Clone, Default)]
pub(super) struct Excess {
    pub rows: Vec<usize>,
    pub worst: f64,
    pub limit: f64,
    pub worst_row: usize,
}

impl Excess {
    /// Notes a row; the worst is the one that lies farthest from its own limit, in proportion.
    fn note(&mut self, row: usize, value: f64, limit: f64) {
        let far = |value: f64, limit: f64| (value / limit).ln().abs();
        if self.rows.is_empty() || far(value, limit) > far(self.worst, self.limit) {
            (self.worst, self.limit, self.worst_row) = (value, limit, row);
        }
        self.rows.push(row);
    }
}

/// Rows in which deposits may form, and where along the tubing.
#[derive(Debug, Clone, Default)]
pub(super) struct Breach {
    /// Somewhere between wellhead and reservoir.
    pub rows: Vec<usize>,
    /// Shallowest and deepest measured depth in the tubing, ft.
    pub depths_ft: Option<(f64, f64)>,
    pub at_perforations: Vec<usize>,
    pub in_reservoir: Vec<usize>,
}

impl Breach {
    fn note(&mut self, row: usize, tubing: Option<(f64, f64)>, at_perforations: bool, in_reservoir: bool) {
        if let Some((top, bottom)) = tubing {
            let (low, high) = self.depths_ft.unwrap_or((top, bottom));
            self.depths_ft = Some((low.min(top), high.max(bottom)));
        }
        if tubing.is_some() || at_perforations || in_reservoir {
            self.rows.push(row);
        }
        if at_perforations {
            self.at_perforations.push(row);
        }
        if in_reservoir {
            self.in_reservoir.push(row);
        }
    }
}

/// What the screens of one well met.
#[derive(Debug, Clone, Default)]
pub(super) struct Screens {
    pub near_sonic: Vec<usize>,
    pub outside: Vec<(TubingMethod, Limited, Excess)>,
    /// Rows in which the well may head, for any reason.
    pub heading: Vec<usize>,
    /// Of these, rows with the rate near to the minimum of the tubing curve or left of it.
    pub low_rate: Vec<usize>,
    /// Lowest margin over the rate at the minimum, its row, and the margin asked for.
    pub lowest_margin: Option<(f64, usize)>,
    pub heading_margin: f64,
    /// Rows with a small difference of slopes.
    pub slopes: Vec<usize>,
    /// Gas velocity at the wellhead below what lifts drops.
    pub slow_gas: Excess,
    pub velocity: Excess,
    pub erosion: Excess,
    pub asphaltene: Breach,
    pub wax: Breach,
    /// Coolest wellhead that met wax, degF.
    pub coolest_degf: f64,
}

impl Screens {
    /// Holds one row against everything.
    pub fn look(&mut self, look: &Look, flow: Option<&Flow>) {
        let row = look.row;
        let tubing = &look.well.tubing;
        let outside = tubing.outside_range(&look.field.fluid, &look.stream(), look.wellhead_psia);
        // No model goes so near to sonic speed without leaving its range first.
        let fast = outside.iter().any(|found| found.what == Limited::Kinetic);
        if fast && look.now.near_sonic(look.rate_stb_d, look.wellhead_psia) {
            self.near_sonic.push(row);
        }
        for found in outside {
            let method = tubing.method();
            let known = self.outside.iter().position(|(m, what, _)| *m == method && *what == found.what);
            let index = known.unwrap_or_else(|| {
                self.outside.push((method, found.what, Excess::default()));
                self.outside.len() - 1
            });
            self.outside[index].2.note(row, found.found, found.limit);
        }
        self.heading(look, flow);
        if let Some(flow) = flow {
            self.velocities(look, flow);
        }
        if !look.field.spec.onsets.is_empty() {
            self.deposits(look, &look.field.spec.onsets);
        }
    }

    fn heading(&mut self, look: &Look, flow: Option<&Flow>) {
        let mut likely = false;
        if !look.choked {
            let threshold = look.well.spec.screens.heading_margin;
            self.heading_margin = threshold;
            if look.stability_margin < threshold {
                likely = true;
                self.low_rate.push(look.row);
                if self.lowest_margin.is_none_or(|(lowest, _)| look.stability_margin < lowest) {
                    self.lowest_margin = Some((look.stability_margin, look.row));
                }
            }
            if look.slope_margin.is_some_and(|margin| margin < SMALL_SLOPE_MARGIN) {
                likely = true;
                self.slopes.push(look.row);
            }
        }
        if let Some(flow) = flow
            && flow.gas_velocity_ft_s > 0.0
            && 1e6 / (look.now.gor_scf_stb * (1.0 - look.now.water_cut)) <= MOST_LIQUID_BBL_MMSCF
        {
            let least = lifting_velocity_ft_s(flow);
            if flow.gas_velocity_ft_s < least {
                likely = true;
                self.slow_gas.note(look.row, flow.gas_velocity_ft_s, least);
            }
        }
        if likely {
            self.heading.push(look.row);
        }
    }

    fn velocities(&mut self, look: &Look, flow: &Flow) {
        let (screens, velocity) = (&look.well.spec.screens, flow.mixture_velocity_ft_s());
        if let Some(limit) = screens.maximum_velocity_ft_s
            && velocity > limit
        {
            self.velocity.note(look.row, velocity, limit);
        }
        if let Some(c) = screens.erosional_constant {
            let limit = c / flow.no_slip_density_lb_ft3().sqrt();
            if velocity > limit {
                self.erosion.note(look.row, velocity, limit);
            }
        }
    }

    fn deposits(&mut self, look: &Look, onsets: &OnsetSpec) {
        let points = look.well.tubing.profile(&look.field.fluid, &look.stream(), look.wellhead_psia);
        let flowing_psia = look.now.curve.flowing_psia(look.rate_stb_d);
        let tank_degf = look.field.spec.tank.temperature_degf;
        let inside = |pressure_psia: f64| onsets.asphaltene_psi(pressure_psia, tank_degf).is_some_and(|psi| psi > 0.0);
        let reservoir = inside(look.now.curve.reservoir_psia());
        self.asphaltene.note(look.row, onsets.asphaltene_stretch(&points), inside(flowing_psia), reservoir);
        let wax = onsets.wax_stretch(&points);
        if wax.is_some() {
            let coolest = points.iter().map(|p| p.temperature_degf).fold(f64::INFINITY, f64::min);
            self.coolest_degf = if self.wax.rows.is_empty() { coolest } else { self.coolest_degf.min(coolest) };
        }
        let cool_rock = onsets.wax_appearance_degf.is_some_and(|limit| tank_degf < limit);
        self.wax.note(look.row, wax, cool_rock, cool_rock);
    }
}

/// Slope of the tubing curve less that of the inflow curve, over the steepness of the inflow curve; `None` where the inflow curve is flat.
pub(super) fn slope_margin(now: &WellNow, rate_stb_d: f64) -> Option<f64> {
    let (low, high) = ((1.0 - NUDGE) * rate_stb_d, (1.0 + NUDGE) * rate_stb_d);
    let inflow = now.curve.flowing_psia(low) - now.curve.flowing_psia(high);
    (inflow > 0.0).then(|| 1.0 + (now.tubing_psia(high) - now.tubing_psia(low)) / inflow)
}

/// Gas velocity that lifts the largest drops of the liquid, ft/s: `v = 1.2*1.593*(sigma*(rho_l - rho_g))^(1/4)/rho_g^(1/2)` with sigma in dyn/cm
/// and densities in lb/ft3 (Turner, Hubbard and Dukler 1969: critical Weber number 30, drag coefficient 0.44, and the 20 % by which they
/// raised it to meet their wells). Held against up to 130 bbl/MMscf of liquid.
fn lifting_velocity_ft_s(flow: &Flow) -> f64 {
    let buoyancy = (flow.liquid_density_lb_ft3 - flow.gas_density_lb_ft3).max(0.0);
    1.2 * 1.593 * (flow.tension_dyn_cm * buoyancy).sqrt().sqrt() / flow.gas_density_lb_ft3.sqrt()
}

/// Dates the day on which each well may first head: where its margin comes down to what is asked, straight between period ends, and
/// otherwise the first day of the period at whose end it was seen.
pub(super) fn note_heading(forecast: &mut Forecast, screens: &[Screens]) {
    for (well, met) in forecast.wells.iter().zip(screens) {
        let Some(&row) = met.heading.first() else { continue };
        let Some(period) = forecast.periods.get(row) else { continue };
        let margin = |i: usize| well.rows.get(i).and_then(|r| r.stability_margin);
        let before = row.checked_sub(1).and_then(margin).filter(|before| *before >= met.heading_margin);
        let days = match (before, margin(row)) {
            (Some(before), Some(now)) if now < met.heading_margin && met.low_rate.first() == Some(&row) => {
                period.start_days
                    + (period.run_days - period.start_days) * (before - met.heading_margin) / (before - now)
            }
            _ => period.start_days,
        };
        let at = forecast.events.partition_point(|e| e.days <= days);
        let note = match (margin(row), well.rows[row].liquid_rate_stb_d) {
            (Some(margin), Some(rate)) => {
                let side = if margin < 0.0 { "below" } else { "above" };
                format!(
                    "{rate:.0} STB/d at the end of the period, {:.0} % {side} the minimum of the tubing curve",
                    100.0 * margin.abs()
                )
            }
            _ => String::new(),
        };
        let event = EventRecord {
            date: date_at(forecast.start, days),
            days,
            name: well.name.clone(),
            kind: EventKind::MayHead,
            note,
        };
        forecast.events.insert(at, event);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The handbooks' shortened forms (from memory of Lea, Nickens and Wells 2008), whose gas weighs 0.0031 lb/ft3 per psi:
    /// water 5.321*(67 - 0.0031 p)^(1/4)/(0.0031 p)^(1/2) with 60 dyn/cm, condensate 4.043*(45 - 0.0031 p)^(1/4)/(0.0031 p)^(1/2) with 20.
    #[test]
    fn drops_are_lifted_at_the_published_velocity() {
        for (factor, tension_dyn_cm, liquid_density_lb_ft3) in [(5.321, 60.0, 67.0), (4.043, 20.0, 45.0)] {
            for pressure_psia in [200.0, 1000.0] {
                let gas_density_lb_ft3: f64 = 0.0031 * pressure_psia;
                let flow = Flow {
                    liquid_velocity_ft_s: 0.1,
                    gas_velocity_ft_s: 10.0,
                    no_slip_holdup: 0.01,
                    liquid_density_lb_ft3,
                    gas_density_lb_ft3,
                    liquid_viscosity_cp: 1.0,
                    gas_viscosity_cp: 0.012,
                    tension_dyn_cm,
                    pressure_psia,
                };
                let published: f64 =
                    factor * (liquid_density_lb_ft3 - gas_density_lb_ft3).sqrt().sqrt() / gas_density_lb_ft3.sqrt();
                assert!((lifting_velocity_ft_s(&flow) / published - 1.0).abs() < 1e-3);
            }
        }
    }
}
