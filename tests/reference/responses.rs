//! Oscillators on Kanai-Tajimi and Clough-Penzien ground motions against the Lyapunov equation in SciPy (`responses.py`).

use crate::published::white::{moments, oscillator, source};
use outcross::covariance::moments::MomentTable;
use outcross::covariance::spectrum::{CloughPenzien, KanaiTajimi, Spectrum};
use serde::Deserialize;

const TABLE: &str = include_str!("responses.csv");

#[derive(Deserialize)]
struct Row {
    level: f64,
    frequency: f64,
    damping: f64,
    low_frequency: f64,
    low_damping: f64,
    one_frequency: f64,
    one_damping: f64,
    other_frequency: f64,
    other_damping: f64,
    variance: f64,
    velocity_variance: f64,
    covariance: f64,
    covariance_with_velocity: f64,
}

/// What SciPy's solver is trusted to.
const LYAPUNOV: f64 = 1e-9;

#[test]
fn variances_and_covariances() {
    let rows: Vec<Row> = csv::Reader::from_reader(TABLE.as_bytes())
        .deserialize()
        .map(|row| row.expect("a row of the table"))
        .collect();
    assert!(rows.len() > 30, "{} rows", rows.len());
    for row in rows {
        let ground: Spectrum = if row.low_frequency == 0.0 {
            KanaiTajimi::new(row.level, row.frequency, row.damping)
                .expect("valid")
                .into()
        } else {
            let (frequency, damping) = (row.low_frequency, row.low_damping);
            CloughPenzien::new(row.level, row.frequency, row.damping, frequency, damping)
                .expect("valid")
                .into()
        };
        let sources = [source(ground)];
        let one = oscillator(row.one_frequency, row.one_damping);
        let other = oscillator(row.other_frequency, row.other_damping);
        let [variance, _, velocity_variance, _] = moments(&sources, &one);
        let [other_variance, _, other_velocity, _] = moments(&sources, &other);
        let table = MomentTable::new(&sources);
        let covariance = |form| {
            table
                .covariance(&one, form, 0.0)
                .value()
                .expect("the covariance is reached")
        };
        let cases = [
            (variance, row.variance, variance),
            (velocity_variance, row.velocity_variance, velocity_variance),
            (covariance(&other), row.covariance, (variance * other_variance).sqrt()),
            (
                covariance(&other.derivative()),
                row.covariance_with_velocity,
                (variance * other_velocity).sqrt(),
            ),
        ];
        for (found, expected, scale) in cases {
            assert!(
                (found - expected).abs() <= LYAPUNOV * scale,
                "{} and {} rad/s: {found} against {expected}",
                row.one_frequency,
                row.other_frequency
            );
        }
    }
}
