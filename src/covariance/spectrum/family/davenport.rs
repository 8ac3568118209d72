//! Gusts at any height.

use super::{Density, octuples};
use crate::covariance::kernel::{Estimate, InvalidParameter, positive};
use crate::covariance::spectral::Tail;
use std::f64::consts::TAU;
use std::fmt;

/// f G(f) = 2/3 x² / (1 + x²)^(4/3), x = f L / U, of unit area: A. G. Davenport (1961), The spectrum of horizontal
/// gustiness near the ground in high winds, Q. J. R. Meteorol. Soc. 87 (from memory). It begins with a power of the
/// frequency, so it leaves out the slow part of the wind.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Davenport {
    length: f64,
    mean_speed: f64,
}

impl Davenport {
    /// Davenport's length scale, in m.
    pub const LENGTH: f64 = 1200.0;

    /// From the length scale in m and the mean speed in m/s.
    pub fn new(length: f64, mean_speed: f64) -> Result<Self, InvalidParameter> {
        const NAME: &str = "davenport";
        Ok(Self {
            length: positive(NAME, "length", length)?,
            mean_speed: positive(NAME, "mean_speed", mean_speed)?,
        })
    }

    /// x over omega, in s.
    fn time(&self) -> f64 {
        self.length / (TAU * self.mean_speed)
    }
}

impl Density for Davenport {
    fn density(&self, omega: f64) -> f64 {
        let x = self.time() * omega;
        let form = if x > 1.0 {
            // x/(1 + x²)^(4/3), whose square would leave the range of a double.
            x.powf(-5.0 / 3.0) * (1.0 + 1.0 / (x * x)).powf(-4.0 / 3.0)
        } else {
            x * (1.0 + x * x).powf(-4.0 / 3.0)
        };
        2.0 / 3.0 * self.time() * form
    }

    /// 1: the only finite one.
    fn moment(&self, _order: u32) -> Estimate {
        Estimate::closed(1.0)
    }

    fn tail(&self) -> Tail {
        Tail::Power(5.0 / 3.0)
    }

    fn head(&self) -> f64 {
        1.0
    }

    fn grid(&self) -> Vec<f64> {
        octuples(1.0 / self.time())
    }
}

impl fmt::Display for Davenport {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        let Self { length, mean_speed } = self;
        write!(out, "davenport(length: {length} m, mean_speed: {mean_speed} m/s)")
    }
}
