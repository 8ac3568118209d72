//! Diagnostics for programs: the `outcross-diagnostics` document.

use super::Diagnostic;
use crate::source::{Files, Span};
use serde::Serialize;

/// The whole document.
#[derive(Serialize)]
pub struct Document {
    format: &'static str,
    version: u32,
    diagnostics: Vec<Entry>,
}

/// One finding. Lines and columns start at 1; columns count Unicode scalar values; ends are one past the last.
#[derive(Serialize)]
struct Entry {
    code: &'static str,
    severity: &'static str,
    message: String,
    #[serde(flatten)]
    place: Place,
    labels: Vec<LabelEntry>,
    #[serde(skip_serializing_if = "Option::is_none")]
    help: Option<String>,
    /// The reason for which a warning is accepted.
    #[serde(skip_serializing_if = "Option::is_none")]
    accepted: Option<String>,
}

#[derive(Serialize)]
struct Place {
    file: String,
    line: usize,
    column: usize,
    end_line: usize,
    end_column: usize,
}

#[derive(Serialize)]
struct LabelEntry {
    text: String,
    #[serde(flatten)]
    place: Place,
}

/// The document of a list of findings.
pub fn document(files: &Files, diagnostics: &[Diagnostic]) -> Document {
    Document {
        format: "outcross-diagnostics",
        version: 1,
        diagnostics: diagnostics.iter().map(|one| entry(files, one)).collect(),
    }
}

fn entry(files: &Files, diagnostic: &Diagnostic) -> Entry {
    let here = (!diagnostic.here.is_empty()).then(|| LabelEntry {
        text: diagnostic.here.clone(),
        place: place(files, diagnostic.place),
    });
    let others = diagnostic.labels.iter().map(|label| LabelEntry {
        text: label.text.clone(),
        place: place(files, label.place),
    });
    Entry {
        code: diagnostic.code.name(),
        severity: diagnostic.severity().word(),
        message: diagnostic.message.clone(),
        place: place(files, diagnostic.place),
        labels: here.into_iter().chain(others).collect(),
        help: diagnostic.help.clone(),
        accepted: diagnostic.accepted.clone(),
    }
}

fn place(files: &Files, span: Span) -> Place {
    let start = files.place(span);
    let end = files.place(span.after());
    Place {
        file: files.get(span.file).name(),
        line: start.line,
        column: start.column,
        end_line: end.line,
        end_column: end.column,
    }
}
