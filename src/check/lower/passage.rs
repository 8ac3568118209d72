//! Methods of first passage, and the limit states they hold for.

use super::Lowering;
use crate::check::names::{self, choice};
use crate::check::value::Varying;
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::Word;
use crate::reliability::crossings::{FailureRegion, lies_midway};
use crate::reliability::first_passage::Method;
use crate::source::Span;
use crate::units::{Unit, show};

const METHODS: [Method; 3] = [Method::Poisson, Method::PoissonSafeStart, Method::Vanmarcke];

impl Lowering<'_, '_, '_> {
    /// The method of a name.
    pub(super) fn method(&mut self, word: &Word) -> Option<Method> {
        let found = METHODS.into_iter().find(|method| method.name() == &*word.text);
        if found.is_none() {
            let message = format!("there is no method of first passage called `{}`", word.text);
            let known = METHODS.map(Method::name);
            let near = choice(&names::near(&word.text, known.into_iter()));
            let help = match near {
                Some(near) => format!("did you mean {near}?"),
                None => "the methods are `poisson`, `poisson_safe_start` and `vanmarcke`".to_string(),
            };
            self.report(Diagnostic::new(Code::QuantityUnknown, word.span, message).help(help));
        }
        found
    }

    /// Refuses a method where it has no meaning: `vanmarcke` knows one barrier beyond the mean, or two evenly about it.
    pub(super) fn applies(
        &mut self,
        method: (Method, Span),
        varying: &Varying,
        region: FailureRegion,
        condition: Span,
    ) -> bool {
        let (Method::Vanmarcke, place) = method else {
            return true;
        };
        let mean = varying.form.mean();
        let unit = super::unit_or_si(varying.unit.as_ref(), varying.dimension);
        let found = match region {
            FailureRegion::Below(level) => (mean <= level).then(|| failed_mean(mean, "above", level, &unit)),
            FailureRegion::Above(level) => (mean >= level).then(|| failed_mean(mean, "below", level, &unit)),
            FailureRegion::Outside(lower, upper) if !lies_midway(mean, lower, upper) => Some(format!(
                "the mean, {}, is not midway between {} and {}",
                show(mean, &unit, DIGITS),
                show(lower, &unit, DIGITS),
                show(upper, &unit, DIGITS)
            )),
            FailureRegion::Outside(..) => None,
        };
        let Some(found) = found else {
            return true;
        };
        let help = match region {
            FailureRegion::Outside(..) => {
                "use `poisson` or `poisson_safe_start`, or make a limit state of each barrier"
            }
            _ => {
                "check the sign of the condition: failure is the normal state here; `poisson_safe_start` counts it all the same"
            }
        };
        let message = "`vanmarcke` holds for one barrier beyond the mean, or for two evenly about it";
        self.report(
            Diagnostic::new(Code::LimitMethod, place, message)
                .here("does not hold here")
                .label(condition, found)
                .help(help),
        );
        false
    }
}

fn failed_mean(mean: f64, side: &str, level: f64, unit: &Unit) -> String {
    let (mean, level) = (show(mean, unit, DIGITS), show(level, unit, DIGITS));
    format!("the mean, {mean}, is not {side} the barrier, {level}")
}

/// Digits of a mean or a level in a message.
const DIGITS: usize = 6;
