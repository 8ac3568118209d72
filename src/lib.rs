//! Outcross: a language and compiler for the reliability of structures and machines under random load.

pub mod covariance;
pub mod diagnostics;
pub mod expression;
pub mod language;
pub mod numerics;
pub mod source;
pub mod units;
