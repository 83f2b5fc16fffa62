//! Quantities: "3600 psia" in, plain numbers in oilfield units inside, field or metric out.

pub mod constants;
