//! From a unit as written to a unit that is known, or to what is wrong with each of its symbols.

use super::suggest;
use super::unit::Unit;
use crate::language::tree::UnitExpression;

/// A factor of a unit that could not be read.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct UnknownSymbol {
    /// Which factor of the [`UnitExpression`] it is.
    pub factor: usize,
    /// The symbol as written.
    pub symbol: String,
    /// What is wrong with it.
    pub cause: Cause,
    /// What may have been meant, in unit syntax, the likeliest first; at most three.
    pub suggestions: Vec<String>,
    /// One sentence more, where there is something to say.
    pub note: Option<String>,
}

/// Why a factor could not be read.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Cause {
    /// The table does not have the symbol.
    NotInTable,
    /// The symbol exists, and the language leaves it out on purpose; the note says why.
    LeftOut,
    /// The symbol is known, but its power, alone or with the factors before it, is beyond all bounds.
    PowerTooLarge,
}

/// The unit that an expression stands for. Like symbols are gathered, the others stay in the order in which they were
/// written.
///
/// # Errors
/// Every factor that could not be read, in the order of the text.
pub fn resolve(expression: &UnitExpression) -> Result<Unit, Vec<UnknownSymbol>> {
    let mut unit = Unit::one();
    let mut faults = Vec::new();
    for (index, factor) in expression.factors.iter().enumerate() {
        let symbol = &*factor.symbol.text;
        let Some(named) = Unit::named(symbol) else {
            faults.push(unknown(index, symbol));
            continue;
        };
        let power = named.power(factor.power);
        let alone = power.is_none();
        match power.and_then(|power| unit.times(&power)) {
            Some(product) => unit = product,
            // Too large only together with what is too large already.
            None if !alone && faults.iter().any(|fault| fault.cause == Cause::PowerTooLarge) => {}
            None => faults.push(UnknownSymbol {
                factor: index,
                symbol: symbol.to_owned(),
                cause: Cause::PowerTooLarge,
                suggestions: Vec::new(),
                note: Some(format!("no quantity has a unit with {symbol}^{}", factor.power)),
            }),
        }
    }
    if faults.is_empty() { Ok(unit) } else { Err(faults) }
}

fn unknown(factor: usize, symbol: &str) -> UnknownSymbol {
    let symbol_text = symbol.to_owned();
    match suggest::left_out(symbol) {
        Some(note) => UnknownSymbol {
            factor,
            symbol: symbol_text,
            cause: Cause::LeftOut,
            suggestions: Vec::new(),
            note: Some(note.to_owned()),
        },
        None => UnknownSymbol {
            factor,
            symbol: symbol_text,
            cause: Cause::NotInTable,
            suggestions: suggest::suggestions(symbol),
            note: suggest::note(symbol).map(str::to_owned),
        },
    }
}
