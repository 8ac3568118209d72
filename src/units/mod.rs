//! Dimensions, the unit table, and quantities as people read them.
//!
//! Inside the program every number is in coherent SI units (angles in rad, frequencies in rad/s). A [`Unit`] converts
//! at the border, where a number is read or shown; a [`Dimension`] is what the checker compares.

mod dimension;
mod names;
mod quantity;
mod resolve;
mod scale;
mod spelling;
mod suggest;
mod table;
mod unit;

pub use dimension::{Base, Dimension, Exponent};
pub use quantity::{show, show_number, time_in_words};
pub use resolve::{Cause, UnknownSymbol, resolve};
pub use scale::Scale;
pub use table::{Entry, entries};
pub use unit::Unit;

#[cfg(test)]
mod tests;
