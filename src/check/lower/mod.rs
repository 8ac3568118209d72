//! Expressions to values: what each declaration is, once the declarations it is made from are known.

mod arguments;
mod arithmetic;
mod calls;
mod covariance;
mod expectation;
mod kernel;
mod limit_state;
mod mismatch;
mod not_yet;
mod operations;
mod process;
mod table;

use super::model::{Kind, Model, Named, Parameter};
use super::names::{self, ItemId, Names, Resolved, Unknown, choice, place};
use super::parts::{InstanceId, Library};
use super::value::{Number, Scalar, Value, Varying};
use super::{Overrides, Settings};
use crate::covariance::kernel::Unavailable;
use crate::covariance::source::Source;
use crate::diagnostics::{Code, Diagnostic};
use crate::expression::Arena;
use crate::language::tree::{
    Declaration, DeclarationKind, DefinitionKeyword, Expression, ExpressionKind, FunctionKeyword, Path, UnitExpression,
    Word,
};
use crate::source::Span;
use crate::units::{self, Cause, Dimension, Unit};
use kernel::KernelDefinition;
use not_yet::Later;
use std::collections::HashMap;
use std::rc::Rc;

/// Terms of all forms of a model together; beyond this the model is refused, not computed for hours.
const MOST_TERMS: usize = 2_000_000;

/// Pairs of terms over one source, in all forms of a model together: each pair is a lag at which a kernel is needed.
const MOST_PAIRS: usize = 1_000_000;

/// What an expression sees around it.
#[derive(Clone, Copy)]
struct Scope<'a> {
    /// The instance whose names it uses.
    instance: InstanceId,
    /// Whether functions of the lag may stand here.
    context: Context,
    /// Names that only this expression knows: the arguments of a kernel.
    locals: &'a [(&'a str, Scalar)],
}

/// Where an expression stands.
#[derive(Clone, Copy, PartialEq)]
enum Context {
    /// In a declaration.
    Plain,
    /// In a correlation or covariance function.
    Kernel,
}

impl Scope<'_> {
    fn plain(instance: InstanceId) -> Self {
        Self {
            instance,
            context: Context::Plain,
            locals: &[],
        }
    }

    fn in_kernel(self) -> Self {
        Self {
            context: Context::Kernel,
            ..self
        }
    }
}

/// The state of the walk through all items.
pub struct Lowering<'p, 'l, 'f> {
    names: &'p Names<'p>,
    library: &'l mut Library<'f>,
    settings: &'l Settings,
    arena: Arena,
    values: Vec<Option<Value>>,
    kernels: HashMap<ItemId, KernelDefinition>,
    tables: HashMap<std::path::PathBuf, Option<Rc<table::Table>>>,
    terms: usize,
    /// Pairs of terms over one source, in all forms together.
    pairs: usize,
    /// How many kernels made of kernels are being looked into, and how many have been.
    expansion_depth: usize,
    expansions: usize,
    model: Model,
    varying: HashMap<ItemId, usize>,
    limit_states: HashMap<ItemId, usize>,
    diagnostics: Vec<Diagnostic>,
}

impl<'p, 'l, 'f> Lowering<'p, 'l, 'f> {
    /// Nothing looked at yet.
    pub fn new(names: &'p Names<'p>, library: &'l mut Library<'f>, settings: &'l Settings) -> Self {
        let tree = &names.parts().get(InstanceId(0)).tree;
        Self {
            names,
            library,
            settings,
            arena: Arena::new(),
            values: vec![None; names.items().count()],
            kernels: HashMap::new(),
            tables: HashMap::new(),
            terms: 0,
            pairs: 0,
            expansion_depth: 0,
            expansions: 0,
            model: Model::empty(tree.file),
            varying: HashMap::new(),
            limit_states: HashMap::new(),
            diagnostics: Vec::new(),
        }
    }

    /// Looks at all items, in an order in which each comes after those it is made from.
    pub fn run(mut self, items: &[ItemId], circular: &[ItemId]) -> (Model, Vec<Diagnostic>) {
        for item in circular {
            self.values[item.index()] = Some(Value::Fault);
        }
        for item in items {
            let value = self.item(*item);
            self.note_if_lost(*item, &value);
            self.values[item.index()] = Some(value);
            if self.terms > MOST_TERMS || self.pairs > MOST_PAIRS {
                self.too_large(*item);
                break;
            }
        }
        self.in_order_of_the_text();
        (self.model, self.diagnostics)
    }

    /// Notes a declaration that should have come to something and did not.
    fn note_if_lost(&mut self, item: ItemId, value: &Value) {
        let declaration = self.names.declaration(item);
        let lost = match &declaration.kind {
            DeclarationKind::Definition { .. } | DeclarationKind::Parameter { .. } => matches!(value, Value::Fault),
            DeclarationKind::LimitState { .. } => !self.limit_states.contains_key(&item),
            DeclarationKind::Expect { .. } => self.model.expectations.last().is_none_or(|last| last.order != item),
            _ => false,
        };
        if lost {
            self.model.lost.push(place(declaration));
        }
    }

    fn too_large(&mut self, item: ItemId) {
        let place = place(self.names.declaration(item));
        let (message, help) = if self.terms > MOST_TERMS {
            (
                format!("the processes and margins up to here have more than {MOST_TERMS} terms together"),
                "build margins from fewer sources: sums of sums grow with every step",
            )
        } else {
            (
                format!("the processes and margins up to here pair more than {MOST_PAIRS} delays of one process"),
                "use fewer delays of one process: the work grows as their square",
            )
        };
        self.report(Diagnostic::new(Code::ModelTooLarge, place, message).help(help));
    }

    /// Items were met in the order of their needs; people read them in the order of the text.
    fn in_order_of_the_text(&mut self) {
        fn sorted<T>(things: Vec<T>, places: &HashMap<ItemId, usize>) -> (Vec<T>, Vec<usize>) {
            let mut keys = vec![ItemId(0); things.len()];
            for (item, index) in places {
                keys[*index] = *item;
            }
            let mut order: Vec<usize> = (0..things.len()).collect();
            order.sort_by_key(|index| keys[*index]);
            let mut new_index = vec![0; things.len()];
            for (new, old) in order.iter().enumerate() {
                new_index[*old] = new;
            }
            let mut keyed: Vec<(usize, T)> = new_index.iter().copied().zip(things).collect();
            keyed.sort_by_key(|(index, _)| *index);
            (keyed.into_iter().map(|(_, thing)| thing).collect(), new_index)
        }
        let (varying, new_varying) = sorted(std::mem::take(&mut self.model.varying), &self.varying);
        let (limit_states, new_limits) = sorted(std::mem::take(&mut self.model.limit_states), &self.limit_states);
        self.model.varying = varying;
        self.model.limit_states = limit_states;
        for expectation in &mut self.model.expectations {
            expectation.subject.renumber(&new_varying, &new_limits);
        }
        self.model.parameters.sort_by_key(|parameter| parameter.order);
        self.model.expectations.sort_by_key(|expectation| expectation.order);
    }

    fn report(&mut self, diagnostic: Diagnostic) {
        self.diagnostics.push(diagnostic);
    }

    fn item(&mut self, item: ItemId) -> Value {
        let instance = self.names.item(item).instance;
        let declaration = self.names.declaration(item);
        match &declaration.kind {
            DeclarationKind::Language(number) => {
                if number.value != 1.0 || number.unit.is_some() {
                    self.report(
                        Diagnostic::new(
                            Code::LanguageVersion,
                            declaration.span,
                            "this program knows version 1 of the language only",
                        )
                        .help("write `language 1`, or use a newer program"),
                    );
                }
            }
            DeclarationKind::Title(text) => {
                if instance == InstanceId(0) {
                    self.model.title = Some(text.value.to_string());
                }
            }
            DeclarationKind::Use { arguments, .. } => self.part(item, instance, arguments),
            DeclarationKind::Parameter { name, unit, value } => {
                return self.parameter(item, declaration, name, unit.as_ref(), value.as_ref());
            }
            DeclarationKind::Definition {
                keyword,
                name,
                unit,
                value,
            } => return self.definition(item, declaration, *keyword, name, unit.as_ref(), value),
            DeclarationKind::Function {
                keyword: FunctionKeyword::Kernel,
                parameters,
                unit,
                value,
                name,
            } => self.kernel_definition(item, name, parameters, unit.as_ref(), value),
            DeclarationKind::Function {
                keyword: FunctionKeyword::Profile,
                ..
            } => self.not_yet(declaration.keyword, Later::Profiles),
            DeclarationKind::Function {
                keyword: FunctionKeyword::Spectrum,
                ..
            } => self.not_yet(declaration.keyword, Later::Spectra),
            DeclarationKind::Climate { .. } => self.not_yet(declaration.keyword, Later::Climates),
            DeclarationKind::Correlate { .. } => self.not_yet(declaration.keyword, Later::Correlations),
            DeclarationKind::Accept { .. } => self.not_yet(declaration.keyword, Later::Acceptances),
            DeclarationKind::LimitState { name, lines, close } => {
                self.limit_state(item, name, lines, *close);
            }
            DeclarationKind::Expect {
                quantity,
                value,
                tolerance,
            } => self.expectation(item, declaration, quantity, value, tolerance),
        }
        Value::Fault
    }

    fn definition(
        &mut self,
        item: ItemId,
        declaration: &'p Declaration,
        keyword: DefinitionKeyword,
        name: &Word,
        unit: Option<&UnitExpression>,
        expression: &Expression,
    ) -> Value {
        let scope = Scope::plain(self.names.item(item).instance);
        match keyword {
            DefinitionKeyword::Variable => self.not_yet(declaration.keyword, Later::Variables),
            DefinitionKeyword::Quantity => self.not_yet(declaration.keyword, Later::Quantities),
            DefinitionKeyword::Constant => {
                let declared = unit.map(|unit| self.unit(unit));
                let value = self.value(expression, scope);
                return match self.scalar(value, expression.span, &format!("the constant `{}`", name.text)) {
                    Some(scalar) => self.declared_scalar(scalar, declared, name, expression.span),
                    None => Value::Fault,
                };
            }
            DefinitionKeyword::Process | DefinitionKeyword::Margin => {
                let kind = if keyword == DefinitionKeyword::Process {
                    Kind::Process
                } else {
                    Kind::Margin
                };
                let declared = unit.map(|unit| self.unit(unit));
                let value = self.process_or_margin(item, kind, name, declared.clone(), expression);
                return self.varying(item, declaration, kind, name, declared, expression, value);
            }
        }
        Value::Fault
    }

    /// Checks a process or margin against its unit and enters it into the model.
    #[allow(clippy::too_many_arguments)]
    fn varying(
        &mut self,
        item: ItemId,
        declaration: &Declaration,
        kind: Kind,
        name: &Word,
        declared: Option<Option<Rc<Unit>>>,
        expression: &Expression,
        value: Value,
    ) -> Value {
        let mut varying = match value {
            Value::Fault => return Value::Fault,
            Value::Form(varying) if !varying.form.is_constant() => varying,
            Value::Form(_) | Value::Scalar(_) => {
                self.nothing_varies(kind, name, expression);
                return Value::Fault;
            }
            Value::Kernel(_) => {
                self.wrong_kind(
                    expression.span,
                    "a kernel",
                    "a process",
                    "it is the argument of a `gaussian(...)`",
                );
                return Value::Fault;
            }
        };
        match declared {
            Some(None) => return Value::Fault,
            Some(Some(unit)) => {
                if unit.dimension() != varying.dimension {
                    self.not_in_declared_unit(name, &unit, expression.span, varying.dimension, varying.unit.as_ref());
                    return Value::Fault;
                }
                varying.unit = Some(unit);
            }
            None => {}
        }
        if !self.within_tables(&varying, name) {
            return Value::Fault;
        }
        let index = self.model.varying.len();
        self.model.varying.push(Named {
            name: self.names.full_name(item),
            kind,
            form: Rc::clone(&varying.form),
            dimension: varying.dimension,
            unit: unit_or_si(varying.unit.as_ref(), varying.dimension),
            documentation: self.documentation(item),
            basis: declaration.basis.as_ref().map(|text| text.value.to_string()),
            place: name.span,
        });
        self.varying.insert(item, index);
        Value::Form(varying)
    }

    /// Whether the kernels say something at all lags that the form asks for.
    fn within_tables(&mut self, varying: &Varying, name: &Word) -> bool {
        let mut sound = true;
        for (source, terms) in varying.form.by_source() {
            let delays = terms.iter().map(|term| term.operator.delay);
            let (first, last) = delays.fold((f64::INFINITY, f64::NEG_INFINITY), |(a, b), d| (a.min(d), b.max(d)));
            let source = &self.model.sources[source.0 as usize];
            let Err(why @ Unavailable::BeyondTable { .. }) = source.kernel.value(last - first) else {
                continue;
            };
            let message = format!(
                "`{}` needs the correlation of `{}` where its table says nothing",
                name.text, source.name
            );
            let finding = Diagnostic::new(Code::ValueRange, name.span, message)
                .here(why.to_string())
                .label(source.place, "its correlation is tabulated")
                .help("make the delays shorter, the table longer, or say `beyond: zero` or `beyond: hold`");
            self.diagnostics.push(finding);
            sound = false;
        }
        sound
    }

    fn nothing_varies(&mut self, kind: Kind, name: &Word, expression: &Expression) {
        let name = &name.text;
        let (what, help) = match kind {
            Kind::Process => (
                "process",
                format!("write `constant {name} = ...`, or give it a `gaussian(...)`"),
            ),
            Kind::Margin => (
                "margin",
                "a margin without a process needs no crossings: compare the numbers, or use a time-invariant method"
                    .to_string(),
            ),
        };
        self.report(
            Diagnostic::new(
                Code::MarginNoProcess,
                expression.span,
                format!("nothing in the {what} `{name}` varies in time"),
            )
            .here("a number, whatever the time")
            .help(help),
        );
    }

    /// The comment lines above an item, without their `#`.
    fn documentation(&self, item: ItemId) -> Option<String> {
        let at = self.names.item(item);
        let tree = &self.names.parts().get(at.instance).tree;
        let range = self.names.declaration(item).documentation.clone();
        let lines: Vec<&str> = tree
            .comments
            .get(range)?
            .iter()
            .map(|span| self.library.files().text(*span).trim_start_matches('#').trim())
            .collect();
        (!lines.is_empty()).then(|| lines.join("\n"))
    }

    fn parameter(
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
    fn set_from_outside(&self, instance: InstanceId, name: &Word) -> Option<(&'p Expression, InstanceId)>
    where
        'l: 'p,
    {
        let same = |word: &Word| word.text == name.text;
        match self.names.parts().arguments(instance) {
            Some((origin, _, arguments)) => {
                let argument = arguments.iter().find(|one| one.name.as_ref().is_some_and(same))?;
                Some((&argument.value, origin.user))
            }
            None => {
                let settings: &'l Settings = self.settings;
                let set = settings.overrides.iter().rev().find(|set| same(&set.name))?;
                Some((&set.value, InstanceId(0)))
            }
        }
    }

    fn set_parameter(&mut self, name: &Word, expression: &Expression, from: InstanceId, shape: &Scalar) -> Value {
        let value = self.value(expression, Scope::plain(from));
        let what = format!("the parameter `{}`", name.text);
        let Some(mut scalar) = self.scalar(value, expression.span, &what) else {
            return Value::Fault;
        };
        if scalar.dimension != shape.dimension && !scalar.bare_zero {
            let why = Some((name.span, "the parameter is declared here"));
            self.mismatch(expression.span, &scalar, shape.dimension, &what, why);
            return Value::Fault;
        }
        scalar.dimension = shape.dimension;
        scalar.bare_zero = false;
        if shape.unit.is_some() {
            scalar.unit.clone_from(&shape.unit);
        }
        Value::Scalar(scalar)
    }

    fn unset_parameter(&mut self, item: ItemId, name: &Word, shape: &Scalar) {
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
    fn meant_by(&self, arguments: &[crate::language::tree::Argument], made: InstanceId, parameter: &str) -> bool {
        arguments.iter().any(|argument| match &argument.name {
            None => true,
            Some(word) => {
                let known = self.names.find(made, &word.text).is_some();
                !known && !names::near(&word.text, std::iter::once(parameter)).is_empty()
            }
        })
    }

    /// Reports arguments of a `use` that name no parameter of the part, or one twice.
    fn part(&mut self, item: ItemId, instance: InstanceId, arguments: &[crate::language::tree::Argument]) {
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
            let same = |other: &crate::language::tree::Argument| {
                other.name.as_ref().is_some_and(|other| other.text == word.text)
            };
            if self.names.is_lost(made, &word.text) {
                continue;
            }
            if !parameters.contains(&&*word.text) {
                let message = format!("the part has no parameter called `{}`", word.text);
                let mut finding = Diagnostic::new(Code::PartArgument, word.span, message);
                finding.help = match choice(&names::near(&word.text, parameters.iter().copied())) {
                    Some(near) => Some(format!("did you mean {near}?")),
                    None => match choice(&parameters) {
                        Some(all) => Some(format!("its parameters are {}", all.replace(" or ", " and "))),
                        None => Some("it has no parameters: declare what is to vary with `parameter`".to_string()),
                    },
                };
                self.report(finding);
                // What it was meant to be is looked at all the same.
                self.value(&argument.value, Scope::plain(instance));
            } else if arguments[..index].iter().any(same) {
                let message = format!("the parameter `{}` is set twice", word.text);
                self.report(Diagnostic::new(Code::PartArgument, word.span, message).help("remove one of them"));
            }
        }
    }

    /// A scalar against the unit it was declared with (`Some(None)`: a unit that could not be read).
    fn declared_scalar(
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

    /// The unit of an expression, or `None` where it could not be read (reported).
    fn unit(&mut self, expression: &UnitExpression) -> Option<Rc<Unit>> {
        match units::resolve(expression) {
            Ok(unit) => Some(Rc::new(unit)),
            Err(unknown) => {
                for one in unknown {
                    let place = expression
                        .factors
                        .get(one.factor)
                        .map_or(expression.span, |factor| factor.symbol.span);
                    let message = match one.cause {
                        Cause::NotInTable => format!("there is no unit called `{}`", one.symbol),
                        Cause::LeftOut => format!("the unit `{}` is not part of the language", one.symbol),
                        Cause::PowerTooLarge => format!("the power of the unit `{}` is too large", one.symbol),
                    };
                    let mut finding = Diagnostic::new(Code::UnitUnknown, place, message);
                    let meant = choice(&one.suggestions).map(|near| format!("did you mean {near}?"));
                    finding.help = Some(match (meant, one.note) {
                        _ if self.is_declared(&one.symbol, place) => {
                            format!(
                                "`{}` is declared here: to multiply by it, write ` * ` before it",
                                one.symbol
                            )
                        }
                        (Some(meant), Some(note)) => format!("{meant} {note}"),
                        (Some(meant), None) => meant,
                        (None, Some(note)) => note.to_string(),
                        (None, None) => "to multiply or divide by a name, put blanks around the `*` or `/`".to_string(),
                    });
                    self.report(finding);
                }
                None
            }
        }
    }

    /// Whether the file of a place declares a name.
    fn is_declared(&self, name: &str, place: Span) -> bool {
        let mut instances = (0_u32..).map(InstanceId).zip(&self.names.parts().instances);
        let there = instances.find(|(_, instance)| instance.tree.file == place.file);
        there.is_some_and(|(id, _)| self.names.find(id, name).is_some() || self.names.is_lost(id, name))
    }

    /// The value a name stands for.
    fn name(&mut self, path: &Path, scope: Scope<'_>) -> Value {
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
            (
                DeclarationKind::Function {
                    keyword: FunctionKeyword::Kernel,
                    ..
                },
                _,
            ) => {
                let help = format!("call it with its arguments: `{}(...)`", word_text(path));
                if scope.context == Context::Kernel {
                    self.wrong_kind(
                        path.span,
                        "the name of a kernel",
                        "the kernel with its arguments",
                        &help,
                    );
                } else {
                    self.wrong_kind(path.span, "a kernel", "a quantity", &help);
                }
                Value::Fault
            }
            (_, Some(Value::Form(_))) if scope.context == Context::Kernel => {
                let help = "a kernel is made of the lag, its arguments, constants and other kernels";
                self.wrong_kind(path.span, "a process", "a part of a kernel", help);
                Value::Fault
            }
            (_, Some(value)) => value.clone(),
            (_, None) => Value::Fault,
        }
    }

    fn unknown_name(&mut self, path: &Path, unknown: &Unknown<'_>, scope: Scope<'_>) {
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
    fn in_a_part(&self, name: &str, instance: InstanceId) -> Option<String> {
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

    fn wrong_kind(&mut self, place: Span, found: &str, wanted: &str, help: &str) {
        self.report(
            Diagnostic::new(
                Code::TypeMismatch,
                place,
                format!("this is {found}, where {wanted} is needed"),
            )
            .here(found)
            .help(help),
        );
    }

    /// The value of an expression.
    fn value(&mut self, expression: &Expression, scope: Scope<'_>) -> Value {
        match &expression.kind {
            ExpressionKind::Number(number) => self.literal(number),
            ExpressionKind::String(text) => {
                self.wrong_kind(
                    text.span,
                    "a text",
                    "a quantity",
                    "texts name files, in `tabulated(\"file.csv\", ...)`",
                );
                Value::Fault
            }
            ExpressionKind::Name(path) => self.name(path, scope),
            ExpressionKind::Sum(terms) => self.sum(expression.span, terms, scope),
            ExpressionKind::Product(factors) => self.product(expression.span, factors, scope),
            ExpressionKind::Negative(inner) => self.negative(inner, scope),
            ExpressionKind::Power(base, exponent) => self.power(expression.span, base, exponent, scope),
            ExpressionKind::Call(call) => self.call(expression.span, call, scope),
            ExpressionKind::Group(_) => {
                self.wrong_kind(
                    expression.span,
                    "a state of a climate",
                    "a quantity",
                    "states stand in `states(...)`",
                );
                Value::Fault
            }
            ExpressionKind::Bracket(inner) => self.value(inner, scope),
        }
    }

    /// The scalar a value is; anything else is reported. `what` names what the number is for.
    fn scalar(&mut self, value: Value, place: Span, what: &str) -> Option<Scalar> {
        match value {
            Value::Scalar(scalar) => Some(scalar),
            Value::Fault => None,
            Value::Form(_) => {
                let help = "use its mean or standard deviation as a constant, or declare a margin";
                self.wrong_kind(place, "a process", &format!("a number for {what}"), help);
                None
            }
            Value::Kernel(_) => {
                self.wrong_kind(
                    place,
                    "a kernel",
                    &format!("a number for {what}"),
                    "kernels stand in `correlation:`",
                );
                None
            }
        }
    }

    /// The known number of a dimension that an expression is, in SI units; anything else is reported. `what` names
    /// what the number is for, and `why` a place that says so.
    fn number(
        &mut self,
        expression: &Expression,
        scope: Scope<'_>,
        dimension: Dimension,
        what: &str,
        why: Option<(Span, &str)>,
    ) -> Option<Scalar> {
        let value = self.value(expression, scope);
        let mut scalar = self.scalar(value, expression.span, what)?;
        if scalar.dimension != dimension {
            if !scalar.bare_zero {
                self.mismatch(expression.span, &scalar, dimension, what, why);
                return None;
            }
            scalar.dimension = dimension;
            scalar.bare_zero = false;
        }
        Some(scalar)
    }

    /// A time in seconds with the unit people see it in.
    fn time(&mut self, expression: &Expression, scope: Scope<'_>, what: &str) -> Option<super::model::Time> {
        let scalar = self.number(expression, scope, Dimension::TIME, what, None)?;
        match scalar.value {
            Number::Known(seconds) if seconds > 0.0 => Some(super::model::Time {
                seconds,
                unit: unit_or_si(scalar.unit.as_ref(), Dimension::TIME),
            }),
            Number::Known(_) => {
                let message = format!("{what} must be longer than 0");
                self.report(Diagnostic::new(Code::ValueRange, expression.span, message));
                None
            }
            Number::Open(_) | Number::Unset => None,
        }
    }

    /// Makes a source and returns a form of it.
    fn source(&mut self, source: Source, mean: f64) -> crate::covariance::form::LinearForm {
        let id = crate::covariance::form::SourceId(u32::try_from(self.model.sources.len()).unwrap_or(u32::MAX));
        self.model.sources.push(source);
        crate::covariance::form::LinearForm::source(mean, id)
    }

    /// Counts the terms of a new form and wraps it.
    fn form(
        &mut self,
        form: crate::covariance::form::LinearForm,
        dimension: Dimension,
        unit: Option<Rc<Unit>>,
    ) -> Value {
        self.terms = self.terms.saturating_add(form.terms().len());
        let several = form.by_source().filter(|(_, terms)| terms.len() > 1);
        self.pairs = several.fold(self.pairs, |pairs, (_, terms)| pairs.saturating_add(terms.len().pow(2)));
        Value::Form(Varying {
            form: Rc::new(form),
            dimension,
            unit,
        })
    }
}

/// The unit people see, or the coherent SI unit where nobody chose one.
fn unit_or_si(unit: Option<&Rc<Unit>>, dimension: Dimension) -> Rc<Unit> {
    match unit {
        Some(unit) if unit.dimension() == dimension => Rc::clone(unit),
        _ => Rc::new(Unit::si(dimension)),
    }
}

fn word_text(path: &Path) -> String {
    let words: Vec<&str> = path.words.iter().map(|word| &*word.text).collect();
    words.join(".")
}

/// Reports `--set` names that are no parameters of the file.
pub fn unknown_overrides(names: &Names<'_>, overrides: &[Overrides], diagnostics: &mut Vec<Diagnostic>) {
    let root = InstanceId(0);
    for set in overrides {
        let name = &set.name.text;
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
        finding.help = match choice(&names::near(name, all.iter().copied())) {
            Some(near) => Some(format!("did you mean {near}?")),
            None => Some(match choice(&all) {
                Some(all) => format!("the parameters of the file are {}", all.replace(" or ", " and ")),
                None => "the file has no parameters".to_string(),
            }),
        };
        diagnostics.push(finding);
    }
}
