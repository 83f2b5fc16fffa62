//! Onsets of asphaltene and wax against the traverse of a flowing well.
//!
//! # Method
//! At constant temperature asphaltene comes out of an oil between its upper and its lower onset pressure; near the bubble point, between the
//! two, it is least soluble (Hirschberg, deJong, Schipper and Meijer 1984, SPE J. June). Wax comes out below the wax appearance temperature,
//! which a laboratory measures on stock-tank or live oil. Both are compared with pressure and temperature along the tubing, at the perforations
//! and in the reservoir. Whether anything settles, and how fast, is not computed.

use crate::tubing::TraversePoint;

/// Onsets of deposits as a laboratory gives them. Empty: not compared.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct OnsetSpec {
    /// Upper onset of asphaltene: temperature, degF, rising, and pressure, psia. One point holds at every temperature.
    pub asphaltene_upper: Vec<(f64, f64)>,
    /// Lower onset, below which asphaltene is dissolved again.
    pub asphaltene_lower: Vec<(f64, f64)>,
    /// Wax appearance temperature, degF.
    pub wax_appearance_degf: Option<f64>,
}

impl OnsetSpec {
    /// Upper onset pressure of asphaltene at a temperature, psia: straight between the points, held beyond them.
    pub fn upper_psia(&self, temperature_degf: f64) -> Option<f64> {
        straight(&self.asphaltene_upper, temperature_degf)
    }

    /// Lower onset pressure at a temperature, psia.
    pub fn lower_psia(&self, temperature_degf: f64) -> Option<f64> {
        straight(&self.asphaltene_lower, temperature_degf)
    }

    /// How far inside the region where asphaltene may come out, psi; negative outside.
    pub fn asphaltene_psi(&self, pressure_psia: f64, temperature_degf: f64) -> Option<f64> {
        let below = self.upper_psia(temperature_degf)? - pressure_psia;
        let above = self.lower_psia(temperature_degf).map_or(f64::INFINITY, |lower| pressure_psia - lower);
        Some(below.min(above))
    }

    /// Whether nothing is to be compared.
    pub fn is_empty(&self) -> bool {
        self.asphaltene_upper.is_empty() && self.wax_appearance_degf.is_none()
    }

    /// Measured depths between which asphaltene may come out along a traverse, ft.
    pub(super) fn asphaltene_stretch(&self, points: &[TraversePoint]) -> Option<(f64, f64)> {
        stretch(points, |p| self.asphaltene_psi(p.pressure_psia, p.temperature_degf))
    }

    /// Measured depths between which wax may come out along a traverse, ft.
    pub(super) fn wax_stretch(&self, points: &[TraversePoint]) -> Option<(f64, f64)> {
        stretch(points, |p| self.wax_appearance_degf.map(|limit| limit - p.temperature_degf))
    }
}

fn straight(points: &[(f64, f64)], x: f64) -> Option<f64> {
    let (first, last) = (points.first()?, points.last()?);
    if x <= first.0 || points.len() == 1 {
        return Some(first.1);
    }
    let inside = points.windows(2).find(|pair| x <= pair[1].0);
    Some(inside.map_or(last.1, |pair| {
        let ((x0, y0), (x1, y1)) = (pair[0], pair[1]);
        y0 + (y1 - y0) * (x - x0) / (x1 - x0)
    }))
}

/// The shallowest and the deepest place at which `inside` is positive, straight between points.
fn stretch(points: &[TraversePoint], inside: impl Fn(&TraversePoint) -> Option<f64>) -> Option<(f64, f64)> {
    let mut found: Option<(f64, f64)> = None;
    let mut reach = |md_ft: f64| {
        let (low, high) = found.unwrap_or((md_ft, md_ft));
        found = Some((low.min(md_ft), high.max(md_ft)));
    };
    let mut before: Option<(f64, f64)> = None;
    for point in points {
        let here = inside(point)?;
        if let Some((md_ft, value)) = before
            && (value > 0.0) != (here > 0.0)
        {
            reach(md_ft + (point.md_ft - md_ft) * value / (value - here));
        }
        if here > 0.0 {
            reach(point.md_ft);
        }
        before = Some((point.md_ft, here));
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;

    fn onsets() -> OnsetSpec {
        OnsetSpec {
            asphaltene_upper: vec![(120.0, 4500.0), (200.0, 4100.0)],
            asphaltene_lower: vec![(0.0, 1500.0)],
            wax_appearance_degf: None,
        }
    }

    #[test]
    fn tables_are_straight_between_and_held_beyond_their_points() {
        let o = onsets();
        assert_eq!(o.upper_psia(160.0), Some(4300.0));
        assert_eq!((o.upper_psia(60.0), o.upper_psia(250.0)), (Some(4500.0), Some(4100.0)));
        assert_eq!((o.lower_psia(-10.0), o.lower_psia(300.0)), (Some(1500.0), Some(1500.0)));
        assert_eq!(o.asphaltene_psi(1400.0, 160.0), Some(-100.0));
        assert_eq!(o.asphaltene_psi(4250.0, 160.0), Some(50.0));
        assert_eq!(OnsetSpec::default().asphaltene_psi(1400.0, 160.0), None);
    }
}
