//! A spectrum is one spectrum in Hz and in rad/s, over `f` and over `omega`, one-sided and two-sided.

use crate::support::{Results, close, results, results_beside};
use proptest::prelude::*;
use std::f64::consts::TAU;

/// The moments of the processes `one` and `two` agree.
fn same(results: &Results, relative: f64) {
    let (one, two) = (results.moments("one"), results.moments("two"));
    for (a, b) in one.spectral_moments().into_iter().zip(two.spectral_moments()) {
        if a.is_infinite() || b.is_infinite() {
            assert_eq!(a, b);
        } else {
            close(a, b, relative, "moments");
        }
    }
}

/// A power whose multiples of the corner frequency leave the range of doubles within a few terms.
#[test]
fn a_steep_tail_beyond_a_high_corner() {
    same(
        &results(
            "spectrum over_f(f, corner: Hz) = 1 m^2/Hz / (1 + (f / corner)^7.7052032940859885)
             process one = gaussian(spectrum: over_f(corner: 48.4 Hz))
             process two = gaussian(spectrum: over_f(corner: 304.10616886749195 rad/s))",
        ),
        1e-11,
    );
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(24))]

    #[test]
    fn hertz_and_radians(level in 1e-3..1e3_f64, frequency in 0.05..50.0_f64, damping in 0.002..0.9_f64) {
        let (per_radian, radians) = (level / TAU, frequency * TAU);
        same(&results(&format!(
            "process one = gaussian(spectrum: kanai_tajimi(
                 level: {level} m^2/s^4/Hz, frequency: {frequency} Hz, damping: {damping}
             ))
             process two = gaussian(spectrum: kanai_tajimi(
                 level: {per_radian} m^2/s^4/(rad/s), frequency: {radians} rad/s, damping: {damping}
             ))"
        )), 1e-13);
    }

    #[test]
    fn written_over_either_frequency(level in 1e-3..1e3_f64, frequency in 0.05..50.0_f64, power in 2.2..8.0_f64) {
        same(&results(&format!(
            "spectrum over_f(f, level: m^2/Hz, corner: Hz) = level / (1 + (f / corner)^{power})
             spectrum over_omega(omega, level: m^2*s, corner: rad/s) = level / (1 + (omega / corner)^{power})
             process one = gaussian(spectrum: over_f(level: {level} m^2/Hz, corner: {frequency} Hz))
             process two = gaussian(spectrum: over_omega(level: {} m^2*s, corner: {frequency} Hz))",
            level / TAU
        )), 1e-11);
    }

    #[test]
    fn two_sided_is_half(level in 1e-3..1e3_f64, upper in 0.05..50.0_f64) {
        same(&results(&format!(
            "process one = gaussian(spectrum: two_sided(band_limited(level: {level} /Hz, lower: 0 Hz, upper: {upper} Hz)))
             process two = gaussian(spectrum: band_limited(level: {} /Hz, lower: 0 Hz, upper: {upper} Hz))",
            2.0 * level
        )), 1e-14);
    }

    /// A table in Hz and in rad/s; rows between which the density is a power are left as they are by one more on it.
    #[test]
    fn tables(rows in prop::collection::vec((0.01..1.0_f64, 1e-3..10.0_f64), 2..12), between in 0.1..0.9_f64) {
        let mut frequency = 0.0;
        let rows: Vec<(f64, f64)> = rows.iter().map(|(step, density)| {
            frequency += step;
            (frequency, *density)
        }).collect();
        let table = |frequency: f64, density: f64, head: &str, rows: &[(f64, f64)]| {
            let line = |(f, g): &(f64, f64)| format!("{},{}\n", f * frequency, g * density);
            format!("{head}\n{}", rows.iter().map(line).collect::<String>())
        };
        let hertz = table(1.0, 1.0, "frequency [Hz],density [m^2/Hz]", &rows);
        let radians = table(TAU, 1.0 / TAU, "frequency [rad/s],density [m^2/(rad/s)]", &rows);
        let (first, second) = (rows[0], rows[1]);
        let mut finer = rows.clone();
        finer.insert(1, (
            first.0 * (second.0 / first.0).powf(between),
            first.1 * (second.1 / first.1).powf(between),
        ));
        let finer = table(1.0, 1.0, "frequency [Hz],density [m^2/Hz]", &finer);
        let files = [("hertz.csv", &*hertz), ("radians.csv", &*radians), ("finer.csv", &*finer)];
        let text = |one: &str, two: &str, how: &str| format!(
            "process one = gaussian(spectrum: tabulated(\"{one}\", beyond: zero{how}))
             process two = gaussian(spectrum: tabulated(\"{two}\", beyond: zero{how}))"
        );
        same(&results_beside(&text("hertz.csv", "radians.csv", ""), &files), 1e-12);
        same(&results_beside(&text("hertz.csv", "radians.csv", ", interpolation: log"), &files), 1e-12);
        same(&results_beside(&text("hertz.csv", "finer.csv", ", interpolation: log"), &files), 1e-12);
    }
}
