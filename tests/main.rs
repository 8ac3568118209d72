//! Checks of the program from outside, one binary for all of them.

<<<<<<< HEAD
mod diagnostics;
=======
#![allow(
    clippy::unwrap_used,
    clippy::expect_used,
    clippy::panic,
    reason = "a test that finds nothing should stop there"
)]

mod commands;
>>>>>>> 339cfe4 (Tests of the program from outside; entries per unit of the reference period; verdicts outlive closed pipes)
mod language;
mod published;
mod reference;
