//! Definitions: constants, processes and margins, checked against their units and entered into the model.

use super::not_yet::Later;
use super::{Lowering, Scope, unit_or_si};
use crate::check::model::{Kind, Named};
use crate::check::names::ItemId;
use crate::check::value::{Number, Value, Varying};
use crate::covariance::kernel::Unavailable;
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{Declaration, DefinitionKeyword, Expression, UnitExpression, Word};
use crate::units::{Dimension, Unit, show};
use std::rc::Rc;

/// What to do with a margin that crosses nothing.
pub(super) const TIME_INVARIANT: &str = "what does not vary is safe or failed for ever: compare the numbers by hand, or, \
    where they are uncertain, by a time-invariant method such as FORM; for what varies in time, declare a `process`";

impl<'p, 'l> Lowering<'p, 'l, '_> {
    pub(super) fn definition(
        &mut self,
        item: ItemId,
        declaration: &'p Declaration,
        keyword: DefinitionKeyword,
        name: &Word,
        unit: Option<&UnitExpression>,
        expression: &Expression,
    ) -> Value {
        let scope = Scope::plain(self.names.item(item).instance);
        match keyword {
            DefinitionKeyword::Variable => self.not_yet(declaration.keyword, Later::Variables),
            DefinitionKeyword::Quantity => self.not_yet(declaration.keyword, Later::Quantities),
            DefinitionKeyword::Constant => {
                let declared = unit.map(|unit| self.unit(unit));
                let value = self.value(expression, scope);
                return match self.scalar(value, expression.span, &format!("the constant `{}`", name.text)) {
                    Some(scalar) => self.declared_scalar(scalar, declared, name, expression.span),
                    None => Value::Fault,
                };
            }
            DefinitionKeyword::Process | DefinitionKeyword::Margin => {
                let kind = if keyword == DefinitionKeyword::Process {
                    Kind::Process
                } else {
                    Kind::Margin
                };
                let declared = unit.map(|unit| self.unit(unit));
                let value = self.process_or_margin(item, kind, name, declared.clone(), expression);
                return self.varying(item, declaration, kind, name, declared, expression, value);
            }
        }
        Value::Fault
    }

    /// Checks a process or margin against its unit and enters it into the model.
    #[allow(clippy::too_many_arguments)]
    pub(super) fn varying(
        &mut self,
        item: ItemId,
        declaration: &Declaration,
        kind: Kind,
        name: &Word,
        declared: Option<Option<Rc<Unit>>>,
        expression: &Expression,
        value: Value,
    ) -> Value {
        let mut varying = match value {
            Value::Fault => return Value::Fault,
            Value::Form(varying) if !varying.form.is_constant() => varying,
            Value::Form(_) | Value::Scalar(_) => {
                self.nothing_varies(kind, name, expression, &value);
                return Value::Fault;
            }
            Value::Kernel(_) | Value::Spectrum(_) => {
                let help = "it is the argument of a `gaussian(...)`";
                self.wrong_kind(expression.span, value.kind(), "a process", help);
                return Value::Fault;
            }
        };
        match declared {
            Some(None) => return Value::Fault,
            Some(Some(unit)) => {
                if unit.dimension() != varying.dimension {
                    self.not_in_declared_unit(name, &unit, expression.span, varying.dimension, varying.unit.as_ref());
                    return Value::Fault;
                }
                varying.unit = Some(unit);
            }
            None => {}
        }
        if !(self.within_tables(&varying, name)
            && self.within_responses(&varying, name)
            && (kind == Kind::Process || self.of_finite_variance(&varying, expression.span)))
        {
            return Value::Fault;
        }
        let index = self.model.varying.len();
        self.model.varying.push(Named {
            name: self.names.full_name(item),
            kind,
            form: Rc::clone(&varying.form),
            dimension: varying.dimension,
            unit: unit_or_si(varying.unit.as_ref(), varying.dimension),
            documentation: self.documentation(item),
            basis: declaration.basis.as_ref().map(|text| text.value.to_string()),
            place: name.span,
        });
        self.varying.insert(item, index);
        Value::Form(varying)
    }

    /// Whether the kernels say something at all lags that the form asks for.
    pub(super) fn within_tables(&mut self, varying: &Varying, name: &Word) -> bool {
        let mut sound = true;
        for (source, terms) in varying.form.by_source() {
            // What passes through systems is looked at over frequency.
            if terms.iter().any(|term| !term.operator.systems.is_empty()) {
                continue;
            }
            let delays = terms.iter().map(|term| term.operator.delay);
            let (first, last) = delays.fold((f64::INFINITY, f64::NEG_INFINITY), |(a, b), d| (a.min(d), b.max(d)));
            let source = &self.model.sources[source.0 as usize];
            let Some(Err(why @ Unavailable::BeyondTable { .. })) =
                source.kernel().map(|kernel| kernel.value(last - first))
            else {
                continue;
            };
            let message = format!(
                "`{}` needs the correlation of `{}` where its table says nothing",
                name.text, source.name
            );
            let finding = Diagnostic::new(Code::ValueRange, name.span, message)
                .here(why.to_string())
                .label(source.place, "its correlation is tabulated")
                .help("make the delays shorter, the table longer, or say `beyond: zero` or `beyond: hold`");
            self.report(finding);
            sound = false;
        }
        sound
    }

    pub(super) fn nothing_varies(&mut self, kind: Kind, name: &Word, expression: &Expression, value: &Value) {
        let name = &name.text;
        let (what, help) = match kind {
            Kind::Process => (
                "process",
                format!("write `constant {name} = ...`, or give it a `gaussian(...)`"),
            ),
            Kind::Margin => ("margin", TIME_INVARIANT.to_string()),
        };
        self.report(
            Diagnostic::new(
                Code::MarginNoProcess,
                expression.span,
                format!("nothing in the {what} `{name}` varies in time"),
            )
            .here(format!("{}, whatever the time", self.shown_number(value)))
            .help(help),
        );
    }

    /// A value that does not vary, for a message.
    pub(super) fn shown_number(&self, value: &Value) -> String {
        let (number, dimension, unit) = match value {
            Value::Scalar(scalar) => (scalar.value, scalar.dimension, scalar.unit.as_ref()),
            Value::Form(varying) => (
                Number::Known(varying.form.mean()),
                varying.dimension,
                varying.unit.as_ref(),
            ),
            Value::Kernel(_) | Value::Spectrum(_) | Value::Fault => (Number::Unset, Dimension::PLAIN, None),
        };
        match number {
            Number::Known(number) => show(number, &unit_or_si(unit, dimension), 6),
            Number::Open(_) | Number::Unset => "a number".to_string(),
        }
    }

    /// The comment lines above an item, without their `#`.
    pub(super) fn documentation(&self, item: ItemId) -> Option<String> {
        let at = self.names.item(item);
        let tree = &self.names.parts().get(at.instance).tree;
        let range = self.names.declaration(item).documentation.clone();
        let lines: Vec<&str> = tree
            .comments
            .get(range)?
            .iter()
            .map(|span| self.library.files().text(*span).trim_start_matches('#').trim())
            .collect();
        (!lines.is_empty()).then(|| lines.join("\n"))
    }
}
