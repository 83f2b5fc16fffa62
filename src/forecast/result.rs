//! A finished forecast, as plain data: what the reports read.

use super::InjectedFluid;
use crate::inflow::Fit;
pub use crate::well::TestCheck;
use jiff::civil::Date;

/// Why a well stopped.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum StopReason {
    /// Inflow and tubing curve no longer meet.
    NoCrossing,
    /// The mobility of the oil carries the inflow, and no oil moves any more.
    OilNoLongerMoves,
    /// The flowing-pressure floor leaves no stable rate.
    MinimumFlowingPressure,
    /// The rate fell below the stated minimum, or the target lies below the lowest stable rate.
    RateLimit,
    /// Water cut above the stated maximum.
    WaterCutLimit,
    /// Gas-oil ratio above the stated maximum.
    GasOilRatioLimit,
    /// Shut in by the schedule.
    Scheduled,
    /// The material balance has no solution any more.
    BalanceHasNoSolution,
}

impl StopReason {
    /// Whether the well may be able to flow again by itself: the tank may give it a margin back.
    pub fn may_pass(self) -> bool {
        matches!(self, Self::NoCrossing | Self::OilNoLongerMoves | Self::MinimumFlowingPressure)
    }

    /// The fixed wording of result files.
    pub fn text(self) -> &'static str {
        match self {
            Self::NoCrossing => "no crossing",
            Self::OilNoLongerMoves => "oil no longer moves",
            Self::MinimumFlowingPressure => "minimum flowing pressure",
            Self::RateLimit => "rate limit",
            Self::WaterCutLimit => "water-cut limit",
            Self::GasOilRatioLimit => "gas-oil ratio limit",
            Self::Scheduled => "scheduled",
            Self::BalanceHasNoSolution => "balance has no solution",
        }
    }
}

/// The end of natural flow of one well.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FlowEnd {
    /// The calendar day that holds it.
    pub date: Date,
    /// Days from the start of the period.
    pub days: f64,
    /// Why.
    pub reason: StopReason,
    /// Instantaneous producing-day liquid rate just before, STB/d.
    pub liquid_rate_stb_d: f64,
    /// Instantaneous producing-day oil rate just before, STB/d.
    pub oil_rate_stb_d: f64,
    /// Flow margin found there, psi.
    pub flow_margin_psi: f64,
    /// Tank pressure there, psia.
    pub reservoir_pressure_psia: f64,
}

/// What happened.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum EventKind {
    /// A well came on stream.
    WellStarted,
    /// A target rate could no longer be held at line pressure.
    PlateauLost,
    /// A target rate could be held again.
    TargetRegained,
    /// Tank pressure fell through the bubble point.
    BubblePointCrossedDown,
    /// The last free gas of the oil zone dissolved.
    BubblePointCrossedUp,
    /// Free gas in the oil zone reached its critical saturation and begins to flow.
    FreeGasMobile,
    /// Injected water reached a well.
    WaterBreakthrough,
    /// The right-most crossing disappeared while another stayed.
    RateJump,
    /// A flowing well came near to or left of the minimum of its tubing curve, or where its gas hardly lifts the liquid.
    MayHead,
    /// The well came up against its flowing-pressure floor.
    FloorReached,
    /// The well left its flowing-pressure floor.
    FloorLeft,
    /// Natural flow ended.
    EndOfNaturalFlow(StopReason),
    /// A dead well could flow again, but the scenario does not let it.
    CouldFlowAgain,
    /// A well flows again.
    FlowsAgain,
    /// The balance has no answer beyond this day: more is injected than the tank can take, or the fluid model ends.
    BalanceStopped,
    /// Injection began.
    InjectionStarted,
    /// Injection ended.
    InjectionEnded,
    /// An injector came up against its rate or pressure limit.
    InjectionLimited,
    /// An injector left its limit.
    InjectionLimitLeft,
    /// A dated event of the scenario took effect.
    Scheduled,
}

/// One dated happening.
#[derive(Debug, Clone, PartialEq)]
pub struct EventRecord {
    /// The calendar day that holds it.
    pub date: Date,
    /// Days from the start of the period.
    pub days: f64,
    /// Well, injector, or "tank".
    pub name: String,
    /// What happened.
    pub kind: EventKind,
    /// Figures that go with it, or the text of the scenario's event.
    pub note: String,
}

/// One reporting period.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Period {
    /// First day.
    pub start: Date,
    /// The day after the last day of the calendar period (also when the run stopped inside it).
    pub end: Date,
    /// Days from the start of the forecast to the start of the period.
    pub start_days: f64,
    /// Days from the start of the forecast to `end`.
    pub end_days: f64,
    /// Days to the last instant simulated in this period: `end_days` unless the run stopped inside.
    pub run_days: f64,
}

/// One well in one period. Rates divide by the whole calendar period unless they say producing-day.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct WellRow {
    /// Oil made in the period, STB.
    pub oil_stb: f64,
    /// Water made in the period, STB.
    pub water_stb: f64,
    /// Gas made in the period, scf.
    pub gas_scf: f64,
    /// Oil since the start of the forecast, STB.
    pub oil_cum_stb: f64,
    /// Water since the start of the forecast, STB.
    pub water_cum_stb: f64,
    /// Gas since the start of the forecast, scf.
    pub gas_cum_scf: f64,
    /// Days on stream in the period (uptime included).
    pub flowing_days: f64,
    /// Whether the well flows at the end of the period.
    pub flowing: bool,
    /// State at the end of the period; `None` where the well does not flow then (margin: `None` before its start).
    pub flowing_pressure_psia: Option<f64>,
    /// Wellhead pressure, psia: above line pressure while choked.
    pub wellhead_pressure_psia: Option<f64>,
    /// Pressure of the line, psia.
    pub line_pressure_psia: Option<f64>,
    /// Opening of the choke, in.: the well's own, or that which holds it back to its target.
    pub choke_size_in: Option<f64>,
    /// Whether the flow through the choke is critical.
    pub choke_critical: Option<bool>,
    /// Producing-day liquid rate, STB/d.
    pub liquid_rate_stb_d: Option<f64>,
    /// Producing gas-oil ratio, scf/STB.
    pub gor_scf_stb: Option<f64>,
    /// Water cut, fraction of liquid.
    pub water_cut: Option<f64>,
    /// Flow margin at line pressure, psi; negative for a dead well.
    pub flow_margin_psi: Option<f64>,
    /// Reservoir pressure at the perforations less the pressure under a full column of dead oil and water at line pressure, psi:
    /// below zero a shut-in well does not start by itself.
    pub restart_margin_psi: Option<f64>,
    /// Liquid rate over the rate at the minimum of the tubing curve, less one; below zero the well flows left of the minimum.
    pub stability_margin: Option<f64>,
    /// Slope of the tubing curve less that of the inflow curve at the rate, over the steepness of the inflow curve: 1 at the minimum of
    /// the tubing curve, 0 where the curves only touch.
    pub slope_margin: Option<f64>,
    /// Velocity of the mixture at the wellhead, at the conditions there, ft/s.
    pub wellhead_velocity_ft_s: Option<f64>,
}

/// One injector in one period.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct InjectorRow {
    /// Water injected in the period, STB.
    pub water_stb: f64,
    /// Gas injected in the period, scf.
    pub gas_scf: f64,
    /// Water since the start of the forecast, STB.
    pub water_cum_stb: f64,
    /// Gas since the start of the forecast, scf.
    pub gas_cum_scf: f64,
    /// Volume asked for but not injected in the period because of a limit, STB or scf.
    pub shortfall: f64,
    /// Bottom-hole pressure at the end of the period, psia, where an injectivity is given and it injects.
    pub bottomhole_pressure_psia: Option<f64>,
}

/// Drive indices: the shares of the withdrawal that each energy paid for; they sum to one.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct DriveIndices {
    /// Oil and dissolved-gas expansion.
    pub depletion: f64,
    /// Gas-cap expansion.
    pub gas_cap: f64,
    /// Rock and connate-water expansion.
    pub rock_and_water: f64,
    /// Aquifer influx.
    pub aquifer: f64,
    /// Injected volumes.
    pub injection: f64,
}

/// The aquifer in one period. Water that flows back into it counts negative.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct AquiferRow {
    /// Water that came into the tank in the period, STB.
    pub influx_stb: f64,
    /// Water since the start of the forecast, STB.
    pub influx_cum_stb: f64,
    /// Average pressure of the aquifer at the end of the period, psia; `None` where it is without end.
    pub pressure_psia: Option<f64>,
}

/// The tank in one period.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct TankRow {
    /// Oil made in the period, STB.
    pub oil_stb: f64,
    /// Water made in the period, STB.
    pub water_stb: f64,
    /// Gas made in the period, scf.
    pub gas_scf: f64,
    /// Water injected in the period, STB.
    pub injected_water_stb: f64,
    /// Gas injected in the period, scf.
    pub injected_gas_scf: f64,
    /// Oil since the start of the forecast, STB.
    pub oil_cum_stb: f64,
    /// Water since the start of the forecast, STB.
    pub water_cum_stb: f64,
    /// Gas since the start of the forecast, scf.
    pub gas_cum_scf: f64,
    /// Pressure at the end of the period, psia.
    pub pressure_psia: f64,
    /// Current bubble point of the oil in the tank, psia.
    pub bubble_point_psia: f64,
    /// Oil saturation of the oil zone, fraction.
    pub oil_saturation: f64,
    /// Free-gas saturation of the oil zone, fraction.
    pub gas_saturation: f64,
    /// Water saturation, fraction.
    pub water_saturation: f64,
    /// Producing gas-oil ratio of all wells together at the end of the period, scf/STB; `None` when none flows.
    pub gor_scf_stb: Option<f64>,
    /// Water cut of all wells together at the end of the period; `None` when none flows.
    pub water_cut: Option<f64>,
    /// Injected over withdrawn reservoir volume in the period; `None` when nothing is withdrawn.
    pub voidage_replacement: Option<f64>,
    /// The same since the start of production; `None` when nothing was withdrawn.
    pub voidage_replacement_cum: Option<f64>,
    /// The aquifer, where there is one.
    pub aquifer: Option<AquiferRow>,
    /// Relative residual of the Havlena-Odeh balance recomputed from the reported cumulatives.
    pub balance_residual: f64,
    /// Drive indices since the start of production; `None` before any withdrawal.
    pub drive_indices: Option<DriveIndices>,
}

/// Inflow and tubing curves of one well at one instant.
#[derive(Debug, Clone, PartialEq)]
pub struct CurveSet {
    /// "start", "mid-life", "end of natural flow", or a date.
    pub label: String,
    /// The calendar day.
    pub date: Date,
    /// Days from the start of the period.
    pub days: f64,
    /// Reservoir pressure at the perforations, psia.
    pub reservoir_psia: f64,
    /// Liquid rate, STB/d; inflow pressure, psia; tubing pressure at line pressure, psia.
    pub points: Vec<(f64, f64, f64)>,
    /// Operating point: liquid rate, STB/d, and flowing pressure, psia.
    pub operating_point: Option<(f64, f64)>,
    /// Flow margin, psi.
    pub flow_margin_psi: f64,
}

/// What one tubing model makes of a well.
#[derive(Debug, Clone, PartialEq)]
pub enum ModelOutcome {
    /// Natural flow ends.
    Ends(FlowEnd),
    /// The well still flows at the end of the forecast.
    StillFlows,
    /// The forecast cannot be run with this model, or the model does not come to the well's measurements, for this reason.
    Failed(String),
}

/// The end of natural flow under one rule for future inflow.
#[derive(Debug, Clone, PartialEq)]
pub struct FutureEnd {
    /// Name of the rule, as in the scenario file.
    pub rule: &'static str,
    /// What it makes of the well.
    pub outcome: ModelOutcome,
}

/// The end of natural flow with one tubing model.
#[derive(Debug, Clone, PartialEq)]
pub struct ModelEnd {
    /// Name of the tubing model, as in the scenario file.
    pub method: &'static str,
    /// What it makes of the well.
    pub outcome: ModelOutcome,
}

/// The end of natural flow over the applicable tubing models, the well's own first.
#[derive(Debug, Clone, PartialEq)]
pub struct Spread {
    /// One entry per model.
    pub models: Vec<ModelEnd>,
    /// Whether the other models were tuned to pressures measured in the well's tubing.
    pub calibrated: bool,
}

impl Spread {
    /// The earliest end and its model.
    pub fn earliest(&self) -> Option<(&'static str, &FlowEnd)> {
        self.ends().min_by(|a, b| a.1.days.total_cmp(&b.1.days))
    }

    /// The latest end and its model; `None` when no model ends the flow. Models with which the well still flows lie beyond it.
    pub fn latest(&self) -> Option<(&'static str, &FlowEnd)> {
        self.ends().max_by(|a, b| a.1.days.total_cmp(&b.1.days))
    }

    /// The models with which the well still flows at the end of the forecast.
    pub fn still_flowing(&self) -> Vec<&'static str> {
        self.models.iter().filter(|m| m.outcome == ModelOutcome::StillFlows).map(|m| m.method).collect()
    }

    fn ends(&self) -> impl Iterator<Item = (&'static str, &FlowEnd)> {
        self.models.iter().filter_map(|m| match &m.outcome {
            ModelOutcome::Ends(end) => Some((m.method, end)),
            _ => None,
        })
    }
}

/// One well of a finished forecast.
#[derive(Debug, Clone, PartialEq)]
pub struct WellResult {
    /// Name.
    pub name: String,
    /// A row per period.
    pub rows: Vec<WellRow>,
    /// The end of natural flow; `None` when it still flows at the end of the run or never flowed.
    pub natural_flow_end: Option<FlowEnd>,
    /// Whether it flows at the end of the run.
    pub flowing_at_end: bool,
    /// Days from the start at which the target was first lost; `None` without a target or when it was never lost.
    pub plateau_end: Option<f64>,
    /// Days from the start after which the well could not start again from a shut-in against its own dead column.
    pub restart_until: Option<f64>,
    /// The end of natural flow over the applicable tubing models, once computed.
    pub spread: Option<Spread>,
    /// The end under each rule for future inflow, its own first, once computed.
    pub future_rules: Vec<FutureEnd>,
    /// Highest producing gas-oil ratio, scf/STB, over period ends.
    pub peak_gor_scf_stb: f64,
    /// Inflow equation in words and figures ("Fetkovich, C = 7.9e-4 STB/d/psi^2n, n = 0.85 fitted to 3 tests").
    pub inflow_text: String,
    /// How the inflow was fitted, with intervals; `None` for a stated coefficient.
    pub inflow_fit: Option<Fit>,
    /// The choke at its wellhead in words.
    pub choke_text: Option<String>,
    /// Each test beside the model's rate.
    pub tests: Vec<TestCheck>,
    /// Curves at the start, at mid-life and at the end of natural flow (or of the run).
    pub curves: Vec<CurveSet>,
}

/// One injector of a finished forecast.
#[derive(Debug, Clone, PartialEq)]
pub struct InjectorResult {
    /// Name.
    pub name: String,
    /// Water or gas.
    pub fluid: InjectedFluid,
    /// A row per period.
    pub rows: Vec<InjectorRow>,
}

/// Which weakness was seen.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum DoubtKind {
    /// A correlation or model is used outside its range.
    OutsideRange,
    /// A value that looks like a slip of the pen or of the unit.
    UnlikelyValue,
    /// A test that the model does not reproduce.
    TestMismatch,
    /// A model that met no measurement, or models that lie far apart.
    ModelChoice,
    /// A fit that is weak or unphysical.
    WeakFit,
    /// A measured pressure that the computed state does not meet.
    PressureMismatch,
    /// A stop in the dip of the gas-oil ratio just below the bubble point.
    EarlyEnd,
    /// A well that may head.
    Heading,
    /// A velocity beyond the limit that the user gave.
    Velocity,
    /// Asphaltene or wax may come out of the oil.
    Deposits,
    /// Flow near to sonic in the tubing.
    NearSonic,
    /// Injection held back by a limit.
    InjectionShortfall,
    /// Injection pressure near to the stated limit.
    InjectionPressure,
    /// Something that the model does not contain but the case suggests.
    NotModelled,
    /// A sanity check of the result failed or is near failing.
    Sanity,
}

/// A named weakness of the data or the result.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Doubt {
    /// Which.
    pub kind: DoubtKind,
    /// Well, injector, "tank" or "fluid".
    pub about: String,
    /// What was seen.
    pub seen: String,
    /// The likely cause.
    pub cause: String,
    /// What to do.
    pub advice: String,
}

/// The work done, to see slow-downs in review.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub struct Work {
    /// Accepted integrator steps.
    pub steps: u64,
    /// Right-hand sides evaluated.
    pub right_hand_sides: u64,
    /// Tubing traverses.
    pub traverses: u64,
    /// Material-balance closure solves.
    pub closure_solves: u64,
    /// Integrator segments (restarts).
    pub segments: u64,
}

impl Forecast {
    /// The day on which injected or tabulated water reached a well, as days from the start.
    pub fn water_breakthrough(&self, well: &str) -> Option<f64> {
        self.events.iter().find(|e| e.kind == EventKind::WaterBreakthrough && e.name == well).map(|e| e.days)
    }
}

/// A finished forecast.
#[derive(Debug, Clone, PartialEq)]
pub struct Forecast {
    /// First day.
    pub start: Date,
    /// The day after the last of the forecast period, whether or not the run came so far.
    pub period_end: Date,
    /// Days from the start at which the run stopped.
    pub end_days: f64,
    /// Why the run stopped ("period ended", "no well flows", "balance has no solution").
    pub end_text: &'static str,
    /// Oil initially in place, STB.
    pub oil_in_place_stb: f64,
    /// Oil made before the forecast began, STB.
    pub produced_before_stb: f64,
    /// Pressure at the start of the forecast, psia.
    pub start_pressure_psia: f64,
    /// Where each property of the fluid comes from: laboratory or correlation.
    pub fluid_sources: Vec<crate::fluid::Source>,
    /// Reporting periods up to the end of the run.
    pub periods: Vec<Period>,
    /// The tank, a row per period.
    pub tank: Vec<TankRow>,
    /// The wells.
    pub wells: Vec<WellResult>,
    /// The injectors.
    pub injectors: Vec<InjectorResult>,
    /// What happened, in order of time.
    pub events: Vec<EventRecord>,
    /// Doubts about data and result.
    pub doubts: Vec<Doubt>,
    /// Worst relative residual of the balance over periods.
    pub balance_residual: f64,
    /// Work done.
    pub work: Work,
}
