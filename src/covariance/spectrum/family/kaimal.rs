//! Gusts in the surface layer.

use super::{Density, octuples};
use crate::covariance::kernel::{Estimate, InvalidParameter, positive};
use crate::covariance::spectral::Tail;
use std::f64::consts::TAU;
use std::fmt;

/// f G(f) = 4 x / (1 + 6 x)^(5/3), x = f L / U, of unit area: J. C. Kaimal, J. C. Wyngaard, Y. Izumi and O. R. Coté
/// (1972), Spectral characteristics of surface-layer turbulence, Q. J. R. Meteorol. Soc. 98, in the form of IEC 61400-1,
/// annex B (from memory).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Kaimal {
    length: f64,
    mean_speed: f64,
}

impl Kaimal {
    /// From the length scale in m and the mean speed in m/s.
    pub fn new(length: f64, mean_speed: f64) -> Result<Self, InvalidParameter> {
        const NAME: &str = "kaimal";
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

impl Density for Kaimal {
    fn density(&self, omega: f64) -> f64 {
        let time = self.time();
        let root = (1.0 + 6.0 * time * omega).cbrt();
        4.0 * time / (root * root * root * root * root)
    }

    /// 1: the only finite one.
    fn moment(&self, _order: u32) -> Estimate {
        Estimate::closed(1.0)
    }

    fn tail(&self) -> Tail {
        Tail::Power(5.0 / 3.0)
    }

    fn head(&self) -> f64 {
        0.0
    }

    fn grid(&self) -> Vec<f64> {
        octuples(1.0 / (6.0 * self.time()))
    }
}

impl fmt::Display for Kaimal {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        let Self { length, mean_speed } = self;
        write!(out, "kaimal(length: {length} m, mean_speed: {mean_speed} m/s)")
    }
}
