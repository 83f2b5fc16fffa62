//! Flowing temperature from the heat that the stream loses to the ground.
//!
//! ```text
//! dT/dy = (Te - T)/A        y along the pipe from where the stream comes, Te of the undisturbed ground
//! T  = Te(y) + A g (1 - e^(-y/A)) + (T0 - Te0) e^(-y/A),   Te = Te0 - g y
//! A  = w cp [TD/k + 1/(r U)]/(2 pi)
//! TD = 1.1281 tD^1/2 (1 - 0.3 tD^1/2) for tD <= 1.5,  (0.4063 + 0.5 ln tD)(1 + 0.6/tD) above;  tD = a t/rw^2
//! ```
//!
//! w mass rate, cp heat capacity of the stream, k and a conductivity and diffusivity of the ground, rw radius of the well in
//! it, r inside radius of the pipe, U coefficient of the completion for the inside circumference, t producing time. Where A does not change
//! T is a closed form; the stretches of a path are joined from the perforations up.
//!
//! # Limitation
//! Heat alone: neither the cooling by expansion (Joule and Thomson) nor kinetic energy, so that streams of much gas come
//! up colder than computed. One producing time for all dates; a rate that changed is taken as if it had always been
//! so. TD is within 1.6 % of the exact cylindrical source (1991 pair, E01). Oil and its gas hold 0.5 Btu/lb/degF, water 1 (handbook
//! values, within some 10 %). At no rate the temperature is the ground's.
//!
//! # Source
//! Ramey, J. Pet. Tech. (April 1962) 427; TD of Hasan and Kabir, SPE Production Engineering (Aug. 1991) 292. From memory of the papers.

use super::HeatSpec;
use super::path::{Path, Stretch};
use super::traverse::Stream;
use crate::fluid::BlackOil;
use crate::units::constants::{FRESH_WATER_LB_FT3, FT3_PER_BBL};

/// Heat capacity of oil and its gas, Btu/lb/degF.
pub const HYDROCARBON_BTU_LB_DEGF: f64 = 0.5;
/// Heat capacity of water, Btu/lb/degF.
pub const WATER_BTU_LB_DEGF: f64 = 1.0;
/// Shorter relaxation lengths are not told from none, ft.
const LEAST_LENGTH_FT: f64 = 1e-3;
/// Stretches whose temperatures fit into a traverse without allocation.
const FEW: usize = 64;

/// TD: temperature at the wall of a well that gives off heat at a constant rate, for the dimensionless time
/// a t/rw^2 (Hasan and Kabir 1991).
pub fn time_function(dimensionless_time: f64) -> f64 {
    let root = dimensionless_time.sqrt();
    if dimensionless_time <= 1.5 {
        1.1281 * root * (1.0 - 0.3 * root)
    } else {
        (0.4063 + 0.5 * dimensionless_time.ln()) * (1.0 + 0.6 / dimensionless_time)
    }
}

/// Relaxation length per heat capacity of the stream, for a pipe of this inside radius.
pub fn resistance_ft_h_degf_btu(heat: &HeatSpec, pipe_radius_ft: f64) -> f64 {
    let time = heat.diffusivity_ft2_h * 24.0 * heat.producing_time_d / heat.wellbore_radius_ft.powi(2);
    let ground = time_function(time) / heat.conductivity_btu_h_ft_degf;
    let completion = 1.0 / (pipe_radius_ft * heat.transfer_btu_h_ft2_degf);
    (ground + completion) / (2.0 * std::f64::consts::PI)
}

/// Temperature at a distance along the flow from where the stream has `from_degf` and the ground `ground_degf`, cooling by
/// `slope_degf_ft` per foot of the way; `length_ft` is A.
pub fn temperature_degf(distance_ft: f64, length_ft: f64, ground_degf: f64, slope_degf_ft: f64, from_degf: f64) -> f64 {
    let kept = (-distance_ft / length_ft).exp();
    ground_degf - slope_degf_ft * distance_ft
        + length_ft * slope_degf_ft * (1.0 - kept)
        + (from_degf - ground_degf) * kept
}

/// Heat capacity of oil and water together, Btu/lb/degF.
pub fn liquid_btu_lb_degf(fluid: &BlackOil, water_fraction: f64) -> f64 {
    let oil = (1.0 - water_fraction) * fluid.oil_specific_gravity();
    let water = water_fraction * fluid.standard_water_density_lb_ft3() * (1.0 / FRESH_WATER_LB_FT3);
    (HYDROCARBON_BTU_LB_DEGF * oil + WATER_BTU_LB_DEGF * water) / (oil + water)
}

/// Heat capacity of the stream, Btu/h/degF.
pub fn capacity_btu_h_degf(fluid: &BlackOil, stream: &Stream) -> f64 {
    let water = stream.water_cut.clamp(0.0, 1.0);
    let oil_lb_stb = FRESH_WATER_LB_FT3 * fluid.oil_specific_gravity() * FT3_PER_BBL
        + stream.gor_scf_stb.clamp(0.0, 1e8) * fluid.standard_gas_density_lb_scf();
    let water_lb_stb = fluid.standard_water_density_lb_ft3() * FT3_PER_BBL;
    let capacity = HYDROCARBON_BTU_LB_DEGF * (1.0 - water) * oil_lb_stb + WATER_BTU_LB_DEGF * water * water_lb_stb;
    capacity * stream.liquid_rate_stb_d.clamp(0.0, 1e8) / 24.0
}

/// How a stream warms one path.
pub(super) struct Warmth {
    /// Heat capacity, Btu/h/degF; `None`: the temperature is given.
    capacity: Option<f64>,
    /// Excess over the ground at the lower end of each stretch, degF.
    few: [f64; FEW],
    many: Vec<f64>,
}

impl Warmth {
    pub fn new(path: &Path, fluid: &BlackOil, stream: &Stream) -> Self {
        if !path.loses_heat {
            return Self { capacity: None, few: [0.0; FEW], many: Vec::new() };
        }
        let capacity = capacity_btu_h_degf(fluid, stream);
        let count = path.stretches.len();
        let mut warmth = Self { capacity: Some(capacity), few: [0.0; FEW], many: Vec::new() };
        if count > FEW {
            warmth.many.resize(count, 0.0);
        }
        let excess = if count > FEW { &mut warmth.many[..] } else { &mut warmth.few[..count] };
        let mut below_degf = 0.0;
        for (stretch, here) in path.stretches.iter().zip(excess).rev() {
            *here = below_degf;
            let length_ft = relaxation_ft(stretch, capacity);
            let kept = ((stretch.top_md_ft - stretch.bottom_md_ft) / length_ft).exp();
            below_degf = length_ft * stretch.temperature_slope_degf_ft * (1.0 - kept) + below_degf * kept;
        }
        warmth
    }

    /// A stretch with the temperature of the stream.
    #[inline]
    pub fn of(&self, index: usize, stretch: &Stretch) -> Option<Stretch> {
        let capacity = self.capacity?;
        let excess_degf = self.many.get(index).or(self.few.get(index)).copied().unwrap_or(0.0);
        let length_ft = relaxation_ft(stretch, capacity);
        let steady_degf = length_ft * stretch.temperature_slope_degf_ft;
        Some(Stretch {
            top_temperature_degf: stretch.top_temperature_degf + steady_degf,
            excess_degf: excess_degf - steady_degf,
            per_relaxation_1_ft: 1.0 / length_ft,
            ..*stretch
        })
    }
}

fn relaxation_ft(stretch: &Stretch, capacity_btu_h_degf: f64) -> f64 {
    (capacity_btu_h_degf * stretch.heat_resistance_ft_h_degf_btu).max(LEAST_LENGTH_FT)
}
