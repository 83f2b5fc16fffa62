//! A fluid given as rows of measured properties, linear in pressure in every column.
//!
//! # Method
//! The rows up to the highest solution gas-oil ratio are the saturated line; rows above it belong to the undersaturated oil and
//! give the trends of Bo and viscosity with p - pb. Oil with another bubble point (less gas after some was lost, more after gas was
//! injected) starts from the saturated line at its own bubble point and follows the same trends as ratios, so that the
//! table's own undersaturated rows are met exactly. Without such rows undersaturated oil neither shrinks nor thickens.
//!
//! # Limitation
//! The saturated line goes on straight above its last row. Outside the rows that hold gas properties p Bg is constant. Below the first
//! row Rs goes straight to zero, never lower, and the other columns keep the first row's values.

use super::ReservoirFluid;
use crate::fault::Fault;

/// One row of a fluid table.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FluidTableRow {
    /// Pressure, psia.
    pub pressure_psia: f64,
    /// Gas dissolved in the oil, scf/STB; equal to the largest of the table at and above the bubble point.
    pub rs_scf_stb: f64,
    /// Oil volume factor, rb/STB.
    pub bo_rb_stb: f64,
    /// Oil viscosity, cp.
    pub mu_o_cp: f64,
    /// Gas volume factor, rb/scf; `None` where there is no free gas.
    pub bg_rb_scf: Option<f64>,
    /// Gas viscosity, cp; `None` where there is no free gas.
    pub mu_g_cp: Option<f64>,
}

/// The water beside a fluid table: Bw = Bw_ref exp[cw (p_ref - p)].
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct TableWater {
    /// Volume factor at the reference pressure, rb/STB.
    pub bw_rb_stb: f64,
    /// Reference pressure, psia.
    pub reference_psia: f64,
    /// Compressibility, 1/psi; zero for a constant volume factor.
    pub compressibility_1_psi: f64,
    /// Viscosity, cp.
    pub mu_w_cp: f64,
}

impl TableWater {
    /// Water that does not yield to pressure.
    pub fn constant(bw_rb_stb: f64, mu_w_cp: f64) -> Self {
        Self { bw_rb_stb, reference_psia: 0.0, compressibility_1_psi: 0.0, mu_w_cp }
    }
}

/// A piecewise straight line through points of rising abscissa.
#[derive(Debug, Clone)]
struct Line {
    x: Vec<f64>,
    y: Vec<f64>,
}

impl Line {
    fn new(points: impl Iterator<Item = (f64, f64)>) -> Self {
        let (x, y) = points.unzip();
        Self { x, y }
    }

    /// The value at `x`; the first and last stretch go on straight.
    fn at(&self, x: f64) -> f64 {
        let n = self.x.len();
        if n == 1 {
            return self.y[0];
        }
        let i = self.x.partition_point(|&node| node <= x).clamp(1, n - 1);
        let (x0, x1, y0, y1) = (self.x[i - 1], self.x[i], self.y[i - 1], self.y[i]);
        y0 + (y1 - y0) * ((x - x0) / (x1 - x0))
    }

    fn first(&self) -> (f64, f64) {
        (self.x[0], self.y[0])
    }

    fn last(&self) -> (f64, f64) {
        (self.x[self.x.len() - 1], self.y[self.y.len() - 1])
    }

    /// Slope of the last stretch, zero for a single point.
    fn last_slope(&self) -> f64 {
        let n = self.x.len();
        if n < 2 { 0.0 } else { (self.y[n - 1] - self.y[n - 2]) / (self.x[n - 1] - self.x[n - 2]) }
    }

    /// The value at `x >= x[0]`; beyond the last point it goes on exponentially with the last slope, so that it stays positive.
    fn at_or_beyond(&self, x: f64) -> f64 {
        let (x_last, y_last) = self.last();
        if x <= x_last { self.at(x) } else { y_last * (self.last_slope() / y_last * (x - x_last)).exp() }
    }
}

/// A fluid given as rows of measured properties at tank temperature.
#[derive(Debug, Clone)]
pub struct FluidTable {
    /// Rs against p, saturated.
    rs: Line,
    /// p against Rs, saturated.
    bubble_point: Line,
    /// Bo against p, saturated.
    bo: Line,
    /// Oil viscosity against p, saturated.
    mu_o: Line,
    /// Bo/Bob against p - pb.
    volume_ratio: Line,
    /// mu/mu_b against p - pb.
    viscosity_ratio: Line,
    bg: Line,
    mu_g: Line,
    water: TableWater,
    range_psia: (f64, f64),
}

impl FluidTable {
    /// Builds the table from at least two rows, in any order.
    ///
    /// # Errors
    /// Values that are not positive numbers, equal pressures, gas that does not rise with pressure below the bubble point, fewer
    /// than two saturated rows, no gas properties. All keyed `table`.
    pub fn new(rows: &[FluidTableRow], water: TableWater) -> Result<Self, Vec<Fault>> {
        let mut rows = rows.to_vec();
        rows.sort_by(|a, b| a.pressure_psia.total_cmp(&b.pressure_psia));
        let faults = faults_of(&rows, &water);
        if !faults.is_empty() {
            return Err(faults);
        }
        let top_rs = rows.iter().fold(0.0_f64, |top, row| top.max(row.rs_scf_stb));
        let bubble_row = rows.iter().position(|row| same_gas(row.rs_scf_stb, top_rs)).unwrap_or(rows.len() - 1);
        let (saturated, above) = (&rows[..=bubble_row], &rows[bubble_row..]);
        if saturated.len() < 2 {
            return Err(vec![Fault::new("table", "there are fewer than two rows at or below the bubble point")]);
        }
        let bubble = rows[bubble_row];
        let column = |part: &[FluidTableRow], value: fn(&FluidTableRow) -> f64| {
            Line::new(part.iter().map(|row| (row.pressure_psia, value(row))).collect::<Vec<_>>().into_iter())
        };
        Ok(Self {
            rs: column(saturated, |row| row.rs_scf_stb),
            bubble_point: Line::new(saturated.iter().map(|row| (row.rs_scf_stb, row.pressure_psia))),
            bo: column(saturated, |row| row.bo_rb_stb),
            mu_o: column(saturated, |row| row.mu_o_cp),
            volume_ratio: Line::new(
                above.iter().map(|row| (row.pressure_psia - bubble.pressure_psia, row.bo_rb_stb / bubble.bo_rb_stb)),
            ),
            viscosity_ratio: Line::new(
                above.iter().map(|row| (row.pressure_psia - bubble.pressure_psia, row.mu_o_cp / bubble.mu_o_cp)),
            ),
            bg: Line::new(rows.iter().filter_map(|row| Some((row.pressure_psia, row.bg_rb_scf?)))),
            mu_g: Line::new(rows.iter().filter_map(|row| Some((row.pressure_psia, row.mu_g_cp?)))),
            water,
            range_psia: (rows[0].pressure_psia, rows[rows.len() - 1].pressure_psia),
        })
    }

    /// Bubble point of the table's oil, psia.
    pub fn initial_bubble_point_psia(&self) -> f64 {
        self.rs.last().0
    }
}

fn same_gas(a: f64, b: f64) -> bool {
    (a - b).abs() <= 1e-9 * b
}

fn faults_of(rows: &[FluidTableRow], water: &TableWater) -> Vec<Fault> {
    let mut faults = Vec::new();
    let mut say = |text: String| faults.push(Fault::new("table", text));
    if rows.len() < 2 {
        say("a fluid table needs at least two rows".to_owned());
    }
    let positive = |value: f64| value.is_finite() && value > 0.0;
    for row in rows {
        let p = row.pressure_psia;
        let columns = [
            ("pressure", Some(p)),
            ("oil volume factor", Some(row.bo_rb_stb)),
            ("oil viscosity", Some(row.mu_o_cp)),
            ("gas volume factor", row.bg_rb_scf),
            ("gas viscosity", row.mu_g_cp),
        ];
        for (what, value) in columns {
            if value.is_some_and(|value| !positive(value)) {
                say(format!("at {p} psia the {what} is {}: not a positive number", value.unwrap_or(f64::NAN)));
            }
        }
        if !(row.rs_scf_stb.is_finite() && row.rs_scf_stb >= 0.0) {
            say(format!("at {p} psia the solution gas-oil ratio is {}", row.rs_scf_stb));
        }
    }
    let mut at_top = false;
    for pair in rows.windows(2) {
        let (low, high) = (&pair[0], &pair[1]);
        let p = high.pressure_psia;
        if high.pressure_psia <= low.pressure_psia {
            say(format!("two rows have the pressure {p} psia"));
        }
        let level = same_gas(high.rs_scf_stb, low.rs_scf_stb);
        if high.rs_scf_stb < low.rs_scf_stb && !level {
            say(format!("at {p} psia the solution gas-oil ratio is lower than in the row of lower pressure"));
        } else if at_top && !level {
            say(format!("at {p} psia the solution gas-oil ratio rises again above a stretch where it is level"));
        }
        at_top |= level;
    }
    for (what, count) in [
        ("gas volume factor", rows.iter().filter(|row| row.bg_rb_scf.is_some()).count()),
        ("gas viscosity", rows.iter().filter(|row| row.mu_g_cp.is_some()).count()),
    ] {
        if count == 0 {
            say(format!("no row has a {what}"));
        }
    }
    if !positive(water.bw_rb_stb) || !positive(water.mu_w_cp) {
        say("the water needs a positive volume factor and viscosity".to_owned());
    }
    if !(0.0..1e-3).contains(&water.compressibility_1_psi) || !water.reference_psia.is_finite() {
        say(format!("the water's compressibility {} 1/psi is not possible", water.compressibility_1_psi));
    }
    faults
}

impl ReservoirFluid for FluidTable {
    fn rs_saturated(&self, pressure_psia: f64) -> f64 {
        self.rs.at(pressure_psia).max(0.0)
    }

    fn bubble_point_psia(&self, rs_scf_stb: f64) -> f64 {
        self.bubble_point.at(rs_scf_stb).max(0.0)
    }

    fn bo(&self, pressure_psia: f64, rs_scf_stb: f64) -> f64 {
        let bubble_point_psia = self.bubble_point_psia(rs_scf_stb);
        let at_bubble = self.bo.at(bubble_point_psia.max(self.bo.first().0));
        at_bubble * self.volume_ratio.at_or_beyond((pressure_psia - bubble_point_psia).max(0.0))
    }

    fn mu_o(&self, pressure_psia: f64, rs_scf_stb: f64) -> f64 {
        let bubble_point_psia = self.bubble_point_psia(rs_scf_stb);
        // Above the last saturated row the viscosity keeps that row's value: its falling line would reach zero.
        let at_bubble = self.mu_o.at(bubble_point_psia.clamp(self.mu_o.first().0, self.mu_o.last().0));
        at_bubble * self.viscosity_ratio.at_or_beyond((pressure_psia - bubble_point_psia).max(0.0))
    }

    fn bg(&self, pressure_psia: f64) -> f64 {
        let (low, high) = (self.bg.first(), self.bg.last());
        let p = pressure_psia.max(1.0);
        if p < low.0 {
            low.1 * low.0 / p
        } else if p > high.0 {
            high.1 * high.0 / p
        } else {
            self.bg.at(p)
        }
    }

    fn mu_g(&self, pressure_psia: f64) -> f64 {
        self.mu_g.at(pressure_psia.clamp(self.mu_g.first().0, self.mu_g.last().0))
    }

    fn bw(&self, pressure_psia: f64) -> f64 {
        let water = &self.water;
        water.bw_rb_stb * (water.compressibility_1_psi * (water.reference_psia - pressure_psia)).exp()
    }

    fn mu_w(&self, _pressure_psia: f64) -> f64 {
        self.water.mu_w_cp
    }

    fn pressure_range_psia(&self) -> (f64, f64) {
        self.range_psia
    }
}
