//! The units in which results are written: the one place where report knows them.

/// What results are written in. Stands in for the type of the same name in `units` until that exists.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum UnitSystem {
    /// Oilfield units.
    #[default]
    Field,
    /// Metric units.
    Metric,
}

/// The dimensions that result files contain.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Quantity {
    /// Surface volume of oil or water.
    Liquid,
    /// Surface volume of gas.
    Gas,
    /// Surface rate of oil or water.
    LiquidRate,
    /// Surface rate of gas.
    GasRate,
    /// Absolute pressure.
    Pressure,
    /// Difference of pressures.
    PressureDifference,
    /// Gas-oil ratio.
    GasOilRatio,
    /// Depth.
    Depth,
    /// Temperature.
    Temperature,
    /// Pressure gradient.
    Gradient,
    /// Surface volume of gas in a reservoir volume.
    Expansion,
    /// Reservoir volume of gas for a surface volume.
    GasVolumeFactor,
    /// Reservoir volume of a liquid for a surface volume.
    LiquidVolumeFactor,
    /// Viscosity.
    Viscosity,
    /// Velocity.
    Velocity,
}

/// How one dimension is written.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Label {
    /// Ending of column names, without the leading underscore.
    pub suffix: &'static str,
    /// For people.
    pub text: &'static str,
    factor: f64,
    offset: f64,
}

impl Label {
    /// A number without a dimension.
    pub fn fraction() -> Self {
        Self { suffix: "", text: "", factor: 1.0, offset: 0.0 }
    }

    /// From the program's oilfield units to the written ones.
    pub fn of(&self, value: f64) -> f64 {
        value * self.factor + self.offset
    }

    /// `stem` with the unit behind it.
    pub fn column(&self, stem: &str) -> String {
        if self.suffix.is_empty() { stem.to_owned() } else { format!("{stem}_{}", self.suffix) }
    }
}

const M3_PER_STB: f64 = 0.158_987_294_928;
const M3_PER_FT3: f64 = 0.028_316_846_592;
const BAR_PER_PSI: f64 = 0.068_947_572_931_683_6;
const M_PER_FT: f64 = 0.3048;

/// How `quantity` is written in `units`.
pub fn label(units: UnitSystem, quantity: Quantity) -> Label {
    use Quantity as Q;
    let field = |suffix, text| Label { suffix, text, factor: 1.0, offset: 0.0 };
    let metric = |suffix, text, factor| Label { suffix, text, factor, offset: 0.0 };
    match (units, quantity) {
        (UnitSystem::Field, Q::Liquid) => field("stb", "STB"),
        (UnitSystem::Field, Q::Gas) => field("scf", "scf"),
        (UnitSystem::Field, Q::LiquidRate) => field("stb_d", "STB/d"),
        (UnitSystem::Field, Q::GasRate) => field("scf_d", "scf/d"),
        (UnitSystem::Field, Q::Pressure) => field("psia", "psia"),
        (UnitSystem::Field, Q::PressureDifference) => field("psi", "psi"),
        (UnitSystem::Field, Q::GasOilRatio) => field("scf_stb", "scf/STB"),
        (UnitSystem::Field, Q::Depth) => field("ft", "ft"),
        (UnitSystem::Field, Q::Temperature) => field("degf", "°F"),
        (UnitSystem::Field, Q::Gradient) => field("psi_ft", "psi/ft"),
        (UnitSystem::Field, Q::Expansion) => field("scf_rb", "scf in a reservoir barrel"),
        (UnitSystem::Field, Q::GasVolumeFactor) => field("rb_scf", "rb/scf"),
        (UnitSystem::Field, Q::LiquidVolumeFactor) => field("rb_stb", "rb/STB"),
        (UnitSystem::Field, Q::Velocity) => field("ft_s", "ft/s"),
        (UnitSystem::Metric, Q::Velocity) => metric("m_s", "m/s", M_PER_FT),
        (_, Q::Viscosity) => field("cp", "cp"),
        (UnitSystem::Metric, Q::Expansion) => metric("sm3_rm3", "Sm³ in a reservoir m³", M3_PER_FT3 / M3_PER_STB),
        (UnitSystem::Metric, Q::GasVolumeFactor) => metric("rm3_sm3", "rm³/Sm³", M3_PER_STB / M3_PER_FT3),
        (UnitSystem::Metric, Q::LiquidVolumeFactor) => metric("rm3_sm3", "rm³/Sm³", 1.0),
        (UnitSystem::Metric, Q::Liquid) => metric("sm3", "Sm³", M3_PER_STB),
        (UnitSystem::Metric, Q::Gas) => metric("sm3", "Sm³", M3_PER_FT3),
        (UnitSystem::Metric, Q::LiquidRate) => metric("sm3_d", "Sm³/d", M3_PER_STB),
        (UnitSystem::Metric, Q::GasRate) => metric("sm3_d", "Sm³/d", M3_PER_FT3),
        (UnitSystem::Metric, Q::Pressure) => metric("bara", "bara", BAR_PER_PSI),
        (UnitSystem::Metric, Q::PressureDifference) => metric("bar", "bar", BAR_PER_PSI),
        (UnitSystem::Metric, Q::GasOilRatio) => metric("sm3_sm3", "Sm³/Sm³", M3_PER_FT3 / M3_PER_STB),
        (UnitSystem::Metric, Q::Depth) => metric("m", "m", M_PER_FT),
        (UnitSystem::Metric, Q::Temperature) => {
            Label { suffix: "degc", text: "°C", factor: 5.0 / 9.0, offset: -160.0 / 9.0 }
        }
        (UnitSystem::Metric, Q::Gradient) => metric("bar_m", "bar/m", BAR_PER_PSI / M_PER_FT),
    }
}
