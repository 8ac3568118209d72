//! exp(-u^2 / 2): analytic, and the limit of Matérn and rational quadratic for large shapes.

use std::f64::consts::{FRAC_2_PI, PI};
use std::fmt;

use super::parameter::{self, InvalidParameter};
use super::polynomial;
use super::{Correlation, Rough};
use crate::expression::Series;

/// The correlation function exp(-u^2 / 2), u = tau / length.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SquaredExponential {
    length: f64,
}

impl SquaredExponential {
    /// From its length in s.
    pub fn new(length: f64) -> Result<Self, InvalidParameter> {
        Ok(Self {
            length: parameter::positive("squared_exponential", "length", length)?,
        })
    }

    /// The length, in s.
    pub fn length(&self) -> f64 {
        self.length
    }
}

impl Correlation for SquaredExponential {
    fn value(&self, lag: f64) -> f64 {
        let u = lag / self.length;
        (-0.5 * u * u).exp()
    }

    fn loss(&self, lag: f64) -> f64 {
        let u = lag / self.length;
        -(-0.5 * u * u).exp_m1()
    }

    fn expansion(&self, order: f64) -> Series {
        let square = self.length * self.length;
        polynomial::series(order, polynomial::powers(2.0, |k| -0.5 / (k * square)))
    }

    /// From rho' = -(tau / l^2) rho, coefficient by coefficient: the recurrence of the Hermite polynomials.
    fn taylor(&self, lag: f64, order: usize) -> Vec<f64> {
        let mut coefficients = vec![self.value(lag)];
        let (mut before, mut last) = (0.0, self.value(lag));
        for n in 1..=order {
            let next = -(lag / self.length * last + before / self.length) / (n as f64 * self.length);
            coefficients.push(next);
            (before, last) = (last, next);
        }
        coefficients
    }

    fn density(&self, omega: f64) -> Option<f64> {
        Some(FRAC_2_PI.sqrt() * self.length * (-0.5 * (omega * self.length).powi(2)).exp())
    }

    fn scale_of_fluctuation(&self) -> f64 {
        (2.0 * PI).sqrt() * self.length
    }

    fn moments(&self) -> [f64; 4] {
        let rate = 1.0 / self.length;
        [1.0, FRAC_2_PI.sqrt() * rate, rate.powi(2), 3.0 * rate.powi(4)]
    }

    fn roughness(&self) -> Option<Rough> {
        None
    }

    fn times(&self) -> (f64, f64) {
        (self.length, self.length)
    }
}

impl fmt::Display for SquaredExponential {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(out, "squared_exponential(length: {} s)", self.length)
    }
}
