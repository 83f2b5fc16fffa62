//! The time-stepping engine: calendar, limits, injectors, events, end of natural flow.

mod result;
mod spec;

pub use result::*;
pub use spec::*;
