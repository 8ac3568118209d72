//! `2/s`: a number with a unit, although the grammar reads a quotient.

use super::{Lowering, Scope};
use crate::language::tree::{self, Expression, ExpressionKind, Factor, FactorOperator, UnitExpression, UnitFactor};
use crate::units::Unit;

impl Lowering<'_, '_, '_> {
    /// `2/s`: a number directly followed by `/` and words that are units and that nothing declares is a number with a
    /// unit, since a quotient by a unit means nothing else.
    pub(super) fn unit_behind_slash<'e>(
        &self,
        before: &'e Factor,
        factor: &Factor,
        scope: Scope<'_>,
    ) -> Option<(&'e tree::Number, UnitExpression)> {
        let ExpressionKind::Number(number) = &before.value.kind else {
            return None;
        };
        let adjacent = before.value.span.end + 1 == factor.value.span.start;
        if number.unit.is_some() || factor.operator != FactorOperator::Over || !adjacent {
            return None;
        }
        let mut factors = Vec::new();
        unit_factors(&factor.value, -1, &mut factors)?;
        let is_unit = |one: &UnitFactor| {
            let word = &one.symbol.text;
            Unit::named(word).is_some()
                && self.names.find(scope.instance, word).is_none()
                && !scope.locals.iter().any(|(local, _)| *local == &**word)
                && &**word != "t"
        };
        factors.iter().all(is_unit).then(|| {
            let unit = UnitExpression {
                span: factor.value.span,
                factors,
            };
            (number, unit)
        })
    }
}

/// The factors of an expression that is written like a unit: words, `*`, `/`, whole powers and brackets.
fn unit_factors(expression: &Expression, sign: i32, into: &mut Vec<UnitFactor>) -> Option<()> {
    match &expression.kind {
        ExpressionKind::Name(path) => {
            let [word] = path.words.as_slice() else {
                return None;
            };
            into.push(UnitFactor {
                symbol: word.clone(),
                power: sign,
            });
            Some(())
        }
        ExpressionKind::Power(base, exponent) => {
            let (ExpressionKind::Name(path), ExpressionKind::Number(power)) = (&base.kind, &exponent.kind) else {
                return None;
            };
            let [word] = path.words.as_slice() else {
                return None;
            };
            if power.value.fract() != 0.0 || power.value.abs() > 100.0 {
                return None;
            }
            into.push(UnitFactor {
                symbol: word.clone(),
                power: sign * power.value as i32,
            });
            Some(())
        }
        ExpressionKind::Bracket(inner) => unit_factors(inner, sign, into),
        ExpressionKind::Product(factors) => factors.iter().try_for_each(|factor| {
            let sign = if factor.operator == FactorOperator::Over {
                -sign
            } else {
                sign
            };
            unit_factors(&factor.value, sign, into)
        }),
        _ => None,
    }
}
