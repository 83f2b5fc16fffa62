//! The part of the tank that water sweeps, kept apart from the oil zone whose saturations feed kro and krg.
//!
//! ```text
//! M   = (W - W_i)*Bw                          mobile water, from the tank's own balance
//! Vc  = contacted*Vp/(1 + m)                  contacted pore volume
//! X   = M/(Vc*(1 - Swc - Sorw))               movable volumes: the mean normalised saturation of the contacted volume
//! Vs  = Vc*min(1, X/X_b)                      swept; X_b of Welge's tangent. Beyond X = 1 it grows with X
//! So  = (N*Bo - Vs*(1 - Sw_swept - Sg))/(Vp/(1+m) - Vs),   Sg the same in swept and unswept rock: gas is trapped behind the front
//! WOR = s*f/(1 - s*f)*Bo/Bw,   s = r + contacted*(1 - r)
//! ```
//!
//! Before breakthrough the water behind the front has its mean saturation of breakthrough, so that the swept volume grows with the water;
//! afterwards the outlet's water fraction f follows from X by Welge's second tangent. While outflow replaces inflow this is Welge's water
//! cut against injected volumes; X from the balance holds it also when less flows in than out, and never lets more water out than came in.
//! r is the part of the withdrawal that inflowing water replaces: that part flows through the contacted volume, the rest is
//! expansion and comes from contacted and other rock by volume.
//!
//! # Source
//! Buckley and Leverett (1942), Welge (1952); the swept zone apart from the oil zone as the handbooks do (Craft and Hawkins 1959). The
//! split by r and the contacted part is this program's own; at r = 1 it is Welge's case.

use crate::rock::{FractionalFlow, Front};

/// Highest part of the oil zone that counts as swept: something is left to divide by.
const MOST_SWEPT: f64 = 0.95;
/// Highest water-oil ratio handed to the wells. Beyond it hardly any oil moves and no well of this program's kind flows.
pub(super) const HIGHEST_WOR: f64 = 1e4;

/// The flood at one instant.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Flood {
    curve: FractionalFlow,
    front: Front,
    /// Movable volumes of water in the contacted volume.
    pub movable_volumes: f64,
    contacted_fraction: f64,
    share: f64,
    bo_over_bw: f64,
}

/// What a flood leaves in the rock.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub(super) struct Swept {
    /// Pore volume, rb.
    pub volume_rb: f64,
    /// Part of it that holds no water: residual oil, and gas.
    pub room: f64,
}

/// The rock as a flood meets it.
pub(super) struct FloodedRock {
    /// Pore volume of the oil zone, rb.
    pub zone_rb: f64,
    /// Part of it that water comes to.
    pub contacted_fraction: f64,
    /// Connate water saturation.
    pub connate_water: f64,
    /// Movable range of saturations, `1 - Swc - Sorw`.
    pub movable: f64,
}

impl Flood {
    pub(super) fn new(curve: FractionalFlow, rock: &FloodedRock, mobile_water_rb: f64, bo_over_bw: f64) -> Self {
        let movable_rb = rock.contacted_fraction * rock.zone_rb * rock.movable;
        Self {
            curve,
            front: curve.front(),
            movable_volumes: (mobile_water_rb / movable_rb).max(0.0),
            contacted_fraction: rock.contacted_fraction,
            share: 1.0,
            bo_over_bw,
        }
    }

    pub(super) fn swept(&self, rock: &FloodedRock) -> Swept {
        let part = (self.movable_volumes / self.front.movable_volumes).min(self.movable_volumes.max(1.0));
        let contacted_rb = rock.contacted_fraction * rock.zone_rb;
        let volume_rb = (part * contacted_rb).min(MOST_SWEPT * rock.zone_rb);
        let mean = self.movable_volumes.max(self.front.movable_volumes).min(1.0);
        Swept { volume_rb, room: 1.0 - rock.connate_water - mean * rock.movable }
    }

    /// Takes the part of the withdrawal that inflowing water replaces.
    pub fn replacing(self, part: f64) -> Self {
        let part = part.clamp(0.0, 1.0);
        Self { share: part + self.contacted_fraction * (1.0 - part), ..self }
    }

    /// Movable volumes still to come before a well sees water, negative afterwards; its contacted volume is `delay` times the tank's.
    pub fn before_breakthrough(&self, delay: f64) -> f64 {
        self.front.movable_volumes - self.movable_volumes / delay
    }

    /// Water-oil ratio of a well whose contacted volume is the tank's, STB/STB.
    pub fn water_oil_ratio_of_tank(&self) -> f64 {
        if self.before_breakthrough(1.0) > 0.0 { 0.0 } else { self.water_oil_ratio(1.0) }
    }

    /// Water-oil ratio of a well that the front has reached, STB/STB.
    pub fn water_oil_ratio(&self, delay: f64) -> f64 {
        let water = self.share * self.curve.fraction_behind(&self.front, self.movable_volumes / delay);
        if water * self.bo_over_bw >= HIGHEST_WOR * (1.0 - water) {
            HIGHEST_WOR
        } else {
            water / (1.0 - water) * self.bo_over_bw
        }
    }
}
