//! What may have been meant by a symbol that is not in the table.

use super::dimension::Dimension;
use super::table;

/// How many suggestions are worth reading.
const MOST: usize = 3;

/// Everyday spellings that are no slip of the finger, with the unit they mean.
static EVERYDAY: [(&str, &[&str]); 38] = [
    ("sec", &["s"]),
    ("secs", &["s"]),
    ("mins", &["min"]),
    ("hr", &["h"]),
    ("hrs", &["h"]),
    ("d", &["day"]),
    ("a", &["year"]),
    ("yr", &["year"]),
    ("yrs", &["year"]),
    ("annum", &["year"]),
    ("degs", &["deg"]),
    ("rads", &["rad"]),
    ("rev", &["turn"]),
    ("revs", &["turn"]),
    ("cycle", &["turn"]),
    ("cycles", &["turn"]),
    ("cps", &["Hz"]),
    ("pct", &["%"]),
    ("meter", &["m"]),
    ("meters", &["m"]),
    ("liter", &["l"]),
    ("liters", &["l"]),
    ("micron", &["um"]),
    ("cc", &["cm^3"]),
    ("feet", &["ft"]),
    ("inches", &["in"]),
    ("lbs", &["lb", "lbf"]),
    ("pounds", &["lb", "lbf"]),
    ("kips", &["kip"]),
    ("plf", &["lbf/ft"]),
    ("klf", &["kip/ft"]),
    ("psf", &["lbf/ft^2"]),
    ("ksf", &["kip/ft^2"]),
    ("pcf", &["lbf/ft^3", "lb/ft^3"]),
    ("kph", &["km/h"]),
    ("kmh", &["km/h"]),
    ("mps", &["m/s"]),
    ("fps", &["ft/s"]),
];

/// The symbols with prefixes that are met most; they go before others where only the case differs.
static FREQUENT: [&str; 17] = [
    "kN", "MN", "kPa", "MPa", "GPa", "mm", "cm", "km", "kg", "ms", "kHz", "MHz", "kJ", "kW", "MW", "mbar", "mrad",
];

/// Why a symbol is left out of the language on purpose.
pub(super) fn left_out(symbol: &str) -> Option<&'static str> {
    match symbol {
        "K" | "mK" | "degC" | "degF" | "degK" | "degR" | "°C" | "°F" | "℃" | "℉" | "celsius" | "kelvin" | "Celsius"
        | "Kelvin" => Some(
            "temperature is no dimension of the language, since no rule of it depends on one: give the effect instead, \
             such as a strain or a force",
        ),
        "mol" | "mmol" | "kmol" | "mole" => Some("amount of substance is no dimension of the language"),
        "cd" | "lm" | "lx" | "candela" => Some("luminous intensity is no dimension of the language"),
        _ => None,
    }
}

/// One sentence more on a symbol that has more than one meaning.
pub(super) fn note(symbol: &str) -> Option<&'static str> {
    match symbol {
        "lbs" | "pounds" | "pound" => Some("`lb` is the pound of mass, `lbf` the pound of force"),
        "pcf" => Some("`lbf/ft^3` is a weight per volume, `lb/ft^3` a mass per volume"),
        "ton" | "tons" => Some("`t` is the tonne of 1000 kg; a short ton is 2000 lb, a long ton 2240 lb"),
        "tonf" => Some("give the force in `kN` or `kip`, or the mass times `g_n`"),
        "kgf" | "kp" => Some("the kilogram-force is the weight of 1 kg: `kg*g_n`"),
        "d" => Some("`day` is spelt out"),
        "a" => Some("`year` is spelt out"),
        "cycle" | "cycles" => Some("a cycle is a `turn`; cycles per second are `Hz`"),
        _ => None,
    }
}

/// Units that may have been meant, the likeliest first, at most three.
pub(super) fn suggestions(symbol: &str) -> Vec<String> {
    let stages: [fn(&str) -> Vec<String>; 7] = [everyday, moment, power, other_case, by_name, product, near];
    let mut found = stages
        .iter()
        .map(|stage| stage(symbol))
        .find(|found| !found.is_empty())
        .unwrap_or_default();
    found.truncate(MOST);
    found
}

fn everyday(symbol: &str) -> Vec<String> {
    match symbol {
        "ton" | "tons" => return vec!["t".to_owned()],
        "kgf" | "kp" => return vec!["kg*g_n".to_owned()],
        _ => {}
    }
    let lower = symbol.to_lowercase();
    let meant = EVERYDAY.iter().find(|(spelling, _)| *spelling == lower);
    meant
        .map(|(_, units)| units.iter().map(|&unit| unit.to_owned()).collect())
        .unwrap_or_default()
}

/// Symbols that differ in case alone: frequent ones, then those without a prefix, then the rest.
fn other_case(symbol: &str) -> Vec<String> {
    let lower = symbol.to_lowercase();
    let frequent = FREQUENT.iter().map(|&frequent| frequent.to_owned());
    let mut found: Vec<String> = Vec::new();
    for candidate in frequent.chain(all_symbols()) {
        if candidate.to_lowercase() == lower && !found.contains(&candidate) {
            found.push(candidate);
        }
    }
    found
}

/// `newton`, `Kilonewtons`
fn by_name(symbol: &str) -> Vec<String> {
    let lower = symbol.to_lowercase();
    let is = |name: &str, text: &str| text == name || text.strip_suffix('s') == Some(name);
    let prefixes = table::PREFIXES.iter().map(|prefix| (prefix.symbol, prefix.name));
    std::iter::once(("", ""))
        .chain(prefixes)
        .find_map(|(prefix, prefix_name)| {
            let rest = lower.strip_prefix(prefix_name)?;
            let takes = |entry: &&table::Entry| prefix.is_empty() || entry.prefixes.contains(&prefix);
            let entry = table::entries()
                .iter()
                .filter(takes)
                .find(|entry| is(entry.name, rest))?;
            Some(vec![format!("{prefix}{}", entry.symbol)])
        })
        .unwrap_or_default()
}

/// A force with a length or a time, written as one word: `Nm`, `kNm`, `ftlbf`, `kNs`.
fn moment(symbol: &str) -> Vec<String> {
    let is = |part: &str, dimensions: &[Dimension]| table::find(part).is_some_and(|(own, _)| dimensions.contains(&own));
    let (force, other) = ([Dimension::FORCE], [Dimension::LENGTH, Dimension::TIME]);
    let products = cuts(symbol).into_iter();
    let mut products = products.filter(|(a, b)| is(a, &force) && is(b, &other) || is(a, &other) && is(b, &force));
    products
        .next()
        .map(|(first, second)| format!("{first}*{second}"))
        .into_iter()
        .collect()
}

/// Any two symbols written as one.
fn product(symbol: &str) -> Vec<String> {
    cuts(symbol)
        .first()
        .map(|(first, second)| format!("{first}*{second}"))
        .into_iter()
        .collect()
}

/// The ways of reading a word as two symbols, those with the fewest rare symbols first.
fn cuts(symbol: &str) -> Vec<(&str, &str)> {
    let cuts = symbol.char_indices().skip(1).map(|(at, _)| symbol.split_at(at));
    let mut known: Vec<_> = cuts
        .filter(|(a, b)| table::find(a).is_some() && table::find(b).is_some())
        .collect();
    known.sort_by_key(|(a, b)| usize::from(is_rare(a)) + usize::from(is_rare(b)));
    known
}

/// A power without its sign: `mm2`, `m³`.
fn power(symbol: &str) -> Vec<String> {
    let powers = [("2", "2"), ("3", "3"), ("4", "4"), ("²", "2"), ("³", "3"), ("⁴", "4")];
    let power = powers
        .iter()
        .find_map(|(end, power)| Some((symbol.strip_suffix(end)?, power)));
    let known = power.filter(|(base, _)| table::find(base).is_some());
    known
        .map(|(base, power)| format!("{base}^{power}"))
        .into_iter()
        .collect()
}

/// Whether a symbol has a prefix, and is not frequent.
fn is_rare(symbol: &str) -> bool {
    !FREQUENT.contains(&symbol) && !table::entries().iter().any(|entry| entry.symbol == symbol)
}

/// One slip away from a symbol without a prefix or a frequent one.
fn near(symbol: &str) -> Vec<String> {
    const SHORTEST: usize = 3;
    if symbol.chars().count() < SHORTEST {
        return Vec::new();
    }
    let bare = table::entries().iter().map(|entry| entry.symbol);
    bare.chain(FREQUENT)
        .filter(|known| known.chars().count() > 1 && strsim::osa_distance(symbol, known) == 1)
        .map(str::to_owned)
        .collect()
}

/// Every symbol, without a prefix first.
fn all_symbols() -> impl Iterator<Item = String> {
    let bare = table::entries().iter().map(|entry| entry.symbol.to_owned());
    let prefixed = table::entries().iter().flat_map(|entry| {
        entry
            .prefixes
            .iter()
            .map(move |prefix| format!("{prefix}{}", entry.symbol))
    });
    bare.chain(prefixed)
}
