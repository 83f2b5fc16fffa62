//! The properties at one point, as plain data.

/// Properties at one pressure and temperature in the tubing.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct InSitu {
    /// Gas dissolved in the oil, scf/STB.
    pub rs_scf_stb: f64,
    /// Oil volume factor, rb/STB.
    pub bo_rb_stb: f64,
    /// Oil density, lb/ft3.
    pub oil_density_lb_ft3: f64,
    /// Oil viscosity, cp.
    pub mu_o_cp: f64,
    /// Gas volume factor, ft3/scf.
    pub bg_ft3_scf: f64,
    /// Gas density, lb/ft3.
    pub gas_density_lb_ft3: f64,
    /// Gas viscosity, cp.
    pub mu_g_cp: f64,
    /// Water volume factor, rb/STB.
    pub bw_rb_stb: f64,
    /// Water density, lb/ft3.
    pub water_density_lb_ft3: f64,
    /// Water viscosity, cp.
    pub mu_w_cp: f64,
    /// Tension between oil and gas, dyn/cm.
    pub sigma_oil_gas_dyn_cm: f64,
    /// Tension between water and gas, dyn/cm.
    pub sigma_water_gas_dyn_cm: f64,
    /// Compressibility factor of the gas.
    pub z: f64,
}

/// One row of the fluid's property table at tank temperature.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FluidRow {
    /// Pressure, psia.
    pub pressure_psia: f64,
    /// Gas dissolved in the oil, scf/STB.
    pub rs_scf_stb: f64,
    /// Oil volume factor, rb/STB.
    pub bo_rb_stb: f64,
    /// Oil viscosity, cp.
    pub mu_o_cp: f64,
    /// Compressibility factor of the gas.
    pub z: f64,
    /// Gas volume factor, rb/scf.
    pub bg_rb_scf: f64,
    /// Gas viscosity, cp.
    pub mu_g_cp: f64,
    /// Water volume factor, rb/STB.
    pub bw_rb_stb: f64,
    /// Water viscosity, cp.
    pub mu_w_cp: f64,
}
