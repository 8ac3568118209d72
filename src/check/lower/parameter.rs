//! Parameters: their defaults, and the values that a `use` or the command line gives them.

use super::mismatch::Wanted;
use super::{Lowering, Scope, unit_or_si, word_text};
use crate::check::model::Parameter;
use crate::check::names::{ItemId, Names, choice, near, place};
use crate::check::order::walk;
use crate::check::origins::set_from_outside;
use crate::check::parts::InstanceId;
use crate::check::value::{Number, Scalar, Value};
use crate::check::{Overrides, Settings};
use crate::diagnostics::{Code, Diagnostic};
use crate::expression::Function;
use crate::language::tree::{Argument, Declaration, DeclarationKind, Expression, UnitExpression, Word};
use crate::source::Span;
use crate::units::{Dimension, Unit};
use std::rc::Rc;

impl<'p, 'l> Lowering<'p, 'l, '_> {
    pub(super) fn parameter(
        &mut self,
        item: ItemId,
        declaration: &Declaration,
        name: &'p Word,
        unit: Option<&UnitExpression>,
        default: Option<&'p Expression>,
    ) -> Value {
        let instance = self.names.item(item).instance;
        let declared = unit.map(|unit| self.unit(unit));
        let default = default.map(|expression| {
            let value = self.value(expression, Scope::plain(instance));
            let what = format!("the parameter `{}`", name.text);
            match self.scalar(value, expression.span, &what) {
                Some(scalar) => self.declared_scalar(scalar, declared.clone(), name, expression.span),
                None => Value::Fault,
            }
        });
        let shape = match (&declared, &default) {
            (Some(None), _) | (_, Some(Value::Fault)) => return Value::Fault,
            (Some(Some(unit)), _) => Scalar::new(Number::Unset, unit.dimension()).shown_in(Some(Rc::clone(unit))),
            (None, Some(Value::Scalar(scalar))) => Scalar {
                value: Number::Unset,
                bare_zero: false,
                ..scalar.clone()
            },
            (None, _) => Scalar::new(Number::Unset, Dimension::PLAIN),
        };
        let set = self.set_from_outside(instance, name);
        let value = match (set, default) {
            (Some((expression, from)), _) => self.set_parameter(name, expression, from, &shape),
            (None, Some(default)) => default,
            (None, None) => {
                self.unset_parameter(item, name, &shape);
                Value::Scalar(shape.clone())
            }
        };
        if let Value::Scalar(Scalar {
            value: Number::Known(number),
            dimension,
            unit,
            ..
        }) = &value
        {
            self.model.parameters.push(Parameter {
                name: self.names.full_name(item),
                value: *number,
                unit: unit_or_si(unit.as_ref().or(shape.unit.as_ref()), *dimension),
                basis: declaration.basis.as_ref().map(|text| text.value.to_string()),
                order: item,
            });
        }
        value
    }

    /// The value a `use` or the command line gives a parameter, with the instance whose names it uses.
    pub(super) fn set_from_outside(&self, instance: InstanceId, name: &Word) -> Option<(&'p Expression, InstanceId)>
    where
        'l: 'p,
    {
        let settings: &'l Settings = self.settings;
        set_from_outside(self.names.parts(), settings, instance, name)
    }

    pub(super) fn set_parameter(
        &mut self,
        name: &Word,
        expression: &Expression,
        from: InstanceId,
        shape: &Scalar,
    ) -> Value {
        let value = self.value(expression, Scope::plain(from));
        let what = format!("the parameter `{}`", name.text);
        let Some(mut scalar) = self.scalar(value, expression.span, &what) else {
            return Value::Fault;
        };
        if scalar.dimension != shape.dimension && !scalar.bare_zero {
            let why = Some((name.span, "the parameter is declared here"));
            let wanted = Wanted {
                dimension: shape.dimension,
                unit: shape.unit.as_deref(),
            };
            self.mismatch(expression.span, &scalar, wanted, &what, why);
            return Value::Fault;
        }
        scalar.dimension = shape.dimension;
        scalar.bare_zero = false;
        if shape.unit.is_some() {
            scalar.unit.clone_from(&shape.unit);
        }
        Value::Scalar(scalar)
    }

    pub(super) fn unset_parameter(&mut self, item: ItemId, name: &Word, shape: &Scalar) {
        let instance = self.names.item(item).instance;
        let unit = unit_or_si(shape.unit.as_ref(), shape.dimension);
        let example = match unit.text() {
            "1" => "1".to_string(),
            text => format!("1 {text}"),
        };
        let name_text = &name.text;
        match self.names.parts().arguments(instance) {
            // Named wrongly or not at all: that is said where the `use` is looked at.
            Some((_, _, arguments)) if self.meant_by(arguments, instance, name_text) => {}
            Some((origin, part, _)) => {
                let user = self.names.parts().declaration(origin.user, origin.declaration);
                let message = format!("the part `{}` needs its parameter `{name_text}`", part.text);
                self.report(
                    Diagnostic::new(Code::PartArgument, place(user), message)
                        .label(name.span, "a parameter without a value of its own")
                        .help(format!(
                            "write `({name_text}: {example})` after the name of the part, with your value"
                        )),
                );
            }
            None if self.settings.require_parameters => {
                self.report(
                    Diagnostic::new(
                        Code::ParameterRequired,
                        name.span,
                        format!("the parameter `{name_text}` has no value"),
                    )
                    .help(format!(
                        "give it with `--set {name_text}=\"{example}\"`, or write `= {example}` here"
                    )),
                );
            }
            None => {}
        }
    }

    /// Whether one of the arguments of a `use` may have been meant to set a parameter, though it does not name it.
    pub(super) fn meant_by(&self, arguments: &[Argument], made: InstanceId, parameter: &str) -> bool {
        arguments.iter().any(|argument| match &argument.name {
            None => true,
            Some(word) => {
                let known = self.names.find(made, &word.text).is_some();
                !known && !near(&word.text, std::iter::once(parameter)).is_empty()
            }
        })
    }

    /// Reports arguments of a `use` that name no parameter of the part, or one twice.
    pub(super) fn part(&mut self, item: ItemId, instance: InstanceId, arguments: &[Argument]) {
        let at = self.names.item(item);
        let Some(made) = self.names.parts().made.get(&(instance, at.declaration)).copied() else {
            return;
        };
        let tree = &self.names.parts().get(made).tree;
        let parameters: Vec<&str> = tree
            .declarations
            .iter()
            .filter_map(|declaration| match &declaration.kind {
                DeclarationKind::Parameter { name, .. } => Some(&*name.text),
                _ => None,
            })
            .collect();
        for (index, argument) in arguments.iter().enumerate() {
            let Some(word) = &argument.name else {
                let message = "a parameter of a part is set by its name";
                let help = "write `name: value`";
                self.report(Diagnostic::new(Code::PartArgument, argument.value.span, message).help(help));
                continue;
            };
            let same = |other: &Argument| other.name.as_ref().is_some_and(|other| other.text == word.text);
            if self.names.is_lost(made, &word.text) {
                continue;
            }
            if !parameters.contains(&&*word.text) {
                let message = format!("the part has no parameter called `{}`", word.text);
                let mut finding = Diagnostic::new(Code::PartArgument, word.span, message);
                finding.help = match choice(&near(&word.text, parameters.iter().copied())) {
                    Some(near) => Some(format!("did you mean {near}?")),
                    None => match choice(&parameters) {
                        Some(all) => Some(format!("its parameters are {}", all.replace(" or ", " and "))),
                        None => Some("it has no parameters: declare what is to vary with `parameter`".to_string()),
                    },
                };
                self.report(finding);
                // What it was meant to be is looked at all the same.
                self.value(&argument.value, Scope::plain(instance));
            } else if let Some(first) = arguments[..index].iter().find(|other| same(other)) {
                let message = format!("the parameter `{}` is set twice", word.text);
                let place = first.name.as_ref().map_or(first.value.span, |first| first.span);
                self.report(
                    Diagnostic::new(Code::PartArgument, word.span, message)
                        .here("set again here")
                        .label(place, "first set here")
                        .help("remove one of them"),
                );
            }
        }
    }

    /// A scalar against the unit it was declared with (`Some(None)`: a unit that could not be read).
    pub(super) fn declared_scalar(
        &mut self,
        mut scalar: Scalar,
        declared: Option<Option<Rc<Unit>>>,
        name: &Word,
        place: Span,
    ) -> Value {
        match declared {
            Some(None) => return Value::Fault,
            Some(Some(unit)) => {
                if scalar.dimension != unit.dimension() && !scalar.bare_zero {
                    self.not_in_declared_unit(name, &unit, place, scalar.dimension, scalar.unit.as_ref());
                    return Value::Fault;
                }
                scalar.dimension = unit.dimension();
                scalar.unit = Some(unit);
                scalar.bare_zero = false;
            }
            None => {}
        }
        Value::Scalar(scalar)
    }
}

/// Reports `--set` names that are no parameters of the file.
pub fn unknown_overrides(names: &Names<'_>, overrides: &[Overrides], diagnostics: &mut Vec<Diagnostic>) {
    let root = InstanceId(0);
    for (index, set) in overrides.iter().enumerate() {
        let name = &set.name.text;
        if overrides.iter().take(index).any(|earlier| earlier.name.text == *name) {
            let message = format!("`{name}` is set twice");
            diagnostics.push(Diagnostic::new(Code::NameRepeated, set.name.span, message).help("remove one of them"));
        }
        walk(&set.value, &mut |path| {
            if Function::find(&word_text(path)).is_none() && word_text(path) != "pi" {
                let message = "a value on the command line is a number with its unit, without names of the model";
                let finding = Diagnostic::new(Code::TypeMismatch, path.span, message);
                diagnostics.push(finding.help("write the number, or set the parameter in the file"));
            }
        });
        let is_parameter = |item: ItemId| matches!(names.declaration(item).kind, DeclarationKind::Parameter { .. });
        if names.find(root, name).is_some_and(is_parameter) || names.is_lost(root, name) {
            continue;
        }
        let message = match names.find(root, name) {
            Some(_) => format!("`{name}` is not a parameter, so it cannot be set"),
            None => format!("the model has no parameter called `{name}`"),
        };
        let tree = &names.parts().get(root).tree;
        let parameters = tree
            .declarations
            .iter()
            .filter_map(|declaration| match &declaration.kind {
                DeclarationKind::Parameter { name, .. } => Some(&*name.text),
                _ => None,
            });
        let all: Vec<&str> = parameters.collect();
        let mut finding = Diagnostic::new(Code::NameUnknown, set.name.span, message);
        finding.help = match choice(&near(name, all.iter().copied())) {
            Some(near) => Some(format!("did you mean {near}?")),
            None => Some(match choice(&all) {
                Some(all) => format!("the parameters of the file are {}", all.replace(" or ", " and ")),
                None => "the file has no parameters".to_string(),
            }),
        };
        diagnostics.push(finding);
    }
}
