//! The Havlena-Odeh balance, recomputed from reported cumulatives: an independent check, and the drive indices.
//!
//! ```text
//! F  = Np*(Bo - Rs*Bg) + Gp*Bg + Wp*Bw - Wi*Bw - Gi*Bg
//! F  = N*(Eo + m*Eg + (1+m)*Efw) + We
//! Eo = (Bo - Bo_i) + (Rs_i - Rs)*Bg,  Eg = Bo_i*(Bg/Bg_i - 1)
//! Efw = Bo_i*[Swc*(Bw/Bw_i - 1) + 1 - Vp/Vp_i]/(1 - Swc)
//! ```
//!
//! # Source
//! Havlena and Odeh (1963); the pore volume of this program, exponential or from a table, stands in Efw. We is the aquifer's water at the
//! volume factor of the tank's pressure. Drive indices: Pirson (1958),
//! divided by the gross withdrawal `Np*(Bo - Rs*Bg) + Gp*Bg + Wp*Bw`.

use super::{Tank, TankState};

/// Cumulative surface volumes; injected ones are those that support the tank.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Cumulatives {
    /// Oil, STB.
    pub oil_stb: f64,
    /// Gas, scf.
    pub gas_scf: f64,
    /// Water, STB.
    pub water_stb: f64,
    /// Water injected, STB.
    pub injected_water_stb: f64,
    /// Gas injected into the oil zone, scf.
    pub injected_gas_scf: f64,
    /// Gas injected into the gas cap, scf.
    pub injected_cap_gas_scf: f64,
    /// Water from the aquifer, STB; without that of a pot, which follows from the pressure.
    pub aquifer_stb: f64,
}

/// The terms of the balance, each over the gross withdrawal.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Balance {
    /// Gross withdrawal, rb.
    pub withdrawal_rb: f64,
    /// Injected volume at reservoir conditions, rb.
    pub injected_rb: f64,
    /// Oil and dissolved gas.
    pub depletion: f64,
    /// Gas cap.
    pub gas_cap: f64,
    /// Rock and connate water.
    pub rock_and_water: f64,
    /// Water from the aquifer.
    pub aquifer: f64,
    /// Injection.
    pub injection: f64,
}

impl Balance {
    /// One less the sum of the shares: zero when the balance closes.
    pub fn residual(&self) -> f64 {
        1.0 - self.depletion - self.gas_cap - self.rock_and_water - self.aquifer - self.injection
    }
}

impl Tank {
    /// Recomputes the balance from cumulatives since the start of the forecast and the state reported with them.
    /// `None` before any withdrawal.
    pub fn balance(&self, since_start: &Cumulatives, state: &TankState) -> Option<Balance> {
        let b = &self.before;
        let (np, gp) = (b.oil_stb + since_start.oil_stb, b.gas_scf + since_start.gas_scf);
        let (wp, wi) = (b.water_stb + since_start.water_stb, b.injected_water_stb + since_start.injected_water_stb);
        let gi = b.injected_gas_scf + since_start.injected_gas_scf + since_start.injected_cap_gas_scf;
        let (p, p_i) = (state.pressure_psia, self.initial_pressure_psia);
        let (bo, bg, bw, rs) = (state.bo_rb_stb, state.bg_rb_scf, state.bw_rb_stb, state.rs_scf_stb);
        let fluid = self.fluid.as_ref();
        let (bo_i, bg_i, bw_i) = (fluid.bo(p_i, self.initial_rs_scf_stb), fluid.bg(p_i), fluid.bw(p_i));
        let withdrawal = np * (bo - rs * bg) + gp * bg + wp * bw;
        if withdrawal <= 0.0 {
            return None;
        }
        let (n, m) = (self.initial.oil_stb, self.gas_cap_ratio);
        let eo = (bo - bo_i) + (self.initial_rs_scf_stb - rs) * bg;
        let eg = bo_i * (bg / bg_i - 1.0);
        let rock = -self.pore.ln(p).exp_m1();
        let efw = bo_i * (self.connate_water * (bw / bw_i - 1.0) + rock) / (1.0 - self.connate_water);
        let injected = wi * bw + gi * bg;
        let influx = self.aquifer_influx_stb(since_start.aquifer_stb, p) * bw;
        Some(Balance {
            withdrawal_rb: withdrawal,
            injected_rb: injected,
            depletion: n * eo / withdrawal,
            gas_cap: n * m * eg / withdrawal,
            rock_and_water: n * (1.0 + m) * efw / withdrawal,
            aquifer: influx / withdrawal,
            injection: injected / withdrawal,
        })
    }
}
