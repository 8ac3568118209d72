//! The lines of a limit state.

use super::{Builder, Stream, take};
use crate::diagnostics::{Code, Diagnostic};
use crate::language::parser::Rule;
use crate::language::tree::{
    Condition, ConditionKind, Expression, ExpressionKind, LimitLine, LimitLineKind, RequireComparison,
};
use crate::source::Span;
use pest::iterators::Pair;

impl Builder<'_> {
    /// What stands between the braces, and the closing brace.
    pub(super) fn limit_state(&mut self, stream: &mut Stream<'_>) -> Option<(Vec<LimitLine>, Span)> {
        take(stream, Rule::open_brace)?;
        let mut lines = Vec::new();
        while let Some(line) = take(stream, Rule::limit_line) {
            lines.push(self.limit_line(line)?);
        }
        let close = self.span(&take(stream, Rule::close_brace)?);
        Some((lines, close))
    }

    fn limit_line(&mut self, pair: Pair<'_, Rule>) -> Option<LimitLine> {
        let span = self.trimmed_span(&pair);
        let mut parts = pair.into_inner().peekable();
        let body = parts.next()?;
        let rule = body.as_rule();
        let mut stream = body.into_inner().peekable();
        let keyword = self.span(&stream.next()?);
        let kind = match rule {
            Rule::failure_line => LimitLineKind::FailureWhen(self.condition(stream.next()?)?),
            Rule::reference_line => LimitLineKind::ReferencePeriod(self.next_sum(&mut stream)?),
            Rule::passage_line => LimitLineKind::FirstPassage(self.word(stream.next()?)),
            Rule::require_line => LimitLineKind::Require {
                quantity: self.word(stream.next()?),
                comparison: match stream.next()?.as_rule() {
                    Rule::at_least => RequireComparison::AtLeast,
                    _ => RequireComparison::AtMost,
                },
                value: self.next_sum(&mut stream)?,
                over: match take(&mut stream, Rule::over) {
                    Some(_) => Some(self.next_sum(&mut stream)?),
                    None => None,
                },
            },
            Rule::tabulate_line => LimitLineKind::TabulateAt(self.sums(stream)?),
            Rule::extremes_line => LimitLineKind::ExtremesAt(self.sums(stream)?),
            _ => return None,
        };
        Some(LimitLine {
            span,
            keyword,
            kind,
            basis: self.basis(&mut parts)?,
        })
    }

    /// What stands between commas.
    fn sums<'p>(&mut self, stream: impl Iterator<Item = Pair<'p, Rule>>) -> Option<Vec<Expression>> {
        stream
            .filter(|pair| pair.as_rule() == Rule::sum)
            .map(|sum| self.sum(sum))
            .collect()
    }

    fn condition(&mut self, pair: Pair<'_, Rule>) -> Option<Condition> {
        let span = self.span(&pair);
        let mut stream = pair.into_inner().peekable();
        let first = stream.next()?;
        if first.as_rule() == Rule::system_word {
            let inner = stream.next()?.into_inner();
            let conditions = inner
                .filter(|pair| pair.as_rule() == Rule::condition)
                .map(|pair| self.condition(pair))
                .collect::<Option<Vec<_>>>()?;
            let kind = match first.as_str() {
                "any" => ConditionKind::Any(conditions),
                _ => ConditionKind::All(conditions),
            };
            return Some(Condition { span, kind });
        }
        let left = self.sum(first)?;
        let kind = match stream.next().map(|pair| pair.as_rule()) {
            Some(Rule::below) => ConditionKind::Below(left, self.next_sum(&mut stream)?),
            Some(Rule::above) => ConditionKind::Above(left, self.next_sum(&mut stream)?),
            Some(Rule::outside) => {
                let lower = self.next_sum(&mut stream)?;
                ConditionKind::Outside(left, lower, self.next_sum(&mut stream)?)
            }
            _ => match left.kind {
                ExpressionKind::Name(path) => ConditionKind::Named(path),
                _ => {
                    let message = "this is no condition: nothing is compared";
                    let diagnostic = Diagnostic::new(Code::SyntaxUnexpected, left.span, message)
                        .here("a value alone")
                        .help("compare it: `... < 0`, `... > 5 kN` or `... outside 1 kN to 5 kN`; or name another limit state");
                    self.diagnostics.push(diagnostic);
                    return None;
                }
            },
        };
        Some(Condition { span, kind })
    }
}
