//! Whatever the figures: a finding or numbers, never something that is neither, and in a short time.

use crate::support::run;
use proptest::prelude::*;
use serde_json::Value;
use std::time::{Duration, Instant};

/// A model may take long where it is large; these are small.
const PATIENCE: Duration = Duration::from_secs(20);

/// Magnitudes from ordinary to the ends of the doubles; one in so many is negative or 0.
fn figure(odd: u32) -> impl Strategy<Value = f64> {
    let exponent = prop_oneof![
        6 => -3.0..3.0,
        3 => -30.0..30.0,
        2 => -300.0..300.0,
        1 => -308.0..-290.0,
        1 => 290.0..308.0
    ];
    let size = || exponent.clone().prop_map(|exponent: f64| 10f64.powf(exponent));
    prop_oneof![
        odd - 1 => size(),
        1 => prop_oneof![Just(0.0), Just(1.0), size().prop_map(|size| -size)],
    ]
}

const KERNELS: [&str; 14] = [
    "squared_exponential(length: a * 1 s)",
    "matern(smoothness: b, length: a * 1 s)",
    "matern(smoothness: 5/2, length: a * 1 s)",
    "rational_quadratic(length: a * 1 s, mixture: b)",
    "oscillator(frequency: a * 1 rad/s, damping: b)",
    "band_limited(lower: b * 1 Hz, upper: a * 1 Hz)",
    "harmonic(frequency: a * 1 Hz)",
    "damped_cosine(length: a * 1 s, frequency: b * 1 Hz)",
    "squared_exponential(scale_of_fluctuation: a * 1 s)",
    "matern(smoothness: 7/2, length: a * 1 s) * harmonic(frequency: b * 1 Hz)",
    "0.5 * squared_exponential(length: a * 1 s) + 0.5 * matern(smoothness: 2, length: b * 1 s)",
    "squared_exponential(length: a * 1 s) * rational_quadratic(length: b * 1 s, mixture: 2)",
    "written(a: a * 1 s, b: b)",
    "written(a: a * 1 s, b: 1) * squared_exponential(length: b * 1 s)",
];

const MARGINS: [&str; 6] = [
    "c * 1 kN - x",
    "x - delay(x, by: d * 1 s)",
    "c * x",
    "c * 1 s * derivative(x) + x",
    "c * x + d * delay(x, by: 1 s) - y",
    "x + c * (y - x)",
];

const CONDITIONS: [&str; 4] = [
    "m < e * 1 kN",
    "m > e * 1 kN",
    "abs(m) > e * 1 kN",
    "m outside e * 1 kN to f * 1 kN",
];

/// What stands for a number that is none.
fn has_null(value: &Value) -> bool {
    match value {
        Value::Null => true,
        Value::Array(items) => items.iter().any(has_null),
        Value::Object(entries) => entries.values().any(has_null),
        _ => false,
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 600, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn numbers_or_findings(
        [a, b, deviation, period] in prop::array::uniform4(figure(20)),
        [c, d, e, f, mean] in prop::array::uniform5(figure(3)),
        kernel in 0..KERNELS.len(),
        margin in 0..MARGINS.len(),
        condition in 0..CONDITIONS.len(),
        method in prop_oneof![Just("poisson"), Just("poisson_safe_start")],
    ) {
        let text = format!(
            "constant a = {a:e}\nconstant b = {b:e}\nconstant c = {c:e}\nconstant d = {d:e}\nconstant e = {e:e}\nconstant f = {f:e}
             kernel written(tau, a: s, b) = exp(-(tau / a)^2 / b) + 0 * tau / a
             process x : kN = gaussian(mean: {mean:e} kN, standard_deviation: {deviation:e} kN, correlation: {})
             process y : kN = gaussian(mean: 1 kN, standard_deviation: 1 kN, correlation: matern(smoothness: 3, length: 1 s))
             margin m : kN = {}
             limit state failing {{
                 failure when {}
                 reference period {period:e} s
                 first passage {method}
                 require reliability_index >= 3 over 1 year
                 require failure_probability <= 1e-4
                 require mean_time_to_failure >= 1 year
                 tabulate at 1 s, {period:e} s
             }}
             expect bandwidth(m) = 0.5 within 1 %
             expect failure_probability(failing) = 0.5 within 0.5",
            KERNELS[kernel], MARGINS[margin], CONDITIONS[condition]
        );
        let start = Instant::now();
        let outcome = run(&text);
        prop_assert!(start.elapsed() < PATIENCE, "{:?} for\n{text}", start.elapsed());
        match &outcome.results {
            Some(results) => prop_assert!(!has_null(&results.0), "{:#} from\n{}", results.0, text),
            None => prop_assert!(!outcome.errors().is_empty(), "neither results nor findings from\n{}", text),
        }
    }
}
