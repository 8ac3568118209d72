//! A system with one real pole: it forgets exponentially.

use super::oscillator::BEYOND;
use super::positive;
use crate::covariance::kernel::InvalidParameter;
use nalgebra::Complex;
use std::cmp::Ordering;
use std::fmt;

/// T x' + x = u: H = 1 / (1 + i omega T).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct FirstOrder {
    time_constant: f64,
}

impl FirstOrder {
    /// From its time constant in s.
    pub fn new(time_constant: f64) -> Result<Self, InvalidParameter> {
        Ok(Self {
            time_constant: positive("first_order", "time_constant", time_constant)?,
        })
    }

    /// The time constant, in s.
    pub fn time_constant(&self) -> f64 {
        self.time_constant
    }

    pub(super) fn transfer(&self, omega: f64) -> Complex<f64> {
        let x = omega * self.time_constant;
        let square = 1.0 + x * x;
        if square.is_finite() {
            Complex::new(1.0 / square, -x / square)
        } else {
            Complex::new(0.0, 0.0)
        }
    }

    pub(super) fn pole(&self) -> Complex<f64> {
        Complex::new(-1.0 / self.time_constant, 0.0)
    }

    pub(super) fn frequencies(&self) -> Vec<f64> {
        [1.0, BEYOND].map(|times| times / self.time_constant).to_vec()
    }

    pub(super) fn order(&self, other: &Self) -> Ordering {
        self.time_constant.total_cmp(&other.time_constant)
    }
}

impl fmt::Display for FirstOrder {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "first_order(time_constant: {} s)", self.time_constant)
    }
}
