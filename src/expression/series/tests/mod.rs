//! The tests of series, by what they are held to.

mod edges;
mod reference;
