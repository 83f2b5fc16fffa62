//! Doubts about a laboratory's table of the fluid.

use super::doubts::doubt;
use crate::fluid::{BlackOil, FluidSpec};
use crate::forecast::{Doubt, DoubtKind};

/// What is unlikely in the table; nothing without one, or where the fluid cannot be used, which is an error elsewhere.
pub(super) fn lab(fluid: &FluidSpec, tank_temperature_degf: f64) -> Vec<Doubt> {
    if fluid.lab.is_none() {
        return Vec::new();
    }
    let Ok(fluid) = BlackOil::new(fluid, tank_temperature_degf) else { return Vec::new() };
    let notes = fluid.lab_notes().into_iter();
    notes.map(|note| doubt(DoubtKind::UnlikelyValue, "fluid", note.seen, note.cause, note.advice)).collect()
}
