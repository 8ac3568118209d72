//! Strong ground motion without the slow part that no ground shows.

use super::kanai_tajimi::{KanaiTajimi, poles, resonance};
use super::{Density, around};
use crate::covariance::kernel::{Estimate, InvalidParameter, positive};
use crate::covariance::spectral::{Rational, Tail};
use nalgebra::Complex;
use std::f64::consts::FRAC_PI_2;
use std::fmt;

/// The spectrum of Kanai and Tajimi times r⁴ / ((1 - r²)² + 4 z² r²), r = w/wf: R. W. Clough and J. Penzien (1975),
/// Dynamics of Structures.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct CloughPenzien {
    ground: KanaiTajimi,
    low_frequency: f64,
    low_damping: f64,
}

impl CloughPenzien {
    /// From the one-sided density of the rock, per rad/s, the frequency of the soil in rad/s and its damping, and the
    /// same of the filter that takes off low frequencies.
    pub fn new(
        level: f64,
        frequency: f64,
        damping: f64,
        low_frequency: f64,
        low_damping: f64,
    ) -> Result<Self, InvalidParameter> {
        const NAME: &str = "clough_penzien";
        Ok(Self {
            ground: KanaiTajimi::named(NAME, level, frequency, damping)?,
            low_frequency: positive(NAME, "low_frequency", low_frequency)?,
            low_damping: super::damping(NAME, "low_damping", low_damping)?,
        })
    }
}

impl Density for CloughPenzien {
    fn density(&self, omega: f64) -> f64 {
        let r = omega / self.low_frequency;
        let (below, _) = resonance(r, self.low_damping);
        let fourth = if r > 1.0 { 1.0 } else { r * r * r * r };
        self.ground.density(omega) * fourth / below
    }

    /// The integral of |c(iw)|²/|d(iw)|² for a d of degree four (H. M. James, N. B. Nichols and R. S. Phillips 1947,
    /// Theory of Servomechanisms, appendix; from memory), with c = s² (a s + A), d = (s² + a s + A) (s² + b s + B). Its
    /// determinants are multiplied out here, so that no difference is left but (A - B)². The only finite one.
    fn moment(&self, _order: u32) -> Estimate {
        let (slow, fast) = (self.low_frequency / self.ground.frequency, 1.0);
        let (a, b) = (2.0 * self.ground.damping, 2.0 * self.low_damping * slow);
        let (first, second) = (fast * fast, slow * slow);
        let mixed = a * second + b * first;
        let above = a * a * (a * second * second + b * first * first + a * b * mixed) + first * first * mixed;
        let apart = (fast - slow) * (fast + slow);
        let below = a * b * (apart * apart + (a + b) * mixed);
        Estimate::closed(FRAC_PI_2 * self.ground.level * self.ground.frequency * above / below)
    }

    fn tail(&self) -> Tail {
        Tail::Power(2.0)
    }

    fn head(&self) -> f64 {
        4.0
    }

    fn grid(&self) -> Vec<f64> {
        let mut grid = self.ground.grid();
        grid.push(self.low_frequency);
        grid.extend(around(self.low_frequency, self.low_frequency * self.low_damping, 4));
        crate::covariance::spectrum::rising(grid)
    }

    fn rational(&self) -> Option<Rational> {
        let mut rational = self.ground.rational()?;
        rational.zeros.extend([Complex::new(0.0, 0.0); 2]);
        rational.poles.extend(poles(self.low_frequency, self.low_damping));
        Some(rational)
    }
}

impl fmt::Display for CloughPenzien {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        let KanaiTajimi {
            level,
            frequency,
            damping,
        } = self.ground;
        let (low, low_damping) = (self.low_frequency, self.low_damping);
        write!(
            out,
            "clough_penzien(level: {level}, frequency: {frequency} rad/s, damping: {damping}, \
             low_frequency: {low} rad/s, low_damping: {low_damping})"
        )
    }
}
