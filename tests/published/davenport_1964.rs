//! A. G. Davenport 1964, "Note on the distribution of the largest value of a random function with application to gust
//! loading", Proceedings of the Institution of Civil Engineers 28, 187-196. Seen as quoted in Burton et al. 2001, Wind
//! Energy Handbook, eq. A5.42 and A5.46; the means are those of the exact Poisson maximum, by quadrature.

use crate::support::{close, results};
use std::fmt::Write;

/// Expected number of upcrossings of the mean, Davenport's peak factor, mean of the Poisson maximum.
const PEAK_FACTORS: &[(f64, f64, f64)] = &[
    (60.0, 3.0633, 3.0299),
    (100.0, 3.2250, 3.1965),
    (600.0, 3.7382, 3.7199),
    (1000.0, 3.8722, 3.8558),
    (3600.0, 4.1895, 4.1765),
    (10_000.0, 4.4264, 4.4154),
];

const STEP: f64 = 0.05;
const LEVELS: usize = 180;

/// The mean largest value is the integral, over the level, of the chance of passing it.
#[test]
fn peak_factor() {
    for (expected, davenport, mean) in PEAK_FACTORS {
        let mut text = format!(
            "process gust = gaussian(standard_deviation: 1, correlation: squared_exponential(length: 1 s))
             constant duration = {expected} * 2 * pi * 1 s\n"
        );
        for level in 0..=LEVELS {
            let above = level as f64 * STEP;
            writeln!(
                text,
                "limit state l{level} {{ failure when gust > {above} reference period duration }}"
            )
            .unwrap();
        }
        let passed: Vec<f64> = results(&text)
            .entries("limit_states")
            // The published maximum counts crossings alone; the start is put aside.
            .map(|one| 1.0 - one.number("survival") / (1.0 - one.number("initial_failure_probability")))
            .collect();
        let ends = 0.5 * (passed[0] + passed[LEVELS]);
        let found = STEP * (passed.iter().sum::<f64>() - ends);
        close(found, *mean, 2e-5, &format!("mean of {expected}"));
        close(*davenport, found, 0.0115, &format!("peak factor of {expected}"));
    }
}
