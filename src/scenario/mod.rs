//! The scenario file: parse, check, resolve cases, point at the offending line.
