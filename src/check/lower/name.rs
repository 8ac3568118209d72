//! Names in expressions: what a path stands for, and what it was likely meant to be where it stands for nothing.

use super::not_yet::Later;
use super::{Context, Lowering, Scope, word_text};
use crate::check::names::{self, Resolved, Unknown, choice};
use crate::check::parts::InstanceId;
use crate::check::value::{Number, Scalar, Value};
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{DeclarationKind, FunctionKeyword, Path};
use crate::source::Span;
use crate::units::{Dimension, Unit};

impl Lowering<'_, '_, '_> {
    /// Whether the file of a place declares a name.
    pub(super) fn is_declared(&self, name: &str, place: Span) -> bool {
        let mut instances = (0_u32..).map(InstanceId).zip(&self.names.parts().instances);
        let there = instances.find(|(_, instance)| instance.tree.file == place.file);
        there.is_some_and(|(id, _)| self.names.find(id, name).is_some() || self.names.is_lost(id, name))
    }

    /// The value a name stands for.
    pub(super) fn name(&mut self, path: &Path, scope: Scope<'_>) -> Value {
        if let [word] = path.words.as_slice() {
            if let Some((_, scalar)) = scope.locals.iter().find(|(name, _)| *name == &*word.text) {
                return Value::Scalar(scalar.clone());
            }
            match &*word.text {
                // Declared all the same: that was reported.
                name if self.names.find(scope.instance, name).is_some() => {}
                "pi" => return Value::Scalar(Scalar::new(Number::Known(std::f64::consts::PI), Dimension::PLAIN)),
                "t" => {
                    self.not_yet(path.span, Later::Time);
                    return Value::Fault;
                }
                _ => {}
            }
        }
        let item = match self.names.resolve(path, scope.instance) {
            Ok(Resolved::Item(item)) => item,
            Ok(Resolved::Fault) => return Value::Fault,
            Err(unknown) => {
                self.unknown_name(path, &unknown, scope);
                return Value::Fault;
            }
        };
        let declaration = self.names.declaration(item);
        match (&declaration.kind, &self.values[item.index()]) {
            (DeclarationKind::Use { .. }, _) => {
                let help = format!("name something in it: `{}.NAME`", word_text(path));
                self.wrong_kind(path.span, "a part", "a quantity", &help);
                Value::Fault
            }
            (DeclarationKind::LimitState { .. }, _) => {
                self.wrong_kind(path.span, "a limit state", "a quantity", "name the margin it speaks of");
                Value::Fault
            }
            (DeclarationKind::Function { keyword, .. }, _) if *keyword != FunctionKeyword::Profile => {
                let (what, home) = match keyword {
                    FunctionKeyword::Spectrum => ("spectrum", Context::Spectrum),
                    _ => ("kernel", Context::Kernel),
                };
                let help = format!("call it with its arguments: `{}(...)`", word_text(path));
                let (found, wanted) = if scope.context == home {
                    (
                        format!("the name of a {what}"),
                        format!("the {what} with its arguments"),
                    )
                } else {
                    (format!("a {what}"), "a quantity".to_string())
                };
                self.wrong_kind(path.span, &found, &wanted, &help);
                Value::Fault
            }
            (_, Some(Value::Form(_))) if scope.context == Context::Kernel => {
                let help = "a kernel is made of the lag, its arguments, constants and other kernels";
                self.wrong_kind(path.span, "a process", "a part of a kernel", help);
                Value::Fault
            }
            (_, Some(Value::Form(_))) if scope.context == Context::Spectrum => {
                let help = "a spectrum is made of the frequency, its arguments, constants and other spectra";
                self.wrong_kind(path.span, "a process", "a part of a spectrum", help);
                Value::Fault
            }
            (_, Some(value)) => value.clone(),
            (_, None) => Value::Fault,
        }
    }

    pub(super) fn unknown_name(&mut self, path: &Path, unknown: &Unknown<'_>, scope: Scope<'_>) {
        let (word, instance) = match unknown {
            Unknown::Name { word, instance } => (word, *instance),
            Unknown::Inside { word } => {
                let message = format!("`{}` is no part, so `{}` names nothing", word.text, word_text(path));
                self.report(
                    Diagnostic::new(Code::NameUnknown, path.span, message)
                        .help("only a part, made by `use`, has names inside"),
                );
                return;
            }
        };
        let name = &word.text;
        let within = match path.words.as_slice() {
            _ if instance != scope.instance => {
                format!(
                    " in `{}`",
                    self.names.parts().get(instance).prefix.trim_end_matches('.')
                )
            }
            _ => String::new(),
        };
        let mut finding = Diagnostic::new(
            Code::NameUnknown,
            word.span,
            format!("nothing is called `{name}`{within}"),
        );
        let mut near = self.names.near(name, instance);
        if path.words.len() == 1 {
            near.extend(names::near(name, scope.locals.iter().map(|(local, _)| *local)));
        }
        near.truncate(3);
        finding.help = if let Some(near) = choice(&near) {
            Some(format!("did you mean {near}?"))
        } else if let Some(elsewhere) = self.in_a_part(name, scope.instance) {
            Some(format!("it is declared in a part: write `{elsewhere}`"))
        } else if Unit::named(name).is_some() {
            Some(format!(
                "`{name}` is a unit: it can only follow a number on its line, without blanks inside"
            ))
        } else {
            Some("declare it, or correct the name".to_string())
        };
        self.report(finding);
    }

    /// `part.name` for a name that a part of the instance declares.
    pub(super) fn in_a_part(&self, name: &str, instance: InstanceId) -> Option<String> {
        let tree = &self.names.parts().get(instance).tree;
        tree.declarations.iter().enumerate().find_map(|(index, declaration)| {
            let DeclarationKind::Use { name: part, .. } = &declaration.kind else {
                return None;
            };
            let made = self.names.parts().made.get(&(instance, index))?;
            self.names.find(*made, name)?;
            Some(format!("{}.{name}", part.text))
        })
    }
}
