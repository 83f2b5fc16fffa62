//! McCain (1990, 1991): volume factor, viscosity and density of reservoir water.
//!
//! ```text
//! Bw  = (1 + dVwp)(1 + dVwT)
//! dVwT = -1.0001e-2 + 1.33391e-4 T + 5.50654e-7 T^2
//! dVwp = -1.95301e-9 p T - 1.72834e-13 p^2 T - 3.58922e-7 p - 2.25341e-10 p^2
//! mu1 = A T^B,  mu = mu1 (0.9994 + 4.0295e-5 p + 3.1062e-9 p^2)
//! A = 109.574 - 8.40564 S + 0.313314 S^2 + 8.72213e-3 S^3
//! B = -1.12166 + 2.63951e-2 S - 6.79461e-4 S^2 - 5.47119e-5 S^3 + 1.55586e-6 S^4
//! d  = 62.368 + 0.438603 S + 1.60074e-3 S^2                    lb/ft3 at standard conditions
//! ```
//!
//! p psia, T degF, S weight per cent of solids, mu cp, Bw rb/STB.
//!
//! # Source
//! W. D. McCain, "The Properties of Petroleum Fluids" (1990), and "Reservoir-Fluid Property Correlations: State of the Art",
//! SPE Reservoir Engineering (May 1991).
//!
//! # Range
//! Bw to 260 degF and 5,000 psia; viscosity 100 to 400 degF, S to 26 per cent, pressure term 86 to 167 degF up to 14,000 psia.
//! Bw is for gas-saturated water, up to 1 % above degassed pure water; salinity has little effect on it. Viscosity of salt-free water comes out 4 to 9 % low.
//!
//! # Departures
//! The same Bw serves at every pressure: no gas comes out of the water. Because gas that dissolves under pressure swells the water,
//! the slope of Bw is smaller than the compressibility of water by itself: 0.4 of Osif's at 1,000 psia, 1.1 at 5,000 psia.

/// The correlation for one brine.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct McCainWater {
    viscosity_factor: f64,
    viscosity_exponent: f64,
    density_lb_ft3: f64,
}

impl McCainWater {
    /// Prepares the constants of one brine: weight fraction of solids in parts per million.
    pub fn new(salinity_ppm: f64) -> Self {
        let s = salinity_ppm * 1e-4;
        Self {
            viscosity_factor: 109.574 + (-8.405_64 + (0.313_314 + 8.722_13e-3 * s) * s) * s,
            viscosity_exponent: -1.121_66
                + (2.639_51e-2 + (-6.794_61e-4 + (-5.471_19e-5 + 1.555_86e-6 * s) * s) * s) * s,
            density_lb_ft3: 62.368 + (0.438_603 + 1.600_74e-3 * s) * s,
        }
    }

    /// Density at standard conditions, lb/ft3.
    pub fn standard_density_lb_ft3(&self) -> f64 {
        self.density_lb_ft3
    }

    /// Volume factor, rb/STB.
    #[inline]
    pub fn bw_rb_stb(pressure_psia: f64, temperature_degf: f64) -> f64 {
        let (p, t) = (pressure_psia, temperature_degf);
        let thermal = -1.0001e-2 + (1.333_91e-4 + 5.506_54e-7 * t) * t;
        let pressure = -(1.953_01e-9 * t + 3.589_22e-7 + (1.728_34e-13 * t + 2.253_41e-10) * p) * p;
        (1.0 + pressure) * (1.0 + thermal)
    }

    /// Viscosity, cp. `ln_temperature` is the logarithm of degF.
    #[inline]
    pub fn viscosity_cp(&self, pressure_psia: f64, ln_temperature: f64) -> f64 {
        self.atmospheric_cp(ln_temperature) * Self::viscosity_ratio(pressure_psia)
    }

    /// mu1, cp. `ln_temperature` is the logarithm of degF.
    pub fn atmospheric_cp(&self, ln_temperature: f64) -> f64 {
        self.viscosity_factor * (self.viscosity_exponent * ln_temperature).exp()
    }

    /// mu/mu1.
    #[inline]
    pub fn viscosity_ratio(pressure_psia: f64) -> f64 {
        0.9994 + (4.0295e-5 + 3.1062e-9 * pressure_psia) * pressure_psia
    }
}
