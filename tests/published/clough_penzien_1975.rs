//! R. W. Clough and J. Penzien 1975, Dynamics of Structures: Kanai's and Tajimi's spectrum behind a second filter. The
//! parameters are those of A. Der Kiureghian and A. Neuenhofer 1992, "Response spectrum method for multi-support seismic
//! excitations", Earthquake Engineering and Structural Dynamics 21, from memory; the variances by quadrature and by
//! Lyapunov's equation.

use crate::support::{close, results};

/// Frequency and damping of the soil, of the second filter, and the variance over the two-sided level.
const SOILS: [([f64; 4], f64); 2] = [([15.0, 0.6, 1.5, 0.6], 94.2178), ([5.0, 0.2, 0.5, 0.6], 45.1625)];

#[test]
fn variances() {
    for ([frequency, damping, low, low_damping], variance) in SOILS {
        let results = results(&format!(
            "process ground = gaussian(
                 spectrum: two_sided(clough_penzien(
                     level: 1 m^2/s^4/(rad/s)
                     frequency: {frequency} rad/s, damping: {damping}
                     low_frequency: {low} rad/s, low_damping: {low_damping}
                 ))
             )"
        ));
        let found = results.moments("ground").number("standard_deviation").powi(2);
        close(found, variance, 2e-6, "variance");
    }
}

/// The same as white noise through the two filters: the absolute acceleration of one oscillator, seen through the
/// relative acceleration of another.
#[test]
fn filtered_white_noise() {
    let results = results(
        "process rock = gaussian(spectrum: white(level: 0.02 m^2/s^4/(rad/s)))
         process soil = respond(rock, through: oscillator(frequency: 15 rad/s, damping: 60 %))
         constant w = 15 /s
         margin ground = w^2 * soil + 2 * 0.6 * w * derivative(soil)
         process tajimi = gaussian(
             spectrum: kanai_tajimi(level: 0.02 m^2/s^4/(rad/s), frequency: 15 rad/s, damping: 60 %)
         )",
    );
    let deviation = |name: &str| results.moments(name).number("standard_deviation");
    close(
        deviation("ground"),
        deviation("tajimi"),
        1e-9,
        "the soil's acceleration",
    );
}
