//! Units as written: resolved, or reported with what was likely meant.

use super::Lowering;
use crate::check::names::choice;
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::UnitExpression;
use crate::units::{Cause, Unit, resolve};
use std::rc::Rc;

impl Lowering<'_, '_, '_> {
    /// The unit of an expression, or `None` where it could not be read (reported).
    pub(super) fn unit(&mut self, expression: &UnitExpression) -> Option<Rc<Unit>> {
        match resolve(expression) {
            Ok(unit) => Some(Rc::new(unit)),
            Err(unknown) => {
                for one in unknown {
                    let place = expression
                        .factors
                        .get(one.factor)
                        .map_or(expression.span, |factor| factor.symbol.span);
                    let message = match one.cause {
                        Cause::NotInTable => format!("there is no unit called `{}`", one.symbol),
                        Cause::LeftOut => format!("the unit `{}` is not part of the language", one.symbol),
                        Cause::PowerTooLarge => format!("the power of the unit `{}` is too large", one.symbol),
                    };
                    let mut finding = Diagnostic::new(Code::UnitUnknown, place, message);
                    let meant = choice(&one.suggestions).map(|near| format!("did you mean {near}?"));
                    finding.help = Some(match (meant, one.note) {
                        _ if self.is_declared(&one.symbol, place) => {
                            format!(
                                "`{}` is declared here: to multiply by it, write ` * ` before it",
                                one.symbol
                            )
                        }
                        (Some(meant), Some(note)) => format!("{meant} {note}"),
                        (Some(meant), None) => meant,
                        (None, Some(note)) => note.to_string(),
                        (None, None) => "to multiply or divide by a name, put blanks around the `*` or `/`".to_string(),
                    });
                    self.report(finding);
                }
                None
            }
        }
    }
}
