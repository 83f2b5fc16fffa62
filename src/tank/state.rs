//! What the tank offers its wells at one instant.

use super::{ClosureError, Inventory, Tank, WaterModel};

/// Highest ratio of free gas to oil that is handed to the wells, scf/STB. Beyond it hardly any oil moves and no
/// well of this program's kind flows; the cap keeps the equations finite where kro vanishes.
const HIGHEST_FREE_GOR_SCF_STB: f64 = 1e6;
/// Highest water-oil ratio handed to the wells, for the same reason.
const HIGHEST_WOR: f64 = 1e4;

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
        let so = ((inventory.oil_stb * bo - invaded * residual) / zone).clamp(0.0, 1.0 - 0.5 * self.connate_water);
        let free_rb = (inventory.gas_scf - inventory.oil_stb * rs).max(0.0) * bg;
        let sg = (free_rb / zone).clamp(0.0, 1.0 - so);
        let sw = 1.0 - so - sg;
        let (mu_o, mu_g) = (fluid.mu_o(p, rs), fluid.mu_g(p));
        let kro = match self.water_model {
            WaterModel::Connate => self.rel_perm.krog(so),
            WaterModel::Average => self.rel_perm.kro(so, sg, sw),
        };
        let oil_mobility = kro / (mu_o * bo);
        let free_gor = capped_ratio(self.rel_perm.krg(sg) / (mu_g * bg), oil_mobility, HIGHEST_FREE_GOR_SCF_STB);
        let water_oil_ratio = match self.water_model {
            WaterModel::Connate => 0.0,
            WaterModel::Average => {
                capped_ratio(self.rel_perm.krw(sw) / (fluid.mu_w(p) * bw), oil_mobility, HIGHEST_WOR)
            }
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
        })
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
