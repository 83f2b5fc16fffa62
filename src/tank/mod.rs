//! The reservoir compartment: inventories in, pressure, saturations, producing GOR and water cut out.
//!
//! The volumes in place follow from the cumulative surface volumes, and the pressure is the root of
//!
//! ```text
//! N*Bo(p,Rs) + (G - N*Rs)*Bg(p) + W*Bw(p) = Vp(p)
//! Rs = min(Rs_sat(p), G/N),   Vp(p) = Vp_i*exp(cf*(p - p_i)) or from a table
//! Vp_i = (1 + m)*N_i*Bo_i/(1 - Swc),  G_i = N_i*Rs_i + m*N_i*Bo_i/Bg_i,  W_i = Swc*Vp_i/Bw_i
//! ```
//!
//! so that mass is conserved by construction, above, at and below the bubble point, and after injection has pushed
//! the tank above a new bubble point. The gas of a primary cap stays in the cap, with what is injected there: it does not dissolve in
//! the oil. Water from an aquifer is part of W.
//!
//! # Source
//! Material balance: Schilthuis (1936); gas-cap expansion into the oil zone with residual oil left behind as the
//! handbooks do (Craft and Hawkins 1959).

pub mod aquifer;
mod balance;
mod flood;
mod pore;
mod spec;
mod state;
mod trend;

pub use aquifer::{Aquifer, AquiferSpec};
pub use balance::{Balance, Cumulatives};
pub use flood::Flood;
pub use spec::{ProducedSpec, TankSpec, WaterModel, WaterSpec};
pub use state::TankState;
pub use trend::{Trend, TrendOver, WaterTrend, ratio_of_cut};

use crate::fault::Fault;
use crate::fluid::ReservoirFluid;
use crate::rock::RelativePermeability;
use crate::roots::brent;
use pore::PoreVolume;
use std::sync::Arc;

/// Surface volumes in the tank.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Inventory {
    /// Oil, STB.
    pub oil_stb: f64,
    /// Gas of the oil zone, dissolved and free, scf; without the gas of a primary cap.
    pub gas_scf: f64,
    /// Water, STB; without what a pot aquifer gives, which follows from the pressure.
    pub water_stb: f64,
    /// Gas of the cap, scf.
    pub cap_gas_scf: f64,
}

/// Why the balance gave no pressure.
#[derive(Debug, Clone, Copy, PartialEq, thiserror::Error)]
pub enum ClosureError {
    /// More has been taken than the tank can give at any pressure above atmospheric.
    #[error("the material balance has no solution above {lowest_psia:.1} psia")]
    NoRoot {
        /// Lowest pressure tried, psia.
        lowest_psia: f64,
    },
    /// More has been injected than fits below the highest pressure that the fluid model covers.
    #[error(
        "the material balance asks for more than {highest_psia:.0} psia, where the fluid model ends: too much is injected"
    )]
    AboveRange {
        /// Highest pressure tried, psia.
        highest_psia: f64,
    },
    /// Free gas at a pressure where this fluid model's balance may have several roots.
    #[error(
        "the tank holds free gas at {pressure_psia:.0} psia; above {limit_psia:.0} psia the balance of this fluid model has several roots"
    )]
    SeveralRoots {
        /// Pressure found, psia.
        pressure_psia: f64,
        /// Where the model's closure ceases to fall with pressure, psia.
        limit_psia: f64,
    },
    /// The inventories are not numbers.
    #[error("the volumes in the tank are not numbers")]
    NotANumber,
}

/// The tank, prepared.
#[derive(Clone)]
pub struct Tank {
    fluid: Arc<dyn ReservoirFluid>,
    rel_perm: RelativePermeability,
    water_model: WaterModel,
    water: WaterSpec,
    initial_pressure_psia: f64,
    pore: PoreVolume,
    aquifer: Option<Aquifer>,
    initial_bw_rb_stb: f64,
    connate_water: f64,
    gas_cap_ratio: f64,
    pore_volume_rb: f64,
    cap_volume_rb: f64,
    initial: Inventory,
    start: Inventory,
    initial_rs_scf_stb: f64,
    closure_limit_psia: f64,
    before: Cumulatives,
}

impl std::fmt::Debug for Tank {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_struct("Tank").field("initial", &self.initial).field("start", &self.start).finish_non_exhaustive()
    }
}

impl Tank {
    /// Prepares the tank with the fluid whose initial solution gas-oil ratio is `initial_rs_scf_stb`.
    ///
    /// # Errors
    /// Faults with keys of the `[tank]` table: produced volumes beyond what is in place, an initial pressure outside the fluid's range.
    pub fn new(
        spec: &TankSpec,
        fluid: Arc<dyn ReservoirFluid>,
        rel_perm: RelativePermeability,
        initial_rs_scf_stb: f64,
    ) -> Result<Self, Vec<Fault>> {
        let p_i = spec.pressure_psia;
        let (lowest, highest) = fluid.pressure_range_psia();
        if !(lowest..=highest).contains(&p_i) {
            return Err(vec![
                Fault::new("pressure", format!("{p_i:.1} psia is outside the range of the fluid model"))
                    .help(format!("the fluid model covers {lowest:.1} to {highest:.0} psia")),
            ]);
        }
        let rs_i = initial_rs_scf_stb.min(fluid.rs_saturated(p_i));
        let (n_i, m) = (spec.oil_in_place_stb, spec.gas_cap_ratio);
        let oil_zone_rb = n_i * fluid.bo(p_i, rs_i);
        let pore_volume_rb = (1.0 + m) * oil_zone_rb / (1.0 - spec.connate_water);
        let initial = Inventory {
            oil_stb: n_i,
            gas_scf: n_i * rs_i,
            water_stb: spec.connate_water * pore_volume_rb / fluid.bw(p_i),
            cap_gas_scf: m * oil_zone_rb / fluid.bg(p_i),
        };
        let initial_bw_rb_stb = fluid.bw(p_i);
        let mut tank = Self {
            cap_volume_rb: m * oil_zone_rb,
            closure_limit_psia: fluid.closure_limit_psia(),
            fluid,
            rel_perm,
            water_model: spec.water_model,
            water: spec.water.clone(),
            initial_pressure_psia: p_i,
            pore: PoreVolume::new(spec.pore_compressibility_1_psi, &spec.compaction, p_i)?,
            aquifer: spec.aquifer.map(|aquifer| Aquifer::new(aquifer, p_i)),
            initial_bw_rb_stb,
            connate_water: spec.connate_water,
            gas_cap_ratio: m,
            pore_volume_rb,
            initial,
            start: initial,
            initial_rs_scf_stb: rs_i,
            before: Cumulatives::default(),
        };
        if let Some(produced) = &spec.produced {
            tank.before = Cumulatives {
                oil_stb: produced.oil_stb,
                gas_scf: produced.gas_scf,
                water_stb: produced.water_stb,
                injected_water_stb: produced.injected_water_stb,
                injected_gas_scf: produced.injected_gas_scf,
                injected_cap_gas_scf: 0.0,
                aquifer_stb: produced.aquifer_stb,
            };
            tank.start = tank.inventory_after(&tank.before);
            if tank.start.oil_stb <= 0.0 {
                return Err(vec![Fault::new("produced.oil", "more oil was produced than is in place")]);
            }
            if tank.start.gas_scf <= 0.0 {
                return Err(vec![
                    Fault::new("produced.gas", "more gas was produced than is in place and was injected")
                        .help("gas produced before the start, in the same units as the oil's solution gas"),
                ]);
            }
            if tank.start.water_stb < 0.0 {
                return Err(vec![Fault::new(
                    "produced.water",
                    "more water was produced than is in place and was injected",
                )]);
            }
        }
        Ok(tank)
    }

    /// Takes other relative permeabilities and another water model; volumes stay as they are.
    pub fn set_flow(&mut self, rel_perm: RelativePermeability, water_model: WaterModel, water: &WaterSpec) {
        self.rel_perm = rel_perm;
        self.water_model = water_model;
        self.water = water.clone();
    }

    /// How water reaches the wells.
    pub fn water_model(&self) -> WaterModel {
        self.water_model
    }

    /// Part of the withdrawal before the forecast that inflowing water replaced, at the pressure of a state.
    pub fn replaced_before(&self, state: &TankState) -> f64 {
        let b = &self.before;
        let withdrawn = state.voidage_rb(b.oil_stb, b.gas_scf, b.water_stb);
        let inflow_stb = b.injected_water_stb + self.aquifer_influx_stb(0.0, state.pressure_psia);
        if withdrawn > 0.0 { (inflow_stb * state.bw_rb_stb / withdrawn).clamp(0.0, 1.0) } else { 0.0 }
    }

    /// Volumes in the tank at the start of the forecast.
    pub fn start(&self) -> Inventory {
        self.start
    }

    /// Volumes in the tank before any production; gas without the cap's.
    pub fn initial(&self) -> Inventory {
        self.initial
    }

    /// Gas of the primary cap, scf.
    pub fn cap_gas_scf(&self) -> f64 {
        self.initial.cap_gas_scf
    }

    /// The aquifer.
    pub fn aquifer(&self) -> Option<&Aquifer> {
        self.aquifer.as_ref()
    }

    /// Pressure before any production, psia.
    pub fn initial_pressure_psia(&self) -> f64 {
        self.initial_pressure_psia
    }

    /// The fluid at tank temperature.
    pub fn fluid(&self) -> &dyn ReservoirFluid {
        self.fluid.as_ref()
    }

    /// The relative permeability curves in force.
    pub fn relative_permeability(&self) -> &RelativePermeability {
        &self.rel_perm
    }

    /// What is left of `full` after `taken`.
    fn less(full: &Inventory, taken: &Cumulatives) -> Inventory {
        Inventory {
            oil_stb: full.oil_stb - taken.oil_stb,
            gas_scf: full.gas_scf - taken.gas_scf + taken.injected_gas_scf,
            water_stb: full.water_stb - taken.water_stb + taken.injected_water_stb + taken.aquifer_stb,
            cap_gas_scf: full.cap_gas_scf + taken.injected_cap_gas_scf,
        }
    }

    /// What is left after `taken` (since first production).
    fn inventory_after(&self, taken: &Cumulatives) -> Inventory {
        Self::less(&self.initial, taken)
    }

    /// What is left after `taken` since the start of the forecast; injected volumes are those that support the tank.
    pub fn inventory(&self, taken: &Cumulatives) -> Inventory {
        Self::less(&self.start, taken)
    }

    /// Water that has come from the aquifer since the first production, STB, of which `since_start_stb` since the start of the forecast
    /// where that is part of the state; a pot's follows from the pressure.
    pub fn aquifer_influx_stb(&self, since_start_stb: f64, pressure_psia: f64) -> f64 {
        self.before.aquifer_stb + since_start_stb + self.pot_stb(pressure_psia)
    }

    /// Influx from the aquifer, STB/d, `days` after the start of the forecast; `withdrawal_rb_d` is net of injection. Zero for a pot,
    /// which gives its water with the balance.
    pub fn aquifer_rate_stb_d(
        &self,
        days: f64,
        inventory: &Inventory,
        since_start_stb: f64,
        pressure_psia: f64,
        withdrawal_rb_d: f64,
    ) -> f64 {
        let influx_rb = (self.before.aquifer_stb + since_start_stb) * self.initial_bw_rb_stb;
        let Some(drive) = self.aquifer.as_ref().and_then(|aquifer| aquifer.drive(days, influx_rb)) else { return 0.0 };
        let store = self.store_rb_psi(inventory, pressure_psia);
        drive.influx_rb_d(pressure_psia, store, withdrawal_rb_d) / self.initial_bw_rb_stb
    }

    /// Part of the net withdrawal that a pot aquifer gives; zero for every other one.
    pub fn pot_share(&self, inventory: &Inventory, pressure_psia: f64) -> f64 {
        if !self.aquifer.as_ref().is_some_and(Aquifer::is_pot) {
            return 0.0;
        }
        let gives_rb_psi =
            (self.pot_stb(pressure_psia - 0.5) - self.pot_stb(pressure_psia + 0.5)) * self.fluid.bw(pressure_psia);
        gives_rb_psi / self.store_rb_psi(inventory, pressure_psia)
    }

    /// Average pressure of the aquifer, psia, after this influx since the first production.
    pub fn aquifer_pressure_psia(&self, influx_stb: f64, pressure_psia: f64) -> Option<f64> {
        self.aquifer.as_ref()?.pressure_psia(influx_stb * self.initial_bw_rb_stb, pressure_psia)
    }

    fn pot_stb(&self, pressure_psia: f64) -> f64 {
        self.aquifer.as_ref().map_or(0.0, |aquifer| aquifer.pot_rb(pressure_psia) / self.initial_bw_rb_stb)
    }

    /// What the tank gives per psi without influx (a pot's water counts to the tank), rb/psi.
    fn store_rb_psi(&self, inventory: &Inventory, pressure_psia: f64) -> f64 {
        const HALF_PSI: f64 = 0.5;
        let fall =
            self.excess_rb(inventory, pressure_psia - HALF_PSI) - self.excess_rb(inventory, pressure_psia + HALF_PSI);
        (fall / (2.0 * HALF_PSI)).max(1e-9 * self.pore_volume_rb)
    }

    /// Pore volume at a pressure, rb.
    fn pore_volume_rb(&self, pressure_psia: f64) -> f64 {
        self.pore_volume_rb * self.pore.ln(pressure_psia).exp()
    }

    /// Dissolved gas at a pressure, scf/STB.
    fn rs(&self, inventory: &Inventory, pressure_psia: f64) -> f64 {
        self.fluid.rs_saturated(pressure_psia).min(inventory.gas_scf / inventory.oil_stb)
    }

    /// Fluid volume less pore volume, rb: falls with pressure, zero at the tank's.
    fn excess_rb(&self, inventory: &Inventory, pressure_psia: f64) -> f64 {
        let rs = self.rs(inventory, pressure_psia);
        let free = inventory.gas_scf - inventory.oil_stb * rs + inventory.cap_gas_scf;
        inventory.oil_stb * self.fluid.bo(pressure_psia, rs)
            + free * self.fluid.bg(pressure_psia)
            + (inventory.water_stb + self.pot_stb(pressure_psia)) * self.fluid.bw(pressure_psia)
            - self.pore_volume_rb(pressure_psia)
    }

    /// The pressure at which the inventories fill the pore volume, psia.
    ///
    /// # Method
    /// Secant steps from `guess_psia` inside a growing bracket, then Brent (1973). Resolved to 1e-10 psi.
    ///
    /// # Errors
    /// [`ClosureError`] when there is no such pressure between atmospheric and the end of the fluid model.
    pub fn pressure_psia(&self, inventory: &Inventory, guess_psia: f64) -> Result<f64, ClosureError> {
        if !(inventory.oil_stb > 0.0 && inventory.gas_scf.is_finite() && inventory.water_stb.is_finite()) {
            return Err(if inventory.oil_stb <= 0.0 {
                ClosureError::NoRoot { lowest_psia: self.fluid.pressure_range_psia().0 }
            } else {
                ClosureError::NotANumber
            });
        }
        let (lowest, highest) = self.fluid.pressure_range_psia();
        let guess = if guess_psia.is_finite() { guess_psia.clamp(lowest, highest) } else { self.initial_pressure_psia };
        let f = |p: f64| self.excess_rb(inventory, p);
        let mut here = (guess, f(guess));
        let mut step = 0.25;
        // The closure falls with pressure: a positive excess means that the root lies above.
        loop {
            if here.1 == 0.0 {
                return Ok(here.0);
            }
            let up = here.1 > 0.0;
            let next = if up { (here.0 + step).min(highest) } else { (here.0 - step).max(lowest) };
            if next == here.0 {
                return Err(if up {
                    ClosureError::AboveRange { highest_psia: highest }
                } else {
                    ClosureError::NoRoot { lowest_psia: lowest }
                });
            }
            let there = (next, f(next));
            if (there.1 > 0.0) != up {
                return Ok(brent(f, here, there, 1e-10));
            }
            // A secant estimate of the distance, overshot a little to close the bracket at once.
            let slope = (there.1 - here.1) / (there.0 - here.0);
            let distance = (there.1 / slope).abs();
            step = if distance.is_finite() {
                (1.05 * distance + 1e-6).clamp(1e-4, 20.0 * step + 50.0)
            } else {
                4.0 * step
            };
            here = there;
        }
    }
}
