//! Scalar expressions in symbols: one arena holds them, a tape evaluates them over any number type.
//!
//! The stage before builds nodes in an [`Arena`]; whoever needs values compiles a root to a [`Tape`] and runs it over
//! `f64` for numbers, over [`Interval`] for bounds, or over [`Series`] for the behaviour just right of a lag. Nothing here knows syntax or units:
//! numbers are in coherent SI units, angles in radians.

mod arena;
mod function;
mod interval;
mod number;
mod series;
mod show;
mod tape;

#[cfg(test)]
mod properties;

pub use arena::{Arena, Node, NodeId, Operand, Symbol};
pub use function::Function;
pub use interval::Interval;
pub use number::Number;
pub use series::{Series, SeriesTerm, Unknown};
pub use show::show;
pub use tape::Tape;
