//! `outcross check FILE...`

use super::session::{Session, print};
use super::{CheckArguments, ColorChoice, Status};
use crate::check::{Kind, Model};
use crate::diagnostics::{Diagnostic, sarif};
use std::io::{self, Write};

pub(super) fn run(arguments: &CheckArguments, color: ColorChoice) -> io::Result<Status> {
    let files = &arguments.model.files;
    let sessions = files.iter().map(|path| Session::open(path, &arguments.model, false));
    if arguments.sarif {
        let sessions: Vec<Session> = sessions.collect();
        let status = status(&sessions);
        let log = sarif::log(sessions.iter().map(Session::findings), status.into());
        print(|out| super::evaluate::write_documents(out, &[log]))?;
        return Ok(status);
    }
    if arguments.model.json {
        let sessions: Vec<Session> = sessions.collect();
        let documents: Vec<_> = sessions.iter().map(Session::document).collect();
        print(|out| super::evaluate::write_documents(out, &documents))?;
        return Ok(status(&sessions));
    }
    let mut status = Status::Holds;
    for (path, session) in files.iter().zip(sessions) {
        session.show(color)?;
        match &session.model {
            Some(model) => print(|out| {
                writeln!(out, "{}: {}", path.display(), contents(model, &session.diagnostics))?;
                accepted(out, &session)
            })?,
            None => status = Status::Wrong,
        }
    }
    Ok(status)
}

fn status(sessions: &[Session]) -> Status {
    match sessions.iter().all(Session::sound) {
        true => Status::Holds,
        false => Status::Wrong,
    }
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
