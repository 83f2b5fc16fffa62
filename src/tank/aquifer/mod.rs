//! Aquifers: water that flows into the tank as its pressure falls.
//!
//! Every law but the pot is read as a conductance between the tank and a store of water,
//!
//! ```text
//! ew = J*(pa - p),   pa = pi - We/A
//!
//! Schilthuis      J = C                          A without bound
//! Fetkovich       J                              A = Wei/pi = ct*V
//! Carter-Tracy    J = U*(tD/t)/(pD - tD*pD')     A = U/pD'
//! pot             J without bound                A = ct*V:  We = A*(pi - p)
//! ```
//!
//! with ew in rb/d, We its integral, pressures in psi. Carter and Tracy's recursion becomes the third line as its steps shrink: its
//! constant-rate approximation stays, which puts it some 4 to 8 % below the exact superposition in a steady decline, and tD runs from the first
//! production. The pot is solved with the balance itself and follows the pressure both ways.
//!
//! We counts water at the initial pressure; in the tank it expands with the water's volume factor, which keeps the mass.
//!
//! # A strong aquifer on a small tank
//! The two come to rest with each other within `1/(J*(1/A + 1/T))` days, T being the tank's own rb/psi. An explicit integrator would
//! have to follow that, however short. So J is held to what makes it [`SHORTEST_DAYS`], and the part of the influx that keeps both
//! pressures falling alike, `q*A/(A + T)` for a net withdrawal q, is added in the measure of what was held back:
//!
//! ```text
//! ew = Je*(pa - p) + (1 - Je/J)*q*A/(A + T),   Je = min(J, 1/(SHORTEST_DAYS*(1/A + 1/T)))
//! ```
//!
//! Slow changes are followed as by the full J, sudden ones within days. Where J is small enough nothing is changed.
//!
//! # Source
//! Schilthuis (1936), Fetkovich (1971), Carter and Tracy (1960), van Everdingen and Hurst (1949); the pot as in Dake (1978).
//! Range: water and rock of small, constant compressibility; one tank pressure at the contact.

mod geometry;
mod pressure_function;

pub use geometry::{AquiferRock, LinearAquifer, RadialAquifer};
pub use pressure_function::PressureFunction;

use std::sync::Arc;

/// Shortest time within which tank and aquifer come to rest with each other, days.
pub const SHORTEST_DAYS: f64 = 5.0;
/// Least age of a Carter-Tracy aquifer, days: at zero its conductance has no bound.
const YOUNGEST_DAYS: f64 = 1e-3;

/// The aquifer as the user states it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum AquiferSpec {
    /// Small and well connected: its pressure is the tank's.
    Pot {
        /// Water, rb.
        water_rb: f64,
        /// Compressibility of its water and pores, 1/psi.
        compressibility_1_psi: f64,
    },
    /// Steady state: its pressure stays.
    Schilthuis {
        /// Influx per pressure below the initial one, rb/d/psi.
        strength_rb_d_psi: f64,
    },
    /// Finite, pseudo-steady.
    Fetkovich {
        /// Water, rb.
        water_rb: f64,
        /// Compressibility of its water and pores, 1/psi.
        compressibility_1_psi: f64,
        /// Influx per pressure of the aquifer above the tank's, rb/d/psi.
        productivity_rb_d_psi: f64,
    },
    /// Radial without end.
    CarterTracy {
        /// Aquifer constant U, rb/psi.
        constant_rb_psi: f64,
        /// Dimensionless time that passes in a day.
        time_per_day: f64,
        /// Days from the first production to the start of the forecast.
        age_days: f64,
    },
}

impl AquiferSpec {
    /// The word of the scenario file.
    pub fn name(&self) -> &'static str {
        match self {
            Self::Pot { .. } => "pot",
            Self::Schilthuis { .. } => "schilthuis",
            Self::Fetkovich { .. } => "fetkovich",
            Self::CarterTracy { .. } => "carter-tracy",
        }
    }
}

/// What drives the influx at one instant.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Drive {
    /// Pressure that the tank feels, psia.
    pub pressure_psia: f64,
    /// Conductance J, rb/d/psi.
    pub conductance_rb_d_psi: f64,
    /// Store A, rb/psi; infinite where its pressure stays.
    pub store_rb_psi: f64,
}

impl Drive {
    /// Influx, rb/d, into a tank at `pressure_psia` whose own store is `tank_rb_psi` and from which `withdrawal_rb_d` is taken, net of injection.
    pub fn influx_rb_d(&self, pressure_psia: f64, tank_rb_psi: f64, withdrawal_rb_d: f64) -> f64 {
        let j = self.conductance_rb_d_psi;
        if j <= 0.0 {
            return 0.0;
        }
        let held = j.min(1.0 / (SHORTEST_DAYS * (1.0 / self.store_rb_psi + 1.0 / tank_rb_psi)));
        let alike = withdrawal_rb_d / (1.0 + tank_rb_psi / self.store_rb_psi);
        held * (self.pressure_psia - pressure_psia) + (1.0 - held / j) * alike
    }
}

/// The aquifer, prepared.
#[derive(Debug, Clone)]
pub struct Aquifer {
    spec: AquiferSpec,
    initial_pressure_psia: f64,
    function: Option<Arc<PressureFunction>>,
}

impl Aquifer {
    /// Prepares an aquifer that is at rest at the tank's initial pressure.
    pub fn new(spec: AquiferSpec, initial_pressure_psia: f64) -> Self {
        let function = matches!(spec, AquiferSpec::CarterTracy { .. }).then(|| Arc::new(PressureFunction::new()));
        Self { spec, initial_pressure_psia, function }
    }

    /// What it was prepared from.
    pub fn spec(&self) -> &AquiferSpec {
        &self.spec
    }

    /// Whether its influx follows from the tank's pressure alone.
    pub fn is_pot(&self) -> bool {
        matches!(self.spec, AquiferSpec::Pot { .. })
    }

    /// Water that a pot has given at a tank pressure, rb; zero for every other aquifer, whose influx has a history.
    pub fn pot_rb(&self, pressure_psia: f64) -> f64 {
        match self.spec {
            AquiferSpec::Pot { water_rb, compressibility_1_psi } => {
                water_rb * compressibility_1_psi * (self.initial_pressure_psia - pressure_psia)
            }
            _ => 0.0,
        }
    }

    /// What drives the influx `days` after the start of the forecast, when `influx_rb` has come since the first production.
    /// `None` for a pot.
    pub fn drive(&self, days: f64, influx_rb: f64) -> Option<Drive> {
        let p_i = self.initial_pressure_psia;
        match self.spec {
            AquiferSpec::Pot { .. } => None,
            AquiferSpec::Schilthuis { strength_rb_d_psi } => {
                Some(Drive { pressure_psia: p_i, conductance_rb_d_psi: strength_rb_d_psi, store_rb_psi: f64::INFINITY })
            }
            AquiferSpec::Fetkovich { water_rb, compressibility_1_psi, productivity_rb_d_psi } => {
                let store = water_rb * compressibility_1_psi;
                Some(Drive {
                    pressure_psia: p_i - influx_rb / store,
                    conductance_rb_d_psi: productivity_rb_d_psi,
                    store_rb_psi: store,
                })
            }
            AquiferSpec::CarterTracy { constant_rb_psi, time_per_day, age_days } => {
                let time = time_per_day * (age_days + days).max(YOUNGEST_DAYS);
                let (value, slope) = self.function.as_ref()?.at(time);
                let store = constant_rb_psi / slope;
                Some(Drive {
                    pressure_psia: p_i - influx_rb / store,
                    conductance_rb_d_psi: constant_rb_psi * time_per_day / (value - time * slope),
                    store_rb_psi: store,
                })
            }
        }
    }

    /// Average pressure of the aquifer, psia; `None` where it has no end and so no average.
    pub fn pressure_psia(&self, influx_rb: f64, tank_psia: f64) -> Option<f64> {
        match self.spec {
            AquiferSpec::Pot { .. } => Some(tank_psia),
            AquiferSpec::Schilthuis { .. } => Some(self.initial_pressure_psia),
            AquiferSpec::Fetkovich { .. } => self.drive(0.0, influx_rb).map(|d| d.pressure_psia),
            AquiferSpec::CarterTracy { .. } => None,
        }
    }
}
