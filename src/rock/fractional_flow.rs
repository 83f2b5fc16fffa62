//! Fractional flow of water displacing oil in one direction, its front, and Welge's construction behind it.
//!
//! ```text
//! f(S)  = A*S^nw/(A*S^nw + (1 - S)^no),   S = (Sw - Swc)/(1 - Swc - Sorw),   A = (water_end/mu_w)/(oil_end/mu_o)
//! front:            f'(S*) = f(S*)/S*                      the tangent from connate water
//! at breakthrough:  X = 1/f'(S*) = S*/f(S*)
//! afterwards:       X = S2 + (1 - f(S2))/f'(S2)            the tangent at the outlet, met at f = 1
//! ```
//!
//! X is the mean of S over the swept volume, in movable volumes: the water that has come in less the water that has gone out. As long as
//! what flows out replaces what flows in, injected movable volumes `Q = 1/f'(S2)` go with it.
//!
//! # Source
//! Buckley and Leverett (1942), Trans. AIME 146; tangent constructions: Welge (1952), Trans. AIME 195. Incompressible, without gravity and
//! capillarity. Exponents of at least 1: the curve then has one point of inflection, or none.

use crate::roots::brent;

/// The curve of one displacement; saturations are normalised to the movable range.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FractionalFlow {
    mobility_ratio: f64,
    water_exponent: f64,
    oil_exponent: f64,
}

/// What arrives at the outlet first.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Front {
    /// Normalised saturation just behind it.
    pub saturation: f64,
    /// Water fraction just behind it.
    pub fraction: f64,
    /// Mean normalised saturation behind it: the movable volumes injected when it arrives.
    pub movable_volumes: f64,
}

impl FractionalFlow {
    /// The curve for an end-point mobility ratio (water over oil) and Corey exponents.
    pub fn new(mobility_ratio: f64, water_exponent: f64, oil_exponent: f64) -> Self {
        Self { mobility_ratio, water_exponent, oil_exponent }
    }

    /// Water fraction of the flow at a normalised saturation.
    pub fn fraction(&self, s: f64) -> f64 {
        let s = s.clamp(0.0, 1.0);
        let water = self.mobility_ratio * s.powf(self.water_exponent);
        water / (water + (1.0 - s).powf(self.oil_exponent))
    }

    /// Its slope inside (0, 1).
    pub fn slope(&self, s: f64) -> f64 {
        let f = self.fraction(s);
        f * (1.0 - f) * (self.water_exponent / s + self.oil_exponent / (1.0 - s))
    }

    /// The front: where the chord from connate water touches the curve.
    pub fn front(&self) -> Front {
        let (nw, no) = (self.water_exponent, self.oil_exponent);
        // f' = f/S, multiplied out so that neither end divides by zero; it rises through zero once.
        let touch = |s: f64| {
            self.mobility_ratio * s.powf(nw) - (nw - 1.0) * (1.0 - s).powf(no) - no * s * (1.0 - s).powf(no - 1.0)
        };
        let (low, high) = (1e-12, 1.0);
        let (at_low, at_high) = (touch(low), touch(high));
        let saturation = if at_low >= 0.0 {
            low
        } else if at_high <= 0.0 {
            high
        } else {
            brent(touch, (low, at_low), (high, at_high), 1e-15)
        };
        let fraction = self.fraction(saturation);
        Front { saturation, fraction, movable_volumes: (saturation / fraction).min(1.0) }
    }

    /// Mean normalised saturation of the swept volume when the outlet has saturation `s` (at or above the front's).
    pub fn mean_saturation(&self, s: f64) -> f64 {
        if s >= 1.0 {
            return 1.0;
        }
        s + s * (1.0 - s) / (self.fraction(s) * (self.water_exponent * (1.0 - s) + self.oil_exponent * s))
    }

    /// Water fraction at the outlet once the front has arrived, for a mean normalised saturation of the swept volume. When the mean falls
    /// back below that of breakthrough, because more water has left than came in, the fraction goes to zero with it in proportion.
    pub fn fraction_behind(&self, front: &Front, mean: f64) -> f64 {
        if mean <= front.movable_volumes {
            return front.fraction * (mean / front.movable_volumes).max(0.0);
        }
        if mean >= 1.0 {
            return 1.0;
        }
        let short = |s: f64| self.mean_saturation(s) - mean;
        let outlet = brent(short, (front.saturation, front.movable_volumes - mean), (1.0, 1.0 - mean), 1e-14);
        self.fraction(outlet)
    }
}
