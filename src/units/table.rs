//! The unit table of the language.
//!
//! Sources, all from memory: "BIPM": The International System of Units (SI brochure), 9th edition, 2019; "NIST": NIST
//! Special Publication 811, Guide for the Use of the SI, 2008 edition, Appendix B; "1959": the international yard and
//! pound agreement of 1959 (1 yd = 0.9144 m, 1 lb = 0.453 592 37 kg). All conversions are exact.
//!
//! The table is static and short, so it is searched from front to back: a start of the program builds nothing.

use super::dimension::Dimension;
use super::scale::Scale;

/// A unit of the table.
#[derive(Debug)]
pub struct Entry {
    /// The symbol without a prefix.
    pub symbol: &'static str,
    /// Its English name, in the singular.
    pub name: &'static str,
    /// Its dimension.
    pub dimension: Dimension,
    /// Its size in the coherent SI unit.
    pub scale: Scale,
    /// The prefixes it takes, as symbols.
    pub prefixes: &'static [&'static str],
}

/// A prefix.
pub(super) struct Prefix {
    pub(super) symbol: &'static str,
    pub(super) name: &'static str,
    pub(super) ten: i32,
}

/// Every unit, each symbol once.
pub fn entries() -> &'static [Entry] {
    &UNITS
}

/// The dimension and scale of a symbol with or without a prefix. A symbol of the table wins over a reading with a
/// prefix: `min` is the minute, `ft` the foot, `Pa` the pascal.
pub(super) fn find(symbol: &str) -> Option<(Dimension, Scale)> {
    let bare = |symbol: &str| UNITS.iter().find(|entry| entry.symbol == symbol);
    if let Some(entry) = bare(symbol) {
        return Some((entry.dimension, entry.scale));
    }
    PREFIXES.iter().find_map(|prefix| {
        let entry = bare(symbol.strip_prefix(prefix.symbol)?)?;
        if !entry.prefixes.contains(&prefix.symbol) {
            return None;
        }
        Some((entry.dimension, entry.scale.times(Scale::of(1, 1, prefix.ten, 0))?))
    })
}

/// The SI prefixes: BIPM, table 7, with those added by the 27th CGPM in 2022 (quetta, ronna, ronto, quecto). Micro is
/// written with the micro sign, with the Greek letter, or `u`.
pub(super) static PREFIXES: [Prefix; 26] = [
    prefix("k", "kilo", 3),
    prefix("M", "mega", 6),
    prefix("m", "milli", -3),
    prefix("G", "giga", 9),
    prefix("c", "centi", -2),
    prefix("µ", "micro", -6),
    prefix("μ", "micro", -6),
    prefix("u", "micro", -6),
    prefix("n", "nano", -9),
    prefix("T", "tera", 12),
    prefix("p", "pico", -12),
    prefix("da", "deca", 1),
    prefix("h", "hecto", 2),
    prefix("d", "deci", -1),
    prefix("P", "peta", 15),
    prefix("E", "exa", 18),
    prefix("Z", "zetta", 21),
    prefix("Y", "yotta", 24),
    prefix("R", "ronna", 27),
    prefix("Q", "quetta", 30),
    prefix("f", "femto", -15),
    prefix("a", "atto", -18),
    prefix("z", "zepto", -21),
    prefix("y", "yocto", -24),
    prefix("r", "ronto", -27),
    prefix("q", "quecto", -30),
];

const NONE: &[&str] = &[];
const ALL: &[&str] = &[
    "k", "M", "m", "G", "c", "µ", "μ", "u", "n", "T", "p", "da", "h", "d", "P", "E", "Z", "Y", "R", "Q", "f", "a", "z",
    "y", "r", "q",
];
/// Prefixes of units that are only ever divided.
const SMALL: &[&str] = &["m", "µ", "μ", "u", "n"];
/// Prefixes of units that are only ever multiplied.
const LARGE: &[&str] = &["k", "M", "G"];
/// Prefixes of the bar.
const OF_BAR: &[&str] = &["k", "m", "µ", "μ", "u"];
/// Prefixes of the litre.
const OF_LITRE: &[&str] = &["h", "d", "c", "m", "µ", "μ", "u"];

const CHARGE: Dimension = Dimension::of(0, 0, 1, 1, 0);
const VOLTAGE: Dimension = Dimension::of(2, 1, -3, -1, 0);
const RESISTANCE: Dimension = Dimension::of(2, 1, -3, -2, 0);

/// The table. Sizes are `numerator, denominator, power of ten, power of π`.
static UNITS: [Entry; 45] = [
    // BIPM: base and derived units, tables 2 and 4. The gram stands for the kilogram, so that it takes prefixes.
    unit("m", "metre", Dimension::LENGTH, Scale::ONE, ALL),
    unit("g", "gram", Dimension::MASS, Scale::of(1, 1, -3, 0), ALL),
    unit("s", "second", Dimension::TIME, Scale::ONE, ALL),
    unit("A", "ampere", Dimension::CURRENT, Scale::ONE, ALL),
    unit("N", "newton", Dimension::FORCE, Scale::ONE, ALL),
    unit("Pa", "pascal", Dimension::STRESS, Scale::ONE, ALL),
    unit("J", "joule", Dimension::MOMENT, Scale::ONE, ALL),
    unit("W", "watt", Dimension::POWER, Scale::ONE, ALL),
    unit("C", "coulomb", CHARGE, Scale::ONE, ALL),
    unit("V", "volt", VOLTAGE, Scale::ONE, ALL),
    unit("Ω", "ohm", RESISTANCE, Scale::ONE, ALL),
    unit("\u{2126}", "ohm", RESISTANCE, Scale::ONE, ALL),
    unit("ohm", "ohm", RESISTANCE, Scale::ONE, ALL),
    unit("S", "siemens", Dimension::of(-2, -1, 3, 2, 0), Scale::ONE, ALL),
    unit("F", "farad", Dimension::of(-2, -1, 4, 2, 0), Scale::ONE, ALL),
    unit("H", "henry", Dimension::of(2, 1, -2, -2, 0), Scale::ONE, ALL),
    unit("Wb", "weber", Dimension::of(2, 1, -2, -1, 0), Scale::ONE, ALL),
    unit("T", "tesla", Dimension::of(0, 1, -2, -1, 0), Scale::ONE, ALL),
    // Angles; 1 turn = 2π rad. BIPM table 4 makes the hertz 1/s; here it counts cycles: 1 Hz = 1 turn/s.
    unit("rad", "radian", Dimension::ANGLE, Scale::ONE, SMALL),
    unit("deg", "degree", Dimension::ANGLE, Scale::of(1, 18, -1, 1), NONE),
    unit("°", "degree", Dimension::ANGLE, Scale::of(1, 18, -1, 1), NONE),
    unit("turn", "turn", Dimension::ANGLE, Scale::of(2, 1, 0, 1), NONE),
    unit("Hz", "hertz", Dimension::ANGULAR_FREQUENCY, Scale::of(2, 1, 0, 1), ALL),
    unit(
        "rpm",
        "revolution per minute",
        Dimension::ANGULAR_FREQUENCY,
        Scale::of(1, 3, -1, 1),
        NONE,
    ),
    // BIPM table 8: units accepted beside the SI. The year is the Julian year of 365.25 d (IAU Style Manual, 1989).
    unit("min", "minute", Dimension::TIME, Scale::of(6, 1, 1, 0), NONE),
    unit("h", "hour", Dimension::TIME, Scale::of(36, 1, 2, 0), NONE),
    unit("day", "day", Dimension::TIME, Scale::of(864, 1, 2, 0), NONE),
    unit("year", "year", Dimension::TIME, Scale::of(315_576, 1, 2, 0), NONE),
    unit("t", "tonne", Dimension::MASS, Scale::of(1, 1, 3, 0), LARGE),
    unit("l", "litre", Dimension::VOLUME, Scale::of(1, 1, -3, 0), OF_LITRE),
    unit("L", "litre", Dimension::VOLUME, Scale::of(1, 1, -3, 0), OF_LITRE),
    // BIPM, 8th edition 2006, table 8: 1 bar = 100 kPa; 1 knot = 1 nautical mile per hour = (1852/3600) m/s.
    unit("bar", "bar", Dimension::STRESS, Scale::of(1, 1, 5, 0), OF_BAR),
    unit("kn", "knot", Dimension::SPEED, Scale::of(463, 9, -2, 0), NONE),
    // BIPM section 5.4.7: the symbol % stands for 0.01.
    unit("%", "percent", Dimension::PLAIN, Scale::of(1, 1, -2, 0), NONE),
    // 3rd CGPM 1901 (BIPM, appendix 1): standard acceleration of gravity, 9.806 65 m/s^2.
    unit(
        "g_n",
        "standard gravity",
        Dimension::ACCELERATION,
        Scale::of(980_665, 1, -5, 0),
        NONE,
    ),
    // 1959: yard and pound; NIST B.8 for the rest.
    unit("in", "inch", Dimension::LENGTH, Scale::of(254, 1, -4, 0), NONE),
    unit("ft", "foot", Dimension::LENGTH, Scale::of(3048, 1, -4, 0), NONE),
    unit("yd", "yard", Dimension::LENGTH, Scale::of(9144, 1, -4, 0), NONE),
    unit("mi", "mile", Dimension::LENGTH, Scale::of(1_609_344, 1, -3, 0), NONE),
    unit(
        "mph",
        "mile per hour",
        Dimension::SPEED,
        Scale::of(44_704, 1, -5, 0),
        NONE,
    ),
    unit("lb", "pound", Dimension::MASS, Scale::of(45_359_237, 1, -8, 0), NONE),
    // 1 lb times standard gravity: 4.448 221 615 260 5 N.
    unit(
        "lbf",
        "pound-force",
        Dimension::FORCE,
        Scale::of(44_482_216_152_605, 1, -13, 0),
        NONE,
    ),
    unit(
        "kip",
        "kip",
        Dimension::FORCE,
        Scale::of(44_482_216_152_605, 1, -10, 0),
        NONE,
    ),
    // 1 lbf/in^2 = 4.448 221 615 260 5 N / (0.0254 m)^2.
    unit(
        "psi",
        "pound-force per square inch",
        Dimension::STRESS,
        Scale::of(44_482_216_152_605, 64_516, -5, 0),
        NONE,
    ),
    unit(
        "ksi",
        "kip per square inch",
        Dimension::STRESS,
        Scale::of(44_482_216_152_605, 64_516, -2, 0),
        NONE,
    ),
];

const fn unit(
    symbol: &'static str,
    name: &'static str,
    dimension: Dimension,
    scale: Scale,
    prefixes: &'static [&'static str],
) -> Entry {
    Entry {
        symbol,
        name,
        dimension,
        scale,
        prefixes,
    }
}

const fn prefix(symbol: &'static str, name: &'static str, ten: i32) -> Prefix {
    Prefix { symbol, name, ten }
}
