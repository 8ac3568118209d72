//! What must hold for every model, on random ones.

mod covariance;
mod models;
mod numbers;
mod passage;
mod spectra;
mod units;
mod validity;
mod writings;
