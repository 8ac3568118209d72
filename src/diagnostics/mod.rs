//! What the program says about a model: plain data first, shown by one module for each kind of reader.

mod catalogue;
mod excerpt;
pub mod json;
pub mod sarif;
pub mod terminal;

pub use catalogue::{Code, Severity};

use crate::source::Span;

/// One finding: a code, a sentence, a place, and the other half of the story.
#[derive(Clone, Debug, PartialEq)]
pub struct Diagnostic {
    /// What kind of finding it is.
    pub code: Code,
    /// One sentence with the user's own names and units, without a full stop.
    pub message: String,
    /// Where it is.
    pub place: Span,
    /// What stands at the place, in a few words; empty where the message says it all.
    pub here: String,
    /// Other places that belong to it, each with a few words.
    pub labels: Vec<Label>,
    /// The mend, starting with a verb.
    pub help: Option<String>,
    /// Why the file accepts it, where it is a warning that an `accept` speaks of.
    pub accepted: Option<String>,
}

/// A second place of a diagnostic.
#[derive(Clone, Debug, PartialEq)]
pub struct Label {
    /// Where.
    pub place: Span,
    /// What is there.
    pub text: String,
}

impl Diagnostic {
    /// A finding with a message at a place.
    pub fn new(code: Code, place: Span, message: impl Into<String>) -> Self {
        Self {
            code,
            message: message.into(),
            place,
            here: String::new(),
            labels: Vec::new(),
            help: None,
            accepted: None,
        }
    }

    /// Says what stands at the place itself.
    #[must_use]
    pub fn here(mut self, text: impl Into<String>) -> Self {
        self.here = text.into();
        self
    }

    /// Adds another place.
    #[must_use]
    pub fn label(mut self, place: Span, text: impl Into<String>) -> Self {
        self.labels.push(Label {
            place,
            text: text.into(),
        });
        self
    }

    /// Adds the mend.
    #[must_use]
    pub fn help(mut self, text: impl Into<String>) -> Self {
        self.help = Some(text.into());
        self
    }

    /// Error or warning.
    pub fn severity(&self) -> Severity {
        self.code.severity()
    }

    /// Whether nobody has accepted it.
    pub fn is_open(&self) -> bool {
        self.accepted.is_none()
    }
}

/// Sorts by place and drops exact repeats.
pub fn sort(diagnostics: &mut Vec<Diagnostic>) {
    diagnostics.sort_by(|a, b| (a.place, a.code, &a.message).cmp(&(b.place, b.code, &b.message)));
    diagnostics.dedup();
}

/// Whether any of them is an error.
pub fn any_error(diagnostics: &[Diagnostic]) -> bool {
    diagnostics.iter().any(|one| one.severity() == Severity::Error)
}
