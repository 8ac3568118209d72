//! The intermediate representation: sources, operators, linear forms, kernels and their moments.

pub mod coherence;
pub mod existence;
mod first_moment;
pub mod form;
pub mod frequency;
pub mod kernel;
pub mod moments;
pub mod response;
pub mod source;
pub mod spectral;
pub mod spectrum;
pub mod validity;
