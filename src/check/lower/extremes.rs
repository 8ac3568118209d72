//! What is asked of the largest or least value of a margin over a time.

use super::arguments::Arguments;
use super::{Lowering, Scope};
use crate::check::model::ExtremeQuantity;
use crate::check::value::Number;
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{Call, Expression};
use crate::numerics::normal;
use crate::reliability::crossings::FailureRegion;
use crate::reliability::probability::Probability;
use crate::source::Span;
use crate::units::Dimension;

/// The functions of an expectation that ask for an extreme.
pub(super) const EXTREME: &str = "extreme";
pub(super) const MEAN_EXTREME: &str = "mean_extreme";

/// How rare a level of `extreme(...)` is, by one of these.
pub(super) const RARITIES: &[&str] = &["fractile", "failure_probability", "reliability_index"];

impl Lowering<'_, '_, '_> {
    /// The fractiles of `extremes at`, each between 0 and 1.
    pub(super) fn fractiles(
        &mut self,
        fractiles: &[Expression],
        region: Option<FailureRegion>,
        line: Span,
        scope: Scope<'_>,
    ) -> Option<Vec<f64>> {
        let found: Vec<Option<f64>> = fractiles
            .iter()
            .map(|fractile| self.share(fractile, "a fractile", scope))
            .collect();
        self.has_extreme(region?, line)?;
        found.into_iter().collect()
    }

    /// A number above 0 and below 1.
    fn share(&mut self, expression: &Expression, what: &str, scope: Scope<'_>) -> Option<f64> {
        let scalar = self.number(expression, scope, Dimension::PLAIN, what, None)?;
        match scalar.value {
            Number::Known(value) if value > 0.0 && value < 1.0 => Some(value),
            Number::Known(value) => {
                let message = format!("{what} must be above 0 and below 1");
                let mut finding = Diagnostic::new(Code::ValueRange, expression.span, message);
                if value > 1.0 && value < 100.0 {
                    finding.help = Some(format!(
                        "write `{} %` if a percentage is meant",
                        self.as_written(expression.span)
                    ));
                }
                self.report(finding);
                None
            }
            Number::Open(_) | Number::Unset => None,
        }
    }

    /// Refuses the extreme of a limit state whose two barriers are no single level.
    pub(super) fn has_extreme(&mut self, region: FailureRegion, place: Span) -> Option<()> {
        match region {
            FailureRegion::Outside(lower, upper) if lower != -upper => {
                let message = "failure outside two different levels has no single extreme";
                self.report(
                    Diagnostic::new(Code::LimitExtreme, place, message)
                        .help("make a limit state of each level, or use `abs(...)` where both are as far from 0"),
                );
                None
            }
            _ => Some(()),
        }
    }

    /// What `extreme(...)` or `mean_extreme(...)` asks for.
    pub(super) fn extreme_quantity(
        &mut self,
        call: &Call,
        arguments: &Arguments<'_>,
        scope: Scope<'_>,
    ) -> Option<ExtremeQuantity> {
        let given: Vec<(&str, &Expression)> = RARITIES
            .iter()
            .filter_map(|name| Some((*name, arguments.get(name)?)))
            .collect();
        let is_mean = super::word_text(&call.function) == MEAN_EXTREME;
        match given.as_slice() {
            [] if is_mean => Some(ExtremeQuantity::Mean),
            [(name, expression)] if !is_mean => {
                let probability = match *name {
                    "fractile" => {
                        let share = self.share(expression, "a fractile", scope)?;
                        Probability::from_logarithms((-share).ln_1p(), share.ln())
                    }
                    "failure_probability" => {
                        let share = self.share(expression, "a failure probability", scope)?;
                        Probability::from_logarithms(share.ln(), (-share).ln_1p())
                    }
                    _ => {
                        let index = self.number(expression, scope, Dimension::PLAIN, "a reliability index", None)?;
                        let Number::Known(index) = index.value else {
                            return None;
                        };
                        Probability::from_logarithms(normal::ln_upper(index), normal::ln_lower(index))
                    }
                };
                Some(ExtremeQuantity::Beyond(probability))
            }
            _ => {
                let (message, help) = if is_mean {
                    (
                        "`mean_extreme` is one number",
                        "write `mean_extreme(NAME)`, or `extreme(NAME, fractile: 98 %)`",
                    )
                } else {
                    (
                        "`extreme` needs to know how rare the level is, once",
                        "add one of `fractile: 98 %`, `failure_probability: 1e-4` and `reliability_index: 3.8`",
                    )
                };
                self.report(Diagnostic::new(Code::CallArgument, call.brackets, message).help(help));
                None
            }
        }
    }
}
