//! The intermediate representation: sources, operators, linear forms, kernels and their moments.

pub mod form;
