//! The displacement of a damped oscillator under white noise.

use std::f64::consts::{FRAC_2_PI, PI};
use std::fmt;

use super::parameter::{self, InvalidParameter};
use super::polynomial;
use super::{Correlation, Rough};
use crate::covariance::kernel::Peak;
use crate::expression::Series;

/// The correlation function exp(-z w0 tau) (cos wd tau + z / sqrt(1 - z^2) sin wd tau), wd = w0 sqrt(1 - z^2): the
/// stationary displacement of x'' + 2 z w0 x' + w0^2 x = white noise.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Oscillator {
    frequency: f64,
    damping: f64,
}

impl Oscillator {
    /// From the undamped angular frequency in rad/s and the damping as a ratio to critical, between 0 and 1.
    pub fn new(frequency: f64, damping: f64) -> Result<Self, InvalidParameter> {
        let allowed = (1e-12..1.0).contains(&damping);
        Ok(Self {
            frequency: parameter::positive("oscillator", "frequency", frequency)?,
            damping: parameter::demand(allowed, "oscillator", "damping", damping, "above 0 (1e-12) and below 1")?,
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

    /// sqrt(1 - z^2), also for damping close to critical.
    fn damped(&self) -> f64 {
        ((1.0 - self.damping) * (1.0 + self.damping)).sqrt()
    }

    /// The response to initial values: the coefficients of y'' + 2 z y' + y = 0 from y(0) = c_0, y'(0) = c_1, in
    /// powers of w0 h.
    fn series(&self, value: f64, slope: f64) -> impl Iterator<Item = f64> {
        let damping = self.damping;
        (0..).scan((value, slope), move |(this, next), n| {
            let n = f64::from(n);
            let current = *this;
            let after = -(2.0 * damping * (n + 1.0) * *next + current) / ((n + 1.0) * (n + 2.0));
            (*this, *next) = (*next, after);
            Some(current)
        })
    }

    /// rho as a function of x = w0 tau.
    fn at(&self, x: f64) -> f64 {
        (-self.damping * x).exp() * ((self.damped() * x).cos() + self.damping * self.sine(x))
    }

    /// sin(sqrt(1 - z^2) x) / sqrt(1 - z^2), finite up to critical damping.
    fn sine(&self, x: f64) -> f64 {
        let phase = self.damped() * x;
        if phase.abs() < 1e-8 {
            x
        } else {
            phase.sin() / self.damped()
        }
    }
}

impl Correlation for Oscillator {
    fn value(&self, lag: f64) -> f64 {
        self.at(parameter::phase(self.frequency, lag))
    }

    fn loss(&self, lag: f64) -> f64 {
        let x = parameter::phase(self.frequency, lag);
        if x > 1.0 {
            return 1.0 - self.at(x);
        }
        -polynomial::rescaled(self.series(1.0, 0.0), x)
            .take(24)
            .skip(1)
            .sum::<f64>()
    }

    fn expansion(&self, order: f64) -> Series {
        let coefficients = polynomial::rescaled(self.series(1.0, 0.0), self.frequency);
        polynomial::series(order, (0..).map(f64::from).zip(coefficients))
    }

    fn taylor(&self, lag: f64, order: usize) -> Vec<f64> {
        let x = parameter::phase(self.frequency, lag);
        let slope = -(-self.damping * x).exp() * self.sine(x);
        polynomial::rescaled(self.series(self.at(x), slope).take(order + 1), self.frequency).collect()
    }

    /// (4 z w0^3 / pi) / ((w0^2 - w^2)^2 + 4 z^2 w0^2 w^2).
    fn density(&self, omega: f64) -> Option<f64> {
        let r = omega / self.frequency;
        let detuning = (1.0 - r) * (1.0 + r);
        let resonance = 2.0 * self.damping * r;
        Some(4.0 * self.damping / (PI * self.frequency) / (detuning * detuning + resonance * resonance))
    }

    fn scale_of_fluctuation(&self) -> f64 {
        4.0 * self.damping / self.frequency
    }

    /// lambda_1 / w0 = (1 - (2 / pi) atan(z / sqrt(1 - z^2))) / sqrt(1 - z^2): E. H. Vanmarcke (1972), Properties of
    /// spectral moments with applications to random vibration, J. Eng. Mech. Div. 98; the bracket is written
    /// (2 / pi) atan(sqrt(1 - z^2) / z), which keeps its digits near critical damping.
    fn moments(&self) -> [f64; 4] {
        let damped = self.damped();
        let first = FRAC_2_PI * damped.atan2(self.damping) / damped;
        [1.0, first * self.frequency, self.frequency.powi(2), f64::INFINITY]
    }

    fn roughness(&self) -> Option<Rough> {
        Some(Rough { exponent: 3.0, log: 0 })
    }

    fn times(&self) -> (f64, f64) {
        (1.0 / self.frequency, 1.0 / (self.frequency * self.damping))
    }

    fn peaks(&self) -> Vec<Peak> {
        vec![Peak {
            frequency: self.frequency,
            width: self.frequency * self.damping,
        }]
    }
}

impl fmt::Display for Oscillator {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(
            out,
            "oscillator(frequency: {} rad/s, damping: {})",
            self.frequency, self.damping
        )
    }
}
