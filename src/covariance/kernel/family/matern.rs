//! The Matérn family: any degree of smoothness.

use std::f64::consts::{LN_2, PI};
use std::fmt;

use super::parameter::{self, InvalidParameter};
use super::polynomial;
use super::{Correlation, Rough, matern_origin};
use crate::expression::Series;
use crate::numerics::{bessel, gamma, matern};

/// The correlation function 2^(1-nu) / Gamma(nu) x^nu K_nu(x), x = sqrt(2 nu) tau / length.
///
/// B. Matérn (1960), Spatial Variation; M. L. Stein (1999), Interpolation of Spatial Data, sec. 2.7; in the
/// normalisation of Rasmussen and Williams (2006), eq. 4.14.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Matern {
    smoothness: f64,
    length: f64,
}

impl Matern {
    /// From its smoothness nu and its length in s.
    pub fn new(smoothness: f64, length: f64) -> Result<Self, InvalidParameter> {
        Ok(Self {
            smoothness: parameter::shape("matern", "smoothness", smoothness)?,
            length: parameter::positive("matern", "length", length)?,
        })
    }

    /// The smoothness, nu: the process has as many derivatives as there are whole numbers below it, not counting 0.
    pub fn smoothness(&self) -> f64 {
        self.smoothness
    }

    /// The length, in s.
    pub fn length(&self) -> f64 {
        self.length
    }

    /// The corner frequency of the spectrum, a = sqrt(2 nu) / length, in rad/s.
    fn rate(&self) -> f64 {
        (2.0 * self.smoothness).sqrt() / self.length
    }

    /// The scale of fluctuation over the length.
    pub(in crate::covariance::kernel) fn scale_over_length(smoothness: f64) -> f64 {
        2.0 * PI.sqrt() * gamma::ratio_half(smoothness) / (2.0 * smoothness).sqrt()
    }

    /// 2^(1-nu) / Gamma(nu) x^(nu-m) K_(nu-m)(x), what m applications of -(1/x) d/dx make of the correlation
    /// (Abramowitz and Stegun 1964, 9.6.28).
    fn lowered(&self, m: usize, x: f64) -> f64 {
        let order = self.smoothness - m as f64;
        if order >= 0.5 {
            let falling = (1..=m).map(|j| 2.0 * (self.smoothness - j as f64)).product::<f64>();
            matern::correlation(order, x) / falling
        } else {
            let scale = ((1.0 - self.smoothness) * LN_2 + order * x.ln() - x).exp() / libm::tgamma(self.smoothness);
            scale * bessel::k_pair(order.abs(), x).0
        }
    }

    /// Taylor coefficients in x by composing those in x^2 / 2, which `lowered` gives, with (x h + h^2 / 2). Terms of
    /// nearly equal size and opposite sign appear only beyond the smoothness of the function at zero.
    fn composed(&self, x: f64, order: usize) -> Vec<f64> {
        let mut factorial = 1.0;
        let outer: Vec<f64> = (0..=order)
            .map(|m| {
                factorial *= m.max(1) as f64;
                let sign = if m % 2 == 0 { 1.0 } else { -1.0 };
                sign * self.lowered(m, x) / factorial
            })
            .collect();
        let coefficient = |n: usize| {
            // h^n in (x h + h^2 / 2)^m is binomial(m, n - m) x^(2m - n) / 2^(n - m).
            let term = |(m, outer): (usize, &f64)| {
                let halves = n - m;
                let binomial = (0..halves).map(|i| (m - i) as f64 / (i + 1) as f64).product::<f64>();
                outer * binomial * x.powi((m - halves) as i32) * 0.5_f64.powi(halves as i32)
            };
            outer.iter().enumerate().take(n + 1).skip(n.div_ceil(2)).map(term).sum()
        };
        (0..=order).map(coefficient).collect()
    }

    /// The polynomial p in exp(-x) p(x), lowest power first, where twice the smoothness is an odd number up to 21
    /// (Rasmussen and Williams 2006, eq. 4.16).
    fn polynomial(&self) -> Option<Vec<f64>> {
        let whole = self.smoothness - 0.5;
        if whole.fract() != 0.0 || whole > 10.0 {
            return None;
        }
        // Coefficient of x^j: 2^j p! (2p - j)! / ((2p)! j! (p - j)!), by the ratio of neighbours.
        let mut coefficient = 1.0;
        let mut coefficients = vec![coefficient];
        for j in 0..whole as u32 {
            let j = f64::from(j);
            coefficient *= 2.0 * (whole - j) / ((2.0 * whole - j) * (j + 1.0));
            coefficients.push(coefficient);
        }
        Some(coefficients)
    }
}

/// The coefficient of h^n in exp(-(x + h)) p(x + h).
fn of_exponential(polynomial: &[f64], x: f64, n: usize) -> f64 {
    let (mut sum, mut factor) = (0.0, (-x).exp());
    for back in 1..=n {
        factor /= -(back as f64);
        if n - back < polynomial.len() {
            sum += factor * shifted(polynomial, x, n - back);
        }
    }
    sum + (-x).exp() * shifted(polynomial, x, n)
}

/// The coefficient of h^j in p(x + h).
fn shifted(polynomial: &[f64], x: f64, j: usize) -> f64 {
    let mut binomial = 1.0;
    let mut power = 1.0;
    let mut sum = 0.0;
    for (k, coefficient) in polynomial.iter().enumerate().skip(j) {
        sum += coefficient * binomial * power;
        binomial *= (k + 1) as f64 / (k + 1 - j) as f64;
        power *= x;
    }
    sum
}

impl Correlation for Matern {
    fn value(&self, lag: f64) -> f64 {
        matern::correlation(self.smoothness, self.rate() * lag)
    }

    fn loss(&self, lag: f64) -> f64 {
        matern::variogram(self.smoothness, self.rate() * lag)
    }

    fn expansion(&self, order: f64) -> Series {
        matern_origin::expansion(self.smoothness, self.rate(), order)
    }

    fn taylor(&self, lag: f64, order: usize) -> Vec<f64> {
        let x = self.rate() * lag;
        let mut coefficients = self.composed(x, order);
        if let Some(polynomial) = self.polynomial() {
            let beyond = (2.0 * self.smoothness) as usize + 1;
            for (n, coefficient) in coefficients.iter_mut().enumerate().skip(beyond) {
                *coefficient = of_exponential(&polynomial, x, n);
            }
        }
        polynomial::rescaled(coefficients.into_iter(), self.rate()).collect()
    }

    /// 2 Gamma(nu + 1/2) / (sqrt(pi) Gamma(nu)) a^(2 nu) (a^2 + w^2)^-(nu + 1/2).
    fn density(&self, omega: f64) -> Option<f64> {
        let r = omega / self.rate();
        let fall = (-(self.smoothness + 0.5) * (r * r).ln_1p()).exp();
        Some(self.scale_of_fluctuation() / PI * fall)
    }

    fn scale_of_fluctuation(&self) -> f64 {
        self.length * Self::scale_over_length(self.smoothness)
    }

    fn moments(&self) -> [f64; 4] {
        let (nu, a) = (self.smoothness, self.rate());
        let first = 2.0 * gamma::ratio_half(nu) / PI.sqrt() * a / (2.0 * nu - 1.0);
        let second = a.powi(2) / (2.0 * (nu - 1.0));
        let fourth = 3.0 * a.powi(4) / (4.0 * (nu - 1.0) * (nu - 2.0));
        let finite_above = |least: f64, value: f64| if nu > least { value } else { f64::INFINITY };
        [
            1.0,
            finite_above(0.5, first),
            finite_above(1.0, second),
            finite_above(2.0, fourth),
        ]
    }

    fn roughness(&self) -> Option<Rough> {
        Some(Rough {
            exponent: 2.0 * self.smoothness,
            log: u32::from(self.smoothness.fract() == 0.0),
        })
    }

    fn times(&self) -> (f64, f64) {
        // The decay is exp(-a tau) in the end, and the bend at zero is of the order of the length, whichever is longer.
        let decay = 1.0 / self.rate();
        (self.length.min(decay), self.length.max(decay))
    }
}

impl fmt::Display for Matern {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(
            out,
            "matern(smoothness: {}, length: {} s)",
            self.smoothness, self.length
        )
    }
}
