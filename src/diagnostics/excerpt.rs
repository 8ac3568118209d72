//! A piece of a line that is too long to be drawn, with a mark below the place that matters.

use crate::source::{Files, Span, after_mark};
use unicode_width::UnicodeWidthChar;

/// Characters shown before the place.
const BEFORE: usize = 30;

/// Characters shown from the place on.
const FROM: usize = 50;

/// The line of a span around its start, and a line of marks that fits below it.
pub fn excerpt(files: &Files, span: Span) -> [String; 2] {
    let file = files.get(span.file);
    let range = file.lines().line_range(&file.text, files.place(span).line);
    let range = range.unwrap_or(file.text.len()..file.text.len());
    let start = (span.start as usize).clamp(range.start, range.end);
    let end = (span.end as usize).clamp(start, range.end);
    let head = range
        .start
        .max(if range.start == 0 { after_mark(&file.text) } else { 0 });
    let before = file.text.get(head..start).unwrap_or_default();
    let marked = file.text.get(start..end).unwrap_or_default();
    let from = file.text.get(start..range.end).unwrap_or_default();

    let left_out = before.chars().count().saturating_sub(BEFORE);
    let mut line = String::from(if left_out > 0 { "... " } else { "" });
    line.extend(before.chars().skip(left_out).map(visible));
    let indent = line.chars().filter_map(UnicodeWidthChar::width).sum();
    line.extend(from.chars().take(FROM).map(visible));
    if from.chars().nth(FROM).is_some() {
        line.truncate(line.trim_end().len());
        line += " ...";
    }
    let width = marked
        .chars()
        .take(FROM)
        .map(visible)
        .filter_map(UnicodeWidthChar::width)
        .sum();
    let marks = " ".repeat(indent) + &"^".repeat(std::cmp::max(width, 1));
    [line.trim_end().to_owned(), marks]
}

/// Tabs as blanks, so that the marks stand where they should.
fn visible(character: char) -> char {
    if character == '\t' { ' ' } else { character }
}
