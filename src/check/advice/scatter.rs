//! A scatter of the wrong kind: a percentage for a ratio, a ratio for a standard deviation.

use super::{Finished, Gaussian};
use crate::diagnostics::{Code, Diagnostic};
use crate::units::{show, show_number};

/// No load or strength has been measured to so small a coefficient of variation that this would be its scatter. A
/// judgement, without a source.
const SMALLEST_VARIATION: f64 = 0.005;

/// A standard deviation that is a smaller share of the mean than this is no usual scatter. A judgement, without a source.
const SMALLEST_SHARE: f64 = 0.002;

/// A Gaussian process with more scatter than this is described by its standard deviation: its mean is next to nothing. A
/// judgement, without a source.
const LARGEST_VARIATION: f64 = 2.0;

/// The numbers that coefficients of variation are as ratios.
const RATIOS: std::ops::RangeInclusive<f64> = 0.005..=0.6;

impl Finished<'_> {
    /// `0.07 %` where 0.07 is meant, and `7` where 7 % is.
    pub(super) fn variation(&self, gaussian: &Gaussian<'_>) -> Option<Diagnostic> {
        let expression = gaussian.argument("coefficient_of_variation")?;
        let given = self.plain(expression, gaussian.instance)?;
        let (name, mean, unit) = (&gaussian.name.text, gaussian.named.form.mean(), &gaussian.named.unit);
        let deviation = show(given.value * mean.abs(), unit, 4);
        let number = show_number(given.unit.from_si(given.value), 6);
        if given.unit.text() == "%" && given.value > 0.0 && given.value < SMALLEST_VARIATION {
            let message = format!("the coefficient of variation of `{name}` is only {number} %, hardly any scatter");
            let meant = show_number(1e4 * given.value, 6);
            return Some(
                Diagnostic::new(Code::ProcessPercent, expression.span, message)
                    .here(format!(
                        "a standard deviation of {deviation}, 100 times too small if {number} is the ratio"
                    ))
                    .help(format!("write `{meant} %` or `{number}` if the ratio is meant")),
            );
        }
        if given.unit.text() == "1" && given.value >= LARGEST_VARIATION {
            let message = format!(
                "the coefficient of variation of `{name}` is {number}, or {} %",
                show_number(100.0 * given.value, 6)
            );
            return Some(
                Diagnostic::new(Code::ProcessPercent, expression.span, message)
                    .here(format!(
                        "a standard deviation of {deviation}, 100 times too large if a percentage is meant"
                    ))
                    .help(format!(
                        "write `{number} %`, or give so large a scatter as `standard_deviation`"
                    )),
            );
        }
        None
    }

    /// `0.08 MPa` for a mean of 355 MPa, where 8 % of the mean are meant.
    pub(super) fn deviation(&self, gaussian: &Gaussian<'_>) -> Option<Diagnostic> {
        let expression = gaussian.argument("standard_deviation")?;
        let given = self.plain(expression, gaussian.instance)?;
        let mean = gaussian.named.form.mean().abs();
        let number = given.unit.from_si(given.value);
        let small = given.value > 0.0 && given.value < SMALLEST_SHARE * mean;
        if !small || !RATIOS.contains(&number) {
            return None;
        }
        let share = show_number(100.0 * given.value / mean, 3);
        let percent = show_number(100.0 * number, 6);
        let meant = show(number * mean, &given.unit, 4);
        let message = format!(
            "the standard deviation of `{}` is only {share} % of its mean, hardly any scatter",
            gaussian.name.text
        );
        let finding = Diagnostic::new(Code::ProcessDeviationRatio, expression.span, message)
            .here(format!(
                "{} looks like a share of the mean, which would be {meant}",
                show_number(number, 6)
            ))
            .help(format!(
                "write `coefficient_of_variation: {percent} %` if the share is meant"
            ));
        Some(match gaussian.argument("mean") {
            Some(mean) => finding.label(mean.span, "the mean"),
            None => finding,
        })
    }
}
