//! Lines that wells share: the pressure at which what flows in and what the table says agree.
//!
//! # Method
//! Each well in turn finds its rate while the line feels a change of its own only as far as the others do not give way; the turns go on
//! until no pressure moves any more (Gauss and Seidel). More flow means more pressure, and more pressure less flow, so that they close in
//! on the one answer. How far the others give way is taken from the slopes of their curves where they flow now, `dq/dp = -(dh/dp)/(dh/dq)`:
//! with it a well's flow margin reaches zero where the wells *together* have no answer any more that keeps it flowing.

use super::dynamics::Dynamics;
use crate::tank::TankState;
use crate::well::Line;

/// Turns after which lines are taken as settled.
const MOST_TURNS: usize = 60;
/// Change of line pressure at which a well's answer to it is read, psi.
const NUDGE_PSI: f64 = 1.0;

impl Dynamics<'_> {
    /// Settles all shared lines at a tank state.
    pub(super) fn settle_lines(&self, tank: &TankState) {
        if self.setup.lines.is_empty() {
            return;
        }
        for _ in 0..MOST_TURNS {
            let mut moved_psi = 0.0_f64;
            for w in 0..self.setup.wells.len() {
                let Some(line) = self.setup.line_of[w].map(|l| &self.setup.lines[l]) else { continue };
                let now = self.well_now(w, tank);
                let brings = line.rate.of(&now.stream(self.rate(w, &now)));
                let before = std::mem::replace(&mut self.memory.into_line.borrow_mut()[w], brings);
                let others = self.others(w);
                moved_psi =
                    moved_psi.max((line.pressure_psia(others + brings) - line.pressure_psia(others + before)).abs());
            }
            if moved_psi < self.memory.crossing_psi.get() {
                break;
            }
        }
        for w in 0..self.setup.wells.len() {
            let gives_way = self.gives_way(w, tank);
            self.memory.gives_way.borrow_mut()[w] = gives_way;
        }
    }

    /// The line that a well faces.
    pub(super) fn line(&self, w: usize) -> Line<'_> {
        match self.setup.line_of[w] {
            None => Line::Fixed(self.setup.wells[w].spec.line_pressure_psia),
            Some(l) => {
                let line = &self.setup.lines[l];
                let (others, own) = (self.others(w), self.memory.into_line.borrow()[w]);
                let gives_way = self.memory.gives_way.borrow();
                let way: f64 = self.fellows(w).map(|v| gives_way[v]).sum();
                Line::Shared { line, others, own, felt: 1.0 / (1.0 + line.slope(others + own) * way) }
            }
        }
    }

    /// The other wells on a well's line.
    fn fellows(&self, w: usize) -> impl Iterator<Item = usize> + '_ {
        let line = self.setup.line_of[w];
        (0..self.setup.wells.len()).filter(move |&v| v != w && line.is_some() && self.setup.line_of[v] == line)
    }

    /// What they bring into it.
    fn others(&self, w: usize) -> f64 {
        let into = self.memory.into_line.borrow();
        self.fellows(w).map(|v| into[v]).sum()
    }

    /// How much less a well brings per psi more in its line: nothing while something else than the line holds its rate.
    fn gives_way(&self, w: usize, tank: &TankState) -> f64 {
        let (Some(l), true) = (self.setup.line_of[w], self.modes.wells[w].is_line()) else { return 0.0 };
        let now = self.well_now(w, tank);
        let rate = self.rate(w, &now);
        let psia = now.line_psia(rate);
        let here = now.against(Line::Fixed(psia));
        let per_psi = (here.height_psi(rate) - now.against(Line::Fixed(psia + NUDGE_PSI)).height_psi(rate)) / NUDGE_PSI;
        let slope = -here.height_slope(rate);
        if slope > 0.0 && per_psi > 0.0 { self.setup.lines[l].rate.of(&now.stream(per_psi / slope)) } else { 0.0 }
    }
}
