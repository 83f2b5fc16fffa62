//! The functions of temperature alone, prepared for one fluid: a polynomial per cell.
//!
//! A traverse meets a new temperature at every stage; half of the work there would go into the exponentials of these four.
//! Cells are 1/32 of an octave, so that the error is the same everywhere: below 1e-11 relatively over 32 to 500 degF.

use std::sync::Arc;

/// The functions of one temperature.
#[derive(Debug, Clone, Copy)]
pub(super) struct AtTemperature {
    /// Logarithm of the dead oil's viscosity in cp.
    pub ln_dead_cp: f64,
    /// Water viscosity without its pressure term, cp.
    pub water_cp: f64,
    /// 10^a of Standing's bubble point.
    pub bubble_factor: f64,
    /// Gas that Standing's oil dissolves at unit pressure group, scf/STB.
    pub dissolved_scf_stb: f64,
}

impl AtTemperature {
    fn from_array([ln_dead_cp, water_cp, bubble_factor, dissolved_scf_stb]: [f64; FUNCTIONS]) -> Self {
        Self { ln_dead_cp, water_cp, bubble_factor, dissolved_scf_stb }
    }

    fn to_array(self) -> [f64; FUNCTIONS] {
        [self.ln_dead_cp, self.water_cp, self.bubble_factor, self.dissolved_scf_stb]
    }
}

const FUNCTIONS: usize = 4;
const COEFFICIENTS: usize = 6;
/// Cells per octave, as a power of two.
const CELL_BITS: u32 = 5;
const CELL_SHIFT: u32 = 52 - CELL_BITS;
/// 32 degF, the lowest temperature.
const FIRST_CELL: u64 = 32_f64.to_bits() >> CELL_SHIFT;
/// 32 to 512 degF: four octaves.
const CELLS: usize = 4 << CELL_BITS;

/// Coefficients of one cell, the four functions side by side.
type Cell = [[f64; FUNCTIONS]; COEFFICIENTS];

/// The prepared functions.
#[derive(Debug, Clone)]
pub(super) struct ByTemperature(Arc<[Cell; CELLS]>);

impl ByTemperature {
    /// Fits the functions, given exactly, in every cell: through the Chebyshev points of the second kind, so that neighbours meet.
    pub fn new(exact: impl Fn(f64) -> AtTemperature) -> Self {
        let nodes: [f64; COEFFICIENTS] =
            std::array::from_fn(|i| -(std::f64::consts::PI * i as f64 / (COEFFICIENTS - 1) as f64).cos());
        let mut cells = [[[0.0; FUNCTIONS]; COEFFICIENTS]; CELLS];
        for (index, cell) in cells.iter_mut().enumerate() {
            let low_degf = f64::from_bits((FIRST_CELL + index as u64) << CELL_SHIFT);
            let high_degf = f64::from_bits((FIRST_CELL + index as u64 + 1) << CELL_SHIFT);
            let (middle_degf, half_degf) = (0.5 * (low_degf + high_degf), 0.5 * (high_degf - low_degf));
            *cell = interpolant(&nodes, nodes.map(|node| exact(middle_degf + half_degf * node).to_array()));
        }
        Self(Arc::new(cells))
    }

    /// The functions at a temperature of 32 to 500 degF.
    #[inline]
    pub fn at(&self, temperature_degf: f64) -> AtTemperature {
        let bits = temperature_degf.to_bits();
        let index = ((bits >> CELL_SHIFT).wrapping_sub(FIRST_CELL) as usize).min(CELLS - 1);
        // Position in the cell, -1 to 1, from the bits below the cell's.
        let part = f64::from_bits((bits << CELL_BITS) & ((1 << 52) - 1) | (1023 << 52));
        let x = 2.0 * part - 3.0;
        let cell = &self.0[index];
        let x2 = x * x;
        AtTemperature::from_array(std::array::from_fn(|f| {
            (cell[0][f] + x * cell[1][f]) + x2 * ((cell[2][f] + x * cell[3][f]) + x2 * (cell[4][f] + x * cell[5][f]))
        }))
    }
}

/// Coefficients of the polynomials through the values at the nodes (Newton's divided differences, multiplied out).
fn interpolant(nodes: &[f64; COEFFICIENTS], mut values: Cell) -> Cell {
    let mut result = [[0.0; FUNCTIONS]; COEFFICIENTS];
    for f in 0..FUNCTIONS {
        for order in 1..COEFFICIENTS {
            for i in (order..COEFFICIENTS).rev() {
                values[i][f] = (values[i][f] - values[i - 1][f]) / (nodes[i] - nodes[i - order]);
            }
        }
        for i in (0..COEFFICIENTS).rev() {
            // result = result*(x - nodes[i]) + values[i]
            for power in (1..COEFFICIENTS).rev() {
                result[power][f] = result[power - 1][f] - nodes[i] * result[power][f];
            }
            result[0][f] = values[i][f] - nodes[i] * result[0][f];
        }
    }
    result
}
