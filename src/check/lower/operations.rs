//! Linear operations on processes.

use super::{Lowering, Scope};
use crate::check::value::{Number, Value, Varying};
use crate::covariance::existence;
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{Call, Expression};
use crate::units::Dimension;
use std::rc::Rc;

/// The operations of the language.
pub(super) const OPERATIONS: &[&str] = &["derivative", "delay", "average", "respond"];

/// Processes are differentiated at most this often: higher derivatives mean nothing that loads are known to.
const MOST_DERIVATIVES: u32 = 4;

impl Lowering<'_, '_, '_> {
    pub(super) fn operation(&mut self, call: &Call, name: &str, scope: Scope<'_>) -> Value {
        match name {
            "derivative" => self.derivative(call, scope),
            "delay" => self.delay(call, scope),
            "average" => self.average(call, scope),
            _ => self.respond(call, scope),
        }
    }

    /// The process that an operation works on.
    pub(super) fn subject(&mut self, subject: &Expression, name: &str, scope: Scope<'_>) -> Option<Varying> {
        match self.value(subject, scope) {
            Value::Form(varying) => Some(varying),
            Value::Fault => None,
            other => {
                let help = format!("`{name}` works on what varies in time");
                self.wrong_kind(subject.span, other.kind(), "a process", &help);
                None
            }
        }
    }

    fn derivative(&mut self, call: &Call, scope: Scope<'_>) -> Value {
        let Some(arguments) = self.arguments(call, &["a process"], &[]) else {
            return Value::Fault;
        };
        let Some(&subject) = arguments.subjects.first() else {
            return Value::Fault;
        };
        let Some(varying) = self.subject(subject, "derivative", scope) else {
            return Value::Fault;
        };
        let form = varying.form.derivative();
        let order = |form: &crate::covariance::form::LinearForm| {
            form.terms()
                .iter()
                .map(|term| term.operator.derivatives)
                .max()
                .unwrap_or(0)
        };
        if order(&form) > MOST_DERIVATIVES {
            let message = format!("a process is differentiated at most {MOST_DERIVATIVES} times");
            self.report(Diagnostic::new(Code::ValueRange, call.function.span, message));
            return Value::Fault;
        }
        for (id, terms) in form.by_source() {
            let Some(source) = self.model.sources.get(id.0 as usize) else {
                continue;
            };
            if !existence::has_derivative(source, terms, 0) {
                if !self.of_finite_variance(&varying, subject.span) {
                    return Value::Fault;
                }
                let finding = self.not_differentiable(subject.span, id, "has no derivative to use here");
                self.report(finding);
                return Value::Fault;
            }
        }
        let Some(dimension) = varying.dimension.over(Dimension::TIME) else {
            self.dimension_too_large(call.function.span);
            return Value::Fault;
        };
        let unit = varying
            .unit
            .as_ref()
            .and_then(|unit| unit.over(&crate::units::Unit::named("s")?));
        self.form(form, dimension, unit.map(Rc::new))
    }

    /// The finding for a source that is not smooth enough: who it is, why, and what would mend it.
    pub(super) fn not_differentiable(
        &self,
        place: crate::source::Span,
        source: crate::covariance::form::SourceId,
        consequence: &str,
    ) -> Diagnostic {
        let source = &self.model.sources[source.0 as usize];
        Diagnostic::new(
            Code::ProcessNotDifferentiable,
            place,
            format!("the process `{}` {consequence}", source.name),
        )
        .here("needs its derivative")
        .label(source.place, source.roughness_in_words())
        .help(match source.kernel() {
            Some(_) => {
                "use a kernel that is smoother at lag 0, such as `matern(smoothness: 5/2, ...)` or \
                 `squared_exponential(...)`, or pass the process through what smooths it, such as `average(...)` or \
                 `respond(...)`: as it is it crosses any level infinitely often, and a count from samples depends on \
                 their interval"
            }
            None => {
                "pass it through what smooths it, such as `average(...)` or `respond(...)`, if the physics has it: what \
                 has so much power at high frequency crosses any level infinitely often"
            }
        })
    }

    fn delay(&mut self, call: &Call, scope: Scope<'_>) -> Value {
        let Some(arguments) = self.arguments(call, &["a process"], &["by"]) else {
            return Value::Fault;
        };
        let by = self.required(&arguments, "by", "1 s");
        let subject = arguments.subjects.first().copied();
        let (Some(by), Some(subject)) = (by, subject) else {
            return Value::Fault;
        };
        let varying = self.subject(subject, "delay", scope);
        let by = self.number(by, scope, Dimension::TIME, "`by`", None);
        match (varying, by.map(|by| by.value)) {
            (Some(varying), Some(Number::Known(by))) => {
                let form = varying.form.delayed(by);
                self.form(form, varying.dimension, varying.unit)
            }
            _ => Value::Fault,
        }
    }
}
