//! C. E. Rasmussen and C. K. I. Williams 2006, Gaussian Processes for Machine Learning, MIT Press, chapter 4: kernels
//! and their smoothness. Formulas from memory; the half-integer Matern forms were seen, and the values at lag
//! 1 are those that scikit-learn 1.9.1 prints.

use crate::support::{close, correlation, results, run};
use std::f64::consts::PI;

/// Kernel, length in s, correlation at a lag of 1 s.
const VALUES: &[(&str, f64)] = &[
    ("matern(smoothness: 3/2, length: 1 s)", 0.4833577245965077),
    ("matern(smoothness: 5/2, length: 1 s)", 0.5239941088318203),
    ("rational_quadratic(mixture: 2, length: 1 s)", 0.64),
    ("squared_exponential(length: 1 s)", 0.6065306597126334),
    ("periodic(period: 3 s)", 0.22313016014842987),
    ("matern(smoothness: 3/2, length: 2 s)", 0.78488765),
    ("matern(smoothness: 5/2, length: 2 s)", 0.82864914),
    ("rational_quadratic(mixture: 0.5, length: 2 s)", 0.89442719),
];

/// Eq. 4.31, written as a model would.
const PERIODIC: &str = "kernel periodic(tau, period: s) = exp(-2 * sin(pi * 1 rad * tau / period)^2)\n";

fn model(kernel: &str) -> String {
    format!("{PERIODIC}process x = gaussian(standard_deviation: 1, correlation: {kernel})\n")
}

#[test]
fn values() {
    for (kernel, value) in VALUES {
        let tolerance = if kernel.contains("2 s") { 6e-9 } else { 4e-15 };
        close(correlation(&model(kernel), "1 s"), *value, tolerance, kernel);
    }
}

/// Minus the second derivative at lag 0: the second spectral moment.
const CURVATURES: &[(&str, f64)] = &[
    ("matern(smoothness: 3/2, length: 1 s)", 3.0),
    ("matern(smoothness: 5/2, length: 1 s)", 5.0 / 3.0),
    ("matern(smoothness: 4, length: 1 s)", 4.0 / 3.0),
    ("matern(smoothness: 1.1, length: 1 s)", 11.0),
    ("squared_exponential(length: 1 s)", 1.0),
    ("rational_quadratic(mixture: 0.3, length: 1 s)", 1.0),
    ("rational_quadratic(mixture: 50, length: 1 s)", 1.0),
    ("periodic(period: 3 s)", 4.0 * PI * PI / 9.0),
    ("decaying(rate: 0.1 /s, frequency: 2 rad/s)", 4.01),
];

const DECAYING: &str = "kernel decaying(tau, rate: /s, frequency: rad/s) =
    exp(-rate * tau) * (cos(frequency * tau) + rate / (frequency / 1 rad) * sin(frequency * tau))\n";

#[test]
fn second_moments() {
    for (kernel, curvature) in CURVATURES {
        let results = results(&format!("{DECAYING}{}", model(kernel)));
        close(
            results.moments("x").number("derivative_standard_deviation").powi(2),
            *curvature,
            2e-14,
            kernel,
        );
    }
}

/// Section 4.2: processes that are not differentiable in mean square have no rate of crossings.
#[test]
fn rough_kernels_have_no_crossings() {
    for kernel in [
        "exponential(length: 1 s)",
        "matern(smoothness: 1/2, length: 1 s)",
        "matern(smoothness: 1, length: 1 s)",
        "triangular(length: 1 s)",
        "damped_cosine(length: 1 s, frequency: 1 Hz)",
        "0.999 * squared_exponential(length: 1 s) + 0.001 * exponential(length: 1 s)",
        "squared_exponential(length: 1 s) * exponential(length: 1000 year)",
        "stretched()",
    ] {
        let text = format!(
            "kernel stretched(tau) = exp(-(tau / 1 s)^1.9)
             {}limit state overload {{ failure when x > 3 reference period 1 s }}",
            model(kernel)
        );
        assert_eq!(run(&text).errors(), ["process/not-differentiable"], "{kernel}");
        // Its moments are infinite where it is only looked at.
        let results = results(&format!(
            "kernel stretched(tau) = exp(-(tau / 1 s)^1.9)\n{}",
            model(kernel)
        ));
        assert_eq!(results.moments("x").spectral_moments()[2], f64::INFINITY, "{kernel}");
    }
}
