//! The gas of one fluid: pseudo-criticals, compressibility factor, volume factor, density, viscosity.

use super::correlations::ZCorrelation;
use super::dranchuk_abou_kassem::{self, MAXIMUM_PPR, MAXIMUM_TPR, MINIMUM_TPR};
use super::hall_yarborough;
use super::lee_gonzalez_eakin::{CoefficientSet, LeeGonzalezEakin};
use super::sutton::PseudoCritical;
use super::{FluidSpec, sutton, wichert_aziz};
use crate::units::constants::{AIR_LB_PER_LBMOL, GAS_CONSTANT};

/// Constants of the gas that depend only on the fluid as stated.
#[derive(Debug, Clone, Copy)]
pub(super) struct Gas {
    z_correlation: ZCorrelation,
    pub pseudo_critical: PseudoCritical,
    inverse_tpc_1_degr: f64,
    inverse_ppc_1_psi: f64,
    viscosity: LeeGonzalezEakin,
    /// psc/Tsc, psia/degR.
    standard_ratio: f64,
    /// M/R, lb/ft3 degR/psia.
    density_factor: f64,
    /// Density at standard conditions, lb/scf.
    pub standard_density_lb_scf: f64,
}

/// The gas at one pressure and temperature.
#[derive(Debug, Clone, Copy)]
pub(super) struct GasState {
    pub z: f64,
    pub bg_ft3_scf: f64,
    pub density_lb_ft3: f64,
}

/// z at one temperature, by the chosen correlation.
#[derive(Debug, Clone, Copy)]
pub(super) enum Isotherm {
    DranchukAbouKassem(dranchuk_abou_kassem::Isotherm),
    /// The pseudo-reduced temperature.
    HallYarborough(f64),
}

impl Isotherm {
    #[inline]
    fn z(&self, ppr: f64) -> f64 {
        match self {
            Self::DranchukAbouKassem(isotherm) => isotherm.z(ppr),
            Self::HallYarborough(tpr) => hall_yarborough::z_factor(ppr.min(hall_yarborough::MAXIMUM_PPR), *tpr),
        }
    }
}

impl Gas {
    pub fn new(spec: &FluidSpec) -> Self {
        let mixed = sutton::mixture(spec.gas_gravity, spec.h2s_fraction, spec.co2_fraction);
        let pseudo_critical = wichert_aziz::corrected(mixed, spec.h2s_fraction, spec.co2_fraction);
        let molar_mass_lb_lbmol = AIR_LB_PER_LBMOL * spec.gas_gravity;
        let standard_ratio = spec.standard_pressure_psia / spec.standard_temperature_degr;
        let density_factor = molar_mass_lb_lbmol / GAS_CONSTANT;
        Self {
            z_correlation: spec.correlations.z,
            pseudo_critical,
            inverse_tpc_1_degr: 1.0 / pseudo_critical.temperature_degr,
            inverse_ppc_1_psi: 1.0 / pseudo_critical.pressure_psia,
            viscosity: LeeGonzalezEakin::new(CoefficientSet::Paper, molar_mass_lb_lbmol),
            standard_ratio,
            density_factor,
            standard_density_lb_scf: density_factor * standard_ratio,
        }
    }

    #[inline]
    pub fn reduced_temperature(&self, temperature_degr: f64) -> f64 {
        temperature_degr * self.inverse_tpc_1_degr
    }

    #[inline]
    pub fn reduced_pressure(&self, pressure_psia: f64) -> f64 {
        pressure_psia * self.inverse_ppc_1_psi
    }

    /// Up to which pressure z is fitted, psia.
    pub fn highest_pressure_psia(&self) -> f64 {
        let ppr = match self.z_correlation {
            ZCorrelation::DranchukAbouKassem => MAXIMUM_PPR,
            ZCorrelation::HallYarborough => hall_yarborough::MAXIMUM_PPR,
        };
        ppr * self.pseudo_critical.pressure_psia
    }

    /// z at one temperature.
    #[inline]
    pub fn isotherm(&self, temperature_degr: f64) -> Isotherm {
        let tpr = self.reduced_temperature(temperature_degr);
        match self.z_correlation {
            ZCorrelation::DranchukAbouKassem => Isotherm::DranchukAbouKassem(dranchuk_abou_kassem::Isotherm::new(tpr)),
            ZCorrelation::HallYarborough => Isotherm::HallYarborough(tpr.clamp(MINIMUM_TPR, MAXIMUM_TPR)),
        }
    }

    /// The gas on a prepared isotherm of its own temperature.
    #[inline]
    pub fn on_isotherm(&self, isotherm: &Isotherm, pressure_psia: f64, temperature_degr: f64) -> GasState {
        self.of_z(isotherm.z(self.reduced_pressure(pressure_psia)), pressure_psia, temperature_degr)
    }

    /// The gas of a known compressibility factor.
    #[inline]
    pub fn of_z(&self, z: f64, pressure_psia: f64, temperature_degr: f64) -> GasState {
        // z T/p, the molar volume over R.
        let volume = z * temperature_degr / pressure_psia;
        GasState { z, bg_ft3_scf: self.standard_ratio * volume, density_lb_ft3: self.density_factor / volume }
    }

    #[inline]
    pub fn at(&self, pressure_psia: f64, temperature_degr: f64) -> GasState {
        let isotherm = self.isotherm(temperature_degr);
        self.on_isotherm(&isotherm, pressure_psia, temperature_degr)
    }

    #[inline]
    pub fn viscosity_cp(&self, temperature_degr: f64, density_lb_ft3: f64) -> f64 {
        self.viscosity.viscosity_cp(temperature_degr, density_lb_ft3)
    }
}
