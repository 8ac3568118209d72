//! Numbers, sums, products and powers: of numbers, of things that vary, and of kernels.

use super::{Lowering, Scope};
use crate::check::value::{Covariance, Number, Scalar, Value, Varying};
use crate::covariance::form::LinearForm;
use crate::covariance::kernel::{Kernel, User};
use crate::diagnostics::{Code, Diagnostic};
use crate::expression::{NodeId, Operand, Tape};
use crate::language::tree::{self, Expression, Factor, FactorOperator, Sign, Term};
use crate::source::Span;
use crate::units::{Dimension, Unit};
use std::rc::Rc;
use std::sync::Arc;

impl Lowering<'_, '_, '_> {
    /// A number with its unit.
    pub(super) fn literal(&mut self, number: &tree::Number) -> Value {
        if number.value == 0.0 && self.has_digits(number.digits) {
            let message = "this is smaller than any number the program can hold";
            let finding = Diagnostic::new(Code::ValueRange, number.digits, message);
            self.report(finding.help("check the exponent; a double holds down to 1e-307, in SI units"));
            return Value::Fault;
        }
        let Some(unit) = &number.unit else {
            let mut scalar = Scalar::new(Number::Known(number.value), Dimension::PLAIN);
            scalar.bare_zero = number.value == 0.0;
            return self.finite(scalar, number.digits);
        };
        let span = number.digits.to(unit.span);
        match self.unit(unit) {
            Some(unit) => self.in_unit(number.value, unit, span),
            None => Value::Fault,
        }
    }

    /// Whether a number is written with a digit other than 0 before its exponent.
    fn has_digits(&self, digits: Span) -> bool {
        let text = self.library.files().text(digits);
        let mantissa = text.split(['e', 'E']).next().unwrap_or("");
        mantissa.contains(|character: char| matches!(character, '1'..='9'))
    }

    fn in_unit(&mut self, value: f64, unit: Rc<Unit>, span: Span) -> Value {
        let scalar = Scalar::new(Number::Known(unit.to_si(value)), unit.dimension());
        self.finite(scalar.shown_in(Some(unit)), span)
    }

    /// The scalar, unless its value is not a finite number: that is reported.
    pub(super) fn finite(&mut self, scalar: Scalar, place: Span) -> Value {
        match scalar.value {
            Number::Known(value) if !value.is_finite() => {
                let (message, help) = if value.is_nan() {
                    (
                        "this has no value: it is undefined, such as 0/0 or the root of a negative number",
                        "check the numbers it is made from",
                    )
                } else {
                    (
                        "this is a division by 0, or larger than any number the program can hold",
                        "check the numbers it is made from: at most 1.8e308 can be held, in SI units",
                    )
                };
                self.report(Diagnostic::new(Code::ValueNotFinite, place, message).help(help));
                Value::Fault
            }
            _ => Value::Scalar(scalar),
        }
    }

    /// The node of a scalar, for an open expression; `None` where a parameter has not been set.
    pub(super) fn node(&mut self, number: Number) -> Option<NodeId> {
        match number {
            Number::Known(value) => Some(self.arena.number(value)),
            Number::Open(node) => Some(node),
            Number::Unset => None,
        }
    }

    pub(super) fn sum(&mut self, span: Span, terms: &[Term], scope: Scope<'_>) -> Value {
        let values: Vec<(f64, Span, Value)> = terms
            .iter()
            .map(|term| {
                let sign = if term.sign == Sign::Minus { -1.0 } else { 1.0 };
                (sign, term.value.span, self.value(&term.value, scope))
            })
            .collect();
        let Some(dimension) = self.one_dimension(&values) else {
            return Value::Fault;
        };
        if values.iter().any(|(_, _, value)| matches!(value, Value::Kernel(_))) {
            return self.kernel_sum(values, dimension);
        }
        if values.iter().any(|(_, _, value)| matches!(value, Value::Spectrum(_))) {
            return self.spectrum_sum(values, dimension);
        }
        let unit = values.iter().find_map(|(_, _, value)| match value {
            Value::Scalar(scalar) if !scalar.bare_zero => scalar.unit.clone(),
            Value::Form(varying) => varying.unit.clone(),
            _ => None,
        });
        if values.iter().any(|(_, _, value)| matches!(value, Value::Form(_))) {
            return self.sum_of_forms(values, dimension, unit);
        }
        let mut operands = Vec::with_capacity(values.len());
        for (sign, _, value) in &values {
            if let Value::Scalar(scalar) = value {
                operands.push((*sign < 0.0, scalar.value));
            }
        }
        let bare_zero = values
            .iter()
            .all(|(_, _, value)| matches!(value, Value::Scalar(scalar) if scalar.bare_zero));
        let known = operands.iter().try_fold(0.0, |sum, (minus, number)| match number {
            Number::Known(value) => Some(if *minus { sum - value } else { sum + value }),
            _ => None,
        });
        let value = match known {
            Some(sum) => Number::Known(sum),
            None => self.open(&operands, |lowering, operands| lowering.arena.sum(operands)),
        };
        let mut scalar = Scalar::new(value, dimension).shown_in(unit);
        scalar.bare_zero = bare_zero;
        self.finite(scalar, span)
    }

    /// An expression of numbers not all of which are known.
    fn open(&mut self, operands: &[(bool, Number)], build: impl Fn(&mut Self, &[Operand]) -> NodeId) -> Number {
        let nodes: Option<Vec<Operand>> = operands
            .iter()
            .map(|(inverse, number)| {
                let node = self.node(*number)?;
                Some(if *inverse {
                    Operand::inverse(node)
                } else {
                    Operand::direct(node)
                })
            })
            .collect();
        match nodes {
            Some(nodes) => Number::Open(build(self, &nodes)),
            None => Number::Unset,
        }
    }

    /// The one dimension that all terms have; what differs is reported against the first. `None` where a term is at
    /// fault.
    fn one_dimension(&mut self, values: &[(f64, Span, Value)]) -> Option<Dimension> {
        if values.iter().any(|(_, _, value)| matches!(value, Value::Fault)) {
            return None;
        }
        let of = |value: &Value| match value {
            Value::Scalar(scalar) if scalar.bare_zero => None,
            Value::Scalar(scalar) => Some((scalar.dimension, scalar.unit.clone())),
            Value::Form(varying) => Some((varying.dimension, varying.unit.clone())),
            Value::Kernel(covariance) => Some((covariance.dimension, None)),
            Value::Spectrum(density) => Some((density.dimension, None)),
            Value::Fault => None,
        };
        let mut first: Option<(Span, Dimension, Option<Rc<Unit>>)> = None;
        let mut alike = true;
        for (sign, span, value) in values {
            match (&first, of(value)) {
                (None, Some((dimension, unit))) => first = Some((*span, dimension, unit)),
                (Some((before, first, first_unit)), Some((dimension, unit))) if *first != dimension => {
                    let verb = if *sign < 0.0 { "subtracted from" } else { "added to" };
                    let second = (*span, dimension, unit.as_ref());
                    self.unlike((*before, *first, first_unit.as_ref()), second, verb);
                    alike = false;
                }
                _ => {}
            }
        }
        alike.then(|| first.map_or(Dimension::PLAIN, |(_, dimension, _)| dimension))
    }

    fn sum_of_forms(&mut self, values: Vec<(f64, Span, Value)>, dimension: Dimension, unit: Option<Rc<Unit>>) -> Value {
        let mut parts: Vec<(f64, Rc<LinearForm>)> = Vec::with_capacity(values.len());
        for (sign, _, value) in values {
            match value {
                Value::Form(varying) => parts.push((sign, varying.form)),
                Value::Scalar(Scalar {
                    value: Number::Known(number),
                    ..
                }) => parts.push((sign, Rc::new(LinearForm::constant(number)))),
                _ => return Value::Fault,
            }
        }
        let size: usize = parts.iter().map(|(_, form)| form.terms().len()).sum();
        if self.terms.saturating_add(size) > super::MOST_TERMS {
            // The walk stops after this item and says so.
            self.terms = self.terms.saturating_add(size);
            return Value::Fault;
        }
        let form = LinearForm::combination(parts.iter().map(|(sign, form)| (*sign, &**form)));
        self.form(form, dimension, unit)
    }

    fn kernel_sum(&mut self, values: Vec<(f64, Span, Value)>, dimension: Dimension) -> Value {
        let mut kernels = Vec::with_capacity(values.len());
        for (sign, span, value) in values {
            let is_number = matches!(value, Value::Scalar(_));
            let Some(kernel) = self.as_kernel(value) else {
                return Value::Fault;
            };
            if sign < 0.0 && (!is_number || kernel != Kernel::zero()) {
                self.report(
                    Diagnostic::new(Code::KernelInvalid, span, "a kernel cannot be subtracted")
                        .here("enters with a negative weight")
                        .help("only sums, products and non-negative multiples of kernels are kernels"),
                );
                return Value::Fault;
            }
            kernels.push(kernel);
        }
        Value::Kernel(Covariance {
            kernel: Kernel::sum(kernels),
            dimension,
        })
    }

    /// A number or an expression in the lag as a kernel.
    pub(super) fn as_kernel(&mut self, value: Value) -> Option<Kernel> {
        match value {
            Value::Kernel(covariance) => Some(covariance.kernel),
            Value::Scalar(scalar) => match scalar.value {
                // A negative constant is refused where it is used; here it only has to keep its value.
                Number::Known(value) => Kernel::Constant.scaled(value.abs()).ok(),
                Number::Open(node) => {
                    let tape = Arc::new(Tape::compile(&self.arena, node));
                    Some(User::new("an expression", tape, Vec::new()).into())
                }
                Number::Unset => None,
            },
            Value::Form(_) | Value::Spectrum(_) | Value::Fault => None,
        }
    }

    pub(super) fn product(&mut self, span: Span, factors: &[Factor], scope: Scope<'_>) -> Value {
        let mut values: Vec<(bool, Span, Value)> = Vec::with_capacity(factors.len());
        let mut before: Option<&Factor> = None;
        for factor in factors {
            if let Some((number, unit)) = before.and_then(|before| self.unit_behind_slash(before, factor, scope)) {
                let span = number.digits.to(factor.value.span);
                values.pop();
                let value = match self.unit(&unit) {
                    Some(unit) => self.in_unit(number.value, unit, span),
                    None => Value::Fault,
                };
                let inverse = before.is_some_and(|before| before.operator == FactorOperator::Over);
                values.push((inverse, span, value));
                before = None;
            } else {
                let inverse = factor.operator == FactorOperator::Over;
                values.push((inverse, factor.value.span, self.value(&factor.value, scope)));
                before = Some(factor);
            }
        }
        if values.iter().any(|(_, _, value)| matches!(value, Value::Fault)) {
            return Value::Fault;
        }
        let Some(dimension) = product_dimension(&values) else {
            self.dimension_too_large(span);
            return Value::Fault;
        };
        if values.iter().any(|(_, _, value)| matches!(value, Value::Kernel(_))) {
            return self.kernel_product(span, values, dimension);
        }
        if values.iter().any(|(_, _, value)| matches!(value, Value::Spectrum(_))) {
            return self.spectrum_product(values, dimension);
        }
        let unit = product_unit(&values);
        let mut scalars = Vec::with_capacity(values.len());
        let mut varying: Option<(Span, Varying)> = None;
        for (inverse, place, value) in values {
            match value {
                Value::Scalar(scalar) => scalars.push((inverse, scalar.value)),
                Value::Form(form) => {
                    if let Some((first, _)) = &varying {
                        self.two_vary(*first, place, inverse);
                        return Value::Fault;
                    }
                    if inverse {
                        self.divided_by_process(place);
                        return Value::Fault;
                    }
                    varying = Some((place, form));
                }
                Value::Kernel(_) | Value::Spectrum(_) | Value::Fault => return Value::Fault,
            }
        }
        let known = scalars.iter().try_fold(1.0, |product, (inverse, number)| match number {
            Number::Known(value) => Some(if *inverse { product / value } else { product * value }),
            _ => None,
        });
        match (varying, known) {
            (Some((_, varying)), Some(factor)) => {
                if let fault @ Value::Fault = self.finite(Scalar::new(Number::Known(factor), Dimension::PLAIN), span) {
                    return fault;
                }
                let form = LinearForm::combination([(factor, &*varying.form)]);
                self.form(form, dimension, unit)
            }
            (Some(_), None) => Value::Fault,
            (None, Some(product)) => {
                let scalar = Scalar::new(Number::Known(product), dimension).shown_in(unit);
                self.finite(scalar, span)
            }
            (None, None) => {
                let value = self.open(&scalars, |lowering, operands| lowering.arena.product(operands));
                Value::Scalar(Scalar::new(value, dimension).shown_in(unit))
            }
        }
    }

    fn two_vary(&mut self, first: Span, second: Span, quotient: bool) {
        let what = if quotient { "quotient" } else { "product" };
        self.report(
            Diagnostic::new(
                Code::TypeNonlinear,
                second,
                format!("the {what} of two processes is not Gaussian"),
            )
            .here("this varies in time")
            .label(first, "and so does this")
            .help("one of the two would have to be a constant"),
        );
    }

    fn divided_by_process(&mut self, place: Span) {
        self.report(
            Diagnostic::new(
                Code::TypeNonlinear,
                place,
                "a quantity divided by a process is not Gaussian",
            )
            .here("this varies in time")
            .help("the divisor would have to be a constant"),
        );
    }

    fn kernel_product(&mut self, span: Span, values: Vec<(bool, Span, Value)>, dimension: Dimension) -> Value {
        let mut weight = 1.0;
        let mut kernels = Vec::new();
        for (inverse, place, value) in values {
            match value {
                Value::Scalar(Scalar {
                    value: Number::Known(number),
                    ..
                }) => {
                    if number < 0.0 || (inverse && number == 0.0) {
                        self.negative_weight(place);
                        return Value::Fault;
                    }
                    weight = if inverse { weight / number } else { weight * number };
                }
                value if inverse => {
                    let found = value.kind();
                    let help = "only sums, products and non-negative multiples of kernels are kernels";
                    self.wrong_kind(place, found, "a number to divide by", help);
                    return Value::Fault;
                }
                value => match self.as_kernel(value) {
                    Some(kernel) => kernels.push(kernel),
                    None => return Value::Fault,
                },
            }
        }
        match Kernel::product(kernels).scaled(weight) {
            Ok(kernel) => Value::Kernel(Covariance { kernel, dimension }),
            Err(_) => {
                self.negative_weight(span);
                Value::Fault
            }
        }
    }

    fn negative_weight(&mut self, place: Span) {
        self.report(
            Diagnostic::new(
                Code::KernelInvalid,
                place,
                "a kernel can only be scaled by a positive number",
            )
            .help("only sums, products and non-negative multiples of kernels are kernels"),
        );
    }

    pub(super) fn negative(&mut self, inner: &Expression, scope: Scope<'_>) -> Value {
        match self.value(inner, scope) {
            Value::Fault => Value::Fault,
            Value::Scalar(scalar) => {
                let value = match scalar.value {
                    Number::Known(value) => Number::Known(-value),
                    Number::Open(node) => Number::Open(self.arena.negative(node)),
                    Number::Unset => Number::Unset,
                };
                Value::Scalar(Scalar { value, ..scalar })
            }
            Value::Form(varying) => {
                let form = LinearForm::combination([(-1.0, &*varying.form)]);
                self.form(form, varying.dimension, varying.unit)
            }
            Value::Kernel(_) => {
                self.negative_weight(inner.span);
                Value::Fault
            }
            Value::Spectrum(_) => {
                self.negative_spectrum(inner.span);
                Value::Fault
            }
        }
    }

    pub(super) fn dimension_too_large(&mut self, place: Span) {
        self.report(
            Diagnostic::new(Code::ValueRange, place, "the dimension of this is beyond all bounds")
                .help("check the powers: no quantity of the trade has such a unit"),
        );
    }
}

fn product_dimension(values: &[(bool, Span, Value)]) -> Option<Dimension> {
    values
        .iter()
        .try_fold(Dimension::PLAIN, |product, (inverse, _, value)| {
            let dimension = match value {
                Value::Scalar(scalar) => scalar.dimension,
                Value::Form(varying) => varying.dimension,
                Value::Kernel(covariance) => covariance.dimension,
                Value::Spectrum(density) => density.dimension,
                Value::Fault => Dimension::PLAIN,
            };
            if *inverse {
                product.over(dimension)
            } else {
                product.times(dimension)
            }
        })
}

/// The unit people see a product in: that of its factors, where each says one. A share (`0.9`, `12 %`) changes no unit.
fn product_unit(values: &[(bool, Span, Value)]) -> Option<Rc<Unit>> {
    let mut product: Option<Rc<Unit>> = None;
    for (inverse, _, value) in values {
        let (unit, dimension) = match value {
            Value::Scalar(scalar) => (scalar.unit.as_ref(), scalar.dimension),
            Value::Form(varying) => (varying.unit.as_ref(), varying.dimension),
            _ => (None, Dimension::PLAIN),
        };
        if dimension.is_plain() {
            continue;
        }
        let unit = unit?;
        product = Some(match (product, inverse) {
            (None, false) => Rc::clone(unit),
            (None, true) => Rc::new(unit.power(-1)?),
            (Some(product), false) => Rc::new(product.times(unit)?),
            (Some(product), true) => Rc::new(product.over(unit)?),
        });
    }
    product
}
