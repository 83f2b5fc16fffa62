//! Pore volume against pressure: a constant compressibility, or a table of measured multipliers.
//!
//! ```text
//! constant   Vp = Vp_i*exp(cf*(p - p_i))
//! table      Vp = Vp_i*M(p)/M(p_i)
//! ```
//!
//! ln M is interpolated between the points by monotone cubics, so that the pore volume never falls with rising pressure and its
//! compressibility has no jumps; beyond the table it goes on with the compressibility of its end. The rock gives back what it lost when the
//! pressure rises again: no hysteresis.
//!
//! # Source
//! Monotone cubics: Fritsch and Carlson (1980), with the harmonic mean of the neighbouring chords as slope (Butland 1980).

use crate::fault::Fault;

/// The pore volume over that at the initial pressure.
#[derive(Debug, Clone, PartialEq)]
pub(super) enum PoreVolume {
    /// Compressibility, 1/psi.
    Constant { compressibility_1_psi: f64, initial_psia: f64 },
    /// Pressure, psia; ln M; slope of ln M, 1/psi.
    Table { points: Vec<(f64, f64, f64)>, initial_ln: f64 },
}

impl PoreVolume {
    /// From the compressibility, or from pairs of pressure, psia, and multiplier where there are any.
    ///
    /// # Errors
    /// Faults with the key `compaction`.
    pub fn new(compressibility_1_psi: f64, table: &[(f64, f64)], initial_psia: f64) -> Result<Self, Vec<Fault>> {
        if table.is_empty() {
            return Ok(Self::Constant { compressibility_1_psi, initial_psia });
        }
        check(table)?;
        let logs: Vec<(f64, f64)> = table.iter().map(|&(p, m)| (p, m.ln())).collect();
        let chords: Vec<f64> = logs.windows(2).map(|w| (w[1].1 - w[0].1) / (w[1].0 - w[0].0)).collect();
        let slope = |i: usize| match (i.checked_sub(1).map(|j| chords[j]), chords.get(i)) {
            // The harmonic mean of its neighbours: monotone whatever they are.
            (Some(a), Some(&b)) => {
                if a > 0.0 && b > 0.0 {
                    2.0 * a * b / (a + b)
                } else {
                    0.0
                }
            }
            (Some(a), None) => a,
            (None, Some(&b)) => b,
            (None, None) => 0.0,
        };
        let points = logs.iter().enumerate().map(|(i, &(p, ln))| (p, ln, slope(i))).collect();
        let mut found = Self::Table { points, initial_ln: 0.0 };
        let at_initial = found.ln(initial_psia);
        if let Self::Table { initial_ln, .. } = &mut found {
            *initial_ln = at_initial;
        }
        Ok(found)
    }

    /// ln of the pore volume over that at the initial pressure.
    pub fn ln(&self, pressure_psia: f64) -> f64 {
        let (points, initial_ln) = match self {
            Self::Constant { compressibility_1_psi, initial_psia } => {
                return compressibility_1_psi * (pressure_psia - initial_psia);
            }
            Self::Table { points, initial_ln } => (points, initial_ln),
        };
        let i = points.partition_point(|point| point.0 <= pressure_psia);
        let value = match (i.checked_sub(1).and_then(|j| points.get(j)), points.get(i)) {
            (Some(&(p, a, da)), Some(&(next, b, db))) => {
                let h = next - p;
                let u = (pressure_psia - p) / h;
                let rise = b - a;
                a + u * (h * da + u * (3.0 * rise - h * (2.0 * da + db) + u * (h * (da + db) - 2.0 * rise)))
            }
            (Some(&(p, a, slope)), None) | (None, Some(&(p, a, slope))) => a + slope * (pressure_psia - p),
            (None, None) => 0.0,
        };
        value - initial_ln
    }
}

fn check(table: &[(f64, f64)]) -> Result<(), Vec<Fault>> {
    if table.len() < 2 {
        return Err(vec![Fault::new("compaction", "a compaction table needs at least two points")]);
    }
    let mut faults = Vec::new();
    for (i, pair) in table.windows(2).enumerate() {
        let key = format!("compaction[{}]", i + 1);
        if pair[1].0 <= pair[0].0 {
            faults.push(Fault::new(key, "the pressures of the compaction table do not rise"));
        } else if pair[1].1 < pair[0].1 {
            faults.push(
                Fault::new(key, "the pore volume falls with rising pressure")
                    .help("multipliers grow with pressure; check the order of the pairs"),
            );
        }
    }
    if faults.is_empty() { Ok(()) } else { Err(faults) }
}
