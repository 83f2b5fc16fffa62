//! Aquifers stated by their size and rock: constants of the influx laws.

use crate::units::constants::FT3_PER_BBL;
use std::f64::consts::TAU;

/// Darcy's constant: rb/d from mD, ft, cp, psi.
const DARCY: f64 = 0.001_127_12;

/// Rock and water of an aquifer.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct AquiferRock {
    /// Porosity, fraction.
    pub porosity: f64,
    /// Permeability, mD.
    pub permeability_md: f64,
    /// Thickness, ft.
    pub thickness_ft: f64,
    /// Viscosity of its water, cp.
    pub viscosity_cp: f64,
    /// Compressibility of its water and its pores together, 1/psi.
    pub compressibility_1_psi: f64,
}

/// A ring, or part of one, around the tank.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct RadialAquifer {
    /// Rock and water.
    pub rock: AquiferRock,
    /// Radius of the tank, ft.
    pub inner_radius_ft: f64,
    /// Angle over which it touches the tank, degrees.
    pub angle_deg: f64,
}

impl RadialAquifer {
    fn part(&self) -> f64 {
        self.angle_deg / 360.0
    }

    /// van Everdingen and Hurst's aquifer constant `2*pi*f*phi*h*ct*ro^2/5.6146`, rb/psi.
    pub fn constant_rb_psi(&self) -> f64 {
        let r = &self.rock;
        TAU * self.part() * r.porosity * r.thickness_ft * r.compressibility_1_psi * self.inner_radius_ft.powi(2)
            / FT3_PER_BBL
    }

    /// Dimensionless time that passes in a day, `0.0063283*k/(phi*mu*ct*ro^2)`.
    pub fn time_per_day(&self) -> f64 {
        let r = &self.rock;
        DARCY * FT3_PER_BBL * r.permeability_md
            / (r.porosity * r.viscosity_cp * r.compressibility_1_psi * self.inner_radius_ft.powi(2))
    }

    /// Volume of water out to `radius_ratio` times the tank's radius, rb.
    pub fn water_rb(&self, radius_ratio: f64) -> f64 {
        let r = &self.rock;
        0.5 * TAU
            * self.part()
            * (radius_ratio.powi(2) - 1.0)
            * self.inner_radius_ft.powi(2)
            * r.thickness_ft
            * r.porosity
            / FT3_PER_BBL
    }

    /// Pseudo-steady productivity of a sealed ring, `0.00708*f*k*h/(mu*(ln reD - 3/4))`, rb/d/psi (Fetkovich 1971).
    pub fn productivity_rb_d_psi(&self, radius_ratio: f64) -> f64 {
        let r = &self.rock;
        TAU * DARCY * self.part() * r.permeability_md * r.thickness_ft / (r.viscosity_cp * (radius_ratio.ln() - 0.75))
    }
}

/// A slab on one side of the tank.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LinearAquifer {
    /// Rock and water.
    pub rock: AquiferRock,
    /// Width of the contact, ft.
    pub width_ft: f64,
    /// Length away from the tank, ft.
    pub length_ft: f64,
}

impl LinearAquifer {
    /// Volume of water, rb.
    pub fn water_rb(&self) -> f64 {
        self.width_ft * self.length_ft * self.rock.thickness_ft * self.rock.porosity / FT3_PER_BBL
    }

    /// Pseudo-steady productivity of a sealed slab, `0.003381*k*w*h/(mu*L)`, rb/d/psi (Fetkovich 1971).
    pub fn productivity_rb_d_psi(&self) -> f64 {
        let r = &self.rock;
        3.0 * DARCY * r.permeability_md * self.width_ft * r.thickness_ft / (r.viscosity_cp * self.length_ft)
    }
}
