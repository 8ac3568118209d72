//! Survival and failure of random limit states.

use super::models::{Combination, combination};
use crate::support::{Results, results};
use proptest::prelude::*;
use std::fmt::Write;

const METHODS: [&str; 2] = ["poisson", "poisson_safe_start"];

/// The mean and the standard deviation of the margin, in kN.
fn scatter(model: &Combination) -> (f64, f64) {
    let found = results(&model.text());
    let margin = found.moments("m");
    (margin.number("mean") / 1e3, margin.number("standard_deviation") / 1e3)
}

fn with_states(model: &Combination, states: &[(&str, String)]) -> Results {
    let mut text = model.text();
    for (name, lines) in states {
        writeln!(text, "\nlimit state {name} {{ {lines} }}").unwrap();
    }
    results(&text)
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 48, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn survival_falls_with_time(model in combination(), below in -1.0f64..30.0, above in -1.0..30.0, method in 0..2usize) {
        let (mean, deviation) = scatter(&model);
        let times: Vec<String> = (-12..35).map(|power| format!("{} s", 2f64.powi(power))).collect();
        let lines = format!(
            "failure when m outside {} kN to {} kN
             reference period 1000 year
             first passage {}
             tabulate at {}",
            mean - below.max(1e-3 - above) * deviation,
            mean + above * deviation,
            METHODS[method],
            times.join(", ")
        );
        let results = with_states(&model, &[("failing", lines)]);
        let state = results.limit_state("failing");
        let mut last = (1.0, state.number("initial_failure_probability"), f64::INFINITY);
        for row in state.table() {
            let (survival, failure) = (row.number("survival"), row.number("failure_probability"));
            let index = row.number("reliability_index");
            prop_assert!((0.0..=1.0).contains(&survival) && (0.0..=1.0).contains(&failure));
            prop_assert!((survival + failure - 1.0).abs() <= 1e-15 * 2.0);
            prop_assert!(survival <= last.0 && failure >= last.1 && index <= last.2, "{last:?} then {survival:e}, {failure:e}, {index}");
            last = (survival, failure, index);
        }
        prop_assert!(state.number("failure_probability") >= last.1);
    }

    #[test]
    fn failure_is_below_or_above(model in combination(), below in -2.0f64..38.0, above in -2.0..38.0) {
        prop_assume!(below + above > 1e-3);
        let (mean, deviation) = scatter(&model);
        let (lower, upper) = (mean - below * deviation, mean + above * deviation);
        let rest = "reference period 1 s";
        let results = with_states(&model, &[
            ("below", format!("failure when m < {lower} kN {rest}")),
            ("above", format!("failure when m > {upper} kN {rest}")),
            ("either", format!("failure when m outside {lower} kN to {upper} kN {rest}")),
        ]);
        for key in ["upcrossing_rate", "initial_failure_probability"] {
            let of = |name: &str| results.limit_state(name).number(key);
            let sum = of("below") + of("above");
            prop_assert!((of("either") - sum).abs() <= 1e-13 * (1.0 + below.min(above).powi(2)) * sum, "{key}: {sum:e}");
        }
    }

    #[test]
    fn two_sided_failure_is_failure_outside(model in combination(), level in 0.0..200.0) {
        let rest = "reference period 1 h";
        let results = with_states(&model, &[
            ("state", format!("failure when abs(m) > {level} kN {rest}")),
            ("other", format!("failure when m outside -{level} kN to {level} kN {rest}")),
        ]);
        let (one, two) = (results.limit_state("state"), results.limit_state("other"));
        for key in ["upcrossing_rate", "initial_failure_probability", "failure_probability", "survival"] {
            prop_assert_eq!(one.number(key), two.number(key));
        }
    }

    #[test]
    fn no_more_than_the_bound(model in combination(), below in -1.0..37.0, period in -3.0..12.0) {
        let (mean, deviation) = scatter(&model);
        let level = mean - below * deviation;
        let time = 10f64.powf(period);
        let state = |method: &str| format!("failure when m < {level} kN reference period {time} s first passage {method}");
        let results = with_states(&model, &[("poisson", state("poisson")), ("safe", state("poisson_safe_start"))]);
        let (poisson, safe) = (results.limit_state("poisson"), results.limit_state("safe"));
        // Logarithms down to -720 are rounded in their last place.
        let rounding = 5e-13;
        let bound = poisson.number("initial_failure_probability") + poisson.number("upcrossing_rate") * time;
        prop_assert!(poisson.number("failure_probability") <= bound * (1.0 + rounding));
        // Counted among the safe there are more crossings, from the same start.
        prop_assert!(safe.number("failure_probability") >= poisson.number("failure_probability") * (1.0 - rounding));
        prop_assert!(safe.number("failure_probability") >= poisson.number("initial_failure_probability"));
    }

    /// Load and capacity times a factor, the level included: probabilities stay.
    #[test]
    fn scaling_everything_changes_no_probability(model in combination(), below in 0.0..20.0, power in -40..40i32) {
        let factor = 2f64.powi(power);
        let mut other = model.clone();
        other.constant *= factor;
        for source in &mut other.sources {
            source.mean *= factor;
            source.deviation *= factor;
        }
        let (mean, deviation) = scatter(&model);
        let level = mean - below * deviation;
        let state = |level: f64| vec![("failing", format!("failure when m < {level} kN reference period 1 year"))];
        let (one, two) = (with_states(&model, &state(level)), with_states(&other, &state(level * factor)));
        let (one, two) = (one.limit_state("failing"), two.limit_state("failing"));
        for key in ["upcrossing_rate", "initial_failure_probability", "failure_probability"] {
            let (one, two) = (one.number(key), two.number(key));
            // The difference between level and mean rounds in the last place of either.
            let conditioning = 1.0 + (mean.abs() + level.abs()) / deviation;
            prop_assert!((one - two).abs() <= 2e-15 * (1.0 + below) * (conditioning + below) * one, "{key}: {one:e} and {two:e}");
        }
    }
}
