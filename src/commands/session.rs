//! What `check` and `evaluate` share: reading models with the settings of the command line, and showing findings.

use super::{ColorChoice, ModelArguments, Status};
use crate::check::{self, Model, Overrides, Settings};
use crate::diagnostics::{Diagnostic, any_error, json, sarif, terminal};
use crate::language::parse_expression;
use crate::language::tree::Word;
use crate::source::{Disk, Files, Span};
use std::io::{self, IsTerminal, Write};
use std::path::Path;

/// A model read from a file, with everything to show about it.
pub(super) struct Session {
    /// The texts.
    pub files: Files,
    /// Where they were read.
    pub disk: Disk,
    /// The model, where nothing is wrong.
    pub model: Option<Model>,
    /// Everything found.
    pub diagnostics: Vec<Diagnostic>,
}

impl Session {
    /// Reads and checks a file. Values set on the command line are read as texts of their own, so that findings about
    /// them can show them.
    pub fn open(path: &Path, arguments: &ModelArguments, require_parameters: bool) -> Self {
        let disk = arguments.root.clone().unwrap_or_else(|| Disk::around(path));
        let mut files = Files::new();
        let mut settings = Settings {
            require_parameters,
            ..Settings::default()
        };
        let mut faults = Vec::new();
        for set in &arguments.set {
            match override_of(&mut files, set) {
                Ok(found) => settings.overrides.push(found),
                Err(found) => faults.extend(found),
            }
        }
        if !faults.is_empty() {
            return Self {
                files,
                disk,
                model: None,
                diagnostics: faults,
            };
        }
        let (model, diagnostics) = check::check(&mut files, &disk, path, &settings);
        Self {
            files,
            disk,
            model,
            diagnostics,
        }
    }

    /// Whether nothing is wrong with the model.
    pub fn sound(&self) -> bool {
        !any_error(&self.diagnostics)
    }

    /// The findings as a document.
    pub fn document(&self) -> json::Document {
        json::document(&self.files, &self.diagnostics)
    }

    /// The findings with all that a log of several models needs.
    pub fn findings(&self) -> sarif::Findings<'_> {
        sarif::Findings {
            files: &self.files,
            disk: &self.disk,
            diagnostics: &self.diagnostics,
        }
    }

    /// Shows the findings on standard error.
    pub fn show(&self, color: ColorChoice) -> io::Result<()> {
        let error = io::stderr();
        let color = match color {
            ColorChoice::Always => true,
            ColorChoice::Never => false,
            ColorChoice::Auto => {
                error.is_terminal() && std::env::var_os("NO_COLOR").is_none_or(|value| value.is_empty())
            }
        };
        let mut out = io::BufWriter::new(error.lock());
        unless_gone(terminal::write(&mut out, &self.files, &self.diagnostics, color).and_then(|()| out.flush()))
    }
}

/// `NAME=VALUE`
fn override_of(files: &mut Files, set: &str) -> Result<Overrides, Vec<Diagnostic>> {
    use crate::diagnostics::Code;
    let file = files.add("--set", set.to_string());
    let Some((name, value)) = set.split_once('=') else {
        let place = Span::new(file, 0, set.len());
        let message = "a parameter is set by `NAME=VALUE`";
        let help = "write the value behind a `=`, with its unit: `--set length=\"3 m\"`";
        return Err(vec![Diagnostic::new(Code::SyntaxUnexpected, place, message).help(help)]);
    };
    // The name is blanked out, so that places in the value are places in the text.
    let text = format!("{}{value}", " ".repeat(name.len() + 1));
    let value = parse_expression(file, &text)?;
    Ok(Overrides {
        name: Word {
            text: name.trim().into(),
            span: Span::new(file, 0, name.len()),
        },
        value,
    })
}

/// Writes to standard output. A reader that has gone away does not change what the run ends with.
pub(super) fn print(write: impl FnOnce(&mut dyn Write) -> io::Result<()>) -> io::Result<()> {
    let mut out = io::BufWriter::new(io::stdout().lock());
    let written = write(&mut out).and_then(|()| out.flush());
    // What is left in the buffer has no reader either.
    let _ = out.into_parts();
    unless_gone(written)
}

/// Says something on standard error, if anybody listens.
pub(super) fn complain(words: &str) -> io::Result<()> {
    unless_gone(writeln!(io::stderr(), "outcross: {words}"))
}

fn unless_gone(written: io::Result<()>) -> io::Result<()> {
    match written {
        Err(error) if error.kind() == io::ErrorKind::BrokenPipe => Ok(()),
        other => other,
    }
}

/// What to do when the output cannot be written.
pub(super) fn output_failed(error: io::Error) -> Status {
    // There is nobody left to tell if this fails as well.
    let _ = writeln!(io::stderr(), "outcross: cannot write the output: {error}");
    Status::NotReached
}
