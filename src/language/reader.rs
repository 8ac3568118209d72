//! A text on its way to a tree, with what was found wrong with it.

use super::messages::Fault;
use super::parser::Rule;
use crate::diagnostics::{Code, Diagnostic};
use crate::source::{FileId, Span};
use pest::error::Error;
use std::ops::Range;

/// More faults than this are counted, not described.
const MOST_DESCRIBED: usize = 200;

/// A text, its comments, and the findings so far.
pub(super) struct Reader<'a> {
    pub file: FileId,
    pub text: &'a str,
    pub diagnostics: Vec<Diagnostic>,
    comments: &'a [Range<usize>],
    /// Where the first stretch that was not described starts, and how many there are.
    skipped: Option<(usize, usize)>,
}

impl<'a> Reader<'a> {
    /// A text of which nothing is known but its comments.
    pub(super) fn new(file: FileId, text: &'a str, comments: &'a [Range<usize>]) -> Self {
        Self {
            file,
            text,
            diagnostics: Vec::new(),
            comments,
            skipped: None,
        }
    }

    /// A range of the text as a span.
    pub(super) fn span(&self, range: Range<usize>) -> Span {
        Span::new(self.file, range.start, range.end)
    }

    /// The text of a range.
    pub(super) fn slice(&self, range: Range<usize>) -> &'a str {
        self.text.get(range).unwrap_or("")
    }

    /// Where the last token of `start..before` ends; `start` where there is none.
    pub(super) fn last_token_end(&self, start: usize, before: usize) -> usize {
        let mut end = before;
        loop {
            end = start + self.slice(start..end).trim_end_matches([' ', '\t', '\r', '\n']).len();
            let index = self.comments.partition_point(|comment| comment.start < end);
            match index.checked_sub(1).and_then(|index| self.comments.get(index)) {
                Some(comment) if comment.end >= end && comment.start >= start => end = comment.start,
                _ => return end,
            }
        }
    }

    /// Whether no more faults are described.
    pub(super) fn is_full(&self) -> bool {
        self.diagnostics.len() >= MOST_DESCRIBED
    }

    /// Counts a stretch that starts at `at` and is not described.
    pub(super) fn skip(&mut self, at: usize) {
        let (first, count) = self.skipped.unwrap_or((at, 0));
        self.skipped = Some((first, count + 1));
    }

    /// Adds a finding about the stretch at `at`, or counts it.
    pub(super) fn report(&mut self, at: usize, diagnostic: impl FnOnce() -> Diagnostic) {
        if self.is_full() {
            self.skip(at);
        } else {
            self.diagnostics.push(diagnostic());
        }
    }

    /// Reports an error in the part `range`, and returns where the text that it speaks for ends.
    pub(super) fn describe(&mut self, range: Range<usize>, error: &Error<Rule>) -> usize {
        if self.is_full() {
            self.skip(range.start);
            return range.end;
        }
        let fault = Fault::new(self, range, error);
        let spoken_for = if fault.missing { fault.last_end } else { fault.at };
        let diagnostic = fault.describe();
        self.diagnostics.push(diagnostic);
        spoken_for
    }

    /// The findings in the order of the text; the last says how much was not described.
    pub(super) fn finish(mut self) -> Vec<Diagnostic> {
        self.diagnostics.sort_by_key(|one| one.place);
        if let Some((first, count)) = self.skipped {
            let stretches = if count == 1 { "stretch" } else { "stretches" };
            let message = format!("{count} more {stretches} of this file could not be read");
            let place = self.span(first..first);
            let diagnostic = Diagnostic::new(Code::SyntaxUnexpected, place, message).here("from here on");
            self.diagnostics.push(diagnostic.help("mend the faults above first"));
        }
        self.diagnostics
    }
}
