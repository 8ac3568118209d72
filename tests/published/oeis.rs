//! The On-Line Encyclopedia of Integer Sequences (seen).

use crate::support::results;

/// A353321: the whole part of one over the two-sided normal tail beyond n standard deviations.
const A353321: [f64; 9] = [
    1.0,
    3.0,
    21.0,
    370.0,
    15_787.0,
    1_744_277.0,
    506_797_345.0,
    390_682_215_445.0,
    803_734_397_655_347.0,
];

#[test]
fn a353321_two_sided_tails() {
    for (n, whole) in A353321.iter().enumerate() {
        let results = results(&format!(
            "process sway : mm = gaussian(standard_deviation: 3 mm, correlation: squared_exponential(length: 1 s))
             limit state contact {{ failure when abs(sway) > {n} * 3 mm reference period 1 s }}"
        ));
        let inverse = 1.0 / results.limit_state("contact").number("initial_failure_probability");
        // The digits before the point, as far as a double holds them.
        let rounding = 4e-14 * whole;
        assert!(
            inverse >= whole - rounding && inverse < whole + 1.0 + rounding,
            "{n}: {inverse}"
        );
    }
}
