//! Checks of the stage as a whole: algebra, conversion, reading, display.

use std::collections::HashSet;
use std::f64::consts::PI;

use proptest::prelude::*;

use super::table::{PREFIXES, find};
use super::*;
use crate::language::tree::{UnitExpression, UnitFactor, Word};
use crate::source::{FileId, Span};

/// An expression of these symbols and powers.
fn expression(factors: &[(&str, i32)]) -> UnitExpression {
    let span = Span::new(FileId(0), 0, 0);
    let factor = |&(symbol, power): &(&str, i32)| UnitFactor {
        symbol: Word {
            text: symbol.into(),
            span,
        },
        power,
    };
    UnitExpression {
        span,
        factors: factors.iter().map(factor).collect(),
    }
}

/// Reads the spellings that this stage writes: `a*b^2/(c*d)`, `1/s`, `/s`.
fn parse(text: &str) -> UnitExpression {
    let (above, below) = text.split_once('/').unwrap_or((text, ""));
    let below = below.trim_start_matches('(').trim_end_matches(')');
    let mut factors = Vec::new();
    for (part, sign) in [(above, 1), (below, -1)] {
        for word in part.split('*').filter(|word| !matches!(*word, "" | "1")) {
            let (symbol, power) = word.split_once('^').unwrap_or((word, "1"));
            factors.push((symbol, sign * power.parse::<i32>().unwrap()));
        }
    }
    expression(&factors)
}

fn unit(text: &str) -> Unit {
    resolve(&parse(text)).unwrap()
}

fn every_symbol() -> Vec<String> {
    let bare = entries().iter().map(|entry| entry.symbol.to_owned());
    let with_prefixes = |entry: &'static Entry| entry.prefixes.iter().map(move |p| format!("{p}{}", entry.symbol));
    bare.chain(entries().iter().flat_map(with_prefixes)).collect()
}

#[test]
fn every_symbol_has_one_reading() {
    let symbols = every_symbol();
    let distinct: HashSet<&String> = symbols.iter().collect();
    assert_eq!(distinct.len(), symbols.len());
    for symbol in &symbols {
        assert!(find(symbol).is_some(), "{symbol}");
    }
    for entry in entries() {
        for prefix in entry.prefixes {
            assert!(
                PREFIXES.iter().any(|known| known.symbol == *prefix),
                "{prefix}{}",
                entry.symbol
            );
        }
    }
}

#[test]
fn exact_symbols_win_over_prefixes() {
    assert_eq!(unit("min").dimension(), Dimension::TIME);
    assert_eq!(unit("ft").dimension(), Dimension::LENGTH);
    assert_eq!(unit("kn").dimension(), Dimension::SPEED);
    assert_eq!(unit("Pa").dimension(), Dimension::STRESS);
    assert_eq!(unit("kt").to_si(1.0), 1e6);
    assert_eq!(unit("T").dimension(), Dimension::of(0, 1, -2, -1, 0));
    for no_unit in ["", "k", "mmin", "kft", "krad", "cd", "ct", "mday", "mkg", "kkN", "m%"] {
        assert!(find(no_unit).is_none(), "{no_unit}");
    }
}

#[test]
fn conversions_round_once() {
    for (value, symbol, expected) in [
        (36.0, "mm", 0.036),
        (7.0, "%", 0.07),
        (17.0, "%", 0.17),
        (22.0, "mph", 9.83488),
        (405.0, "MPa", 4.05e8),
        (118.0, "kN", 118_000.0),
        (1.0, "kg", 1.0),
        (50.0, "year", 1_577_880_000.0),
        (3.0, "g_n", 29.41995),
        (1.0, "lbf", 4.448_221_615_260_5),
        (1.0, "µm", 1e-6),
        (1.0, "kN/mm^2", 1e9),
        (1.0, "km/h", 1.0 / 3.6),
        // Nearest doubles to the exact fractions, by Python's fractions module.
        (1.0, "psi", 6_894.757_293_168_362),
        (36.0, "ksi", 248_211_262.554_061),
        (30.0, "kn", 15.433_333_333_333_334),
        (0.012, "mm/year", 3.802_570_537_683_474e-13),
        (90.0, "deg", PI / 2.0),
        (180.0, "deg", PI),
        (360.0, "°", 2.0 * PI),
        (1.0, "turn", 2.0 * PI),
        (0.25, "Hz", PI / 2.0),
        (30.0, "rpm", PI),
        (1.0, "kHz", 2000.0 * PI),
    ] {
        assert_eq!(unit(symbol).to_si(value), expected, "{value} {symbol}");
    }
    assert_eq!(unit("deg").from_si(PI), 180.0);
    assert_eq!(unit("Hz").from_si(2.0 * PI), 1.0);
}

#[test]
fn texts_are_spelt_alike() {
    for (factors, text) in [
        (&[("kN", 1), ("m", -2)][..], "kN/m^2"),
        (&[("m", -2), ("kN", 1)], "kN/m^2"),
        (&[("s", -1)], "/s"),
        (&[("m", 2), ("rad", -1), ("s", 1)], "m^2*s/rad"),
        (&[("N", 1), ("m", -1), ("s", -2)], "N/(m*s^2)"),
        (&[("m", 1), ("m", 1)], "m^2"),
        (&[("kN", 1), ("kN", -1)], "1"),
        (&[("m", 0)], "1"),
        (&[], "1"),
    ] {
        assert_eq!(resolve(&expression(factors)).unwrap().text(), text);
    }
    let (kilonewton, second) = (unit("kN"), unit("s"));
    assert_eq!(kilonewton.power(2).unwrap().text(), "kN^2");
    assert_eq!(kilonewton.over(&second).unwrap().text(), "kN/s");
    assert_eq!(kilonewton.times(&unit("m/s")).unwrap().text(), "kN*m/s");
}

#[test]
fn dimensions_are_named() {
    for (text, si_name, words) in [
        ("1", "1", "a plain number"),
        ("kN", "N", "a force"),
        ("kN*m", "N*m", "a moment (force*length)"),
        ("J", "N*m", "a moment (force*length)"),
        ("MPa", "Pa", "a stress"),
        ("t", "kg", "a mass"),
        ("in", "m", "a length"),
        ("mph", "m/s", "a speed"),
        ("g_n", "m/s^2", "an acceleration"),
        ("kip/ft", "N/m", "a stiffness (force/length)"),
        ("N*s/m", "N*s/m", "a damping coefficient (force*time/length)"),
        ("kN/m^3", "N/m^3", "a specific weight (force/volume)"),
        ("lb/ft^3", "kg/m^3", "a density (mass/volume)"),
        ("lb/ft", "kg/m", "a mass per length"),
        ("kg*m", "kg*m", "something of dimension mass*length"),
        ("lb*in^2", "kg*m^2", "a mass moment of inertia (mass*length^2)"),
        ("kN*m/deg", "N*m/rad", "a rotational stiffness (moment/angle)"),
        ("kN*m^2", "N*m^2", "a bending stiffness (force*length^2)"),
        ("N*s", "N*s", "an impulse (force*time)"),
        ("kN/min", "N/s", "a force rate (force/time)"),
        ("MPa/year", "Pa/s", "a stress rate (stress/time)"),
        ("Pa*s", "Pa*s", "a viscosity (stress*time)"),
        (
            "MPa^2/Hz",
            "Pa^2*s/rad",
            "a spectral density of stress (stress^2*time/angle)",
        ),
        ("kN^2/s^2", "N^2/s^2", "something of dimension force^2/time^2"),
        ("A*h", "C", "an electric charge"),
        ("mA", "A", "an electric current"),
        ("Hz", "rad/s", "an angular frequency (angle/time)"),
        ("/year", "1/s", "a rate (1/time)"),
        ("kW", "W", "a power"),
        ("kN^2", "N^2", "something of dimension force^2"),
        (
            "kN^2/Hz",
            "N^2*s/rad",
            "a spectral density of force (force^2*time/angle)",
        ),
        (
            "m^2/Hz",
            "m^2*s/rad",
            "a spectral density of length (length^2*time/angle)",
        ),
        (
            "m^2/(s^4*Hz)",
            "m^2/(s^3*rad)",
            "a spectral density of acceleration (acceleration^2*time/angle)",
        ),
        ("m/N", "m/N", "something of dimension length/force"),
        ("MPa^2", "Pa^2", "something of dimension stress^2"),
        ("ohm", "ohm", "an electric resistance"),
        ("S", "S", "something of dimension conductance"),
        ("V/m", "V/m", "something of dimension voltage/length"),
        ("/kg", "1/kg", "something of dimension 1/mass"),
    ] {
        let dimension = unit(text).dimension();
        assert_eq!(dimension.si_name(), si_name, "{text}");
        assert_eq!(dimension.describe(), words, "{text}");
    }
    let toughness = Dimension::STRESS.times(Dimension::LENGTH.root(2).unwrap()).unwrap();
    assert_eq!(toughness.si_name(), "Pa*m^(1/2)");
}

#[test]
fn exponents_that_were_computed_are_recognised() {
    let fraction = |numerator, denominator| Dimension::LENGTH.power(Exponent::new(numerator, denominator));
    for (exponent, expected) in [
        (0.5, fraction(1, 2)),
        (1.0 / 3.0, fraction(1, 3)),
        (-1.5, fraction(-3, 2)),
        (0.1 + 0.2, fraction(3, 10)),
        (5.0 / 6.0, fraction(5, 6)),
        (0.0, Some(Dimension::PLAIN)),
        (4.0, fraction(4, 1)),
        (PI, None),
        (1e9, None),
        (f64::NAN, None),
        (f64::INFINITY, None),
    ] {
        assert_eq!(Dimension::LENGTH.power_f64(exponent), expected, "{exponent}");
    }
    assert_eq!(Dimension::PLAIN.power_f64(PI), Some(Dimension::PLAIN));
}

#[test]
fn slips_are_understood() {
    for (symbol, meant) in [
        ("KN", &["kN", "kn"][..]),
        ("mpa", &["MPa", "mPa"]),
        ("gpa", &["GPa"]),
        ("sec", &["s"]),
        ("hr", &["h"]),
        ("yr", &["year"]),
        ("days", &["day"]),
        ("Years", &["year"]),
        ("degrees", &["deg"]),
        ("pct", &["%"]),
        ("lbs", &["lb", "lbf"]),
        ("Nm", &["N*m"]),
        ("kNm", &["kN*m"]),
        ("Nmm", &["N*mm"]),
        ("kNs", &["kN*s"]),
        ("ftlbf", &["ft*lbf"]),
        ("mm2", &["mm^2"]),
        ("m³", &["m^3"]),
        ("hz", &["Hz"]),
        ("PSI", &["psi"]),
        ("kilonewtons", &["kN"]),
        ("feet", &["ft"]),
        ("kpi", &["kip", "ksi"]),
        ("yaer", &["year"]),
        ("kph", &["km/h"]),
        ("kgf", &["kg*g_n"]),
        ("ton", &["t"]),
        ("quux", &[]),
        ("", &[]),
        ("é", &[]),
    ] {
        let faults = resolve(&expression(&[("m", 1), (symbol, 1)])).unwrap_err();
        assert_eq!(faults.len(), 1);
        assert_eq!((faults[0].factor, faults[0].cause), (1, Cause::NotInTable));
        assert_eq!(faults[0].suggestions, meant, "{symbol}");
        for text in meant {
            unit(text);
        }
    }
    for symbol in ["K", "degC", "°C", "mol", "cd"] {
        let faults = resolve(&expression(&[(symbol, 1)])).unwrap_err();
        assert_eq!(faults[0].cause, Cause::LeftOut);
        assert!(faults[0].note.is_some());
    }
    let faults = resolve(&expression(&[("foo", 1), ("m", i32::MIN), ("%", i32::MAX), ("bar", 1)])).unwrap_err();
    let causes: Vec<Cause> = faults.iter().map(|fault| fault.cause).collect();
    assert_eq!(causes, [Cause::NotInTable, Cause::PowerTooLarge, Cause::PowerTooLarge]);
}

#[test]
fn numbers_read_well() {
    for (value, digits, text) in [
        (118.0, 4, "118"),
        (0.04, 4, "0.04"),
        (1.2e-5, 4, "1.2e-5"),
        (1e-4, 4, "0.0001"),
        (99_999.96, 6, "100000"),
        (123_456.0, 3, "123456"),
        (999_999.7, 4, "1e6"),
        (1_234_567.0, 4, "1.235e6"),
        (-0.12345, 3, "-0.123"),
        (0.0, 4, "0"),
        (-0.0, 4, "0"),
        (1.5, 0, "2"),
        (100.0, 99, "100"),
        (f64::INFINITY, 4, "infinite"),
        (f64::NEG_INFINITY, 4, "-infinite"),
        (f64::NAN, 4, "undefined"),
        (f64::MIN_POSITIVE, 3, "2.23e-308"),
    ] {
        assert_eq!(show_number(value, digits), text);
    }
    assert_eq!(show(118_000.0, &unit("kN"), 4), "118 kN");
    assert_eq!(show(0.07, &unit("%"), 4), "7 %");
    assert_eq!(show(1.2e-5 / 31_557_600.0, &unit("/year"), 4), "1.2e-5 /year");
    assert_eq!(show(3.8, &Unit::one(), 3), "3.8");
    for (seconds, text) in [
        (0.0, "0 s"),
        (0.4, "0.4 s"),
        (600.0, "600 s"),
        (1800.0, "30 min"),
        (5400.0, "1.5 h"),
        (86_400.0, "1 day"),
        (31_557_600.0, "1 year"),
        (1_577_880_000.0, "50 year"),
        (f64::INFINITY, "infinite"),
    ] {
        assert_eq!(time_in_words(seconds, 4), text);
    }
}

fn dimension() -> impl Strategy<Value = Dimension> {
    let exponent = (-12_i16..=12, 1_i16..=4);
    prop::array::uniform5(exponent).prop_map(|exponents| {
        let bases = [
            Dimension::LENGTH,
            Dimension::MASS,
            Dimension::TIME,
            Dimension::CURRENT,
            Dimension::ANGLE,
        ];
        bases
            .into_iter()
            .zip(exponents)
            .fold(Dimension::PLAIN, |product, (base, (numerator, denominator))| {
                product
                    .times(base.power(Exponent::new(numerator, denominator)).unwrap())
                    .unwrap()
            })
    })
}

fn any_unit() -> impl Strategy<Value = Unit> {
    let factor = (prop::sample::select(every_symbol()), -3..=3);
    prop::collection::vec(factor, 0..3).prop_map(|factors| {
        let factors: Vec<(&str, i32)> = factors
            .iter()
            .map(|(symbol, power)| (symbol.as_str(), *power))
            .collect();
        resolve(&expression(&factors)).unwrap()
    })
}

proptest! {
    #[test]
    fn dimensions_are_an_abelian_group_with_rational_powers(
        a in dimension(), b in dimension(), c in dimension(), n in -6_i16..=6, d in 1_i16..=6,
    ) {
        let power = Exponent::new(n, d);
        prop_assert_eq!(a.times(b), b.times(a));
        prop_assert_eq!(a.times(b).unwrap().times(c), a.times(b.times(c).unwrap()));
        prop_assert_eq!(a.times(Dimension::PLAIN), Some(a));
        prop_assert_eq!(a.over(a), Some(Dimension::PLAIN));
        prop_assert_eq!(a.over(b).unwrap().times(b), Some(a));
        prop_assert_eq!(a.times(b).unwrap().power(power), a.power(power).unwrap().times(b.power(power).unwrap()));
        prop_assert_eq!(a.power_i32(i32::from(d)).unwrap().root(d), Some(a));
        prop_assert_eq!(a.power(power), a.power_f64(f64::from(n) / f64::from(d)));
        prop_assert_eq!(a.times(a), a.power_i32(2));
    }

    #[test]
    fn dimension_arithmetic_ends_in_a_value_or_none(
        start in dimension(), n in any::<i32>(), x in any::<f64>(), p in any::<i16>(), q in any::<i16>(),
    ) {
        let _ = start.power_i32(n);
        let _ = start.power_f64(x);
        let _ = start.root(q);
        let _ = start.power(Exponent::new_raw(p, q));
        let mut growing = Some(start);
        for _ in 0..20 {
            growing = growing.and_then(|dimension| dimension.times(dimension));
        }
        prop_assert!(growing.is_none_or(|dimension| dimension == Dimension::PLAIN));
    }

    #[test]
    fn the_si_name_reads_back(exponents in prop::array::uniform5(-8_i16..=8)) {
        let [length, mass, time, current, angle] = exponents;
        let dimension = Dimension::of(length, mass, time, current, angle);
        let unit = resolve(&parse(&dimension.si_name())).unwrap();
        prop_assert_eq!(unit.dimension(), dimension);
        prop_assert_eq!(unit.to_si(1.0), 1.0);
        prop_assert_eq!(Unit::si(dimension).dimension(), dimension);
    }

    #[test]
    fn texts_read_back(unit in any_unit()) {
        let again = resolve(&parse(unit.text())).unwrap();
        prop_assert_eq!(again.text(), unit.text());
        prop_assert_eq!(again.dimension(), unit.dimension());
        let (ours, theirs) = (unit.to_si(1.0), again.to_si(1.0));
        prop_assert!((ours - theirs).abs() <= 4.0 * f64::EPSILON * ours, "{ours} {theirs}");
    }

    #[test]
    fn conversion_there_and_back(unit in any_unit(), value in -1e6..1e6_f64) {
        for back in [unit.from_si(unit.to_si(value)), unit.to_si(unit.from_si(value))] {
            prop_assert!((back - value).abs() <= 2.0 * f64::EPSILON * value.abs(), "{} {value:e} {back:e}", unit);
        }
    }

    #[test]
    fn conversion_never_gives_nan(
        factors in prop::collection::vec((prop::sample::select(every_symbol()), any::<i16>()), 0..6),
        value in any::<f64>().prop_filter("finite", |value| value.is_finite()),
    ) {
        let factors: Vec<(&str, i32)> = factors.iter().map(|(symbol, n)| (symbol.as_str(), i32::from(*n))).collect();
        if let Ok(unit) = resolve(&expression(&factors)) {
            prop_assert!(!unit.to_si(value).is_nan());
            prop_assert!(!unit.from_si(value).is_nan());
        }
    }

    /// A whole number of a unit whose size is a decimal fraction: the nearest double to the exact product, which the
    /// reading of decimal text gives.
    #[test]
    fn whole_numbers_of_decimal_units_are_correctly_rounded(n in 1_u64..100_000_000) {
        for (symbol, digits, ten) in [
            ("mm", 1, -3), ("%", 1, -2), ("kN", 1, 3), ("µs", 1, -6), ("GPa", 1, 9), ("g", 1, -3), ("in", 254, -4),
            ("ft", 3048, -4), ("mi", 1_609_344, -3), ("mph", 44_704, -5), ("lb", 45_359_237, -8),
            ("lbf", 44_482_216_152_605, -13), ("kip", 44_482_216_152_605, -10), ("g_n", 980_665, -5),
            ("year", 315_576, 2), ("mbar", 1, 2), ("ml", 1, -6),
        ] {
            let exact = format!("{}e{ten}", u128::from(n) * digits);
            prop_assert_eq!(unit(symbol).to_si(n as f64), exact.parse::<f64>().unwrap(), "{} {}", n, symbol);
        }
    }

    #[test]
    fn suggestions_are_units(symbol in "\\PC{0,8}") {
        for text in super::suggest::suggestions(&symbol) {
            prop_assert!(resolve(&parse(&text)).is_ok(), "{symbol}: {text}");
        }
    }

    #[test]
    fn shown_numbers_keep_their_digits(value in any::<f64>(), digits in 0_usize..30) {
        let text = show_number(value, digits);
        prop_assert!(!text.contains("NaN") && text.len() < 40);
        if value.is_finite() {
            let read: f64 = text.parse().unwrap();
            let half = 0.5 * 10_f64.powi(1 - digits.clamp(1, 17) as i32);
            let rounded_to_infinity = read.is_infinite() && value.abs() > 1e308;
            // Half a unit of the last digit, and what reading the text rounds.
            let room = (1.000_001 * half + f64::EPSILON) * value.abs() + 1e-320;
            prop_assert!(rounded_to_infinity || (read - value).abs() <= room);
        }
    }
}
