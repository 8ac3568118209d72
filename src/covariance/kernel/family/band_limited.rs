//! A flat spectrum between two frequencies.

use std::f64::consts::PI;
use std::fmt;

use super::parameter::{self, InvalidParameter};
use super::polynomial;
use super::{Correlation, Rough};
use crate::covariance::kernel::Peak;
use crate::expression::Series;

/// The correlation function (sin b tau - sin a tau) / ((b - a) tau): white noise between the frequencies a and b
/// (S. O. Rice 1944-45, Mathematical Analysis of Random Noise, Bell Syst. Tech. J. 23-24).
///
/// It is cos(m tau) sinc(h tau) with the middle m and the half width h of the band, which is how it is computed: no
/// digits are lost where the band is narrow or the lag short.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct BandLimited {
    lower: f64,
    upper: f64,
}

impl BandLimited {
    /// From the lower (which may be 0) and the upper angular frequency in rad/s.
    pub fn new(lower: f64, upper: f64) -> Result<Self, InvalidParameter> {
        let family = "band_limited";
        let lower = if lower == 0.0 {
            0.0
        } else {
            parameter::positive(family, "lower", lower)?
        };
        let upper = parameter::positive(family, "upper", upper)?;
        parameter::demand(lower < upper, family, "upper", upper, "above lower")?;
        Ok(Self { lower, upper })
    }

    /// The lower angular frequency, in rad/s.
    pub fn lower(&self) -> f64 {
        self.lower
    }

    /// The upper angular frequency, in rad/s.
    pub fn upper(&self) -> f64 {
        self.upper
    }

    fn middle(&self) -> f64 {
        0.5 * (self.lower + self.upper)
    }

    fn half_width(&self) -> f64 {
        0.5 * (self.upper - self.lower)
    }

    /// (b^(n+1) - a^(n+1)) / ((n+1)(b - a)) as the mean of a^j b^(n-j): nothing is subtracted.
    fn moment(&self, n: i32) -> f64 {
        let products = (0..=n).map(|j| self.lower.powi(j) * self.upper.powi(n - j));
        products.sum::<f64>() / f64::from(n + 1)
    }
}

impl Correlation for BandLimited {
    fn value(&self, lag: f64) -> f64 {
        parameter::phase(self.middle(), lag).cos() * sinc(parameter::phase(self.half_width(), lag))
    }

    fn loss(&self, lag: f64) -> f64 {
        let middle = parameter::phase(self.middle(), lag);
        let sine = (0.5 * middle).sin();
        2.0 * sine * sine + middle.cos() * sinc_drop(parameter::phase(self.half_width(), lag))
    }

    /// The coefficient of tau^n is (-1)^(n/2) lambda_n / n!, with lambda_n in units of the upper frequency.
    fn expansion(&self, order: f64) -> Series {
        let ratio = self.lower / self.upper;
        let sums = std::iter::successors(Some((1.0, 1.0)), move |(sum, power)| {
            Some((sum + power * ratio * (1.0 + ratio), power * ratio * ratio))
        });
        let square = self.upper * self.upper;
        let factors = polynomial::powers(2.0, move |k| -square / (2.0 * k * (2.0 * k - 1.0)));
        let terms = factors
            .zip(sums)
            .map(|((n, factor), (sum, _))| (n, factor * sum / (n + 1.0)));
        polynomial::series(order, terms)
    }

    /// The product of the Taylor series of cos(m tau) and sinc(h tau).
    fn taylor(&self, lag: f64, order: usize) -> Vec<f64> {
        let waves = super::Harmonic::carrier(self.middle(), lag, order);
        let envelope = sinc_taylor(parameter::phase(self.half_width(), lag), order).into_iter();
        let envelope: Vec<f64> = polynomial::rescaled(envelope, self.half_width()).collect();
        polynomial::product(&waves, &envelope)
    }

    fn density(&self, omega: f64) -> Option<f64> {
        let inside = (self.lower..=self.upper).contains(&omega);
        Some(if inside { 1.0 / (self.upper - self.lower) } else { 0.0 })
    }

    fn scale_of_fluctuation(&self) -> f64 {
        if self.lower == 0.0 { PI / self.upper } else { 0.0 }
    }

    fn moments(&self) -> [f64; 4] {
        [1.0, self.moment(1), self.moment(2), self.moment(4)]
    }

    fn roughness(&self) -> Option<Rough> {
        None
    }

    fn times(&self) -> (f64, f64) {
        (1.0 / self.upper, 1.0 / self.half_width())
    }

    fn fades(&self) -> bool {
        false
    }

    fn peaks(&self) -> Vec<Peak> {
        [self.lower, self.upper]
            .map(|frequency| Peak { frequency, width: 0.0 })
            .to_vec()
    }
}

impl fmt::Display for BandLimited {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(
            out,
            "band_limited(lower: {} rad/s, upper: {} rad/s)",
            self.lower, self.upper
        )
    }
}

/// sin(x) / x.
fn sinc(x: f64) -> f64 {
    if x == 0.0 { 1.0 } else { x.sin() / x }
}

/// 1 - sin(x) / x; below 1 by its Maclaurin series.
fn sinc_drop(x: f64) -> f64 {
    if x > 1.0 {
        return 1.0 - sinc(x);
    }
    let (mut term, mut sum) = (1.0, 0.0);
    for k in (2..24).step_by(2) {
        term *= -x * x / f64::from(k * (k + 1));
        sum -= term;
    }
    sum
}

/// The Taylor coefficients of sin(x) / x at x, up to `order`.
///
/// The derivatives obey x f_n + n f_(n-1) = sin(x + n pi / 2). Upwards, an error grows by n / x at each step, and
/// downwards by x / n; so the recurrence runs upwards to n = x and, from far above where f_n is forgotten, downwards
/// to it (the rule of J. C. P. Miller, as in Abramowitz and Stegun 1964, sec. 9.12).
fn sinc_taylor(x: f64, order: usize) -> Vec<f64> {
    let (sine, cosine) = x.sin_cos();
    let wave = |n: usize| [sine, cosine, -sine, -cosine][n % 4];
    let turn = (0..=order).take_while(|n| (*n as f64) < x).count();
    let mut derivatives = vec![0.0; order + 1];
    let mut last = 0.0;
    for (n, derivative) in derivatives.iter_mut().enumerate().take(turn) {
        last = (wave(n) - n as f64 * last) / x;
        *derivative = last;
    }
    let mut above = 0.0;
    let start = if turn > order { turn } else { order + BEYOND };
    for n in (turn..start).rev() {
        // f_n from f_(n+1), begun at f = 0, which is wrong by less than 1 / n.
        above = (wave(n + 1) - x * above) / (n + 1) as f64;
        if let Some(derivative) = derivatives.get_mut(n) {
            *derivative = above;
        }
    }
    let mut factorial = 1.0;
    for (n, derivative) in derivatives.iter_mut().enumerate() {
        factorial *= n.max(1) as f64;
        *derivative /= factorial;
    }
    derivatives
}

/// How far above the highest derivative wanted the downward recurrence begins; with x below the order, the initial
/// error shrinks by (x / n) a step.
const BEYOND: usize = 80;
