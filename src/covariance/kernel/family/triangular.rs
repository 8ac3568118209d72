//! max(1 - u, 0): the correlation of a moving average of white noise.

use std::f64::consts::PI;
use std::fmt;

use super::parameter::{self, InvalidParameter};
use super::polynomial;
use super::{Correlation, Kink, Rough};
use crate::expression::Series;

/// The correlation function max(1 - u, 0), u = tau / length.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Triangular {
    length: f64,
}

impl Triangular {
    /// From its length in s.
    pub fn new(length: f64) -> Result<Self, InvalidParameter> {
        Ok(Self {
            length: parameter::positive("triangular", "length", length)?,
        })
    }

    /// The length, in s.
    pub fn length(&self) -> f64 {
        self.length
    }
}

impl Correlation for Triangular {
    fn value(&self, lag: f64) -> f64 {
        // The difference is taken before the quotient: near the end of the triangle it is exact.
        ((self.length - lag) / self.length).max(0.0)
    }

    fn loss(&self, lag: f64) -> f64 {
        (lag / self.length).min(1.0)
    }

    fn expansion(&self, order: f64) -> Series {
        polynomial::series(order, [(0.0, 1.0), (1.0, -1.0 / self.length)].into_iter())
    }

    fn taylor(&self, lag: f64, order: usize) -> Vec<f64> {
        let slope = if lag < self.length { -1.0 / self.length } else { 0.0 };
        let mut coefficients = vec![self.value(lag), slope];
        coefficients.resize(order + 1, 0.0);
        coefficients
    }

    /// (2 / pi)(1 - cos(omega l)) / (omega^2 l), a squared sinc.
    fn density(&self, omega: f64) -> Option<f64> {
        let half = parameter::phase(0.5 * omega, self.length);
        let sinc = if half == 0.0 { 1.0 } else { half.sin() / half };
        Some(self.length / PI * sinc * sinc)
    }

    fn scale_of_fluctuation(&self) -> f64 {
        self.length
    }

    /// The density falls like omega^-2, so that even lambda_1 diverges, logarithmically.
    fn moments(&self) -> [f64; 4] {
        [1.0, f64::INFINITY, f64::INFINITY, f64::INFINITY]
    }

    fn roughness(&self) -> Option<Rough> {
        Some(Rough { exponent: 1.0, log: 0 })
    }

    fn times(&self) -> (f64, f64) {
        (self.length, self.length)
    }

    fn kinks(&self) -> Vec<Kink> {
        vec![Kink {
            lag: self.length,
            derivative: 1,
        }]
    }
}

impl fmt::Display for Triangular {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(out, "triangular(length: {} s)", self.length)
    }
}
