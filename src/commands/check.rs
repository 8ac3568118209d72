//! `outcross check FILE...`

use super::session::{Session, print};
use super::{CheckArguments, ColorChoice, Status};
use crate::check::{Kind, Model};
use crate::diagnostics::{Diagnostic, json};
use std::io::{self, Write};

pub(super) fn run(arguments: &CheckArguments, color: ColorChoice) -> io::Result<Status> {
    let mut status = Status::Holds;
    let mut documents = Vec::new();
    for path in &arguments.model.files {
        let session = Session::open(path, &arguments.model, false);
        if !session.sound() {
            status = Status::Wrong;
        }
        if arguments.model.json {
            documents.push(serde_json::to_value(json::document(
                &session.files,
                &session.diagnostics,
            ))?);
            continue;
        }
        session.show(color)?;
        print(|out| match &session.model {
            Some(model) => {
                writeln!(out, "{}: {}", path.display(), contents(model, &session.diagnostics))?;
                accepted(out, &session)
            }
            None => Ok(()),
        })?;
    }
    if arguments.model.json {
        print(|out| super::evaluate::write_documents(out, &documents))?;
    }
    Ok(status)
}

/// A line for each warning that the file accepts.
fn accepted(out: &mut dyn Write, session: &Session) -> io::Result<()> {
    for one in &session.diagnostics {
        if let Some(reason) = &one.accepted {
            let (place, file) = (session.files.place(one.place), session.files.get(one.place.file).name());
            let (code, line, column) = (one.code.name(), place.line, place.column);
            writeln!(out, "  accepted: {code} at {file}:{line}:{column}, because {reason}")?;
        }
    }
    Ok(())
}

/// `3 processes, 1 margin, 1 limit state; nothing to object to`
fn contents(model: &Model, diagnostics: &[Diagnostic]) -> String {
    let count = |number: usize, one: &str, many: &str| match number {
        1 => format!("1 {one}"),
        _ => format!("{number} {many}"),
    };
    let of = |kind: Kind| model.varying.iter().filter(|named| named.kind == kind).count();
    let open = diagnostics.iter().filter(|one| one.is_open()).count();
    let accepted = diagnostics.len() - open;
    let findings = match (open, accepted) {
        (0, 0) => "nothing to object to".to_string(),
        (open, 0) => count(open, "warning", "warnings"),
        (0, accepted) => format!("{} accepted", count(accepted, "warning", "warnings")),
        (open, accepted) => format!("{}, {accepted} more accepted", count(open, "warning", "warnings")),
    };
    format!(
        "{}, {}, {}; {findings}",
        count(of(Kind::Process), "process", "processes"),
        count(of(Kind::Margin), "margin", "margins"),
        count(model.limit_states.len(), "limit state", "limit states"),
    )
}
