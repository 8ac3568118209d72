//! Numbers that do not say where they come from. No finding for each: results list them in one place.

use super::Finished;
use crate::check::names::declared;
use crate::check::parts::InstanceId;
use crate::language::tree::{
    Condition, ConditionKind, Declaration, DeclarationKind, Expression, ExpressionKind, LimitLine, LimitLineKind,
};
use std::collections::HashSet;

impl Finished<'_> {
    /// The names of what holds a number with a unit and has no `basis`, and the requirements without one, each text once.
    pub fn without_basis(&self) -> Vec<String> {
        let mut seen = HashSet::new();
        let mut found = Vec::new();
        for (id, instance) in (0..).map(InstanceId).zip(&self.names.parts().instances) {
            if !seen.insert(instance.tree.file) {
                continue;
            }
            for declaration in &instance.tree.declarations {
                let Some(word) = declared(declaration) else { continue };
                let name = format!("{}{}", instance.prefix, word.text);
                if let DeclarationKind::LimitState { lines, .. } = &declaration.kind {
                    found.extend(lines.iter().filter_map(|line| self.line_without_basis(line, &name)));
                } else if declaration.basis.is_none() && holds_numbers(declaration) && !self.is_set(id, declaration) {
                    found.push(name);
                }
            }
        }
        found
    }

    fn line_without_basis(&self, line: &LimitLine, name: &str) -> Option<String> {
        let wanted = match &line.kind {
            LimitLineKind::Require { .. } => true,
            LimitLineKind::FailureWhen(condition) => condition_has_unit(condition),
            LimitLineKind::ReferencePeriod(_)
            | LimitLineKind::FirstPassage(_)
            | LimitLineKind::TabulateAt(_)
            | LimitLineKind::ExtremesAt(_) => false,
        };
        (wanted && line.basis.is_none()).then(|| format!("{name} ({})", self.as_written(line.span)))
    }

    /// Whether a parameter gets its value from elsewhere, so that its own number does not count.
    fn is_set(&self, instance: InstanceId, declaration: &Declaration) -> bool {
        let (DeclarationKind::Parameter { name, .. }, Some((_, _, arguments))) =
            (&declaration.kind, self.names.parts().arguments(instance))
        else {
            return false;
        };
        arguments
            .iter()
            .any(|argument| argument.name.as_ref().is_some_and(|word| word.text == name.text))
    }
}

fn holds_numbers(declaration: &Declaration) -> bool {
    match &declaration.kind {
        DeclarationKind::Parameter { value, .. } => value.as_ref().is_some_and(has_unit),
        DeclarationKind::Definition { value, .. } | DeclarationKind::Function { value, .. } => has_unit(value),
        DeclarationKind::Use { arguments, .. } => arguments.iter().any(|argument| has_unit(&argument.value)),
        _ => false,
    }
}

fn condition_has_unit(condition: &Condition) -> bool {
    match &condition.kind {
        ConditionKind::Below(margin, level) | ConditionKind::Above(margin, level) => {
            has_unit(margin) || has_unit(level)
        }
        ConditionKind::Outside(margin, lower, upper) => [margin, lower, upper].into_iter().any(has_unit),
        ConditionKind::Any(several) | ConditionKind::All(several) => several.iter().any(condition_has_unit),
        ConditionKind::Named(_) => false,
    }
}

/// Whether a number with a unit stands in an expression: plain numbers are mostly those of formulas.
fn has_unit(expression: &Expression) -> bool {
    match &expression.kind {
        // A 1 with a unit converts: `1 turn / period`.
        ExpressionKind::Number(number) => number.unit.is_some() && number.value != 0.0 && number.value != 1.0,
        ExpressionKind::String(_) => true,
        ExpressionKind::Name(_) => false,
        ExpressionKind::Sum(terms) => terms.iter().any(|term| has_unit(&term.value)),
        ExpressionKind::Product(factors) => factors.iter().any(|factor| has_unit(&factor.value)),
        ExpressionKind::Negative(inner) | ExpressionKind::Bracket(inner) => has_unit(inner),
        ExpressionKind::Power(base, exponent) => has_unit(base) || has_unit(exponent),
        ExpressionKind::Call(call) => call.arguments.iter().any(|argument| has_unit(&argument.value)),
        ExpressionKind::Group(arguments) => arguments.iter().any(|argument| has_unit(&argument.value)),
    }
}
