//! Tables of what a well or a tank makes against what it has made.
//!
//! # Method
//! Piecewise cubic Hermite with the harmonic-mean slopes of Fritsch and Butland (1984): it goes through every point, has a continuous
//! slope and neither overshoots nor turns between points. Held beyond the first and the last point.

/// A monotone curve through points.
#[derive(Debug, Clone, PartialEq)]
pub struct Trend {
    points: Vec<(f64, f64)>,
    slopes: Vec<f64>,
}

impl Trend {
    /// Takes points in order of rising first members.
    ///
    /// # Errors
    /// A sentence when there is no point, a number is not finite, or the first members do not rise.
    pub fn new(points: Vec<(f64, f64)>) -> Result<Self, String> {
        if points.is_empty() {
            return Err("at least one point is needed".to_owned());
        }
        if points.iter().any(|p| !(p.0.is_finite() && p.1.is_finite())) {
            return Err("a point is not finite".to_owned());
        }
        if let Some(pair) = points.windows(2).find(|pair| pair[1].0 <= pair[0].0) {
            return Err(format!("{} does not lie above {}", pair[1].0, pair[0].0));
        }
        let secant = |i: usize| (points[i + 1].1 - points[i].1) / (points[i + 1].0 - points[i].0);
        let slopes = (0..points.len())
            .map(|i| {
                // Flat at both ends, where the curve is held.
                if i == 0 || i + 1 == points.len() {
                    return 0.0;
                }
                let (a, b) = (secant(i - 1), secant(i));
                if a * b <= 0.0 {
                    return 0.0;
                }
                let (h, k) = (points[i].0 - points[i - 1].0, points[i + 1].0 - points[i].0);
                3.0 * (h + k) / ((2.0 * k + h) / a + (k + 2.0 * h) / b)
            })
            .collect();
        Ok(Self { points, slopes })
    }

    /// The value at `x`.
    pub fn at(&self, x: f64) -> f64 {
        let i = self.points.partition_point(|p| p.0 <= x);
        if i == 0 {
            return self.points[0].1;
        }
        if i == self.points.len() {
            return self.points[i - 1].1;
        }
        let ((x0, y0), (x1, y1)) = (self.points[i - 1], self.points[i]);
        let (h, t) = (x1 - x0, (x - x0) / (x1 - x0));
        let (a, b) = (self.slopes[i - 1] * h, self.slopes[i] * h);
        let rise = y1 - y0;
        y0 + t * (a + t * (3.0 * rise - 2.0 * a - b + t * (a + b - 2.0 * rise)))
    }

    /// Where the curve first leaves zero: its last point with no value above zero; minus infinity when it starts above.
    pub fn leaves_zero(&self) -> f64 {
        let zeros = self.points.iter().take_while(|p| p.1 <= 0.0).count();
        match zeros {
            0 => f64::NEG_INFINITY,
            n if n == self.points.len() => f64::INFINITY,
            n => self.points[n - 1].0,
        }
    }

    /// How far `x` is from there, in parts of the table's width: positive before, negative beyond.
    pub fn before_water(&self, x: f64) -> f64 {
        let (first, last) = (self.points[0].0, self.points[self.points.len() - 1].0);
        let width = if last > first { last - first } else { 1.0 };
        ((self.leaves_zero() - x) / width).clamp(-1e3, 1e3)
    }

    /// The points.
    pub fn points(&self) -> &[(f64, f64)] {
        &self.points
    }
}

/// Against what the tank's water is stated.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum TrendOver {
    /// The tank's cumulative oil since first production, STB.
    Oil,
    /// Water brought in since first production, in pore volumes of the oil zone.
    PoreVolumes,
}

/// The water that the tank's wells make, as the user states it.
#[derive(Debug, Clone, PartialEq)]
pub struct WaterTrend {
    /// Against what.
    pub over: TrendOver,
    /// Whether the values are water-oil ratios, STB/STB; otherwise water cuts.
    pub water_oil_ratio: bool,
    /// The curve.
    pub curve: Trend,
}

impl WaterTrend {
    /// Water-oil ratio at a place of the curve.
    pub fn water_oil_ratio(&self, place: f64) -> f64 {
        let value = self.curve.at(place).max(0.0);
        if self.water_oil_ratio { value } else { ratio_of_cut(value) }
    }
}

/// Water-oil ratio of a water cut.
pub fn ratio_of_cut(water_cut: f64) -> f64 {
    let cut = water_cut.clamp(0.0, 0.9999);
    cut / (1.0 - cut)
}
