//! Pressure traverse: path, temperature, hydraulics.
//!
//! One file per hydraulics model behind one narrow trait ([`model::Hydraulics`]); a new model is a new file, a
//! variant of [`TubingMethod`] and a line where the traverse chooses.

pub mod ansari;
pub mod ansari_annular;
pub mod ansari_slug;
pub mod beggs_brill;
pub mod choke;
pub mod drift_flux;
pub mod friction;
pub mod gray;
pub mod groups;
pub mod hagedorn_brown;
pub mod hasan_kabir;
pub mod heat;
pub mod liquid;
pub mod minimum_curvature;
pub mod model;
pub mod mukherjee_brill;
pub mod no_slip;
pub mod restriction;

mod border;
mod march;
mod path;
mod path_checks;
mod range;
mod slide;
mod slope;
mod spec;
mod traverse;

pub use choke::{Choke, ChokeCheck, ChokeFlow, ChokeMethod, ChokeSpec, ChokeTest, Discharge};
pub use range::{Limited, OutsideRange, ValidRange};
pub use spec::{HeatSpec, RestrictionSpec, TubingMethod, TubingSection, TubingSpec};
pub use traverse::{Stream, Traverse, TraversePoint, Tubing};
