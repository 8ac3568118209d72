//! A program that does nothing: the baseline of start-up.

fn main() {}
