//! E. Wong 1966, "Some results concerning the zero-crossings of Gaussian noise", SIAM Journal on Applied Mathematics 14,
//! 1246-1254: correlation 1.5 exp(-t/2) - 0.5 exp(-3 t/2), an overdamped oscillator under white noise. From memory.

use crate::support::{close, results};

/// Minus the second derivative at lag 0 is 3/4, so the mean is crossed upward sqrt(3)/(4 pi) = 0.13783 times a second.
#[test]
fn crossings_of_the_mean() {
    let results = results(
        "kernel overdamped(tau, time: s) = 1.5 * exp(-tau / (2 * time)) - 0.5 * exp(-3 * tau / (2 * time))
         process noise = gaussian(standard_deviation: 1, correlation: overdamped(time: 1 s))",
    );
    let noise = results.moments("noise");
    close(noise.spectral_moments()[2], 0.75, 1e-14, "lambda_2");
    close(noise.number("zero_upcrossing_rate"), 0.13783, 2e-5, "rate");
    assert_eq!(noise.spectral_moments()[3], f64::INFINITY);
}
