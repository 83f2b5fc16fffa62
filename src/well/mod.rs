//! Where inflow and tubing meet: stable rate, flow margin.

mod meeting;
mod model;
mod spec;

pub use meeting::{Crossing, Landscape, crossings, follow_top, right_crossing, survey, top_near};
pub use model::{Gauge, Surroundings, TestCheck, WellModel, WellNow, drainage_term, oil_gradient_psi_ft};
pub use spec::WellSpec;
