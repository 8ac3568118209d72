//! Strong ground motion: white noise in the rock, filtered by a layer of soil.

use super::{Density, around};
use crate::covariance::kernel::{Estimate, InvalidParameter, positive};
use crate::covariance::spectral::{Rational, Tail};
use nalgebra::Complex;
use std::f64::consts::{FRAC_PI_4, PI};
use std::fmt;

/// level (1 + 4 z² r²) / ((1 - r²)² + 4 z² r²), r = w/wg: K. Kanai (1957), Semi-empirical formula for the seismic
/// characteristics of the ground, Bull. Earthq. Res. Inst. 35; H. Tajimi (1960), A statistical method of determining
/// the maximum response of a building structure during an earthquake, Proc. 2nd World Conf. Earthq. Eng.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct KanaiTajimi {
    pub(super) level: f64,
    pub(super) frequency: f64,
    pub(super) damping: f64,
}

impl KanaiTajimi {
    /// From the one-sided density of the rock, per rad/s, the frequency of the soil in rad/s and its damping as a
    /// ratio to critical.
    pub fn new(level: f64, frequency: f64, damping: f64) -> Result<Self, InvalidParameter> {
        Self::named("kanai_tajimi", level, frequency, damping)
    }

    pub(super) fn named(
        name: &'static str,
        level: f64,
        frequency: f64,
        damping: f64,
    ) -> Result<Self, InvalidParameter> {
        Ok(Self {
            level: super::level(name, level)?,
            frequency: positive(name, "frequency", frequency)?,
            damping: super::damping(name, "damping", damping)?,
        })
    }
}

/// (1 - r²)² + 4 z² r² over the larger of 1 and r⁴, and 1 over the same: no power leaves the range of a double.
pub(super) fn resonance(r: f64, damping: f64) -> (f64, f64) {
    let (near, one) = if r > 1.0 { (1.0 / r, 1.0 / (r * r)) } else { (r, 1.0) };
    let (detuning, width) = ((1.0 - near) * (1.0 + near), 2.0 * damping * near);
    (detuning * detuning + width * width, one * one)
}

/// The two poles of an oscillator, in rad/s.
pub(super) fn poles(frequency: f64, damping: f64) -> [Complex<f64>; 2] {
    let damped = frequency * ((1.0 - damping) * (1.0 + damping)).sqrt();
    [1.0, -1.0].map(|sign| Complex::new(-damping * frequency, sign * damped))
}

impl Density for KanaiTajimi {
    fn density(&self, omega: f64) -> f64 {
        let r = omega / self.frequency;
        let (below, one) = resonance(r, self.damping);
        let slope = 2.0 * self.damping * if r > 1.0 { 1.0 / r } else { r };
        self.level * (one + slope * slope) / below
    }

    /// pi/4 level wg (1 + 4 z²)/z: the only finite one.
    fn moment(&self, _order: u32) -> Estimate {
        let z = self.damping;
        Estimate::closed(FRAC_PI_4 * self.level * self.frequency * (1.0 + 4.0 * z * z) / z)
    }

    fn tail(&self) -> Tail {
        Tail::Power(2.0)
    }

    fn head(&self) -> f64 {
        0.0
    }

    fn grid(&self) -> Vec<f64> {
        let width = self.frequency * self.damping;
        let mut grid = vec![0.0, self.frequency, 4.0 * self.frequency, 4.0 * PI * self.frequency];
        grid.extend(around(self.frequency, width, 4));
        crate::covariance::spectrum::rising(grid)
    }

    fn rational(&self) -> Option<Rational> {
        let (z, frequency) = (self.damping, self.frequency);
        Some(Rational {
            gain: 4.0 * z * z * frequency * frequency * self.level,
            zeros: vec![Complex::new(-frequency / (2.0 * z), 0.0)],
            poles: poles(frequency, z).to_vec(),
        })
    }
}

impl fmt::Display for KanaiTajimi {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        let Self {
            level,
            frequency,
            damping,
        } = self;
        write!(
            out,
            "kanai_tajimi(level: {level}, frequency: {frequency} rad/s, damping: {damping})"
        )
    }
}
