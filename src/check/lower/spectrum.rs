//! Spectra that a model declares.

use super::function::{Parameters, known_values};
use super::{Context, Lowering, Scope, word_text};
use crate::check::names::ItemId;
use crate::check::value::{Area, Density, Number, Scalar, Value};
use crate::covariance::spectrum::{InvalidSpectrum, Spectrum, User};
use crate::diagnostics::{Code, Diagnostic};
use crate::expression::{NodeId, Symbol, Tape};
use crate::language::tree::{Call, DeclarationKind, Expression, FunctionParameter, UnitExpression, Word};
use crate::source::Span;
use crate::units::{Base, Dimension, show_number};
use std::f64::consts::TAU;
use std::sync::Arc;

/// So many operations may stand in the written spectra of a model, each call of one counted.
const MOST_WRITTEN: usize = 100_000;

/// The names the frequency may have, each with the unit that it stands for.
pub(super) const FREQUENCIES: [(&str, Frequency); 2] = [("omega", Frequency::Radian), ("f", Frequency::Hertz)];

/// What a declared spectrum counts frequency in.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Frequency {
    /// `omega`, in rad/s.
    Radian,
    /// `f`, in Hz.
    Hertz,
}

impl Frequency {
    /// An angular frequency in rad/s, as people read it.
    pub fn show(self, omega: f64) -> String {
        match self {
            Self::Radian => format!("{} rad/s", show_number(omega, 4)),
            Self::Hertz => format!("{} Hz", show_number(omega / TAU, 4)),
        }
    }
}

/// A spectrum that a model declares.
#[derive(Clone)]
pub(super) struct SpectrumDefinition {
    frequency: Frequency,
    parameters: Parameters,
    body: Body,
}

/// What is known of a spectrum's body before it is called.
#[derive(Clone)]
enum Body {
    /// An expression in the frequency and the arguments.
    Tape(Arc<Tape>, Dimension),
    /// Made of other spectra, whose arguments must be known: looked at again for each call.
    Spectra(Dimension),
    /// At fault: reported where it is declared.
    Fault,
}

impl Lowering<'_, '_, '_> {
    /// Looks at a declared spectrum once, with its arguments open.
    pub(super) fn spectrum_definition(
        &mut self,
        item: ItemId,
        name: &Word,
        parameters: &[FunctionParameter],
        unit: Option<&UnitExpression>,
        body: &Expression,
    ) {
        let faults = self.diagnostics.len();
        let declared = unit.map(|unit| self.unit(unit));
        let mut locals: Vec<(&str, Scalar)> = Vec::with_capacity(parameters.len());
        let mut arguments = Parameters::new();
        let mut frequency = Frequency::Radian;
        match parameters.split_first() {
            Some((first, others)) => {
                frequency = self.frequency(first);
                let node = self.arena.symbol(Symbol::Lag);
                locals.push((&first.name.text, open_frequency(node)));
                arguments = self.open_arguments(others, &mut locals);
            }
            None => {
                let message = format!("the spectrum `{}` has no frequency", name.text);
                let help = format!("write `spectrum {}(omega, ...) = ...` or `(f, ...)`", name.text);
                self.report(Diagnostic::new(Code::CallArgument, name.span, message).help(help));
            }
        }
        let scope = Scope {
            instance: self.names.item(item).instance,
            context: Context::Spectrum,
            locals: &locals,
        };
        let value = self.value(body, scope);
        let body = match value {
            _ if self.diagnostics.len() > faults => Body::Fault,
            Value::Scalar(scalar) => match self.node(scalar.value) {
                Some(node) => {
                    let dimension = scalar.dimension;
                    if let Some(Some(unit)) = &declared
                        && unit.dimension() != dimension
                    {
                        self.not_in_declared_unit(name, unit, body.span, dimension, None);
                    }
                    Body::Tape(Arc::new(Tape::compile(&self.arena, node)), dimension)
                }
                None => Body::Fault,
            },
            Value::Spectrum(density) => Body::Spectra(density.dimension),
            other => {
                if !matches!(other, Value::Fault) {
                    let help = "a spectrum is made of the frequency, its arguments, constants and other spectra";
                    self.wrong_kind(body.span, other.kind(), "a function of the frequency", help);
                }
                Body::Fault
            }
        };
        let definition = SpectrumDefinition {
            frequency,
            parameters: arguments,
            body,
        };
        self.spectra.insert(item, definition);
    }

    /// What the first argument of a declared spectrum counts.
    fn frequency(&mut self, first: &FunctionParameter) -> Frequency {
        let found = FREQUENCIES.iter().find(|(name, _)| *name == &*first.name.text);
        if found.is_none() {
            let message = format!(
                "the first argument of a spectrum is the frequency, `omega` or `f`, not `{}`",
                first.name.text
            );
            self.report(
                Diagnostic::new(Code::CallArgument, first.name.span, message)
                    .help("write `omega` for rad/s or `f` for Hz: the name says which"),
            );
        }
        let frequency = found.map_or(Frequency::Radian, |(_, frequency)| *frequency);
        if let Some(unit) = &first.unit {
            let wanted = match frequency {
                Frequency::Radian => "rad/s",
                Frequency::Hertz => "Hz",
            };
            let is_right = self.unit(unit).is_none_or(|unit| unit.text() == wanted);
            if !is_right {
                let message = format!("`{}` counts in {wanted}", first.name.text);
                self.report(
                    Diagnostic::new(Code::UnitMismatch, unit.span, message)
                        .help("leave its unit out, or use the other name: `omega` for rad/s, `f` for Hz"),
                );
            }
        }
        frequency
    }

    /// A call of a declared spectrum.
    pub(super) fn user_spectrum(&mut self, item: ItemId, span: Span, call: &Call, scope: Scope<'_>) -> Value {
        let Some(definition) = self.spectra.get(&item).cloned() else {
            return Value::Fault;
        };
        let firsts = FREQUENCIES.map(|(name, _)| name);
        let Some(scalars) = self.called_with(call, &definition.parameters, (&firsts, "frequency"), scope) else {
            return Value::Fault;
        };
        match (&definition.body, known_values(&scalars)) {
            (Body::Fault, _) => Value::Fault,
            (Body::Tape(tape, dimension), Some(values)) => {
                self.written_spectrum(call, span, (tape, *dimension), values, definition.frequency)
            }
            (Body::Spectra(_), Some(_)) => {
                let look = |lowering: &mut Self| lowering.spectrum_body_with(item, call, scalars);
                self.expanding(item, call, look).unwrap_or(Value::Fault)
            }
            // Called inside another spectrum's body: known when that one is called.
            (Body::Tape(_, dimension), None) => not_known_yet(per_angle(*dimension)),
            (Body::Spectra(dimension), None) => not_known_yet(Some(*dimension)),
        }
    }

    /// A spectrum written as an expression, with its arguments. A body without a per-angle is per unit of its argument.
    fn written_spectrum(
        &mut self,
        call: &Call,
        span: Span,
        (tape, dimension): (&Arc<Tape>, Dimension),
        values: Vec<(String, f64)>,
        frequency: Frequency,
    ) -> Value {
        let Some(full) = per_angle(dimension) else {
            self.dimension_too_large(span);
            return Value::Fault;
        };
        let factor = match frequency {
            Frequency::Hertz if full != dimension => 1.0 / TAU,
            _ => 1.0,
        };
        let name = word_text(&call.function);
        match self.user_density(&name, tape, values, span, frequency) {
            Some(spectrum) => match spectrum.scaled(factor) {
                Ok(spectrum) => Value::Spectrum(Density {
                    spectrum,
                    dimension: full,
                    area: Area::Open,
                }),
                Err(_) => Value::Fault,
            },
            None => Value::Fault,
        }
    }

    /// The density of an expression, or a finding that says what is wrong with it.
    pub(super) fn user_density(
        &mut self,
        name: &str,
        tape: &Arc<Tape>,
        values: Vec<(String, f64)>,
        place: Span,
        frequency: Frequency,
    ) -> Option<Spectrum> {
        self.written = self.written.saturating_add(tape.size());
        if self.written > MOST_WRITTEN {
            let message = format!("the written spectra up to here have more than {MOST_WRITTEN} operations together");
            self.report(
                Diagnostic::new(Code::ModelTooLarge, place, message)
                    .help("use the spectra of the language where they serve, or a table"),
            );
            return None;
        }
        let why = match User::new(name, Arc::clone(tape), values) {
            Ok(spectrum) => return Some(spectrum.into()),
            Err(why) => why,
        };
        let finding = |code, message: String| Diagnostic::new(code, place, message);
        self.report(match why {
            InvalidSpectrum::Negative { frequency: at, density } => finding(
                Code::SpectrumInvalid,
                format!(
                    "no process has the spectrum `{name}`: its density is negative at {}",
                    frequency.show(at)
                ),
            )
            .here(format!("{} there, in SI units per rad/s", show_number(density, 4)))
            .help("a density is a share of the variance and never negative: check the signs and the brackets"),
            InvalidSpectrum::NoValue { frequency: at } => finding(
                Code::SpectrumInvalid,
                format!("the density of `{name}` has no finite value at {}", frequency.show(at)),
            )
            .here("undefined or infinite there")
            .help("a line is no density: give what oscillates at one frequency as `correlation: harmonic(...)`"),
            InvalidSpectrum::InfiniteAtZero { exponent } => finding(
                Code::SpectrumInvalid,
                format!("the spectrum `{name}` has infinite power at low frequency"),
            )
            .here(format!("grows like frequency^{} towards 0", show_number(exponent, 6)))
            .help("let it stay finite below some frequency: its area up to there must be finite"),
            InvalidSpectrum::Zero => finding(
                Code::SpectrumInvalid,
                format!("the spectrum `{name}` is 0 at every frequency"),
            )
            .help("check the numbers it is made from"),
            InvalidSpectrum::Unclear { at_infinity, reason } => {
                let (end, h) = if at_infinity {
                    ("high", "1/frequency")
                } else {
                    ("low", "the frequency")
                };
                finding(
                    Code::SpectrumUnclear,
                    format!("it cannot be told how the spectrum `{name}` behaves at {end} frequency"),
                )
                .here(format!("with h for {h}: {reason}"))
                .help("write it so that it goes like a power of the frequency there, or faster, or give a table")
            }
        });
        None
    }

    /// The body of a spectrum made of spectra, with the values of its arguments.
    fn spectrum_body_with(&mut self, item: ItemId, call: &Call, scalars: Vec<(&str, Scalar)>) -> Value {
        let DeclarationKind::Function { parameters, value, .. } = &self.names.declaration(item).kind else {
            return Value::Fault;
        };
        let mut locals = scalars;
        if let Some(first) = parameters.first() {
            let node = self.arena.symbol(Symbol::Lag);
            locals.push((&first.name.text, open_frequency(node)));
        }
        let scope = Scope {
            instance: self.names.item(item).instance,
            context: Context::Spectrum,
            locals: &locals,
        };
        let before = self.diagnostics.len();
        let value = self.value(value, scope);
        self.with_these_arguments(before, call);
        match value {
            Value::Spectrum(density) => Value::Spectrum(density),
            _ => Value::Fault,
        }
    }

    pub(super) fn spectrum_out_of_place(&mut self, span: Span, name: &str, scope: Scope<'_>) -> Value {
        let (wanted, help) = match scope.context {
            Context::Kernel => ("a kernel", format!("give it as `spectrum: {name}(...)`")),
            _ => (
                "a quantity",
                format!("write `gaussian(mean: ..., spectrum: {name}(...))`"),
            ),
        };
        self.wrong_kind(span, "a spectrum", wanted, &help);
        Value::Fault
    }

    pub(super) fn kernel_for_spectrum(&mut self, span: Span) -> Value {
        let help = "give it as `correlation:` with `standard_deviation:`; its spectrum follows from it";
        self.wrong_kind(span, "a kernel", "a spectrum", help);
        Value::Fault
    }
}

fn open_frequency(node: NodeId) -> Scalar {
    Scalar::new(Number::Open(node), Dimension::ANGULAR_FREQUENCY)
}

/// A spectrum whose arguments are still open: nothing but its dimension is looked at.
pub(super) fn not_known_yet(dimension: Option<Dimension>) -> Value {
    match dimension {
        Some(dimension) => Value::Spectrum(Density {
            spectrum: Spectrum::zero(),
            dimension,
            area: Area::Open,
        }),
        None => Value::Fault,
    }
}

/// The dimension of a density whose body may leave the per-angle out.
fn per_angle(dimension: Dimension) -> Option<Dimension> {
    if *dimension.exponent(Base::Angle).numer() == 0 {
        dimension.over(Dimension::ANGLE)
    } else {
        Some(dimension)
    }
}
