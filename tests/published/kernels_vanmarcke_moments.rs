//! E. H. Vanmarcke (1972), Properties of spectral moments with applications to random vibration, J. Eng. Mech. Div. 98: the
//! oscillator under white noise (from memory).

use outcross::covariance::kernel::{Correlation, Oscillator};
use std::f64::consts::PI;

fn oscillator(damping: f64) -> Oscillator {
    Oscillator::new(2.5, damping).expect("valid")
}

#[test]
fn bandwidth() {
    for (damping, published) in [
        (0.01, 0.112_220),
        (0.02, 0.157_843),
        (0.05, 0.245_612),
        (0.10, 0.338_551),
        (0.20, 0.456_372),
    ] {
        let [zeroth, first, second, _] = oscillator(damping).moments();
        let delta = (1.0 - first * first / (zeroth * second)).sqrt();
        assert!(
            (delta - published).abs() < 6e-7,
            "damping {damping}: {delta}, published {published}"
        );
        // delta^2 ~ (4 z / pi)(1 - 1.1 z), within 1.2 % up to z = 0.1 and 4.6 % at z = 0.2.
        let approximate = 4.0 * damping / PI * (1.0 - 1.1 * damping);
        let allowed = if damping > 0.1 { 0.046_5 } else { 0.012_5 };
        assert!(
            (approximate / (delta * delta) - 1.0).abs() < allowed,
            "damping {damping}"
        );
    }
}

/// Under white noise of the two-sided level S0 the displacement has the variance pi S0 / (2 z w0^3) and the velocity
/// pi S0 / (2 z w0) (any text on random vibration).
#[test]
fn variances_under_white_noise() {
    let (frequency, damping) = (2.5_f64, 0.05);
    let level = 2.0 * damping * frequency.powi(3) / PI;
    let oscillator = oscillator(damping);
    for omega in [0.0, 1.0, 2.5, 6.0_f64] {
        let response =
            1.0 / ((frequency.powi(2) - omega * omega).powi(2) + (2.0 * damping * frequency * omega).powi(2));
        let density = oscillator.density(omega).expect("a density");
        assert!(
            (density - 2.0 * level * response).abs() < 1e-13 * density,
            "density at {omega}"
        );
    }
    let [displacement, _, velocity, _] = oscillator.moments();
    assert!((displacement - PI * level / (2.0 * damping * frequency.powi(3))).abs() < 1e-14);
    assert!((velocity - PI * level / (2.0 * damping * frequency)).abs() < 1e-13);
}
