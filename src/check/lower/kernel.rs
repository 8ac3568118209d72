//! Kernels that a model declares.

use super::function::{Parameters, known_values};
use super::{Context, Lowering, Scope};
use crate::check::names::ItemId;
use crate::check::origins::Found;
use crate::check::value::{Covariance, Number, Scalar, Value};
use crate::covariance::kernel::{Kernel, User};
use crate::diagnostics::{Code, Diagnostic};
use crate::expression::{Symbol, Tape};
use crate::language::tree::{Call, DeclarationKind, Expression, FunctionParameter, UnitExpression, Word};
use crate::units::Dimension;
use std::sync::Arc;

/// Kernels made of kernels made of kernels are followed so deep.
const DEEPEST_KERNEL: usize = 32;

/// So many calls of kernels made of kernels are looked into in one model.
const MOST_KERNEL_CALLS: usize = 100_000;

/// So many bytes of a kernel's declaration count as a further call.
const LONG_BODY: usize = 1024;

/// A kernel that a model declares.
#[derive(Clone)]
pub(super) struct KernelDefinition {
    parameters: Parameters,
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
        let mut arguments = Parameters::new();
        match parameters.split_first() {
            Some((lag, others)) => {
                self.lag(lag);
                let node = self.arena.symbol(Symbol::Lag);
                locals.push((&lag.name.text, Scalar::new(Number::Open(node), Dimension::TIME)));
                arguments = self.open_arguments(others, &mut locals);
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
            Value::Spectrum(_) => {
                let help = "a kernel is a function of the lag; a density over frequency is a `spectrum`";
                self.wrong_kind(body.span, "a spectrum", "a function of the lag", help);
                Body::Fault
            }
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
        let Some(scalars) = self.called_with(call, &definition.parameters, (&["tau"], "lag"), scope) else {
            return Value::Fault;
        };
        let known = known_values(&scalars);
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

    /// Shows the call with what was found since in a body that it led to.
    pub(super) fn with_these_arguments(&mut self, before: usize, call: &Call) {
        for Found {
            diagnostic: finding, ..
        } in self.diagnostics.iter_mut().skip(before)
        {
            *finding = std::mem::replace(finding, Diagnostic::new(Code::KernelInvalid, call.brackets, ""))
                .label(call.brackets, "with these arguments");
        }
    }

    /// The body of a kernel made of kernels, with the values of its arguments.
    fn expanded(&mut self, item: ItemId, call: &Call, scalars: Vec<(&str, Scalar)>) -> Value {
        let Some(value) = self.expanding(item, call, |lowering| lowering.body_with(item, call, scalars)) else {
            return Value::Fault;
        };
        value
    }

    /// Looks into the body of a function made of others, unless that goes too deep or on for too long.
    pub(super) fn expanding(
        &mut self,
        item: ItemId,
        call: &Call,
        look: impl FnOnce(&mut Self) -> Value,
    ) -> Option<Value> {
        if self.expansion_depth >= DEEPEST_KERNEL || self.expansions >= MOST_KERNEL_CALLS {
            self.too_many_kernels(call);
            return None;
        }
        self.expansion_depth += 1;
        // A body longer than a screen counts as several calls, so that the work is bounded and not its count alone.
        let body = self.names.declaration(item).span.range().len();
        self.expansions += 1 + body / LONG_BODY;
        let value = look(self);
        self.expansion_depth -= 1;
        Some(value)
    }

    fn too_many_kernels(&mut self, call: &Call) {
        let message = format!(
            "kernels made of kernels, and spectra of spectra, are followed {DEEPEST_KERNEL} deep and through \
             {MOST_KERNEL_CALLS} calls, not further"
        );
        self.report(
            Diagnostic::new(Code::ModelTooLarge, call.function.span, message)
                .help("write it out: one that calls another twice, which calls a third twice, grows as powers of two"),
        );
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
        self.with_these_arguments(before, call);
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
}
