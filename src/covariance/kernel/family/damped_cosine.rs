//! exp(-u) cos(omega tau): an exponential around a carrier frequency.

use std::f64::consts::PI;
use std::fmt;

use super::parameter::{self, InvalidParameter};
use super::polynomial;
use super::{Correlation, Rough};
use crate::covariance::kernel::Peak;
use crate::expression::Series;

/// The correlation function exp(-u) cos(omega tau), u = tau / length.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct DampedCosine {
    length: f64,
    frequency: f64,
}

impl DampedCosine {
    /// From its length in s and its angular frequency in rad/s.
    pub fn new(length: f64, frequency: f64) -> Result<Self, InvalidParameter> {
        Ok(Self {
            length: parameter::positive("damped_cosine", "length", length)?,
            frequency: parameter::positive("damped_cosine", "frequency", frequency)?,
        })
    }

    /// The length, in s.
    pub fn length(&self) -> f64 {
        self.length
    }

    /// The angular frequency, in rad/s.
    pub fn frequency(&self) -> f64 {
        self.frequency
    }

    /// The coefficients of h^0, h^1, ... in the real part of factor exp(p h), p = -1 / length + i frequency.
    fn wave(&self, (real, imaginary): (f64, f64)) -> impl Iterator<Item = f64> {
        let (decay, frequency) = (1.0 / self.length, self.frequency);
        (1..).scan((real, imaginary), move |(real, imaginary), n| {
            let n = f64::from(n);
            let this = *real;
            (*real, *imaginary) = (
                -(decay * *real + frequency * *imaginary) / n,
                (frequency * *real - decay * *imaginary) / n,
            );
            Some(this)
        })
    }
}

impl Correlation for DampedCosine {
    fn value(&self, lag: f64) -> f64 {
        (-lag / self.length).exp() * parameter::phase(self.frequency, lag).cos()
    }

    fn loss(&self, lag: f64) -> f64 {
        let u = lag / self.length;
        let sine = (0.5 * parameter::phase(self.frequency, lag)).sin();
        2.0 * (-u).exp() * sine * sine - (-u).exp_m1()
    }

    fn expansion(&self, order: f64) -> Series {
        polynomial::series(order, (0..).map(f64::from).zip(self.wave((1.0, 0.0))))
    }

    fn taylor(&self, lag: f64, order: usize) -> Vec<f64> {
        let (sine, cosine) = parameter::phase(self.frequency, lag).sin_cos();
        let decay = (-lag / self.length).exp();
        self.wave((decay * cosine, decay * sine)).take(order + 1).collect()
    }

    /// That of the exponential, moved by the frequency to either side.
    fn density(&self, omega: f64) -> Option<f64> {
        let peak = |offset: f64| 1.0 / (1.0 + (offset * self.length).powi(2));
        Some(self.length / PI * (peak(omega - self.frequency) + peak(omega + self.frequency)))
    }

    fn scale_of_fluctuation(&self) -> f64 {
        2.0 * self.length / (1.0 + (self.frequency * self.length).powi(2))
    }

    fn moments(&self) -> [f64; 4] {
        [1.0, f64::INFINITY, f64::INFINITY, f64::INFINITY]
    }

    fn roughness(&self) -> Option<Rough> {
        Some(Rough { exponent: 1.0, log: 0 })
    }

    fn times(&self) -> (f64, f64) {
        (self.length.min(1.0 / self.frequency), self.length)
    }

    fn peaks(&self) -> Vec<Peak> {
        vec![Peak {
            frequency: self.frequency,
            width: 1.0 / self.length,
        }]
    }
}

impl fmt::Display for DampedCosine {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(
            out,
            "damped_cosine(length: {} s, frequency: {} rad/s)",
            self.length, self.frequency
        )
    }
}
