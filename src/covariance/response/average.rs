//! The mean over the last while.

use super::positive;
use crate::covariance::kernel::InvalidParameter;
use nalgebra::Complex;
use std::cmp::Ordering;
use std::fmt;

/// The mean of the last T seconds, (1/T) times the integral of X from t - T to t: H = (1 - exp(-i omega T))/(i omega T)
/// (E. Vanmarcke 1983, Random Fields, ch. 5).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Average {
    over: f64,
}

impl Average {
    /// From the time it reaches back, in s.
    pub fn new(over: f64) -> Result<Self, InvalidParameter> {
        Ok(Self {
            over: positive("average", "over", over)?,
        })
    }

    /// The time it reaches back, in s.
    pub fn over(&self) -> f64 {
        self.over
    }

    /// exp(-i x) sin(x)/x, x = omega T/2.
    pub(super) fn transfer(&self, omega: f64) -> Complex<f64> {
        let x = 0.5 * omega * self.over;
        if !x.is_finite() {
            return Complex::new(0.0, 0.0);
        }
        let (sine, cosine) = x.sin_cos();
        let size = if x == 0.0 { 1.0 } else { sine / x };
        Complex::new(size * cosine, -size * sine)
    }

    pub(super) fn frequencies(&self) -> Vec<f64> {
        [1.0, 2.0, 8.0].map(|times| times / self.over).to_vec()
    }

    pub(super) fn order(&self, other: &Self) -> Ordering {
        self.over.total_cmp(&other.over)
    }
}

impl fmt::Display for Average {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "average(over: {} s)", self.over)
    }
}
