//! The arguments of a call, taken apart in one place so that every message about them is the same.

use super::Lowering;
use crate::check::names::{choice, near};
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{Call, Expression, Word};
use crate::source::Span;

/// The arguments of a call that has passed [`Lowering::arguments`].
pub(super) struct Arguments<'t> {
    function: String,
    brackets: Span,
    /// The arguments without a name, as many as were asked for.
    pub subjects: Vec<&'t Expression>,
    named: Vec<(&'t Word, &'t Expression)>,
}

impl<'t> Arguments<'t> {
    /// The argument of a name, where it is given.
    pub fn get(&self, name: &str) -> Option<&'t Expression> {
        let found = self.named.iter().find(|(word, _)| &*word.text == name);
        found.map(|(_, value)| *value)
    }

    /// The word that names an argument, where it is given.
    pub fn word(&self, name: &str) -> Option<&'t Word> {
        let found = self.named.iter().find(|(word, _)| &*word.text == name);
        found.map(|(word, _)| *word)
    }
}

impl Lowering<'_, '_, '_> {
    /// Takes a call apart: `subjects` arguments without a name come first, all others have names out of `known`.
    /// Whatever is wrong is reported, all of it; `None` then.
    pub(super) fn arguments<'t>(&mut self, call: &'t Call, subjects: &[&str], known: &[&str]) -> Option<Arguments<'t>> {
        let function = super::word_text(&call.function);
        let before = self.diagnostics.len();
        let mut found = Arguments {
            function: function.clone(),
            brackets: call.brackets,
            subjects: Vec::new(),
            named: Vec::new(),
        };
        for argument in &call.arguments {
            match &argument.name {
                None if found.subjects.len() < subjects.len() => found.subjects.push(&argument.value),
                None => self.unnamed(&function, known, &argument.value),
                Some(word) if !known.contains(&&*word.text) => self.unknown_argument(&function, word, known),
                Some(word) => {
                    if let Some(first) = found.word(&word.text) {
                        let message = format!("`{}` is given twice", word.text);
                        self.report(
                            Diagnostic::new(Code::CallArgument, word.span, message)
                                .here("given again here")
                                .label(first.span, "first given here")
                                .help("remove one of them"),
                        );
                    } else {
                        found.named.push((word, &argument.value));
                    }
                }
            }
        }
        if let Some(missing) = subjects.get(found.subjects.len()) {
            let message = format!("`{function}` needs {missing} as its first argument, without a name");
            self.report(Diagnostic::new(Code::CallArgument, call.brackets, message));
        }
        (self.diagnostics.len() == before).then_some(found)
    }

    /// The argument of a name; its absence is reported.
    pub(super) fn required<'t>(
        &mut self,
        arguments: &Arguments<'t>,
        name: &str,
        example: &str,
    ) -> Option<&'t Expression> {
        let found = arguments.get(name);
        if found.is_none() {
            let message = format!("`{}` needs its argument `{name}`", arguments.function);
            self.report(
                Diagnostic::new(Code::CallArgument, arguments.brackets, message).help(format!(
                    "write `{name}: {example}` between the brackets, with your value"
                )),
            );
        }
        found
    }

    fn unnamed(&mut self, function: &str, known: &[&str], value: &Expression) {
        let finding = if known.is_empty() {
            Diagnostic::new(
                Code::CallArgument,
                value.span,
                format!("`{function}` has an argument too many"),
            )
            .help("remove it")
        } else {
            let names = choice(known).unwrap_or_default();
            Diagnostic::new(
                Code::CallArgument,
                value.span,
                format!("this argument of `{function}` needs its name"),
            )
            .help(format!("write `name: value`, the name being {names}"))
        };
        self.report(finding);
    }

    fn unknown_argument(&mut self, function: &str, word: &Word, known: &[&str]) {
        let message = format!("`{function}` has no argument called `{}`", word.text);
        let mut finding = Diagnostic::new(Code::CallArgument, word.span, message);
        finding.help = match choice(&near(&word.text, known.iter().copied())) {
            Some(near) => Some(format!("did you mean {near}?")),
            None => choice(known).map(|all| format!("its arguments are {}", all.replace(" or ", " and "))),
        };
        self.report(finding);
    }
}
