//! A process that enters a sum as itself and once more inside another process or a part.

use super::{Finished, sole_name};
use crate::check::model::Named;
use crate::check::parts::InstanceId;
use crate::covariance::form::Operator;
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{DeclarationKind, Expression, ExpressionKind, LimitLineKind, Sign, Term};
use crate::source::Span;
use crate::units::show;

/// A term of a sum that is a name and nothing else.
struct Member<'a> {
    named: &'a Named,
    factor: f64,
    place: Span,
}

impl<'a> Finished<'a> {
    pub(super) fn counted_twice(&self) -> Vec<Diagnostic> {
        let mut found = Vec::new();
        for item in self.names.items() {
            let instance = self.names.item(item).instance;
            match &self.names.declaration(item).kind {
                DeclarationKind::Definition { value, .. } if self.named(item).is_some() => {
                    found.extend(self.twice_in(value, instance));
                }
                DeclarationKind::LimitState { lines, .. } => {
                    for line in lines {
                        if let LimitLineKind::FailureWhen(condition) = &line.kind {
                            crate::check::order::conditions(condition, &mut |value| {
                                found.extend(self.twice_in(value, instance));
                            });
                        }
                    }
                }
                _ => {}
            }
        }
        found
    }

    fn twice_in(&self, expression: &Expression, instance: InstanceId) -> Vec<Diagnostic> {
        let terms = match &expression.kind {
            ExpressionKind::Bracket(inner) => return self.twice_in(inner, instance),
            ExpressionKind::Sum(terms) if terms.len() <= super::MOST_TERMS => terms,
            _ => return Vec::new(),
        };
        let members: Vec<Member<'a>> = terms.iter().filter_map(|term| self.member(term, instance)).collect();
        let mut found = Vec::new();
        for one in &members {
            for other in &members {
                found.extend(self.twice(one, other));
            }
        }
        found
    }

    fn member(&self, term: &Term, instance: InstanceId) -> Option<Member<'a>> {
        let path = sole_name(&term.value)?;
        Some(Member {
            named: self.named(self.resolved(path, instance)?)?,
            factor: if term.sign == Sign::Minus { -1.0 } else { 1.0 },
            place: term.value.span,
        })
    }

    /// Whether `source`, which is nothing but a process of its own, is also inside `whole` with the same weight. Another
    /// weight, a delay or a derivative is there on purpose.
    fn twice(&self, source: &Member<'_>, whole: &Member<'_>) -> Option<Diagnostic> {
        let [own] = source.named.form.terms() else {
            return None;
        };
        if own.operator != Operator::IDENTITY || whole.named.form.terms().len() < 2 {
            return None;
        }
        let inside = whole
            .named
            .form
            .terms()
            .iter()
            .find(|term| term.source == own.source && term.operator == own.operator)?;
        let (weight, again) = (source.factor * own.coefficient(), whole.factor * inside.coefficient());
        if weight != again {
            return None;
        }
        let (name, other) = (self.as_written(source.place), self.as_written(whole.place));
        let message = format!("`{name}` is counted twice: once as itself, and once inside `{other}`");
        let mean = show(2.0 * source.named.form.mean(), &source.named.unit, 4);
        Some(
            Diagnostic::new(Code::MarginCountedTwice, source.place, message)
                .here(format!("its scatter counts double here, and its mean as {mean}"))
                .label(whole.place, format!("holds `{name}` with the same weight"))
                .label(whole.named.place, "made here")
                .help(format!(
                    "leave `{name}` out here; if both are meant, write `2 * {name}` and the rest of `{other}`"
                )),
        )
    }
}
