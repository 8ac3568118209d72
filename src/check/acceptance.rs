//! Accepted warnings: `accept CODE [at NAME] because "..."`.
//!
//! Without a name an acceptance speaks of its own file, whichever model uses that file: a library accepts its own
//! warnings. With a name it speaks of one declaration, which may stand in a part: so a file accepts a warning in a library
//! that it uses, and no other of that library.

use super::names::{ItemId, Names, Resolved, Unknown, choice, near};
use super::parts::InstanceId;
use crate::diagnostics::{Code, Diagnostic, Severity};
use crate::language::tree::{DeclarationKind, Path, Text, Word};
use crate::source::{FileId, Span};
use std::collections::HashSet;

/// The acceptances of a model.
#[derive(Clone, Debug, Default)]
pub struct Acceptances {
    all: Vec<Acceptance>,
}

/// One of them.
#[derive(Clone, Debug)]
struct Acceptance {
    code: Code,
    scope: Scope,
    reason: String,
    /// Where the code is named.
    place: Span,
    /// Whether it stands in the file that was named, not in one that it uses.
    of_main_file: bool,
    used: bool,
}

/// What an acceptance speaks of.
#[derive(Clone, Copy, Debug)]
enum Scope {
    File(FileId),
    Declaration(Span),
}

impl Scope {
    fn covers(self, place: Span) -> bool {
        match self {
            Self::File(file) => place.file == file,
            Self::Declaration(span) => place.file == span.file && span.start <= place.start && place.end <= span.end,
        }
    }
}

impl Acceptances {
    /// Those of a file and its parts, each text once. What is wrong with them is reported.
    pub(super) fn read(names: &Names<'_>, diagnostics: &mut Vec<Diagnostic>) -> Self {
        let mut seen = HashSet::new();
        let mut all = Vec::new();
        for (id, instance) in (0..).map(InstanceId).zip(&names.parts().instances) {
            if !seen.insert(instance.tree.file) {
                continue;
            }
            for declaration in &instance.tree.declarations {
                let DeclarationKind::Accept { code, at, reason } = &declaration.kind else {
                    continue;
                };
                let known = warning(code, diagnostics);
                let scope = match at {
                    None => Some(Scope::File(instance.tree.file)),
                    Some(path) => declaration_of(names, path, id, diagnostics)
                        .map(|item| Scope::Declaration(names.declaration(item).span)),
                };
                let reason = said(code, reason, diagnostics);
                if let (Some(code_found), Some(scope), Some(reason)) = (known, scope, reason) {
                    all.push(Acceptance {
                        code: code_found,
                        scope,
                        reason,
                        place: code.span,
                        of_main_file: id == InstanceId(0),
                        used: false,
                    });
                }
            }
        }
        Self { all }
    }

    /// Marks the warnings that are accepted, each with the reason given first.
    pub fn apply(&mut self, diagnostics: &mut [Diagnostic]) {
        for diagnostic in diagnostics.iter_mut().filter(|one| one.severity() == Severity::Warning) {
            for acceptance in &mut self.all {
                if acceptance.code == diagnostic.code && acceptance.scope.covers(diagnostic.place) {
                    acceptance.used = true;
                    diagnostic.accepted.get_or_insert_with(|| acceptance.reason.clone());
                }
            }
        }
    }

    /// Those of the main file that accepted nothing, among the codes that have been looked for. In a library it depends
    /// on its parameters whether there is something to accept.
    pub fn idle(&self, looked_for: impl Fn(Code) -> bool) -> Vec<Diagnostic> {
        let idle = self
            .all
            .iter()
            .filter(|one| one.of_main_file && !one.used && looked_for(one.code));
        idle.map(|one| {
            let where_to = match one.scope {
                Scope::File(_) => "this file has",
                Scope::Declaration(_) => "this declaration has",
            };
            let message = format!("{where_to} no warning `{}` to accept", one.code.name());
            Diagnostic::new(Code::AcceptUnused, one.place, message)
                .here("accepts nothing, and would hide the warning if it came back")
                .help("remove this line")
        })
        .collect()
    }
}

/// The code of a warning.
fn warning(code: &Word, diagnostics: &mut Vec<Diagnostic>) -> Option<Code> {
    match Code::find(&code.text) {
        Some(found) if found.severity() == Severity::Warning => Some(found),
        Some(_) => {
            let message = format!("`{}` is an error, and only warnings can be accepted", code.text);
            diagnostics.push(
                Diagnostic::new(Code::AcceptError, code.span, message)
                    .here("nothing is computed from a model with this fault")
                    .help("remove this line, and mend what the error says"),
            );
            None
        }
        None => {
            let warnings = || Code::ALL.iter().filter(|code| code.severity() == Severity::Warning);
            let message = format!("there is no warning called `{}`", code.text);
            let help = match choice(&near(&code.text, warnings().map(|code| code.name()))) {
                Some(near) => format!("did you mean {near}?"),
                None => "write the code as the warning shows it in its square brackets".to_string(),
            };
            diagnostics.push(Diagnostic::new(Code::AcceptUnknown, code.span, message).help(help));
            None
        }
    }
}

fn said(code: &Word, reason: &Text, diagnostics: &mut Vec<Diagnostic>) -> Option<String> {
    let words = reason.value.trim();
    if words.is_empty() {
        let message = format!("`{}` is accepted without a reason", code.text);
        diagnostics.push(
            Diagnostic::new(Code::AcceptReason, reason.span, message)
                .help("write why it is right here: the reason stands in every report, for those who check the model"),
        );
        return None;
    }
    Some(words.to_string())
}

fn declaration_of(
    names: &Names<'_>,
    path: &Path,
    from: InstanceId,
    diagnostics: &mut Vec<Diagnostic>,
) -> Option<ItemId> {
    let (word, close) = match names.resolve(path, from) {
        Ok(Resolved::Item(item)) => return Some(item),
        Ok(Resolved::Fault) => return None,
        Err(Unknown::Name { word, instance }) => (word, names.near(&word.text, instance)),
        Err(Unknown::Inside { word }) => (word, Vec::new()),
    };
    let message = format!("nothing is called `{}` here", word.text);
    let help = match choice(&close) {
        Some(close) => format!("did you mean {close}?"),
        None => "name the declaration that the warning points at, such as `site.pull` in the part `site`".to_string(),
    };
    diagnostics.push(Diagnostic::new(Code::NameUnknown, word.span, message).help(help));
    None
}
