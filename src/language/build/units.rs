//! Units: brackets multiplied out into symbols with powers.

use super::Builder;
use crate::language::parser::Rule;
use crate::language::tree::{UnitExpression, UnitFactor, Word};
use crate::source::Span;
use pest::iterators::Pair;

impl Builder<'_> {
    /// The unit of a `unit`, `reciprocal` or `shown_unit`, whose text the grammar has found sound.
    pub(super) fn unit(&mut self, pair: &Pair<'_, Rule>) -> Option<UnitExpression> {
        let span = self.span(pair);
        let mut factors: Vec<UnitFactor> = Vec::new();
        // Where each open bracket began, and whether it stands below the line; where the last factor began.
        let mut open: Vec<(usize, bool)> = Vec::new();
        let (mut last, mut below) = (0, false);
        let text = pair.as_str();
        let mut at = 0;
        while let Some(first) = text.get(at..).and_then(|rest| rest.chars().next()) {
            let rest = text.get(at..)?;
            let mut length = first.len_utf8();
            match first {
                '/' => below = true,
                '(' => open.push((factors.len(), std::mem::take(&mut below))),
                ')' => {
                    let (start, below) = open.pop()?;
                    last = start;
                    if below {
                        raise(factors.get_mut(start..)?, -1);
                    }
                }
                // `1/s`
                '*' | '.' | '1' => {}
                _ if is_power(first) => {
                    length = rest.find(|c| !is_power(c) && !c.is_ascii_digit()).unwrap_or(rest.len());
                    raise(factors.get_mut(last..)?, power(rest.get(..length)?));
                }
                _ => {
                    length = rest.find(|c| is_power(c) || MARKS.contains(c)).unwrap_or(rest.len());
                    let start = span.start as usize + at;
                    last = factors.len();
                    factors.push(UnitFactor {
                        power: if std::mem::take(&mut below) { -1 } else { 1 },
                        symbol: Word {
                            text: rest.get(..length)?.into(),
                            span: Span::new(span.file, start, start + length),
                        },
                    });
                }
            }
            at += length;
        }
        Some(UnitExpression { span, factors })
    }
}

const MARKS: &str = "/()*.";

/// What a power begins with, or consists of beyond digits.
fn is_power(c: char) -> bool {
    matches!(c, '^' | '-' | '+' | '⁻' | '⁺' | '⁰' | '¹' | '²' | '³' | '⁴'..='⁹')
}

fn raise(factors: &mut [UnitFactor], power: i32) {
    for factor in factors {
        factor.power = factor.power.saturating_mul(power);
    }
}

/// The number of `^2`, `^-1`, `²`, `⁻¹`; at most what an `i32` holds.
fn power(text: &str) -> i32 {
    let mut negative = false;
    let mut value: i32 = 0;
    for character in text.chars() {
        let digit = match character {
            '-' | '⁻' => {
                negative = true;
                continue;
            }
            '⁰' => 0,
            '¹' => 1,
            '²' => 2,
            '³' => 3,
            '⁴'..='⁹' => u32::from(character) - u32::from('⁴') + 4,
            _ => match character.to_digit(10) {
                Some(digit) => digit,
                None => continue,
            },
        };
        value = value.saturating_mul(10).saturating_add_unsigned(digit);
    }
    if negative { -value } else { value }
}
