//! The Matérn correlation and its variogram, as functions of smoothness nu and scaled lag x:
//! M(x) = 2^(1-nu) / Gamma(nu) x^nu K_nu(x), and 1 - M(x) without cancellation.
//!
//! M obeys M_(nu+1) = M_nu + x² / (4 nu (nu-1)) M_(nu-1), which follows from the recurrence of K: terms all positive,
//! values all at most 1, so neither K nor the powers, which overflow, are ever formed. (Matérn 1960, "Spatial
//! Variation"; Abramowitz and Stegun 1964, 9.6.26.)

use super::bessel::{Series, large, series_serves, split};
use super::gamma::reciprocals;
use libm::{exp, pow};

/// The greatest smoothness served.
pub const GREATEST_SMOOTHNESS: f64 = 200.0;
/// Smaller scaled lags, other than zero, count as this one.
const LEAST: f64 = 1e-300;

/// The Matérn correlation M(x) of smoothness in (0, [`GREATEST_SMOOTHNESS`]] at scaled lag x >= 0; NaN elsewhere.
///
/// Greatest relative error 4e-15 wherever the value exceeds 1e-290, for smoothness from 1e-3 and x from 1e-300,
/// against `tests/reference/bessel.csv`.
pub fn correlation(smoothness: f64, x: f64) -> f64 {
    if !in_domain(smoothness, x) {
        return f64::NAN;
    }
    if x == 0.0 {
        return 1.0;
    }
    if x > 1500.0 {
        return 0.0; // Below the smallest double for every smoothness served.
    }
    let (steps, m) = split(smoothness);
    let x = x.max(LEAST);
    let square = 0.25 * x * x;
    // Three consecutive orders m, m + 1, m + 2; `scale` is what is still to be multiplied in.
    let (zeroth, first, second, scale) = if series_serves(m, x) {
        let series = Series::new(m, x);
        let first = 1.0 + series.next;
        (m * series.order, first, first + square * series.order / (1.0 + m), 1.0)
    } else {
        // Half of the exponential now, half at the end: neither the middle nor the end leaves the range of the
        // doubles.
        let half = exp(-0.5 * x);
        let (k, next) = large(m, x);
        let factor = 2.0 * pow(0.5 * x, m) * reciprocals(m).plus * half;
        let first = factor * 0.5 * x * next;
        (factor * m * k, first, first + factor * square * k / (1.0 + m), half)
    };
    let scaled = match steps {
        0 => zeroth,
        1 => first,
        _ => {
            (2..steps)
                .fold((first, second), |(below, at), step| {
                    let order = m + f64::from(step);
                    (at, at + square / (order * (order - 1.0)) * below)
                })
                .1
        }
    };
    (scale * scaled).min(1.0)
}

/// The normalised variogram 1 - M(x) of smoothness in (0, [`GREATEST_SMOOTHNESS`]] at scaled lag x >= 0, precise
/// relatively however small; NaN elsewhere.
///
/// Greatest relative error 2e-14 for smoothness from 1e-3 and x from 1e-150, against `tests/reference/bessel.csv`.
/// For small x from the power series: the term 1 of M is left out of Temme's, and for great smoothness the finite
/// part of 1 - sum (x²/4)^k / (k! (1 - nu)_k) is enough (Abramowitz and Stegun 1964, 9.6.2 and 9.6.10).
pub fn variogram(smoothness: f64, x: f64) -> f64 {
    if !in_domain(smoothness, x) {
        return f64::NAN;
    }
    let square = 0.25 * x * x;
    if x == 0.0 {
        0.0
    } else if smoothness >= 12.0 && square <= smoothness / 16.0 {
        smooth(smoothness, square)
    } else if x > 2.0 {
        1.0 - correlation(smoothness, x)
    } else {
        let (steps, m) = split(smoothness);
        let x = x.max(LEAST);
        if steps == 0 { rough(m, x) } else { moderate(steps, m, x) }
    }
}

fn in_domain(smoothness: f64, x: f64) -> bool {
    smoothness > 0.0 && smoothness <= GREATEST_SMOOTHNESS && x >= 0.0
}

/// Great smoothness: what the sum leaves out is of order (x²/4)^nu / Gamma(nu)², below the precision of a double.
fn smooth(smoothness: f64, square: f64) -> f64 {
    let (mut term, mut sum) = (-1.0, 0.0);
    for k in 1..11 {
        let k = f64::from(k);
        term *= -square / (k * (smoothness - k));
        sum += term;
    }
    sum
}

/// Smoothness m up to 1/2: the two power series of K themselves, the difference being no smaller than their first
/// terms.
fn rough(m: f64, x: f64) -> f64 {
    let square = 0.25 * x * x;
    let gamma = reciprocals(m);
    let (mut falling, mut rising) = (1.0, 1.0);
    let (mut regular, mut singular) = (0.0, 1.0);
    for k in 1..30 {
        let k = f64::from(k);
        falling *= square / (k * (k - m));
        rising *= square / (k * (k + m));
        regular += falling;
        singular += rising;
    }
    pow(0.5 * x, 2.0 * m) * gamma.plus / gamma.minus * singular - regular
}

/// Smoothness m + `steps`, by the recurrence of M turned round.
fn moderate(steps: u16, m: f64, x: f64) -> f64 {
    let series = Series::new(m, x);
    let square = 0.25 * x * x;
    let first = -series.next;
    if steps == 1 {
        return first;
    }
    // In the term of x² the singular parts, far greater for m near -1/2, cancel: what is left is known.
    let second = square / (1.0 + m) + series.after;
    (2..steps)
        .fold((first, second), |(below, at), step| {
            let order = m + f64::from(step);
            (at, at - square / (order * (order - 1.0)) * (1.0 - below))
        })
        .1
}
