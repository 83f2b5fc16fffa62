//! Relative permeability and compressibility of the rock.

mod corey;
mod fractional_flow;
mod table;

pub use corey::CoreySpec;
pub use fractional_flow::{FractionalFlow, Front};
pub use table::RelPermTable;

/// Relative permeability curves, two-phase gas-oil and water-oil.
#[derive(Debug, Clone)]
pub enum RelativePermeability {
    /// Corey's power laws.
    Corey(corey::Corey),
    /// A gas-oil table; no water flows.
    Table(RelPermTable),
}

impl RelativePermeability {
    /// Corey curves for rock with `connate_water`.
    pub fn corey(spec: &CoreySpec, connate_water: f64) -> Self {
        Self::Corey(corey::Corey::new(spec, connate_water))
    }

    /// Gas relative permeability at free-gas saturation `sg`.
    pub fn krg(&self, sg: f64) -> f64 {
        match self {
            Self::Corey(c) => c.krg(sg),
            Self::Table(t) => t.krg(sg),
        }
    }

    /// Oil relative permeability in the presence of gas and connate water, at oil saturation `so`.
    pub fn krog(&self, so: f64) -> f64 {
        match self {
            Self::Corey(c) => c.krog(so),
            Self::Table(t) => t.krog(so),
        }
    }

    /// Water relative permeability at water saturation `sw`.
    pub fn krw(&self, sw: f64) -> f64 {
        match self {
            Self::Corey(c) => c.krw(sw),
            Self::Table(_) => 0.0,
        }
    }

    /// Oil relative permeability with gas and mobile water, `so + sg + sw = 1`.
    ///
    /// # Source
    /// Baker (1988): krow and krog weighted by (Sw - Swc) and Sg. krog where there is no mobile water, krow where there is no gas.
    pub fn kro(&self, so: f64, sg: f64, sw: f64) -> f64 {
        match self {
            Self::Corey(c) => c.kro(so, sg, sw),
            Self::Table(t) => t.krog(so),
        }
    }

    /// Water displacing oil at connate water, with these viscosities, cp; `None` without a water curve.
    pub fn displacement(&self, mu_o_cp: f64, mu_w_cp: f64) -> Option<FractionalFlow> {
        match self {
            Self::Corey(c) => Some(c.displacement(mu_o_cp, mu_w_cp)),
            Self::Table(_) => None,
        }
    }

    /// Part of the pore volume in which water takes the place of oil, `1 - Swc - Sorw`; `None` without a water curve.
    pub fn movable_to_water(&self) -> Option<f64> {
        match self {
            Self::Corey(c) => Some(c.movable_to_water()),
            Self::Table(_) => None,
        }
    }

    /// Free-gas saturation up to which gas does not flow.
    pub fn critical_gas(&self) -> f64 {
        match self {
            Self::Corey(c) => c.critical_gas(),
            Self::Table(t) => t.critical_gas(),
        }
    }

    /// Oil saturation left behind by gas.
    pub fn residual_oil_to_gas(&self) -> f64 {
        match self {
            Self::Corey(c) => c.residual_oil_to_gas(),
            Self::Table(t) => t.residual_oil_to_gas(),
        }
    }
}
