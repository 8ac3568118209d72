//! One degree of freedom with viscous damping.

use super::positive;
use crate::covariance::kernel::InvalidParameter;
use nalgebra::Complex;
use std::cmp::Ordering;
use std::fmt;

/// The smallest damping ratio: below it a resonance is narrower than the rounding of its frequency lets anyone tell.
const LEAST_DAMPING: f64 = 1e-12;

/// x'' + 2 z w0 x' + w0² x = w0² u, whose static gain is 1: H = 1 / (1 - r² + 2 i z r), r = omega/w0.
///
/// L. Meirovitch (1986), Elements of Vibration Analysis, ch. 2 and 11 (from memory).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Oscillator {
    frequency: f64,
    damping: f64,
}

impl Oscillator {
    /// From the undamped angular frequency in rad/s and the damping as a ratio to critical, above 0; it may be 1 or more.
    pub fn new(frequency: f64, damping: f64) -> Result<Self, InvalidParameter> {
        if !(LEAST_DAMPING..=1e12).contains(&damping) {
            return Err(InvalidParameter {
                family: "oscillator",
                parameter: "damping",
                value: damping,
                demand: "above 0 (1e-12)",
            });
        }
        Ok(Self {
            frequency: positive("oscillator", "frequency", frequency)?,
            damping,
        })
    }

    /// The undamped angular frequency, in rad/s.
    pub fn frequency(&self) -> f64 {
        self.frequency
    }

    /// The damping as a ratio to critical.
    pub fn damping(&self) -> f64 {
        self.damping
    }

    pub(super) fn transfer(&self, omega: f64) -> Complex<f64> {
        let r = omega / self.frequency;
        let (real, imaginary) = ((1.0 - r) * (1.0 + r), 2.0 * self.damping * r);
        let square = real * real + imaginary * imaginary;
        if square.is_finite() {
            Complex::new(real / square, -imaginary / square)
        } else {
            Complex::new(0.0, 0.0)
        }
    }

    /// w0 (-z ± i sqrt(1 - z²)); two real ones from critical damping on, the small one without cancellation.
    pub(super) fn poles(&self) -> [Complex<f64>; 2] {
        let (frequency, damping) = (self.frequency, self.damping);
        if damping < 1.0 {
            let damped = frequency * ((1.0 - damping) * (1.0 + damping)).sqrt();
            [1.0, -1.0].map(|sign| Complex::new(-damping * frequency, sign * damped))
        } else {
            let large = damping + ((damping - 1.0) * (damping + 1.0)).sqrt();
            [large, 1.0 / large].map(|rate| Complex::new(-rate * frequency, 0.0))
        }
    }

    pub(super) fn frequencies(&self) -> Vec<f64> {
        let mut found = vec![BEYOND * self.frequency];
        if self.damping < 1.0 {
            found.push(self.frequency);
            let widths = std::iter::successors(Some(self.damping), |width| Some(8.0 * width));
            for width in widths.take_while(|width| *width < 0.9) {
                found.extend([self.frequency * (1.0 - width), self.frequency * (1.0 + width)]);
            }
        } else {
            let corners = self.poles().map(|pole| -pole.re);
            found.extend(corners.into_iter().flat_map(|corner| [corner, BEYOND * corner]));
        }
        found
    }

    pub(super) fn order(&self, other: &Self) -> Ordering {
        let by_frequency = self.frequency.total_cmp(&other.frequency);
        by_frequency.then(self.damping.total_cmp(&other.damping))
    }
}

/// So many times its frequency a response is close to its power law.
pub(super) const BEYOND: f64 = 4.0;

impl fmt::Display for Oscillator {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let (frequency, damping) = (self.frequency, self.damping);
        write!(
            f,
            "oscillator(frequency: {frequency} rad/s, damping: {damping}, gain: 1)"
        )
    }
}
