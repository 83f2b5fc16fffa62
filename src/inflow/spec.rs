//! The inflow of one well as the user states it.

use jiff::civil::Date;

/// Shape of the inflow curve.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum InflowMethod {
    /// Straight productivity index at all pressures.
    Straight,
    /// Vogel (1968) below the bubble point, straight above it.
    Vogel,
    /// Wiggins (1994) below the bubble point, straight above it.
    Wiggins,
    /// Fetkovich (1973) below the bubble point, straight above it.
    Fetkovich,
    /// Jones, Blount and Glaze (1976) at all pressures.
    Jones,
    /// Oil by Vogel and water by a straight line (Brown 1984).
    Composite,
}

/// How the coefficient is carried to future reservoir pressures.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum FutureRule {
    /// Fetkovich (1973): proportional to reservoir pressure below the bubble point.
    Pressure,
    /// Standing (1971): proportional to kro/(mu_o*Bo).
    Mobility,
    /// Eickmeier (1968): open flow below the bubble point to the cube of reservoir pressure.
    Cubic,
}

impl FutureRule {
    /// All of them.
    pub const ALL: [Self; 3] = [Self::Pressure, Self::Mobility, Self::Cubic];

    /// As the scenario names it.
    pub fn name(self) -> &'static str {
        match self {
            Self::Pressure => "pressure",
            Self::Mobility => "mobility",
            Self::Cubic => "cubic",
        }
    }
}

/// Which rate the coefficient belongs to.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum RateBasis {
    /// Total liquid.
    Liquid,
    /// Oil alone; water comes on top of it.
    Oil,
}

/// How the pressure of a well test was measured.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Measured {
    /// Bottom-hole gauge: flowing pressure at the perforations, psia.
    Gauged {
        /// Flowing pressure at the perforations, psia.
        flowing_psia: f64,
    },
    /// Separator test without a gauge: the flowing pressure is computed with the well's own tubing.
    Separator {
        /// Flowing wellhead pressure, psia.
        wellhead_psia: f64,
        /// Producing gas-oil ratio, scf/STB.
        gor_scf_stb: f64,
    },
    /// Separator test with a gauge at the perforations: the gauge gives the inflow, the pair tells how good the tubing model is.
    Both {
        /// Flowing pressure at the perforations, psia.
        flowing_psia: f64,
        /// Flowing wellhead pressure, psia.
        wellhead_psia: f64,
        /// Producing gas-oil ratio, scf/STB.
        gor_scf_stb: f64,
    },
}

impl Measured {
    /// Gauged pressure at the perforations, psia.
    pub fn flowing_psia(&self) -> Option<f64> {
        match *self {
            Self::Gauged { flowing_psia } | Self::Both { flowing_psia, .. } => Some(flowing_psia),
            Self::Separator { .. } => None,
        }
    }

    /// Wellhead pressure, psia, and gas-oil ratio, scf/STB, of a separator test.
    pub fn separator(&self) -> Option<(f64, f64)> {
        match *self {
            Self::Separator { wellhead_psia, gor_scf_stb } | Self::Both { wellhead_psia, gor_scf_stb, .. } => {
                Some((wellhead_psia, gor_scf_stb))
            }
            Self::Gauged { .. } => None,
        }
    }
}

/// One measured inflow point.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct InflowTest {
    /// Date of the test.
    pub on: Option<Date>,
    /// Reservoir pressure at the time of the test, at the tank's datum, psia.
    pub reservoir_psia: f64,
    /// Liquid rate, STB/d (producing day).
    pub rate_stb_d: f64,
    /// Water fraction of the liquid.
    pub water_cut: f64,
    /// How the flowing pressure is known.
    pub measured: Measured,
}

/// Where the coefficient comes from.
#[derive(Debug, Clone, PartialEq)]
pub enum Coefficient {
    /// Fitted to these tests.
    Tests(Vec<InflowTest>),
    /// Productivity index above the bubble point (at any pressure for `Straight`), STB/d/psi, at `reservoir_psia`.
    ProductivityIndex {
        /// STB/d/psi.
        j_stb_d_psi: f64,
        /// Reservoir pressure to which it belongs, psia.
        reservoir_psia: f64,
    },
    /// Darcy's index in pseudo-steady flow from the rock, with the fluid at `reservoir_psia`.
    Darcy {
        /// Permeability to oil at connate water over kro there: the absolute one, mD.
        permeability_md: f64,
        /// Net thickness open to the well, ft.
        thickness_ft: f64,
        /// Reservoir pressure to which it belongs, psia.
        reservoir_psia: f64,
    },
    /// Absolute open flow at `reservoir_psia`.
    OpenFlow {
        /// STB/d at zero flowing pressure.
        rate_stb_d: f64,
        /// Reservoir pressure to which it belongs, psia.
        reservoir_psia: f64,
    },
    /// Fetkovich's C, STB/d/psi^2n, at `reservoir_psia`.
    Fetkovich {
        /// STB/d/psi^2n.
        c: f64,
        /// Reservoir pressure to which it belongs, psia.
        reservoir_psia: f64,
    },
}

/// The inflow of one well as the user states it.
#[derive(Debug, Clone, PartialEq)]
pub struct InflowSpec {
    /// Shape of the curve.
    pub method: InflowMethod,
    /// Rule for the future.
    pub future: FutureRule,
    /// Which rate the coefficient belongs to.
    pub basis: RateBasis,
    /// Fetkovich's n; `None`: fitted, or 1 where it cannot be.
    pub exponent: Option<f64>,
    /// Flow efficiency of Vogel's curve; `None`: 1, and no change of it with skin.
    pub flow_efficiency: Option<f64>,
    /// b of Jones, Blount and Glaze, psi/(STB/d)^2; `None`: fitted.
    pub turbulence_psi_d2_stb2: Option<f64>,
    /// Given or fitted.
    pub coefficient: Coefficient,
}
