//! S. O. Rice, "Mathematical analysis of random noise", Bell System Technical Journal 23 (1944) 282-332 and 24 (1945)
//! 46-156, Part III. From memory.

use crate::support::{close, results};

/// Section 3.3: zeros per second, both ways, of an ideal low-pass filter's noise with cut-off f_b: 2 f_b / sqrt 3, printed
/// 1.155 f_b.
#[test]
fn zeros_of_low_pass_noise() {
    let results = results(
        "process noise = gaussian(standard_deviation: 1, correlation: band_limited(lower: 0 Hz, upper: 50 Hz))
         expect zero_upcrossing_rate(noise) = 0.5 * 1.155 * 50 /s within 0.03 %",
    );
    let zeros = 2.0 * results.moments("noise").number("zero_upcrossing_rate");
    close(zeros, 1.155 * 50.0, 5e-4, "zeros");
    assert!(results.expectations_hold());
}

/// Section 3.3: the same of an ideal band-pass filter, 2 sqrt((f_b^3 - f_a^3) / (3 (f_b - f_a))); of a narrow band about f,
/// 2 f.
#[test]
fn zeros_of_band_pass_noise() {
    for (lower, upper) in [(10.0_f64, 50.0_f64), (49.0, 50.0), (1.0, 1000.0)] {
        let results = results(&format!(
            "process noise = gaussian(
                 standard_deviation: 1, correlation: band_limited(lower: {lower} Hz, upper: {upper} Hz)
             )"
        ));
        let zeros = 2.0 * results.moments("noise").number("zero_upcrossing_rate");
        let rice = 2.0 * ((upper.powi(3) - lower.powi(3)) / (3.0 * (upper - lower))).sqrt();
        close(zeros, rice, 1e-13, "zeros");
    }
}

/// Section 3.6: maxima per second of low-pass noise, f_b sqrt(3/5), 0.775 f_b: the zeros upward over the irregularity.
#[test]
fn maxima_of_low_pass_noise() {
    let results = results(
        "process noise = gaussian(standard_deviation: 1, correlation: band_limited(lower: 0 Hz, upper: 50 Hz))",
    );
    let noise = results.moments("noise");
    let maxima = noise.number("zero_upcrossing_rate") / noise.number("irregularity");
    close(maxima, 0.775 * 50.0, 6e-4, "maxima");
}
