//! The standard normal distribution, with full relative precision in both tails.
//!
//! Crates serve for erfc (`libm`) and for its inverse (`statrs`); the scaled and logarithmic forms are ours. All
//! arguments and results are pure numbers. A NaN argument gives NaN, or `None` where the result is an `Option`.

use libm::{erfc, exp, expm1, log, log1p, sqrt};
use statrs::function::erf::{erf_inv, erfc_inv};
use std::f64::consts::{FRAC_1_SQRT_2, LN_2, SQRT_2};

/// ln sqrt(2 pi).
const LN_SQRT_TAU: f64 = 0.918_938_533_204_672_7;
/// 1 / sqrt(2 pi).
const INVERSE_SQRT_TAU: f64 = 0.398_942_280_401_432_7;
/// 1 / sqrt(pi).
const INVERSE_SQRT_PI: f64 = 0.564_189_583_547_756_3;
/// ln 2 minus its nearest double.
const LN_2_REMAINDER: f64 = 2.319_046_813_846_299_6e-17;
/// Beyond it even the smallest double exceeds the tail.
const END_OF_TAIL: f64 = 39.0;

/// The density phi(x) = exp(-x²/2) / sqrt(2 pi), for every x.
///
/// Greatest relative error 5e-16 down to the smallest normal double, against `tests/reference/normal.csv`.
pub fn pdf(x: f64) -> f64 {
    if x.abs() > END_OF_TAIL {
        return 0.0;
    }
    let square = x * x;
    let remainder = x.mul_add(x, -square);
    INVERSE_SQRT_TAU * exp(-0.5 * square) * (1.0 - 0.5 * remainder)
}

/// ln phi(x), for every x; minus infinity only where x²/2 is beyond the doubles.
///
/// Greatest relative error 3e-16, against `tests/reference/normal.csv`.
pub fn ln_pdf(x: f64) -> f64 {
    -0.5 * x * x - LN_SQRT_TAU
}

/// The lower tail Phi(x), for every x; for negative x as precise, relatively, as [`upper`] is for positive x.
pub fn lower(x: f64) -> f64 {
    upper(-x)
}

/// The upper tail 1 - Phi(x), for every x, never by subtraction.
///
/// Greatest relative error 6e-16 down to the smallest normal double (x = 37.5), then one unit of the smallest double,
/// against `tests/reference/normal.csv`. From erfc(x / sqrt 2) / 2; what the rounding of x / sqrt 2 does to
/// exp(-x²/2), up to 1e-13, is put back to first order.
pub fn upper(x: f64) -> f64 {
    if x.abs() > END_OF_TAIL {
        return if x > 0.0 { 0.0 } else { 1.0 };
    }
    let y = x * FRAC_1_SQRT_2;
    if x < 0.0 {
        return 0.5 * erfc(y); // No tail: the rounding of y is harmless.
    }
    let square = x * x;
    let excess = y.mul_add(y, -0.5 * square) - 0.5 * x.mul_add(x, -square);
    0.5 * erfc(y) * (1.0 + excess)
}

/// ln Phi(x), for every x; minus infinity only where x²/2 is beyond the doubles.
///
/// Greatest relative error 6e-16 for x in [-1e150, 37], against `tests/reference/normal.csv`. Below zero
/// -x²/2 + ln(erfcx(-x / sqrt 2) / 2), whose two terms have the same sign; above, ln(1 - upper tail).
pub fn ln_lower(x: f64) -> f64 {
    if x < 0.0 {
        -0.5 * x * x + log(0.5 * erfcx(-x * FRAC_1_SQRT_2))
    } else {
        log1p(-upper(x))
    }
}

/// ln(1 - Phi(x)), the mirror image of [`ln_lower`].
pub fn ln_upper(x: f64) -> f64 {
    ln_lower(-x)
}

/// The scaled complementary error function exp(x²) erfc(x), for every x; infinite below -26.7, where it exceeds the
/// doubles.
///
/// Greatest relative error 6e-16, against `tests/reference/normal.csv`. From erfc up to x = 12, then the asymptotic
/// series 1/(x sqrt pi) sum (-1)^k (2k-1)!! / (2x²)^k (Abramowitz and Stegun 1964, "Handbook of Mathematical
/// Functions", 7.1.23), whose terms fall below the precision of a double before they grow.
pub fn erfcx(x: f64) -> f64 {
    if x < -27.0 {
        return f64::INFINITY;
    }
    if x < 12.0 {
        let square = x * x;
        let remainder = x.mul_add(x, -square);
        return exp(square) * (1.0 + remainder) * erfc(x);
    }
    let ratio = 0.5 / x / x;
    let series = (1..=12)
        .rev()
        .fold(1.0, |sum, k| 1.0 - f64::from(2 * k - 1) * ratio * sum);
    INVERSE_SQRT_PI / x * series
}

/// The quantile: x with Phi(x) = p, for 0 < p < 1; `None` elsewhere. Give the smaller tail to keep precision:
/// the quantile of 1 - q is minus that of q.
///
/// Greatest relative error 6e-16 for p from 5e-324 up, against `tests/reference/normal.csv`, p being taken as the
/// double it is.
pub fn quantile(p: f64) -> Option<f64> {
    if !(p > 0.0 && p < 1.0) {
        return None;
    }
    // 2 p - 1 is exact in this range, and 2 p everywhere.
    let x = if (0.25..=0.75).contains(&p) {
        erf_inv(2.0 * p - 1.0)
    } else {
        -erfc_inv(2.0 * p)
    };
    Some(SQRT_2 * x)
}

/// The quantile of a probability given by its logarithm: x with ln Phi(x) = `ln_p`, for every `ln_p` below zero,
/// however close to zero or far from it; `None` elsewhere.
///
/// Greatest relative error 6e-16 for `ln_p` in [-1.7e308, -1e-300], against `tests/reference/normal.csv`. As far as p
/// is a double, by the quantile of the smaller tail (about the median, by p - 1/2); beyond, by Newton's iteration on
/// [`ln_lower`] from the asymptote x² = -2 ln p - ln(2 pi x²).
pub fn quantile_of_ln(ln_p: f64) -> Option<f64> {
    let from_median = (ln_p + LN_2) + LN_2_REMAINDER;
    if !(ln_p < 0.0 && ln_p > f64::NEG_INFINITY) {
        None
    } else if from_median.abs() < 0.25 {
        Some(SQRT_2 * erf_inv(expm1(from_median)))
    } else if from_median > 0.0 {
        Some(SQRT_2 * erfc_inv(-2.0 * expm1(ln_p)))
    } else if ln_p > -700.0 {
        quantile(exp(ln_p))
    } else {
        Some(far_quantile(ln_p))
    }
}

/// [`quantile_of_ln`] below ln p = -700.
fn far_quantile(ln_p: f64) -> f64 {
    let leading = SQRT_2 * sqrt(-ln_p);
    if ln_p < -1e20 {
        return -leading; // The correction, ln(2 pi x²) / 2x², is below the precision of a double.
    }
    let correction = 2.0 * (LN_SQRT_TAU + log(leading));
    let start = -sqrt(-2.0 * ln_p - correction);
    // ln Phi is so nearly a parabola here that two steps suffice; the third costs little.
    (0..3).fold(start, |x, _| {
        let reciprocal_slope = erfcx(-x * FRAC_1_SQRT_2) * (0.5 / INVERSE_SQRT_TAU);
        x - (ln_lower(x) - ln_p) * reciprocal_slope
    })
}
