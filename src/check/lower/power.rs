//! Powers of numbers.

use super::{Lowering, Scope};
use crate::check::value::{Number, Scalar, Value};
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::Expression;
use crate::source::Span;
use crate::units::Dimension;
use std::rc::Rc;

impl Lowering<'_, '_, '_> {
    pub(super) fn power(&mut self, span: Span, base: &Expression, exponent: &Expression, scope: Scope<'_>) -> Value {
        let base_value = self.value(base, scope);
        let exponent_value = self.number(exponent, scope, Dimension::PLAIN, "an exponent", None);
        let (base_value, exponent_value) = match (base_value, exponent_value) {
            (Value::Fault, _) | (_, None) => return Value::Fault,
            (Value::Form(_), _) => {
                self.report(
                    Diagnostic::new(Code::TypeNonlinear, base.span, "a power of a process is not Gaussian")
                        .here("this varies in time")
                        .help("use its tangent at the mean, such as `mean * (2 * X - mean)` for the square of X"),
                );
                return Value::Fault;
            }
            (Value::Kernel(_), _) => {
                let help = "multiply the kernel with itself instead";
                self.wrong_kind(base.span, "a kernel", "a number to take a power of", help);
                return Value::Fault;
            }
            (Value::Spectrum(_), _) => {
                self.wrong_kind(
                    base.span,
                    "a spectrum",
                    "a number to take a power of",
                    "spectra are only added and scaled",
                );
                return Value::Fault;
            }
            (Value::Scalar(base), Some(exponent)) => (base, exponent),
        };
        let known = match exponent_value.value {
            Number::Known(exponent) => Some(exponent),
            _ => None,
        };
        let dimension = match known {
            Some(exponent) => base_value.dimension.power_f64(exponent),
            None => base_value.dimension.is_plain().then_some(Dimension::PLAIN),
        };
        let Some(dimension) = dimension else {
            let message = format!("{} cannot have this power", base_value.dimension.describe());
            self.report(
                Diagnostic::new(Code::UnitMismatch, exponent.span, message).help(
                    "a quantity with a unit takes whole powers and simple fractions, known when the file is read",
                ),
            );
            return Value::Fault;
        };
        let unit = known
            .filter(|exponent| exponent.fract() == 0.0 && exponent.abs() < 100.0)
            .and_then(|exponent| base_value.unit.as_ref()?.power(exponent as i32).map(Rc::new));
        let value = match (base_value.value, exponent_value.value) {
            (Number::Known(base), Number::Known(exponent)) => {
                Number::Known(crate::expression::Number::power(&base, &exponent))
            }
            (base, exponent) => match (self.node(base), self.node(exponent)) {
                (Some(base), Some(exponent)) => Number::Open(self.arena.power(base, exponent)),
                _ => Number::Unset,
            },
        };
        self.finite(Scalar::new(value, dimension).shown_in(unit), span)
    }
}
