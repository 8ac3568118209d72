//! A reference period in which the margin does not forget its start: there is little to be crossed in it, and what
//! is slow is drawn once rather than over and over.

use super::{Finished, Judged};
use crate::covariance::form::Operator;
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::LimitLineKind;
use crate::units::{show, show_number};

/// A margin that is this much like its start has not forgotten it.
const REMEMBERED: f64 = 0.5;

/// Shares of the period at which the margin is looked at. They have no common measure, so that something periodic is not
/// seen at the same phase each time.
const SHARES: [f64; 4] = [0.381_966, 0.618_034, 0.763_932, 1.0];

impl Finished<'_> {
    pub(super) fn short_period(&self, judged: &Judged<'_>) -> Option<Diagnostic> {
        let state = judged.state;
        let period = state.reference_period.seconds;
        // The memory of a response is that of its system, and much work to find.
        let mut terms = state.margin.terms().iter();
        if terms.any(|term| term.operator.systems != Operator::IDENTITY.systems) {
            return None;
        }
        let variance = self.covariance(&state.margin, 0.0)?;
        let mut least = f64::INFINITY;
        for share in SHARES {
            let correlation = self.covariance(&state.margin, share * period)? / variance;
            least = least.min(correlation);
        }
        if least.is_nan() || least < REMEMBERED {
            return None;
        }
        let place = judged.lines.iter().find_map(|line| match &line.kind {
            LimitLineKind::ReferencePeriod(time) => Some(time.span),
            _ => None,
        })?;
        let name = &judged.name.text;
        let shown = show(period, &state.reference_period.unit, 5);
        let message = format!("the margin of `{name}` hardly changes within its reference period, {shown}");
        let finding = Diagnostic::new(Code::LimitShortPeriod, place, message)
            .here(match least {
                0.99.. => "its correlation with its start stays above 0.99".to_string(),
                _ => format!("its correlation with its start stays above {}", show_number(least - 0.005, 2)),
            })
            .help(
                "check the period and the lengths of the kernels; in so short a time failure is a matter of the start, and \
                 a scatter that does not change is a quantity drawn once: counting crossings overstates the failure \
                 probability",
            );
        Some(match self.slowest(judged) {
            Some(source) => finding.label(source.place, "varies the most slowly"),
            None => finding,
        })
    }

    /// The source of a margin whose kernel keeps its memory longest.
    fn slowest(&self, judged: &Judged<'_>) -> Option<&crate::covariance::source::Source> {
        let sources = judged.state.margin.by_source();
        let sources = sources.filter_map(|(id, _)| self.lowered.model.sources.get(id.0 as usize));
        sources.max_by(|a, b| {
            let memory = |source: &crate::covariance::source::Source| {
                let kernel = source.kernel()?;
                Some(kernel.value(judged.state.reference_period.seconds).ok()? / kernel.value(0.0).ok()?)
            };
            let known = |source| memory(source).unwrap_or(f64::NEG_INFINITY);
            known(a).total_cmp(&known(b))
        })
    }
}
