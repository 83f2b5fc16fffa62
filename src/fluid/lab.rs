//! A laboratory's table of the oil and its gas at tank temperature.
//!
//! # Conversion
//! Rows of a differential liberation are referred to its residual oil; the handbooks put them on the oil of the separator:
//!
//! ```text
//! Bo = Bod Bofb/Bodb,   Rs = Rsfb - (Rsdb - Rsd) Bofb/Bodb
//! ```
//!
//! d differential, f through the separator, b at the bubble point. The last row, at atmospheric pressure, then has a small Rs of either sign
//! and often Bo below one, which the method is known for: a negative Rs of that row counts as zero.
//!
//! # Source
//! J. W. Amyx, D. M. Bass and R. L. Whiting, "Petroleum Reservoir Engineering" (1960); W. D. McCain, "The Properties of Petroleum
//! Fluids" (1990).
//!
//! # Between the points
//! Monotone cubics: Rs against p, Bo and ln mu against Rs, and above the bubble point ln(Bo/Bob) and ln(mu/mu_b) against p - pb. Oil with another
//! bubble point follows these last two from its own. z and the gas viscosity are the correlation's times a monotone cubic of
//! measured over correlated value.
//!
//! # At other temperatures
//! Rs is the laboratory's times the correlation's Rs(T)/Rs(T_tank), which for every correlation here is one factor for all
//! pressures; Bo and mu are the laboratory's at that Rs times the correlation's ratio of the two temperatures; above the bubble point the strain is scaled
//! by Vasquez and Beggs' A(T)/A(T_tank), held to 0.5 to 1.5. So everything meets the laboratory at tank temperature.

use super::MonotoneCurve;
use crate::fault::Fault;

/// To what oil the rows of a laboratory's table refer.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum LabBasis {
    /// Stock-tank oil of the field's separator: the rows are used as they are.
    Flash,
    /// Residual oil of a differential liberation at tank temperature.
    Differential {
        /// Oil volume factor at the bubble point by the separator test, rb/STB.
        separator_bo_rb_stb: f64,
        /// Gas of all separator stages and the stock tank, scf/STB.
        separator_gor_scf_stb: f64,
    },
}

/// One row of a laboratory's table.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LabRow {
    /// Pressure, psia.
    pub pressure_psia: f64,
    /// Dissolved gas, scf/STB; above the bubble point it may be missing.
    pub rs_scf_stb: Option<f64>,
    /// Oil volume factor, rb/STB.
    pub bo_rb_stb: f64,
    /// Oil viscosity, cp.
    pub mu_o_cp: Option<f64>,
    /// Compressibility factor of the gas.
    pub z: Option<f64>,
    /// Gas volume factor, rb/scf.
    pub bg_rb_scf: Option<f64>,
    /// Gas viscosity, cp.
    pub mu_g_cp: Option<f64>,
}

/// A laboratory's table.
#[derive(Debug, Clone, PartialEq)]
pub struct LabReport {
    /// To what oil the rows refer.
    pub basis: LabBasis,
    /// The rows as reported, in any order.
    pub rows: Vec<LabRow>,
}

/// Rows below this pressure, psia, are those of the last stage, at atmospheric pressure.
const ATMOSPHERIC_PSIA: f64 = 20.0;

impl LabReport {
    /// The rows by rising pressure, referred to the separator's oil; above the bubble point with its Rs.
    ///
    /// # Errors
    /// Too few rows, numbers that cannot be, gas that does not rise with pressure; keyed `lab`.
    pub fn converted(&self) -> Result<Vec<LabRow>, Vec<Fault>> {
        let mut rows = self.rows.clone();
        rows.sort_by(|a, b| a.pressure_psia.total_cmp(&b.pressure_psia));
        let faults = super::lab_checks::faults_of_rows(&rows);
        if !faults.is_empty() {
            return Err(faults);
        }
        let top_scf_stb = rows.iter().filter_map(|row| row.rs_scf_stb).fold(0.0, f64::max);
        let bubble = rows.iter().position(|row| row.rs_scf_stb.is_some_and(|rs| rs >= top_scf_stb * (1.0 - 1e-9)));
        let bodb = bubble.map_or(1.0, |i| rows[i].bo_rb_stb);
        for (i, row) in rows.iter_mut().enumerate() {
            let rsd =
                if bubble.is_some_and(|bubble| i >= bubble) { top_scf_stb } else { row.rs_scf_stb.unwrap_or(0.0) };
            row.rs_scf_stb = Some(rsd);
            if let LabBasis::Differential { separator_bo_rb_stb, separator_gor_scf_stb } = self.basis {
                let ratio = separator_bo_rb_stb / bodb;
                let rs = separator_gor_scf_stb - (top_scf_stb - rsd) * ratio;
                row.bo_rb_stb *= ratio;
                row.rs_scf_stb = Some(if row.pressure_psia < ATMOSPHERIC_PSIA { rs.max(0.0) } else { rs });
            }
        }
        Ok(rows)
    }
}

/// A laboratory's table, prepared.
#[derive(Debug, Clone)]
pub(super) struct Lab {
    /// The converted rows, with z and the gas volume factor both.
    pub rows: Vec<LabRow>,
    pub bubble_point_psia: f64,
    /// Gas at the bubble point, scf/STB.
    pub rs_scf_stb: f64,
    /// Rs against p.
    gas: MonotoneCurve,
    /// Bo against Rs.
    pub bo: MonotoneCurve,
    /// ln mu against Rs.
    ln_mu: Option<MonotoneCurve>,
    /// ln(Bo/Bob) against p - pb.
    ln_volume: Option<MonotoneCurve>,
    /// ln(mu/mu_b) against p - pb.
    ln_thickening: Option<MonotoneCurve>,
    /// Measured over correlated z against p.
    z_ratio: Option<MonotoneCurve>,
    /// Measured over correlated gas viscosity against p.
    mu_g_ratio: Option<MonotoneCurve>,
}

impl Lab {
    /// Prepares the table. `correlated` gives z and the gas viscosity of the correlations at a pressure, `z_of_bg` the z of a volume
    /// factor at a pressure.
    ///
    /// # Errors
    /// Those of [`LabReport::converted`], and what cannot be of the converted rows.
    pub fn new(
        report: &LabReport,
        standard_pressure_psia: f64,
        correlated: impl Fn(f64) -> (f64, f64),
        z_of_bg: impl Fn(f64, f64) -> f64,
    ) -> Result<Self, Vec<Fault>> {
        let mut rows = report.converted()?;
        for row in &mut rows {
            let p = row.pressure_psia;
            row.z = row.z.or_else(|| row.bg_rb_scf.map(|bg| z_of_bg(bg, p)));
            row.bg_rb_scf = row.z.map(|z| z / z_of_bg(1.0, p));
        }
        let rs = |row: &LabRow| row.rs_scf_stb.unwrap_or(0.0);
        let top_scf_stb = rows.iter().map(rs).fold(0.0, f64::max);
        let count = rows.iter().filter(|row| rs(row) < top_scf_stb).count() + 1;
        let faults = super::lab_checks::faults_of_converted(&rows, count);
        if !faults.is_empty() {
            return Err(faults);
        }
        let (saturated, above) = (&rows[..count], &rows[count - 1..]);
        let bubble = rows[count - 1];
        let mut gas: Vec<(f64, f64)> = saturated.iter().map(|row| (row.pressure_psia, rs(row))).collect();
        if let Some(&(lowest_psia, least)) = gas.first()
            && least > 0.0
        {
            // Without gas at standard pressure, or at none where the table goes down there.
            let psia = if lowest_psia > standard_pressure_psia + 1.0 { standard_pressure_psia } else { 0.0 };
            gas.insert(0, (psia, 0.0));
        }
        let curve = |points: Vec<(f64, f64)>| if points.len() < 2 { None } else { MonotoneCurve::new(&points) };
        let cannot = || vec![Fault::new("lab", "the table has no two rows at or below the bubble point")];
        let mu_b = bubble.mu_o_cp;
        let beyond = |row: &LabRow| row.pressure_psia - bubble.pressure_psia;
        let z_points: Vec<(f64, f64)> =
            rows.iter().filter_map(|row| Some((row.pressure_psia, row.z? / correlated(row.pressure_psia).0))).collect();
        let mu_g_points: Vec<(f64, f64)> = rows
            .iter()
            .filter_map(|row| Some((row.pressure_psia, row.mu_g_cp? / correlated(row.pressure_psia).1)))
            .collect();
        Ok(Self {
            bubble_point_psia: bubble.pressure_psia,
            rs_scf_stb: rs(&bubble),
            gas: curve(gas).ok_or_else(cannot)?,
            bo: curve(saturated.iter().map(|row| (rs(row), row.bo_rb_stb)).collect()).ok_or_else(cannot)?,
            ln_mu: mu_b
                .and_then(|_| curve(saturated.iter().filter_map(|row| Some((rs(row), row.mu_o_cp?.ln()))).collect())),
            ln_volume: curve(above.iter().map(|row| (beyond(row), (row.bo_rb_stb / bubble.bo_rb_stb).ln())).collect()),
            ln_thickening: mu_b.and_then(|mu_b| {
                curve(above.iter().filter_map(|row| Some((beyond(row), (row.mu_o_cp? / mu_b).ln()))).collect())
            }),
            z_ratio: MonotoneCurve::new(&z_points),
            mu_g_ratio: MonotoneCurve::new(&mu_g_points),
            rows,
        })
    }

    /// Dissolved gas of saturated oil at tank temperature, scf/STB.
    #[inline]
    pub fn rs_saturated_scf_stb(&self, pressure_psia: f64) -> f64 {
        self.gas.at(pressure_psia).max(0.0)
    }

    /// Bubble point at tank temperature of oil that holds `rs_scf_stb`, psia.
    #[inline]
    pub fn bubble_point_of_psia(&self, rs_scf_stb: f64) -> f64 {
        self.gas.inverse(rs_scf_stb).max(0.0)
    }

    /// Viscosity of saturated oil at tank temperature, cp.
    #[inline]
    pub fn mu_o_cp(&self, rs_scf_stb: f64) -> Option<f64> {
        self.ln_mu.as_ref().map(|ln_mu| ln_mu.at(rs_scf_stb).exp())
    }

    /// Bo/Bob of oil above its bubble point; the strain is multiplied by `scale`.
    #[inline]
    pub fn volume_ratio(&self, above_bubble_point_psi: f64, scale: f64) -> Option<f64> {
        self.ln_volume.as_ref().map(|ln_volume| (scale * ln_volume.at(above_bubble_point_psi)).exp())
    }

    /// mu/mu_b of oil above its bubble point.
    #[inline]
    pub fn viscosity_ratio(&self, above_bubble_point_psi: f64) -> Option<f64> {
        self.ln_thickening.as_ref().map(|ln| ln.at(above_bubble_point_psi).exp())
    }

    /// Measured over correlated z, and gas viscosity; constant outside the rows.
    #[inline]
    pub fn gas_ratios(&self, pressure_psia: f64) -> (f64, f64) {
        let held = |curve: &Option<MonotoneCurve>| {
            curve.as_ref().map_or(1.0, |curve| {
                let (low, high) = curve.range();
                curve.at(pressure_psia.max(low).min(high))
            })
        };
        (held(&self.z_ratio), held(&self.mu_g_ratio))
    }

    /// Whether the table holds the oil's viscosity; its volume and its viscosity above the bubble point; z; the gas viscosity.
    pub fn holds(&self) -> [bool; 5] {
        [
            self.ln_mu.is_some(),
            self.ln_volume.is_some(),
            self.ln_thickening.is_some(),
            self.z_ratio.is_some(),
            self.mu_g_ratio.is_some(),
        ]
    }
}
