//! Checks of the model by its author.

use super::extremes::{EXTREME, MEAN_EXTREME, RARITIES};
use super::mismatch::Wanted;
use super::{Lowering, Scope, unit_or_si, word_text};
use crate::check::model::{Expectation, Kind, LimitQuantity, ProcessQuantity, Subject, Tolerance};
use crate::check::names::{self, ItemId, Resolved, choice};
use crate::check::value::{Number, Scalar};
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{Call, Declaration, Expression, ExpressionKind, Path};
use crate::units::Dimension;
use std::rc::Rc;

const QUANTITIES: &[(&str, ProcessQuantity)] = &[
    ("mean", ProcessQuantity::Mean),
    ("standard_deviation", ProcessQuantity::StandardDeviation),
    (
        "derivative_standard_deviation",
        ProcessQuantity::DerivativeStandardDeviation,
    ),
    ("zero_upcrossing_rate", ProcessQuantity::ZeroUpcrossingRate),
    ("bandwidth", ProcessQuantity::Bandwidth),
    ("irregularity", ProcessQuantity::Irregularity),
];

impl ProcessQuantity {
    /// The dimension it has for a process of a dimension.
    fn dimension(self, of: Dimension) -> Option<Dimension> {
        match self {
            Self::Mean | Self::StandardDeviation => Some(of),
            Self::DerivativeStandardDeviation => of.over(Dimension::TIME),
            Self::ZeroUpcrossingRate => Some(Dimension::RATE),
            Self::Bandwidth | Self::Irregularity => Some(Dimension::PLAIN),
        }
    }
}

impl Lowering<'_, '_, '_> {
    pub(super) fn expectation(
        &mut self,
        item: ItemId,
        declaration: &Declaration,
        quantity: &Expression,
        value: &Expression,
        tolerance: &Expression,
    ) {
        let scope = Scope::plain(self.names.item(item).instance);
        let Some((subject, dimension)) = self.expected_subject(quantity, scope) else {
            return;
        };
        let unit = match subject {
            Subject::Varying(index, ProcessQuantity::Mean | ProcessQuantity::StandardDeviation) => {
                self.model.varying.get(index).map(|named| Rc::clone(&named.unit))
            }
            _ => None,
        };
        let wanted = Wanted {
            dimension,
            unit: unit.as_deref(),
        };
        let why = Some((quantity.span, "expected of this"));
        let expected = self.number(value, scope, wanted, "the expected value", why);
        let place = quantity.span.to(tolerance.span);
        let text = self.as_written(place);
        let tolerance = self.tolerance(tolerance, dimension, scope);
        let (Some(expected), Some(tolerance)) = (expected, tolerance) else {
            return;
        };
        let Number::Known(number) = expected.value else {
            return;
        };
        self.model.expectations.push(Expectation {
            text,
            subject,
            expected: number,
            tolerance,
            unit: unit_or_si(expected.unit.as_ref(), dimension),
            basis: declaration.basis.as_ref().map(|text| text.value.to_string()),
            place,
            order: item,
        });
    }

    /// A share (`1 %`) is of the expected value; anything else is a distance in its unit.
    fn tolerance(&mut self, expression: &Expression, dimension: Dimension, scope: Scope<'_>) -> Option<Tolerance> {
        let value = self.value(expression, scope);
        let scalar = self.scalar(value, expression.span, "a tolerance")?;
        let is_share = scalar.unit.as_ref().is_some_and(|unit| unit.text() == "%");
        let Number::Known(number) = scalar.value else {
            return None;
        };
        if number < 0.0 {
            let message = "a tolerance must not be negative";
            self.report(Diagnostic::new(Code::ValueRange, expression.span, message));
            return None;
        }
        if is_share {
            return Some(Tolerance::Relative(number));
        }
        if scalar.dimension == dimension || scalar.bare_zero {
            return Some(Tolerance::Absolute(number));
        }
        self.tolerance_mismatch(expression, &scalar, dimension);
        None
    }

    fn tolerance_mismatch(&mut self, expression: &Expression, scalar: &Scalar, dimension: Dimension) {
        let message = format!(
            "a tolerance is a share in % or {}, not {}",
            dimension.describe(),
            scalar.dimension.describe()
        );
        let finding = Diagnostic::new(Code::UnitMismatch, expression.span, message);
        self.report(finding.help(format!("write `1 %`, or a distance in {}", dimension.si_name())));
    }

    fn expected_subject(&mut self, quantity: &Expression, scope: Scope<'_>) -> Option<(Subject, Dimension)> {
        let call = match &quantity.kind {
            ExpressionKind::Call(call) => call,
            _ => {
                self.wrong_kind(
                    quantity.span,
                    "no quantity of a named thing",
                    "one",
                    "write `expect QUANTITY(NAME) = value within tolerance`",
                );
                return None;
            }
        };
        let of_extreme = [EXTREME, MEAN_EXTREME].contains(&word_text(&call.function).as_str());
        let names: Vec<&str> = ["over"]
            .into_iter()
            .chain(RARITIES.iter().copied().filter(|_| of_extreme))
            .collect();
        let arguments = self.arguments(call, &["the name of a process, margin or limit state"], &names)?;
        let subject = arguments.subjects.first().copied()?;
        let ExpressionKind::Name(path) = &subject.kind else {
            self.wrong_kind(
                subject.span,
                "an expression",
                "a name",
                "declare it as a process or margin and name it",
            );
            return None;
        };
        let item = match self.names.resolve(path, scope.instance) {
            Ok(Resolved::Item(item)) => item,
            Ok(Resolved::Fault) => return None,
            Err(unknown) => {
                self.unknown_name(path, &unknown, scope);
                return None;
            }
        };
        let over = match arguments.get("over") {
            Some(over) => Some((over, self.time(over, scope, "`over`")?)),
            None => None,
        };
        if let Some(index) = self.varying.get(&item).copied() {
            if let Some((over, _)) = over {
                let message = "a moment belongs to every instant, not to a period";
                self.report(Diagnostic::new(Code::CallArgument, over.span, message).help("remove `over`"));
                return None;
            }
            return self.of_varying(call, index);
        }
        if let Some(index) = self.limit_states.get(&item).copied() {
            let seconds = match over {
                Some((_, time)) => time.seconds,
                None => self.model.limit_states[index].reference_period.seconds,
            };
            if of_extreme {
                let quantity = self.extreme_quantity(call, &arguments, scope)?;
                let limit_state = &self.model.limit_states[index];
                let (region, dimension) = (limit_state.region, limit_state.dimension);
                self.has_extreme(region, subject.span)?;
                return Some((Subject::Extreme(index, quantity, seconds), dimension));
            }
            let word = call.function.words.first()?.clone();
            let (quantity, dimension) = self.limit_quantity(&word)?;
            return Some((Subject::LimitState(index, quantity, seconds), dimension));
        }
        self.not_expectable(path, item);
        None
    }

    fn of_varying(&mut self, call: &Call, index: usize) -> Option<(Subject, Dimension)> {
        let name = word_text(&call.function);
        let named = &self.model.varying[index];
        let what = if named.kind == Kind::Process {
            "process"
        } else {
            "margin"
        };
        let found = QUANTITIES.iter().find(|(known, _)| *known == name);
        let Some((_, quantity)) = found else {
            let known: Vec<&str> = QUANTITIES.iter().map(|(known, _)| *known).collect();
            let message = format!("a {what} has no quantity called `{name}`");
            let mut finding = Diagnostic::new(Code::QuantityUnknown, call.function.span, message);
            let mut of_limit_states = LimitQuantity::names().chain([EXTREME, MEAN_EXTREME]);
            let of_limit_state = of_limit_states.any(|known| known == name);
            finding.help = match choice(&names::near(&name, known.iter().copied())) {
                _ if of_limit_state => Some(format!("`{name}` belongs to a limit state: name one")),
                Some(near) => Some(format!("did you mean {near}?")),
                None => choice(&known).map(|all| format!("it has {}", all.replace(" or ", " and "))),
            };
            self.report(finding);
            return None;
        };
        let dimension = quantity.dimension(named.dimension)?;
        Some((Subject::Varying(index, *quantity), dimension))
    }

    /// Something that has no results, or none because of a fault that has been reported.
    fn not_expectable(&mut self, path: &Path, item: ItemId) {
        use crate::language::tree::{DeclarationKind, DefinitionKeyword};
        let has_results = matches!(
            self.names.declaration(item).kind,
            DeclarationKind::LimitState { .. }
                | DeclarationKind::Definition {
                    keyword: DefinitionKeyword::Process | DefinitionKeyword::Margin,
                    ..
                }
        );
        if !has_results {
            let help = "an expectation is about a process, a margin or a limit state";
            self.wrong_kind(
                path.span,
                "something without results",
                "a process, margin or limit state",
                help,
            );
        }
    }
}
