//! Noise that is white within a band.

use super::Density;
use crate::covariance::kernel::{Estimate, InvalidParameter, demand, positive};
use crate::covariance::spectral::Tail;
use std::fmt;

/// One level between two frequencies, nothing elsewhere. From frequency 0 on it is ideal low-pass noise (Rice 1944-45,
/// Mathematical analysis of random noise, Bell Syst. Tech. J. 23 and 24, Part III; from memory).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct BandLimited {
    level: f64,
    lower: f64,
    upper: f64,
}

impl BandLimited {
    /// From the one-sided density, per rad/s, and the two frequencies in rad/s.
    pub fn new(level: f64, lower: f64, upper: f64) -> Result<Self, InvalidParameter> {
        const NAME: &str = "band_limited";
        let upper = positive(NAME, "upper", upper)?;
        Ok(Self {
            level: super::level(NAME, level)?,
            lower: demand(
                (0.0..upper).contains(&lower),
                NAME,
                "lower",
                lower,
                "0 or greater, and below `upper`",
            )?,
            upper,
        })
    }
}

impl Density for BandLimited {
    fn density(&self, omega: f64) -> f64 {
        if (self.lower..=self.upper).contains(&omega) {
            self.level
        } else {
            0.0
        }
    }

    /// G (b^(n+1) - a^(n+1)) / (n + 1), as (b - a) times the mean of a^i b^(n-i), which keeps its digits for narrow bands.
    fn moment(&self, order: u32) -> Estimate {
        let power = |exponent: u32, base: f64| base.powi(exponent as i32);
        let sum: f64 = (0..=order)
            .map(|i| power(i, self.lower) * power(order - i, self.upper))
            .sum();
        Estimate::closed(self.level * (self.upper - self.lower) * sum / f64::from(order + 1))
    }

    fn tail(&self) -> Tail {
        Tail::Faster
    }

    fn head(&self) -> f64 {
        if self.lower > 0.0 { f64::INFINITY } else { 0.0 }
    }

    fn grid(&self) -> Vec<f64> {
        crate::covariance::spectrum::rising(vec![0.0, self.lower, self.upper])
    }
}

impl fmt::Display for BandLimited {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        let Self { level, lower, upper } = self;
        write!(
            out,
            "band_limited(level: {level}, lower: {lower} rad/s, upper: {upper} rad/s)"
        )
    }
}
