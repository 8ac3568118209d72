//! cos(omega tau): a sine wave of random phase and Rayleigh amplitude.

use std::fmt;

use super::parameter::{self, InvalidParameter};
use super::polynomial;
use super::{Correlation, Rough};
use crate::covariance::kernel::{Line, Peak};
use crate::expression::Series;

/// The correlation function cos(omega tau).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Harmonic {
    frequency: f64,
}

impl Harmonic {
    /// From its angular frequency in rad/s.
    pub fn new(frequency: f64) -> Result<Self, InvalidParameter> {
        Ok(Self {
            frequency: parameter::positive("harmonic", "frequency", frequency)?,
        })
    }

    /// The angular frequency, in rad/s.
    pub fn frequency(&self) -> f64 {
        self.frequency
    }

    /// The coefficients of h^0, ..., h^order in cos(frequency (lag + h)), at any frequency.
    pub(super) fn carrier(frequency: f64, lag: f64, order: usize) -> Vec<f64> {
        let (sine, cosine) = parameter::phase(frequency, lag).sin_cos();
        let derivatives = [cosine, -sine, -cosine, sine].into_iter().cycle();
        let factors = polynomial::powers(1.0, |k| frequency / k);
        derivatives
            .zip(factors)
            .take(order + 1)
            .map(|(derivative, (_, factor))| derivative * factor)
            .collect()
    }
}

impl Correlation for Harmonic {
    fn value(&self, lag: f64) -> f64 {
        parameter::phase(self.frequency, lag).cos()
    }

    fn loss(&self, lag: f64) -> f64 {
        2.0 * (0.5 * parameter::phase(self.frequency, lag)).sin().powi(2)
    }

    fn expansion(&self, order: f64) -> Series {
        let square = self.frequency * self.frequency;
        polynomial::series(
            order,
            polynomial::powers(2.0, |k| -square / (2.0 * k * (2.0 * k - 1.0))),
        )
    }

    fn taylor(&self, lag: f64, order: usize) -> Vec<f64> {
        Self::carrier(self.frequency, lag, order)
    }

    fn density(&self, _: f64) -> Option<f64> {
        None
    }

    /// Zero: the integral over longer and longer windows swings about it.
    fn scale_of_fluctuation(&self) -> f64 {
        0.0
    }

    fn moments(&self) -> [f64; 4] {
        [1.0, self.frequency, self.frequency.powi(2), self.frequency.powi(4)]
    }

    fn roughness(&self) -> Option<Rough> {
        None
    }

    fn times(&self) -> (f64, f64) {
        (1.0 / self.frequency, 1.0 / self.frequency)
    }

    fn fades(&self) -> bool {
        false
    }

    fn peaks(&self) -> Vec<Peak> {
        Vec::new()
    }

    fn lines(&self) -> Vec<Line> {
        vec![Line {
            frequency: self.frequency,
            power: 1.0,
        }]
    }
}

impl fmt::Display for Harmonic {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(out, "harmonic(frequency: {} rad/s)", self.frequency)
    }
}
