//! Field or metric units on the way out: column suffixes, labels, factors.

use super::table::{Dimension, Scale, units_of};

/// In which units results are written.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum UnitSystem {
    /// Oilfield units.
    #[default]
    Field,
    /// Metric units of the trade.
    Metric,
}

/// The unit in which one dimension is written.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct OutputUnit {
    /// End of a column name: "psia" in `reservoir_pressure_psia`.
    pub suffix: &'static str,
    /// For people: axis titles, tables.
    pub label: &'static str,
    /// Output units in one of the program's.
    pub factor: f64,
    /// What zero of the program's unit is in the output unit.
    pub offset: f64,
}

impl OutputUnit {
    /// From the program's unit to the output unit.
    pub fn to_output(&self, value_field_units: f64) -> f64 {
        value_field_units * self.factor + self.offset
    }

    /// A column name with its unit.
    pub fn column(&self, name: &str) -> String {
        format!("{name}_{}", self.suffix)
    }
}

impl UnitSystem {
    /// As the scenario states it.
    pub fn name(self) -> &'static str {
        match self {
            Self::Field => "field",
            Self::Metric => "metric",
        }
    }

    /// The unit in which `dimension` is written. Never a bare M or MM: that is a thousand to some and a million to others.
    pub fn unit(self, dimension: Dimension) -> OutputUnit {
        use Dimension as D;
        let (unit, suffix, label) = match (self, dimension) {
            (Self::Field, D::Pressure) => ("psia", "psia", "psia"),
            (Self::Metric, D::Pressure) => ("bar", "bara", "bara"),
            (Self::Field, D::PressureDifference) => ("psi", "psi", "psi"),
            (Self::Metric, D::PressureDifference) => ("bar", "bar", "bar"),
            (Self::Field, D::Length) => ("ft", "ft", "ft"),
            (Self::Metric, D::Length) => ("m", "m", "m"),
            (Self::Field, D::Diameter) => ("in", "in", "in"),
            (Self::Metric, D::Diameter) => ("mm", "mm", "mm"),
            (Self::Field, D::Temperature) => ("degF", "degf", "°F"),
            (Self::Metric, D::Temperature) => ("degC", "degc", "°C"),
            (Self::Field, D::LiquidVolume) => ("STB", "stb", "STB"),
            (Self::Metric, D::LiquidVolume) => ("Sm3", "sm3", "Sm³"),
            (Self::Field, D::GasVolume) => ("scf", "scf", "scf"),
            (Self::Metric, D::GasVolume) => ("Sm3", "sm3", "Sm³"),
            (Self::Field, D::LiquidRate) => ("STB/d", "stb_d", "STB/d"),
            (Self::Metric, D::LiquidRate) => ("Sm3/d", "sm3_d", "Sm³/d"),
            (Self::Field, D::GasRate) => ("scf/d", "scf_d", "scf/d"),
            (Self::Metric, D::GasRate) => ("Sm3/d", "sm3_d", "Sm³/d"),
            (Self::Field, D::GasOilRatio) => ("scf/STB", "scf_stb", "scf/STB"),
            (Self::Metric, D::GasOilRatio) => ("Sm3/Sm3", "sm3_sm3", "Sm³/Sm³"),
            (Self::Field, D::Viscosity) => ("cp", "cp", "cp"),
            (Self::Metric, D::Viscosity) => ("mPa.s", "mpa_s", "mPa·s"),
            (Self::Field, D::Compressibility) => ("1/psi", "1_psi", "1/psi"),
            (Self::Metric, D::Compressibility) => ("1/bar", "1_bar", "1/bar"),
            (Self::Field, D::PressureGradient) => ("psi/ft", "psi_ft", "psi/ft"),
            (Self::Metric, D::PressureGradient) => ("bar/m", "bar_m", "bar/m"),
            (Self::Field, D::ProductivityIndex) => ("STB/d/psi", "stb_d_psi", "STB/d/psi"),
            (Self::Metric, D::ProductivityIndex) => ("Sm3/d/bar", "sm3_d_bar", "Sm³/d/bar"),
            (Self::Field, D::GasInjectivity) => ("scf/d/psi", "scf_d_psi", "scf/d/psi"),
            (Self::Metric, D::GasInjectivity) => ("Sm3/d/bar", "sm3_d_bar", "Sm³/d/bar"),
            (Self::Field, D::Turbulence) => ("psi/(STB/d)^2", "psi_d2_stb2", "psi/(STB/d)²"),
            (Self::Metric, D::Turbulence) => ("bar/(Sm3/d)^2", "bar_d2_sm6", "bar/(Sm³/d)²"),
            (_, D::Permeability) => ("mD", "md", "mD"),
            (Self::Field, D::Density) => ("lb/ft3", "lb_ft3", "lb/ft³"),
            (Self::Metric, D::Density) => ("kg/m3", "kg_m3", "kg/m³"),
            (_, D::OilGravity) => ("API", "api", "°API"),
            (_, D::Salinity) => ("ppm", "ppm", "ppm"),
            (_, D::Time) => ("days", "days", "days"),
            (Self::Field, D::Velocity) => ("ft/s", "ft_s", "ft/s"),
            (Self::Metric, D::Velocity) => ("m/s", "m_s", "m/s"),
            (Self::Field, D::LiquidVolumeFactor) => ("rb/STB", "rb_stb", "rb/STB"),
            (Self::Metric, D::LiquidVolumeFactor) => ("rm3/Sm3", "rm3_sm3", "rm³/Sm³"),
            (Self::Field, D::GasVolumeFactor) => ("rb/scf", "rb_scf", "rb/scf"),
            (Self::Metric, D::GasVolumeFactor) => ("rm3/Sm3", "rm3_sm3", "rm³/Sm³"),
            (_, D::Angle) => ("deg", "deg", "°"),
            (Self::Field, D::HeatConductivity) => ("Btu/h/ft/degF", "btu_h_ft_degf", "Btu/h/ft/°F"),
            (Self::Metric, D::HeatConductivity) => ("W/m/K", "w_m_k", "W/m/K"),
            (Self::Field, D::HeatTransfer) => ("Btu/h/ft2/degF", "btu_h_ft2_degf", "Btu/h/ft²/°F"),
            (Self::Metric, D::HeatTransfer) => ("W/m2/K", "w_m2_k", "W/m²/K"),
            (Self::Field, D::Diffusivity) => ("ft2/h", "ft2_h", "ft²/h"),
            (Self::Metric, D::Diffusivity) => ("mm2/s", "mm2_s", "mm²/s"),
        };
        let scale = units_of(dimension).find(|row| row.name == unit).map(|row| row.scale);
        let (factor, offset) = match scale {
            Some(Scale::Linear { factor, offset }) => (1.0 / factor, -offset / factor),
            // No output unit is a gauge or a gravity one; a test walks through all of them.
            _ => (f64::NAN, f64::NAN),
        };
        OutputUnit { suffix, label, factor, offset }
    }

    /// From the program's unit to this system's.
    pub fn to_output(self, dimension: Dimension, value_field_units: f64) -> f64 {
        self.unit(dimension).to_output(value_field_units)
    }
}
