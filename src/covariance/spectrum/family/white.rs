//! White noise.

use super::Density;
use crate::covariance::kernel::{Estimate, InvalidParameter};
use crate::covariance::spectral::{Rational, Tail};
use std::fmt;

/// One level at all frequencies: no process of finite power, but an excitation.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct White {
    level: f64,
}

impl White {
    /// From the one-sided density, per rad/s.
    pub fn new(level: f64) -> Result<Self, InvalidParameter> {
        Ok(Self {
            level: super::level("white", level)?,
        })
    }
}

impl Density for White {
    fn density(&self, _omega: f64) -> f64 {
        self.level
    }

    fn moment(&self, _order: u32) -> Estimate {
        Estimate::closed(f64::INFINITY)
    }

    fn tail(&self) -> Tail {
        Tail::Power(0.0)
    }

    fn head(&self) -> f64 {
        0.0
    }

    fn grid(&self) -> Vec<f64> {
        vec![0.0, 1.0]
    }

    fn rational(&self) -> Option<Rational> {
        Some(Rational {
            gain: self.level,
            zeros: Vec::new(),
            poles: Vec::new(),
        })
    }
}

impl fmt::Display for White {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(out, "white(level: {})", self.level)
    }
}
