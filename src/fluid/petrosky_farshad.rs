//! Petrosky and Farshad (1993): bubble point, solution gas-oil ratio, volume factor and compressibility of Gulf of Mexico oils.
//!
//! ```text
//! pb = 112.727 Rs^0.577421/(g^0.8439 10^x) - 1391.051,   x = 7.916e-4 API^1.541 - 4.561e-5 T^1.3911
//! Rs = [ (p/112.727 + 12.340) g^0.8439 10^x ]^1.73184
//! Bo = 1.0113 + 7.2046e-5 [ Rs^0.3738 g^0.2914/go^0.6265 + 0.24626 T^0.5371 ]^3.0936
//! co = 1.705e-7 Rs^0.69357 g^0.1885 API^0.3272 T^0.6729 p^-0.5906
//! ```
//!
//! p psia, T degF, Rs scf/STB, co 1/psi, g gas gravity (air = 1), go oil gravity (water = 1).
//!
//! # Source
//! G. E. Petrosky and F. F. Farshad, "Pressure-Volume-Temperature Correlations for Gulf of Mexico Crude Oils", SPE 26644 (1993).
//!
//! # Range
//! 16.3 to 45 API, gas gravity 0.578 to 0.852, 114 to 288 degF, pb 1,574 to 6,523 psia, Rs 217 to 1,406 scf/STB.

use super::oil_specific_gravity;

pub(super) fn x(oil_gravity_api: f64, temperature_degf: f64) -> f64 {
    7.916e-4 * oil_gravity_api.powf(1.541) - 4.561e-5 * temperature_degf.powf(1.3911)
}

/// Bubble point, psia. Negative for little gas.
pub fn bubble_point_psia(rs_scf_stb: f64, temperature_degf: f64, oil_gravity_api: f64, gas_gravity: f64) -> f64 {
    112.727 * rs_scf_stb.powf(0.577_421) / (gas_gravity.powf(0.8439) * 10f64.powf(x(oil_gravity_api, temperature_degf)))
        - 1391.051
}

/// Solution gas-oil ratio of saturated oil, scf/STB.
pub fn rs_scf_stb(pressure_psia: f64, temperature_degf: f64, oil_gravity_api: f64, gas_gravity: f64) -> f64 {
    ((pressure_psia / 112.727 + 12.340) * gas_gravity.powf(0.8439) * 10f64.powf(x(oil_gravity_api, temperature_degf)))
        .powf(1.731_84)
}

/// Volume factor of saturated oil, rb/STB.
pub fn bo_rb_stb(rs_scf_stb: f64, temperature_degf: f64, oil_gravity_api: f64, gas_gravity: f64) -> f64 {
    let oil = oil_specific_gravity(oil_gravity_api);
    let group = rs_scf_stb.powf(0.3738) * gas_gravity.powf(0.2914) / oil.powf(0.6265)
        + 0.246_26 * temperature_degf.powf(0.5371);
    1.0113 + 7.2046e-5 * group.powf(3.0936)
}

/// Compressibility of oil above its bubble point, 1/psi.
pub fn compressibility_1_psi(
    pressure_psia: f64,
    rs_scf_stb: f64,
    temperature_degf: f64,
    oil_gravity_api: f64,
    gas_gravity: f64,
) -> f64 {
    1.705e-7
        * rs_scf_stb.powf(0.693_57)
        * gas_gravity.powf(0.1885)
        * oil_gravity_api.powf(0.3272)
        * temperature_degf.powf(0.6729)
        * pressure_psia.powf(-0.5906)
}
