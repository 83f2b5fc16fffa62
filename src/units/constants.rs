//! The physical constants of the program (design conventions 4.8(2)).

/// Standard pressure, psia.
pub const STANDARD_PRESSURE_PSIA: f64 = 14.696;
/// Standard temperature (60 degF), degR.
pub const STANDARD_TEMPERATURE_DEGR: f64 = 519.67;
/// 0 degF on the absolute scale, degR.
pub const DEGF_TO_DEGR: f64 = 459.67;
/// Cubic feet in a barrel.
pub const FT3_PER_BBL: f64 = 5.614_583;
/// Gas constant, psia ft3/(lbmol degR).
pub const GAS_CONSTANT: f64 = 10.7316;
/// Molar mass of air, lb/lbmol.
pub const AIR_LB_PER_LBMOL: f64 = 28.97;
/// Density of fresh water at 60 degF, lb/ft3.
pub const FRESH_WATER_LB_FT3: f64 = 62.366;
/// g and gc, ft/s2 and lbm ft/(lbf s2).
pub const GRAVITY_FT_S2: f64 = 32.174;
