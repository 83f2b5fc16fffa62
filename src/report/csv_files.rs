//! `profile.csv`, `yearly.csv`, `events.csv`.

use super::labels::{Dimension, UnitSystem, label};
use super::table::{Row, Values, by_period, by_year};
use super::{ReportError, event_text};
use crate::forecast::{EventKind, Forecast};

type Pick = fn(&Values) -> Option<f64>;

/// The columns of the profile after `period_start, period_end, name`, in their order. Names are fixed:
/// other programs read them.
const COLUMNS: &[(&str, Option<Dimension>, Pick)] = {
    use Dimension as Q;
    &[
        ("oil", Some(Q::LiquidVolume), |v| v.oil_stb),
        ("water", Some(Q::LiquidVolume), |v| v.water_stb),
        ("gas", Some(Q::GasVolume), |v| v.gas_scf),
        ("injected_water", Some(Q::LiquidVolume), |v| v.injected_water_stb),
        ("injected_gas", Some(Q::GasVolume), |v| v.injected_gas_scf),
        ("oil_cum", Some(Q::LiquidVolume), |v| v.oil_cum_stb),
        ("water_cum", Some(Q::LiquidVolume), |v| v.water_cum_stb),
        ("gas_cum", Some(Q::GasVolume), |v| v.gas_cum_scf),
        ("injected_water_cum", Some(Q::LiquidVolume), |v| v.injected_water_cum_stb),
        ("injected_gas_cum", Some(Q::GasVolume), |v| v.injected_gas_cum_scf),
        ("oil_rate", Some(Q::LiquidRate), |v| v.calendar_rate(v.oil_stb)),
        ("water_rate", Some(Q::LiquidRate), |v| v.calendar_rate(v.water_stb)),
        ("gas_rate", Some(Q::GasRate), |v| v.calendar_rate(v.gas_scf)),
        ("liquid_rate", Some(Q::LiquidRate), |v| v.calendar_rate(v.liquid_stb())),
        ("injected_water_rate", Some(Q::LiquidRate), |v| v.calendar_rate(v.injected_water_stb)),
        ("injected_gas_rate", Some(Q::GasRate), |v| v.calendar_rate(v.injected_gas_scf)),
        ("flowing_days", None, |v| v.flowing_days),
        ("oil_producing_day_rate", Some(Q::LiquidRate), |v| v.producing_rate(v.oil_stb)),
        ("water_producing_day_rate", Some(Q::LiquidRate), |v| v.producing_rate(v.water_stb)),
        ("gas_producing_day_rate", Some(Q::GasRate), |v| v.producing_rate(v.gas_scf)),
        ("liquid_producing_day_rate", Some(Q::LiquidRate), |v| v.producing_rate(v.liquid_stb())),
        ("period_gor", Some(Q::GasOilRatio), Values::period_gor),
        ("period_water_cut", None, Values::period_water_cut),
        ("reservoir_pressure", Some(Q::Pressure), |v| v.reservoir_pressure_psia),
        ("flowing_pressure", Some(Q::Pressure), |v| v.flowing_pressure_psia),
        ("wellhead_pressure", Some(Q::Pressure), |v| v.wellhead_pressure_psia),
        ("gor", Some(Q::GasOilRatio), |v| v.gor_scf_stb),
        ("water_cut", None, |v| v.water_cut),
        ("flow_margin", Some(Q::PressureDifference), |v| v.flow_margin_psi),
        ("end_liquid_rate", Some(Q::LiquidRate), |v| v.end_liquid_rate_stb_d),
        ("restart_margin", Some(Q::PressureDifference), |v| v.restart_margin_psi),
        ("stability_margin", None, |v| v.stability_margin),
        ("slope_margin", None, |v| v.slope_margin),
        ("wellhead_velocity", Some(Q::Velocity), |v| v.wellhead_velocity_ft_s),
        ("line_pressure", Some(Q::Pressure), |v| v.line_pressure_psia),
        ("choke_size", Some(Q::Diameter), |v| v.choke_size_in),
        ("bottomhole_pressure", Some(Q::Pressure), |v| v.bottomhole_pressure_psia),
        ("water_shortfall", Some(Q::LiquidVolume), |v| v.water_shortfall_stb),
        ("gas_shortfall", Some(Q::GasVolume), |v| v.gas_shortfall_scf),
        ("bubble_point", Some(Q::Pressure), |v| v.bubble_point_psia),
        ("oil_saturation", None, |v| v.oil_saturation),
        ("gas_saturation", None, |v| v.gas_saturation),
        ("water_saturation", None, |v| v.water_saturation),
        ("voidage_replacement", None, |v| v.voidage_replacement),
        ("voidage_replacement_cum", None, |v| v.voidage_replacement_cum),
        ("recovery", None, |v| v.recovery),
        ("aquifer_influx", Some(Q::LiquidVolume), |v| v.aquifer_influx_stb),
        ("aquifer_influx_cum", Some(Q::LiquidVolume), |v| v.aquifer_influx_cum_stb),
        ("aquifer_influx_rate", Some(Q::LiquidRate), |v| v.calendar_rate(v.aquifer_influx_stb)),
        ("aquifer_pressure", Some(Q::Pressure), |v| v.aquifer_pressure_psia),
        ("drive_depletion", None, |v| v.drive.map(|d| d.depletion)),
        ("drive_gas_cap", None, |v| v.drive.map(|d| d.gas_cap)),
        ("drive_rock_and_water", None, |v| v.drive.map(|d| d.rock_and_water)),
        ("drive_aquifer", None, |v| v.drive.map(|d| d.aquifer)),
        ("drive_injection", None, |v| v.drive.map(|d| d.injection)),
        ("balance_residual", None, |v| v.balance_residual),
    ]
};

/// A figure of a result file: twelve significant digits, so that sums and products of cells close to 1e-9.
pub(super) fn cell(value: f64) -> String {
    if !value.is_finite() {
        return String::new();
    }
    if value == 0.0 {
        return "0".to_owned();
    }
    let rounded = format!("{value:.11e}");
    match rounded.parse::<f64>() {
        Ok(v) if (1e-4..1e15).contains(&v.abs()) => v.to_string(),
        Ok(v) => format!("{v:e}"),
        Err(_) => rounded,
    }
}

/// Makes a CSV file in memory.
pub(super) fn csv_bytes(
    fill: impl FnOnce(&mut csv::Writer<Vec<u8>>) -> csv::Result<()>,
) -> Result<Vec<u8>, ReportError> {
    let mut writer = csv::Writer::from_writer(Vec::new());
    fill(&mut writer)?;
    writer.into_inner().map_err(|e| ReportError::Csv(e.into_error().into()))
}

fn profile_bytes<'a>(rows: impl Iterator<Item = Row<'a>>, units: UnitSystem) -> Result<Vec<u8>, ReportError> {
    csv_bytes(|w| {
        for fixed in ["period_start", "period_end", "name"] {
            w.write_field(fixed)?;
        }
        for (stem, dimension, _) in COLUMNS {
            w.write_field(dimension.map_or_else(|| (*stem).to_owned(), |q| label(units, q).column(stem)))?;
        }
        w.write_field("flowing")?;
        w.write_field("choke_flow")?;
        w.write_record(None::<&[u8]>)?;
        for row in rows {
            w.write_field(row.start.to_string())?;
            w.write_field(row.end.to_string())?;
            w.write_field(row.name)?;
            for (_, dimension, pick) in COLUMNS {
                let value = pick(&row.values).map(|v| dimension.map_or(v, |q| label(units, q).of(v)));
                w.write_field(value.map_or_else(String::new, cell))?;
            }
            w.write_field(row.flowing.map_or("", |f| if f { "yes" } else { "no" }))?;
            w.write_field(row.values.choke_critical.map_or("", |c| if c { "critical" } else { "subcritical" }))?;
            w.write_record(None::<&[u8]>)?;
        }
        Ok(())
    })
}

/// `profile.csv`: a row per period for every well and injector, and one for the tank.
///
/// # Errors
/// When the CSV writer fails.
pub fn profile_csv(forecast: &Forecast, units: UnitSystem) -> Result<Vec<u8>, ReportError> {
    profile_bytes(by_period(forecast), units)
}

/// `yearly.csv`: the columns of the profile by calendar year. Volumes add up; states are those at the year's end.
///
/// # Errors
/// When the CSV writer fails.
pub fn yearly_csv(forecast: &Forecast, units: UnitSystem) -> Result<Vec<u8>, ReportError> {
    profile_bytes(by_year(forecast).into_iter(), units)
}

/// `events.csv`: what happened, in order of time.
///
/// # Errors
/// When the CSV writer fails.
pub fn events_csv(forecast: &Forecast) -> Result<Vec<u8>, ReportError> {
    csv_bytes(|w| {
        w.write_record(["date", "days", "name", "event", "reason", "note"])?;
        for event in &forecast.events {
            let reason = match event.kind {
                EventKind::EndOfNaturalFlow(reason) => reason.text(),
                _ => "",
            };
            let date = event.date.to_string();
            w.write_record([&date, &cell(event.days), &event.name, event_text(event.kind), reason, &event.note])?;
        }
        Ok(())
    })
}
