//! Checks of the program from outside, one binary for all of them.

mod published;
mod reference;
