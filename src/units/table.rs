//! The table of units: one row for each unit of each dimension.
//!
//! # Source
//! Definitions: NIST Special Publication 811 (2008), appendix B: 1 lbf/in2 from 1 lb = 0.453 592 37 kg, standard
//! gravity 9.806 65 m/s2 and 1 in = 0.0254 m; 1 ft = 0.3048 m. The barrel is the program's 5.614583 ft3
//! ([`FT3_PER_BBL`]), which is 6e-8 below the 9702 in3 of the definition.

use super::constants::{FRESH_WATER_LB_FT3, FT3_PER_BBL};
use std::sync::LazyLock;

/// What a quantity measures. The first unit in each line is the one used inside the program.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Dimension {
    /// psia; gauge units are converted with the scenario's atmospheric pressure.
    Pressure,
    /// psi: the difference of two pressures.
    PressureDifference,
    /// ft: depths and distances.
    Length,
    /// in: diameters and roughness.
    Diameter,
    /// degF.
    Temperature,
    /// STB: oil and water at standard conditions.
    LiquidVolume,
    /// scf: gas at standard conditions.
    GasVolume,
    /// STB/d.
    LiquidRate,
    /// scf/d.
    GasRate,
    /// scf/STB.
    GasOilRatio,
    /// cp.
    Viscosity,
    /// 1/psi.
    Compressibility,
    /// psi/ft.
    PressureGradient,
    /// STB/d/psi.
    ProductivityIndex,
    /// scf/d/psi.
    GasInjectivity,
    /// psi/(STB/d)^2.
    Turbulence,
    /// mD.
    Permeability,
    /// lb/ft3.
    Density,
    /// degrees API.
    OilGravity,
    /// Parts per million by mass.
    Salinity,
    /// Days.
    Time,
    /// ft/s.
    Velocity,
    /// rb/STB.
    LiquidVolumeFactor,
    /// rb/scf.
    GasVolumeFactor,
    /// Degrees.
    Angle,
    /// Btu/h/ft/degF.
    HeatConductivity,
    /// Btu/h/ft2/degF.
    HeatTransfer,
    /// ft2/h.
    Diffusivity,
}

impl Dimension {
    /// All of them.
    pub const ALL: [Self; 28] = [
        Self::Pressure,
        Self::PressureDifference,
        Self::Length,
        Self::Diameter,
        Self::Temperature,
        Self::LiquidVolume,
        Self::GasVolume,
        Self::LiquidRate,
        Self::GasRate,
        Self::GasOilRatio,
        Self::Viscosity,
        Self::Compressibility,
        Self::PressureGradient,
        Self::ProductivityIndex,
        Self::GasInjectivity,
        Self::Turbulence,
        Self::Permeability,
        Self::Density,
        Self::OilGravity,
        Self::Salinity,
        Self::Time,
        Self::Velocity,
        Self::LiquidVolumeFactor,
        Self::GasVolumeFactor,
        Self::Angle,
        Self::HeatConductivity,
        Self::HeatTransfer,
        Self::Diffusivity,
    ];

    /// With its article, for messages: "a pressure".
    pub fn with_article(self) -> &'static str {
        match self {
            Self::Pressure => "a pressure",
            Self::PressureDifference => "a pressure difference",
            Self::Length => "a length",
            Self::Diameter => "a diameter or roughness",
            Self::Temperature => "a temperature",
            Self::LiquidVolume => "a liquid volume",
            Self::GasVolume => "a gas volume",
            Self::LiquidRate => "a liquid rate",
            Self::GasRate => "a gas rate",
            Self::GasOilRatio => "a gas-oil ratio",
            Self::Viscosity => "a viscosity",
            Self::Compressibility => "a compressibility",
            Self::PressureGradient => "a pressure gradient",
            Self::ProductivityIndex => "a liquid rate per pressure",
            Self::GasInjectivity => "a gas rate per pressure",
            Self::Turbulence => "a pressure per rate squared",
            Self::Permeability => "a permeability",
            Self::Density => "a density",
            Self::OilGravity => "an oil gravity",
            Self::Salinity => "a salinity",
            Self::Time => "a length of time",
            Self::Velocity => "a velocity",
            Self::LiquidVolumeFactor => "a liquid volume factor",
            Self::GasVolumeFactor => "a gas volume factor",
            Self::Angle => "an angle",
            Self::HeatConductivity => "a heat conductivity",
            Self::HeatTransfer => "a heat-transfer coefficient",
            Self::Diffusivity => "a diffusivity",
        }
    }

    /// A value such as people write it, for hints.
    pub fn example(self) -> &'static str {
        match self {
            Self::Pressure => "3600 psia",
            Self::PressureDifference => "50 psi",
            Self::Length => "8600 ft",
            Self::Diameter => "2.441 in",
            Self::Temperature => "190 degF",
            Self::LiquidVolume => "42 MMSTB",
            Self::GasVolume => "12 MMscf",
            Self::LiquidRate => "1800 STB/d",
            Self::GasRate => "2 MMscf/d",
            Self::GasOilRatio => "620 scf/STB",
            Self::Viscosity => "0.8 cp",
            Self::Compressibility => "4e-6 1/psi",
            Self::PressureGradient => "0.65 psi/ft",
            Self::ProductivityIndex => "12 STB/d/psi",
            Self::GasInjectivity => "20 Mscf/d/psi",
            Self::Turbulence => "0.0009 psi/(STB/d)^2",
            Self::Permeability => "80 mD",
            Self::Density => "62.4 lb/ft3",
            Self::OilGravity => "34 API",
            Self::Salinity => "35000 ppm",
            Self::Time => "18 months",
            Self::Velocity => "10 ft/s",
            Self::LiquidVolumeFactor => "1.3 rb/STB",
            Self::GasVolumeFactor => "0.001 rb/scf",
            Self::Angle => "30 deg",
            Self::HeatConductivity => "1.4 Btu/h/ft/degF",
            Self::HeatTransfer => "4 Btu/h/ft2/degF",
            Self::Diffusivity => "0.04 ft2/h",
        }
    }
}

/// How a number in a unit becomes one in the program's unit of the dimension.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Scale {
    /// `value * factor + offset`.
    Linear {
        /// Program's units in one of this unit.
        factor: f64,
        /// What zero of this unit is in the program's.
        offset: f64,
    },
    /// `value * factor + atmospheric pressure`.
    Gauge {
        /// psi in one of this unit.
        factor: f64,
    },
    /// `141.5 * water / value - 131.5`: degrees API from a density, `water` being that of fresh water at 60 degF.
    Gravity {
        /// Density of water in this unit.
        water: f64,
    },
}

/// One unit of one dimension.
#[derive(Debug, Clone, PartialEq)]
pub struct Unit {
    /// As the program writes it.
    pub name: &'static str,
    /// Other spellings, in lower case without blanks, carets and dots.
    pub aliases: &'static [&'static str],
    /// What it measures.
    pub dimension: Dimension,
    /// How it is converted.
    pub scale: Scale,
}

impl Unit {
    /// From this unit into the program's.
    pub fn to_inside(&self, value: f64, atmospheric_pressure_psia: f64) -> f64 {
        match self.scale {
            Scale::Linear { factor, offset } => value * factor + offset,
            Scale::Gauge { factor } => value * factor + atmospheric_pressure_psia,
            Scale::Gravity { water } => 141.5 * water / value - 131.5,
        }
    }

    /// From the program's unit into this one.
    pub fn from_inside(&self, inside: f64, atmospheric_pressure_psia: f64) -> f64 {
        match self.scale {
            Scale::Linear { factor, offset } => (inside - offset) / factor,
            Scale::Gauge { factor } => (inside - atmospheric_pressure_psia) / factor,
            Scale::Gravity { water } => 141.5 * water / (inside + 131.5),
        }
    }

    /// Whether the user may have meant this unit; `reduced` comes from `reduce`.
    pub(super) fn answers_to(&self, reduced: &str) -> bool {
        reduce(self.name) == reduced || self.aliases.contains(&reduced)
    }
}

/// Brings the many ways in which people write a unit to one: no case, blanks, carets, dots or superscripts.
pub(super) fn reduce(text: &str) -> String {
    let mut out = String::with_capacity(text.len());
    for c in text.chars().flat_map(char::to_lowercase) {
        match c {
            ' ' | '\t' | '\u{a0}' | '\u{202f}' | '^' | '.' | '·' | '*' | '_' | '(' | ')' => {}
            '³' => out.push('3'),
            '²' => out.push('2'),
            '⁻' | '−' | '–' => out.push('-'),
            '¹' => out.push('1'),
            '°' | 'º' => out.push_str("deg"),
            '∕' | '⁄' => out.push('/'),
            _ => out.push(c),
        }
    }
    for (long, short) in [
        ("per", "/"),
        ("/days", "/d"),
        ("/day", "/d"),
        ("million", "mln"),
        ("thousand", "k"),
        ("10e3", "k"),
        ("103sm3", "ksm3"),
        ("106sm3", "mlnsm3"),
        ("1000sm3", "ksm3"),
        ("e3sm3", "ksm3"),
        ("e6sm3", "mlnsm3"),
        ("stdm3", "sm3"),
        ("percent", "%"),
        ("barrels", "bbl"),
        ("barrel", "bbl"),
        ("bbls", "bbl"),
        ("psia/", "psi/"),
        ("bara/", "bar/"),
    ] {
        if out.contains(long) {
            out = out.replace(long, short);
        }
    }
    // "percent" has lost its "per" above.
    if out == "/cent" { "%".to_owned() } else { out }
}

/// Metres in a foot and in an inch.
const FT_M: f64 = 0.3048;
const IN_M: f64 = 0.0254;
/// Pascals in a psi.
const PSI_PA: f64 = 0.453_592_37 * 9.806_65 / (IN_M * IN_M);
/// psi in a bar, a kilopascal, an atmosphere, a technical atmosphere.
const BAR: f64 = 1.0e5 / PSI_PA;
const KPA: f64 = 1.0e3 / PSI_PA;
const ATM: f64 = 101_325.0 / PSI_PA;
const KGF_CM2: f64 = 98_066.5 / PSI_PA;
/// Cubic feet and barrels in a cubic metre.
const M3_FT3: f64 = 1.0 / (FT_M * FT_M * FT_M);
const M3_BBL: f64 = M3_FT3 / FT3_PER_BBL;
/// lb/ft3 in a kg/m3.
const KG_M3: f64 = FT_M * FT_M * FT_M / 0.453_592_37;
/// Btu/h in a watt, by the international table's Btu of 1,055.055 852 62 J.
const WATT_BTU_H: f64 = 3600.0 / 1_055.055_852_62;
/// Days in a mean year of the calendar, and in its twelfth.
const YEAR_D: f64 = 365.2425;

/// All units.
pub fn units() -> &'static [Unit] {
    static UNITS: LazyLock<Vec<Unit>> = LazyLock::new(build);
    &UNITS
}

/// The units of one dimension, the program's own first.
pub fn units_of(dimension: Dimension) -> impl Iterator<Item = &'static Unit> {
    units().iter().filter(move |unit| unit.dimension == dimension)
}

#[rustfmt::skip]
fn build() -> Vec<Unit> {
    use Dimension::*;
    let linear = |dimension, name, factor, aliases| Unit { name, aliases, dimension, scale: Scale::Linear { factor, offset: 0.0 } };
    let shifted = |name, factor, offset, aliases| Unit { name, aliases, dimension: Temperature, scale: Scale::Linear { factor, offset } };
    let gauge = |name, factor, aliases| Unit { name, aliases, dimension: Pressure, scale: Scale::Gauge { factor } };
    let gravity = |name, water, aliases| Unit { name, aliases, dimension: OilGravity, scale: Scale::Gravity { water } };
    vec![
        linear(Pressure, "psia", 1.0, &["lbf/in2a"]),
        gauge("psig", 1.0, &["lbf/in2g"]),
        linear(Pressure, "bar", BAR, &["bara", "bars"]),
        gauge("barg", BAR, &[]),
        linear(Pressure, "kPa", KPA, &["kpaa"]),
        gauge("kPag", KPA, &[]),
        linear(Pressure, "MPa", 1.0e3 * KPA, &["mpaa"]),
        gauge("MPag", 1.0e3 * KPA, &[]),
        linear(Pressure, "atm", ATM, &[]),
        linear(Pressure, "kgf/cm2", KGF_CM2, &["kg/cm2", "kg/cm2a"]),

        linear(PressureDifference, "psi", 1.0, &["psid"]),
        linear(PressureDifference, "bar", BAR, &[]),
        linear(PressureDifference, "kPa", KPA, &[]),
        linear(PressureDifference, "MPa", 1.0e3 * KPA, &[]),

        linear(Length, "ft", 1.0, &["feet", "foot", "ftmd", "fttvd", "'"]),
        linear(Length, "m", 1.0 / FT_M, &["meter", "meters", "metre", "metres", "mmd", "mtvd"]),
        linear(Length, "km", 1.0e3 / FT_M, &[]),
        linear(Length, "in", 1.0 / 12.0, &["inch", "inches", "\""]),

        linear(Diameter, "in", 1.0, &["inch", "inches", "\""]),
        linear(Diameter, "mm", 1.0e-3 / IN_M, &["millimeter", "millimetre", "millimeters", "millimetres"]),
        linear(Diameter, "cm", 1.0e-2 / IN_M, &[]),
        linear(Diameter, "m", 1.0 / IN_M, &["meter", "metre"]),
        linear(Diameter, "ft", 12.0, &["feet", "foot"]),
        linear(Diameter, "/64 in", 1.0 / 64.0, &["/64", "/64\"", "/64ths", "/64inch"]),
        linear(Diameter, "um", 1.0e-6 / IN_M, &["micron", "microns", "\u{b5}m", "\u{3bc}m"]),

        shifted("degF", 1.0, 0.0, &["f", "fahrenheit"]),
        shifted("degC", 1.8, 32.0, &["c", "celsius"]),
        shifted("K", 1.8, -459.67, &["degk", "kelvin"]),
        shifted("degR", 1.0, -459.67, &["rankine"]),

        linear(LiquidVolume, "STB", 1.0, &["bbl", "sbbl"]),
        linear(LiquidVolume, "MSTB", 1.0e3, &["kstb", "mbbl", "kbbl"]),
        linear(LiquidVolume, "MMSTB", 1.0e6, &["mmbbl", "mlnstb", "mlnbbl"]),
        linear(LiquidVolume, "Sm3", M3_BBL, &["m3", "scm"]),
        linear(LiquidVolume, "thousand Sm3", 1.0e3 * M3_BBL, &["ksm3", "km3"]),
        linear(LiquidVolume, "million Sm3", 1.0e6 * M3_BBL, &["mlnsm3", "mlnm3"]),

        linear(GasVolume, "scf", 1.0, &["ft3", "cf", "cuft"]),
        linear(GasVolume, "Mscf", 1.0e3, &["kscf", "mcf"]),
        linear(GasVolume, "MMscf", 1.0e6, &["mmcf", "mlnscf"]),
        linear(GasVolume, "Bscf", 1.0e9, &["bcf", "billionscf"]),
        linear(GasVolume, "Sm3", M3_FT3, &["m3", "scm"]),
        linear(GasVolume, "thousand Sm3", 1.0e3 * M3_FT3, &["ksm3", "km3"]),
        linear(GasVolume, "million Sm3", 1.0e6 * M3_FT3, &["mlnsm3", "mlnm3"]),

        linear(LiquidRate, "STB/d", 1.0, &["bbl/d", "stbd", "stbpd", "bpd", "bopd", "blpd", "bwpd", "bfpd", "b/d", "bbld"]),
        linear(LiquidRate, "MSTB/d", 1.0e3, &["kstb/d", "mbbl/d", "kbbl/d", "mstbd", "kbopd", "kbpd", "mbopd", "mbpd"]),
        linear(LiquidRate, "Sm3/d", M3_BBL, &["m3/d", "sm3d"]),
        linear(LiquidRate, "thousand Sm3/d", 1.0e3 * M3_BBL, &["ksm3/d", "km3/d"]),

        linear(GasRate, "scf/d", 1.0, &["cf/d", "scfd", "ft3/d"]),
        linear(GasRate, "Mscf/d", 1.0e3, &["kscf/d", "mscfd", "kscfd", "mcf/d", "mcfd"]),
        linear(GasRate, "MMscf/d", 1.0e6, &["mmscfd", "mmcf/d", "mmcfd", "mlnscf/d"]),
        linear(GasRate, "Sm3/d", M3_FT3, &["m3/d", "sm3d"]),
        linear(GasRate, "thousand Sm3/d", 1.0e3 * M3_FT3, &["ksm3/d", "km3/d"]),
        linear(GasRate, "million Sm3/d", 1.0e6 * M3_FT3, &["mlnsm3/d", "mlnm3/d"]),

        linear(GasOilRatio, "scf/STB", 1.0, &["scf/bbl", "cf/bbl", "cf/stb", "ft3/bbl", "ft3/stb"]),
        linear(GasOilRatio, "Mscf/STB", 1.0e3, &["kscf/stb", "mscf/bbl", "kscf/bbl"]),
        linear(GasOilRatio, "Sm3/Sm3", M3_FT3 / M3_BBL, &["m3/m3", "sm3/m3"]),

        linear(Viscosity, "cp", 1.0, &["cps", "centipoise"]),
        linear(Viscosity, "mPa.s", 1.0, &["mpa-s"]),
        linear(Viscosity, "Pa.s", 1.0e3, &["pa-s"]),

        linear(Compressibility, "1/psi", 1.0, &["1/psia", "psi-1", "psia-1", "/psi", "/psia", "vol/vol/psi"]),
        linear(Compressibility, "1/bar", 1.0 / BAR, &["1/bara", "bar-1", "bara-1", "/bar"]),
        linear(Compressibility, "1/kPa", 1.0 / KPA, &["kpa-1", "/kpa"]),
        linear(Compressibility, "1/MPa", 1.0e-3 / KPA, &["mpa-1", "/mpa"]),

        linear(PressureGradient, "psi/ft", 1.0, &["psi/foot"]),
        linear(PressureGradient, "kPa/m", KPA * FT_M, &[]),
        linear(PressureGradient, "bar/m", BAR * FT_M, &[]),
        linear(PressureGradient, "bar/10m", 0.1 * BAR * FT_M, &[]),

        linear(ProductivityIndex, "STB/d/psi", 1.0, &["stb/d/psia", "bbl/d/psi", "bpd/psi", "bopd/psi", "stb/dpsi", "stb/psi/d", "stb/(dpsi)", "stbd/psi", "blpd/psi", "b/d/psi"]),
        linear(ProductivityIndex, "Sm3/d/bar", M3_BBL / BAR, &["m3/d/bar", "sm3/d/bara", "sm3/dbar", "sm3/bar/d"]),
        linear(ProductivityIndex, "Sm3/d/kPa", M3_BBL / KPA, &["m3/d/kpa"]),
        linear(ProductivityIndex, "Sm3/d/MPa", 1.0e-3 * M3_BBL / KPA, &["m3/d/mpa"]),

        linear(GasInjectivity, "scf/d/psi", 1.0, &["scf/d/psia", "scf/psi/d"]),
        linear(GasInjectivity, "Mscf/d/psi", 1.0e3, &["kscf/d/psi", "mscf/d/psia", "mcf/d/psi"]),
        linear(GasInjectivity, "MMscf/d/psi", 1.0e6, &["mmscf/d/psia"]),
        linear(GasInjectivity, "Sm3/d/bar", M3_FT3 / BAR, &["m3/d/bar", "sm3/d/bara"]),
        linear(GasInjectivity, "thousand Sm3/d/bar", 1.0e3 * M3_FT3 / BAR, &["ksm3/d/bar"]),

        linear(Turbulence, "psi/(STB/d)^2", 1.0, &["psi/bbl/d2", "psi/bpd2", "psi/stb2/d2", "psid2/stb2"]),
        linear(Turbulence, "bar/(Sm3/d)^2", BAR / (M3_BBL * M3_BBL), &["bar/m3/d2"]),

        linear(Permeability, "mD", 1.0, &["millidarcy"]),
        linear(Permeability, "D", 1.0e3, &["darcy"]),

        linear(Density, "lb/ft3", 1.0, &["lbm/ft3", "pcf"]),
        linear(Density, "kg/m3", KG_M3, &[]),
        linear(Density, "g/cm3", 1.0e3 * KG_M3, &["g/cc"]),

        linear(OilGravity, "API", 1.0, &["degapi", "apideg"]),
        gravity("kg/m3", FRESH_WATER_LB_FT3 / KG_M3, &[]),
        gravity("g/cm3", 1.0e-3 * FRESH_WATER_LB_FT3 / KG_M3, &["g/cc"]),

        linear(Salinity, "ppm", 1.0, &["mg/kg", "ppmw"]),
        linear(Salinity, "%", 1.0e4, &["wt%", "%wt"]),
        linear(Salinity, "g/kg", 1.0e3, &[]),

        linear(Time, "days", 1.0, &["d", "day"]),
        linear(Time, "months", YEAR_D / 12.0, &["month", "mo"]),
        linear(Time, "years", YEAR_D, &["year", "yr", "yrs", "y", "a"]),
        linear(Time, "hours", 1.0 / 24.0, &["hour", "h", "hr", "hrs"]),

        linear(Velocity, "ft/s", 1.0, &[]),
        linear(Velocity, "m/s", 1.0 / FT_M, &[]),

        linear(LiquidVolumeFactor, "rb/STB", 1.0, &["bbl/stb", "rbbl/stb"]),
        linear(LiquidVolumeFactor, "rm3/Sm3", 1.0, &["m3/sm3"]),

        linear(GasVolumeFactor, "rb/scf", 1.0, &["bbl/scf"]),
        linear(GasVolumeFactor, "rm3/Sm3", M3_BBL / M3_FT3, &["m3/sm3"]),

        linear(Angle, "deg", 1.0, &["degree", "degrees", "\u{b0}"]),
        linear(Angle, "rad", 180.0 / std::f64::consts::PI, &["radian", "radians"]),

        linear(HeatConductivity, "Btu/h/ft/degF", 1.0, &["btu/hr/ft/degf", "btu/h/ft/f", "btu/hr/ft/f", "btu/hftdegf", "btu/hrftdegf", "btu/hftf", "btu/hrftf"]),
        linear(HeatConductivity, "W/m/K", WATT_BTU_H * FT_M / 1.8, &["w/mk", "w/m/degc", "w/mdegc"]),

        linear(HeatTransfer, "Btu/h/ft2/degF", 1.0, &["btu/hr/ft2/degf", "btu/h/ft2/f", "btu/hr/ft2/f", "btu/hft2degf", "btu/hrft2degf", "btu/hft2f", "btu/hrft2f"]),
        linear(HeatTransfer, "W/m2/K", WATT_BTU_H * FT_M * FT_M / 1.8, &["w/m2k", "w/m2/degc", "w/m2degc"]),

        linear(Diffusivity, "ft2/h", 1.0, &["ft2/hr", "sqft/h", "sqft/hr"]),
        linear(Diffusivity, "ft2/d", 1.0 / 24.0, &[]),
        linear(Diffusivity, "m2/s", 3600.0 / (FT_M * FT_M), &[]),
        linear(Diffusivity, "mm2/s", 3600.0e-6 / (FT_M * FT_M), &[]),
    ]
}
