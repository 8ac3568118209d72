//! H. Tajimi 1960, "A statistical method of determining the maximum response of a building structure during an
//! earthquake", Proceedings of the 2nd World Conference on Earthquake Engineering, with the form of K. Kanai 1957. Firm
//! soil: 15.6 rad/s, damping 0.6. From memory.

use crate::support::{close, results};
use std::f64::consts::PI;

/// The variance under a two-sided level S0 is pi S0 wg (1 + 4 z²)/(2 z): 99.6513 S0 on firm soil.
#[test]
fn variance() {
    for (frequency, damping) in [(15.6, 0.6), (5.0, 0.2), (12.0, 0.003)] {
        let results = results(&format!(
            "process ground = gaussian(
                 spectrum: two_sided(kanai_tajimi(
                     level: 1 m^2/s^4/(rad/s), frequency: {frequency} rad/s, damping: {damping}
                 ))
             )"
        ));
        let variance = results.moments("ground").number("standard_deviation").powi(2);
        let exact = PI * frequency * (1.0 + 4.0 * damping * damping) / (2.0 * damping);
        close(variance, exact, 1e-13, "variance");
        if damping == 0.6 {
            close(variance, 99.6513, 1e-6, "firm soil");
        }
    }
}

/// The tail w^-2 leaves no second moment: the one-sided integral of w² S/S0 grows as 4 z² wg² times where it is cut.
#[test]
fn the_acceleration_has_no_derivative() {
    let results = results(
        "process ground = gaussian(
             spectrum: kanai_tajimi(level: 0.02 m^2/s^4/Hz, frequency: 15.6 rad/s, damping: 60 %)
         )",
    );
    let ground = results.moments("ground");
    for place in 1..4 {
        assert_eq!(ground.0["spectral_moments"][place], "infinite", "{place}");
    }
}
