//! Cubic B-splines on a grid of the logarithm of pressure and of temperature, for one fluid.
//!
//! A traverse asks for the gas at a hundred points, each the root of an equation of state and three exponentials. The grid
//! answers with two dozen multiplications: twice continuously differentiable, so that an integration does not notice it.
//!
//! # Method
//! The coefficients follow from the values at the nodes by the first four terms of the inverse of `1 + D/6`, D the second
//! difference: as good as interpolation (the rest is of eighth order), but local, so that no end condition is needed. Four
//! nodes lie beyond every edge; the corners of the exact functions (the bounds of the fit of z) lie outside them.

/// Steps per unit of ln p.
const STEPS_PER_LN: f64 = 28.0;
/// Steps per degF.
const STEPS_PER_DEGF: f64 = 0.25;
/// Nodes beyond each edge: one for the spline, three for its coefficients.
const RIM: usize = 4;

/// Functions of pressure and temperature on the grid.
pub(super) const OF_BOTH: usize = 5;
/// Functions of pressure alone on the same grid.
pub(super) const OF_PRESSURE: usize = 4;

/// What the grid stands for.
pub(super) trait Exact {
    /// The functions of pressure, psia, and temperature, degF.
    fn of_both(&self, pressure_psia: f64, temperature_degf: f64) -> [f64; OF_BOTH];
    /// The functions of pressure, psia.
    fn of_pressure(&self, pressure_psia: f64) -> [f64; OF_PRESSURE];
}

/// The prepared functions.
#[derive(Debug, Clone)]
pub(super) struct Grid {
    ln_lowest: f64,
    lowest_degf: f64,
    /// Cells in each direction, as the bounds of the position.
    cells_of_pressure: f64,
    cells_of_temperature: f64,
    columns: usize,
    /// Rows of one temperature, columns of one pressure.
    of_both: Vec<[f64; OF_BOTH]>,
    of_pressure: Vec<[f64; OF_PRESSURE]>,
}

impl Grid {
    /// Prepares the functions between pressures, psia, and between temperatures, degF. The exact functions are smooth a little
    /// beyond: four nodes.
    pub fn new(exact: &impl Exact, (low_psia, high_psia): (f64, f64), (low_degf, high_degf): (f64, f64)) -> Self {
        let cells = |length: f64| length.clamp(1.0, 1000.0);
        let cells_of_pressure = cells(((high_psia / low_psia).ln() * STEPS_PER_LN).floor());
        let cells_of_temperature = cells(((high_degf - low_degf) * STEPS_PER_DEGF).ceil());
        let nodes = |cells: f64| cells as usize + 1 + 2 * RIM;
        let (columns, rows) = (nodes(cells_of_pressure), nodes(cells_of_temperature));
        let ln_lowest = low_psia.ln();
        let steps = |node: usize| node as f64 - RIM as f64;
        let pressure_psia = |column: usize| (ln_lowest + steps(column) / STEPS_PER_LN).exp();

        let mut of_pressure: Vec<_> = (0..columns).map(|column| exact.of_pressure(pressure_psia(column))).collect();
        filter(&mut of_pressure, 0, 1, columns);
        let mut of_both = Vec::with_capacity(rows * columns);
        for row in 0..rows {
            let temperature_degf = low_degf + steps(row) / STEPS_PER_DEGF;
            of_both.extend((0..columns).map(|column| exact.of_both(pressure_psia(column), temperature_degf)));
            filter(&mut of_both, row * columns, 1, columns);
        }
        for column in 0..columns {
            filter(&mut of_both, column, columns, rows);
        }
        Self {
            ln_lowest,
            lowest_degf: low_degf,
            cells_of_pressure,
            cells_of_temperature,
            columns,
            of_both,
            of_pressure,
        }
    }

    /// The functions at a point; `None` outside the grid.
    #[inline]
    pub fn at(&self, ln_pressure: f64, temperature_degf: f64) -> Option<([f64; OF_BOTH], [f64; OF_PRESSURE])> {
        let x = (ln_pressure - self.ln_lowest) * STEPS_PER_LN;
        let y = (temperature_degf - self.lowest_degf) * STEPS_PER_DEGF;
        if !(x >= 0.0 && x < self.cells_of_pressure && y >= 0.0 && y < self.cells_of_temperature) {
            return None;
        }
        let (i, j) = (x as i32, y as i32);
        let wx = weights(x - f64::from(i));
        let wy = weights(y - f64::from(j));
        let (i, j) = (i as usize + RIM - 1, j as usize + RIM - 1);
        let mut both = [0.0; OF_BOTH];
        for (k, wy) in wy.into_iter().enumerate() {
            let start = (j + k) * self.columns + i;
            let four = self.of_both.get(start..start + 4)?.first_chunk::<4>()?;
            for f in 0..OF_BOTH {
                both[f] += wy * ((wx[0] * four[0][f] + wx[1] * four[1][f]) + (wx[2] * four[2][f] + wx[3] * four[3][f]));
            }
        }
        let four = self.of_pressure.get(i..i + 4)?;
        let pressure = std::array::from_fn(|f| {
            (wx[0] * four[0][f] + wx[1] * four[1][f]) + (wx[2] * four[2][f] + wx[3] * four[3][f])
        });
        Some((both, pressure))
    }
}

/// The cubic B-splines over a cell, at a part of it.
#[inline]
fn weights(x: f64) -> [f64; 4] {
    let r = 1.0 - x;
    let (x2, r2) = (x * x, r * r);
    [(1.0 / 6.0) * r2 * r, (2.0 / 3.0) - x2 * (1.0 - 0.5 * x), (2.0 / 3.0) - r2 * (1.0 - 0.5 * r), (1.0 / 6.0) * x2 * x]
}

/// Turns the values of a line of nodes into coefficients, but for three at each end.
fn filter<const N: usize>(values: &mut [[f64; N]], first: usize, stride: usize, count: usize) {
    // 1 - D/6 + D^2/36 - D^3/216, gathered by distance.
    const CENTRE: f64 = 1.0 + 2.0 / 6.0 + 6.0 / 36.0 + 20.0 / 216.0;
    const NEXT: f64 = -(1.0 / 6.0 + 4.0 / 36.0 + 15.0 / 216.0);
    const SECOND: f64 = 1.0 / 36.0 + 6.0 / 216.0;
    const THIRD: f64 = -1.0 / 216.0;
    let line: Vec<[f64; N]> = (0..count).map(|i| values[first + i * stride]).collect();
    for (i, seven) in line.windows(7).enumerate() {
        values[first + (i + 3) * stride] = std::array::from_fn(|f| {
            CENTRE * seven[3][f]
                + NEXT * (seven[2][f] + seven[4][f])
                + SECOND * (seven[1][f] + seven[5][f])
                + THIRD * (seven[0][f] + seven[6][f])
        });
    }
}
