//! Diagnostics for people at a terminal, drawn by ariadne. No other module knows that crate.

use super::excerpt::excerpt;
use super::{Diagnostic, Severity};
use crate::source::{FileId, Files, Span, after_mark, floor_boundary};
use ariadne::{Color, Config, IndexType, Label, Report, ReportKind, Source};
use std::collections::HashMap;
use std::fmt::Display;
use std::io::{self, Write};
use std::ops::Range;

type Place = (FileId, Range<usize>);

/// Of longer lines a piece is shown in place of the whole: a drawing wider than any screen shows nothing.
const LONGEST_LINE: usize = 500;

/// More findings than this are counted, not drawn.
const MOST_DRAWN: usize = 100;

/// Writes the findings one after another, in the order given; accepted warnings are left out.
///
/// # Errors
/// Whatever writing to `out` returns.
pub fn write(out: &mut dyn Write, files: &Files, diagnostics: &[Diagnostic], color: bool) -> io::Result<()> {
    let mut cache = Cache {
        files,
        sources: HashMap::new(),
    };
    let open = || diagnostics.iter().filter(|diagnostic| diagnostic.is_open());
    for diagnostic in open().take(MOST_DRAWN) {
        if fits(files, diagnostic) {
            report(files, diagnostic, color).write(&mut cache, &mut *out)?;
        } else {
            plain(out, files, diagnostic)?;
        }
        writeln!(out)?;
    }
    if let Some(more) = open().count().checked_sub(MOST_DRAWN).filter(|more| *more > 0) {
        writeln!(out, "... and {more} more; `check --json` lists them all")?;
    }
    Ok(())
}

/// Whether every place of the finding lies on lines short enough to draw.
fn fits(files: &Files, diagnostic: &Diagnostic) -> bool {
    let places = diagnostic.labels.iter().map(|label| label.place);
    std::iter::once(diagnostic.place).chain(places).all(|span| {
        let file = files.get(span.file);
        let (first, last) = (files.place(span).line, files.place(span.after()).line);
        [first, last].into_iter().all(|line| {
            let range = file.lines().line_range(&file.text, line);
            range.is_none_or(|range| range.len() <= LONGEST_LINE)
        })
    })
}

fn plain(out: &mut dyn Write, files: &Files, diagnostic: &Diagnostic) -> io::Result<()> {
    let code = diagnostic.code.name();
    let severity = match diagnostic.severity() {
        Severity::Error => "Error",
        Severity::Warning => "Warning",
    };
    writeln!(out, "[{code}] {severity}: {}", harmless(&diagnostic.message))?;
    let mut line = |span: Span, text: &str| {
        let place = files.place(span);
        let name = files.get(span.file).name();
        let heading = format!("{name}:{}:{} {}", place.line, place.column, harmless(text));
        writeln!(out, "    {}", heading.trim_end())?;
        for line in excerpt(files, span) {
            writeln!(out, "        {}", harmless(&line))?;
        }
        Ok::<(), io::Error>(())
    };
    line(diagnostic.place, &diagnostic.here)?;
    for label in &diagnostic.labels {
        line(label.place, &label.text)?;
    }
    match &diagnostic.help {
        Some(help) => writeln!(out, "    Help: {}", harmless(help)),
        None => Ok(()),
    }
}

fn report<'a>(files: &'a Files, diagnostic: &'a Diagnostic, color: bool) -> Report<'a, Place> {
    let (kind, tint) = match diagnostic.severity() {
        Severity::Error => (ReportKind::Error, Color::Red),
        Severity::Warning => (ReportKind::Warning, Color::Yellow),
    };
    let config = Config::default().with_index_type(IndexType::Byte).with_color(color);
    let here = if diagnostic.here.is_empty() {
        "here"
    } else {
        &diagnostic.here
    };
    let main = Label::new(place(files, diagnostic.place))
        .with_color(tint)
        .with_order(if stands_below(files, diagnostic) { 0 } else { -1 })
        .with_message(harmless(here));
    let others = diagnostic.labels.iter().map(|label| {
        let drawn = Label::new(place(files, label.place)).with_color(Color::Blue);
        (label.place, drawn.with_message(harmless(&label.text)))
    });
    let mut labels: Vec<(Span, Label<Place>)> = std::iter::once((diagnostic.place, main)).chain(others).collect();
    // Those in other files keep their order: the uses of a part stand behind one another.
    labels.sort_by_key(|(span, _)| {
        let here = span.file == diagnostic.place.file;
        (!here, here.then_some(*span))
    });
    let mut builder = Report::build(kind, place(files, diagnostic.place))
        .with_config(config)
        .with_code(diagnostic.code.name())
        .with_message(harmless(&diagnostic.message))
        .with_labels(labels.into_iter().map(|(_, label)| label));
    if let Some(help) = &diagnostic.help {
        builder = builder.with_help(harmless(help));
    }
    builder.finish()
}

/// Whether another place of the finding stands on a line above it. The finding is drawn before others only where it is
/// not: ariadne begins a new frame for a line above the last, under the heading of the first.
fn stands_below(files: &Files, diagnostic: &Diagnostic) -> bool {
    let line = |span: Span| files.place(span).line;
    let mut labels = diagnostic
        .labels
        .iter()
        .filter(|label| label.place.file == diagnostic.place.file);
    labels.any(|label| line(label.place) < line(diagnostic.place))
}

/// The span with both ends on character boundaries inside the file, since ariadne panics inside a character, and
/// counted from after a byte order mark, since ariadne would count it as a column.
fn place(files: &Files, span: Span) -> Place {
    let text = &files.get(span.file).text;
    let from_mark = |offset: u32| floor_boundary(text, offset as usize).saturating_sub(after_mark(text));
    let (start, end) = (from_mark(span.start), from_mark(span.end));
    (span.file, start..end.max(start))
}

/// The text with control characters replaced, byte for byte: a model may come from a stranger, and must not speak to
/// the terminal.
fn harmless(text: &str) -> String {
    let control = |character: char| character.is_control() && !matches!(character, '\n' | '\r' | '\t');
    if !text.contains(control) {
        return text.to_string();
    }
    let mut clean = String::with_capacity(text.len());
    for character in text.chars() {
        if control(character) {
            clean.extend(std::iter::repeat_n('?', character.len_utf8()));
        } else {
            clean.push(character);
        }
    }
    clean
}

struct Cache<'a> {
    files: &'a Files,
    sources: HashMap<FileId, Source<String>>,
}

impl ariadne::Cache<FileId> for Cache<'_> {
    type Storage = String;

    fn fetch(&mut self, id: &FileId) -> Result<&Source<String>, impl std::fmt::Debug> {
        let files = self.files;
        let source = self.sources.entry(*id);
        Ok::<_, io::Error>(source.or_insert_with(|| {
            let text = &files.get(*id).text;
            Source::from(harmless(text.get(after_mark(text)..).unwrap_or_default()))
        }))
    }

    fn display<'b>(&self, id: &'b FileId) -> Option<impl Display + 'b> {
        Some(self.files.get(*id).name())
    }
}
