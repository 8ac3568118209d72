//! From moments to probabilities: crossings, first passage, and the judgement of what a code demands.
//!
//! Nothing here knows text or units. Every small probability is carried as its logarithm.

pub mod crossings;
pub mod extremes;
pub mod first_passage;
pub mod probability;
pub mod verdict;
