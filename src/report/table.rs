//! The profile as rows: one per period and well, injector and tank; the same rows by calendar year.

use crate::forecast::{DriveIndices, Forecast, InjectedFluid, Period, TankRow, days_between};
use jiff::civil::{Date, date};

/// What stands in a row. `None` is an empty cell: not applicable.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub(super) struct Values {
    /// Days in the whole calendar period.
    pub period_days: f64,
    pub oil_stb: Option<f64>,
    pub water_stb: Option<f64>,
    pub gas_scf: Option<f64>,
    pub injected_water_stb: Option<f64>,
    pub injected_gas_scf: Option<f64>,
    pub oil_cum_stb: Option<f64>,
    pub water_cum_stb: Option<f64>,
    pub gas_cum_scf: Option<f64>,
    pub injected_water_cum_stb: Option<f64>,
    pub injected_gas_cum_scf: Option<f64>,
    pub flowing_days: Option<f64>,
    pub water_shortfall_stb: Option<f64>,
    pub gas_shortfall_scf: Option<f64>,
    pub end_liquid_rate_stb_d: Option<f64>,
    pub reservoir_pressure_psia: Option<f64>,
    pub flowing_pressure_psia: Option<f64>,
    pub wellhead_pressure_psia: Option<f64>,
    pub gor_scf_stb: Option<f64>,
    pub water_cut: Option<f64>,
    pub flow_margin_psi: Option<f64>,
    pub restart_margin_psi: Option<f64>,
    pub stability_margin: Option<f64>,
    pub slope_margin: Option<f64>,
    pub wellhead_velocity_ft_s: Option<f64>,
    pub line_pressure_psia: Option<f64>,
    pub choke_size_in: Option<f64>,
    pub choke_critical: Option<bool>,
    pub bottomhole_pressure_psia: Option<f64>,
    pub bubble_point_psia: Option<f64>,
    pub oil_saturation: Option<f64>,
    pub gas_saturation: Option<f64>,
    pub water_saturation: Option<f64>,
    pub voidage_replacement: Option<f64>,
    pub voidage_replacement_cum: Option<f64>,
    pub recovery: Option<f64>,
    pub aquifer_influx_stb: Option<f64>,
    pub aquifer_influx_cum_stb: Option<f64>,
    pub aquifer_pressure_psia: Option<f64>,
    pub balance_residual: Option<f64>,
    pub drive: Option<DriveIndices>,
}

impl Values {
    /// A period's volume over all the days of the period.
    pub fn calendar_rate(&self, volume: Option<f64>) -> Option<f64> {
        volume.map(|v| v / self.period_days)
    }

    /// A period's volume over the days on stream.
    pub fn producing_rate(&self, volume: Option<f64>) -> Option<f64> {
        match (volume, self.flowing_days) {
            (Some(v), Some(days)) if days > 0.0 => Some(v / days),
            _ => None,
        }
    }

    pub fn liquid_stb(&self) -> Option<f64> {
        Some(self.oil_stb? + self.water_stb?)
    }

    /// Gas over oil of the period.
    pub fn period_gor(&self) -> Option<f64> {
        let oil = self.oil_stb.filter(|&oil| oil > 0.0)?;
        Some(self.gas_scf? / oil)
    }

    /// Water over liquid of the period.
    pub fn period_water_cut(&self) -> Option<f64> {
        let liquid = self.liquid_stb().filter(|&liquid| liquid > 0.0)?;
        Some(self.water_stb? / liquid)
    }

    /// Takes in the next period of the same year: volumes add up, states and cumulatives are those of `next`.
    fn extend(self, next: &Self) -> Self {
        let add = |a: Option<f64>, b: Option<f64>| match (a, b) {
            (Some(a), Some(b)) => Some(a + b),
            (a, b) => a.or(b),
        };
        Self {
            period_days: self.period_days + next.period_days,
            oil_stb: add(self.oil_stb, next.oil_stb),
            water_stb: add(self.water_stb, next.water_stb),
            gas_scf: add(self.gas_scf, next.gas_scf),
            injected_water_stb: add(self.injected_water_stb, next.injected_water_stb),
            injected_gas_scf: add(self.injected_gas_scf, next.injected_gas_scf),
            aquifer_influx_stb: add(self.aquifer_influx_stb, next.aquifer_influx_stb),
            flowing_days: add(self.flowing_days, next.flowing_days),
            water_shortfall_stb: add(self.water_shortfall_stb, next.water_shortfall_stb),
            gas_shortfall_scf: add(self.gas_shortfall_scf, next.gas_shortfall_scf),
            // The volumes behind the ratio are not in the result, and ratios do not add up.
            voidage_replacement: None,
            ..*next
        }
    }
}

/// Whom a row is about.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Subject {
    Well(usize),
    Injector(usize),
    Tank,
}

/// One row.
#[derive(Debug, Clone)]
pub(super) struct Row<'a> {
    pub start: Date,
    pub end: Date,
    pub name: &'a str,
    /// Whether the well flows at the period's end.
    pub flowing: Option<bool>,
    pub values: Values,
}

fn subjects(forecast: &Forecast) -> impl Iterator<Item = Subject> + '_ {
    let wells = (0..forecast.wells.len()).map(Subject::Well);
    let injectors = (0..forecast.injectors.len()).map(Subject::Injector);
    wells.chain(injectors).chain(std::iter::once(Subject::Tank))
}

/// The row of `subject` in period `index`; `None` where the result holds none.
pub(super) fn row(forecast: &Forecast, index: usize, subject: Subject) -> Option<Row<'_>> {
    let period = forecast.periods.get(index)?;
    let tank = forecast.tank.get(index)?;
    let (name, flowing, values) = match subject {
        Subject::Well(i) => {
            let well = forecast.wells.get(i)?;
            let r = well.rows.get(index)?;
            let values = Values {
                oil_stb: Some(r.oil_stb),
                water_stb: Some(r.water_stb),
                gas_scf: Some(r.gas_scf),
                oil_cum_stb: Some(r.oil_cum_stb),
                water_cum_stb: Some(r.water_cum_stb),
                gas_cum_scf: Some(r.gas_cum_scf),
                flowing_days: Some(r.flowing_days),
                end_liquid_rate_stb_d: r.liquid_rate_stb_d,
                flowing_pressure_psia: r.flowing_pressure_psia,
                wellhead_pressure_psia: r.wellhead_pressure_psia,
                gor_scf_stb: r.gor_scf_stb,
                water_cut: r.water_cut,
                flow_margin_psi: r.flow_margin_psi,
                restart_margin_psi: r.restart_margin_psi,
                stability_margin: r.stability_margin,
                slope_margin: r.slope_margin,
                wellhead_velocity_ft_s: r.wellhead_velocity_ft_s,
                line_pressure_psia: r.line_pressure_psia,
                choke_size_in: r.choke_size_in,
                choke_critical: r.choke_critical,
                ..Values::default()
            };
            (well.name.as_str(), Some(r.flowing), values)
        }
        Subject::Injector(i) => {
            let injector = forecast.injectors.get(i)?;
            let r = injector.rows.get(index)?;
            // The fluid shows in what was injected; one that never injected anything counts as water.
            let gas = injector.fluid == InjectedFluid::Gas;
            let values = Values {
                injected_water_stb: (!gas).then_some(r.water_stb),
                injected_gas_scf: gas.then_some(r.gas_scf),
                injected_water_cum_stb: (!gas).then_some(r.water_cum_stb),
                injected_gas_cum_scf: gas.then_some(r.gas_cum_scf),
                water_shortfall_stb: (!gas).then_some(r.shortfall),
                gas_shortfall_scf: gas.then_some(r.shortfall),
                bottomhole_pressure_psia: r.bottomhole_pressure_psia,
                ..Values::default()
            };
            (injector.name.as_str(), None, values)
        }
        Subject::Tank => ("tank", None, tank_values(forecast, index, tank)),
    };
    let period_days = days_between(period.start, period.end);
    let values = Values { period_days, reservoir_pressure_psia: Some(tank.pressure_psia), ..values };
    Some(Row { start: period.start, end: period.end, name, flowing, values })
}

fn tank_values(forecast: &Forecast, index: usize, tank: &TankRow) -> Values {
    let injected = |pick: fn(&crate::forecast::InjectorRow) -> f64| -> f64 {
        forecast.injectors.iter().filter_map(|i| i.rows.get(index)).map(pick).sum()
    };
    Values {
        oil_stb: Some(tank.oil_stb),
        water_stb: Some(tank.water_stb),
        gas_scf: Some(tank.gas_scf),
        injected_water_stb: Some(tank.injected_water_stb),
        injected_gas_scf: Some(tank.injected_gas_scf),
        oil_cum_stb: Some(tank.oil_cum_stb),
        water_cum_stb: Some(tank.water_cum_stb),
        gas_cum_scf: Some(tank.gas_cum_scf),
        injected_water_cum_stb: Some(injected(|r| r.water_cum_stb)),
        injected_gas_cum_scf: Some(injected(|r| r.gas_cum_scf)),
        gor_scf_stb: tank.gor_scf_stb,
        water_cut: tank.water_cut,
        bubble_point_psia: Some(tank.bubble_point_psia),
        oil_saturation: Some(tank.oil_saturation),
        gas_saturation: Some(tank.gas_saturation),
        water_saturation: Some(tank.water_saturation),
        voidage_replacement: tank.voidage_replacement,
        voidage_replacement_cum: tank.voidage_replacement_cum,
        recovery: Some(recovery(forecast, tank.oil_cum_stb)),
        aquifer_influx_stb: tank.aquifer.map(|a| a.influx_stb),
        aquifer_influx_cum_stb: tank.aquifer.map(|a| a.influx_cum_stb),
        aquifer_pressure_psia: tank.aquifer.and_then(|a| a.pressure_psia),
        balance_residual: Some(tank.balance_residual),
        drive: tank.drive_indices,
        ..Values::default()
    }
}

/// Oil made, with what was made before the forecast, over the oil initially in place.
pub fn recovery(forecast: &Forecast, oil_cum_stb: f64) -> f64 {
    (forecast.produced_before_stb + oil_cum_stb) / forecast.oil_in_place_stb
}

/// Every row by reporting period: wells, injectors, tank.
pub(super) fn by_period(forecast: &Forecast) -> impl Iterator<Item = Row<'_>> {
    (0..forecast.periods.len())
        .flat_map(move |index| subjects(forecast).filter_map(move |subject| row(forecast, index, subject)))
}

/// Every row by calendar year.
pub(super) fn by_year(forecast: &Forecast) -> Vec<Row<'_>> {
    let mut rows = Vec::new();
    for years in forecast.periods.chunk_by(|a, b| a.start.year() == b.start.year()) {
        let first = forecast.periods.iter().position(|p| Some(p.start) == years.first().map(|y| y.start)).unwrap_or(0);
        for subject in subjects(forecast) {
            let mut year: Option<Row<'_>> = None;
            for index in first..first + years.len() {
                let Some(next) = row(forecast, index, subject) else { continue };
                year = Some(match year {
                    None => next,
                    Some(so_far) => Row {
                        start: so_far.start,
                        end: next.end,
                        name: next.name,
                        flowing: next.flowing,
                        values: so_far.values.extend(&next.values),
                    },
                });
            }
            if let Some(mut year) = year {
                year.end = year_end(forecast, years);
                year.values.period_days = days_between(year.start, year.end);
                rows.push(year);
            }
        }
    }
    rows
}

/// The day after the year: that of the last period, or New Year (the end of the forecast period, if earlier) where the
/// run stopped before, since rates divide by the whole year.
fn year_end(forecast: &Forecast, periods: &[Period]) -> Date {
    let Some(last) = periods.last() else { return forecast.start };
    let is_last = forecast.periods.last().is_some_and(|p| p.start == last.start);
    let stopped_early = is_last && forecast.end_text != "period ended";
    if stopped_early { date(last.start.year() + 1, 1, 1).min(forecast.period_end).max(last.end) } else { last.end }
}
