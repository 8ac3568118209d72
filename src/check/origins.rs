//! The other half of a finding: the `use` that led to its place, and where the values it is about were set.

use super::Settings;
use super::names::{ItemId, Names, Resolved};
use super::order::{each_expression, walk};
use super::parts::{InstanceId, Parts};
use crate::diagnostics::{Code, Diagnostic, Severity};
use crate::language::tree::{DeclarationKind, DefinitionKeyword, Expression, Path, Word};
use crate::source::{FileId, Span};
use std::collections::{HashMap, HashSet};

/// So many uses are shown of a longer chain of parts in parts.
const MOST_USES: usize = 5;

/// So many values that were set from outside are shown.
const MOST_SETTINGS: usize = 3;

/// So many declarations are looked through for those values.
const MOST_VISITED: usize = 200;

/// A finding, with the instance it was made in where it is about one instance of a file rather than about its text.
pub struct Found {
    /// The instance.
    pub instance: Option<InstanceId>,
    /// The finding.
    pub diagnostic: Diagnostic,
}

impl Found {
    /// A finding about the text of a file.
    pub fn of_text(diagnostic: Diagnostic) -> Self {
        Self {
            instance: None,
            diagnostic,
        }
    }

    /// A finding about an instance of a file.
    pub fn of_instance(instance: InstanceId, diagnostic: Diagnostic) -> Self {
        Self {
            instance: Some(instance),
            diagnostic,
        }
    }

    /// Whether it is an error.
    pub fn is_error(&self) -> bool {
        self.diagnostic.severity() == Severity::Error
    }
}

/// Shows with each finding how it was come to. A fault of a file that is used more than once is one finding, which shows
/// the first use.
pub fn explained(names: &Names<'_>, settings: &Settings, found: Vec<Found>) -> Vec<Diagnostic> {
    let parts = names.parts();
    let first = first_instances(parts);
    let mut found: Vec<(InstanceId, Diagnostic)> = found
        .into_iter()
        .map(|one| (instance_of(&one, parts, &first), one.diagnostic))
        .collect();
    let place = |one: &(InstanceId, Diagnostic)| (one.1.place, one.1.code);
    found.sort_by(|a, b| (place(a), &a.1.message, a.0.0).cmp(&(place(b), &b.1.message, b.0.0)));
    found.dedup_by(|a, b| a.1 == b.1);
    found
        .into_iter()
        .map(|(instance, mut finding)| {
            let settings = settings_of(&finding, instance, names, settings);
            for (place, text) in settings.into_iter().chain(uses(parts, instance)) {
                finding = finding.label(place, text);
            }
            finding
        })
        .collect()
}

/// The first instance of each file.
fn first_instances(parts: &Parts) -> HashMap<FileId, InstanceId> {
    let mut first = HashMap::new();
    for (id, instance) in (0u32..).map(InstanceId).zip(&parts.instances) {
        first.entry(instance.tree.file).or_insert(id);
    }
    first
}

/// The instance whose text a finding points to: that in which it was made or one of its users, since the values of a
/// part's parameters stand in the file that uses it; else the first of that text, such as that of a part whose kernel
/// is called. The place may also lie in a data file, which is no instance.
fn instance_of(found: &Found, parts: &Parts, first: &HashMap<FileId, InstanceId>) -> InstanceId {
    let file = found.diagnostic.place.file;
    let Some(made_in) = found.instance else {
        return first.get(&file).copied().unwrap_or(InstanceId(0));
    };
    let users = std::iter::successors(Some(made_in), |id| parts.get(*id).origin.map(|origin| origin.user));
    let mut of_file = users.filter(|id| parts.get(*id).tree.file == file);
    of_file.next().or_else(|| first.get(&file).copied()).unwrap_or(made_in)
}

/// The uses that lead to an instance, the innermost first.
fn uses(parts: &Parts, instance: InstanceId) -> Vec<(Span, String)> {
    let origins = std::iter::successors(parts.get(instance).origin, |origin| parts.get(origin.user).origin);
    let mut uses: Vec<(Span, String)> = origins
        .filter_map(
            |origin| match &parts.declaration(origin.user, origin.declaration).kind {
                DeclarationKind::Use { path, name, .. } => Some((path.span, format!("used here as `{}`", name.text))),
                _ => None,
            },
        )
        .collect();
    if let Some(left_out) = uses.len().checked_sub(MOST_USES).filter(|more| *more > 0) {
        uses.drain(MOST_USES - 1..MOST_USES - 1 + left_out);
        if let Some((_, text)) = uses.last_mut() {
            *text += &format!(", {left_out} more uses in between");
        }
    }
    uses
}

/// Whether a finding of this kind depends on the values of parameters, and not on their units or names alone.
fn is_about_values(code: Code) -> bool {
    code.severity() == Severity::Warning
        || matches!(
            code,
            Code::ValueNotFinite
                | Code::ValueRange
                | Code::KernelNotOne
                | Code::KernelInvalid
                | Code::KernelBound
                | Code::KernelJump
                | Code::KernelNegativeSpectrum
                | Code::KernelFluctuation
                | Code::ProcessMeanSquare
                | Code::ProcessZeroMean
                | Code::LimitCondition
        )
}

/// The places where a `use` or the command line set the parameters that a finding is about: those named at its place,
/// and those that the constants named there are made of.
fn settings_of(
    finding: &Diagnostic,
    instance: InstanceId,
    names: &Names<'_>,
    settings: &Settings,
) -> Vec<(Span, String)> {
    let mut shown = Vec::new();
    if !is_about_values(finding.code) {
        return shown;
    }
    let mut waiting = named_at(finding.place, instance, names);
    let mut seen: HashSet<ItemId> = HashSet::new();
    while let Some(item) = waiting.pop() {
        if !seen.insert(item) || seen.len() > MOST_VISITED || shown.len() >= MOST_SETTINGS {
            continue;
        }
        let at = names.item(item);
        let mut look = |value: &Expression, from: InstanceId| {
            walk(value, &mut |path| waiting.extend(resolved(names, path, from)));
        };
        match &names.declaration(item).kind {
            DeclarationKind::Parameter { name, value, .. } => {
                match (set_from_outside(names.parts(), settings, at.instance, name), value) {
                    (Some((value, _)), _) => shown.push((value.span, format!("`{}` is set here", name.text))),
                    (None, Some(default)) => look(default, at.instance),
                    (None, None) => {}
                }
            }
            DeclarationKind::Definition {
                keyword: DefinitionKeyword::Constant,
                value,
                ..
            } => look(value, at.instance),
            _ => {}
        }
    }
    shown.sort();
    shown
}

/// The items that are named at a place, the last first.
fn named_at(place: Span, instance: InstanceId, names: &Names<'_>) -> Vec<ItemId> {
    let mut items = Vec::new();
    let tree = &names.parts().get(instance).tree;
    let after = tree
        .declarations
        .partition_point(|declaration| declaration.span.start <= place.start);
    let declaration = after.checked_sub(1).and_then(|index| tree.declarations.get(index));
    if let Some(declaration) = declaration.filter(|_| tree.file == place.file) {
        each_expression(&declaration.kind, &mut |value| {
            walk(value, &mut |path| {
                let inside = |word: &Word| place.start <= word.span.start && word.span.end <= place.end;
                if path.words.iter().all(inside) {
                    items.extend(resolved(names, path, instance));
                }
            });
        });
    }
    items.reverse();
    items
}

fn resolved(names: &Names<'_>, path: &Path, from: InstanceId) -> Option<ItemId> {
    match names.resolve(path, from) {
        Ok(Resolved::Item(item)) => Some(item),
        _ => None,
    }
}

/// The value that a `use` or the command line gives a parameter of an instance, with the instance whose names it uses.
pub fn set_from_outside<'a>(
    parts: &'a Parts,
    settings: &'a Settings,
    instance: InstanceId,
    name: &Word,
) -> Option<(&'a Expression, InstanceId)> {
    let same = |word: &Word| word.text == name.text;
    match parts.arguments(instance) {
        Some((origin, _, arguments)) => {
            let argument = arguments.iter().find(|one| one.name.as_ref().is_some_and(same))?;
            Some((&argument.value, origin.user))
        }
        None => {
            let set = settings.overrides.iter().rev().find(|set| same(&set.name))?;
            Some((&set.value, InstanceId(0)))
        }
    }
}
