//! exp(-u): continuous, nowhere differentiable (the Ornstein-Uhlenbeck process).

use std::f64::consts::FRAC_2_PI;
use std::fmt;

use super::parameter::{self, InvalidParameter};
use super::polynomial;
use super::{Correlation, Rough};
use crate::expression::Series;

/// The correlation function exp(-u), u = tau / length.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Exponential {
    length: f64,
}

impl Exponential {
    /// From its length in s.
    pub fn new(length: f64) -> Result<Self, InvalidParameter> {
        Ok(Self {
            length: parameter::positive("exponential", "length", length)?,
        })
    }

    /// The length, in s.
    pub fn length(&self) -> f64 {
        self.length
    }
}

impl Correlation for Exponential {
    fn value(&self, lag: f64) -> f64 {
        (-lag / self.length).exp()
    }

    fn loss(&self, lag: f64) -> f64 {
        -(-lag / self.length).exp_m1()
    }

    fn expansion(&self, order: f64) -> Series {
        polynomial::series(order, polynomial::powers(1.0, |k| -1.0 / (k * self.length)))
    }

    fn taylor(&self, lag: f64, order: usize) -> Vec<f64> {
        let value = self.value(lag);
        let coefficients = polynomial::powers(1.0, |k| -1.0 / (k * self.length)).take(order + 1);
        coefficients.map(|(_, coefficient)| value * coefficient).collect()
    }

    fn density(&self, omega: f64) -> Option<f64> {
        Some(FRAC_2_PI * self.length / (1.0 + (omega * self.length).powi(2)))
    }

    fn scale_of_fluctuation(&self) -> f64 {
        2.0 * self.length
    }

    fn moments(&self) -> [f64; 4] {
        [1.0, f64::INFINITY, f64::INFINITY, f64::INFINITY]
    }

    fn roughness(&self) -> Option<Rough> {
        Some(Rough { exponent: 1.0, log: 0 })
    }

    fn times(&self) -> (f64, f64) {
        (self.length, self.length)
    }
}

impl fmt::Display for Exponential {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(out, "exponential(length: {} s)", self.length)
    }
}
