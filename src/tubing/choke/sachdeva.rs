//! Two-phase flow through a choke, critical and subcritical: Sachdeva, Schmidt, Brill and Blais (1986), SPE 15657.
//!
//! # Equations
//! With x the mass fraction of gas upstream, `k = cp/cv`, `VG1` and `VG2 = VG1 y^(-1/k)` the specific volumes of the gas upstream and in
//! the throat, `y = p2/p1`, `r = (1-x) VL/(x VG)`:
//!
//! ```text
//! n  = 1 + x (cp - cv)/(x cv + (1-x) cL)
//! yc = {[k/(k-1) + r1 (1-yc)]/[k/(k-1) + n/2 + n r2 + n r2^2/2]}^(k/(k-1))
//! G  = Cd {2 gc 144 p1 rho2^2 [(1-x)(1-y)/rhoL + x k/(k-1) (VG1 - y VG2)]}^0.5,   1/rho2 = x VG2 + (1-x)/rhoL,   y >= yc
//! ```
//!
//! Units: psia, lb/ft3, ft3/lb, Btu/lb/degF, G in lb/ft2/s. The gas neither condenses nor comes out of the oil in the throat, and both
//! phases move at one velocity. As n < k the published yc lies somewhat above the ratio of the largest flux; it is kept as published.
//! Without gas the flux is that of a liquid through an orifice. Tested by its authors with air-water and air-kerosene in chokes of 1/4 to
//! 1/2 in.

use crate::roots::brent;

/// Acceleration in lb ft/(lbf s2), times in2 in a ft2, times two.
const TWO_GC_144: f64 = 2.0 * 32.174_05 * 144.0;

/// The mixture upstream of a choke.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Upstream {
    /// Mass fraction of free gas.
    pub gas_fraction: f64,
    /// Liquid density, lb/ft3.
    pub liquid_density_lb_ft3: f64,
    /// Specific volume of the gas, ft3/lb.
    pub gas_volume_ft3_lb: f64,
    /// Ratio of the gas's heat capacities.
    pub k: f64,
    /// Polytropic exponent of the mixture.
    pub n: f64,
}

/// The exponent n of the mixture from heat capacities in any one unit.
pub fn polytropic_exponent(gas_fraction: f64, cp: f64, cv: f64, liquid_c: f64) -> f64 {
    1.0 + gas_fraction * (cp - cv) / (gas_fraction * cv + (1.0 - gas_fraction) * liquid_c)
}

impl Upstream {
    /// Liquid volume over gas volume upstream.
    fn r1(&self) -> f64 {
        (1.0 - self.gas_fraction) / (self.liquid_density_lb_ft3 * self.gas_fraction * self.gas_volume_ft3_lb)
    }

    /// Positive where a pressure ratio lies above the critical one.
    fn above_critical(&self, y: f64) -> f64 {
        let (k, n, r1) = (self.k, self.n, self.r1());
        let kk = k / (k - 1.0);
        let r2 = r1 * y.powf(1.0 / k);
        y.powf(1.0 / kk) * (kk + 0.5 * n + n * r2 * (1.0 + 0.5 * r2)) - (kk + r1 * (1.0 - y))
    }

    /// Whether a pressure ratio, downstream over upstream, is that of critical flow.
    pub fn is_critical(&self, y: f64) -> bool {
        self.gas_fraction > 0.0 && self.above_critical(y) <= 0.0
    }

    /// The critical pressure ratio; 0 without gas.
    pub fn critical_ratio(&self) -> f64 {
        if self.gas_fraction <= 0.0 {
            return 0.0;
        }
        let (low, high) = (1e-12, 1.0);
        let f = |y: f64| self.above_critical(y);
        if f(low) >= 0.0 {
            return 0.0;
        }
        brent(f, (low, f(low)), (high, f(high)), 1e-14)
    }

    /// Mass flux at a pressure ratio, not held at the critical one, lb/ft2/s for Cd = 1.
    pub fn flux_lb_ft2_s(&self, upstream_psia: f64, y: f64) -> f64 {
        let (x, k) = (self.gas_fraction, self.k);
        let expanded = y.powf(-1.0 / k);
        let throat_ft3_lb = x * self.gas_volume_ft3_lb * expanded + (1.0 - x) / self.liquid_density_lb_ft3;
        let work = (1.0 - x) * (1.0 - y) / self.liquid_density_lb_ft3
            + x * k / (k - 1.0) * self.gas_volume_ft3_lb * (1.0 - y * expanded);
        (TWO_GC_144 * upstream_psia * work.max(0.0)).sqrt() / throat_ft3_lb
    }

    /// Mass flux towards a downstream pressure, lb/ft2/s for Cd = 1, and whether it is critical.
    pub fn flux_towards_lb_ft2_s(&self, upstream_psia: f64, downstream_psia: f64) -> (f64, bool) {
        let y = (downstream_psia / upstream_psia).min(1.0);
        let critical = self.is_critical(y);
        (self.flux_lb_ft2_s(upstream_psia, if critical { self.critical_ratio() } else { y }), critical)
    }
}
