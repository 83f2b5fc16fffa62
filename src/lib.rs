//! Forecasts for naturally flowing oil wells on one solution-gas-drive compartment.
//!
//! Data flows one way through the modules, in the order in which they are listed here: a lower layer
//! never imports a higher one. Inside the program every dimensional `f64` is in oilfield units, and the
//! unit is part of its name (`pressure_psia`, `rate_stb_d`).

pub mod cli;
pub mod elementary;
pub mod fault;
pub mod fluid;
pub mod forecast;
pub mod inflow;
pub mod report;
pub mod rock;
pub mod roots;
pub mod scenario;
pub mod statistics;
pub mod study;
pub mod tank;
pub mod tubing;
pub mod units;
pub mod well;
