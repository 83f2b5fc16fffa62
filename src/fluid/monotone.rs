//! A curve through points that never leaves the range of two neighbours.
//!
//! # Method
//! Fritsch and Carlson (1980) with the slopes of Fritsch and Butland (1984): cubic between neighbours, slope at an inner point the weighted
//! harmonic mean of the two secants (zero where these differ in sign), at the ends a three-point estimate that is held to the
//! sign of the secant and three times its size. Continuous with its slope; outside the points it goes on straight.
//!
//! # Source
//! F. N. Fritsch and R. E. Carlson, "Monotone Piecewise Cubic Interpolation", SIAM Journal on Numerical Analysis 17 (1980); F. N. Fritsch and
//! J. Butland, "A Method for Constructing Local Monotone Piecewise Cubic Interpolants", SIAM Journal on Scientific and Statistical
//! Computing 5 (1984).

/// A monotone curve through points of rising abscissa.
#[derive(Debug, Clone, PartialEq)]
pub struct MonotoneCurve {
    x: Vec<f64>,
    y: Vec<f64>,
    slope: Vec<f64>,
    /// Slope beyond the last point: that at it, or the last secant's where that is level.
    beyond: f64,
}

impl MonotoneCurve {
    /// `None` without a point, or where the abscissae do not rise or a number is not finite.
    pub fn new(points: &[(f64, f64)]) -> Option<Self> {
        let finite = points.iter().all(|(x, y)| x.is_finite() && y.is_finite());
        if points.is_empty() || !finite || points.windows(2).any(|pair| pair[1].0 <= pair[0].0) {
            return None;
        }
        let (x, y): (Vec<f64>, Vec<f64>) = points.iter().copied().unzip();
        let slope = slopes(&x, &y);
        let n = x.len();
        let level = slope[n - 1] == 0.0 && n > 1;
        let beyond = if level { (y[n - 1] - y[n - 2]) / (x[n - 1] - x[n - 2]) } else { slope[n - 1] };
        Some(Self { x, y, slope, beyond })
    }

    /// The number of the stretch that holds `x`, the first or last one outside.
    #[inline]
    fn stretch(&self, x: f64) -> usize {
        self.x.partition_point(|&node| node <= x).clamp(1, self.x.len() - 1) - 1
    }

    /// The value at `x`.
    #[inline]
    pub fn at(&self, x: f64) -> f64 {
        let last = self.x.len() - 1;
        if x.is_nan() || x <= self.x[0] {
            return self.y[0] + self.slope[0] * (x - self.x[0]);
        }
        if x >= self.x[last] {
            return self.y[last] + self.beyond * (x - self.x[last]);
        }
        let i = self.stretch(x);
        let width = self.x[i + 1] - self.x[i];
        self.value_in(i, (x - self.x[i]) / width, width)
    }

    /// Hermite's cubic at a part of a stretch; exact at both ends.
    #[inline]
    fn value_in(&self, i: usize, part: f64, width: f64) -> f64 {
        let rest = 1.0 - part;
        let (low, high) = (self.y[i], self.y[i + 1]);
        let bend = rest * (self.slope[i] * width - (high - low)) - part * (self.slope[i + 1] * width - (high - low));
        rest * low + part * high + part * rest * bend
    }

    /// The slope at `x`.
    pub fn slope_at(&self, x: f64) -> f64 {
        let last = self.x.len() - 1;
        if x.is_nan() || x <= self.x[0] {
            return self.slope[0];
        }
        if x >= self.x[last] {
            return self.beyond;
        }
        let i = self.stretch(x);
        let width = self.x[i + 1] - self.x[i];
        self.slope_in(i, (x - self.x[i]) / width, width) / width
    }

    /// The derivative of [`value_in`](Self::value_in) with respect to the part.
    fn slope_in(&self, i: usize, part: f64, width: f64) -> f64 {
        let rest = 1.0 - part;
        let rise = self.y[i + 1] - self.y[i];
        let (near, far) = (self.slope[i] * width - rise, self.slope[i + 1] * width - rise);
        rise + (1.0 - 2.0 * part) * (rest * near - part * far) - part * rest * (near + far)
    }

    /// The abscissa of a value of a curve that rises strictly.
    pub fn inverse(&self, y: f64) -> f64 {
        let last = self.x.len() - 1;
        if y.is_nan() || y <= self.y[0] {
            return if self.slope[0] > 0.0 { self.x[0] + (y - self.y[0]) / self.slope[0] } else { self.x[0] };
        }
        if y >= self.y[last] {
            let rises = self.beyond > 0.0;
            return if rises { self.x[last] + (y - self.y[last]) / self.beyond } else { self.x[last] };
        }
        let i = self.y.partition_point(|&node| node <= y).clamp(1, last) - 1;
        let width = self.x[i + 1] - self.x[i];
        let (mut low, mut high) = (0.0, 1.0);
        let mut part = (y - self.y[i]) / (self.y[i + 1] - self.y[i]);
        for _ in 0..80 {
            let miss = self.value_in(i, part, width) - y;
            if miss > 0.0 {
                high = part;
            } else {
                low = part;
            }
            let next = part - miss / self.slope_in(i, part, width);
            let next = if next > low && next < high { next } else { 0.5 * (low + high) };
            let step = (next - part).abs();
            part = next;
            if step <= 1e-15 {
                break;
            }
        }
        self.x[i] + part * width
    }

    /// First and last abscissa.
    pub fn range(&self) -> (f64, f64) {
        (self.x[0], self.x[self.x.len() - 1])
    }
}

fn slopes(x: &[f64], y: &[f64]) -> Vec<f64> {
    let n = x.len();
    if n == 1 {
        return vec![0.0];
    }
    let width: Vec<f64> = x.windows(2).map(|pair| pair[1] - pair[0]).collect();
    let secant: Vec<f64> = y.windows(2).zip(&width).map(|(pair, width)| (pair[1] - pair[0]) / width).collect();
    if n == 2 {
        return vec![secant[0]; 2];
    }
    let mut slope = vec![0.0; n];
    for i in 1..n - 1 {
        let (before, after) = (secant[i - 1], secant[i]);
        if before * after > 0.0 {
            let (w1, w2) = (2.0 * width[i] + width[i - 1], width[i] + 2.0 * width[i - 1]);
            slope[i] = (w1 + w2) / (w1 / before + w2 / after);
        }
    }
    slope[0] = end_slope(width[0], width[1], secant[0], secant[1]);
    slope[n - 1] = end_slope(width[n - 2], width[n - 3], secant[n - 2], secant[n - 3]);
    slope
}

/// Three-point estimate at an end, held to a monotone cubic.
fn end_slope(near_width: f64, far_width: f64, near: f64, far: f64) -> f64 {
    let estimate = ((2.0 * near_width + far_width) * near - near_width * far) / (near_width + far_width);
    if estimate * near <= 0.0 {
        0.0
    } else if near * far <= 0.0 && estimate.abs() > 3.0 * near.abs() {
        3.0 * near
    } else {
        estimate
    }
}
