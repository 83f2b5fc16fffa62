//! Black-oil and water properties: published correlations or a table.
//!
//! One file per published method. [`BlackOil`] joins the chosen ones, tuned to what was measured, and lets a [`LabReport`] rule at
//! tank temperature; [`FluidTable`] is rows alone, without anything between the tank and the surface.

pub mod abdul_majeed;
pub mod al_marhoun;
pub mod baker_swerdloff;
pub mod beal_standing;
pub mod beggs_robinson;
pub mod chew_connally;
pub mod dranchuk_abou_kassem;
pub mod glaso;
pub mod hall_yarborough;
pub mod lee_gonzalez_eakin;
pub mod mccain;
pub mod osif;
pub mod petrosky_farshad;
pub mod standing;
pub mod standing_gas;
pub mod sutton;
pub mod vasquez_beggs;
pub mod wichert_aziz;

mod at_tank;
mod black_oil;
mod by_temperature;
mod capped;
mod checks;
mod correlations;
mod gas;
mod grid;
mod lab;
mod lab_checks;
mod monotone;
mod range_notes;
mod saturated;
mod sources;
mod spec;
mod state;
mod table;
mod viscosity;

pub use black_oil::BlackOil;
pub use capped::CappedOil;
pub use correlations::{
    Correlations, DeadOilCorrelation, LiveOilCorrelation, OilCorrelation, UndersaturatedCorrelation, ZCorrelation,
};
pub use lab::{LabBasis, LabReport, LabRow};
pub use lab_checks::LabNote;
pub use monotone::MonotoneCurve;
pub use range_notes::RangeNote;
pub use sources::Source;
pub use spec::FluidSpec;
pub use state::{FluidRow, InSitu};
pub use table::{FluidTable, FluidTableRow, TableWater};

/// What the tank needs to know of the fluid, at the tank's temperature.
///
/// All pressures are psia. `rs_scf_stb` is the gas dissolved in the oil and never above
/// [`rs_saturated`](Self::rs_saturated) of the same pressure.
pub trait ReservoirFluid: Send + Sync {
    /// Solution gas-oil ratio of saturated oil, scf/STB; without an upper cap (it goes on rising above
    /// the initial bubble point, so that injected gas can dissolve).
    fn rs_saturated(&self, pressure_psia: f64) -> f64;
    /// Bubble point of oil that holds `rs_scf_stb`, psia: the inverse of [`rs_saturated`](Self::rs_saturated).
    fn bubble_point_psia(&self, rs_scf_stb: f64) -> f64;
    /// Oil formation volume factor, rb/STB: saturated when `rs` equals the saturated value, else undersaturated.
    fn bo(&self, pressure_psia: f64, rs_scf_stb: f64) -> f64;
    /// Oil viscosity, cp.
    fn mu_o(&self, pressure_psia: f64, rs_scf_stb: f64) -> f64;
    /// Gas formation volume factor, rb/scf.
    fn bg(&self, pressure_psia: f64) -> f64;
    /// Gas viscosity, cp.
    fn mu_g(&self, pressure_psia: f64) -> f64;
    /// Water formation volume factor, rb/STB.
    fn bw(&self, pressure_psia: f64) -> f64;
    /// Water viscosity, cp.
    fn mu_w(&self, pressure_psia: f64) -> f64;
    /// The pressures between which the model is used, psia.
    fn pressure_range_psia(&self) -> (f64, f64);
    /// Highest pressure up to which the volume of saturated oil and its gas falls with pressure, psia. Beyond it the balance
    /// of a tank with free gas may have several roots.
    fn closure_limit_psia(&self) -> f64 {
        f64::INFINITY
    }
}

/// Specific gravity (water = 1) of oil of a gravity in degrees API: 141.5/(131.5 + API).
pub fn oil_specific_gravity(oil_gravity_api: f64) -> f64 {
    141.5 / (131.5 + oil_gravity_api)
}
