//! Advice on results: an index that is too good, an expectation that is off by a factor of the trade.

use super::{ExpectationResult, LimitStateResult};
use crate::check::{Expectation, LimitState};
use crate::diagnostics::{Code, Diagnostic};
use crate::units::{show, show_number};
use std::f64::consts::{PI, SQRT_2};

/// Codes demand up to 5.2 in a year (EN 1990:2002, Table B2), and distributions have been seen to some six standard
/// deviations at most. A judgement, without a source.
const TOO_GOOD: f64 = 8.0;

/// How near the ratio of what was found to what was expected is to a factor of the trade.
const AGREEMENT: f64 = 5e-3;

/// Factors by which results are off where a convention has been mixed up.
const RATIOS: &[(f64, &str, &str)] = &[
    (2.0 * PI, "2 pi", "as between cycles and radians, Hz and rad/s"),
    (4.0 * PI * PI, "(2 pi)^2", "as between cycles and radians, squared"),
    (
        SQRT_2,
        "the root of 2",
        "as between exp(-(tau/length)^2) and exp(-(tau/length)^2/2), or amplitude and root mean square",
    ),
    (
        2.0,
        "2",
        "as between both directions and one, one-sided and two-sided, range and amplitude",
    ),
    (
        4.0,
        "4",
        "as between a significant height and a standard deviation, or a factor of 2 squared",
    ),
    (9.806_65, "standard gravity", "as between a mass and its weight"),
    (100.0, "100", "as between a percentage and a ratio"),
    (1000.0, "1000", "as of a prefix of a unit"),
];

/// An index far beyond what any model can show.
pub(super) fn too_good(limit_state: &LimitState, result: &LimitStateResult) -> Option<Diagnostic> {
    let index = result.reliability_index?.value();
    if index.is_nan() || index < TOO_GOOD {
        return None;
    }
    let period = show(result.reference_period, &limit_state.reference_period.unit, 5);
    let name = &limit_state.name;
    let message = match result.failure_probability.map(|probability| probability.value()) {
        Some(probability) if probability > 0.0 => format!(
            "`{name}` is too good to be true: a reliability index of {} over {period}, a failure probability of {}",
            show_number(index, 3),
            show_number(probability, 2)
        ),
        _ => format!("`{name}` is too good to be true: a failure probability below 1e-307 over {period}"),
    };
    Some(
        Diagnostic::new(Code::ResultTooGood, limit_state.place, message)
            .here(format!("beyond an index of {TOO_GOOD} the tails of the model have never been seen"))
            .help(
                "check units, and standard deviations typed as variances or shares; then ask what is left out, such as the \
                 scatter of the resistance, the error of the model, or blunders",
            ),
    )
}

/// A failed expectation whose ratio has a name.
pub(super) fn known_ratio(expectation: &Expectation, result: &ExpectationResult) -> Option<Diagnostic> {
    let value = result.value?.value();
    if result.holds || expectation.expected == 0.0 {
        return None;
    }
    let ratio = value / expectation.expected;
    let near = |factor: f64| (ratio / factor - 1.0).abs() < AGREEMENT;
    let (direction, factor, why) = if near(-1.0) {
        ("times", "-1", "as between two directions of one axis")
    } else {
        RATIOS.iter().find_map(|(factor, name, why)| {
            if near(*factor) {
                Some(("times", *name, *why))
            } else if near(1.0 / factor) {
                Some(("divided by", *name, *why))
            } else {
                None
            }
        })?
    };
    let message = format!("what was found is what was expected {direction} {factor}, {why}");
    let expected = show(expectation.expected, &expectation.unit, 6);
    Some(
        Diagnostic::new(Code::ResultKnownRatio, expectation.place, message)
            .here(format!("found {}, expected {expected}", result.shown))
            .help("look for the place where the two conventions meet, in the model or in the hand calculation"),
    )
}
