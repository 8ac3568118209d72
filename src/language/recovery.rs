//! A stretch that the grammar refused: what of it can be kept, and where its faults are.

use super::build::{Builder, last_end};
use super::messages::near;
use super::parser::{Grammar, Rule};
use super::reader::Reader;
use super::scan::{TokenKind, leads_on, tokens};
use super::tree::Declaration;
use super::words::{DECLARATION_KEYWORDS, LIMIT_LINE_KEYWORDS};
use crate::diagnostics::{Code, Diagnostic};
use pest::Parser;
use pest::error::{Error, InputLocation};
use std::ops::Range;

/// Where pest stopped, from the start of what it read.
pub(super) fn position(error: &Error<Rule>) -> usize {
    match error.location {
        InputLocation::Pos(at) | InputLocation::Span((at, _)) => at,
    }
}

/// Reports what is wrong with the stretch `range` and returns the declarations of it that can be kept.
pub(super) fn recover(reader: &mut Reader<'_>, range: Range<usize>) -> Vec<Declaration> {
    if reader.is_full() {
        reader.skip(range.start);
        return Vec::new();
    }
    let text = reader.text;
    let (kept, start) = keep(reader, &range);
    let Err(error) = Grammar::parse(Rule::stretch, reader.slice(start..range.end)) else {
        return kept;
    };
    let at = start + position(&error);
    let done = match limit_block(text, start..range.end).filter(|block| block.open < at) {
        Some(block) => recover_block(reader, start..range.end, &block, &error),
        None => reader.describe(start..range.end, &error),
    };
    let mut lines = declaration_lines(text, start..range.end, done).peekable();
    while let Some(line) = lines.next() {
        if reader.is_full() {
            reader.skip(line);
            break;
        }
        let piece = line..lines.peek().copied().unwrap_or(range.end);
        if let Err(error) = Grammar::parse(Rule::stretch, reader.slice(piece.clone())) {
            reader.describe(piece, &error);
        }
    }
    kept
}

/// The declarations that a stretch begins with, and from where on it is to be described: from the last of them, so
/// that the message can say how that might have gone on. That last one is kept if what follows is on a line of its own.
fn keep(reader: &mut Reader<'_>, range: &Range<usize>) -> (Vec<Declaration>, usize) {
    let text = reader.text;
    let Ok(pairs) = Grammar::parse(Rule::leading, text.get(range.clone()).unwrap_or("")) else {
        return (Vec::new(), range.start);
    };
    let mut pairs: Vec<_> = pairs.filter(|pair| pair.as_rule() == Rule::declaration).collect();
    let Some(last) = pairs.last() else {
        return (Vec::new(), range.start);
    };
    let start = range.start + last.as_span().start();
    let end = range.start + last_end(last.clone());
    let next = tokens(text, end..range.end).find(|token| token.kind != TokenKind::Comment);
    if next.is_some_and(|token| token.kind != TokenKind::Newline) {
        pairs.pop();
    }
    let mut builder = Builder::new(reader.file, range.start, &mut reader.diagnostics);
    (builder.declarations(pairs.into_iter()), start)
}

/// The lines of a stretch beyond `done` that were meant to begin a declaration: with a misspelt keyword, or outside
/// brackets with a keyword that nothing fitting follows.
fn declaration_lines(text: &str, range: Range<usize>, done: usize) -> impl Iterator<Item = usize> + '_ {
    let (mut fresh_line, mut depth) = (false, 0_usize);
    tokens(text, range).filter_map(move |token| {
        let first = std::mem::replace(&mut fresh_line, token.kind == TokenKind::Newline);
        match token.kind {
            TokenKind::Mark(b'(' | b'{') => depth += 1,
            TokenKind::Mark(b')' | b'}') => depth = depth.saturating_sub(1),
            TokenKind::Word if first && token.range.start > done => {
                let word = text.get(token.range.clone())?;
                let misspelt = leads_on(text, token.range.end) && near(word, DECLARATION_KEYWORDS).is_some();
                let bare = depth == 0 && DECLARATION_KEYWORDS.contains(&word);
                return (misspelt || bare).then_some(token.range.start);
            }
            _ => {}
        }
        None
    })
}

/// The braces of a limit state.
struct Block {
    open: usize,
    close: Option<usize>,
}

/// The braces of the limit state that `range` begins with.
fn limit_block(text: &str, range: Range<usize>) -> Option<Block> {
    let mut marks = tokens(text, range).filter(|token| !matches!(token.kind, TokenKind::Newline | TokenKind::Comment));
    for word in [Some("limit"), Some("state"), None] {
        let token = marks.next()?;
        let fits = token.kind == TokenKind::Word && word.is_none_or(|word| text.get(token.range.clone()) == Some(word));
        if !fits {
            return None;
        }
    }
    let open = marks.next().filter(|token| token.kind == TokenKind::Mark(b'{'))?;
    let close = marks.find(|token| token.kind == TokenKind::Mark(b'}'));
    Some(Block {
        open: open.range.start,
        close: close.map(|token| token.range.start),
    })
}

/// Reports every faulty line of a block, and returns where it ends.
fn recover_block(reader: &mut Reader<'_>, range: Range<usize>, block: &Block, whole: &Error<Rule>) -> usize {
    let text = reader.text;
    let end = block.close.unwrap_or(range.end);
    let mut fresh_line = true;
    let lines = tokens(text, block.open + 1..end).filter_map(|token| {
        let first = std::mem::replace(&mut fresh_line, token.kind == TokenKind::Newline);
        let begins = first && token.kind == TokenKind::Word && begins_line(text, &token.range);
        begins.then_some(token.range.start)
    });
    let mut starts = std::iter::once(block.open + 1).chain(lines).peekable();
    let mut faults = 0;
    while let Some(start) = starts.next() {
        if reader.is_full() {
            reader.skip(start);
            return end;
        }
        let line = start..starts.peek().copied().unwrap_or(end);
        if let Err(error) = Grammar::parse(Rule::lines, reader.slice(line.clone())) {
            faults += 1;
            reader.describe(line, &error);
        }
    }
    if block.close.is_none() {
        let place = reader.last_token_end(range.start, range.end);
        let (place, open) = (reader.span(place..place), reader.span(block.open..block.open + 1));
        reader.report(end, || {
            Diagnostic::new(Code::SyntaxUnexpected, place, "this limit state is not closed")
                .here("`}` is missing here")
                .label(open, "opened here")
        });
    } else if faults == 0 {
        reader.describe(range, whole);
    }
    end
}

fn begins_line(text: &str, word: &Range<usize>) -> bool {
    let keywords = LIMIT_LINE_KEYWORDS.map(|(first, _)| first);
    let first = text.get(word.clone()).unwrap_or("");
    leads_on(text, word.end) && (keywords.contains(&first) || near(first, keywords).is_some())
}
