//! Declarations on which no result rests: forgotten in a margin, or left over.

use super::Finished;
use crate::check::names::{ItemId, declared};
use crate::check::order::made_from;
use crate::check::parts::InstanceId;
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{DeclarationKind, DefinitionKeyword, FunctionKeyword};
use std::collections::HashSet;

/// At most so many declarations are named that only an unused one needs.
const MOST_NAMED: usize = 4;

impl Finished<'_> {
    /// What no limit state and no expectation rests on. A file without either is a library, in which others choose.
    pub(super) fn unused(&self) -> Vec<Diagnostic> {
        let is_result = |item: &ItemId| {
            matches!(
                self.names.declaration(*item).kind,
                DeclarationKind::LimitState { .. } | DeclarationKind::Expect { .. }
            )
        };
        let results: Vec<ItemId> = self.names.items().filter(is_result).collect();
        let in_file = |item: &ItemId| self.names.item(*item).instance == InstanceId(0);
        if !results.iter().any(in_file) {
            return Vec::new();
        }
        let used = self.reached(results);
        let used_parts = self.used_parts(&used);
        let mut idle = vec![false; used.len()];
        let candidates = self.names.items().filter(in_file);
        for item in candidates.filter(|item| self.what(*item).is_some()) {
            idle[item.index()] = !self.is_used(item, &used, &used_parts);
        }
        let unused: Vec<ItemId> = self.names.items().filter(|item| idle[item.index()]).collect();
        // What only an unused declaration needs goes with it.
        let needs: Vec<Vec<ItemId>> = unused.iter().map(|item| self.needs(*item)).collect();
        let mut needed = vec![false; used.len()];
        for need in needs.iter().flatten() {
            needed[need.index()] = true;
        }
        let heads = unused.iter().zip(needs).filter(|(item, _)| !needed[item.index()]);
        heads
            .filter_map(|(item, mut needs)| {
                needs.retain(|need| idle[need.index()]);
                self.finding(*item, &needs)
            })
            .collect()
    }

    /// The items that some are made from, themselves included.
    fn reached(&self, from: Vec<ItemId>) -> Vec<bool> {
        let mut reached = vec![false; self.names.items().count()];
        let mut open = from;
        while let Some(item) = open.pop() {
            if !std::mem::replace(&mut reached[item.index()], true) {
                open.extend(made_from(self.names, item));
            }
        }
        reached
    }

    /// The parts in which something is used, or in a part of which.
    fn used_parts(&self, used: &[bool]) -> HashSet<InstanceId> {
        let mut parts = HashSet::new();
        for item in self.names.items().filter(|item| used[item.index()]) {
            let mut at = Some(self.names.item(item).instance);
            while let Some(id) = at.filter(|id| parts.insert(*id)) {
                at = self.names.parts().get(id).origin.map(|origin| origin.user);
            }
        }
        parts
    }

    fn is_used(&self, item: ItemId, used: &[bool], used_parts: &HashSet<InstanceId>) -> bool {
        let at = self.names.item(item);
        if !matches!(self.names.declaration(item).kind, DeclarationKind::Use { .. }) {
            return used[item.index()];
        }
        let made = self.names.parts().made.get(&(at.instance, at.declaration));
        made.is_none_or(|made| used_parts.contains(made))
    }

    /// What an unused declaration is made from; for a part, what sets its parameters.
    fn needs(&self, item: ItemId) -> Vec<ItemId> {
        let at = self.names.item(item);
        let mut needs = made_from(self.names, item);
        if let DeclarationKind::Use { arguments, .. } = &self.names.declaration(item).kind {
            for argument in arguments {
                crate::check::order::walk(&argument.value, &mut |path| {
                    needs.extend(self.resolved(path, at.instance));
                });
            }
        }
        needs
    }

    /// What a declaration is called, if it is one that has to be used.
    fn what(&self, item: ItemId) -> Option<&'static str> {
        match &self.names.declaration(item).kind {
            DeclarationKind::Use { .. } => Some("part"),
            DeclarationKind::Parameter { .. } => Some("parameter"),
            DeclarationKind::Definition { keyword, .. } => Some(match keyword {
                DefinitionKeyword::Constant => "constant",
                DefinitionKeyword::Quantity => "quantity",
                DefinitionKeyword::Variable => "variable",
                DefinitionKeyword::Process => "process",
                DefinitionKeyword::Margin => "margin",
            }),
            DeclarationKind::Function { keyword, .. } => Some(match keyword {
                FunctionKeyword::Profile => "profile",
                FunctionKeyword::Kernel => "kernel",
                FunctionKeyword::Spectrum => "spectrum",
            }),
            DeclarationKind::Climate { .. } => Some("climate"),
            _ => None,
        }
    }

    fn finding(&self, item: ItemId, with_it: &[ItemId]) -> Option<Diagnostic> {
        let word = declared(self.names.declaration(item))?;
        let what = self.what(item)?;
        let message = format!("no result rests on the {what} `{}`", word.text);
        let help = match what {
            "margin" => "judge it in a limit state, state an `expect` about it, or remove it",
            "part" => "name what it offers where it belongs, or remove the `use`",
            _ => "name it where it belongs, such as in a margin, or remove it",
        };
        let mut finding = Diagnostic::new(Code::NameUnused, word.span, message)
            .here("whatever it says, no limit state and no expectation changes")
            .help(help);
        for other in with_it.iter().take(MOST_NAMED) {
            if let Some(other) = declared(self.names.declaration(*other)) {
                finding = finding.label(other.span, format!("only `{}` needs this", word.text));
            }
        }
        Some(finding)
    }
}
