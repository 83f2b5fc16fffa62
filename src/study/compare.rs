//! What each case buys against the scenario as it stands.

use crate::forecast::{FlowEnd, Forecast, WellResult};

/// One case, run.
#[derive(Debug, Clone, PartialEq)]
pub struct CaseOutcome {
    /// Name of the case; "base" for the scenario as it stands.
    pub name: String,
    /// Its forecast.
    pub forecast: Forecast,
}

/// The scenario as it stands, first, and its cases.
#[derive(Debug, Clone, PartialEq)]
pub struct Comparison {
    /// The base is the first.
    pub cases: Vec<CaseOutcome>,
}

/// How far the end of natural flow moves against the base, days; later is positive.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Shift {
    /// Both ended.
    Days(f64),
    /// The base ended, the case still flows: it ends at least this much later.
    AtLeast(f64),
    /// The base still flows, the case ended: it ends by at least this much earlier (the number is negative).
    AtMost(f64),
    /// Both still flow, or one of them never flowed.
    Unknown,
}

/// One well of one case.
#[derive(Debug, Clone, PartialEq)]
pub struct WellShift {
    /// Name.
    pub name: String,
    /// The end of natural flow; `None` when it still flows at the end of the run or never flowed.
    pub end: Option<FlowEnd>,
    /// Whether it flows at the end of the run.
    pub flowing_at_end: bool,
    /// Against the same well of the base.
    pub shift: Shift,
    /// Oil since the start of the forecast, STB.
    pub oil_cum_stb: f64,
    /// Oil above that of the base, STB; `None` when the base has no such well.
    pub oil_increment_stb: Option<f64>,
}

/// One case against the base.
#[derive(Debug, Clone, PartialEq)]
pub struct CaseRow {
    /// Name of the case.
    pub name: String,
    /// Days from the start at which the run stopped.
    pub end_days: f64,
    /// Oil since the start of the forecast, STB.
    pub oil_cum_stb: f64,
    /// Oil above that of the base, STB.
    pub oil_increment_stb: f64,
    /// Recovery, fraction of the oil initially in place, with what was made before the forecast.
    pub recovery: f64,
    /// Water injected, STB.
    pub injected_water_stb: f64,
    /// Gas injected, scf.
    pub injected_gas_scf: f64,
    /// Water injected above that of the base, STB.
    pub injected_water_increment_stb: f64,
    /// Gas injected above that of the base, scf.
    pub injected_gas_increment_scf: f64,
    /// Extra injected water over extra oil, bbl/bbl; `None` unless both are of one sign.
    pub water_per_extra_oil: Option<f64>,
    /// Extra injected gas over extra oil, scf/STB; `None` unless both are of one sign.
    pub gas_per_extra_oil_scf_stb: Option<f64>,
    /// Tank pressure at the end of the run, psia.
    pub pressure_psia: f64,
    /// Water cut of the last period in which liquid was made.
    pub water_cut: Option<f64>,
    /// The wells.
    pub wells: Vec<WellShift>,
}

/// Oil and injected volumes of a run.
struct Volumes {
    oil_stb: f64,
    water_stb: f64,
    gas_scf: f64,
}

impl Volumes {
    fn of(forecast: &Forecast) -> Self {
        let injected = |pick: fn(&crate::forecast::InjectorRow) -> f64| -> f64 {
            forecast.injectors.iter().filter_map(|i| i.rows.last()).map(pick).sum()
        };
        Self {
            oil_stb: forecast.tank.last().map_or(0.0, |t| t.oil_cum_stb),
            water_stb: injected(|r| r.water_cum_stb),
            gas_scf: injected(|r| r.gas_cum_scf),
        }
    }
}

impl Comparison {
    /// Each case against the base; the base itself comes first and differs from itself by nothing.
    pub fn rows(&self) -> Vec<CaseRow> {
        let Some(base) = self.cases.first() else { return Vec::new() };
        self.cases.iter().map(|case| row(case, &base.forecast)).collect()
    }
}

fn row(case: &CaseOutcome, base: &Forecast) -> CaseRow {
    let forecast = &case.forecast;
    let (own, of_base) = (Volumes::of(forecast), Volumes::of(base));
    let oil_increment_stb = own.oil_stb - of_base.oil_stb;
    let injected_water_increment_stb = own.water_stb - of_base.water_stb;
    let injected_gas_increment_scf = own.gas_scf - of_base.gas_scf;
    // Less injection with more oil, or the reverse, has no price per barrel.
    let per_extra = |injected: f64| (injected * oil_increment_stb > 0.0).then(|| injected / oil_increment_stb);
    CaseRow {
        name: case.name.clone(),
        end_days: forecast.end_days,
        oil_cum_stb: own.oil_stb,
        oil_increment_stb,
        recovery: (forecast.produced_before_stb + own.oil_stb) / forecast.oil_in_place_stb,
        injected_water_stb: own.water_stb,
        injected_gas_scf: own.gas_scf,
        injected_water_increment_stb,
        injected_gas_increment_scf,
        water_per_extra_oil: per_extra(injected_water_increment_stb),
        gas_per_extra_oil_scf_stb: per_extra(injected_gas_increment_scf),
        pressure_psia: forecast.tank.last().map_or(forecast.start_pressure_psia, |t| t.pressure_psia),
        water_cut: final_water_cut(forecast),
        wells: forecast.wells.iter().map(|well| well_shift(well, forecast, base)).collect(),
    }
}

/// Water cut at the end of the run, or the average of the last period with production when no well flows then.
fn final_water_cut(forecast: &Forecast) -> Option<f64> {
    let last = forecast.tank.iter().rfind(|t| t.oil_stb + t.water_stb > 0.0)?;
    Some(last.water_cut.unwrap_or(last.water_stb / (last.oil_stb + last.water_stb)))
}

fn well_shift(well: &WellResult, forecast: &Forecast, base: &Forecast) -> WellShift {
    let same = base.wells.iter().find(|w| w.name == well.name);
    let oil = |w: &WellResult| w.rows.last().map_or(0.0, |r| r.oil_cum_stb);
    WellShift {
        name: well.name.clone(),
        end: well.natural_flow_end,
        flowing_at_end: well.flowing_at_end,
        shift: same.map_or(Shift::Unknown, |same| shift(well, forecast.end_days, same, base.end_days)),
        oil_cum_stb: oil(well),
        oil_increment_stb: same.map(|same| oil(well) - oil(same)),
    }
}

fn shift(well: &WellResult, end_days: f64, base: &WellResult, base_end_days: f64) -> Shift {
    match (well.natural_flow_end, base.natural_flow_end) {
        (Some(own), Some(of_base)) => Shift::Days(own.days - of_base.days),
        (None, Some(of_base)) if well.flowing_at_end => Shift::AtLeast(end_days - of_base.days),
        (Some(own), None) if base.flowing_at_end => Shift::AtMost(own.days - base_end_days),
        _ => Shift::Unknown,
    }
}
