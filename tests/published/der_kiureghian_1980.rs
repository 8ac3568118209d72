//! A. Der Kiureghian 1980, "Structural response to stationary excitation", Journal of the Engineering Mechanics Division 106,
//! 1195-1213: the peak factor of a response over a time, fitted to the mean of the largest modulus under clumping. Fit and
//! figures from memory.

use crate::support::{close, results};
use std::f64::consts::PI;

/// The damping ratio that gives an oscillator under white noise a bandwidth (Vanmarcke 1972), by bisection.
fn damping(bandwidth: f64) -> f64 {
    let of = |z: f64| {
        let damped = f64::sqrt(1.0 - z * z);
        let first = (1.0 - 2.0 / PI * f64::atan2(z, damped)) / damped;
        f64::sqrt(1.0 - first * first)
    };
    let (mut low, mut high) = (1e-6, 0.9);
    for _ in 0..100 {
        let middle = 0.5 * (low + high);
        if of(middle) < bandwidth {
            low = middle;
        } else {
            high = middle;
        }
    }
    0.5 * (low + high)
}

/// Crossings of the mean in either direction over the time, bandwidth, peak factor. The fit keeps within 2 % of the mean that
/// it is fitted to.
#[test]
fn peak_factor() {
    for (crossings, bandwidth, factor) in [
        (100.0, 0.25, 2.9992),
        (100.0, 0.5, 3.1606),
        (1000.0, 0.1, 3.4301),
        (1000.0, 0.25, 3.6857),
    ] {
        let results = results(&format!(
            "process sway = gaussian(
                 standard_deviation: 1, correlation: oscillator(frequency: 1 rad/s, damping: {})
             )
             limit state out {{
                 failure when     abs(sway) > 3
                 reference period {} s
                 first passage    vanmarcke
                 extremes at      50 %
             }}",
            damping(bandwidth),
            crossings * PI
        ));
        close(
            results.moments("sway").number("bandwidth"),
            bandwidth,
            1e-9,
            "bandwidth",
        );
        let mean = results.limit_state("out").0["extremes"]["mean"]
            .as_f64()
            .expect("a mean");
        close(
            factor,
            mean,
            0.02,
            &format!("{crossings} crossings, bandwidth {bandwidth}"),
        );
    }
}
