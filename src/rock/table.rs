//! Gas-oil relative permeability from a table of points, linear between them.

/// Points of krg against gas saturation and krog against oil saturation.
#[derive(Debug, Clone, PartialEq)]
pub struct RelPermTable {
    krg: Vec<(f64, f64)>,
    krog: Vec<(f64, f64)>,
}

impl RelPermTable {
    /// Takes points `(sg, krg)` and `(so, krog)` in order of rising saturation.
    ///
    /// # Errors
    /// A sentence when there are fewer than two points, saturations do not rise, or a curve falls or leaves [0, 1].
    pub fn new(krg: Vec<(f64, f64)>, krog: Vec<(f64, f64)>) -> Result<Self, String> {
        for (name, curve) in [("krg", &krg), ("krog", &krog)] {
            if curve.len() < 2 {
                return Err(format!("{name}: at least two points are needed, found {}", curve.len()));
            }
            for pair in curve.windows(2) {
                if pair[1].0 <= pair[0].0 || pair[1].1 < pair[0].1 {
                    return Err(format!("{name}: saturation must rise and the curve must not fall at {}", pair[1].0));
                }
            }
            if curve.iter().any(|p| !(0.0..=1.0).contains(&p.1) || !(0.0..=1.0).contains(&p.0)) {
                return Err(format!("{name}: saturations and relative permeabilities lie between 0 and 1"));
            }
        }
        Ok(Self { krg, krog })
    }

    pub(super) fn krg(&self, sg: f64) -> f64 {
        linear(&self.krg, sg)
    }

    pub(super) fn krog(&self, so: f64) -> f64 {
        linear(&self.krog, so)
    }

    pub(super) fn critical_gas(&self) -> f64 {
        self.krg.iter().take_while(|p| p.1 <= 0.0).last().map_or(0.0, |p| p.0)
    }

    pub(super) fn residual_oil_to_gas(&self) -> f64 {
        self.krog.iter().take_while(|p| p.1 <= 0.0).last().map_or(0.0, |p| p.0)
    }
}

fn linear(points: &[(f64, f64)], x: f64) -> f64 {
    let i = points.partition_point(|p| p.0 <= x);
    if i == 0 {
        return points[0].1;
    }
    if i == points.len() {
        return points[i - 1].1;
    }
    let ((x0, y0), (x1, y1)) = (points[i - 1], points[i]);
    y0 + (y1 - y0) * (x - x0) / (x1 - x0)
}
