//! `outcross evaluate FILE...`

use super::session::{Session, complain, print};
use super::{ColorChoice, EvaluateArguments, Status};
use crate::check::names_near;
use crate::diagnostics::sort;
use crate::report::text;
use crate::results::{self, Results};
use serde::Serialize;
use std::io::{self, Write};

pub(super) fn run(arguments: &EvaluateArguments, color: ColorChoice) -> io::Result<Status> {
    let files = &arguments.model.files;
    let mut sessions: Vec<Session> = files
        .iter()
        .map(|path| Session::open(path, &arguments.model, true))
        .collect();
    if !sessions.iter().all(Session::sound) {
        for session in &sessions {
            session.show(color)?;
        }
        if arguments.model.json {
            let documents: Vec<_> = sessions.iter().map(Session::document).collect();
            print(|out| write_documents(out, &documents))?;
        }
        return Ok(Status::Wrong);
    }
    if let Some(words) = unknown_limit_state(&sessions, &arguments.only) {
        complain(&words)?;
        return Ok(Status::Wrong);
    }
    let mut documents: Vec<Results> = Vec::new();
    for session in &mut sessions {
        let Some(model) = &session.model else { continue };
        let results = results::evaluate(&session.files, model, &session.diagnostics, &arguments.only);
        session.diagnostics.extend(results.findings.iter().cloned());
        sort(&mut session.diagnostics);
        session.show(color)?;
        documents.push(results);
    }
    if arguments.model.json {
        print(|out| write_documents(out, &documents))?;
    } else {
        print(|out| {
            for (session, results) in sessions.iter().zip(&documents) {
                if let Some(model) = &session.model {
                    text::write(out, model, results)?;
                }
            }
            Ok(())
        })?;
    }
    let out_of_reach: Vec<String> = documents
        .iter()
        .flat_map(|results| results.out_of_reach(arguments.tolerance))
        .collect();
    for words in &out_of_reach {
        complain(&format!("not reached to its tolerance: {words}"))?;
    }
    Ok(status(&documents, out_of_reach.is_empty()))
}

fn status(documents: &[Results], reached: bool) -> Status {
    if !reached {
        Status::NotReached
    } else if documents.iter().all(Results::all_hold) {
        Status::Holds
    } else {
        Status::DoesNotHold
    }
}

/// A name of `--only` that no file has.
fn unknown_limit_state(sessions: &[Session], only: &[String]) -> Option<String> {
    let known: Vec<&str> = sessions
        .iter()
        .filter_map(|session| session.model.as_ref())
        .flat_map(|model| &model.limit_states)
        .map(|limit_state| limit_state.name.as_str())
        .collect();
    let unknown = only.iter().find(|name| !known.contains(&name.as_str()))?;
    let near = names_near(unknown, known.iter().copied());
    Some(match (near, known.as_slice()) {
        (Some(near), _) => format!("there is no limit state called `{unknown}`; did you mean {near}?"),
        (None, []) => "there are no limit states".to_string(),
        (None, known) => format!(
            "there is no limit state called `{unknown}`; there are `{}`",
            known.join("`, `")
        ),
    })
}

/// One document, or an array of several.
pub(super) fn write_documents<T: Serialize>(out: &mut dyn Write, documents: &[T]) -> io::Result<()> {
    match documents {
        [one] => serde_json::to_writer_pretty(&mut *out, one)?,
        several => serde_json::to_writer_pretty(&mut *out, several)?,
    }
    writeln!(out)
}
