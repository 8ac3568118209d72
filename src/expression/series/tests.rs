//! Series against reference values.
