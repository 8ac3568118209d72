//! Sources: `gaussian(...)`, by whichever description the engineer has.

use super::arguments::Arguments;
use super::covariance::{constant_of, table_notes};
use super::mismatch::Wanted;
use super::{Lowering, Scope, unit_or_si};
use crate::check::model::Kind;
use crate::check::names::ItemId;
use crate::check::value::{Covariance, Number, Scalar, Value};
use crate::covariance::kernel::Smoothness;
use crate::covariance::source::{Law, Source};
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{Call, Expression, ExpressionKind, Word};
use crate::source::Span;
use crate::units::{Dimension, Unit, show};
use std::rc::Rc;

/// The agreement asked of a raw autocorrelation's constant part with the square of the mean.
const MEAN_SQUARE: f64 = 1e-6;

const ARGUMENTS: &[&str] = &[
    "mean",
    "standard_deviation",
    "coefficient_of_variation",
    "correlation",
    "autocovariance",
    "autocorrelation",
    "spectrum",
];

/// What a source is called in messages, and what is known of it before its arguments are looked at.
#[derive(Clone, Copy)]
pub(super) struct Subject<'a> {
    pub name: &'a Word,
    pub unit: Option<&'a Unit>,
    pub dimension: Option<Dimension>,
    pub scope: Scope<'a>,
}

/// A process by its mean and its covariance function or its spectrum.
pub(super) struct Description {
    pub mean: f64,
    pub law: Law,
    /// Where the kernel or the spectrum stands.
    pub place: Span,
    pub dimension: Dimension,
    pub unit: Option<Rc<Unit>>,
    /// What was taken for granted, for the reader of results.
    pub notes: Vec<String>,
}

impl Lowering<'_, '_, '_> {
    /// The value of a process or margin: a fresh source, or an expression in others.
    pub(super) fn process_or_margin(
        &mut self,
        item: ItemId,
        kind: Kind,
        name: &Word,
        declared: Option<Option<Rc<Unit>>>,
        expression: &Expression,
    ) -> Value {
        let scope = Scope::plain(self.names.item(item).instance);
        let Some(call) = fresh_source(expression) else {
            return self.value(expression, scope);
        };
        if kind == Kind::Margin {
            return self.source_in_margin(expression.span, name);
        }
        let declared = declared.flatten();
        let subject = Subject {
            name,
            unit: declared.as_deref(),
            dimension: declared.as_ref().map(|unit| unit.dimension()),
            scope,
        };
        let Some(description) = self.description(call, subject) else {
            return Value::Fault;
        };
        let tested = match &description.law {
            Law::Kernel(kernel) => self.valid_kernel(item, kernel, description.place, name),
            // Looked at where it is made.
            Law::Spectrum(_) => Some(Vec::new()),
        };
        tested
            .and_then(|tested| self.finish(item, name, description, tested))
            .unwrap_or(Value::Fault)
    }

    fn source_in_margin(&mut self, place: Span, name: &Word) -> Value {
        let message = format!("the margin `{}` cannot make a process of its own", name.text);
        self.report(
            Diagnostic::new(Code::TypeMismatch, place, message)
                .help("declare the process with `process NAME = gaussian(...)` and use NAME here"),
        );
        Value::Fault
    }

    fn finish(&mut self, item: ItemId, name: &Word, description: Description, tested: Vec<String>) -> Option<Value> {
        let mut notes = description.notes;
        if let Law::Kernel(kernel) = &description.law {
            notes.extend(table_notes(kernel, &self.names.full_name(item)));
        }
        notes.extend(tested);
        let source = Source::new(self.names.full_name(item), description.law, name.span, notes);
        if let Smoothness::Unclear { reason } = source.smoothness() {
            let message = format!("it cannot be told how smooth the process `{}` is", name.text);
            let finding = Diagnostic::new(Code::KernelUnclear, description.place, message)
                .here(reason.clone())
                .help("write the kernel so that it begins as 1 less a power of the lag");
            self.report(finding);
            return None;
        }
        let form = self.source(source, description.mean);
        Some(self.form(form, description.dimension, description.unit))
    }

    fn description(&mut self, call: &Call, subject: Subject<'_>) -> Option<Description> {
        let Some(arguments) = self.arguments(call, &[], ARGUMENTS) else {
            // What was meant is not known, but what is wrong within can be said all the same.
            for argument in &call.arguments {
                self.value(&argument.value, subject.scope.in_kernel());
            }
            return None;
        };
        let name = &subject.name.text;
        let given = |names: &[&str]| -> Vec<Span> {
            names
                .iter()
                .filter_map(|name| arguments.word(name))
                .map(|word| word.span)
                .collect()
        };
        // A scatter stands beside a correlation or a spectrum.
        let by_correlation: &[&str] = if arguments.get("spectrum").is_some() {
            &["correlation"]
        } else {
            &["standard_deviation", "coefficient_of_variation", "correlation"]
        };
        let ways = [
            given(by_correlation),
            given(&["autocovariance"]),
            given(&["autocorrelation"]),
            given(&["spectrum"]),
        ];
        let used: Vec<&Span> = ways.iter().filter_map(|places| places.first()).collect();
        match used.as_slice() {
            [] => {
                let message = format!("the process `{name}` has no description of how it varies");
                self.report(Diagnostic::new(Code::ProcessDescription, call.brackets, message).help(
                    "give `standard_deviation` (or `coefficient_of_variation`) with `correlation`, or one of \
                     `autocovariance`, `autocorrelation` and `spectrum`",
                ));
                None
            }
            [_] if !ways[1].is_empty() => self.by_autocovariance(&arguments, subject),
            [_] if !ways[2].is_empty() => self.by_autocorrelation(&arguments, subject),
            [_] if !ways[3].is_empty() => self.by_spectrum(call, &arguments, subject),
            [_] => self.by_correlation(call, &arguments, subject),
            [first, second, ..] => {
                let message = format!("the process `{name}` is described twice");
                self.report(
                    Diagnostic::new(Code::ProcessDescription, **second, message)
                        .here("a second description")
                        .label(**first, "a first one")
                        .help("keep one of the two, and state the other as an `expect`"),
                );
                None
            }
        }
    }

    /// Standard deviation or coefficient of variation, and a correlation function.
    fn by_correlation(&mut self, call: &Call, arguments: &Arguments<'_>, subject: Subject<'_>) -> Option<Description> {
        let given = ["standard_deviation", "coefficient_of_variation"]
            .iter()
            .find_map(|name| arguments.get(name));
        if !self.scattered_once(arguments, subject) {
            return None;
        }
        if given.is_none() {
            let message = format!("the process `{}` has a correlation but no scatter", subject.name.text);
            self.report(
                Diagnostic::new(Code::ProcessDescription, call.brackets, message)
                    .help("add `standard_deviation: ...` or `coefficient_of_variation: ...`"),
            );
        }
        let correlation = arguments.get("correlation");
        if correlation.is_none() {
            let message = format!("the process `{}` has no correlation function", subject.name.text);
            self.report(
                Diagnostic::new(Code::ProcessDescription, call.brackets, message)
                    .help("add `correlation: ...`, such as `matern(smoothness: 5/2, length: 10 s)`"),
            );
        }
        let mean = self.mean(arguments, subject);
        let scatter = self.scatter(arguments, mean.as_ref(), subject);
        let kernel = correlation.and_then(|expression| {
            let kernel = self.kernel(expression, subject.scope, Dimension::PLAIN, "a correlation function")?;
            self.one_at_zero(&kernel, expression.span)?;
            self.no_constant_term(&kernel, expression.span)?;
            Some(kernel)
        });
        let (mean, deviation, kernel) = (mean?, scatter?, kernel?);
        let mean_value = known(&mean)?;
        let value = known(&deviation)?;
        let place = correlation.map_or(call.brackets, |expression| expression.span);
        let variance = value * value;
        if !variance.is_normal() {
            let place = given.map_or(call.brackets, |expression| expression.span);
            self.variance_beyond_bounds(place, subject);
            return None;
        }
        let kernel = kernel.scaled(variance).ok()?;
        Some(Description {
            mean: mean_value,
            law: kernel.into(),
            place,
            dimension: deviation.dimension,
            unit: mean.unit.clone().or(deviation.unit),
            notes: Vec::new(),
        })
    }

    /// Refuses a scatter that is given twice.
    fn scattered_once(&mut self, arguments: &Arguments<'_>, subject: Subject<'_>) -> bool {
        let words = ["standard_deviation", "coefficient_of_variation"].map(|name| arguments.word(name));
        let [Some(first), Some(word)] = words else {
            return true;
        };
        let first = first.span;
        let message = format!("the process `{}` has its scatter given twice", subject.name.text);
        self.report(
            Diagnostic::new(Code::ProcessDescription, word.span, message)
                .here("a second scatter")
                .label(first, "a first one")
                .help("keep one of the two, and state the other as an `expect`"),
        );
        false
    }

    /// The standard deviation, given as such or as a share of the mean; `None` where it is neither, or at fault.
    pub(super) fn scatter(
        &mut self,
        arguments: &Arguments<'_>,
        mean: Option<&Scalar>,
        subject: Subject<'_>,
    ) -> Option<Scalar> {
        let (deviation, variation) = (
            arguments.get("standard_deviation"),
            arguments.get("coefficient_of_variation"),
        );
        match (deviation, variation) {
            (Some(expression), _) => self.deviation(expression, mean, subject),
            (None, Some(expression)) => self.variation(expression, arguments, mean, subject),
            (None, None) => None,
        }
    }

    /// A variance that no double holds.
    pub(super) fn variance_beyond_bounds(&mut self, place: Span, subject: Subject<'_>) {
        let message = format!(
            "the square of the standard deviation of `{}` is beyond all bounds",
            subject.name.text
        );
        self.report(
            Diagnostic::new(Code::ValueRange, place, message)
                .help("check its unit: the square must lie between 1e-307 and 1.8e308 in SI units"),
        );
    }

    /// The mean; a bare 0 where none is given. `None` where it is at fault.
    pub(super) fn mean(&mut self, arguments: &Arguments<'_>, subject: Subject<'_>) -> Option<Scalar> {
        let Some(expression) = arguments.get("mean") else {
            let mut zero = Scalar::new(Number::Known(0.0), Dimension::PLAIN);
            zero.bare_zero = true;
            return Some(zero);
        };
        let what = format!("the mean of `{}`", subject.name.text);
        match subject.dimension {
            Some(dimension) => {
                let wanted = Wanted {
                    dimension,
                    unit: subject.unit,
                };
                self.number(expression, subject.scope, wanted, &what, None)
            }
            None => {
                let value = self.value(expression, subject.scope);
                self.scalar(value, expression.span, &what)
            }
        }
    }

    fn deviation(&mut self, expression: &Expression, mean: Option<&Scalar>, subject: Subject<'_>) -> Option<Scalar> {
        let what = format!("the standard deviation of `{}`", subject.name.text);
        let wanted = subject
            .dimension
            .or(mean.filter(|mean| !mean.bare_zero).map(|mean| mean.dimension));
        let deviation = match wanted {
            Some(dimension) => {
                let of_mean = mean.and_then(|mean| mean.unit.as_deref());
                let unit = subject.unit.or(of_mean);
                self.number(expression, subject.scope, Wanted { dimension, unit }, &what, None)?
            }
            None => {
                let value = self.value(expression, subject.scope);
                self.scalar(value, expression.span, &what)?
            }
        };
        self.positive(&deviation, expression.span, &what)?;
        Some(deviation)
    }

    fn variation(
        &mut self,
        expression: &Expression,
        arguments: &Arguments<'_>,
        mean: Option<&Scalar>,
        subject: Subject<'_>,
    ) -> Option<Scalar> {
        let what = format!("the coefficient of variation of `{}`", subject.name.text);
        let variation = self.number(expression, subject.scope, Dimension::PLAIN, &what, None)?;
        self.positive(&variation, expression.span, &what)?;
        let mean = mean?;
        let mean_value = known(mean)?;
        if mean_value == 0.0 {
            let message = format!(
                "`{}` has a mean of 0, so a coefficient of variation says nothing",
                subject.name.text
            );
            let mut finding = Diagnostic::new(Code::ProcessZeroMean, expression.span, message)
                .here("any share of 0 is 0: the process would not vary at all")
                .help("give `standard_deviation` instead, in the unit of the process");
            if let Some(place) = arguments.get("mean") {
                finding = finding.label(place.span, "the mean");
            }
            self.report(finding);
            return None;
        }
        let deviation = Number::Known(known(&variation)? * mean_value.abs());
        Some(Scalar::new(deviation, mean.dimension).shown_in(mean.unit.clone()))
    }

    /// Refuses what is not greater than 0.
    fn positive(&mut self, scalar: &Scalar, place: Span, what: &str) -> Option<()> {
        match scalar.value {
            Number::Known(value) if value > 0.0 => Some(()),
            Number::Known(value) => {
                let message = format!("{what} must be greater than 0");
                let shown = show(value, &unit_or_si(scalar.unit.as_ref(), scalar.dimension), 6);
                let help = if value < 0.0 {
                    "remove the sign"
                } else {
                    "give the scatter; what does not vary is a `constant`"
                };
                self.report(
                    Diagnostic::new(Code::ValueRange, place, message)
                        .here(format!("this is {shown}"))
                        .help(help),
                );
                None
            }
            Number::Open(_) | Number::Unset => None,
        }
    }

    fn by_autocovariance(&mut self, arguments: &Arguments<'_>, subject: Subject<'_>) -> Option<Description> {
        let mean = self.mean(arguments, subject);
        let expression = arguments.get("autocovariance")?;
        let covariance = self.covariance(expression, subject.scope, "an autocovariance")?;
        let mean = mean?;
        let dimension = self.root_dimension(&covariance, expression.span, &mean, subject)?;
        self.positive_variance(&covariance.kernel, expression.span, "autocovariance")?;
        Some(Description {
            mean: known(&mean)?,
            law: covariance.kernel.into(),
            place: expression.span,
            dimension,
            unit: mean.unit,
            notes: Vec::new(),
        })
    }

    /// The process's dimension, whose square the kernel must have.
    fn root_dimension(
        &mut self,
        covariance: &Covariance,
        place: Span,
        mean: &Scalar,
        subject: Subject<'_>,
    ) -> Option<Dimension> {
        let wanted = subject.dimension.or((!mean.bare_zero).then_some(mean.dimension));
        match (wanted, covariance.dimension.root(2)) {
            (None, Some(root)) => Some(root),
            (None, None) => {
                self.dimension_too_large(place);
                None
            }
            (Some(wanted), _) if wanted.power_i32(2) == Some(covariance.dimension) => Some(wanted),
            (Some(wanted), _) => {
                let square = wanted.power_i32(2)?;
                let what = format!("a covariance of `{}`", subject.name.text);
                let own = covariance.dimension == wanted;
                let value = covariance.kernel.value(0.0).map_or(Number::Unset, Number::Known);
                let unit = subject.unit.filter(|_| own).map(|unit| Rc::new(unit.clone()));
                let found = Scalar::new(value, covariance.dimension).shown_in(unit);
                self.mismatch(place, &found, square, &what, None);
                None
            }
        }
    }

    /// The raw second moment: the square of the mean is taken off, after it has been looked for.
    fn by_autocorrelation(&mut self, arguments: &Arguments<'_>, subject: Subject<'_>) -> Option<Description> {
        let mean = self.mean(arguments, subject);
        let expression = arguments.get("autocorrelation")?;
        let raw = self.covariance(expression, subject.scope, "a raw autocorrelation")?;
        let mean = mean?;
        let dimension = self.root_dimension(&raw, expression.span, &mean, subject)?;
        let mean_value = known(&mean)?;
        let square = mean_value * mean_value;
        let unit = mean.unit.as_ref().and_then(|unit| unit.power(2));
        let unit = unit
            .filter(|unit| unit.dimension() == raw.dimension)
            .unwrap_or_else(|| Unit::si(raw.dimension));
        let at_zero = self.at_zero(&raw.kernel, expression.span)?;
        if at_zero <= square {
            let (total, square) = (show(at_zero, &unit, 6), show(square, &unit, 6));
            let message = format!(
                "the mean square of `{}` must be larger than the square of its mean",
                subject.name.text
            );
            self.report(
                Diagnostic::new(Code::ProcessMeanSquare, expression.span, message)
                    .here(format!(
                        "{total} at lag 0, against {square} from the mean: nothing, or less, would be left as variance"
                    ))
                    .help("give the function as `autocovariance` if the mean has been taken off, or check the mean"),
            );
            return None;
        }
        let (constant, found_how, notes) = match constant_of(&raw.kernel, subject.name) {
            Ok(found) => found,
            Err(why) => {
                let message = "the constant part of this autocorrelation cannot be told";
                self.report(Diagnostic::new(Code::KernelUnclear, expression.span, message).here(why.to_string()));
                return None;
            }
        };
        let agree = (constant - square).abs() <= MEAN_SQUARE * at_zero;
        if !agree {
            let (constant, square) = (show(constant, &unit, 6), show(square, &unit, 6));
            let message = format!(
                "the autocorrelation of `{}` does not go down to the square of its mean",
                subject.name.text
            );
            self.report(
                Diagnostic::new(Code::ProcessMeanSquare, expression.span, message)
                    .here(format!(
                        "{found_how} {constant}, the square of the mean is {square}: the difference would count as variance"
                    ))
                    .help(
                        "a raw autocorrelation E[X(t) X(t+tau)] holds the square of the mean: add it, or give the \
                         function as `autocovariance`",
                    ),
            );
            return None;
        }
        let kernel = raw.kernel.without_constant(constant);
        self.positive_variance(&kernel, expression.span, "autocorrelation less the square of the mean")?;
        Some(Description {
            mean: mean_value,
            law: kernel.into(),
            place: expression.span,
            dimension,
            unit: mean.unit,
            notes,
        })
    }
}

pub(super) fn known(scalar: &Scalar) -> Option<f64> {
    match scalar.value {
        Number::Known(value) => Some(value),
        Number::Open(_) | Number::Unset => None,
    }
}

/// The call of `gaussian(...)` that an expression is, brackets aside.
pub(in crate::check) fn fresh_source(expression: &Expression) -> Option<&Call> {
    match &expression.kind {
        ExpressionKind::Bracket(inner) => fresh_source(inner),
        ExpressionKind::Call(call) => match call.function.words.as_slice() {
            [word] if &*word.text == "gaussian" => Some(call),
            _ => None,
        },
        _ => None,
    }
}
