//! M. Abramowitz and I. A. Stegun 1964, Handbook of Mathematical Functions, Table 26.2: the normal tail Q(x) for extended
//! arguments, printed as -log10 Q(x). From memory, and found again with 40-digit arithmetic.

use crate::support::{results, within};

const TABLE_26_2: &[(f64, f64)] = &[
    (5.0, 6.54265),
    (10.0, 23.11805),
    (15.0, 50.43522),
    (20.0, 88.56010),
    (25.0, 137.51475),
    (30.0, 197.30921),
    (35.0, 267.94888),
];

#[test]
fn deep_tails() {
    for (argument, printed) in TABLE_26_2 {
        let results = results(&format!(
            "process load : kN = gaussian(mean: 2 kN, standard_deviation: 4 kN, correlation: matern(smoothness: 3, length: 1 s))
             limit state overload {{ failure when load > {} kN reference period 1e-300 s }}",
            2.0 + 4.0 * argument
        ));
        let overload = results.limit_state("overload");
        within(
            -overload.number("initial_failure_probability").log10(),
            *printed,
            0.5e-5,
            &format!("Q({argument})"),
        );
        within(
            overload.number("reliability_index"),
            *argument,
            1e-12,
            &format!("index at {argument}"),
        );
    }
}

/// Beyond the smallest double the probability is 0, but its index is still right.
#[test]
fn indices_beyond_the_doubles() {
    for argument in [40.0, 50.0, 100.0, 500.0] {
        let results = results(&format!(
            "process load = gaussian(standard_deviation: 1, correlation: matern(smoothness: 3, length: 1 s))
             limit state overload {{ failure when load > {argument} reference period 1e-300 s }}"
        ));
        let overload = results.limit_state("overload");
        assert_eq!(overload.number("initial_failure_probability"), 0.0);
        within(
            overload.number("reliability_index"),
            argument,
            1e-11 * argument,
            "index",
        );
    }
}
