//! Worked examples that a reviewer can follow with a pocket calculator, from Rice's formula applied to a combination
//! (Cramér and Leadbetter 1967, Stationary and Related Stochastic Processes, ch. 10). Derived here, not published.

use crate::support::{close, results};

/// R - X - 2Y: mean 8 - 2 - 2 = 4 kN, variance 1 + 4/4 = 2 kN^2, derivative variance 1/9 + 4 (1/4)(5/3)/4 = 0.52778 kN^2/s^2,
/// 2.828427 standard deviations from 0, 0.001497450 crossings a second.
#[test]
fn margin_of_two_loads() {
    let results = results(
        "parameter capacity : kN = 8 kN
         process x : kN = gaussian(mean: 2 kN, standard_deviation: 1 kN, correlation: squared_exponential(length: 3 s))
         process y : kN = gaussian(mean: 1 kN, standard_deviation: 0.5 kN, correlation: matern(smoothness: 5/2, length: 2 s))
         margin rod : kN = capacity - x - 2 * y
         limit state yielding { failure when rod < 0 reference period 1 s }
         expect upcrossing_rate(yielding) = 0.001497450 /s within 0.0001 %",
    );
    let rod = results.moments("rod");
    close(rod.number("mean"), 4e3, 1e-15, "mean");
    close(rod.spectral_moments()[0], 2e6, 1e-14, "variance");
    close(rod.spectral_moments()[2], 0.5277778e6, 1e-7, "derivative variance");
    let yielding = results.limit_state("yielding");
    close(yielding.number("upcrossing_rate"), 0.001497450, 1e-6, "rate");
    close(
        rod.number("mean") / rod.number("standard_deviation"),
        2.828427,
        2e-7,
        "distance",
    );
    assert!(results.expectations_hold());
}

/// A strength N(5, 1) that hardly changes against a unit load of frequency 1 rad/s: variance 2, derivative variance 1,
/// rate exp(-25/4) / (2 pi sqrt 2) = 2.172524e-4, the mean over the strength of the rate given the strength.
#[test]
fn slow_strength_and_fast_load() {
    let results = results(
        "process strength = gaussian(mean: 5, standard_deviation: 1, correlation: squared_exponential(length: 1e6 year))
         process load = gaussian(standard_deviation: 1, correlation: squared_exponential(length: 1 s))
         margin m = strength - load
         limit state overload { failure when m < 0 reference period 2000 * pi * 1 s }",
    );
    let overload = results.limit_state("overload");
    close(overload.number("upcrossing_rate"), 2.172524e-4, 3e-7, "rate");
    // Averaging the rate first: 1 - exp(-rate T), with the start.
    let counted = 1.0 - overload.number("survival") / (1.0 - overload.number("initial_failure_probability"));
    close(counted, 0.744629, 1e-6, "failure by counted crossings");
}
