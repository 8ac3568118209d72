//! E. H. Vanmarcke 1972, "Properties of spectral moments with applications to random vibration", Journal of the
//! Engineering Mechanics Division 98, 425-446: the oscillator under white noise. Formulas from memory; the figures come
//! from quadrature of the oscillator's density.

use crate::support::{Results, close, results, within};
use std::f64::consts::PI;

fn oscillator(damping: f64) -> Results {
    results(&format!(
        "process sway : mm = gaussian(
             standard_deviation: 2 mm, correlation: oscillator(frequency: 7 rad/s, damping: {damping})
         )"
    ))
}

/// Bandwidth by damping ratio.
#[test]
fn bandwidth() {
    for (damping, bandwidth) in [
        (0.01, 0.112220),
        (0.02, 0.157843),
        (0.05, 0.245612),
        (0.10, 0.338551),
        (0.20, 0.456372),
    ] {
        let results = oscillator(damping);
        within(
            results.moments("sway").number("bandwidth"),
            bandwidth,
            0.6e-6,
            &format!("damping {damping}"),
        );
    }
}

/// `delta^2` is near `(4 z/pi)(1 - 1.1 z)`: within 1.2 % for z up to 0.1 and 4.65 % at 0.2.
#[test]
fn approximate_bandwidth() {
    for (damping, tolerance) in [
        (0.01, 0.012),
        (0.02, 0.012),
        (0.05, 0.012),
        (0.10, 0.012),
        (0.20, 0.0465),
    ] {
        let results = oscillator(damping);
        let bandwidth = results.moments("sway").number("bandwidth");
        let approximate = 4.0 * damping / PI * (1.0 - 1.1 * damping);
        close(
            approximate / (bandwidth * bandwidth),
            1.0,
            tolerance,
            &format!("damping {damping}"),
        );
    }
}

/// `lambda_1/(lambda_0 w0) = (1 - (2/pi) atan(z/sqrt(1-z^2)))/sqrt(1-z^2)`, and `lambda_2 = w0^2 lambda_0` (S. H. Crandall
/// and W. D. Mark 1963, Random Vibration in Mechanical Systems: variances pi S0/(2 z w0^3) and pi S0/(2 z w0)).
#[test]
fn spectral_moments() {
    for damping in [0.001, 0.01, 0.05, 0.2, 0.7, 0.99] {
        let results = oscillator(damping);
        let sway = results.moments("sway");
        let damped = f64::sqrt(1.0 - damping * damping);
        let first = (1.0 - 2.0 / PI * f64::atan2(damping, damped)) / damped;
        close(sway.spectral_moments()[0], 4e-6, 1e-14, "lambda_0");
        close(
            sway.spectral_moments()[1],
            4e-6 * 7.0 * first,
            1e-12,
            &format!("lambda_1, damping {damping}"),
        );
        close(sway.spectral_moments()[2], 4e-6 * 49.0, 1e-14, "lambda_2");
        assert_eq!(sway.spectral_moments()[3], f64::INFINITY);
    }
}
