//! Advice on a finished model: what is allowed, and yet seldom meant. One file for each idea. What concerns a single
//! declaration is said whatever else is wrong; what depends on the whole file, only where nothing is.

mod basis;
mod convention;
mod counted_twice;
mod expectation;
mod failed_mean;
mod raw_moment;
mod requirement;
mod same_description;
mod scatter;
mod short_period;
mod unused;

use super::lower::{Lowered, fresh_source};
use super::model::{LimitState, Named};
use super::names::{ItemId, Names, Resolved};
use super::origins::Found;
use super::parts::InstanceId;
use super::value::{Number, Value};
use crate::covariance::form::LinearForm;
use crate::covariance::moments::MomentTable;
use crate::language::tree::{
    Argument, Call, DeclarationKind, DefinitionKeyword, Expression, ExpressionKind, LimitLine, Path, Word,
};
use crate::source::{Files, Span};
use crate::units::{Dimension, Unit, resolve};
use std::rc::Rc;

/// Sums and forms of more terms are left alone: the work on them grows as the square.
const MOST_TERMS: usize = 60;

/// A checked model with the text it comes from.
pub struct Finished<'a> {
    names: &'a Names<'a>,
    files: &'a Files,
    lowered: &'a Lowered,
    table: MomentTable<'a>,
}

/// A process that is a source of its own.
struct Gaussian<'a> {
    instance: InstanceId,
    name: &'a Word,
    call: &'a Call,
    named: &'a Named,
}

impl<'a> Gaussian<'a> {
    fn argument(&self, name: &str) -> Option<&'a Expression> {
        let same = |argument: &&Argument| argument.name.as_ref().is_some_and(|word| &*word.text == name);
        self.call.arguments.iter().find(same).map(|argument| &argument.value)
    }
}

/// A limit state with its lines.
struct Judged<'a> {
    instance: InstanceId,
    name: &'a Word,
    lines: &'a [LimitLine],
    state: &'a LimitState,
}

/// A number that is written out, or named: nothing that has been computed on the spot.
struct Plain {
    value: f64,
    unit: Rc<Unit>,
}

impl<'a> Finished<'a> {
    /// What the walk through the items came to, with the names and the texts.
    pub fn new(names: &'a Names<'a>, files: &'a Files, lowered: &'a Lowered) -> Self {
        Self {
            names,
            files,
            lowered,
            table: MomentTable::new(&lowered.model.sources).coherent(&lowered.model.coherences),
        }
    }

    /// Everything that a reader should look at. `sound` says whether the file is free of errors.
    pub fn advice(&self, sound: bool) -> Vec<Found> {
        let mut of_texts = self.conventions();
        of_texts.extend(self.same_descriptions());
        of_texts.extend(self.counted_twice());
        of_texts.extend(self.expectations());
        if sound {
            of_texts.extend(self.unused());
        }
        let mut found: Vec<Found> = of_texts.into_iter().map(Found::of_text).collect();
        for gaussian in self.gaussians() {
            let of_one = self.variation(&gaussian).into_iter();
            let of_one = of_one
                .chain(self.deviation(&gaussian))
                .chain(self.raw_moment(&gaussian));
            found.extend(of_one.map(|one| Found::of_instance(gaussian.instance, one)));
        }
        for judged in self.limit_states() {
            let of_one = self.failed_mean(&judged).into_iter();
            let of_one = of_one
                .chain(self.short_period(&judged))
                .chain(self.requirements(&judged));
            found.extend(of_one.map(|one| Found::of_instance(judged.instance, one)));
        }
        found
    }

    /// Whether every parameter has a value.
    pub fn is_complete(&self) -> bool {
        !self.lowered.values.iter().flatten().any(|value| match value {
            Value::Scalar(scalar) => scalar.value == Number::Unset,
            _ => false,
        })
    }

    fn value(&self, item: ItemId) -> Option<&'a Value> {
        self.lowered.values.get(item.index())?.as_ref()
    }

    /// Whether something came of a definition.
    fn is_sound(&self, item: ItemId) -> bool {
        self.value(item).is_some_and(|value| !matches!(value, Value::Fault))
    }

    fn named(&self, item: ItemId) -> Option<&'a Named> {
        self.lowered.model.varying.get(*self.lowered.varying.get(&item)?)
    }

    fn resolved(&self, path: &Path, from: InstanceId) -> Option<ItemId> {
        match self.names.resolve(path, from) {
            Ok(Resolved::Item(item)) => Some(item),
            Ok(Resolved::Fault) | Err(_) => None,
        }
    }

    fn gaussians(&self) -> impl Iterator<Item = Gaussian<'a>> {
        self.names.items().filter_map(|item| self.gaussian(item))
    }

    fn gaussian(&self, item: ItemId) -> Option<Gaussian<'a>> {
        let DeclarationKind::Definition {
            keyword: DefinitionKeyword::Process,
            name,
            value,
            ..
        } = &self.names.declaration(item).kind
        else {
            return None;
        };
        Some(Gaussian {
            instance: self.names.item(item).instance,
            name,
            call: fresh_source(value)?,
            named: self.named(item)?,
        })
    }

    fn limit_states(&self) -> impl Iterator<Item = Judged<'a>> {
        self.names.items().filter_map(|item| {
            let DeclarationKind::LimitState { name, lines, .. } = &self.names.declaration(item).kind else {
                return None;
            };
            let index = self.lowered.limit_states.get(&item)?;
            Some(Judged {
                instance: self.names.item(item).instance,
                name,
                lines,
                state: self.lowered.model.limit_states.get(*index)?,
            })
        })
    }

    /// The number that an expression is, if it is written out or named.
    fn plain(&self, expression: &Expression, from: InstanceId) -> Option<Plain> {
        match &expression.kind {
            ExpressionKind::Bracket(inner) => self.plain(inner, from),
            ExpressionKind::Number(number) => {
                let unit = match &number.unit {
                    Some(unit) => resolve(unit).ok()?,
                    None => Unit::one(),
                };
                Some(Plain {
                    value: unit.to_si(number.value),
                    unit: Rc::new(unit),
                })
            }
            ExpressionKind::Name(path) => match self.value(self.resolved(path, from)?)? {
                Value::Scalar(scalar) => {
                    let Number::Known(value) = scalar.value else {
                        return None;
                    };
                    let unit = match &scalar.unit {
                        Some(unit) => Rc::clone(unit),
                        None if scalar.dimension == Dimension::PLAIN => Rc::new(Unit::one()),
                        None => Rc::new(Unit::si(scalar.dimension)),
                    };
                    Some(Plain { value, unit })
                }
                Value::Fault | Value::Form(_) | Value::Kernel(_) | Value::Spectrum(_) => None,
            },
            _ => None,
        }
    }

    /// What was written, in one line.
    fn as_written(&self, place: Span) -> String {
        let words: Vec<&str> = self.files.text(place).split_whitespace().collect();
        words.join(" ")
    }

    /// The covariance of a form with itself at a lag; `None` where it is not to be had cheaply.
    fn covariance(&self, form: &LinearForm, lag: f64) -> Option<f64> {
        if form.terms().len() > MOST_TERMS {
            return None;
        }
        let covariance = self.table.covariance(form, form, lag).value()?;
        covariance.is_finite().then_some(covariance)
    }

    /// The standard deviation of a form.
    fn standard_deviation(&self, form: &LinearForm) -> Option<f64> {
        let deviation = self.covariance(form, 0.0)?.sqrt();
        (deviation.is_finite() && deviation > 0.0).then_some(deviation)
    }
}

/// The name that an expression is, brackets aside.
fn sole_name(expression: &Expression) -> Option<&Path> {
    match &expression.kind {
        ExpressionKind::Name(path) => Some(path),
        ExpressionKind::Bracket(inner) => sole_name(inner),
        _ => None,
    }
}
