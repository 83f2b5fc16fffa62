//! A wellhead choke as the user states it.

use crate::tubing::Stream;
use jiff::civil::Date;

/// Which relation gives the pressure upstream of the choke.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum ChokeMethod {
    /// Sachdeva et al. (1986): critical and subcritical flow.
    Sachdeva,
    /// Gilbert (1954): critical flow alone.
    Gilbert,
    /// Ros (1960): critical flow alone.
    Ros,
    /// Baxendell (1957): critical flow alone.
    Baxendell,
    /// Achong (1961): critical flow alone.
    Achong,
    /// Pilehvari (1981): critical flow alone.
    Pilehvari,
}

impl ChokeMethod {
    /// Every method.
    pub const ALL: [Self; 6] =
        [Self::Sachdeva, Self::Gilbert, Self::Ros, Self::Baxendell, Self::Achong, Self::Pilehvari];

    /// Its name in scenario files and results.
    pub const fn name(self) -> &'static str {
        match self {
            Self::Sachdeva => "sachdeva",
            Self::Gilbert => "gilbert",
            Self::Ros => "ros",
            Self::Baxendell => "baxendell",
            Self::Achong => "achong",
            Self::Pilehvari => "pilehvari",
        }
    }

    /// Discharge coefficient where neither a figure nor tests are given: 0.85 by Sachdeva et al. for a choke without an elbow upstream
    /// (0.75 with one); the critical relations carry their losses in their constants.
    pub const fn usual_discharge(self) -> f64 {
        match self {
            Self::Sachdeva => 0.85,
            _ => 1.0,
        }
    }
}

/// What sets the discharge coefficient, the measured rate over that of the relation.
#[derive(Debug, Clone, PartialEq)]
pub enum Discharge {
    /// This figure.
    Given(f64),
    /// Fitted to tests.
    Tests(Vec<ChokeTest>),
}

/// One test of a choke: rates with the pressures on both sides.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ChokeTest {
    /// Date.
    pub on: Option<Date>,
    /// Opening at the time, in.
    pub size_in: f64,
    /// Pressure upstream of the choke, psia.
    pub wellhead_psia: f64,
    /// Pressure downstream of it, psia.
    pub line_psia: f64,
    /// Liquid rate, STB/d.
    pub rate_stb_d: f64,
    /// Producing gas-oil ratio, scf/STB.
    pub gor_scf_stb: f64,
    /// Water cut.
    pub water_cut: f64,
}

impl ChokeTest {
    /// What flowed.
    pub fn stream(&self) -> Stream {
        Stream { liquid_rate_stb_d: self.rate_stb_d, water_cut: self.water_cut, gor_scf_stb: self.gor_scf_stb }
    }
}

/// A wellhead choke as the user states it, in oilfield units.
#[derive(Debug, Clone, PartialEq)]
pub struct ChokeSpec {
    /// Relation.
    pub method: ChokeMethod,
    /// Opening, in.
    pub size_in: f64,
    /// Discharge coefficient.
    pub discharge: Discharge,
}
