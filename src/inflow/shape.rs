//! The shapes: drawdown against flowing pressure, and back.

/// Shape of the curve. Where a figure of the shape changes with the well, the one here is that of the curve at hand.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Shape {
    /// Straight at all pressures.
    Straight,
    /// Vogel (1968).
    Vogel,
    /// Wiggins (1994), his curve of oil that flows with water.
    Wiggins,
    /// Vogel's curve of a damaged or stimulated well, Standing (1970).
    FlowEfficiency {
        /// Drawdown that would do without skin over that which is needed.
        efficiency: f64,
    },
    /// Fetkovich (1973) with exponent n.
    Fetkovich {
        /// Exponent, 0.5 to 1.
        n: f64,
    },
    /// Jones, Blount and Glaze (1976): pr - pwf = a*q + b*q^2, with a = 1/J.
    Jones {
        /// `b/a^2`, 1/psi.
        turbulence_1_psi: f64,
    },
    /// Oil by Vogel and water by a straight line at one total rate (Brown 1984).
    Composite {
        /// Water fraction of the liquid.
        water_cut: f64,
    },
}

/// Share of the rate over which the straight end of the composite curve takes its slope (Brown 1984).
const COMPOSITE_END: f64 = 0.001;

impl Shape {
    /// Drawdown that J multiplies, psi: see the module's equations. `effective_psia` is min(pr, pb).
    pub fn drawdown(self, reservoir_psia: f64, effective_psia: f64, flowing_psia: f64) -> f64 {
        let straight = reservoir_psia - flowing_psia;
        match self {
            Self::Straight => return straight,
            Self::Jones { turbulence_1_psi } => {
                return 2.0 * straight / (1.0 + (1.0 + 4.0 * turbulence_1_psi * straight.max(0.0)).sqrt());
            }
            _ if flowing_psia >= effective_psia => return straight,
            _ => {}
        }
        let above = reservoir_psia - effective_psia;
        let x = flowing_psia / effective_psia;
        match self {
            Self::Straight | Self::Jones { .. } => straight,
            Self::Vogel | Self::Wiggins => {
                let linear = self.linear_part();
                above + effective_psia / (2.0 - linear) * (1.0 - x * (linear + (1.0 - linear) * x))
            }
            Self::FlowEfficiency { efficiency } => {
                // Drawdown without skin over the reservoir pressure: beyond one the straight end.
                let ideal = efficiency * (1.0 - x);
                let open = if ideal <= 1.0 { ideal * (1.8 - 0.8 * ideal) } else { 1.0 + 0.2 * (ideal - 1.0) };
                above + effective_psia / (1.8 * efficiency) * open
            }
            Self::Fetkovich { n } => {
                let squares = (effective_psia - flowing_psia) * (effective_psia + flowing_psia);
                above + squares.powf(n) / (2.0 * effective_psia.powf(2.0 * n - 1.0))
            }
            Self::Composite { water_cut } => {
                let end = CompositeEnd::of(above, effective_psia, water_cut);
                if flowing_psia < end.flowing_psia {
                    return end.drawdown_psi + (end.flowing_psia - flowing_psia) / end.slope;
                }
                // With s = 1.6*po/pe + 0.2 of the oil's own pressure po: A*s^2 + B*s - C = 0.
                let oil = 1.0 - water_cut;
                let (a, b) = (water_cut / 5.76, oil / 1.6);
                let c = x + oil / 8.0 - water_cut * (4.0 / 9.0 - 0.04 / 5.76);
                let s = 2.0 * c / (b + (b * b + 4.0 * a * c).sqrt());
                above + effective_psia / 1.8 * (1.0 - (s * s - 0.04) / 3.2)
            }
        }
    }

    /// Flowing pressure at a drawdown that J multiplies, psia: the inverse of [`drawdown`](Self::drawdown), in closed form. Zero
    /// beyond open flow.
    pub fn flowing_psia(self, reservoir_psia: f64, effective_psia: f64, drawdown_psi: f64) -> f64 {
        let straight = reservoir_psia - drawdown_psi;
        match self {
            Self::Straight => return straight.max(0.0),
            Self::Jones { turbulence_1_psi } => {
                return (straight - turbulence_1_psi * drawdown_psi * drawdown_psi).max(0.0);
            }
            _ if straight >= effective_psia => return straight,
            _ => {}
        }
        let pe = effective_psia;
        let above = reservoir_psia - pe;
        let below = drawdown_psi - above;
        match self {
            Self::Straight | Self::Jones { .. } => straight.max(0.0),
            Self::Vogel | Self::Wiggins => {
                // (1 - l)*x^2 + l*x - (1 - v) = 0
                let linear = self.linear_part();
                let left = 1.0 - (2.0 - linear) * below / pe;
                let square = 1.0 - linear;
                if left <= 0.0 {
                    0.0
                } else {
                    pe * ((linear * linear + 4.0 * square * left).sqrt() - linear) / (2.0 * square)
                }
            }
            Self::FlowEfficiency { efficiency } => {
                let open = 1.8 * efficiency * below / pe;
                // 0.8*y^2 - 1.8*y + open = 0, the smaller root; beyond one the straight end.
                let ideal = if open <= 1.0 {
                    2.0 * open / (1.8 + (3.24 - 3.2 * open).sqrt())
                } else {
                    1.0 + (open - 1.0) / 0.2
                };
                (pe * (1.0 - ideal / efficiency)).max(0.0)
            }
            Self::Fetkovich { n } => {
                let squares = (2.0 * pe.powf(2.0 * n - 1.0) * below).powf(1.0 / n);
                (pe * pe - squares).max(0.0).sqrt()
            }
            Self::Composite { water_cut } => {
                let end = CompositeEnd::of(above, pe, water_cut);
                if drawdown_psi > end.drawdown_psi {
                    return (end.flowing_psia - end.slope * (drawdown_psi - end.drawdown_psi)).max(0.0);
                }
                let oil_psia = Self::Vogel.flowing_psia(reservoir_psia, pe, drawdown_psi);
                ((1.0 - water_cut) * oil_psia + water_cut * straight).max(0.0)
            }
        }
    }

    /// Weight of the straight part in 1 - l*x - (1 - l)*x^2.
    fn linear_part(self) -> f64 {
        if self == Self::Wiggins { 0.52 } else { 0.2 }
    }

    /// The same shape for liquid of another water cut.
    pub fn at_water_cut(self, water_cut: f64) -> Self {
        match self {
            Self::Composite { .. } => Self::Composite { water_cut },
            other => other,
        }
    }
}

/// Where the oil's own curve of a composite has come to its open flow.
struct CompositeEnd {
    drawdown_psi: f64,
    flowing_psia: f64,
    /// Fall of pressure with drawdown beyond it.
    slope: f64,
}

impl CompositeEnd {
    fn of(above_psi: f64, effective_psia: f64, water_cut: f64) -> Self {
        let below = effective_psia / 1.8;
        let drawdown_psi = above_psi + below;
        let last = (COMPOSITE_END * drawdown_psi).min(below);
        let oil_psia = effective_psia * ((0.04 + 3.2 * last / below).sqrt() - 0.2) / 1.6;
        Self {
            drawdown_psi,
            flowing_psia: water_cut * (effective_psia - below),
            slope: water_cut + (1.0 - water_cut) * oil_psia / last,
        }
    }
}
