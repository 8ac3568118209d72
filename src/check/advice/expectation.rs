//! Expectations that compare nothing, or what does not exist.

use super::Finished;
use crate::check::model::{Expectation, ProcessQuantity, Subject, Tolerance};
use crate::covariance::existence;
use crate::covariance::source::Source;
use crate::diagnostics::{Code, Diagnostic};
use crate::units::show_number;

impl Finished<'_> {
    pub(super) fn expectations(&self) -> Vec<Diagnostic> {
        let expectations = self.lowered.model.expectations.iter();
        expectations
            .filter_map(|expectation| self.never(expectation).or_else(|| idle(expectation)))
            .collect()
    }

    /// A quantity that needs a derivative which a source does not have.
    fn never(&self, expectation: &Expectation) -> Option<Diagnostic> {
        let Subject::Varying(index, quantity) = expectation.subject else {
            return None;
        };
        let (order, consequence) = match quantity {
            ProcessQuantity::Mean | ProcessQuantity::StandardDeviation => return None,
            ProcessQuantity::DerivativeStandardDeviation => (1, "the standard deviation of the derivative is infinite"),
            ProcessQuantity::ZeroUpcrossingRate => (1, "the rate of upcrossings is infinite"),
            ProcessQuantity::Bandwidth => (1, "lambda_2 is infinite, so there is no bandwidth"),
            ProcessQuantity::Irregularity => (2, "lambda_4 is infinite, so there is no irregularity"),
        };
        let named = self.lowered.model.varying.get(index)?;
        let rough = named.form.by_source().find_map(|(id, terms)| {
            let source: &Source = self.lowered.model.sources.get(id.0 as usize)?;
            (!existence::has_derivative(source, terms, order)).then_some(source)
        })?;
        let message = format!("this expectation can never hold: {consequence}");
        Some(
            Diagnostic::new(Code::ExpectationNever, expectation.place, message)
                .here("reported as not holding, whatever is expected")
                .label(rough.place, rough.roughness_in_words())
                .help(
                    "expect another quantity, or use a kernel that is smoother at lag 0 if the physics allows it, such as \
                     `squared_exponential(...)`",
                ),
        )
    }
}

/// A tolerance as wide as the value.
fn idle(expectation: &Expectation) -> Option<Diagnostic> {
    let Tolerance::Relative(share) = expectation.tolerance else {
        return None;
    };
    if share < 1.0 {
        return None;
    }
    let message = format!(
        "a tolerance of {} % holds for anything from nothing to twice the value",
        show_number(100.0 * share, 4)
    );
    Some(
        Diagnostic::new(Code::ExpectationIdle, expectation.place, message)
            .here("compares nothing")
            .help("write how near the two must be, such as `within 1 %`"),
    )
}
