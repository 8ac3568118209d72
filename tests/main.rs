//! Checks of the program from outside, one binary for all of them.

mod diagnostics;
mod language;
mod published;
mod reference;
