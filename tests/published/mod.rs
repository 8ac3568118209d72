//! Checks against published values, one file per source.

mod kernels_rasmussen_williams;
mod kernels_rice_low_pass;
mod kernels_vanmarcke_moments;
mod kernels_vanmarcke_random_fields;
mod units_nist_sp811;
