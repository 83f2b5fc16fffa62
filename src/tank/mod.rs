//! The reservoir compartment: inventories in, pressure, saturations, producing GOR and water cut out.

mod spec;

pub use spec::{ProducedSpec, TankSpec, WaterModel};
