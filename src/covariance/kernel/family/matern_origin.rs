//! The Matérn correlation at lag zero, as a series.
//!
//! K_nu = pi / (2 sin(nu pi)) (I_(-nu) - I_nu) (Abramowitz and Stegun 1964, 9.6.2) makes the correlation, as a function of
//! x = sqrt(2 nu) tau / length, two ascending series, one of even powers and one of powers 2 nu + 2 k:
//!
//! ```text
//! even:  sum of (x^2/4)^k / (k! (1-nu)(2-nu)...(k-nu))
//! rough: -sum of Gamma(1-nu) (x/2)^(2 nu + 2 k) / (k! Gamma(k + 1 + nu))
//! ```
//!
//! Where nu is whole the even series ends before k = nu and the rough one is that of 9.6.11, with logarithms:
//!
//! ```text
//! (-1)^nu / Gamma(nu) sum of (x/2)^(2 nu + 2 k) / (k! (nu + k)!) (psi(k+1) + psi(nu+k+1) - 2 ln(x/2))
//! ```

use std::f64::consts::PI;

use super::polynomial;
use crate::expression::{Number, Series, SeriesTerm};

/// Euler's constant.
const EULER: f64 = 0.577_215_664_901_532_9;

/// So close to a whole number a smoothness counts as whole here: a series cannot hold exponents that close apart.
const WHOLE: f64 = 1e-9;

/// rho(tau) up to O(tau^order), for x = rate tau.
pub(super) fn expansion(nu: f64, rate: f64, order: f64) -> Series {
    let quarter = 0.25 * rate * rate;
    let even = polynomial::powers(2.0, |k| quarter / (k * (k - nu)));
    if (nu - nu.round()).abs() > WHOLE {
        let leading = rough_leading(nu, rate);
        let rough = polynomial::powers(2.0, |k| quarter / (k * (k + nu)))
            .map(|(exponent, coefficient)| (2.0 * nu + exponent, leading * coefficient));
        polynomial::series(order, even).add(&polynomial::series(order, rough))
    } else {
        let nu = nu.round();
        let even = even.take(nu as usize);
        polynomial::series(order, even).add(&logarithmic(nu, rate, order))
    }
}

/// -Gamma(1 - nu) / Gamma(1 + nu) (rate / 2)^(2 nu), with Gamma(1 - nu) = pi / (sin(pi nu) Gamma(nu)) and the sine taken
/// of the distance to the nearest whole number.
fn rough_leading(nu: f64, rate: f64) -> f64 {
    let nearest = nu.round();
    let sine = alternating(nearest) * (PI * (nu - nearest)).sin();
    -PI / sine / libm::tgamma(nu) / libm::tgamma(1.0 + nu) * (0.5 * rate).powf(2.0 * nu)
}

fn logarithmic(nu: f64, rate: f64, order: f64) -> Series {
    let leading = alternating(nu) / libm::tgamma(nu) / libm::tgamma(nu + 1.0) * (0.5 * rate).powf(2.0 * nu);
    let factors = polynomial::powers(2.0, |k| 0.25 * rate * rate / (k * (k + nu)));
    // psi(k + 1) + psi(nu + k + 1), psi(n + 1) = 1 + 1/2 + ... + 1/n - Euler's constant.
    let mut digammas = (1..=nu as u32).map(|i| 1.0 / f64::from(i)).sum::<f64>() - 2.0 * EULER;
    let mut terms = Vec::new();
    for (exponent, factor) in
        factors.take_while(|(exponent, _)| 2.0 * nu + exponent < order.min(polynomial::HIGHEST_ORDER))
    {
        let (k, factor) = (0.5 * exponent, leading * factor);
        if k > 0.0 {
            digammas += 1.0 / k + 1.0 / (k + nu);
        }
        let plain = factor * (digammas - 2.0 * (0.5 * rate).ln());
        terms.push(SeriesTerm::new(plain, 2.0 * nu + exponent, 0));
        terms.push(SeriesTerm::new(-2.0 * factor, 2.0 * nu + exponent, 1));
    }
    Series::from_terms(terms, order.min(polynomial::HIGHEST_ORDER))
}

/// (-1)^n
fn alternating(n: f64) -> f64 {
    if n % 2.0 == 0.0 { 1.0 } else { -1.0 }
}
