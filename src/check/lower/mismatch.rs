//! Findings about dimensions: what is there, what the place asks for, what the difference does, and what would mend it.

use super::Lowering;
use super::unit_or_si;
use crate::check::value::{Number, Scalar};
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::Word;
use crate::source::Span;
use crate::units::{Dimension, Unit, show, show_number};
use std::rc::Rc;

/// Where something stands, what it is, and the unit people see it in.
pub(super) type Shown<'a> = (Span, Dimension, Option<&'a Rc<Unit>>);

/// What a place asks for: a dimension, and the unit in which people write it there, if that is known.
#[derive(Clone, Copy)]
pub(super) struct Wanted<'a> {
    pub dimension: Dimension,
    pub unit: Option<&'a Unit>,
}

impl From<Dimension> for Wanted<'_> {
    fn from(dimension: Dimension) -> Self {
        Self { dimension, unit: None }
    }
}

/// Symbols that are taken for others: what was written, what was meant, and what the two are.
const TAKEN_FOR_ANOTHER: &[(&str, &str, &str)] = &[
    ("g", "g_n", "`g` is the gram; standard gravity is `g_n`"),
    ("kn", "kN", "`kn` is the knot; the kilonewton is `kN`"),
    ("S", "s", "`S` is the siemens; the second is `s`"),
    ("H", "h", "`H` is the henry; the hour is `h`"),
    (
        "m",
        "min",
        "`m` is the metre, and the minute is `min`; a speed makes a time of a length: divide by it",
    ),
    ("T", "t", "`T` is the tesla; the tonne is `t`"),
];

impl Lowering<'_, '_, '_> {
    /// A quantity of another dimension than the place asks for. `what` names what the quantity is for.
    pub(super) fn mismatch<'w>(
        &mut self,
        place: Span,
        found: &Scalar,
        wanted: impl Into<Wanted<'w>>,
        what: &str,
        why: Option<(Span, &str)>,
    ) {
        let wanted = wanted.into();
        let finding = if found.dimension.without_angle() == wanted.dimension.without_angle() {
            self.angle(place, found, wanted.dimension, what)
        } else {
            let there = dimension_in_words(found.dimension, found.unit.as_ref());
            let message = format!("{what} must be {}, not {there}", wanted.dimension.describe());
            let mut finding = Diagnostic::new(Code::UnitMismatch, place, message).here(there);
            finding.help = taken_for_another(found.unit.as_ref(), wanted.dimension)
                .or_else(|| self.power_of_it(place, found, wanted))
                .or_else(|| hint(found.dimension, wanted.dimension, wanted.unit));
            finding
        };
        let finding = match why {
            Some((at, text)) => finding.label(at, text),
            None => finding,
        };
        self.report(finding);
    }

    /// Two things that are added or compared and are not of one dimension, each with the unit people see it in.
    pub(super) fn unlike(&mut self, first: Shown<'_>, second: Shown<'_>, verb: &str) {
        let ((a_place, a, a_unit), (b_place, b, b_unit)) = (first, second);
        let code = if a.without_angle() == b.without_angle() {
            Code::UnitAngle
        } else {
            Code::UnitMismatch
        };
        let message = format!("{} cannot be {verb} {}", b.describe(), a.describe());
        let mut finding = Diagnostic::new(code, b_place, message)
            .here(dimension_in_words(b, b_unit))
            .label(a_place, dimension_in_words(a, a_unit));
        finding.help = match code {
            Code::UnitAngle => Some(self.angle_help(b_place, b, a)),
            _ if a.is_plain() => hint(a, b, b_unit.map(|unit| &**unit)),
            _ => hint(b, a, a_unit.map(|unit| &**unit)),
        };
        self.report(finding);
    }

    /// A value of another dimension than its declaration says.
    pub(super) fn not_in_declared_unit(
        &mut self,
        name: &Word,
        unit: &Unit,
        place: Span,
        found: Dimension,
        found_unit: Option<&Rc<Unit>>,
    ) {
        let there = dimension_in_words(found, found_unit);
        let declared = unit.dimension();
        let code = if found.without_angle() == declared.without_angle() {
            Code::UnitAngle
        } else {
            Code::UnitMismatch
        };
        let message = format!(
            "`{}` is declared in {}, but its value is {there}",
            name.text,
            unit.text()
        );
        let mut finding = Diagnostic::new(code, place, message).here(there).label(
            name.span,
            format!("declared in {}: {}", unit.text(), declared.describe()),
        );
        finding.help = if code == Code::UnitAngle {
            Some(self.angle_help(place, found, declared))
        } else {
            taken_for_another(found_unit, declared).or_else(|| hint(found, declared, Some(unit)))
        };
        self.report(finding);
    }

    /// An angle where none may be, or the reverse.
    fn angle(&self, place: Span, found: &Scalar, wanted: Dimension, what: &str) -> Diagnostic {
        let (rate, frequency) = (Dimension::RATE, Dimension::ANGULAR_FREQUENCY);
        let unit = match found.unit.as_ref().map_or("1/s", |unit| unit.text()) {
            reciprocal if reciprocal.starts_with('/') => format!("1{reciprocal}"),
            unit => unit.to_string(),
        };
        let message = match (found.dimension, wanted) {
            (is, asked) if (is, asked) == (rate, frequency) => {
                format!("{what} is an angle per time, and {unit} says neither cycles nor radians")
            }
            (is, asked) if (is, asked) == (frequency, rate) => {
                format!("{what} counts events per time, and {unit} counts an angle per time")
            }
            (is, asked) => format!("{what} must be {}, not {}", asked.describe(), is.describe()),
        };
        Diagnostic::new(Code::UnitAngle, place, message)
            .here(dimension_in_words(found.dimension, found.unit.as_ref()))
            .help(self.angle_help(place, found.dimension, wanted))
    }

    /// How an angle is put on or taken off, in what was written.
    fn angle_help(&self, place: Span, found: Dimension, wanted: Dimension) -> String {
        let written = self.as_written(place);
        let literal = literal(&written);
        let whole = in_brackets(&written);
        let (plain, angle) = (Dimension::PLAIN, Dimension::ANGLE);
        let (rate, frequency) = (Dimension::RATE, Dimension::ANGULAR_FREQUENCY);
        let differ = "they differ by 2 pi, and every crossing rate with them";
        if (found, wanted) == (rate, frequency) {
            match literal {
                Some(digits) => format!(
                    "write `{digits} Hz` for cycles per second or `{digits} rad/s` for radians per second: {differ}"
                ),
                None => format!(
                    "write `{whole} * 1 turn` if it counts cycles or `{whole} * 1 rad` if it counts radians: {differ}"
                ),
            }
        } else if (found, wanted) == (frequency, rate) {
            match literal {
                Some(digits) => {
                    format!(
                        "write `{digits} /s`, or a rate per `year`: taken for radians it would be 2 pi times as many"
                    )
                }
                None => format!("write `{whole} / 1 turn` to count its cycles"),
            }
        } else if (found, wanted) == (plain, angle) {
            match literal {
                Some(digits) => format!("write `{digits} rad`, `{digits} deg` or `{digits} turn`, whichever it counts"),
                None => "multiply by `1 rad`, `1 deg` or `1 turn`, whichever the number counts".to_string(),
            }
        } else if (found, wanted) == (angle, plain) {
            "say how the angle is counted: divide it by `1 rad` or by `1 turn`; the first number is 2 pi times the second"
                .to_string()
        } else {
            "an angle counts as a dimension: `/ 1 rad` or `/ 1 turn` takes it off, `* 1 rad` or `* 1 turn` puts it on"
                .to_string()
        }
    }

    /// A variance where a standard deviation is asked, or the reverse, with the numbers.
    fn power_of_it(&self, place: Span, found: &Scalar, wanted: Wanted<'_>) -> Option<String> {
        let written = self.as_written(place);
        let value = match found.value {
            Number::Known(value) if value > 0.0 => Some(value),
            _ => None,
        };
        if wanted.dimension.power_i32(2) == Some(found.dimension) {
            let own = Unit::si(wanted.dimension);
            let unit = wanted.unit.unwrap_or(&own);
            return Some(match value {
                Some(value) => format!(
                    "this looks like a square, such as a variance, of {}: write that, or `sqrt({written})`",
                    show(value.sqrt(), unit, 6)
                ),
                None => format!("this looks like a square, such as a variance: write `sqrt({written})`"),
            });
        }
        if found.dimension.power_i32(2) == Some(wanted.dimension) {
            let unit = unit_or_si(found.unit.as_ref(), found.dimension);
            let number = value.map(|value| unit.from_si(value));
            let square = match literal(&written) {
                Some(_) => format!("write `({written})^2`"),
                None => "square it with `^2`".to_string(),
            };
            return Some(match number {
                Some(number) if number != 1.0 => format!(
                    "this looks like a root, such as a standard deviation: {square}; as a variance, {} would be a \
                     standard deviation of {}",
                    show_number(number, 6),
                    show_number(number.sqrt(), 4)
                ),
                _ => format!("this looks like a root, such as a standard deviation: {square}"),
            });
        }
        None
    }
}

fn taken_for_another(unit: Option<&Rc<Unit>>, wanted: Dimension) -> Option<String> {
    let written = unit?.text();
    let (_, meant, words) = TAKEN_FOR_ANOTHER.iter().find(|(symbol, _, _)| *symbol == written)?;
    (Unit::named(meant)?.dimension() == wanted).then(|| (*words).to_string())
}

/// The digits of what is a number with or without a unit, and nothing else.
pub(super) fn literal(written: &str) -> Option<&str> {
    let is_digit = |character: char| character.is_ascii_digit() || matches!(character, '.' | '_');
    let mut end = written.find(|character| !is_digit(character)).unwrap_or(written.len());
    let rest = &written[end..];
    // A power of ten.
    if let Some(power) = rest.strip_prefix(['e', 'E']) {
        let digits = power.trim_start_matches(['-', '+']);
        let length = digits
            .find(|character: char| !character.is_ascii_digit())
            .unwrap_or(digits.len());
        if length > 0 {
            end = written.len() - digits.len() + length;
        }
    }
    let unit = written[end..].trim_start();
    let only_unit = !unit.contains(|character: char| character.is_whitespace() || matches!(character, '(' | '+' | ')'));
    (end > 0 && only_unit).then(|| &written[..end])
}

/// As a factor.
pub(super) fn in_brackets(written: &str) -> String {
    let is_one = written
        .chars()
        .all(|character| character.is_alphanumeric() || matches!(character, '_' | '.'));
    if is_one {
        written.to_string()
    } else {
        format!("({written})")
    }
}

/// What is likely meant where one dimension stands for another, which people see in a unit.
fn hint(found: Dimension, wanted: Dimension, unit: Option<&Unit>) -> Option<String> {
    if wanted.power_i32(2) == Some(found) {
        return Some("this looks like a square, such as a variance: take its root with `sqrt(...)`".to_string());
    }
    if found.power_i32(2) == Some(wanted) {
        return Some("this looks like a root, such as a standard deviation: square it with `^2`".to_string());
    }
    let example = match unit {
        Some(unit) => unit.text().to_string(),
        None if wanted == Dimension::TIME => "s` or `year".to_string(),
        None if wanted == Dimension::RATE => "/s` or `/year".to_string(),
        None if wanted == Dimension::ANGULAR_FREQUENCY => "Hz` or `rad/s".to_string(),
        None => wanted.si_name(),
    };
    if found.is_plain() {
        return Some(format!("write the unit behind the number, such as `{example}`"));
    }
    if wanted.is_plain() {
        return Some(format!(
            "divide it by something in {}, or leave the unit out",
            found.si_name()
        ));
    }
    if (found, wanted) == (Dimension::TIME, Dimension::ANGULAR_FREQUENCY) {
        return Some("write `1 turn / ...` to make a frequency of a period".to_string());
    }
    if (found, wanted) == (Dimension::ANGULAR_FREQUENCY, Dimension::TIME) {
        return Some("write `1 turn / ...` to make a period of a frequency".to_string());
    }
    let factor = wanted.over(found)?;
    Some(format!(
        "multiply it by something in {}, or correct its unit, such as to `{example}`",
        factor.si_name()
    ))
}

/// `a force in kN`: a dimension in words, with the unit it was written in.
fn dimension_in_words(dimension: Dimension, unit: Option<&Rc<Unit>>) -> String {
    match unit {
        Some(unit) if unit.text() != "1" => format!("{} in {}", dimension.describe(), unit.text()),
        _ => dimension.describe(),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_literal_is_a_number_with_its_unit_and_nothing_else() {
        for (written, digits) in [
            ("0.01 /s", Some("0.01")),
            ("2/s", Some("2")),
            ("1e-9 Hz", Some("1e-9")),
            ("25", Some("25")),
            ("3e", Some("3")),
            ("1_000.5 kN*m", Some("1_000.5")),
            ("2 * rate", None),
            ("sqrt(2)", None),
            ("2 /s + rate", None),
            ("rate", None),
            ("", None),
        ] {
            assert_eq!(literal(written), digits, "{written}");
        }
    }
}
