//! A. Der Kiureghian (1981), "A response spectrum method for random vibration analysis of MDF systems", Earthquake Eng.
//! Struct. Dyn. 9 (formula from memory): the correlation of the displacements of two oscillators under one white noise, the coefficient of the complete quadratic
//! combination. The five modes of a building are those of E. L. Wilson, A. Der Kiureghian and E. P. Bayo (1981), Earthquake
//! Eng. Struct. Dyn. 9, printed to three decimals.

use super::white::{correlation, oscillator, white};

/// For the frequency ratio r = w1/w2.
fn published(r: f64, z1: f64, z2: f64) -> f64 {
    let numerator = 8.0 * (z1 * z2).sqrt() * (r * z1 + z2) * r.powf(1.5);
    let detuning = (1.0 - r * r).powi(2);
    numerator / (detuning + 4.0 * z1 * z2 * r * (1.0 + r * r) + 4.0 * (z1 * z1 + z2 * z2) * r * r)
}

#[test]
fn over_a_grid_of_ratios_and_dampings() {
    let source = [white(0.7)];
    let dampings = [0.001, 0.005, 0.02, 0.05, 0.1, 0.3, 0.8];
    let ratios = [
        0.05,
        0.2,
        0.5,
        0.8,
        0.9,
        0.95,
        0.99,
        0.999,
        1.0 - 1e-7,
        1.0,
        1.001,
        1.1,
        1.5,
        3.0,
        20.0,
    ];
    for r in ratios {
        for z1 in dampings {
            for z2 in dampings {
                let found = correlation(&source, &oscillator(6.0 * r, z1), &oscillator(6.0, z2));
                let expected = published(r, z1, z2);
                assert!(
                    (found / expected - 1.0).abs() < 1e-10,
                    "ratio {r}, dampings {z1} and {z2}: {found} against {expected}"
                );
            }
        }
    }
}

#[test]
fn of_a_building_with_five_modes() {
    let source = [white(1.0)];
    let frequencies = [13.869, 13.931, 43.995, 44.189, 54.418];
    let printed = [
        (0, 1, 0.998),
        (2, 3, 0.998),
        (0, 2, 0.006),
        (0, 3, 0.006),
        (1, 2, 0.006),
        (1, 3, 0.006),
        (0, 4, 0.004),
        (1, 4, 0.004),
    ];
    for (one, other, printed) in printed {
        let [one, other] = [one, other].map(|mode: usize| oscillator(frequencies[mode], 0.05));
        let found = correlation(&source, &one, &other);
        assert!((found - printed).abs() <= 0.0005, "{found} against {printed}");
    }
}
