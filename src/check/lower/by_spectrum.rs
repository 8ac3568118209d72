//! Sources described by their spectrum: its dimension, its area, and the standard deviation that may stand beside it.

use super::arguments::Arguments;
use super::process::{Description, Subject, known};
use super::spectrum_table::table_notes;
use super::{Lowering, unit_or_si};
use crate::check::value::{Area, Density, Number, Scalar, Value, Varying};
use crate::covariance::existence;
use crate::covariance::form::SourceId;
use crate::covariance::kernel::Moment;
use crate::covariance::spectrum::Spectrum;
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{Call, Expression};
use crate::source::Span;
use crate::units::{Base, Dimension, show, show_number};
use std::f64::consts::TAU;

/// How near the area of a density must come to the variance beside it.
const AGREEMENT: f64 = 0.01;

/// How near a ratio must come to one that has a name.
const RECOGNISED: f64 = 0.05;

/// A shape that differs from unit area by more is said to have been scaled.
const ROUNDING: f64 = 1e-9;

/// A spectrum is made of at most so many others.
const MOST_PARTS: usize = 256;

/// Time over angle: what a density is per unit of its variance.
const PER_FREQUENCY: Dimension = Dimension::of(0, 0, 1, 0, -1);

impl Lowering<'_, '_, '_> {
    /// A spectrum, with a standard deviation or without.
    pub(super) fn by_spectrum(
        &mut self,
        call: &Call,
        arguments: &Arguments<'_>,
        subject: Subject<'_>,
    ) -> Option<Description> {
        let expression = arguments.get("spectrum")?;
        let mean = self.mean(arguments, subject);
        let scattered = ["standard_deviation", "coefficient_of_variation"];
        let given = scattered.iter().find_map(|name| arguments.get(name));
        let deviation = given.map(|_| self.scatter(arguments, mean.as_ref(), subject));
        let density = self.density_of(expression, subject);
        let (mean, density) = (mean?, density?);
        let deviation = match (deviation, given) {
            (Some(None), _) => return None,
            (Some(Some(scalar)), Some(expression)) => Some((scalar, expression.span)),
            _ => None,
        };
        let stated = subject.dimension.or((!mean.bare_zero).then_some(mean.dimension));
        let wanted = stated.or(deviation.as_ref().map(|(scalar, _)| scalar.dimension));
        let (dimension, is_shape) = self.dimension_of(&density, wanted, expression.span, subject)?;
        let area = self.area(&density.spectrum, expression.span)?;
        let mut notes = table_notes(&density.spectrum, &subject.name.text);
        let unit = mean
            .unit
            .clone()
            .or(deviation.as_ref().and_then(|(scalar, _)| scalar.unit.clone()));
        let spectrum = match (deviation, is_shape) {
            (None, true) => {
                self.shape_alone(call, expression.span, subject);
                return None;
            }
            (None, false) => density.spectrum,
            (Some((deviation, place)), is_shape) => {
                let value = known(&deviation)?;
                let variance = value * value;
                if !variance.is_normal() {
                    self.variance_beyond_bounds(place, subject);
                    return None;
                }
                // A plain number has shapes and densities of one dimension: the area tells them apart.
                let is_unit = density.area == Area::Unit || near(area, 1.0, AGREEMENT);
                if is_shape && (dimension != Dimension::PLAIN || is_unit) {
                    self.energy(area, 1.0, (expression.span, "a shape, whose area is 1"), None, &density)?;
                    if (area - 1.0).abs() > ROUNDING {
                        notes.push(format!(
                            "The shape of the spectrum of {} has the area {}, and was scaled to 1.",
                            subject.name.text,
                            show_number(area, 6)
                        ));
                    }
                    density.spectrum.scaled(variance / area).ok()?
                } else {
                    let shown = show(value, &unit_or_si(deviation.unit.as_ref(), dimension), 5);
                    self.energy(
                        area,
                        variance,
                        (place, "the standard deviation beside it"),
                        Some(&shown),
                        &density,
                    )?;
                    density.spectrum
                }
            }
        };
        Some(Description {
            mean: known(&mean)?,
            law: spectrum.into(),
            place: expression.span,
            dimension,
            unit,
            notes,
        })
    }

    /// The spectrum that an expression is.
    fn density_of(&mut self, expression: &Expression, subject: Subject<'_>) -> Option<Density> {
        match self.value(expression, subject.scope.in_spectrum()) {
            Value::Spectrum(density) => {
                if parts(&density.spectrum) <= MOST_PARTS {
                    return Some(density);
                }
                let message = format!("this spectrum is made of more than {MOST_PARTS} parts");
                self.report(Diagnostic::new(Code::ModelTooLarge, expression.span, message).help("use fewer terms"));
                None
            }
            Value::Fault
            | Value::Scalar(Scalar {
                value: Number::Unset, ..
            }) => None,
            other => {
                let help = match &other {
                    Value::Scalar(_) => "the same density at all frequencies is `white(level: ...)`",
                    _ => "a spectrum is made of spectra, such as `jonswap(hs: 6 m, tp: 11 s)`",
                };
                self.wrong_kind(expression.span, other.kind(), "a spectrum", help);
                None
            }
        }
    }

    /// The dimension of the process, and whether the spectrum is a shape.
    fn dimension_of(
        &mut self,
        density: &Density,
        wanted: Option<Dimension>,
        place: Span,
        subject: Subject<'_>,
    ) -> Option<(Dimension, bool)> {
        let shape = density.dimension == PER_FREQUENCY;
        let full = wanted.and_then(|process| process.power_i32(2)?.times(PER_FREQUENCY));
        match wanted {
            Some(process) if full == Some(density.dimension) => Some((process, shape)),
            Some(process) if shape => Some((process, true)),
            Some(_) => {
                let what = format!("the spectrum of `{}`", subject.name.text);
                self.not_a_density(density.dimension, full?, place, &what);
                None
            }
            None if shape => Some((Dimension::PLAIN, density.area == Area::Unit)),
            None => {
                let root = density.dimension.over(PER_FREQUENCY).and_then(|square| square.root(2));
                if root.is_none() {
                    self.dimension_too_large(place);
                }
                Some((root?, false))
            }
        }
    }

    /// Refuses what is not per Hz or per rad/s.
    pub(super) fn is_density(&mut self, found: Dimension, place: Span, what: &str) -> Option<()> {
        if *found.exponent(Base::Angle).numer() == -1 {
            return Some(());
        }
        let message = format!("{what} is a density, per Hz or per rad/s: this is {}", found.describe());
        let help =
            "write its unit with `/Hz` or `/(rad/s)`, such as `0.3 m^2/Hz`: `s` says neither, and they differ by 2 pi";
        self.report(
            Diagnostic::new(Code::UnitAngle, place, message)
                .here(found.describe())
                .help(help),
        );
        None
    }

    fn not_a_density(&mut self, found: Dimension, wanted: Dimension, place: Span, what: &str) {
        let angle = found.without_angle() == wanted.without_angle();
        let message = format!("{what} must be {}, not {}", wanted.describe(), found.describe());
        let square = wanted
            .over(PER_FREQUENCY)
            .map_or(String::new(), |square| square.si_name());
        let code = if angle { Code::UnitAngle } else { Code::UnitMismatch };
        self.report(Diagnostic::new(code, place, message).here(found.describe()).help(format!(
            "a density is in the square of the process's unit per frequency, such as `{square}/Hz` or `{square}/(rad/s)`"
        )));
    }

    /// The area of a spectrum, which may be infinite.
    fn area(&mut self, spectrum: &Spectrum, place: Span) -> Option<f64> {
        match spectrum.moment(0) {
            Moment::Infinite => Some(f64::INFINITY),
            Moment::Finite { value, .. } if value.is_normal() && value > 0.0 => Some(value),
            Moment::Finite { value, .. } => {
                let message = "the area of this spectrum, which is the variance, must be greater than 0";
                let here = format!("this is {}", show_number(value, 6));
                self.report(Diagnostic::new(Code::ValueRange, place, message).here(here));
                None
            }
            Moment::Unreached { .. } | Moment::Unknown(_) => {
                let message = "the area of this spectrum could not be computed to six digits";
                self.report(
                    Diagnostic::new(Code::SpectrumUnclear, place, message)
                        .help("check that it is smooth between its peaks, or give it as a table"),
                );
                None
            }
        }
    }

    fn shape_alone(&mut self, call: &Call, place: Span, subject: Subject<'_>) {
        let message = format!(
            "the spectrum of `{}` is a shape, and nothing says how large it is",
            subject.name.text
        );
        self.report(
            Diagnostic::new(Code::SpectrumShape, call.brackets, message)
                .label(place, "of unit area, in 1/Hz or 1/(rad/s)")
                .help("add `standard_deviation: ...`, or scale the shape with a variance"),
        );
    }

    /// Compares an area with what it must be; a ratio that a usual mistake makes is named for it. `deviation` is the
    /// standard deviation as written, for a density.
    fn energy(
        &mut self,
        area: f64,
        wanted: f64,
        (place, what): (Span, &str),
        deviation: Option<&str>,
        density: &Density,
    ) -> Option<()> {
        let ratio = area / wanted;
        if (ratio - 1.0).abs() <= AGREEMENT {
            return Some(());
        }
        let here = match deviation {
            _ if ratio.is_infinite() => "its area is infinite".to_string(),
            Some(deviation) => format!(
                "{deviation} beside a spectrum whose area is {} times its square",
                show_number(ratio, 4)
            ),
            None => format!("its area is {}", show_number(ratio, 4)),
        };
        let message = format!("the area of this spectrum does not agree with {what}");
        let (cause, mend) = cause(ratio, density.area);
        let mut finding = Diagnostic::new(Code::SpectrumEnergy, place, message).here(here);
        let effect = deviation.map_or(String::new(), |_| effect(ratio));
        finding.help = Some(match cause {
            Some(cause) => format!("{cause}{effect}: {mend}"),
            None => mend.to_string(),
        });
        self.report(finding);
        None
    }

    /// Whether every process of a margin has a finite variance.
    pub(super) fn of_finite_variance(&mut self, varying: &Varying, place: Span) -> bool {
        let mut parts = varying.form.by_source();
        let infinite = parts.find(|(source, terms)| {
            let source = self.model.sources.get(source.0 as usize);
            source.is_some_and(|source| !existence::has_derivative(source, terms, 0))
        });
        let Some((source, _)) = infinite else {
            return true;
        };
        let finding = self.infinite_variance(place, source);
        self.report(finding);
        false
    }

    /// The finding for a process of infinite variance where a finite one is needed.
    pub(super) fn infinite_variance(&self, place: Span, source: SourceId) -> Diagnostic {
        let source = &self.model.sources[source.0 as usize];
        let name = &source.name;
        Diagnostic::new(
            Code::ProcessInfiniteVariance,
            place,
            format!("the process `{name}` has no variance of its own, so nothing can be said of its values"),
        )
        .here("needs its variance")
        .label(source.place, source.roughness_in_words())
        .help(format!(
            "pass it through a response, such as `respond({name}, through: oscillator(frequency: 1 Hz, damping: 2 %))`"
        ))
    }
}

/// What a ratio of an area to a variance comes from, and the mend. The ratios: G(f) = 2 S(f), G(f) = 2 pi G(omega).
fn cause(ratio: f64, area: Area) -> (Option<&'static str>, &'static str) {
    let is = |named: f64| near(ratio, named, RECOGNISED);
    if is(1.0 / 16.0) && area == Area::Height {
        return (
            Some("`hs` is four standard deviations, and here both have one value"),
            "give `hs`, or a standard deviation of a quarter of it",
        );
    }
    if is(0.5) {
        (
            Some("half of the variance looks like a two-sided density read as one-sided"),
            "write `two_sided(...)` about it",
        )
    } else if is(2.0) {
        (
            Some("twice the variance looks like a one-sided density doubled once more"),
            "leave `two_sided(...)`, or a factor of 2, out",
        )
    } else if is(TAU) {
        (
            Some("2 pi times the variance looks like a density per Hz that is read per rad/s"),
            "where the frequency was converted from Hz to rad/s, divide the density by 2 pi too, or write its unit with `/Hz`",
        )
    } else if is(1.0 / TAU) {
        (
            Some(
                "1/(2 pi) of the variance looks like a frequency in Hz read in rad/s, or a density per rad/s read per Hz",
            ),
            "correct the unit of the frequency or of the density",
        )
    } else {
        (
            None,
            "correct the one or the other: the area of a density is the variance",
        )
    }
}

/// What a wrong area does to the result.
fn effect(ratio: f64) -> String {
    let factor = ratio.sqrt();
    let level = show_number(4.0 / factor, 3);
    format!(
        " (the standard deviation becomes {} times what is stated, and a level four of them away counts as {level})",
        show_number(factor, 3)
    )
}

fn near(value: f64, named: f64, within: f64) -> bool {
    (value / named - 1.0).abs() <= within
}

/// How many named, tabulated and written spectra a spectrum is made of.
fn parts(spectrum: &Spectrum) -> usize {
    match spectrum {
        Spectrum::Scaled(_, inner) => parts(inner),
        Spectrum::Sum(several) => several.iter().map(parts).sum(),
        Spectrum::Family(_) | Spectrum::Tabulated(_) | Spectrum::User(_) => 1,
    }
}
