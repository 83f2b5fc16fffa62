//! The discrete state of a stretch: what each well and injector does, what is watched, what is remembered between calls.

use super::StopReason;
use crate::well::{Gauge, LOOK_FROM};
use std::cell::{Cell, RefCell};

/// Height in psi by which the target (or floor) must be out of reach before it is taken up again, so that modes never flicker.
pub(super) const REGAIN_PSI: f64 = 0.01;
/// Free-gas excess that counts as a change of side at the bubble point, scf/STB.
const BUBBLE_POINT_SLACK_SCF_STB: f64 = 1e-6;
/// The same for the critical gas saturation.
const CRITICAL_GAS_SLACK: f64 = 1e-9;
/// Days within which another crossing counts as soon.
const SOON_DAYS: f64 = 30.0;
/// Days within which another return of a dead well counts as soon.
const SOON_BACK_DAYS: f64 = 10.0;
/// Such returns in a row after which the well is left shut.
const MOST_RETURNS_IN_A_ROW: usize = 5;

/// What a well does.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Mode {
    /// Has yet to start.
    Waiting,
    /// Choked back to its target.
    Target,
    /// On its flowing-pressure floor.
    Floor,
    /// At line pressure, on the hump of `h` between these parts of open flow.
    Line {
        /// Left end over open flow.
        low: f64,
        /// Right end over open flow.
        high: f64,
    },
    /// Stopped for this reason.
    Stopped(StopReason),
}

impl Modes {
    pub fn new(wells: usize, injectors: usize, saturated: bool, gas_mobile: bool) -> Self {
        Self {
            wells: vec![Mode::Waiting; wells],
            watch_return: vec![false; wells],
            broken_through: vec![false; wells],
            injecting: vec![false; injectors],
            limited: vec![false; injectors],
            saturated,
            gas_mobile,
            bubble_point_slack: Slack::new(BUBBLE_POINT_SLACK_SCF_STB),
            critical_gas_slack: Slack::new(CRITICAL_GAS_SLACK),
            held_shut: vec![false; injectors],
            regain_psi: vec![Slack::new(REGAIN_PSI); wells],
        }
    }
}

impl Mode {
    /// Whether it flows as its line and choke let it, held back by nothing else.
    pub fn is_line(self) -> bool {
        matches!(self, Self::Line { .. })
    }

    pub fn flows(self) -> bool {
        matches!(self, Self::Target | Self::Floor | Self::Line { .. })
    }
}

/// What one watch stands for.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Watch {
    CapLost(usize),
    TargetAbove(usize),
    FloorAbove(usize),
    MarginGone(usize),
    /// A valley has opened between the top of the hump and the operating point: from now on they are two humps.
    Valley(usize),
    RightHump(usize),
    MinimumRate(usize),
    WaterCut(usize),
    /// The injected water's front reaches a well: its water cut jumps.
    Breakthrough(usize),
    GasOilRatio(usize),
    FlowAgain(usize),
    BubblePoint,
    CriticalGas,
    InjectorLimit(usize),
    /// The tank's pressure passes the injector's bottom-hole limit, where the allowed rate is bent at zero.
    InjectorShut(usize),
}

/// Room around a border. A tank can settle right on one of its borders; each crossing soon after the last one widens the room,
/// so that rounding does not cut the run into slivers. Only the integrator's restarts hang on it, not the physics.
#[derive(Debug, Clone, Copy)]
pub(super) struct Slack {
    pub now: f64,
    least: f64,
    last_days: f64,
}

impl Slack {
    fn new(least: f64) -> Self {
        Self { now: least, least, last_days: f64::NEG_INFINITY }
    }

    pub fn crossed(&mut self, t_days: f64) {
        self.now = if t_days - self.last_days < SOON_DAYS { 10.0 * self.now } else { self.least };
        self.last_days = t_days;
    }
}

/// Discrete state of a stretch.
#[derive(Debug, Clone)]
pub(super) struct Modes {
    pub wells: Vec<Mode>,
    /// Dead wells whose return is still to be noted.
    pub watch_return: Vec<bool>,
    /// Wells that the front has reached.
    pub broken_through: Vec<bool>,
    pub injecting: Vec<bool>,
    pub limited: Vec<bool>,
    pub saturated: bool,
    pub gas_mobile: bool,
    /// How far beyond the bubble point, scf/STB, and the critical gas saturation the tank goes before it counts as a crossing.
    pub bubble_point_slack: Slack,
    pub critical_gas_slack: Slack,
    /// Injectors shut in by their bottom-hole limit.
    pub held_shut: Vec<bool>,
    /// Height above a cap at which each well is choked back to it again. Until then its rate is held at the cap all the same.
    pub regain_psi: Vec<Slack>,
}

/// Returns of a well in quick succession. Nobody opens a well every other day: it is left shut until a dated event names it.
#[derive(Debug, Clone, Copy)]
pub(super) struct Returns {
    in_a_row: usize,
    last_days: f64,
}

impl Returns {
    pub const NONE: Self = Self { in_a_row: 0, last_days: f64::NEG_INFINITY };

    fn soon(self, t_days: f64) -> bool {
        t_days - self.last_days < SOON_BACK_DAYS
    }

    /// Whether one more return is not too many.
    pub fn allow_another(self, t_days: f64) -> bool {
        !self.soon(t_days) || self.in_a_row < MOST_RETURNS_IN_A_ROW
    }

    pub fn count(&mut self, t_days: f64) {
        self.in_a_row = if self.soon(t_days) { self.in_a_row + 1 } else { 1 };
        self.last_days = t_days;
    }
}

/// Where a well was found last.
#[derive(Debug, Clone, Copy, Default)]
pub(super) struct Spot {
    pub rate_stb_d: f64,
    pub slope: f64,
    pub top_rate_stb_d: f64,
    /// The valley on the left of a hump that is not the left-most; 0: not known yet.
    pub low_rate_stb_d: f64,
    /// Tank pressure at which the rate was found, psia, and the change of rate with it, STB/d/psi.
    pub pressure_psia: f64,
    pub per_pressure: f64,
    /// The conditions under which the rate was found: the same ones need no search.
    pub found_under: Option<[f64; 5]>,
}

impl Spot {
    /// Where the hump on which the well flows begins, STB/d; `low` is the part of open flow at which it was seen first.
    pub fn left_end(&self, low: f64, open_flow_stb_d: f64) -> f64 {
        if low <= 0.0 {
            LOOK_FROM * open_flow_stb_d
        } else if self.low_rate_stb_d > 0.0 {
            self.low_rate_stb_d
        } else {
            low * open_flow_stb_d
        }
    }
}

/// A dip between the top of a hump and the operating point.
#[derive(Debug, Clone, Copy)]
pub(super) struct Valley {
    pub rate_stb_d: f64,
    /// Higher ground on its right, STB/d, and how much higher it is, psi.
    pub crest_stb_d: f64,
    pub rise_psi: f64,
}

/// Offsets into the scaled state vector.
#[derive(Debug, Clone, Copy)]
pub(super) struct Layout {
    pub wells: usize,
    pub injectors: usize,
    /// Whether there is an aquifer whose influx has a history.
    pub aquifer: bool,
    /// Whether gas may be injected into the cap.
    pub cap_gas: bool,
    /// Whether the part of the withdrawal that water replaces is kept.
    pub flood: bool,
    /// Whether volumes on their way from the injectors are kept.
    pub transit: bool,
}

impl Layout {
    pub fn len(self) -> usize {
        self.after() + usize::from(self.aquifer) + usize::from(self.cap_gas)
    }
    pub fn oil(self, w: usize) -> usize {
        w
    }
    pub fn gas(self, w: usize) -> usize {
        self.wells + w
    }
    pub fn water(self, w: usize) -> usize {
        2 * self.wells + w
    }
    pub fn injected(self, i: usize) -> usize {
        3 * self.wells + i
    }
    pub fn asked(self, i: usize) -> usize {
        3 * self.wells + self.injectors + i
    }
    pub fn effective_water(self) -> usize {
        3 * self.wells + 2 * self.injectors
    }
    pub fn effective_gas(self) -> usize {
        3 * self.wells + 2 * self.injectors + 1
    }
    /// Injected volume that has yet to reach the tank; only where `transit`.
    pub fn in_transit(self, i: usize) -> usize {
        3 * self.wells + 2 * self.injectors + 2 + i
    }
    /// Part of the withdrawal that water replaces; only where `flood`.
    pub fn replaced(self) -> usize {
        3 * self.wells + 2 * self.injectors + 2 + if self.transit { self.injectors } else { 0 }
    }
    /// Where the optional parts of the tank begin.
    fn after(self) -> usize {
        self.replaced() + usize::from(self.flood)
    }
    pub fn aquifer(self) -> Option<usize> {
        self.aquifer.then_some(self.after())
    }
    pub fn cap_gas(self) -> Option<usize> {
        self.cap_gas.then_some(self.after() + usize::from(self.aquifer))
    }
}

/// Counters and warm starts that live through the whole run.
#[derive(Debug, Default)]
pub(super) struct Memory {
    /// The instant of the tank state looked at, days: what a well has left of its productivity depends on it.
    pub at_days: Cell<f64>,
    pub pressure_psia: Cell<f64>,
    pub spots: RefCell<Vec<Spot>>,
    /// What each well brings into its shared line, STB/d or scf/d.
    pub into_line: RefCell<Vec<f64>>,
    /// How much less each well would bring per psi more in its line.
    pub gives_way: RefCell<Vec<f64>>,
    /// What each well has made at the state looked at last, STB.
    pub oil_stb: RefCell<Vec<f64>>,
    pub gauge: Gauge,
    /// Height to which crossings are resolved, psi.
    pub crossing_psi: Cell<f64>,
    pub closures: Cell<u64>,
}
