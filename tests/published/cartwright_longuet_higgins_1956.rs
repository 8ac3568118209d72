//! D. E. Cartwright and M. S. Longuet-Higgins 1956, "The statistical distribution of the maxima of a random function",
//! Proceedings of the Royal Society A 237, 212-232. From memory.

use crate::support::{close, results, within};

/// Low-pass noise: spectral width `eps = sqrt(1 - m2^2/(m0 m4)) = 2/3`, and the share of maxima below the mean
/// `(1 - sqrt(1 - eps^2))/2 = 0.1273`.
#[test]
fn low_pass_noise() {
    let results = results(
        "process noise = gaussian(standard_deviation: 3, correlation: band_limited(lower: 0 Hz, upper: 2 Hz))
         expect irregularity(noise) = sqrt(1 - (2/3)^2) within 1e-10 %",
    );
    let irregularity = results.moments("noise").number("irregularity");
    close((1.0 - irregularity * irregularity).sqrt(), 2.0 / 3.0, 1e-14, "width");
    within((1.0 - irregularity) / 2.0, 0.1273, 0.5e-4, "maxima below the mean");
    assert!(results.expectations_hold());
}

/// A single frequency: every maximum lies above the mean, the width is 0.
#[test]
fn one_frequency() {
    let results = results("process swell = gaussian(standard_deviation: 1, correlation: harmonic(frequency: 0.1 Hz))");
    close(
        results.moments("swell").number("irregularity"),
        1.0,
        1e-15,
        "irregularity",
    );
    assert_eq!(results.moments("swell").number("bandwidth"), 0.0);
}
