//! Checks of the program from outside, one binary for all of them.

#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::panic,
    reason = "a test that finds something missing should stop there"
)]

mod commands;
mod diagnostics;
mod language;
mod properties;
mod published;
mod reference;
mod support;
