//! S. O. Rice 1944-45, "Mathematical analysis of random noise", Bell System Technical Journal 23 and 24, Part III: ideal
//! low-pass and band-pass noise, given by its spectrum. From memory.

use crate::support::{close, results};
use std::f64::consts::PI;

/// Zeros per second 2 fb/sqrt(3), lambda_2/lambda_0 = wc²/3, and maxima fb sqrt(3/5) per second.
#[test]
fn low_pass_noise() {
    let results =
        results("process noise = gaussian(spectrum: band_limited(level: 0.02 m^2/Hz, lower: 0 Hz, upper: 50 Hz))");
    let noise = results.moments("noise");
    close(noise.number("standard_deviation"), 1.0, 1e-13, "level times width");
    let zeros = 2.0 * noise.number("zero_upcrossing_rate");
    close(zeros, 2.0 * 50.0 / 3.0_f64.sqrt(), 1e-13, "zeros");
    close(zeros, 1.155 * 50.0, 3e-4, "zeros");
    let moments = noise.spectral_moments();
    close(
        moments[2] / moments[0],
        (2.0 * PI * 50.0).powi(2) / 3.0,
        1e-13,
        "lambda_2",
    );
    let maxima = noise.number("zero_upcrossing_rate") / noise.number("irregularity");
    close(maxima, 50.0 * 0.6_f64.sqrt(), 1e-13, "maxima");
}

/// The same noise by its correlation and by its spectrum.
#[test]
fn band_pass_noise_by_kernel_and_by_spectrum() {
    for (lower, upper) in [(10.0, 50.0), (49.0, 50.0), (0.0, 2.5)] {
        let results = results(&format!(
            "process one = gaussian(
                 standard_deviation: 2, correlation: band_limited(lower: {lower} Hz, upper: {upper} Hz)
             )
             process two = gaussian(
                 spectrum: band_limited(level: {} /Hz, lower: {lower} Hz, upper: {upper} Hz)
             )",
            4.0 / (upper - lower)
        ));
        let (one, two) = (results.moments("one"), results.moments("two"));
        for (a, b) in one.spectral_moments().iter().zip(two.spectral_moments()) {
            close(*a, b, 1e-11, "moments");
        }
    }
}
