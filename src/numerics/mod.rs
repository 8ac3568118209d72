//! Special functions and quadrature: thin fronts to crates, our own code only where none serves.
//!
//! Every function states its domain, its greatest measured error and the reference it was measured against. The
//! tables of that measurement stand in `tests/reference/`, computed with at least forty digits, and the tests hold
//! the code to them. Outside its domain a function gives NaN or `None`, as its documentation says; none panics.

pub mod bessel;
pub mod gamma;
pub mod matern;
pub mod normal;
pub mod quadrature;
pub mod root;
