//! Calls: functions of numbers, operations on processes, kernels. What a call means depends on where it stands.

use super::not_yet::Later;
use super::operations::OPERATIONS;
use super::spectrum_family::SPECTRA;
use super::{Context, Lowering, Scope, family};
use crate::check::names::{Resolved, choice, near};
use crate::check::value::{Number, Scalar, Value};
use crate::diagnostics::{Code, Diagnostic};
use crate::expression::Function;
use crate::language::tree::{Call, DeclarationKind, Expression, FunctionKeyword};
use crate::source::Span;
use crate::units::Dimension;
use std::f64::consts::TAU;

/// Functions that take an angle off: its count in radians, or in turns.
const ANGLE_COUNTS: &[(&str, f64)] = &[("radians", 1.0), ("turns", TAU)];

/// The distributions of the language, for variables and climates.
const DISTRIBUTIONS: &[&str] = &[
    "normal",
    "lognormal",
    "uniform",
    "gumbel",
    "frechet",
    "weibull",
    "gamma",
    "beta",
    "truncated_normal",
];

impl Lowering<'_, '_, '_> {
    pub(super) fn call(&mut self, span: Span, call: &Call, scope: Scope<'_>) -> Value {
        if let [word] = call.function.words.as_slice() {
            let name = &*word.text;
            if let Some(function) = Function::find(name) {
                return self.function(span, call, function, scope);
            }
            if let Some((_, divisor)) = ANGLE_COUNTS.iter().find(|(known, _)| *known == name) {
                return self.angle_count(span, call, *divisor, scope);
            }
            // Some names are those of a kernel and of a spectrum: where they stand decides.
            if SPECTRA.contains(&name) && scope.context == Context::Spectrum {
                return self.spectrum_family(span, call, name, scope);
            }
            if family::FAMILIES.contains(&name) {
                return match scope.context {
                    Context::Kernel => self.family(span, call, name, scope),
                    Context::Spectrum => self.kernel_for_spectrum(span),
                    Context::Plain => self.kernel_out_of_place(span, name),
                };
            }
            if SPECTRA.contains(&name) {
                return self.spectrum_out_of_place(span, name, scope);
            }
            if OPERATIONS.contains(&name) {
                return self.operation(call, name, scope);
            }
            if name == "gaussian" {
                return self.source_inside_arithmetic(span);
            }
            if DISTRIBUTIONS.contains(&name) {
                self.not_yet(span, Later::Variables);
                return Value::Fault;
            }
        }
        self.declared_function(span, call, scope)
    }

    fn declared_function(&mut self, span: Span, call: &Call, scope: Scope<'_>) -> Value {
        let name = super::word_text(&call.function);
        let item = match self.names.resolve(&call.function, scope.instance) {
            Ok(Resolved::Item(item)) => item,
            Ok(Resolved::Fault) => return Value::Fault,
            Err(_) => {
                self.unknown_function(&name, call, scope);
                return Value::Fault;
            }
        };
        match &self.names.declaration(item).kind {
            DeclarationKind::Function {
                keyword: FunctionKeyword::Kernel,
                ..
            } => match scope.context {
                Context::Kernel => self.user_kernel(item, call, scope),
                Context::Spectrum => self.kernel_for_spectrum(span),
                Context::Plain => self.kernel_out_of_place(span, &name),
            },
            DeclarationKind::Function {
                keyword: FunctionKeyword::Spectrum,
                ..
            } => match scope.context {
                Context::Spectrum => self.user_spectrum(item, span, call, scope),
                Context::Kernel | Context::Plain => self.spectrum_out_of_place(span, &name, scope),
            },
            DeclarationKind::Function { .. } => Value::Fault, // profiles: reported where they are declared
            _ => {
                let help = "only functions, operations and kernels are called; to multiply, write `*`";
                self.report(
                    Diagnostic::new(
                        Code::CallUnknown,
                        call.function.span,
                        format!("`{name}` cannot be called"),
                    )
                    .here("a quantity")
                    .help(help),
                );
                Value::Fault
            }
        }
    }

    fn unknown_function(&mut self, name: &str, call: &Call, scope: Scope<'_>) {
        let message = format!("there is no function called `{name}`");
        let mut finding = Diagnostic::new(Code::CallUnknown, call.function.span, message);
        let declared = self.names.near(name, scope.instance);
        let functions = Function::ALL.iter().map(|function| function.name());
        let angles = ANGLE_COUNTS.iter().map(|(known, _)| *known);
        let known = functions
            .chain(angles)
            .chain(family::FAMILIES.iter().copied())
            .chain(SPECTRA.iter().copied())
            .chain(OPERATIONS.iter().copied())
            .chain(["gaussian"])
            .chain(declared);
        finding.help = Some(match (name, choice(&near(name, known))) {
            ("log", _) => "write `ln` for base e, or `log10` for base 10".to_string(),
            (_, Some(near)) => format!("did you mean {near}?"),
            (_, None) => "to multiply, write `*`".to_string(),
        });
        self.report(finding);
    }

    fn kernel_out_of_place(&mut self, span: Span, name: &str) -> Value {
        let help = format!("write `gaussian(mean: ..., standard_deviation: ..., correlation: {name}(...))`");
        self.wrong_kind(span, "a kernel", "a quantity", &help);
        Value::Fault
    }

    fn source_inside_arithmetic(&mut self, span: Span) -> Value {
        self.report(
            Diagnostic::new(
                Code::TypeMismatch,
                span,
                "`gaussian(...)` makes a new random quantity, so it must stand alone in a `process`",
            )
            .help("declare `process NAME = gaussian(...)` and use NAME here: one name is one realisation"),
        );
        Value::Fault
    }

    /// A function of numbers.
    fn function(&mut self, span: Span, call: &Call, function: Function, scope: Scope<'_>) -> Value {
        let name = function.name();
        let mut scalars = Vec::with_capacity(call.arguments.len());
        for argument in &call.arguments {
            if let Some(word) = &argument.name {
                let message = format!("the argument of `{name}` has no name");
                self.report(Diagnostic::new(Code::CallArgument, word.span, message).help("remove the name"));
            }
            match self.value(&argument.value, scope) {
                Value::Scalar(scalar) => scalars.push((argument.value.span, scalar)),
                Value::Fault => {}
                Value::Form(_) => {
                    self.report(
                        Diagnostic::new(
                            Code::TypeNonlinear,
                            argument.value.span,
                            format!("`{name}` of a process is not Gaussian"),
                        )
                        .here("this varies in time")
                        .help("processes are only added, scaled, differentiated, delayed and passed through linear systems; `abs(m) > a` may stand in `failure when`"),
                    );
                }
                Value::Kernel(_) => {
                    self.wrong_kind(
                        argument.value.span,
                        "a kernel",
                        "a number",
                        "kernels are only added and multiplied",
                    );
                }
                Value::Spectrum(_) => {
                    let help = "spectra are only added and scaled";
                    self.wrong_kind(argument.value.span, "a spectrum", "a number", help);
                }
            }
        }
        if !function.arity().contains(&call.arguments.len()) {
            let (least, most) = (function.arity().start().to_owned(), function.arity().end().to_owned());
            let wanted = if most == usize::MAX {
                format!("at least {least} arguments")
            } else {
                format!("{least} argument{}", if least == 1 { "" } else { "s" })
            };
            let message = format!("`{name}` takes {wanted}");
            self.report(Diagnostic::new(Code::CallArgument, call.brackets, message));
            return Value::Fault;
        }
        if scalars.len() < call.arguments.len() {
            return Value::Fault;
        }
        let Some(dimension) = self.function_dimension(function, &scalars) else {
            return Value::Fault;
        };
        let numbers: Vec<Number> = scalars.iter().map(|(_, scalar)| scalar.value).collect();
        let known: Option<Vec<f64>> = numbers
            .iter()
            .map(|number| match number {
                Number::Known(value) => Some(*value),
                _ => None,
            })
            .collect();
        let value = match known {
            Some(values) => Number::Known(function.evaluate(&values)),
            None => {
                let nodes: Option<Vec<_>> = numbers.iter().map(|number| self.node(*number)).collect();
                match nodes.and_then(|nodes| self.arena.apply(function, &nodes)) {
                    Some(node) => Number::Open(node),
                    None => Number::Unset,
                }
            }
        };
        let same = matches!(function, Function::Abs | Function::Min | Function::Max);
        let unit = scalars
            .first()
            .and_then(|(_, scalar)| scalar.unit.clone())
            .filter(|_| same);
        self.finite(Scalar::new(value, dimension).shown_in(unit), span)
    }

    /// The dimension of a function's value; arguments of the wrong dimension are reported.
    fn function_dimension(&mut self, function: Function, scalars: &[(Span, Scalar)]) -> Option<Dimension> {
        let name = function.name();
        let (place, first) = scalars.first()?;
        let demand = |lowering: &mut Self, wanted: Dimension, result: Dimension| {
            if first.dimension == wanted || first.bare_zero {
                return Some(result);
            }
            lowering.mismatch(*place, first, wanted, &format!("the argument of `{name}`"), None);
            None
        };
        match function {
            Function::Sin | Function::Cos | Function::Tan => demand(self, Dimension::ANGLE, Dimension::PLAIN),
            Function::Asin | Function::Acos | Function::Atan => demand(self, Dimension::PLAIN, Dimension::ANGLE),
            Function::Exp
            | Function::Ln
            | Function::Log10
            | Function::Sinh
            | Function::Cosh
            | Function::Tanh
            | Function::Erf => demand(self, Dimension::PLAIN, Dimension::PLAIN),
            Function::Sqrt => {
                let root = first.dimension.root(2);
                if root.is_none() {
                    self.dimension_too_large(*place);
                }
                root
            }
            Function::Step => Some(Dimension::PLAIN),
            Function::Abs => Some(first.dimension),
            Function::Min | Function::Max => {
                let leader = scalars.iter().find(|(_, scalar)| !scalar.bare_zero);
                let Some((place, leader)) = leader else {
                    return Some(Dimension::PLAIN);
                };
                let others = scalars.iter().filter(|(_, scalar)| !scalar.bare_zero);
                let unlike = others
                    .into_iter()
                    .find(|(_, scalar)| scalar.dimension != leader.dimension);
                match unlike {
                    None => Some(leader.dimension),
                    Some((other, scalar)) => {
                        let first = (*place, leader.dimension, leader.unit.as_ref());
                        let second = (*other, scalar.dimension, scalar.unit.as_ref());
                        self.unlike(first, second, "compared with");
                        None
                    }
                }
            }
        }
    }

    /// `turns(x)` and `radians(x)`: an angle as a plain number.
    fn angle_count(&mut self, span: Span, call: &Call, divisor: f64, scope: Scope<'_>) -> Value {
        let Some(arguments) = self.arguments(call, &["an angle"], &[]) else {
            return Value::Fault;
        };
        let Some(&subject) = arguments.subjects.first() else {
            return Value::Fault;
        };
        let subject: &Expression = subject;
        let what = format!("the argument of `{}`", super::word_text(&call.function));
        let Some(angle) = self.number(subject, scope, Dimension::ANGLE, &what, None) else {
            return Value::Fault;
        };
        let value = match angle.value {
            Number::Known(value) => Number::Known(value / divisor),
            Number::Open(node) => {
                let divisor = self.arena.number(divisor);
                let operands = [
                    crate::expression::Operand::direct(node),
                    crate::expression::Operand::inverse(divisor),
                ];
                Number::Open(self.arena.product(&operands))
            }
            Number::Unset => Number::Unset,
        };
        self.finite(Scalar::new(value, Dimension::PLAIN), span)
    }
}
