//! The intermediate representation: sources, operators, linear forms, kernels and their moments.

mod first_moment;
pub mod form;
pub mod kernel;
pub mod moments;
pub mod source;
pub mod spectral;
pub mod spectrum;
