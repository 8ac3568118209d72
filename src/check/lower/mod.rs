//! Expressions to values: what each declaration is, once the declarations it is made from are known.

mod arguments;
mod arithmetic;
mod by_spectrum;
mod calls;
mod correlate;
mod covariance;
mod definition;
mod expectation;
mod extremes;
mod family;
mod function;
mod kernel;
mod limit_state;
mod mismatch;
mod name;
mod not_yet;
mod operations;
mod parameter;
mod passage;
mod power;
mod process;
mod response_table;
mod slash_unit;
mod spectrum;
mod spectrum_arithmetic;
mod spectrum_family;
mod spectrum_table;
mod system;
mod table;
mod unit;
mod validity;

pub use parameter::unknown_overrides;
pub(in crate::check) use process::fresh_source;

use super::Settings;
use super::model::Model;
use super::names::{ItemId, Names, place};
use super::origins::Found;
use super::parts::{InstanceId, Library};
use super::value::{Number, Scalar, Value, Varying};
use crate::covariance::form::SourceId;
use crate::covariance::source::Source;
use crate::diagnostics::{Code, Diagnostic};
use crate::expression::Arena;
use crate::language::tree::{DeclarationKind, Expression, ExpressionKind, FunctionKeyword, Path};
use crate::source::Span;
use crate::units::{Dimension, Unit};
use kernel::KernelDefinition;
use mismatch::Wanted;
use not_yet::Later;
use spectrum::SpectrumDefinition;
use std::collections::HashMap;
use std::rc::Rc;
use validity::Judgements;

/// Terms of all forms of a model together; beyond this the model is refused, not computed for hours.
const MOST_TERMS: usize = 2_000_000;

/// Pairs of terms over one source, in all forms of a model together: each pair is a lag at which a kernel is needed.
const MOST_PAIRS: usize = 1_000_000;

/// Operations and numbers in the kernels that a model writes out, all together: each part brings its own.
const MOST_NODES: usize = 2_000_000;

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
    /// In a spectral density.
    Spectrum,
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

    fn in_spectrum(self) -> Self {
        Self {
            context: Context::Spectrum,
            ..self
        }
    }
}

/// What the walk through all items came to.
pub struct Lowered {
    /// The model, complete where nothing is at fault.
    pub model: Model,
    /// What each item is, by its number; `None` where the walk did not come to it.
    pub values: Vec<Option<Value>>,
    /// Which of the model's processes and margins an item is.
    pub varying: HashMap<ItemId, usize>,
    /// Which of the model's limit states an item is.
    pub limit_states: HashMap<ItemId, usize>,
    /// What was found.
    pub found: Vec<Found>,
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
    responses: HashMap<std::path::PathBuf, Option<Rc<response_table::ResponseTable>>>,
    spectra: HashMap<ItemId, SpectrumDefinition>,
    spectrum_tables: HashMap<std::path::PathBuf, Option<Rc<spectrum_table::Table>>>,
    /// Operations in written spectra that have been looked at, over all calls.
    written: usize,
    judgements: Judgements,
    terms: usize,
    /// Pairs of terms over one source, in all forms together.
    pairs: usize,
    /// How many kernels made of kernels are being looked into, and how many have been.
    expansion_depth: usize,
    expansions: usize,
    model: Model,
    /// Where the coherence of two sources is given.
    correlated: HashMap<(SourceId, SourceId), Span>,
    varying: HashMap<ItemId, usize>,
    limit_states: HashMap<ItemId, usize>,
    /// The instance that is being looked at.
    instance: InstanceId,
    diagnostics: Vec<Found>,
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
            responses: HashMap::new(),
            spectra: HashMap::new(),
            spectrum_tables: HashMap::new(),
            written: 0,
            judgements: Judgements::default(),
            terms: 0,
            pairs: 0,
            expansion_depth: 0,
            expansions: 0,
            model: Model::empty(tree.file),
            correlated: HashMap::new(),
            varying: HashMap::new(),
            limit_states: HashMap::new(),
            instance: InstanceId(0),
            diagnostics: Vec::new(),
        }
    }

    /// Looks at all items, in an order in which each comes after those it is made from.
    pub fn run(mut self, items: &[ItemId], circular: &[ItemId]) -> Lowered {
        for item in circular {
            self.values[item.index()] = Some(Value::Fault);
        }
        for item in items {
            self.instance = self.names.item(*item).instance;
            let value = self.item(*item);
            self.note_if_lost(*item, &value);
            self.values[item.index()] = Some(value);
            if self.terms > MOST_TERMS || self.pairs > MOST_PAIRS || self.arena.len() > MOST_NODES {
                self.too_large(*item);
                break;
            }
        }
        self.impossible_coherences();
        self.in_order_of_the_text();
        Lowered {
            model: self.model,
            values: self.values,
            varying: self.varying,
            limit_states: self.limit_states,
            found: self.diagnostics,
        }
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
        } else if self.arena.len() > MOST_NODES {
            (
                format!(
                    "the kernels and spectra written out up to here have more than {MOST_NODES} operations and numbers"
                ),
                "use fewer parts that write out long kernels, or give the kernels as tables",
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
        for (indices, new) in [(&mut self.varying, &new_varying), (&mut self.limit_states, &new_limits)] {
            indices.values_mut().for_each(|index| *index = new[*index]);
        }
        for expectation in &mut self.model.expectations {
            expectation.subject.renumber(&new_varying, &new_limits);
        }
        self.model.parameters.sort_by_key(|parameter| parameter.order);
        self.model.expectations.sort_by_key(|expectation| expectation.order);
    }

    fn report(&mut self, diagnostic: Diagnostic) {
        self.diagnostics.push(Found::of_instance(self.instance, diagnostic));
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
                parameters,
                unit,
                value,
                name,
            } => self.spectrum_definition(item, name, parameters, unit.as_ref(), value),
            DeclarationKind::Climate { .. } => self.not_yet(declaration.keyword, Later::Climates),
            DeclarationKind::Correlate { names, value } => self.correlate(item, names, value),
            // Looked at once everything has been found that it could accept.
            DeclarationKind::Accept { .. } => {}
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
                let help = "declare what is made from it as a `process` or a `margin`, or write the number that is meant, such as its mean";
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
            Value::Spectrum(_) => {
                let help = "spectra stand in `spectrum:`";
                self.wrong_kind(place, "a spectrum", &format!("a number for {what}"), help);
                None
            }
        }
    }

    /// The known number of a dimension that an expression is, in SI units; anything else is reported. `what` names
    /// what the number is for, and `why` a place that says so.
    fn number<'w>(
        &mut self,
        expression: &Expression,
        scope: Scope<'_>,
        wanted: impl Into<Wanted<'w>>,
        what: &str,
        why: Option<(Span, &str)>,
    ) -> Option<Scalar> {
        let value = self.value(expression, scope);
        self.of_dimension(value, expression.span, wanted, what, why)
    }

    /// The same of a value that is there already.
    fn of_dimension<'w>(
        &mut self,
        value: Value,
        place: Span,
        wanted: impl Into<Wanted<'w>>,
        what: &str,
        why: Option<(Span, &str)>,
    ) -> Option<Scalar> {
        let wanted = wanted.into();
        let mut scalar = self.scalar(value, place, what)?;
        if scalar.dimension != wanted.dimension {
            if !scalar.bare_zero {
                self.mismatch(place, &scalar, wanted, what, why);
                return None;
            }
            scalar.dimension = wanted.dimension;
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
        for (_, terms) in form.by_source() {
            let instants = system::instants(terms);
            if instants > 1 {
                self.pairs = self.pairs.saturating_add(instants.saturating_mul(instants));
            }
        }
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
