//! R. D. Larrabee and C. A. Cornell 1981, "Combination of various load processes", Journal of the Structural Division
//! 107, 223-239. From memory: the point-crossing bound on the rate of a sum of two equal, independent Gaussian processes is
//! sqrt 2 times the rate, at every level.

use crate::support::{close, results};
use std::f64::consts::{SQRT_2, TAU};
use std::fmt::Write;

const STEP: f64 = 0.25;
const REACH: i32 = 48;

#[test]
fn point_crossing_bound() {
    for level in [0.0, 1.0, 3.0, 6.0] {
        let mut text = String::from(
            "process x = gaussian(standard_deviation: 1, correlation: matern(smoothness: 5/2, length: 1 s))
             process y = gaussian(standard_deviation: 1, correlation: matern(smoothness: 5/2, length: 1 s))\n",
        );
        writeln!(
            text,
            "limit state sum {{ failure when x + y > {level} reference period 1 s }}"
        )
        .unwrap();
        let levels: Vec<f64> = (-REACH..=REACH).map(|step| f64::from(step) * STEP).collect();
        for (index, at) in levels.iter().enumerate() {
            writeln!(
                text,
                "limit state l{index} {{ failure when x > {at} reference period 1 s }}"
            )
            .unwrap();
        }
        let results = results(&text);
        // The trapezoidal rule on a product of two Gaussian curves has all digits at this step.
        let convolved: f64 = levels
            .iter()
            .zip(results.entries("limit_states").skip(1))
            .map(|(at, one)| STEP * one.number("upcrossing_rate") * (-0.5 * (level - at).powi(2)).exp() / TAU.sqrt())
            .sum();
        let bound = 2.0 * convolved;
        close(
            bound / results.limit_state("sum").number("upcrossing_rate"),
            SQRT_2,
            1e-12,
            &format!("level {level}"),
        );
    }
}
