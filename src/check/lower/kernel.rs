//! Kernels: those the language knows by name, and those a model writes out.

use super::{Context, Lowering, Scope};
use crate::check::names::ItemId;
use crate::check::value::{Covariance, Number, Scalar, Value};
use crate::covariance::kernel::{
    BandLimited, Beyond, Harmonic, InvalidParameter, Kernel, Length, LengthOf, NoLength, Oscillator, Tabulated, User,
};
use crate::diagnostics::{Code, Diagnostic};
use crate::expression::{Symbol, Tape};
use crate::language::tree::{
    Call, DeclarationKind, Expression, ExpressionKind, FunctionParameter, UnitExpression, Word,
};
use crate::source::Span;
use crate::units::{Dimension, show_number};
use std::sync::Arc;

/// The kernels the language knows by name.
pub(super) const FAMILIES: &[&str] = &[
    "squared_exponential",
    "exponential",
    "matern",
    "rational_quadratic",
    "oscillator",
    "damped_cosine",
    "harmonic",
    "band_limited",
    "triangular",
    "tabulated",
];

/// Kernels made of kernels made of kernels are followed so deep.
const DEEPEST_KERNEL: usize = 32;

/// So many calls of kernels made of kernels are looked into in one model.
const MOST_KERNEL_CALLS: usize = 100_000;

/// A kernel that a model declares.
#[derive(Clone)]
pub(super) struct KernelDefinition {
    parameters: Vec<(Box<str>, Dimension)>,
    body: Body,
}

/// What is known of a kernel's body before it is called.
#[derive(Clone)]
enum Body {
    /// An expression in the lag and the arguments.
    Tape(Arc<Tape>, Dimension),
    /// Made of other kernels, whose arguments must be known: looked at again for each call.
    Kernels,
    /// At fault: reported where it is declared.
    Fault,
}

impl Lowering<'_, '_, '_> {
    /// Looks at a declared kernel once, with its arguments open.
    pub(super) fn kernel_definition(
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
        let mut arguments = Vec::with_capacity(parameters.len());
        match parameters.split_first() {
            Some((lag, others)) => {
                self.lag(lag);
                let node = self.arena.symbol(Symbol::Lag);
                locals.push((&lag.name.text, Scalar::new(Number::Open(node), Dimension::TIME)));
                for (index, parameter) in others.iter().enumerate() {
                    if locals.iter().any(|(known, _)| *known == &*parameter.name.text) {
                        let message = format!("`{}` is an argument twice", parameter.name.text);
                        self.report(
                            Diagnostic::new(Code::NameRepeated, parameter.name.span, message)
                                .help("give one of the two another name"),
                        );
                    }
                    let unit = parameter.unit.as_ref().map(|unit| self.unit(unit));
                    let dimension = unit.flatten().map_or(Dimension::PLAIN, |unit| unit.dimension());
                    let node = self
                        .arena
                        .symbol(Symbol::Argument(u16::try_from(index).unwrap_or(u16::MAX)));
                    locals.push((&parameter.name.text, Scalar::new(Number::Open(node), dimension)));
                    arguments.push((parameter.name.text.clone(), dimension));
                }
            }
            None => self.no_lag(name),
        }
        let scope = Scope {
            instance: self.names.item(item).instance,
            context: Context::Kernel,
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
            Value::Kernel(_) => Body::Kernels,
            Value::Form(_) => {
                let help = "a kernel is made of the lag, its arguments and constants";
                self.wrong_kind(body.span, "a process", "a function of the lag", help);
                Body::Fault
            }
            Value::Fault => Body::Fault,
        };
        let definition = KernelDefinition {
            parameters: arguments,
            body,
        };
        self.kernels.insert(item, definition);
    }

    fn lag(&mut self, lag: &FunctionParameter) {
        if &*lag.name.text != "tau" {
            let message = format!(
                "the first argument of a kernel is the lag `tau`, not `{}`",
                lag.name.text
            );
            self.report(Diagnostic::new(Code::CallArgument, lag.name.span, message).help("write `tau` first"));
        }
        if let Some(unit) = &lag.unit {
            let is_time = self.unit(unit).is_none_or(|unit| unit.dimension() == Dimension::TIME);
            if !is_time {
                self.report(
                    Diagnostic::new(Code::UnitMismatch, unit.span, "the lag is a time").help("leave its unit out"),
                );
            }
        }
    }

    fn no_lag(&mut self, name: &Word) {
        let message = format!("the kernel `{}` has no lag", name.text);
        let help = format!("write `kernel {}(tau, ...) = ...`", name.text);
        self.report(Diagnostic::new(Code::CallArgument, name.span, message).help(help));
    }

    /// A call of a declared kernel.
    pub(super) fn user_kernel(&mut self, item: ItemId, call: &Call, scope: Scope<'_>) -> Value {
        let Some(definition) = self.kernels.get(&item).cloned() else {
            return Value::Fault;
        };
        let names: Vec<&str> = definition.parameters.iter().map(|(name, _)| &**name).collect();
        if let Some(word) = call
            .arguments
            .iter()
            .filter_map(|one| one.name.as_ref())
            .find(|word| &*word.text == "tau")
        {
            let message = format!("`{}` is called without its lag", super::word_text(&call.function));
            self.report(Diagnostic::new(Code::CallArgument, word.span, message).help("leave `tau` out"));
            return Value::Fault;
        }
        let Some(arguments) = self.arguments(call, &[], &names) else {
            return Value::Fault;
        };
        let mut scalars: Vec<(&str, Scalar)> = Vec::new();
        for (name, dimension) in &definition.parameters {
            let example = match dimension.si_name().as_str() {
                "1" => "1".to_string(),
                unit => format!("1 {unit}"),
            };
            let Some(expression) = self.required(&arguments, name, &example) else {
                continue;
            };
            let plain = Scope {
                context: Context::Plain,
                ..scope
            };
            if let Some(scalar) = self.number(expression, plain, *dimension, &format!("`{name}`"), None) {
                scalars.push((name, scalar));
            }
        }
        let unset = scalars.iter().any(|(_, scalar)| scalar.value == Number::Unset);
        if unset || scalars.len() < definition.parameters.len() {
            return Value::Fault;
        }
        let known: Option<Vec<(String, f64)>> = scalars
            .iter()
            .map(|(name, scalar)| match scalar.value {
                Number::Known(value) => Some((name.to_string(), value)),
                _ => None,
            })
            .collect();
        match (&definition.body, known) {
            (Body::Fault, _) => Value::Fault,
            (Body::Tape(tape, dimension), Some(values)) => Value::Kernel(Covariance {
                kernel: User::new(super::word_text(&call.function), Arc::clone(tape), values).into(),
                dimension: *dimension,
            }),
            (Body::Kernels, Some(_)) => self.expanded(item, call, scalars),
            // Called inside another kernel's body: known when that one is called.
            (Body::Tape(_, dimension), None) => Value::Kernel(Covariance {
                kernel: Kernel::Constant,
                dimension: *dimension,
            }),
            (Body::Kernels, None) => Value::Kernel(Covariance {
                kernel: Kernel::Constant,
                dimension: Dimension::PLAIN,
            }),
        }
    }

    /// The body of a kernel made of kernels, with the values of its arguments.
    fn expanded(&mut self, item: ItemId, call: &Call, scalars: Vec<(&str, Scalar)>) -> Value {
        if self.expansion_depth >= DEEPEST_KERNEL || self.expansions >= MOST_KERNEL_CALLS {
            self.too_many_kernels(call);
            return Value::Fault;
        }
        self.expansion_depth += 1;
        self.expansions += 1;
        let value = self.body_with(item, call, scalars);
        self.expansion_depth -= 1;
        value
    }

    fn too_many_kernels(&mut self, call: &Call) {
        let message = format!(
            "kernels made of kernels are followed {DEEPEST_KERNEL} deep and through {MOST_KERNEL_CALLS} calls, not further"
        );
        self.report(Diagnostic::new(Code::ModelTooLarge, call.function.span, message).help(
            "write the kernel out: one that calls another twice, which calls a third twice, grows as powers of two",
        ));
    }

    fn body_with(&mut self, item: ItemId, call: &Call, scalars: Vec<(&str, Scalar)>) -> Value {
        let DeclarationKind::Function { parameters, value, .. } = &self.names.declaration(item).kind else {
            return Value::Fault;
        };
        let mut locals = scalars;
        if let Some(lag) = parameters.first() {
            let node = self.arena.symbol(Symbol::Lag);
            locals.push((&lag.name.text, Scalar::new(Number::Open(node), Dimension::TIME)));
        }
        let scope = Scope {
            instance: self.names.item(item).instance,
            context: Context::Kernel,
            locals: &locals,
        };
        let before = self.diagnostics.len();
        let value = self.value(value, scope);
        for finding in self.diagnostics.iter_mut().skip(before) {
            *finding = std::mem::replace(finding, Diagnostic::new(Code::KernelInvalid, call.brackets, ""))
                .label(call.brackets, "with these arguments");
        }
        match self.as_kernel_value(value) {
            Some(covariance) => Value::Kernel(covariance),
            None => Value::Fault,
        }
    }

    fn as_kernel_value(&mut self, value: Value) -> Option<Covariance> {
        let dimension = match &value {
            Value::Kernel(covariance) => covariance.dimension,
            Value::Scalar(scalar) => scalar.dimension,
            _ => return None,
        };
        let kernel = self.as_kernel(value)?;
        Some(Covariance { kernel, dimension })
    }

    /// A call of a kernel the language knows.
    pub(super) fn family(&mut self, span: Span, call: &Call, name: &str, scope: Scope<'_>) -> Value {
        let plain = Scope {
            context: Context::Plain,
            ..scope
        };
        let kernel = match name {
            "squared_exponential" => self.with_length(span, call, plain, &[], |[]| LengthOf::SquaredExponential),
            "exponential" => self.with_length(span, call, plain, &[], |[]| LengthOf::Exponential),
            "triangular" => self.with_length(span, call, plain, &[], |[]| LengthOf::Triangular),
            "matern" => {
                let others = [("smoothness", Dimension::PLAIN, "5/2")];
                self.with_length(span, call, plain, &others, |[smoothness]| LengthOf::Matern {
                    smoothness,
                })
            }
            "rational_quadratic" => {
                let others = [("mixture", Dimension::PLAIN, "2")];
                self.with_length(span, call, plain, &others, |[mixture]| LengthOf::RationalQuadratic {
                    mixture,
                })
            }
            "damped_cosine" => {
                let others = [("frequency", Dimension::ANGULAR_FREQUENCY, "0.1 Hz")];
                self.with_length(span, call, plain, &others, |[frequency]| LengthOf::DampedCosine {
                    frequency,
                })
            }
            "oscillator" => {
                let wanted = [
                    ("frequency", Dimension::ANGULAR_FREQUENCY, "0.5 Hz"),
                    ("damping", Dimension::PLAIN, "2 %"),
                ];
                self.with_numbers(span, call, plain, wanted, |[frequency, damping]| {
                    Oscillator::new(frequency, damping).map(Kernel::from)
                })
            }
            "harmonic" => {
                let wanted = [("frequency", Dimension::ANGULAR_FREQUENCY, "0.1 Hz")];
                self.with_numbers(span, call, plain, wanted, |[frequency]| {
                    Harmonic::new(frequency).map(Kernel::from)
                })
            }
            "band_limited" => {
                let wanted = [
                    ("lower", Dimension::ANGULAR_FREQUENCY, "0 Hz"),
                    ("upper", Dimension::ANGULAR_FREQUENCY, "2 Hz"),
                ];
                self.with_numbers(span, call, plain, wanted, |[lower, upper]| {
                    BandLimited::new(lower, upper).map(Kernel::from)
                })
            }
            _ => self.tabulated_kernel(call),
        };
        match kernel {
            Some(kernel) => Value::Kernel(Covariance {
                kernel,
                dimension: Dimension::PLAIN,
            }),
            None => Value::Fault,
        }
    }

    /// The values of named numbers; `Err` where one is at fault, `Ok(None)` where one is not known yet.
    fn numbers<const N: usize>(
        &mut self,
        arguments: &super::arguments::Arguments<'_>,
        scope: Scope<'_>,
        wanted: &[(&str, Dimension, &str); N],
    ) -> Result<Option<[f64; N]>, ()> {
        let mut values = [0.0; N];
        let (mut sound, mut known) = (true, true);
        for (slot, (name, dimension, example)) in values.iter_mut().zip(wanted) {
            let scalar = self
                .required(arguments, name, example)
                .and_then(|expression| self.number(expression, scope, *dimension, &format!("`{name}`"), None));
            match scalar.map(|scalar| scalar.value) {
                Some(Number::Known(value)) => *slot = value,
                Some(Number::Open(_)) => known = false,
                Some(Number::Unset) | None => sound = false,
            }
        }
        if sound { Ok(known.then_some(values)) } else { Err(()) }
    }

    fn with_numbers<const N: usize>(
        &mut self,
        span: Span,
        call: &Call,
        scope: Scope<'_>,
        wanted: [(&str, Dimension, &str); N],
        build: impl FnOnce([f64; N]) -> Result<Kernel, InvalidParameter>,
    ) -> Option<Kernel> {
        let arguments = self.arguments(call, &[], &wanted.map(|(name, _, _)| name))?;
        match self.numbers(&arguments, scope, &wanted).ok()? {
            Some(values) => self.valid(span, &arguments, build(values)),
            None => Some(Kernel::Constant),
        }
    }

    /// The kernel, or a finding at the argument that no such kernel can have.
    fn valid(
        &mut self,
        span: Span,
        arguments: &super::arguments::Arguments<'_>,
        kernel: Result<Kernel, InvalidParameter>,
    ) -> Option<Kernel> {
        match kernel {
            Ok(kernel) => Some(kernel),
            Err(fault) => {
                let place = arguments
                    .get(fault.parameter)
                    .map_or(span, |expression| expression.span);
                let message = format!("`{}` of `{}` must be {}", fault.parameter, fault.family, fault.demand);
                let unit = match fault.parameter {
                    "length" => " s",
                    "frequency" | "lower" | "upper" => " rad/s",
                    _ => "",
                };
                let here = format!("this is {}{unit}", show_number(fault.value, 6));
                let mut finding = Diagnostic::new(Code::ValueRange, place, message).here(here);
                if fault.parameter == "damping" && fault.value >= 1.0 {
                    finding.help = Some("write it as a share of critical damping, such as `2 %`".to_string());
                }
                self.report(finding);
                None
            }
        }
    }

    /// A kernel with a length, or a scale of fluctuation in its place.
    fn with_length<const N: usize>(
        &mut self,
        span: Span,
        call: &Call,
        scope: Scope<'_>,
        others: &[(&str, Dimension, &str); N],
        build: impl FnOnce([f64; N]) -> LengthOf,
    ) -> Option<Kernel> {
        let mut known: Vec<&str> = others.iter().map(|(name, _, _)| *name).collect();
        known.extend(["length", "scale_of_fluctuation"]);
        let arguments = self.arguments(call, &[], &known)?;
        let values = self.numbers(&arguments, scope, others);
        let fluctuation = arguments.get("scale_of_fluctuation");
        if let (Some(_), Some(word)) = (arguments.get("length"), arguments.word("scale_of_fluctuation")) {
            let message = "`length` and `scale_of_fluctuation` say the same thing in two ways";
            self.report(Diagnostic::new(Code::CallArgument, word.span, message).help("keep one of the two"));
            return None;
        }
        let (name, expression) = match fluctuation {
            Some(expression) => ("scale_of_fluctuation", expression),
            None => ("length", self.required(&arguments, "length", "10 s")?),
        };
        let length = self.number(expression, scope, Dimension::TIME, &format!("`{name}`"), None)?;
        let (values, length) = match (values.ok()?, length.value) {
            (_, Number::Unset) => return None,
            (Some(values), Number::Known(length)) => (values, length),
            _ => return Some(Kernel::Constant),
        };
        let family = build(values);
        if fluctuation.is_none() {
            return self.valid(span, &arguments, family.kernel(length));
        }
        let length = match family.length(length) {
            Length::Unique(length) => length,
            Length::Two { short, long } => {
                self.two_lengths(expression.span, short, long);
                short
            }
            Length::None(why) => {
                let name = super::word_text(&call.function);
                let message = match why {
                    NoLength::TooLarge { largest } => format!(
                        "no length of `{name}` has this scale of fluctuation: at this frequency it is at most {} s",
                        show_number(largest, 4)
                    ),
                    other => format!("no length of `{name}` has this scale of fluctuation: {other}"),
                };
                let finding = Diagnostic::new(Code::KernelFluctuation, expression.span, message);
                self.report(finding.help("give `length` instead"));
                return None;
            }
        };
        self.valid(span, &arguments, family.kernel(length))
    }

    fn two_lengths(&mut self, place: Span, short: f64, long: f64) {
        let (short, long) = (show_number(short, 6), show_number(long, 6));
        let message = format!("two lengths have this scale of fluctuation: {short} s and {long} s");
        self.report(
            Diagnostic::new(Code::KernelTwoLengths, place, message)
                .here(format!("taken as a length of {short} s"))
                .help("give `length` to say which one is meant"),
        );
    }

    /// `tabulated("file.csv", beyond: POLICY)`
    fn tabulated_kernel(&mut self, call: &Call) -> Option<Kernel> {
        let arguments = self.arguments(call, &["the name of a file"], &["beyond"])?;
        let beyond = self.beyond(call, &arguments);
        let file = arguments.subjects.first().copied()?;
        let table = self.kernel_table(file);
        let (beyond, table) = (beyond?, table?);
        match Tabulated::new(table.name.clone(), &table.rows, beyond) {
            Ok(kernel) => Some(kernel.into()),
            Err(why) => {
                self.report(Diagnostic::new(Code::TableContent, file.span, why.to_string()));
                None
            }
        }
    }

    /// What holds outside of a table: there is no default.
    fn beyond(&mut self, call: &Call, arguments: &super::arguments::Arguments<'_>) -> Option<Beyond> {
        let given = arguments.get("beyond");
        let word = match given.map(|expression| &expression.kind) {
            Some(ExpressionKind::Name(path)) => super::word_text(path),
            _ => String::new(),
        };
        match word.as_str() {
            "zero" => Some(Beyond::Zero),
            "hold" => Some(Beyond::Hold),
            "refuse" => Some(Beyond::Refuse),
            _ => {
                let place = given.map_or(call.brackets, |expression| expression.span);
                let message = "`beyond` must say what holds outside of the table";
                self.report(
                    Diagnostic::new(Code::CallArgument, place, message)
                        .help("write `beyond: zero`, `beyond: hold` (the last value) or `beyond: refuse`"),
                );
                None
            }
        }
    }
}
