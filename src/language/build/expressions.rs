//! Expressions: the flat run of operands and operators of a `sum`, ordered by how they bind.

use super::{Builder, Stream, take};
use crate::language::parser::Rule;
use crate::language::tree::{Argument, Call, Expression, ExpressionKind, Factor, FactorOperator, Number, Sign, Term};
use crate::source::Span;
use pest::iterators::Pair;

impl Builder<'_> {
    /// The next `sum` of a stream, whatever marks stand before it.
    pub(super) fn next_sum(&mut self, stream: &mut Stream<'_>) -> Option<Expression> {
        let pair = stream.find(|pair| pair.as_rule() == Rule::sum)?;
        self.sum(pair)
    }

    /// An expression.
    pub(in crate::language) fn sum(&mut self, pair: Pair<'_, Rule>) -> Option<Expression> {
        let span = self.span(&pair);
        let mut stream = pair.into_inner().peekable();
        let (sign, start) = self.signs(&mut stream);
        let first = self.product(&mut stream)?;
        if stream.peek().is_none() {
            return Some(signed(sign, start, first));
        }
        let mut terms = vec![Term { sign, value: first }];
        while let Some(operator) = stream.next() {
            let (inner_sign, start) = self.signs(&mut stream);
            let value = self.product(&mut stream)?;
            terms.push(Term {
                sign: sign_of(&operator),
                value: signed(inner_sign, start, value),
            });
        }
        let kind = ExpressionKind::Sum(terms);
        Some(Expression { span, kind })
    }

    fn product(&mut self, stream: &mut Stream<'_>) -> Option<Expression> {
        let first = self.power(stream)?;
        let Some(mut operator) = take(stream, Rule::multiplicative) else {
            return Some(first);
        };
        let mut span = first.span;
        let mut factors = vec![Factor {
            operator: FactorOperator::Times,
            value: first,
        }];
        loop {
            let (sign, start) = self.signs(stream);
            let value = signed(sign, start, self.power(stream)?);
            span = span.to(value.span);
            factors.push(Factor {
                operator: match operator.as_str() {
                    "/" => FactorOperator::Over,
                    _ => FactorOperator::Times,
                },
                value,
            });
            match take(stream, Rule::multiplicative) {
                Some(next) => operator = next,
                None => break,
            }
        }
        let kind = ExpressionKind::Product(factors);
        Some(Expression { span, kind })
    }

    fn power(&mut self, stream: &mut Stream<'_>) -> Option<Expression> {
        let base = self.atom(stream)?;
        if take(stream, Rule::caret).is_none() {
            return Some(base);
        }
        let (sign, start) = self.signs(stream);
        let exponent = signed(sign, start, self.atom(stream)?);
        Some(Expression {
            span: base.span.to(exponent.span),
            kind: ExpressionKind::Power(Box::new(base), Box::new(exponent)),
        })
    }

    fn atom(&mut self, stream: &mut Stream<'_>) -> Option<Expression> {
        let pair = stream.next()?;
        let span = self.span(&pair);
        match pair.as_rule() {
            Rule::digits => {
                let unit = stream.next_if(|next| matches!(next.as_rule(), Rule::unit | Rule::reciprocal));
                let unit = match unit {
                    Some(unit) => Some(self.unit(&unit)?),
                    None => None,
                };
                Some(Expression {
                    span: unit.as_ref().map_or(span, |unit| span.to(unit.span)),
                    kind: ExpressionKind::Number(Number {
                        value: value(pair.as_str())?,
                        digits: span,
                        unit,
                    }),
                })
            }
            Rule::string => {
                let kind = ExpressionKind::String(self.text(&pair));
                Some(Expression { span, kind })
            }
            Rule::path => match take(stream, Rule::arguments) {
                Some(arguments) => self.call(&pair, arguments),
                None => {
                    let kind = ExpressionKind::Name(self.path(&pair));
                    Some(Expression { span, kind })
                }
            },
            Rule::bracket => self.bracket(pair),
            _ => None,
        }
    }

    /// The quantity of an `expect`, a call.
    pub(super) fn quantity(&mut self, pair: Pair<'_, Rule>) -> Option<Expression> {
        let mut parts = pair.into_inner();
        let path = parts.next()?;
        self.call(&path, parts.next()?)
    }

    fn call(&mut self, path: &Pair<'_, Rule>, arguments: Pair<'_, Rule>) -> Option<Expression> {
        let function = self.path(path);
        let brackets = self.span(&arguments);
        Some(Expression {
            span: function.span.to(brackets),
            kind: ExpressionKind::Call(Box::new(Call {
                function,
                arguments: self.arguments(arguments)?,
                brackets,
            })),
        })
    }

    fn bracket(&mut self, pair: Pair<'_, Rule>) -> Option<Expression> {
        let span = self.span(&pair);
        let first = pair.clone().into_inner().next()?;
        let kind = if first.as_rule() == Rule::sum {
            ExpressionKind::Bracket(Box::new(self.sum(first)?))
        } else {
            ExpressionKind::Group(self.arguments(pair)?)
        };
        Some(Expression { span, kind })
    }

    /// The arguments between brackets, of a call, a part or a state.
    pub(super) fn arguments(&mut self, pair: Pair<'_, Rule>) -> Option<Vec<Argument>> {
        let mut arguments = Vec::new();
        let mut name = None;
        for part in pair.into_inner() {
            match part.as_rule() {
                Rule::argument_name => name = Some(self.word(part)),
                Rule::sum => arguments.push(Argument {
                    name: name.take(),
                    value: self.sum(part)?,
                }),
                _ => {}
            }
        }
        Some(arguments)
    }

    /// The signs before an operand, folded into one, and where the first of them stands.
    fn signs(&mut self, stream: &mut Stream<'_>) -> (Sign, Option<Span>) {
        let (mut sign, mut start) = (Sign::Plus, None);
        while let Some(pair) = take(stream, Rule::sign) {
            start = start.or_else(|| Some(self.span(&pair)));
            sign = match (sign, sign_of(&pair)) {
                (Sign::Plus, Sign::Plus) | (Sign::Minus, Sign::Minus) => Sign::Plus,
                _ => Sign::Minus,
            };
        }
        (sign, start)
    }
}

fn sign_of(pair: &Pair<'_, Rule>) -> Sign {
    if pair.as_str() == "-" { Sign::Minus } else { Sign::Plus }
}

fn signed(sign: Sign, start: Option<Span>, value: Expression) -> Expression {
    match (sign, start) {
        (Sign::Minus, Some(start)) => Expression {
            span: start.to(value.span),
            kind: ExpressionKind::Negative(Box::new(value)),
        },
        _ => value,
    }
}

/// The value of digits as written, `1_000.5e-3`, to the nearest double; infinite beyond it.
pub(super) fn value(digits: &str) -> Option<f64> {
    if digits.contains('_') {
        digits.replace('_', "").parse().ok()
    } else {
        digits.parse().ok()
    }
}
