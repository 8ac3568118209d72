//! Gusts as isotropic turbulence.

use super::{Density, octuples};
use crate::covariance::kernel::{Estimate, InvalidParameter, positive};
use crate::covariance::spectral::Tail;
use std::f64::consts::TAU;
use std::fmt;

/// f G(f) = C 4 x / (1 + 70.8 x²)^(5/6), x = f L / U: T. von Kármán (1948), Progress in the statistical theory of
/// turbulence, Proc. Natl. Acad. Sci. 34, as T. Burton et al. (2001), Wind Energy Handbook, eq. 2.24, print it. Their
/// 70.8 is rounded and leaves an area of 0.99986: C scales it to 1.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct VonKarman {
    length: f64,
    mean_speed: f64,
}

/// Before x².
const ROUNDED: f64 = 70.8;

impl VonKarman {
    /// From the length scale in m and the mean speed in m/s.
    pub fn new(length: f64, mean_speed: f64) -> Result<Self, InvalidParameter> {
        const NAME: &str = "von_karman";
        Ok(Self {
            length: positive(NAME, "length", length)?,
            mean_speed: positive(NAME, "mean_speed", mean_speed)?,
        })
    }

    /// sqrt(70.8) x over omega, in s.
    fn time(&self) -> f64 {
        ROUNDED.sqrt() * self.length / (TAU * self.mean_speed)
    }
}

/// The integral of (1 + y²)^(-5/6) over y from 0: sqrt(pi)/2 Gamma(1/3)/Gamma(5/6).
const AREA: f64 = 2.103_273_157_988_180_5;

impl Density for VonKarman {
    fn density(&self, omega: f64) -> f64 {
        let y = self.time() * omega;
        self.time() / AREA * (1.0 + y * y).powf(-5.0 / 6.0)
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
        octuples(1.0 / self.time())
    }
}

impl fmt::Display for VonKarman {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        let Self { length, mean_speed } = self;
        write!(out, "von_karman(length: {length} m, mean_speed: {mean_speed} m/s)")
    }
}
