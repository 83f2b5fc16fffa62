//! The edge of natural flow: the lowest reservoir pressure at which a well still flows, against water cut.
//!
//! # Method
//! At a reservoir pressure, a water cut, a line pressure and a string the well flows when its flow margin, the largest height of the
//! inflow curve above the tubing curve over all rates, is positive. The inflow is that of the forecast, fitted to the tests and carried
//! to each pressure by the well's own rule. The *edge* is the lowest pressure at which it flows. It need not flow at every pressure above:
//! where the producing gas-oil ratio is at its lowest, below the bubble point, a *gap* without flow can lie above the edge, and all
//! pressures at which flow begins or ceases are kept. They are bracketed by a coarse look down from the top of the map and located to
//! 0.001 psi. A well's own limits (minimum rate, minimum flowing pressure, highest water cut or gas-oil ratio) are no part of the map.
//!
//! The gas-oil ratio that goes with a pressure is a [`Gas`] rule. With [`Gas::Forecast`] it is the forecast's own, so that at the end of
//! natural flow the way of the well meets the edge of its own line pressure.

mod branch;
mod gas;
mod line;
mod map;

pub use gas::Gas;
pub use line::{Edge, Place};
pub use map::edge_map;

use crate::forecast::{FlowEnd, WellMoment};
use jiff::civil::Date;

/// What the map is asked for.
#[derive(Debug, Clone, PartialEq)]
pub struct EdgeOptions {
    /// Line pressures, psia; empty: 0.6 and 1.5 times the well's own. The well's own always is one of them.
    pub line_pressures_psia: Vec<f64>,
    /// Inside diameters of strings of one size, in., beside the well's own string.
    pub diameters_in: Vec<f64>,
    /// Gas-oil ratios, scf/STB; empty: the rule of the forecast, or of the dissolved gas without one.
    pub gors_scf_stb: Vec<f64>,
    /// Whether to run the forecast.
    pub forecast: bool,
    /// Wells seen flowing or dead.
    pub seen: Vec<Seen>,
}

impl Default for EdgeOptions {
    fn default() -> Self {
        Self {
            line_pressures_psia: Vec::new(),
            diameters_in: Vec::new(),
            gors_scf_stb: Vec::new(),
            forecast: true,
            seen: Vec::new(),
        }
    }
}

/// A well seen flowing or dead.
#[derive(Debug, Clone, PartialEq)]
pub struct Seen {
    /// Well of the scenario to whose map it belongs; `None`: to all.
    pub well: Option<String>,
    /// What it is called.
    pub label: String,
    /// Reservoir pressure, psia.
    pub reservoir_pressure_psia: f64,
    /// Water cut.
    pub water_cut: f64,
    /// Line pressure, psia; `None`: the well's own.
    pub line_pressure_psia: Option<f64>,
    /// Producing gas-oil ratio, scf/STB; `None`: by the map's rule.
    pub gor_scf_stb: Option<f64>,
    /// Whether it flowed.
    pub flowed: bool,
}

/// A seen point beside what the map says of it.
#[derive(Debug, Clone, PartialEq)]
pub struct Verdict {
    /// What was seen.
    pub seen: Seen,
    /// Flow margin that the model gives there, psi.
    pub flow_margin_psi: f64,
    /// Where the well would flow at its water cut and line pressure.
    pub edge: Edge,
}

impl Verdict {
    /// Whether the model and what was seen agree.
    pub fn agrees(&self) -> bool {
        self.seen.flowed == (self.flow_margin_psi > 0.0)
    }
}

/// What a line of the map holds fixed.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LineOf {
    /// Line pressure, psia.
    pub line_pressure_psia: f64,
    /// Inside diameter of a string of one size, in.; `None`: the well's own string.
    pub diameter_in: Option<f64>,
    /// Where the gas-oil ratio comes from.
    pub gas: Gas,
}

/// One line of the map.
#[derive(Debug, Clone, PartialEq)]
pub struct EdgeLine {
    /// What it holds fixed.
    pub of: LineOf,
    /// Whether line pressure and string are the well's own, with the map's first gas rule.
    pub own: bool,
    /// By rising water cut, closer where a window or a gap opens or closes.
    pub points: Vec<Edge>,
    /// Water cut from which on the well flows at no pressure of the map, located to 0.001; `None` when it flows at all of them.
    pub no_flow_from: Option<f64>,
}

impl EdgeLine {
    /// The line as curves to draw: water cut and pressure in psia.
    pub fn branches(&self) -> Vec<Vec<(f64, f64)>> {
        branch::branches(&self.points)
    }
}

/// Where the well stands against its own line.
#[derive(Debug, Clone, PartialEq)]
pub struct Stand {
    /// The instant.
    pub moment: WellMoment,
    /// The pressure nearest to that of the tank at which flow ceases at this water cut, psia: the edge, or the border of a gap above it.
    pub border_psia: Option<f64>,
    /// Distance to it, psi; positive while the well flows.
    pub pressure_margin_psi: Option<f64>,
}

/// The way of the well through its forecast.
#[derive(Debug, Clone, PartialEq)]
pub struct Way {
    /// At its first flow, at the ends of periods, at its end. The first and the last border are exact; those between are straight between
    /// the points of the well's own line.
    pub stands: Vec<Stand>,
    /// The end of natural flow.
    pub end: Option<FlowEnd>,
    /// Whether it flows at the end of the run.
    pub flowing_at_end: bool,
    /// Days from its first flow to the end of natural flow, or of the run.
    pub days_left: f64,
}

/// The map of one well.
#[derive(Debug, Clone, PartialEq)]
pub struct WellEdge {
    /// Name.
    pub well: String,
    /// Tubing model.
    pub method: &'static str,
    /// Highest pressure of the map, psia.
    pub top_psia: f64,
    /// With the gas-oil ratio of a forecast: pressure of the tank at the well's end, psia, below which the tank is depleted on.
    pub forecast_ends_psia: Option<f64>,
    /// The lines: by gas rule, string and line pressure.
    pub lines: Vec<EdgeLine>,
    /// Its way through the forecast.
    pub way: Option<Way>,
    /// Tests of its inflow and flowing surveys with a reservoir pressure: date, reservoir pressure in psia, water cut.
    pub tests: Vec<(Option<Date>, f64, f64)>,
    /// What was seen.
    pub seen: Vec<Verdict>,
    /// What the reader has to know.
    pub notes: Vec<String>,
}

impl WellEdge {
    /// The line of the well's own line pressure and string.
    pub fn own(&self) -> Option<&EdgeLine> {
        self.lines.iter().find(|l| l.own)
    }
}

/// The maps of all wells.
#[derive(Debug, Clone, PartialEq)]
pub struct EdgeMap {
    /// First day of the forecast.
    pub start: Date,
    /// One per well.
    pub wells: Vec<WellEdge>,
    /// Why there is no forecast although one was asked for.
    pub no_forecast: Option<String>,
}
