//! Power series, as lists of coefficients.

use crate::expression::{Series, SeriesTerm};

/// The coefficients of h^0, ..., h^order in value (1 + q_1 h + q_2 h^2)^power.
///
/// By J. C. P. Miller's recurrence (D. E. Knuth 1997, The Art of Computer Programming, vol. 2, sec. 4.7): with
/// y = q^p, q y' = p q' y gives n c_n = sum over j of (p j - n + j) q_j c_(n-j).
pub(super) fn power([slope, curvature]: [f64; 2], power: f64, value: f64, order: usize) -> Vec<f64> {
    let mut coefficients = vec![value];
    let (mut before, mut last) = (0.0, value);
    for n in 1..=order {
        let n = n as f64;
        let next = ((power - n + 1.0) * slope * last + (2.0 * power - n + 2.0) * curvature * before) / n;
        coefficients.push(next);
        (before, last) = (last, next);
    }
    coefficients
}

/// The product of two series, as long as the shorter of them.
pub(in crate::covariance::kernel) fn product(left: &[f64], right: &[f64]) -> Vec<f64> {
    let length = left.len().min(right.len());
    let coefficient = |n: usize| {
        left.iter()
            .take(n + 1)
            .zip(right.iter().take(n + 1).rev())
            .map(|(a, b)| a * b)
            .sum()
    };
    (0..length).map(coefficient).collect()
}

/// Right-sided expansions end here, whatever order is asked for.
pub(super) const HIGHEST_ORDER: f64 = 64.0;

/// The series with these powers and coefficients, powers rising, up to O(h^order).
pub(super) fn series(order: f64, terms: impl Iterator<Item = (f64, f64)>) -> Series {
    let order = order.min(HIGHEST_ORDER);
    let below = terms.take_while(|(exponent, _)| *exponent < order);
    Series::from_terms(
        below
            .map(|(exponent, coefficient)| SeriesTerm::new(coefficient, exponent, 0))
            .collect(),
        order,
    )
}

/// The powers 0, step, 2 step, ... with coefficients that begin with 1 and whose ratios are `ratio(k)`, k from 1.
pub(super) fn powers(step: f64, ratio: impl Fn(f64) -> f64) -> impl Iterator<Item = (f64, f64)> {
    (0..).map(f64::from).scan(1.0, move |coefficient, k| {
        let this = *coefficient;
        *coefficient *= ratio(k + 1.0);
        Some((step * k, this))
    })
}

/// The coefficients multiplied by 1, rate, rate^2, ...: from powers of rate times h to powers of h.
pub(super) fn rescaled(coefficients: impl Iterator<Item = f64>, rate: f64) -> impl Iterator<Item = f64> {
    let scales = std::iter::successors(Some(1.0), move |scale| Some(scale * rate));
    coefficients.zip(scales).map(|(coefficient, scale)| coefficient * scale)
}
