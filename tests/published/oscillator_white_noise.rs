//! An oscillator under white noise of the two-sided density S0: the variances pi S0/(2 z w0³) and pi S0/(2 z w0) of
//! displacement and velocity (N. C. Nigam 1983, Introduction to Random Vibrations, from memory), and the first moment and the
//! bandwidth of E. H. Vanmarcke (1972), "Properties of spectral moments with applications to random vibration", J. Eng. Mech.
//! Div. 98 (from memory; the figures of the bandwidth computed from the formula).

use super::white::{moments, oscillator, white};
use std::f64::consts::{FRAC_2_PI, PI};

#[test]
fn variances_first_moment_and_bandwidth() {
    let level = 0.3; // two-sided
    let source = [white(2.0 * level)];
    for frequency in [0.02, 1.0, 7.3, 900.0_f64] {
        for damping in [0.0001, 0.001, 0.02, 0.3, 0.99_f64] {
            let found = moments(&source, &oscillator(frequency, damping));
            let variance = PI * level / (2.0 * damping * frequency.powi(3));
            let root = (1.0 - damping * damping).sqrt();
            let first = (1.0 - FRAC_2_PI * (damping / root).atan()) / root;
            let expected = [
                variance,
                variance * frequency * first,
                variance * frequency * frequency,
                f64::INFINITY,
            ];
            for (found, expected) in found.into_iter().zip(expected) {
                assert!(
                    found == expected || (found / expected - 1.0).abs() < 1e-11,
                    "{frequency} rad/s, {damping}: {found} against {expected}"
                );
            }
        }
    }
    let bandwidths = [
        (0.01, 0.112220),
        (0.02, 0.157843),
        (0.05, 0.245612),
        (0.10, 0.338551),
        (0.20, 0.456372),
    ];
    for (damping, expected) in bandwidths {
        let [zeroth, first, second, _] = moments(&source, &oscillator(2.0, damping));
        let found = (1.0 - first * first / (zeroth * second)).sqrt();
        assert!((found - expected).abs() < 6e-6, "{damping}: {found} against {expected}");
    }
}
