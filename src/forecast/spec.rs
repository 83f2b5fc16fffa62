//! Everything a forecast needs, as plain checked data in oilfield units.

use super::OnsetSpec;
use crate::fluid::FluidSpec;
use crate::tank::TankSpec;
use crate::well::{LineSpec, WellSpec};
use jiff::civil::Date;

/// Length of a reporting period.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Every {
    /// Calendar months.
    Month,
    /// Calendar quarters.
    Quarter,
    /// Calendar years.
    Year,
}

/// The calendar of the forecast.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct PeriodSpec {
    /// First day.
    pub start: Date,
    /// The day after the last.
    pub end: Date,
    /// Reporting period.
    pub every: Every,
}

/// What an injector puts into the tank.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum InjectedFluid {
    /// Water; surface volumes in STB.
    Water,
    /// Gas; surface volumes in scf.
    Gas,
}

/// What sets an injector's rate.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum InjectionControl {
    /// A constant surface rate, STB/d or scf/d.
    Rate(f64),
    /// A share of the tank's current total withdrawal at reservoir conditions.
    VoidageReplacement(f64),
}

/// One injector, in oilfield units. Rates are calendar-day.
#[derive(Debug, Clone, PartialEq)]
pub struct InjectorSpec {
    /// Name, unique in the scenario.
    pub name: String,
    /// Water or gas.
    pub fluid: InjectedFluid,
    /// First day; `None`: the start of the period.
    pub start: Option<Date>,
    /// Day from which it is shut; `None`: never.
    pub end: Option<Date>,
    /// What sets the rate.
    pub control: InjectionControl,
    /// Highest surface rate, STB/d or scf/d.
    pub rate_limit: Option<f64>,
    /// Part of the injected volume that supports the tank; the rest is lost.
    pub effective_fraction: f64,
    /// Highest bottom-hole pressure, psia, from the user's fracture figure.
    pub bottomhole_limit_psia: Option<f64>,
    /// Surface rate per pressure above the tank's, STB/d/psi or scf/d/psi.
    pub injectivity: Option<f64>,
    /// Whether its gas goes to the gas cap, apart from the oil zone.
    pub to_gas_cap: bool,
    /// Mean time from injection to the tank, days: the injected volume reaches it with a first-order lag. Below one day: at once.
    pub response_days: f64,
}

impl InjectorSpec {
    /// Whether the tank feels it later. A lag of less than a day is none: it would only make the equations stiff.
    pub fn lags(&self) -> bool {
        self.response_days >= 1.0
    }
}

/// What a dated event changes: the whole new settings of what it names.
#[derive(Debug, Clone, PartialEq)]
pub enum Change {
    /// Well of this index takes these settings.
    Well(usize, Box<WellSpec>),
    /// Shared line of this index takes this table.
    Line(usize, LineSpec),
    /// Injector of this index takes these settings.
    Injector(usize, InjectorSpec),
    /// The tank takes these relative permeabilities and this water model (its volumes cannot change).
    Tank(Box<TankSpec>),
}

/// A dated event.
#[derive(Debug, Clone, PartialEq)]
pub struct ChangeSpec {
    /// Acts from 00:00 of this day.
    pub on: Date,
    /// The name of the well, line or injector, or "tank".
    pub name: String,
    /// What it sets, as the user wrote it ("skin = -2.0").
    pub text: String,
    /// The new settings; they include those of earlier events on the same name.
    pub change: Change,
}

/// How tightly the equations are solved.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum Tolerance {
    /// Holds the numbers stated in the documentation.
    #[default]
    Normal,
    /// A hundred times tighter, to check the former.
    Tight,
    /// A hundred times tighter again, to check the one before; only from code.
    Reference,
}

/// Everything a forecast needs: one case of a scenario, resolved.
#[derive(Debug, Clone, PartialEq)]
pub struct FieldSpec {
    /// Calendar.
    pub period: PeriodSpec,
    /// Fluid.
    pub fluid: FluidSpec,
    /// Tank.
    pub tank: TankSpec,
    /// Producing wells.
    pub wells: Vec<WellSpec>,
    /// Lines that wells share.
    pub lines: Vec<LineSpec>,
    /// Injectors.
    pub injectors: Vec<InjectorSpec>,
    /// Dated events, sorted by date.
    pub changes: Vec<ChangeSpec>,
    /// Onsets of deposits, where given.
    pub onsets: OnsetSpec,
    /// Numerics.
    pub tolerance: Tolerance,
}
