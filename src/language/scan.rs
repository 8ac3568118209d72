//! The first look at a text: its comments, where its declarations start, and how deep its brackets go.

use super::words::DECLARATION_KEYWORDS;
use std::ops::Range;

/// Brackets nested deeper than this are refused, so that no later stage can run out of stack.
pub(super) const DEEPEST: usize = 200;

/// What the first look found.
pub(super) struct Scan {
    /// Every comment, from `#` to before the end of its line.
    pub comments: Vec<Range<usize>>,
    /// The text in stretches; each but the first begins with a declaration's keyword at the start of a line.
    pub stretches: Vec<Stretch>,
}

/// A part of the text that is read on its own.
pub(super) struct Stretch {
    /// The bytes of it.
    pub range: Range<usize>,
    /// The first bracket that is nested too deep.
    pub too_deep: Option<usize>,
}

/// Looks over `text`. Brackets are counted anew in each stretch, so that one left open spoils no other.
pub(super) fn scan(text: &str) -> Scan {
    let start = if text.starts_with('\u{FEFF}') {
        '\u{FEFF}'.len_utf8()
    } else {
        0
    };
    let mut found = Scan {
        comments: Vec::new(),
        stretches: Vec::new(),
    };
    let (mut opened_at, mut depth, mut too_deep, mut fresh_line) = (start, 0_usize, None, true);
    for token in tokens(text, start..text.len()) {
        let at = token.range.start;
        match token.kind {
            TokenKind::Newline => {
                fresh_line = true;
                continue;
            }
            TokenKind::Comment => found.comments.push(token.range),
            TokenKind::Word if fresh_line && begins_declaration(text, &token.range) => {
                found.stretches.push(Stretch {
                    range: opened_at..at,
                    too_deep,
                });
                (opened_at, depth, too_deep) = (at, 0, None);
            }
            TokenKind::Mark(b'(' | b'{') => {
                depth += 1;
                if depth > DEEPEST && too_deep.is_none() {
                    too_deep = Some(at);
                }
            }
            TokenKind::Mark(b')' | b'}') => depth = depth.saturating_sub(1),
            TokenKind::Word | TokenKind::Text | TokenKind::Mark(_) => {}
        }
        fresh_line = false;
    }
    found.stretches.push(Stretch {
        range: opened_at..text.len(),
        too_deep,
    });
    found
}

fn begins_declaration(text: &str, word: &Range<usize>) -> bool {
    let keyword = text.get(word.clone()).unwrap_or("");
    DECLARATION_KEYWORDS.contains(&keyword) && leads_on(text, word.end)
}

/// Whether blanks and then a word, a number or a text follow on the line, as they do after a keyword; they do not
/// after an argument's name (`spectrum: ...`).
pub(super) fn leads_on(text: &str, after: usize) -> bool {
    let rest = text.get(after..).unwrap_or("");
    let next = rest.trim_start_matches([' ', '\t', '\r']);
    next.len() < rest.len() && next.starts_with(|c: char| is_word_char(c) || c == '"')
}

/// Whether a character may stand in a word.
pub(super) fn is_word_char(c: char) -> bool {
    c == '_' || c.is_alphanumeric()
}

/// A piece of text that matters for its shape; other marks than brackets included, blanks not.
pub(super) struct Token {
    /// Where it stands.
    pub range: Range<usize>,
    /// What it is.
    pub kind: TokenKind,
}

/// What a token is.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(super) enum TokenKind {
    Newline,
    Comment,
    /// Letters, digits and `_`; every character beyond ASCII counts among them.
    Word,
    /// A string; one left open ends with its line.
    Text,
    /// Any other byte.
    Mark(u8),
}

/// The tokens of a part of a text. It agrees with the grammar on where strings and comments end.
pub(super) fn tokens(text: &str, range: Range<usize>) -> impl Iterator<Item = Token> + '_ {
    let bytes = text.as_bytes().get(range.clone()).unwrap_or(&[]);
    let offset = range.start;
    let mut at = 0;
    std::iter::from_fn(move || {
        while matches!(bytes.get(at), Some(b' ' | b'\t' | b'\r')) {
            at += 1;
        }
        let start = at;
        let rest = bytes.get(start..)?;
        let first = *rest.first()?;
        let run = |inside: fn(u8) -> bool| rest.iter().position(|byte| !inside(*byte)).unwrap_or(rest.len());
        let (length, kind) = match first {
            b'\n' => (1, TokenKind::Newline),
            b'#' => {
                let line = run(|byte| byte != b'\n');
                let ending = rest.get(..line).is_some_and(|line| line.ends_with(b"\r"));
                (line - usize::from(ending), TokenKind::Comment)
            }
            b'"' => (string_length(rest), TokenKind::Text),
            _ if is_word_byte(first) => (run(is_word_byte), TokenKind::Word),
            mark => (1, TokenKind::Mark(mark)),
        };
        at = start + length;
        Some(Token {
            range: offset + start..offset + at,
            kind,
        })
    })
}

fn is_word_byte(byte: u8) -> bool {
    byte == b'_' || byte.is_ascii_alphanumeric() || !byte.is_ascii()
}

fn string_length(bytes: &[u8]) -> usize {
    let mut at = 1;
    loop {
        match bytes.get(at) {
            Some(b'"') => return at + 1,
            Some(b'\\') if bytes.get(at + 1).is_some_and(|next| *next != b'\n') => at += 2,
            Some(b'\n') | None => return at.min(bytes.len()),
            Some(_) => at += 1,
        }
    }
}
