//! E. H. Vanmarcke 1975, "On the distribution of the first-passage time for normal stationary random processes", Journal of
//! Applied Mechanics 42, 215-220: the rate of survivors' failures, corrected for clumping, of an oscillator under white
//! noise. Formula from memory, with the exponent 1.2 of the bandwidth; the figures were computed from it elsewhere.

use crate::support::{close, results};

/// The rate at which survivors fail, over the undamped angular frequency.
fn hazard(damping: f64, reduced: f64, condition: &str) -> f64 {
    let period = 5.0;
    let results = results(&format!(
        "process sway = gaussian(
             standard_deviation: 1, correlation: oscillator(frequency: 1 rad/s, damping: {damping})
         )
         limit state out {{
             failure when     {condition} > {reduced}
             reference period {period} s
             first passage    vanmarcke
         }}"
    ));
    let out = results.limit_state("out");
    let start = 1.0 - out.number("initial_failure_probability");
    -(out.number("survival") / start).ln() / period
}

#[test]
fn two_barriers() {
    for (damping, reduced, expected) in [
        (0.05, 2.0, 0.018_524_6),
        (0.05, 3.0, 0.001_795_50),
        (0.01, 3.0, 8.527_58e-4),
    ] {
        let found = hazard(damping, reduced, "abs(sway)");
        close(found, expected, 4e-6, &format!("damping {damping}, barrier {reduced}"));
    }
}

#[test]
fn one_barrier() {
    for (damping, reduced, expected) in [(0.05, 2.0, 0.015_080_7), (0.10, 3.0, 0.001_557_75)] {
        let found = hazard(damping, reduced, "sway");
        close(found, expected, 4e-6, &format!("damping {damping}, barrier {reduced}"));
    }
}

/// For a broad band and a barrier far out, clumping goes and Rice's rate among the safe remains.
#[test]
fn a_broad_band_far_out() {
    let rate = |method: &str| {
        let results = results(&format!(
            "process gust = gaussian(standard_deviation: 1, correlation: squared_exponential(length: 1 s))
             limit state out {{ failure when gust > 7 reference period 1 s first passage {method} }}"
        ));
        let out = results.limit_state("out");
        out.number("failure_probability") - out.number("initial_failure_probability")
    };
    close(rate("vanmarcke") / rate("poisson"), 1.0, 1e-3, "barrier 7");
}
