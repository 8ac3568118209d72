//! DNV-RP-C205, "Environmental conditions and environmental loads", 3.5.5: JONSWAP spectra, with spreads 0.07 and 0.09.
//! The fits from memory; the integrals by mpmath.

use crate::support::{close, results};
use std::f64::consts::PI;

/// Peak enhancement, Tz/Tp by the integral to the digits known.
const PERIODS: [(f64, f64); 5] = [
    (1.0, 0.71037),
    (2.0, 0.74644),
    (3.3, 0.77740),
    (5.0, 0.80529),
    (7.0, 0.82850),
];

fn sea(enhancement: f64) -> (f64, f64, [f64; 3]) {
    let results = results(&format!(
        "process sea = gaussian(spectrum: jonswap(hs: 5 m, tp: 9 s, peak_enhancement: {enhancement}))"
    ));
    let sea = results.moments("sea");
    let moments = sea.spectral_moments();
    (
        4.0 * sea.number("standard_deviation"),
        1.0 / sea.number("zero_upcrossing_rate") / 9.0,
        [moments[0], moments[1], moments[2]],
    )
}

/// 0.6673 + 0.05037 g - 0.006230 g² + 0.0003341 g³ for Tz/Tp, which is itself within 2.1e-3 of the integral.
#[test]
fn zero_crossing_periods() {
    for (enhancement, integral) in PERIODS {
        let (height, ratio, _) = sea(enhancement);
        close(height, 5.0, 1e-13, "Hs");
        close(ratio, integral, 1e-5, &format!("Tz/Tp for {enhancement}"));
        let fit = 0.6673 + 0.05037 * enhancement - 0.006230 * enhancement.powi(2) + 0.0003341 * enhancement.powi(3);
        close(ratio, fit, 2.1e-3, &format!("Tz/Tp for {enhancement}, fitted"));
    }
}

/// 0.7303 + 0.04936 g - 0.006556 g² + 0.0003610 g³ for T1/Tp.
#[test]
fn mean_periods() {
    for (enhancement, _) in PERIODS {
        let (_, _, moments) = sea(enhancement);
        let ratio = 2.0 * PI * moments[0] / moments[1] / 9.0;
        let fit = 0.7303 + 0.04936 * enhancement - 0.006556 * enhancement.powi(2) + 0.0003610 * enhancement.powi(3);
        close(ratio, fit, 2.5e-3, &format!("T1/Tp for {enhancement}, fitted"));
    }
}
