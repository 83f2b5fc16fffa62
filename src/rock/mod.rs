//! Relative permeability and compressibility of the rock.

mod corey;

pub use corey::{CoreySpec, RelativePermeability};
