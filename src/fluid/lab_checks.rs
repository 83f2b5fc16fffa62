//! What the rows of a laboratory's table must satisfy, and what an experienced reader would ask of them.

use super::{BlackOil, LabRow, ReservoirFluid};
use crate::fault::Fault;

/// Something in a laboratory's table that is unlikely, not impossible.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct LabNote {
    /// What was seen.
    pub seen: String,
    /// The likely cause.
    pub cause: &'static str,
    /// What to do.
    pub advice: &'static str,
}

/// Impossible values of the rows as reported, by rising pressure.
pub(super) fn faults_of_rows(rows: &[LabRow]) -> Vec<Fault> {
    let mut faults = Vec::new();
    let mut say = |text: String, help: &str| faults.push(Fault::new("lab", text).help(help));
    if rows.len() < 3 {
        say(format!("the laboratory's table has {} rows", rows.len()), "at least 3 are expected");
    }
    for row in rows {
        let p = row.pressure_psia;
        for (what, value, low, high) in [
            ("pressure", Some(p), 5.0, 30_000.0),
            ("oil volume factor", Some(row.bo_rb_stb), 0.8, 10.0),
            ("oil viscosity", row.mu_o_cp, 0.01, 1e6),
            ("compressibility factor of the gas", row.z, 0.1, 5.0),
            ("gas volume factor", row.bg_rb_scf, 1e-5, 1.0),
            ("gas viscosity", row.mu_g_cp, 1e-3, 1.0),
            ("solution gas-oil ratio", row.rs_scf_stb, 0.0, 20_000.0),
        ] {
            if value.is_some_and(|value| !(low..=high).contains(&value)) {
                let value = value.unwrap_or(f64::NAN);
                say(
                    format!("at {p:.1} psia the laboratory's {what} is {value}"),
                    "check the column's unit in the first line of the table",
                );
            }
        }
    }
    for pair in rows.windows(2) {
        if pair[1].pressure_psia <= pair[0].pressure_psia {
            say(
                format!("two rows of the laboratory's table have the pressure {:.1} psia", pair[1].pressure_psia),
                "one row for each pressure is expected",
            );
        }
    }
    let top = rows.iter().filter_map(|row| row.rs_scf_stb).fold(0.0, f64::max);
    let mut at_top = false;
    let mut before: Option<f64> = None;
    for row in rows {
        let p = row.pressure_psia;
        let Some(rs) = row.rs_scf_stb else {
            if !at_top {
                say(
                    format!(
                        "at {p:.1} psia, below the bubble point, the laboratory's table has no solution gas-oil ratio"
                    ),
                    "rs may be left empty above the bubble point only",
                );
            }
            continue;
        };
        let level = rs >= top * (1.0 - 1e-9);
        if at_top && !level {
            say(
                format!(
                    "at {p:.1} psia the laboratory's solution gas-oil ratio is {rs}, less than at a lower pressure"
                ),
                "below the bubble point it rises with pressure, above it stays",
            );
        } else if !at_top && before.is_some_and(|before| rs <= before) {
            say(
                format!("at {p:.1} psia the laboratory's solution gas-oil ratio {rs} does not rise with pressure"),
                "below the bubble point it rises with pressure",
            );
        }
        at_top |= level;
        before = Some(rs);
    }
    faults
}

/// What cannot be of the converted rows, of which the first `saturated` are at or below the bubble point.
pub(super) fn faults_of_converted(rows: &[LabRow], saturated: usize) -> Vec<Fault> {
    let mut faults = Vec::new();
    let mut say = |text: String, help: &str| faults.push(Fault::new("lab", text).help(help));
    if saturated < 3 {
        say(
            "the laboratory's table has fewer than three rows at or below the bubble point".to_owned(),
            "the bubble point is the lowest pressure with the highest solution gas-oil ratio",
        );
        return faults;
    }
    for (i, row) in rows.iter().enumerate() {
        let (p, rs) = (row.pressure_psia, row.rs_scf_stb.unwrap_or(f64::NAN));
        if rs.is_nan() || rs < 0.0 {
            say(
                format!("referred to the separator's oil the solution gas-oil ratio at {p:.1} psia is {rs:.1} scf/STB"),
                "check separator_bo and separator_gor: they and the table describe the same oil",
            );
        }
        let Some(below) = i.checked_sub(1).map(|i| rows[i]) else { continue };
        if i < saturated {
            if row.bo_rb_stb <= below.bo_rb_stb {
                say(
                    format!(
                        "at {p:.1} psia, at or below the bubble point, the laboratory's oil volume factor does not rise with pressure"
                    ),
                    "saturated oil swells with the gas that it takes up",
                );
            }
            if rs <= below.rs_scf_stb.unwrap_or(0.0) && rs >= 0.0 {
                say(
                    format!(
                        "referred to the separator's oil the solution gas-oil ratio at {p:.1} psia does not rise with pressure"
                    ),
                    "check separator_bo and separator_gor",
                );
            }
        } else if row.bo_rb_stb >= below.bo_rb_stb {
            say(
                format!(
                    "at {p:.1} psia, above the bubble point, the laboratory's oil volume factor does not fall with pressure"
                ),
                "oil above its bubble point is compressed",
            );
        }
    }
    let gas: Vec<_> = rows.iter().filter_map(|row| Some((row.pressure_psia, row.bg_rb_scf?))).collect();
    for pair in gas.windows(2) {
        if pair[1].1 >= pair[0].1 {
            say(
                format!("at {:.1} psia the laboratory's gas volume factor does not fall with pressure", pair[1].0),
                "gas is compressed: check the unit of the column",
            );
        }
    }
    faults
}

impl BlackOil {
    /// What is unlikely in the laboratory's table; empty without one.
    pub fn lab_notes(&self) -> Vec<LabNote> {
        let Some(lab) = self.lab() else { return Vec::new() };
        let mut notes = Vec::new();
        let pb = lab.bubble_point_psia;
        let thick: Vec<_> = lab.rows.iter().filter_map(|row| Some((row.pressure_psia, row.mu_o_cp?))).collect();
        for pair in thick.windows(2) {
            let ((low, before), (high, after)) = (pair[0], pair[1]);
            if (high <= pb && after >= before) || (low >= pb && after < before) {
                notes.push(LabNote {
                    seen: format!(
                        "the laboratory's oil viscosity goes from {before} cp at {low:.0} psia to {after} cp at {high:.0} psia; the least is expected at \
                         the bubble point, {pb:.0} psia"
                    ),
                    cause: "a slip in the table, or a viscosity measured on another sample or at another temperature",
                    advice: "compare with the report's own curve",
                });
            }
        }
        if let Some(row) = lab.rows.first().filter(|row| row.bo_rb_stb < 1.0) {
            notes.push(LabNote {
                seen: format!(
                    "referred to the separator's oil the oil volume factor at {:.0} psia is {:.4} rb/STB, below one",
                    row.pressure_psia, row.bo_rb_stb
                ),
                cause: "the usual conversion is not made for the last rows of a differential liberation",
                advice: "harmless above some hundred psia; judge a forecast that ends below with care",
            });
        }
        notes.extend(self.y_function_note());
        if let Some(pair) = lab.rows.windows(2).find(|pair| {
            let at = |part: f64| pair[0].pressure_psia + part * (pair[1].pressure_psia - pair[0].pressure_psia);
            (1..=8).any(|i| self.bg(at(f64::from(i) / 8.0)) >= self.bg(at(f64::from(i - 1) / 8.0)))
        }) {
            notes.push(LabNote {
                seen: format!(
                    "the gas volume factor does not fall with pressure between {:.0} and {:.0} psia",
                    pair[0].pressure_psia, pair[1].pressure_psia
                ),
                cause: "a slip in the column of z or of the gas volume factor",
                advice: "compare with the report's own curve",
            });
        }
        notes
    }

    /// The Y function `(pb - p)/(p (Bt/Bob - 1))` against its straight line, where the total volume is well measured.
    fn y_function_note(&self) -> Option<LabNote> {
        const MOST: f64 = 0.1;
        let lab = self.lab()?;
        let (pb, bob) = (lab.bubble_point_psia, lab.bo.at(lab.rs_scf_stb));
        let points: Vec<(f64, f64)> = lab
            .rows
            .iter()
            .filter(|row| (0.2 * pb..=0.93 * pb).contains(&row.pressure_psia))
            .filter_map(|row| {
                let p = row.pressure_psia;
                let total = row.bo_rb_stb + (lab.rs_scf_stb - row.rs_scf_stb?) * self.bg(p);
                Some((p, (pb - p) / (p * (total / bob - 1.0))))
            })
            .collect();
        if points.len() < 4 {
            return None;
        }
        let n = points.len() as f64;
        let (mean_p, mean_y) =
            (points.iter().map(|p| p.0).sum::<f64>() / n, points.iter().map(|p| p.1).sum::<f64>() / n);
        let slope = points.iter().map(|(p, y)| (p - mean_p) * (y - mean_y)).sum::<f64>()
            / points.iter().map(|(p, _)| (p - mean_p).powi(2)).sum::<f64>();
        let off = |(p, y): &(f64, f64)| (y - mean_y - slope * (p - mean_p)) / mean_y;
        let worst = points.iter().max_by(|a, b| off(a).abs().total_cmp(&off(b).abs()))?;
        (off(worst).abs() > MOST).then(|| LabNote {
            seen: format!(
                "at {:.0} psia the laboratory's total volume leaves the straight Y function by {:+.0} %",
                worst.0,
                100.0 * off(worst)
            ),
            cause: "a slip in Rs, Bo or the gas volume factor of that row, or a wrong bubble point",
            advice: "compare the row with its neighbours and with the report's own curve",
        })
    }
}
