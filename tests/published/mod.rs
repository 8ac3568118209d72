//! Checks against published values, one file per source.

mod units_nist_sp811;
