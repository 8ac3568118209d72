//! A barrier on the wrong side of the mean: failure is the normal state.

use super::{Finished, Judged};
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{ConditionKind, LimitLineKind};
use crate::numerics::normal;
use crate::reliability::crossings::FailureRegion;
use crate::units::{show, show_number};

impl Finished<'_> {
    pub(super) fn failed_mean(&self, judged: &Judged<'_>) -> Option<Diagnostic> {
        let condition = judged.lines.iter().find_map(|line| match &line.kind {
            LimitLineKind::FailureWhen(condition) => Some(condition),
            _ => None,
        })?;
        let state = judged.state;
        let mean = state.margin.mean();
        let beyond = |level: f64| mean - level;
        let distance = match state.region {
            FailureRegion::Below(level) => -beyond(level),
            FailureRegion::Above(level) => beyond(level),
            FailureRegion::Outside(lower, upper) => (-beyond(lower)).max(beyond(upper)),
        };
        if distance.is_nan() || distance <= 0.0 {
            return None;
        }
        let safe = normal::upper(distance / self.standard_deviation(&state.margin)?);
        let shown = show(mean, &state.unit, 5);
        let message = format!(
            "failure is the normal state of `{}`: the mean of its margin, {shown}, is failed",
            judged.name.text
        );
        let help = match &condition.kind {
            _ if matches!(state.region, FailureRegion::Outside(..)) => None,
            ConditionKind::Below(margin, level) => Some((margin, ">", level)),
            ConditionKind::Above(margin, level) => Some((margin, "<", level)),
            _ => None,
        };
        let help = match help {
            Some((margin, sign, level)) => format!(
                "write `{} {sign} {}` if the sides are swapped, or check the signs of the margin and of the level",
                self.as_written(margin.span),
                self.as_written(level.span)
            ),
            None => "check the mean, and the signs of the levels".to_string(),
        };
        Some(
            Diagnostic::new(Code::LimitFailedMean, condition.span, message)
                .here(format!(
                    "safe for a share of {} of the time only: the result is that of the reverse condition",
                    show_number(safe, 2)
                ))
                .help(help),
        )
    }
}
