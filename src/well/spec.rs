//! One producing well as the user states it.

use crate::inflow::InflowSpec;
use crate::tank::Trend;
use crate::tubing::{ChokeSpec, TubingSpec};
use jiff::civil::Date;

/// One producing well as the user states it, in oilfield units.
#[derive(Debug, Clone, PartialEq)]
pub struct WellSpec {
    /// Name, unique in the scenario.
    pub name: String,
    /// Pressure of the line into which the well flows, psia; of a shared line, its lowest.
    pub line_pressure_psia: f64,
    /// Name of the shared line into which it flows, whose pressure depends on what all its wells make.
    pub shared_line: Option<String>,
    /// Choke between wellhead and line; `None`: wide open, or adjusted to the target without a limit of its own.
    pub choke: Option<ChokeSpec>,
    /// Producing-day liquid rate to which the well is choked back, STB/d.
    pub target_rate_stb_d: Option<f64>,
    /// Fraction of the time on stream.
    pub uptime: f64,
    /// Measured depth of the perforations, ft; `None`: the end of the survey.
    pub perforations_md_ft: Option<f64>,
    /// This well's free gas against the tank's.
    pub gor_factor: f64,
    /// This well's water-oil ratio against the tank's.
    pub water_factor: f64,
    /// First day on stream; `None`: the start of the period.
    pub start: Option<Date>,
    /// Day from which it is shut in; `None`: never.
    pub end: Option<Date>,
    /// Whether a well that died comes back by itself when it can.
    pub may_flow_again: bool,
    /// Skin.
    pub skin: f64,
    /// Skin at the time of the tests that gave the coefficient.
    pub skin_at_test: f64,
    /// Drainage radius, ft, and wellbore radius, ft, when stated.
    pub radii_ft: Option<(f64, f64)>,
    /// Shape factor of the drainage area, Dietz (1965).
    pub shape_factor: f64,
    /// Loss of productivity by scale and fines.
    pub loss: LossSpec,
    /// Lowest allowed flowing pressure at the perforations, psia.
    pub minimum_flowing_pressure_psia: Option<f64>,
    /// Producing-day liquid rate below which the well is given up, STB/d.
    pub minimum_rate_stb_d: Option<f64>,
    /// Water cut above which the well is given up.
    pub maximum_water_cut: Option<f64>,
    /// Gas-oil ratio above which the well is given up, scf/STB.
    pub maximum_gor_scf_stb: Option<f64>,
    /// What the flow is held against at period ends; it ends nothing.
    pub screens: ScreenSpec,
    /// What it makes otherwise than the tank's factors say.
    pub makes: MakesSpec,
    /// Inflow.
    pub inflow: InflowSpec,
    /// Tubing.
    pub tubing: TubingSpec,
    /// Flowing pressures measured along depth.
    pub flowing_surveys: Vec<FlowingSurvey>,
}

/// What a well makes, where it differs from the tank in more than a factor.
#[derive(Debug, Clone, PartialEq)]
pub struct MakesSpec {
    /// Contacted volume that the flood must sweep before this well sees what the tank's average well sees, over the tank's.
    pub breakthrough_delay: f64,
    /// Water cut against the well's own oil since the start of the forecast, STB.
    pub water_cut: Option<Trend>,
    /// Producing gas-oil ratio, scf/STB, against the same.
    pub gor: Option<Trend>,
}

impl Default for MakesSpec {
    /// As the tank.
    fn default() -> Self {
        Self { breakthrough_delay: 1.0, water_cut: None, gor: None }
    }
}

/// Loss of productivity by scale and fines.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct LossSpec {
    /// Part of what is left that is lost in a year.
    pub yearly: f64,
    /// Day from which it counts, that of the coefficient or of the last stimulation; `None`: the well's first day in the forecast.
    pub since: Option<Date>,
}

/// Flowing pressures measured along depth, with what flowed.
#[derive(Debug, Clone, PartialEq)]
pub struct FlowingSurvey {
    /// Day of the survey.
    pub on: Date,
    /// Producing-day liquid rate, STB/d.
    pub rate_stb_d: f64,
    /// Producing gas-oil ratio, scf/STB.
    pub gor_scf_stb: f64,
    /// Water fraction of the liquid.
    pub water_cut: f64,
    /// Flowing wellhead pressure, psia.
    pub wellhead_psia: f64,
    /// Flowing temperature at the wellhead, degF, when measured.
    pub wellhead_temperature_degf: Option<f64>,
    /// Reservoir pressure at the time, at the tank's datum, psia, when known.
    pub reservoir_psia: Option<f64>,
    /// The stations, from the top down.
    pub points: Vec<SurveyPoint>,
}

/// One station of a flowing survey.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SurveyPoint {
    /// Measured depth, ft.
    pub md_ft: f64,
    /// Pressure, psia.
    pub pressure_psia: f64,
    /// Temperature, degF, when measured.
    pub temperature_degf: Option<f64>,
}

/// What a well's flow is held against at period ends. A flow beyond it is told as a doubt; nothing is changed or ended.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ScreenSpec {
    /// Margin of the rate over that at the minimum of the tubing curve below which the well may head.
    pub heading_margin: f64,
    /// The user's own limit on the mixture velocity at the wellhead, ft/s.
    pub maximum_velocity_ft_s: Option<f64>,
    /// The user's own C of the velocity limit C/sqrt(density), ft/s and lb/ft3.
    pub erosional_constant: Option<f64>,
}

impl Default for ScreenSpec {
    /// A tenth above the minimum of the tubing curve; no limit on the velocity.
    fn default() -> Self {
        Self { heading_margin: 0.1, maximum_velocity_ft_s: None, erosional_constant: None }
    }
}
