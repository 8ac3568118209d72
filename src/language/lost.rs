//! The names that a stretch at fault was meant to declare, so that their uses are not called unknown.

use super::scan::{TokenKind, leads_on, tokens};
use super::tree::Word;
use crate::source::{FileId, Span};
use std::ops::Range;

/// The word behind the first word of each line, which may be a misspelt keyword; behind `limit state` and `use "..."
/// as`, the word after.
pub(super) fn names(file: FileId, text: &str, range: Range<usize>) -> Vec<Word> {
    let mut names = Vec::new();
    let mut tokens = tokens(text, range).filter(|token| token.kind != TokenKind::Comment);
    let mut fresh_line = true;
    while let Some(token) = tokens.next() {
        let first = std::mem::replace(&mut fresh_line, token.kind == TokenKind::Newline);
        if !first || token.kind != TokenKind::Word || !leads_on(text, token.range.end) {
            continue;
        }
        for token in tokens.by_ref() {
            match token.kind {
                TokenKind::Text => {}
                TokenKind::Word => {
                    let word = text.get(token.range.clone()).unwrap_or("");
                    if !matches!(word, "state" | "as") {
                        names.push(Word {
                            text: word.into(),
                            span: Span::new(file, token.range.start, token.range.end),
                        });
                        break;
                    }
                }
                kind => {
                    fresh_line = kind == TokenKind::Newline;
                    break;
                }
            }
        }
    }
    names
}
