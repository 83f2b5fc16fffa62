//! What the tank offers at a pressure of the map.

use crate::fluid::{BlackOil, ReservoirFluid};
use crate::tank::{Tank, TankState};

/// Where the gas-oil ratio of a line comes from.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Gas {
    /// The forecast: the ratio at the tank's last passage through the pressure before the well's end of natural flow; below that
    /// the tank depleted on at its own producing ratios; above it the ratio at the start.
    Forecast,
    /// The gas that oil dissolves at the pressure, no more than initially: no free gas flows.
    Dissolved,
    /// This ratio at every pressure, scf/STB.
    Given(f64),
}

/// The tank by pressure.
#[derive(Debug, Clone)]
pub(super) enum ByPressure<'a> {
    /// States of a forecast by rising pressure, at least one; and the pressure at the well's end, below which the tank is depleted on.
    Forecast(&'a [TankState], f64),
    /// Undisturbed saturations of the start.
    Dissolved { fluid: &'a BlackOil, tank: &'a Tank, start: &'a TankState },
}

impl ByPressure<'_> {
    /// The tank at a pressure: dissolved and free gas, bubble point, mobility; beyond the ends of a forecast those of its ends.
    pub fn at(&self, pressure_psia: f64) -> TankState {
        match self {
            Self::Forecast(states, _) => {
                let i = states.partition_point(|s| s.pressure_psia <= pressure_psia);
                let (Some(above), true) = (states.get(i), i > 0) else {
                    let end = if i == 0 { states[0] } else { states[states.len() - 1] };
                    return TankState {
                        pressure_psia,
                        bubble_point_psia: end.bubble_point_psia.min(pressure_psia),
                        ..end
                    };
                };
                let below = &states[i - 1];
                let share = (pressure_psia - below.pressure_psia) / (above.pressure_psia - below.pressure_psia);
                let mix = |pick: fn(&TankState) -> f64| pick(below) + share * (pick(above) - pick(below));
                TankState {
                    pressure_psia,
                    rs_scf_stb: mix(|s| s.rs_scf_stb),
                    bubble_point_psia: mix(|s| s.bubble_point_psia).min(pressure_psia),
                    free_gor_scf_stb: mix(|s| s.free_gor_scf_stb),
                    oil_mobility_1_cp: mix(|s| s.oil_mobility_1_cp),
                    ..*below
                }
            }
            Self::Dissolved { fluid, tank, start } => {
                let undisturbed = |p: f64| tank.undisturbed_mobility_1_cp(p);
                TankState {
                    pressure_psia,
                    rs_scf_stb: fluid.rs_saturated(pressure_psia).min(fluid.spec().solution_gor_scf_stb),
                    bubble_point_psia: fluid.initial_bubble_point_psia().min(pressure_psia),
                    free_gor_scf_stb: 0.0,
                    oil_mobility_1_cp: start.oil_mobility_1_cp * undisturbed(pressure_psia)
                        / undisturbed(start.pressure_psia),
                    ..**start
                }
            }
        }
    }

    /// Pressures at which the offer has a corner that a coarse look must not step over: its bubble point, its lowest
    /// gas-oil ratio, the end of the forecast; psia.
    pub fn corners(&self) -> Vec<f64> {
        match self {
            Self::Forecast(states, end_psia) => {
                let gor = |s: &TankState| s.rs_scf_stb + s.free_gor_scf_stb;
                let least = states.iter().min_by(|a, b| gor(a).total_cmp(&gor(b))).map(|s| s.pressure_psia);
                let bubble = states.last().map(|s| s.bubble_point_psia);
                least.into_iter().chain(bubble).chain([*end_psia]).collect()
            }
            Self::Dissolved { fluid, .. } => vec![fluid.initial_bubble_point_psia()],
        }
    }
}
