//! Moments in closed form, where the density and all transfer functions are rational.
//!
//! With G(omega) = |F(i omega)|² and B the response after one delay, Y = B F is a sum of residues R_k/(s - p_k) over poles
//! left of the imaginary axis. By the theorem of residues the covariance of two such parts is
//!
//! ```text
//! C(tau) = integral of Re[conj(Y_a) Y_b exp(i omega tau)] over omega from 0 = pi Re sum over k of R_bk Y_a(-p_k) exp(p_k tau)
//! ```
//!
//! for tau >= 0, even moments are its derivatives at the lag between the parts, and lambda_1 of an undelayed Y is
//! (2/pi) Re sum of c_k p_k ln(-p_k), C being the sum of c_k exp(p_k tau) with C'(0) = 0: the integral of omega times
//! (2/pi) a/(a² + omega²) over omega up to W is (a/pi) ln(1 + W²/a²), and the parts in ln W cancel.
//!
//! One expansion serves any number of terms. Poles that lie close together within one term make residues that cancel: the
//! sizes of what was added are kept, and the error says so. Repeated poles within one term have no such expansion.

use super::super::spectral::Rational;
use super::response::{Smooth, near};
use nalgebra::Complex;
use std::f64::consts::{FRAC_2_PI, PI};

/// A number with its error.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Closed {
    pub(super) value: f64,
    pub(super) error: f64,
}

/// Roundings of a residue and of a value, each.
const ROUNDINGS: f64 = 40.0 * f64::EPSILON;

/// constant * s^power / product of (s - p), times the source's factor.
struct Fraction {
    constant: f64,
    power: i32,
    poles: Vec<Complex<f64>>,
}

/// The response after one delay, times the factor of one rational density of the source.
struct Spectral<'r> {
    delay: f64,
    factor: &'r Rational,
    fractions: Vec<Fraction>,
    poles: Vec<Residue>,
}

/// A pole on or above the real axis; those below are its mirror images.
#[derive(Clone, Copy)]
struct Residue {
    pole: Complex<f64>,
    residue: Complex<f64>,
    /// The sizes of the parts that the residue is a sum of.
    size: f64,
}

impl<'r> Spectral<'r> {
    fn new(smooth: &Smooth<'_>, factor: &'r Rational) -> Option<Self> {
        let fractions: Option<Vec<Fraction>> = smooth.fractions().collect();
        let mut found = Self {
            delay: smooth.delay,
            factor,
            fractions: fractions?,
            poles: Vec::new(),
        };
        let mut poles = Vec::new();
        for fraction in &found.fractions {
            let above = fraction.power + factor.zeros.len() as i32;
            if above >= (fraction.poles.len() + factor.poles.len()) as i32 {
                return None;
            }
            let all = || fraction.poles.iter().chain(&factor.poles);
            for (index, &pole) in all().enumerate().filter(|(_, pole)| pole.im >= 0.0) {
                let others = all().enumerate().filter(|(other, _)| *other != index);
                let denominator = product(others.map(|(_, other)| pole - other));
                let residue = fraction.numerator(pole) * found.numerator(pole) / denominator;
                poles.push(Residue {
                    pole,
                    residue,
                    size: residue.norm(),
                });
            }
        }
        if poles.iter().any(|pole| !pole.size.is_finite()) {
            return None;
        }
        let key = |one: &Residue, two: &Residue| {
            one.pole
                .re
                .total_cmp(&two.pole.re)
                .then(one.pole.im.total_cmp(&two.pole.im))
        };
        poles.sort_by(key);
        for one in poles {
            match found.poles.last_mut() {
                Some(last) if last.pole == one.pole => {
                    last.residue += one.residue;
                    last.size += one.size;
                }
                _ => found.poles.push(one),
            }
        }
        Some(found)
    }

    /// The numerator of the source's factor.
    fn numerator(&self, s: Complex<f64>) -> Complex<f64> {
        product(self.factor.zeros.iter().map(|zero| s - zero)) * self.factor.gain.sqrt()
    }

    /// Y(s), and the sizes of the parts that it is a sum of.
    fn at(&self, s: Complex<f64>) -> (Complex<f64>, f64) {
        let common = self.numerator(s) / product(self.factor.poles.iter().map(|pole| s - pole));
        let parts = self.fractions.iter().map(|fraction| {
            let denominator = product(fraction.poles.iter().map(|pole| s - pole));
            fraction.numerator(s) / denominator
        });
        let (sum, size) = parts.fold((Complex::new(0.0, 0.0), 0.0), |(sum, size), part| {
            (sum + part, size + part.l1_norm())
        });
        (sum * common, size * common.norm())
    }

    /// The terms c_k exp(p_k |lag|) of the covariance with another, each twice where the pole has a mirror image.
    fn with<'s>(&'s self, other: &'s Self) -> impl Iterator<Item = (Complex<f64>, Residue)> + 's {
        self.poles.iter().map(move |one| {
            let (value, size) = other.at(-one.pole);
            let twice = if one.pole.im > 0.0 { 2.0 } else { 1.0 };
            let size = twice * PI * one.size * size;
            let residue = one.residue * value * (twice * PI);
            let pole = one.pole;
            (pole, Residue { pole, residue, size })
        })
    }
}

impl Fraction {
    fn numerator(&self, s: Complex<f64>) -> Complex<f64> {
        match self.power {
            0 => Complex::new(self.constant, 0.0),
            power => s.powi(power) * self.constant,
        }
    }
}

fn product(factors: impl Iterator<Item = Complex<f64>>) -> Complex<f64> {
    factors.fold(Complex::new(1.0, 0.0), |product, factor| product * factor)
}

impl Smooth<'_> {
    /// Each part as a fraction; `None` for one that is none.
    fn fractions(&self) -> impl Iterator<Item = Option<Fraction>> + '_ {
        self.parts().map(|(constant, power, systems)| {
            if power < 0 {
                return None;
            }
            let mut poles = Vec::with_capacity(2 * systems.len());
            for system in systems {
                poles.extend(system.poles()?);
            }
            let gain = product(poles.iter().map(|pole| -pole)).re;
            Some(Fraction {
                constant: constant * gain,
                power,
                poles,
            })
        })
    }
}

/// The orders of the moments.
const ORDERS: [i32; 4] = [0, 1, 2, 4];

/// lambda_0, lambda_1, lambda_2 and lambda_4, those that exist; `None` where there is no closed form. lambda_1 has none where
/// there is a delay between parts, and is then infinitely uncertain.
pub(super) fn moments(density: &[Rational], parts: &[Smooth<'_>]) -> Option<[Closed; 4]> {
    let mut sums = [Closed::default(); 4];
    for factor in density {
        let spectral: Option<Vec<Spectral<'_>>> = parts.iter().map(|part| Spectral::new(part, factor)).collect();
        let spectral = spectral?;
        for (index, one) in spectral.iter().enumerate() {
            for (place, other) in spectral.iter().enumerate().skip(index) {
                let both = if place == index { 1.0 } else { 2.0 };
                // The poles are those of what is seen later: the one delayed less.
                let lag = other.delay - one.delay;
                let found = pair(one, other, lag, &ORDERS);
                for (sum, found) in sums.iter_mut().zip(found) {
                    sum.value += both * found.value;
                    sum.error += both * found.error;
                }
            }
        }
    }
    Some(sums)
}

/// The covariance of two forms, the second a lag later; `None` where there is no closed form.
pub(super) fn covariance(density: &[Rational], one: &[Smooth<'_>], other: &[Smooth<'_>], lag: f64) -> Option<Closed> {
    let mut sum = Closed::default();
    for factor in density {
        let spectral = |parts: &[Smooth<'_>]| -> Option<Vec<Spectral<'_>>> {
            parts.iter().map(|part| Spectral::new(part, factor)).collect()
        };
        let (ones, others) = (spectral(one)?, spectral(other)?);
        for one in &ones {
            for other in &others {
                let apart = if near(lag + one.delay, other.delay) {
                    0.0
                } else {
                    lag + one.delay - other.delay
                };
                // exp(p tau) over the poles of the one that comes later.
                let [found] = if apart >= 0.0 {
                    pair(other, one, apart, &[0])
                } else {
                    pair(one, other, -apart, &[0])
                };
                sum.value += found.value;
                sum.error += found.error;
            }
        }
    }
    Some(sum)
}

/// What a pair of parts adds to the moments of some orders, the poles being those of `poles`.
fn pair<const N: usize>(poles: &Spectral<'_>, other: &Spectral<'_>, lag: f64, orders: &[i32; N]) -> [Closed; N] {
    let mut sums = [Closed::default(); N];
    let scale = poles.poles.iter().map(|one| one.pole.norm()).fold(0.0, f64::max);
    for (pole, term) in poles.with(other) {
        let wave = (pole * lag).exp();
        let decay = wave.norm() * (1.0 + pole.norm() * lag);
        for (sum, order) in sums.iter_mut().zip(orders) {
            let (factor, size) = match order {
                1 if lag > 0.0 => (Complex::new(0.0, 0.0), f64::INFINITY),
                1 => {
                    let logarithm = (-pole / scale).ln();
                    let factor = pole * logarithm * FRAC_2_PI;
                    (factor, pole.norm() * (logarithm.norm() + 1.0))
                }
                order => {
                    // (-1)^(n/2) p^n is (p/i)^n.
                    let factor = Complex::new(pole.im, -pole.re).powi(*order);
                    (factor, factor.norm())
                }
            };
            sum.value += (term.residue * factor * wave).re;
            sum.error += ROUNDINGS * term.size * size * decay;
        }
    }
    sums
}
