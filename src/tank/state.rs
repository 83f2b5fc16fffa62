//! What the tank offers its wells at one instant.

use super::flood::{FloodedRock, HIGHEST_WOR, Swept};
use super::{ClosureError, Cumulatives, Flood, Inventory, Tank, TrendOver, WaterModel};

/// Highest ratio of free gas to oil that is handed to the wells, scf/STB. Beyond it hardly any oil moves and no
/// well of this program's kind flows; the cap keeps the equations finite where kro vanishes.
const HIGHEST_FREE_GOR_SCF_STB: f64 = 1e6;

/// Pressure, saturations and flowing ratios of the tank at one instant.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct TankState {
    /// Average pressure at the datum, psia.
    pub pressure_psia: f64,
    /// Dissolved gas, scf/STB.
    pub rs_scf_stb: f64,
    /// Bubble point of the oil as it is now, psia: the pressure itself while free gas is in contact with it.
    pub bubble_point_psia: f64,
    /// Gas of the oil zone per barrel of oil less what could dissolve, scf/STB: positive with free gas, negative above the bubble point.
    pub excess_gas_scf_stb: f64,
    /// Oil formation volume factor, rb/STB.
    pub bo_rb_stb: f64,
    /// Gas formation volume factor, rb/scf.
    pub bg_rb_scf: f64,
    /// Water formation volume factor, rb/STB.
    pub bw_rb_stb: f64,
    /// Oil saturation of the oil zone.
    pub oil_saturation: f64,
    /// Free-gas saturation of the oil zone.
    pub gas_saturation: f64,
    /// Water saturation of the oil zone.
    pub water_saturation: f64,
    /// Free gas flowing with each barrel of oil, scf/STB.
    pub free_gor_scf_stb: f64,
    /// Water flowing with each barrel of oil, STB/STB.
    pub water_oil_ratio: f64,
    /// kro/(mu_o*Bo), 1/cp: what Standing's future rule carries the inflow with.
    pub oil_mobility_1_cp: f64,
    /// The flood of the model "displacement".
    pub flood: Option<Flood>,
    /// Where the tank stands in the table of the model "trend": STB or pore volumes.
    pub trend_place: f64,
}

impl TankState {
    /// Reservoir volume withdrawn at surface rates or with surface volumes, rb (per day): `qo*Bo + (qg - qo*Rs)*Bg + qw*Bw`.
    pub fn voidage_rb(&self, oil_stb: f64, gas_scf: f64, water_stb: f64) -> f64 {
        oil_stb * self.bo_rb_stb + (gas_scf - oil_stb * self.rs_scf_stb) * self.bg_rb_scf + water_stb * self.bw_rb_stb
    }
}

impl Tank {
    /// The state at given inventories.
    ///
    /// The producing ratios are `R - Rs = (krg/kro)*(mu_o*Bo)/(mu_g*Bg)` and, in the "average" water model,
    /// `WOR = (krw/kro)*(mu_o*Bo)/(mu_w*Bw)` at the oil zone's average saturation (Buckley and Leverett 1942, without gravity and capillarity).
    ///
    /// # Errors
    /// [`ClosureError`] when the balance gives no pressure.
    pub fn state(&self, inventory: &Inventory, guess_psia: f64) -> Result<TankState, ClosureError> {
        let p = self.pressure_psia(inventory, guess_psia)?;
        let fluid = self.fluid.as_ref();
        let rs = self.rs(inventory, p);
        let excess = inventory.gas_scf / inventory.oil_stb - fluid.rs_saturated(p);
        let limit = self.closure_limit_psia;
        if excess > 0.0 && p > limit {
            return Err(ClosureError::SeveralRoots { pressure_psia: p, limit_psia: limit });
        }
        let (bo, bg, bw) = (fluid.bo(p, rs), fluid.bg(p), fluid.bw(p));
        let pore = self.pore_volume_rb(p);
        let residual = self.rel_perm.residual_oil_to_gas();
        // The cap grows into the oil zone and leaves residual oil behind.
        let invaded = if inventory.cap_gas_scf > 0.0 {
            (inventory.cap_gas_scf * bg - self.cap_volume_rb).max(0.0) / (1.0 - self.connate_water - residual)
        } else {
            0.0
        };
        // A cap that has swept all but a sliver of the oil zone leaves nothing to divide by.
        let zone = (pore / (1.0 + self.gas_cap_ratio) - invaded).max(1e-6 * pore);
        let oil = inventory.oil_stb * bo - invaded * residual;
        let (mu_o, mu_g, mu_w) = (fluid.mu_o(p, rs), fluid.mu_g(p), fluid.mu_w(p));
        let free_rb = (inventory.gas_scf - inventory.oil_stb * rs).max(0.0) * bg;
        let (flood, swept) = self.flood(inventory.water_stb + self.pot_stb(p), zone, (mu_o, mu_w), (bo, bw));
        // Gas behind the front is trapped as it was, in place of residual oil.
        let trapped_rb = swept.volume_rb * (free_rb / zone).min(swept.room);
        let swept_oil_rb = swept.volume_rb * swept.room - trapped_rb;
        let zone = zone - swept.volume_rb;
        let so = ((oil - swept_oil_rb) / zone).clamp(0.0, 1.0 - 0.5 * self.connate_water);
        let sg = ((free_rb - trapped_rb) / zone).clamp(0.0, 1.0 - so);
        let sw = 1.0 - so - sg;
        let kro = match self.water_model {
            // The oil zone that the wells draw on holds connate water; what is swept stands apart.
            WaterModel::Connate | WaterModel::Displacement | WaterModel::Trend => self.rel_perm.krog(so),
            WaterModel::Average => self.rel_perm.kro(so, sg, sw),
        };
        let oil_mobility = kro / (mu_o * bo);
        let free_gor = capped_ratio(self.rel_perm.krg(sg) / (mu_g * bg), oil_mobility, HIGHEST_FREE_GOR_SCF_STB);
        let water_oil_ratio = match self.water_model {
            WaterModel::Connate | WaterModel::Trend => 0.0,
            WaterModel::Average => capped_ratio(self.rel_perm.krw(sw) / (mu_w * bw), oil_mobility, HIGHEST_WOR),
            WaterModel::Displacement => flood.map_or(0.0, |f| f.water_oil_ratio_of_tank()),
        };
        Ok(TankState {
            pressure_psia: p,
            rs_scf_stb: rs,
            bubble_point_psia: if excess >= 0.0 { p } else { fluid.bubble_point_psia(rs) },
            excess_gas_scf_stb: excess,
            bo_rb_stb: bo,
            bg_rb_scf: bg,
            bw_rb_stb: bw,
            oil_saturation: so,
            gas_saturation: sg,
            water_saturation: sw,
            free_gor_scf_stb: free_gor,
            water_oil_ratio,
            oil_mobility_1_cp: oil_mobility,
            flood,
            trend_place: 0.0,
        })
    }

    /// The state after `taken` since the start of the forecast, with the water of the model "trend".
    ///
    /// # Errors
    /// [`ClosureError`] when the balance gives no pressure.
    pub fn state_after(&self, taken: &Cumulatives, guess_psia: f64) -> Result<TankState, ClosureError> {
        let inventory = self.inventory(taken);
        let mut state = self.state(&inventory, guess_psia)?;
        if let (WaterModel::Trend, Some(trend)) = (self.water_model, &self.water.trend) {
            state.trend_place = match trend.over {
                TrendOver::Oil => self.initial.oil_stb - inventory.oil_stb,
                TrendOver::PoreVolumes => {
                    let injected_stb = self.before.injected_water_stb + taken.injected_water_stb;
                    let influx_stb = self.aquifer_influx_stb(taken.aquifer_stb, state.pressure_psia);
                    (injected_stb + influx_stb).max(0.0) * state.bw_rb_stb * (1.0 + self.gas_cap_ratio)
                        / self.pore_volume_rb
                }
            };
            state.water_oil_ratio = trend.water_oil_ratio(state.trend_place).min(HIGHEST_WOR);
        }
        Ok(state)
    }

    /// How far the table of the model "trend" is from its first water, over the table's own scale; `None` without such a table.
    pub fn before_trend(&self, state: &TankState) -> Option<f64> {
        let trend = self.water.trend.as_ref().filter(|_| self.water_model == WaterModel::Trend)?;
        Some(trend.curve.before_water(state.trend_place))
    }

    /// The flood, and what it has swept.
    fn flood(
        &self,
        water_stb: f64,
        zone_rb: f64,
        (mu_o_cp, mu_w_cp): (f64, f64),
        (bo, bw): (f64, f64),
    ) -> (Option<Flood>, Swept) {
        let none = (None, Swept::default());
        if !matches!(self.water_model, WaterModel::Displacement | WaterModel::Trend) {
            return none;
        }
        let curve = self.rel_perm.displacement(mu_o_cp, mu_w_cp);
        let (Some(curve), Some(movable)) = (curve, self.rel_perm.movable_to_water()) else { return none };
        let rock = FloodedRock {
            zone_rb,
            contacted_fraction: self.water.contacted_fraction,
            connate_water: self.connate_water,
            movable,
        };
        let mobile_rb = (water_stb - self.initial.water_stb) * bw;
        let flood = Flood::new(curve, &rock, mobile_rb, bo / bw);
        let swept = flood.swept(&rock);
        let shown = (self.water_model == WaterModel::Displacement).then_some(flood);
        (shown, swept)
    }

    /// kro/(mu_o*Bo) of the undisturbed oil zone at a pressure and its saturated or initial dissolved gas, 1/cp.
    pub fn undisturbed_mobility_1_cp(&self, pressure_psia: f64) -> f64 {
        let rs = self.fluid.rs_saturated(pressure_psia).min(self.initial_rs_scf_stb);
        self.rel_perm.krog(1.0 - self.connate_water)
            / (self.fluid.mu_o(pressure_psia, rs) * self.fluid.bo(pressure_psia, rs))
    }
}

/// `a/b` that never exceeds `highest`, also where `b` is zero.
fn capped_ratio(a: f64, b: f64, highest: f64) -> f64 {
    if a <= 0.0 {
        0.0
    } else if a >= highest * b {
        highest
    } else {
        a / b
    }
}
