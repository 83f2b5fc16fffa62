//! One inflow curve: rate against flowing pressure at fixed reservoir conditions.

use super::Shape;

/// Open flow below which a well does not flow at all, STB/d.
const LEAST_OPEN_FLOW_STB_D: f64 = 1e-3;

/// One inflow curve.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct InflowCurve {
    shape: Shape,
    j_stb_d_psi: f64,
    reservoir_psia: f64,
    effective_psia: f64,
    open_flow_stb_d: f64,
}

impl InflowCurve {
    /// A curve with coefficient J above `effective_psia` = min(pr, pb).
    ///
    /// Perforations so far above the datum that no pressure is left there, and rock in which no oil moves, give a curve without flow.
    pub fn new(shape: Shape, j_stb_d_psi: f64, reservoir_psia: f64, effective_psia: f64) -> Self {
        if !(j_stb_d_psi > 0.0 && reservoir_psia > 0.0) {
            let reservoir_psia = reservoir_psia.max(0.0);
            return Self {
                shape,
                j_stb_d_psi: 0.0,
                reservoir_psia,
                effective_psia: reservoir_psia,
                open_flow_stb_d: 0.0,
            };
        }
        let open_flow_stb_d = j_stb_d_psi * shape.drawdown(reservoir_psia, effective_psia, 0.0);
        // Rock whose oil has all but ceased to move: a thousandth of a barrel a day is no flow, and its curve no help to any search.
        let open_flow_stb_d = if open_flow_stb_d < LEAST_OPEN_FLOW_STB_D { 0.0 } else { open_flow_stb_d };
        Self { shape, j_stb_d_psi, reservoir_psia, effective_psia, open_flow_stb_d }
    }

    /// Rate at zero flowing pressure, STB/d.
    pub fn open_flow_stb_d(&self) -> f64 {
        self.open_flow_stb_d
    }

    /// Reservoir pressure at the perforations, psia.
    pub fn reservoir_psia(&self) -> f64 {
        self.reservoir_psia
    }

    /// Rate at a flowing pressure, STB/d; zero at and above reservoir pressure.
    pub fn rate_stb_d(&self, flowing_psia: f64) -> f64 {
        if flowing_psia >= self.reservoir_psia || self.open_flow_stb_d <= 0.0 {
            return 0.0;
        }
        self.j_stb_d_psi * self.shape.drawdown(self.reservoir_psia, self.effective_psia, flowing_psia.max(0.0))
    }

    /// Flowing pressure at a rate, psia: the inverse of [`rate_stb_d`](Self::rate_stb_d), in closed form. Zero beyond open flow.
    pub fn flowing_psia(&self, rate_stb_d: f64) -> f64 {
        if self.open_flow_stb_d <= 0.0 {
            return if rate_stb_d > 0.0 { 0.0 } else { self.reservoir_psia };
        }
        self.shape.flowing_psia(self.reservoir_psia, self.effective_psia, rate_stb_d / self.j_stb_d_psi)
    }
}
