//! M. R. Leadbetter, G. Lindgren and H. Rootzen 1983, Extremes and Related Properties of Random Sequences and Processes,
//! Springer: the cosine process of section 7.4. From memory.

use crate::support::{results, within};

/// `A cos t + B sin t` stays below u over T < pi with probability `Phi(u) - T/(2 pi) exp(-u^2/2)`, and over 2 pi with
/// `1 - exp(-u^2/2)`: level, time, probability.
const STAYS_BELOW: &[(f64, f64, f64)] = &[(1.0, 2.0, 0.648280), (2.0, 3.0, 0.912632)];

/// Before pi the first passage is a failed start or exactly one crossing, so the bound of first order is exact. The
/// Poisson formula lies below it by terms of second order.
#[test]
fn cosine_process() {
    for (level, time, stays) in STAYS_BELOW {
        let results = results(&format!(
            "process x = gaussian(standard_deviation: 1, correlation: harmonic(frequency: 1 rad/s))
             limit state above {{ failure when x > {level} reference period {time} s }}"
        ));
        let above = results.limit_state("above");
        let (start, crossings) = (
            above.number("initial_failure_probability"),
            above.number("upcrossing_rate") * time,
        );
        within(1.0 - start - crossings, *stays, 0.6e-6, &format!("level {level}"));
        let short = start + crossings - above.number("failure_probability");
        let second_order = crossings * start + 0.5 * crossings * crossings;
        assert!(short > 0.0 && short <= second_order, "{short} against {second_order}");
    }
}

/// Over a whole period the amplitude decides: it is above u with probability `exp(-u^2/2)`, which is the expected number of
/// crossings.
#[test]
fn whole_period() {
    let results = results(
        "process x = gaussian(standard_deviation: 1, correlation: harmonic(frequency: 1 rad/s))
         limit state above { failure when x > 2 reference period 2 * pi * 1 s }",
    );
    let above = results.limit_state("above");
    within(
        1.0 - above.number("upcrossing_rate") * above.number("reference_period"),
        0.864665,
        0.5e-6,
        "amplitude",
    );
}
