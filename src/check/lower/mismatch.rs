//! Findings about dimensions: what is there, what the place asks for, and what would mend it.

use super::Lowering;
use crate::check::value::Scalar;
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::Word;
use crate::source::Span;
use crate::units::{Dimension, Unit};
use std::rc::Rc;

/// Where something stands, what it is, and the unit people see it in.
pub(super) type Shown<'a> = (Span, Dimension, Option<&'a Rc<Unit>>);

impl Lowering<'_, '_, '_> {
    /// A quantity of another dimension than the place asks for. `what` names what the quantity is for.
    pub(super) fn mismatch(
        &mut self,
        place: Span,
        found: &Scalar,
        wanted: Dimension,
        what: &str,
        why: Option<(Span, &str)>,
    ) {
        let finding = if found.dimension.without_angle() == wanted.without_angle() {
            angle(place, found.dimension, wanted, what)
        } else {
            let there = dimension_in_words(found.dimension, found.unit.as_ref());
            let message = format!("{what} must be {}, not {there}", wanted.describe());
            let mut finding = Diagnostic::new(Code::UnitMismatch, place, message).here(there);
            finding.help = hint(found.dimension, wanted, None);
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
            Code::UnitAngle => Some(angle_help(b, a)),
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
            Some(angle_help(found, declared))
        } else {
            hint(found, declared, Some(unit))
        };
        self.report(finding);
    }
}

/// An angle where none may be, or the reverse.
fn angle(place: Span, found: Dimension, wanted: Dimension, what: &str) -> Diagnostic {
    let message = format!("{what} must be {}, not {}", wanted.describe(), found.describe());
    Diagnostic::new(Code::UnitAngle, place, message)
        .here(found.describe())
        .help(angle_help(found, wanted))
}

fn angle_help(found: Dimension, wanted: Dimension) -> String {
    let (plain, angle) = (Dimension::PLAIN, Dimension::ANGLE);
    let (rate, frequency) = (Dimension::RATE, Dimension::ANGULAR_FREQUENCY);
    let help = if (found, wanted) == (rate, frequency) {
        "write `Hz` for cycles per second or `rad/s` for radians per second: `1/s` says neither, and they differ by 2 pi"
    } else if (found, wanted) == (frequency, rate) {
        "a rate of events is per time, such as `/s` or `/year`: `Hz` and `rad/s` are for frequencies"
    } else if (found, wanted) == (plain, angle) {
        "multiply by `1 rad`, `1 deg` or `1 turn`, whichever the number counts"
    } else if (found, wanted) == (angle, plain) {
        "say how the angle is to be counted: `radians(...)` or `turns(...)`"
    } else {
        "an angle counts as a dimension: `radians(...)` or `turns(...)` take it off, `1 rad` or `1 turn` put it on"
    };
    help.to_string()
}

/// What is likely meant where one dimension stands for another, which people see in a unit.
fn hint(found: Dimension, wanted: Dimension, unit: Option<&Unit>) -> Option<String> {
    if wanted.power_i32(2) == Some(found) {
        return Some("this looks like a square, such as a variance: take its root with `sqrt(...)`".to_string());
    }
    if found.power_i32(2) == Some(wanted) {
        return Some("this looks like a root, such as a standard deviation: square it with `^2`".to_string());
    }
    if found.is_plain() {
        let example = match unit {
            Some(unit) => unit.text().to_string(),
            None if wanted == Dimension::TIME => "s` or `year".to_string(),
            None if wanted == Dimension::ANGULAR_FREQUENCY => "Hz` or `rad/s".to_string(),
            None => wanted.si_name(),
        };
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
        "multiply it by something in {}, or correct a unit",
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
