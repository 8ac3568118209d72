//! How a product of powers of symbols is spelt, in the unit syntax of the language.

use super::dimension::Exponent;

/// `kN*m^2/(s*rad)`. Without anything above the line it starts with `nothing_above` (`/s` or `1/s`); an empty
/// product is `1`.
pub(super) fn spell<'a>(factors: impl Iterator<Item = (&'a str, Exponent)> + Clone, nothing_above: &str) -> String {
    let zero = Exponent::from_integer(0);
    let above = join(factors.clone().filter(|(_, power)| *power > zero));
    let below = factors.filter(|(_, power)| *power < zero);
    let several_below = below.clone().count() > 1;
    let below = join(below);
    let above = match (above.is_empty(), below.is_empty()) {
        (true, true) => "1",
        (true, false) => nothing_above,
        _ => &above,
    };
    match (below.is_empty(), several_below) {
        (true, _) => above.to_owned(),
        (false, false) => format!("{above}/{below}"),
        (false, true) => format!("{above}/({below})"),
    }
}

fn join<'a>(factors: impl Iterator<Item = (&'a str, Exponent)>) -> String {
    let words: Vec<String> = factors.map(|(symbol, power)| with_power(symbol, power)).collect();
    words.join("*")
}

/// The symbol with the size of its power.
fn with_power(symbol: &str, power: Exponent) -> String {
    match (power.numer().unsigned_abs(), power.denom()) {
        (1, 1) => symbol.to_owned(),
        (numerator, 1) => format!("{symbol}^{numerator}"),
        (numerator, denominator) => format!("{symbol}^({numerator}/{denominator})"),
    }
}
