//! `outcross check FILE...`

use super::session::{Session, print};
use super::{CheckArguments, ColorChoice, Status};
use crate::check::{Kind, Model};
use crate::diagnostics::json;
use std::io;

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
            Some(model) => writeln!(
                out,
                "{}: {}",
                path.display(),
                contents(model, session.diagnostics.len())
            ),
            None => Ok(()),
        })?;
    }
    if arguments.model.json {
        print(|out| super::evaluate::write_documents(out, &documents))?;
    }
    Ok(status)
}

/// `3 processes, 1 margin, 1 limit state; nothing found`
fn contents(model: &Model, findings: usize) -> String {
    let count = |number: usize, one: &str, many: &str| match number {
        1 => format!("1 {one}"),
        _ => format!("{number} {many}"),
    };
    let of = |kind: Kind| model.varying.iter().filter(|named| named.kind == kind).count();
    let findings = match findings {
        0 => "nothing to object to".to_string(),
        findings => count(findings, "warning", "warnings"),
    };
    format!(
        "{}, {}, {}; {findings}",
        count(of(Kind::Process), "process", "processes"),
        count(of(Kind::Margin), "margin", "margins"),
        count(model.limit_states.len(), "limit state", "limit states"),
    )
}
