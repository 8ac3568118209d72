//! The spectrum of a fully developed wind sea.

use super::Density;
use crate::covariance::kernel::{Estimate, InvalidParameter, positive};
use crate::covariance::spectral::Tail;
use std::f64::consts::TAU;
use std::fmt;

/// 5/16 hs² wp⁴ w^-5 exp(-5/4 (wp/w)⁴) of the significant wave height hs and the peak frequency wp = 2 pi / tp: W. J.
/// Pierson and L. Moskowitz (1964), A proposed spectral form for fully developed wind seas, J. Geophys. Res. 69, in
/// the form with two parameters of DNV-RP-C205, sec. 3.5.5 (from memory).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct PiersonMoskowitz {
    hs: f64,
    tp: f64,
}

impl PiersonMoskowitz {
    /// From the significant wave height in m and the peak period in s.
    pub fn new(hs: f64, tp: f64) -> Result<Self, InvalidParameter> {
        const NAME: &str = "pierson_moskowitz";
        Ok(Self {
            hs: positive(NAME, "hs", hs)?,
            tp: positive(NAME, "tp", tp)?,
        })
    }
}

/// x^-5 exp(-5/4 x^-4), the form over x = w/wp.
pub(super) fn form(x: f64) -> f64 {
    // Below it the exponential leaves the range of a double, and x^-5 may.
    if x < 0.2 {
        return 0.0;
    }
    let inverse = 1.0 / x;
    let square = inverse * inverse;
    let fourth = square * square;
    fourth * inverse * (-1.25 * fourth).exp()
}

/// The integral of x^n over the form, n at most 3: Gamma(1 - n/4) (5/4)^(n/4 - 1) / 4.
pub(super) fn integral(order: u32) -> f64 {
    let quarter = 0.25 * f64::from(order);
    0.25 * 1.25_f64.powf(quarter - 1.0) * libm::tgamma(1.0 - quarter)
}

/// Frequencies over the peak's that do justice to the form.
pub(super) const GRID: [f64; 7] = [0.0, 0.4, 0.7, 1.0, 1.5, 3.0, 8.0];

impl Density for PiersonMoskowitz {
    fn density(&self, omega: f64) -> f64 {
        let peak = TAU / self.tp;
        0.3125 * self.hs * self.hs / peak * form(omega / peak)
    }

    fn moment(&self, order: u32) -> Estimate {
        let ratio = integral(order) / integral(0);
        Estimate::closed(self.hs * self.hs / 16.0 * (TAU / self.tp).powi(order as i32) * ratio)
    }

    fn tail(&self) -> Tail {
        Tail::Power(5.0)
    }

    fn head(&self) -> f64 {
        f64::INFINITY
    }

    fn grid(&self) -> Vec<f64> {
        GRID.map(|x| x * TAU / self.tp).to_vec()
    }
}

impl fmt::Display for PiersonMoskowitz {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(out, "pierson_moskowitz(hs: {}, tp: {} s)", self.hs, self.tp)
    }
}
