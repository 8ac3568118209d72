//! Units are a way of writing: another unit changes nothing but rounding.

use super::models::kernel;
use crate::support::{Results, results};
use proptest::prelude::*;

/// Forces and how many of them make a kN; lengths of time and how many of them make an hour. All factors are whole, so
/// that a figure with few binary digits is exact in each.
const FORCES: &[(&str, f64)] = &[
    ("kN", 1.0),
    ("N", 1e3),
    ("mN", 1e6),
    ("kg*m/s^2", 1e3),
    ("t*m/s^2", 1.0),
    ("MPa*mm^2", 1e3),
];
const TIMES: &[(&str, f64)] = &[("h", 1.0), ("min", 60.0), ("s", 3600.0), ("ms", 3.6e6)];

struct Loads {
    kernel: String,
    mean: f64,
    deviation: f64,
    capacity: f64,
    hours: f64,
}

impl Loads {
    fn results(&self, (force, per_kilonewton): (&str, f64), (time, per_hour): (&str, f64)) -> Results {
        let load = |kilonewtons: f64| format!("{} {force}", kilonewtons * per_kilonewton);
        results(&format!(
            "process load : {force} = gaussian(mean: {}, standard_deviation: {}, correlation: {})
             parameter capacity : {force} = {}
             margin m : {force} = capacity - load - 0.5 * delay(load, by: {} {time})
             limit state failing {{
                 failure when m < 0
                 reference period {} {time}
                 tabulate at {} {time}
             }}",
            load(self.mean),
            load(self.deviation),
            self.kernel,
            load(self.capacity),
            0.0625 * per_hour,
            self.hours * per_hour,
            0.5 * per_hour,
        ))
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 48, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn another_unit_changes_nothing(
        kernel in kernel(),
        (mean, deviation, distance, hours) in (-64..64i32, 1..64i32, 0..40i32, 1..64i32),
        force in 0..FORCES.len(),
        time in 0..TIMES.len(),
    ) {
        let eighths = |count: i32| f64::from(count) / 8.0;
        let loads = Loads {
            kernel,
            mean: eighths(mean),
            deviation: eighths(deviation),
            capacity: 1.5 * eighths(mean) + eighths(distance) * eighths(deviation),
            hours: eighths(hours),
        };
        let (plain, other) = (loads.results(FORCES[0], TIMES[0]), loads.results(FORCES[force], TIMES[time]));
        let (one, two) = (plain.moments("m"), other.moments("m"));
        for key in ["standard_deviation", "derivative_standard_deviation", "zero_upcrossing_rate", "bandwidth", "irregularity"] {
            let (one, two) = (one.number(key), two.number(key));
            prop_assert!((one - two).abs() <= 1e-14 * one.abs(), "{key}: {one:e} and {two:e}");
        }
        let (one, two) = (plain.limit_state("failing"), other.limit_state("failing"));
        // A rounding of the distance r from the barrier in its last place is r^2 roundings of a probability.
        let reduced = eighths(distance);
        let tolerance = 1e-14 * (1.0 + reduced * reduced);
        for key in ["failure_probability", "initial_failure_probability", "upcrossing_rate", "mean_time_to_failure", "survival"] {
            let (one, two) = (one.number(key), two.number(key));
            let events = if key == "survival" { 1.0 - one.max(f64::MIN_POSITIVE).ln() } else { 1.0 };
            prop_assert!((one - two).abs() <= tolerance * events * one.abs(), "{key}: {one:e} and {two:e}");
        }
    }
}
