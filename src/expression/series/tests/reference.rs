//! Series against reference values.

use std::collections::BTreeMap;

use crate::expression::{Number, Series, SeriesTerm};

fn number(value: f64) -> Series {
    Series::constant(value)
}

/// The cases of the reference table.
fn case(name: &str, h: &Series) -> Series {
    let one = number(1.0);
    let square = h.mul(h);
    let power = |exponent: f64| h.power(&number(exponent));
    match name {
        "exp(-h^2/2)" => square.div(&number(-2.0)).exp(),
        "1/(1+h^2/2)" => one.div(&one.add(&square.div(&number(2.0)))),
        "(1+h+h^2/3)*exp(-h)" => one.add(h).add(&square.div(&number(3.0))).mul(&h.neg().exp()),
        "sin(h)/h" => h.sin().div(h),
        "erf(h)/h" => h.erf().div(h),
        "sqrt(1-h)" => one.sub(h).sqrt(),
        "(1-h)^3*(1+3*h)" => one.sub(h).power(&number(3.0)).mul(&one.add(&number(3.0).mul(h))),
        "cos(3*h)*exp(-h)*(1+h)" => number(3.0).mul(h).cos().mul(&h.neg().exp()).mul(&one.add(h)),
        "(1+h^2)^-1.3" => one.add(&square).power(&number(-1.3)),
        "(1+h)^h" => one.add(h).power(h),
        "ln(1+h)" => one.add(h).ln(),
        "log10(1+h)" => one.add(h).log10(),
        "tan(h)" => h.tan(),
        "asin(h)" => h.asin(),
        "acos(h)" => h.acos(),
        "atan(h)" => h.atan(),
        "sinh(h)" => h.sinh(),
        "cosh(h)" => h.cosh(),
        "tanh(h)" => h.tanh(),
        "erf(h)" => h.erf(),
        "exp(-h^1.9)" => power(1.9).neg().exp(),
        "acos(1-h)" => one.sub(h).acos(),
        "acos(h-1)" => h.sub(&one).acos(),
        "sqrt(sin(h))" => h.sin().sqrt(),
        "(h+h^1.5)^(1/3)" => h.add(&power(1.5)).power(&number(1.0 / 3.0)),
        "h^2*ln(h)" => square.mul(&h.ln()),
        "ln(tan(h))" => h.tan().ln(),
        "h^h" => h.power(h),
        "tan(pi/2+h)" => number(std::f64::consts::FRAC_PI_2).add(h).tan(),
        _ => panic!("{name} is not a case"),
    }
}

struct Row {
    exponent: f64,
    logs: u32,
    coefficient: f64,
}

/// mpmath, by tests/reference/series.py: all terms below h^8 of each case, by name and point.
fn reference() -> BTreeMap<(String, String), Vec<Row>> {
    let text = include_str!("../../../../tests/reference/series.csv");
    let mut cases: BTreeMap<_, Vec<Row>> = BTreeMap::new();
    for record in csv::Reader::from_reader(text.as_bytes()).records() {
        let record = record.expect("the table is well formed");
        let value = |column: usize| record[column].parse().expect("a number");
        cases
            .entry((record[0].to_owned(), record[1].to_owned()))
            .or_default()
            .push(Row {
                exponent: value(2),
                logs: value(3) as u32,
                coefficient: value(4),
            });
    }
    cases
}

/// Dividing by 0.7 + h multiplies rounding by 1/0.7 from one order to the next, while the coefficients of sin(h)/h fall
/// like factorials: the carried bound is all that can be held.
fn ill_conditioned(name: &str, at: &str) -> bool {
    name == "sin(h)/h" && at == "0.7"
}

#[test]
fn coefficients_agree_with_mpmath_to_thirteen_digits() {
    let cases = reference();
    assert!(cases.len() > 50);
    let mut worst = (0.0, String::new());
    for ((name, at), rows) in &cases {
        let series = Series::expand(at.parse().expect("a number"), 8.0, |h| case(name, h));
        assert!(series.order() >= 8.0, "{name} at {at}: {series}");
        let terms: Vec<&SeriesTerm> = series
            .terms()
            .iter()
            .filter(|term| term.exponent < 8.0 - 1e-9)
            .collect();
        let rows: Vec<&Row> = rows.iter().filter(|row| row.coefficient != 0.0).collect();
        assert_eq!(terms.len(), rows.len(), "{name} at {at}: {series}");
        for (term, row) in terms.iter().zip(rows) {
            assert!(
                (term.exponent - row.exponent).abs() < 1e-9 && term.logs == row.logs,
                "{name} at {at}: {term}"
            );
            // The rounding bound that a term carries holds.
            let error = (term.coefficient - row.coefficient).abs();
            assert!(error <= term.error * f64::EPSILON, "{name} at {at}: {term}");
            let relative = error / row.coefficient.abs();
            if relative > worst.0 && !ill_conditioned(name, at) {
                worst = (relative, format!("{name} at {at}: {term}"));
            }
        }
    }
    assert!(worst.0 < 1e-13, "relative error {} in {}", worst.0, worst.1);
}

#[test]
fn zeros_of_the_reference_are_exact_zeros() {
    for ((name, at), rows) in reference() {
        let series = Series::expand(at.parse().expect("a number"), 8.0, |h| case(&name, h));
        for row in rows.iter().filter(|row| row.coefficient == 0.0) {
            assert_eq!(
                series.coefficient(row.exponent),
                Some(0.0),
                "{name} at {at}, h^{}",
                row.exponent
            );
        }
    }
}
