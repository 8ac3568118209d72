//! Functions that a model declares, kernels and spectra: their arguments as the body sees them, and as a call gives them.

use super::{Context, Lowering, Scope, word_text};
use crate::check::value::{Number, Scalar};
use crate::diagnostics::{Code, Diagnostic};
use crate::expression::Symbol;
use crate::language::tree::{Call, FunctionParameter};
use crate::units::Dimension;

/// The arguments of a declared function behind its first.
pub(super) type Parameters = Vec<(Box<str>, Dimension)>;

impl Lowering<'_, '_, '_> {
    /// The arguments behind the first, not known yet, entered into what the body sees.
    pub(super) fn open_arguments<'t>(
        &mut self,
        others: &'t [FunctionParameter],
        locals: &mut Vec<(&'t str, Scalar)>,
    ) -> Parameters {
        let mut arguments = Vec::with_capacity(others.len());
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
            let symbol = Symbol::Argument(u16::try_from(index).unwrap_or(u16::MAX));
            let node = self.arena.symbol(symbol);
            locals.push((&parameter.name.text, Scalar::new(Number::Open(node), dimension)));
            arguments.push((parameter.name.text.clone(), dimension));
        }
        arguments
    }

    /// The values a call gives to the arguments behind the first, which it must not name: `firsts` are the names that
    /// one may have, and `what` is what it is. `None` where one is missing, at fault or not set.
    pub(super) fn called_with<'d>(
        &mut self,
        call: &Call,
        parameters: &'d [(Box<str>, Dimension)],
        (firsts, what): (&[&str], &str),
        scope: Scope<'_>,
    ) -> Option<Vec<(&'d str, Scalar)>> {
        let names: Vec<&str> = parameters.iter().map(|(name, _)| &**name).collect();
        let mut given = call.arguments.iter().filter_map(|one| one.name.as_ref());
        if let Some(word) = given.find(|word| firsts.contains(&&*word.text) && !names.contains(&&*word.text)) {
            let message = format!("`{}` is called without its {what}", word_text(&call.function));
            let help = format!("leave `{}` out", word.text);
            self.report(Diagnostic::new(Code::CallArgument, word.span, message).help(help));
            return None;
        }
        let arguments = self.arguments(call, &[], &names)?;
        let mut scalars: Vec<(&str, Scalar)> = Vec::new();
        for (name, dimension) in parameters {
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
        (!unset && scalars.len() == parameters.len()).then_some(scalars)
    }
}

/// The numbers of arguments, all of which must be known.
pub(super) fn known_values(scalars: &[(&str, Scalar)]) -> Option<Vec<(String, f64)>> {
    let known = scalars.iter().map(|(name, scalar)| match scalar.value {
        Number::Known(value) => Some((name.to_string(), value)),
        _ => None,
    });
    known.collect()
}
