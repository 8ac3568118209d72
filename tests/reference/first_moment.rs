//! lambda_1 of terms that nearly cancel, against 2/pi times the integral of (C(0) - C(tau))/tau^2, C in 70-digit arithmetic
//! (mpmath).

use crate::support::{close, results};

/// Kernel, form, lambda_1.
const ROWS: &[(&str, &str, f64)] = &[
    (
        "squared_exponential(length: 1 s)",
        "x - delay(x, by: 1 ms)",
        1.5957685896828e-6,
    ),
    (
        "squared_exponential(length: 1 s)",
        "x - delay(x, by: 0.1 ms)",
        1.5957691162865e-8,
    ),
    (
        "matern(smoothness: 5/2, length: 1 s)",
        "x - delay(x, by: 1 ms)",
        4.74502937731917e-6,
    ),
    (
        "matern(smoothness: 5/2, length: 1 s)",
        "x - delay(x, by: 0.1 ms)",
        4.74508289822754e-8,
    ),
    (
        "matern(smoothness: 5/2, length: 1 s)",
        "x - 2 * delay(x, by: 0.1 s) + delay(x, by: 0.2 s)",
        0.0131500578600372,
    ),
    (
        "squared_exponential(length: 1 s) * matern(smoothness: 5/2, length: 2 s)",
        "x - delay(x, by: 0.1 s)",
        0.0278197429512621,
    ),
    (
        "squared_exponential(length: 1 s) * matern(smoothness: 5/2, length: 2 s)",
        "x - delay(x, by: 1 ms)",
        2.80238350963572e-6,
    ),
    // lambda_2 is infinite here.
    ("stretched()", "x + delay(x, by: 0.5 s)", 3.59518303275544),
];

#[test]
fn small_differences_keep_their_digits() {
    for (kernel, form, expected) in ROWS {
        let results = results(&format!(
            "kernel stretched(tau) = exp(-(tau / 1 s)^1.9)
             process x = gaussian(standard_deviation: 1, correlation: {kernel})
             margin m = {form}"
        ));
        let [_, first, _, _] = results.moments("m").spectral_moments();
        close(first, *expected, 5e-9, &format!("{form} of {kernel}"));
    }
}
