//! What is wrong at the place where the grammar stopped, in the user's words.

use super::mends;
use super::parser::Rule;
use super::reader::Reader;
use super::recovery::position;
use super::scan::{TokenKind, is_word_char, tokens};
use super::words::{Expected, expected};
use crate::diagnostics::{Code, Diagnostic};
use pest::error::{Error, ErrorVariant};
use std::ops::Range;

/// The facts of a fault: what stands there, what was expected, and what came before.
pub(super) struct Fault<'a> {
    pub reader: &'a Reader<'a>,
    /// Where what was read begins.
    pub start: usize,
    /// Where it ends.
    pub end: usize,
    /// Where the grammar stopped: the start of a token, or the end.
    pub at: usize,
    /// The token there.
    pub found: &'a str,
    /// The end of the token before.
    pub last_end: usize,
    /// Whether something is missing rather than wrong: nothing more stands on the line of the token before, where the
    /// declaration could not end.
    pub missing: bool,
    /// The innermost bracket open there.
    pub open: Option<usize>,
    expected: Vec<Rule>,
}

impl<'a> Fault<'a> {
    /// The facts of an error in the part `range` of the text.
    pub(super) fn new(reader: &'a Reader<'a>, range: Range<usize>, error: &Error<Rule>) -> Self {
        let at = range.start + position(error);
        let last_end = reader.last_token_end(range.start, at);
        let expected = match &error.variant {
            ErrorVariant::ParsingError { positives, .. } => positives.clone(),
            ErrorVariant::CustomError { .. } => Vec::new(),
        };
        let could_end = expected
            .iter()
            .any(|rule| matches!(rule, Rule::declaration | Rule::limit_line));
        let missing = at >= range.end || !could_end && reader.slice(last_end..at).contains('\n');
        let next = tokens(reader.text, at..reader.text.len())
            .find(|token| !matches!(token.kind, TokenKind::Newline | TokenKind::Comment));
        Self {
            reader,
            start: range.start,
            end: range.end,
            at: next.as_ref().map_or(at, |token| token.range.start),
            found: next.map_or("", |token| spelling(reader.slice(token.range.start..reader.text.len()))),
            last_end,
            missing,
            open: innermost_bracket(reader.text, range.start..at),
            expected,
        }
    }

    /// Whether the grammar would have gone on with this rule.
    pub(super) fn expects(&self, rule: Rule) -> bool {
        self.expected.contains(&rule)
    }

    /// Whether a value could have stood here.
    pub(super) fn expects_value(&self) -> bool {
        self.expected.iter().any(|rule| expected(*rule) == Expected::Value)
    }

    /// The single words of the language that could have stood here.
    pub(super) fn expected_words(&self) -> impl Iterator<Item = &'static str> + '_ {
        self.expected.iter().filter_map(|rule| match expected(*rule) {
            Expected::Plain(text) => text
                .strip_prefix('`')?
                .strip_suffix('`')
                .filter(|word| word.starts_with(is_word_char)),
            _ => None,
        })
    }

    /// The finding.
    pub(super) fn describe(&self) -> Diagnostic {
        mends::special(self).unwrap_or_else(|| self.plain())
    }

    /// A finding at the found token, or at the end of the one before where something is missing.
    pub(super) fn diagnostic(&self, message: impl Into<String>) -> Diagnostic {
        let place = if self.missing && self.last_end > self.start {
            self.last_end..self.last_end
        } else {
            self.at..self.at + self.found.len()
        };
        Diagnostic::new(Code::SyntaxUnexpected, self.reader.span(place), message)
    }

    /// What was expected and what was found, without further insight.
    pub(super) fn plain(&self) -> Diagnostic {
        let wanted = self.expectation();
        match self.before() {
            Some(before) if self.missing => self
                .diagnostic(format!("expected {wanted} after {before}"))
                .here("missing here"),
            _ if self.found.is_empty() => self.diagnostic(format!("expected {wanted}")),
            _ => self.diagnostic(format!("expected {wanted}, found {}", quote(self.found))),
        }
    }

    /// The token before, quoted.
    fn before(&self) -> Option<String> {
        let text = self.reader.slice(self.start..self.last_end);
        let last = text.chars().next_back()?;
        if last == '"' {
            return Some("the text".to_owned());
        }
        let word = text.len() - text.trim_end_matches(is_word_char).len();
        let length = word.max(last.len_utf8());
        text.get(text.len() - length..).map(quote)
    }

    /// "an operator, `,` or `)`".
    fn expectation(&self) -> String {
        let mut kinds: Vec<Expected> = Vec::new();
        for kind in self.expected.iter().map(|rule| expected(*rule)) {
            if kind != Expected::Unspoken && !kinds.contains(&kind) {
                kinds.push(kind);
            }
        }
        if kinds
            .iter()
            .any(|kind| matches!(kind, Expected::Value | Expected::Operator))
        {
            kinds.retain(|kind| !matches!(kind, Expected::Alone(_)));
        }
        kinds.sort_by_key(|kind| match kind {
            Expected::Operator => 0,
            Expected::Value => 1,
            Expected::Comparison | Expected::Demand => 2,
            Expected::Plain(text) | Expected::Alone(text) if text.starts_with('`') => 3,
            Expected::Plain(_) | Expected::Alone(_) => 4,
            Expected::Unspoken => 5,
        });
        let alone = kinds.len() == 1;
        let phrases: Vec<&str> = kinds
            .into_iter()
            .map(|kind| match kind {
                Expected::Operator => "an operator",
                Expected::Value if alone => "a number, a name or `(`",
                Expected::Value => "a value",
                Expected::Comparison => "a comparison (`<`, `>` or `outside`)",
                Expected::Demand => "`>=` or `<=`",
                Expected::Plain("`=`") if alone => "`=` and a value",
                Expected::Plain("a declaration") if !alone => "the next declaration",
                Expected::Plain("a line of the limit state") if !alone => "the next line",
                Expected::Plain(text) | Expected::Alone(text) => text,
                Expected::Unspoken => "",
            })
            .collect();
        match phrases.split_last() {
            None => "something else".to_owned(),
            Some((last, [])) => (*last).to_owned(),
            Some((last, others)) => format!("{} or {last}", others.join(", ")),
        }
    }
}

/// A token in backticks; one that cannot be seen by its number; a long one cut.
pub(super) fn quote(token: &str) -> String {
    const LONGEST: usize = 40;
    match token.chars().next() {
        Some(c) if c.is_control() || c.is_whitespace() || is_invisible(c) => {
            format!("the character U+{:04X}", u32::from(c))
        }
        _ if token.chars().count() > LONGEST => {
            let beginning: String = token.chars().take(LONGEST).collect();
            format!("`{beginning}...`")
        }
        _ => format!("`{token}`"),
    }
}

/// Format characters that show nothing: zero-width blanks and joiners, marks of direction, byte order marks.
pub(super) fn is_invisible(c: char) -> bool {
    matches!(c, '\u{AD}' | '\u{200B}'..='\u{200F}' | '\u{202A}'..='\u{202E}' | '\u{2060}'..='\u{2064}' | '\u{FEFF}')
}

/// How the first token of a text is written.
fn spelling(text: &str) -> &str {
    let Some(first) = text.chars().next() else {
        return "";
    };
    let length = if first.is_ascii_digit() {
        text.find(|c| !is_word_char(c) && c != '.').unwrap_or(text.len())
    } else if is_word_char(first) {
        text.find(|c| !is_word_char(c)).unwrap_or(text.len())
    } else if first == '"' {
        let line = text.find('\n').unwrap_or(text.len());
        text.get(..line).unwrap_or("").trim_end().len()
    } else if ["<=", ">=", "==", "!=", "&&", "||"]
        .iter()
        .any(|mark| text.starts_with(mark))
    {
        2
    } else {
        first.len_utf8()
    };
    text.get(..length).unwrap_or("")
}

fn innermost_bracket(text: &str, range: Range<usize>) -> Option<usize> {
    let mut open = Vec::new();
    for token in tokens(text, range) {
        match token.kind {
            TokenKind::Mark(b'(' | b'{') => open.push(token.range.start),
            TokenKind::Mark(b')' | b'}') => {
                open.pop();
            }
            _ => {}
        }
    }
    open.pop()
}

/// The word of `candidates` that `word` was probably meant to be, though it is none of them.
pub(super) fn near<'c>(word: &str, candidates: impl IntoIterator<Item = &'c str>) -> Option<&'c str> {
    const LONGEST: usize = 16;
    if word.len() < 3 || word.len() > LONGEST {
        return None;
    }
    candidates
        .into_iter()
        .filter(|candidate| word.len().abs_diff(candidate.len()) <= allowed(candidate))
        .map(|candidate| (strsim::osa_distance(word, candidate), candidate))
        .filter(|(distance, candidate)| *distance > 0 && *distance <= allowed(candidate))
        .min_by_key(|(distance, _)| *distance)
        .map(|(_, candidate)| candidate)
}

/// One slip in a short word, two in a long one.
fn allowed(candidate: &str) -> usize {
    if candidate.len() < 7 { 1 } else { 2 }
}
