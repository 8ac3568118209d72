//! Processes through linear systems: `respond(X, through: SYSTEM)` and `average(X, over: T)`.

use super::arguments::Arguments;
use super::{Lowering, Scope};
use crate::check::names::{choice, near};
use crate::check::value::{Number, Scalar, Value, Varying};
use crate::covariance::form::Term;
use crate::covariance::frequency;
use crate::covariance::response::{Average, FirstOrder, Oscillator, System};
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{Call, Expression, ExpressionKind, Word};
use crate::source::Span;
use crate::units::{Base, Dimension, Exponent, show_number};

/// The systems of the language.
const SYSTEMS: &[&str] = &["oscillator", "first_order", "tabulated"];

/// Systems that one term passes through.
const MOST_SYSTEMS: usize = 16;

/// Averages that one term passes through: each doubles the instants that it depends on.
const MOST_AVERAGES: usize = 4;

/// What says how large the output of an oscillator is; one of them at most is given.
const SCALES: [&str; 3] = ["mass", "stiffness", "gain"];

/// A system with the factor from its input to its output, in SI units.
struct Passage {
    system: System,
    factor: f64,
    /// Of the output over the input.
    dimension: Dimension,
}

/// The instants at which a form over one source looks at what its systems make of it.
pub(super) fn instants(terms: &[Term]) -> usize {
    let of_term = |term: &Term| 1_usize << averages(term).min(MOST_AVERAGES + 1);
    terms.iter().map(of_term).sum()
}

fn averages(term: &Term) -> usize {
    let systems = term.operator.systems.systems().iter();
    systems.filter(|system| matches!(system, System::Average(_))).count()
}

impl Lowering<'_, '_, '_> {
    /// `respond(X, through: SYSTEM)`
    pub(super) fn respond(&mut self, call: &Call, scope: Scope<'_>) -> Value {
        let Some(arguments) = self.arguments(call, &["a process"], &["through"]) else {
            return Value::Fault;
        };
        let through = self.required(&arguments, "through", "oscillator(frequency: 1 Hz, damping: 2 %)");
        let subject = arguments.subjects.first().copied();
        let (Some(through), Some(subject)) = (through, subject) else {
            return Value::Fault;
        };
        let varying = self.subject(subject, "respond", scope);
        let input = varying.as_ref().map(|varying| (subject.span, varying.dimension));
        let passage = self.system(through, input, scope);
        match (varying, passage) {
            (Some(varying), Some(passage)) => self.passed(call, (subject.span, varying), &passage, through.span),
            _ => Value::Fault,
        }
    }

    /// `average(X, over: T)`
    pub(super) fn average(&mut self, call: &Call, scope: Scope<'_>) -> Value {
        let Some(arguments) = self.arguments(call, &["a process"], &["over"]) else {
            return Value::Fault;
        };
        let over = self.required(&arguments, "over", "3 s");
        let subject = arguments.subjects.first().copied();
        let (Some(over), Some(subject)) = (over, subject) else {
            return Value::Fault;
        };
        let varying = self.subject(subject, "average", scope);
        let time = self.number(over, scope, Dimension::TIME, "`over`", None);
        let (Some(varying), Some(Number::Known(time))) = (varying, time.map(|time| time.value)) else {
            return Value::Fault;
        };
        let Some(system) = self.valid(call.function.span, &arguments, Average::new(time)) else {
            return Value::Fault;
        };
        let passage = Passage {
            system: System::Average(system),
            factor: 1.0,
            dimension: Dimension::PLAIN,
        };
        self.passed(call, (subject.span, varying), &passage, over.span)
    }

    /// The process that comes out.
    fn passed(&mut self, call: &Call, subject: (Span, Varying), passage: &Passage, place: Span) -> Value {
        let (span, varying) = subject;
        let Some(dimension) = varying.dimension.times(passage.dimension) else {
            self.dimension_too_large(call.function.span);
            return Value::Fault;
        };
        let Some(form) = varying.form.through(&passage.system, passage.factor) else {
            let message = "the process has a mean, and the table says nothing at frequency 0";
            self.report(
                Diagnostic::new(Code::ValueRange, place, message)
                    .label(span, "has a mean")
                    .help("begin the table at frequency 0, or say `beyond: hold` or `beyond: zero`"),
            );
            return Value::Fault;
        };
        let systems = form.terms().iter().map(|term| term.operator.systems.systems().len());
        let (most, what) = if form.terms().iter().map(averages).max() > Some(MOST_AVERAGES) {
            (MOST_AVERAGES, "averages")
        } else if systems.max() > Some(MOST_SYSTEMS) {
            (MOST_SYSTEMS, "systems")
        } else {
            let unit = varying.unit.filter(|_| passage.dimension.is_plain());
            return self.form(form, dimension, unit);
        };
        let message = format!("a process passes through at most {most} {what}, one behind the other");
        self.report(Diagnostic::new(Code::ValueRange, call.function.span, message));
        Value::Fault
    }

    /// A system; `input` is the place and the dimension of what goes in, where that is known.
    fn system(
        &mut self,
        expression: &Expression,
        input: Option<(Span, Dimension)>,
        scope: Scope<'_>,
    ) -> Option<Passage> {
        let found = match &expression.kind {
            ExpressionKind::Bracket(inner) => return self.system(inner, input, scope),
            ExpressionKind::Call(call) => Some((call, super::word_text(&call.function))),
            _ => None,
        };
        match found {
            Some((call, name)) if name == "oscillator" => self.oscillator(expression.span, call, input, scope),
            Some((call, name)) if name == "first_order" => {
                let wanted = [("time_constant", Dimension::TIME, "5 s")];
                let arguments = self.arguments(call, &[], &["time_constant"])?;
                let [time_constant] = self.numbers(&arguments, scope, &wanted).ok()??;
                let system = self.valid(expression.span, &arguments, FirstOrder::new(time_constant))?;
                Some(Passage {
                    system: System::FirstOrder(system),
                    factor: 1.0,
                    dimension: Dimension::PLAIN,
                })
            }
            Some((call, name)) if name == "tabulated" => {
                let (table, dimension) = self.tabulated_response(call)?;
                Some(Passage {
                    system: System::Tabulated(table),
                    factor: 1.0,
                    dimension,
                })
            }
            other => {
                self.no_system(expression.span, other.map(|(_, name)| name));
                None
            }
        }
    }

    fn no_system(&mut self, place: Span, name: Option<String>) {
        let near = name.and_then(|name| choice(&near(&name, SYSTEMS.iter().copied())));
        let help = match near {
            Some(near) => format!("did you mean {near}?"),
            None => "write `oscillator(...)`, `first_order(...)` or `tabulated(\"file.csv\", beyond: ...)`".to_string(),
        };
        let message = "`through` must be a system that the process passes through";
        self.report(Diagnostic::new(Code::TypeMismatch, place, message).help(help));
    }

    /// `oscillator(frequency, damping[, mass | stiffness | gain])`: what comes out at rest is the input times 1/w0², 1/(m w0²),
    /// 1/k or the gain.
    fn oscillator(
        &mut self,
        span: Span,
        call: &Call,
        input: Option<(Span, Dimension)>,
        scope: Scope<'_>,
    ) -> Option<Passage> {
        let wanted = [
            ("frequency", Dimension::ANGULAR_FREQUENCY, "0.5 Hz"),
            ("damping", Dimension::PLAIN, "2 %"),
        ];
        let known = ["frequency", "damping", "mass", "stiffness", "gain"];
        let arguments = self.arguments(call, &[], &known)?;
        let numbers = self.numbers(&arguments, scope, &wanted);
        let scale = self.scale(&arguments, scope);
        if let (Ok(None), Some((place, dimension))) = (&scale, input)
            && is_force(dimension)
        {
            self.force_without_mass(span, place, dimension);
            return None;
        }
        let ([frequency, damping], scale) = (numbers.ok()??, scale.ok()?);
        let system = self.valid(span, &arguments, Oscillator::new(frequency, damping))?;
        let square = frequency * frequency;
        let (factor, dimension) = match scale {
            None => (1.0 / square, Dimension::TIME.power_i32(2)?),
            Some((word, value, dimension)) => {
                if word != "gain" {
                    self.force_goes_in(word, input, span)?;
                }
                match word {
                    "gain" => (value, dimension),
                    "mass" => (1.0 / (value * square), Dimension::TIME.power_i32(2)?.over(dimension)?),
                    _ => (1.0 / value, Dimension::PLAIN.over(dimension)?),
                }
            }
        };
        if !(factor.is_finite() && factor != 0.0) {
            let message = "the static gain of this oscillator is beyond all bounds";
            self.report(Diagnostic::new(Code::ValueRange, span, message).help("check the units of its numbers"));
            return None;
        }
        Some(Passage {
            system: System::Oscillator(system),
            factor,
            dimension,
        })
    }

    /// Mass, stiffness or gain, whichever is given; `Err` where it is at fault or not known yet.
    fn scale<'n>(
        &mut self,
        arguments: &Arguments<'_>,
        scope: Scope<'_>,
    ) -> Result<Option<(&'n str, f64, Dimension)>, ()> {
        let given: Vec<(&str, &Word, &Expression)> = SCALES
            .iter()
            .filter_map(|name| Some((*name, arguments.word(name)?, arguments.get(name)?)))
            .collect();
        let (name, expression) = match given.as_slice() {
            [] => return Ok(None),
            [(name, _, expression)] => (*name, *expression),
            [(one, first, _), (other, second, _), ..] => {
                let message = format!("`{one}` and `{other}` both say how large the response is");
                self.report(
                    Diagnostic::new(Code::CallArgument, second.span, message)
                        .label(first.span, "already said here")
                        .help("keep one of them: the frequency ties mass and stiffness together"),
                );
                return Err(());
            }
        };
        let what = format!("`{name}`");
        let value = self.value(expression, scope);
        let scalar = self.scalar(value, expression.span, &what).ok_or(())?;
        let fits = match name {
            "mass" => per_force(scalar.dimension, 0),
            "stiffness" => per_force(scalar.dimension, -2),
            _ => true,
        };
        if !fits {
            let wanted = if name == "mass" {
                Dimension::MASS
            } else {
                Dimension::STIFFNESS
            };
            self.mismatch(expression.span, &scalar, wanted, &what, None);
            return Err(());
        }
        let Number::Known(value) = scalar.value else {
            return Err(());
        };
        self.of_use(name, value, &scalar, expression.span)?;
        // A literal of the table, which outlives the arguments.
        let name = SCALES.iter().find(|known| **known == name).copied().unwrap_or("gain");
        Ok(Some((name, value, scalar.dimension)))
    }

    /// A mass and a stiffness are above 0, a gain is not 0.
    fn of_use(&mut self, name: &str, value: f64, scalar: &Scalar, place: Span) -> Result<(), ()> {
        let (allowed, demand) = match name {
            "gain" => (value != 0.0, "must not be 0"),
            _ => (value > 0.0, "must be greater than 0"),
        };
        if allowed {
            return Ok(());
        }
        let unit = super::unit_or_si(scalar.unit.as_ref(), scalar.dimension);
        let shown = crate::units::show(value, &unit, 6);
        let finding = Diagnostic::new(Code::ValueRange, place, format!("`{name}` {demand}"));
        self.report(finding.here(format!("this is {shown}")));
        Err(())
    }

    fn force_without_mass(&mut self, system: Span, input: Span, dimension: Dimension) {
        let message = "an oscillator that a force acts on needs its `mass` or its `stiffness`";
        self.report(
            Diagnostic::new(Code::CallArgument, system, message)
                .label(input, format!("goes in: {}", dimension.describe()))
                .help("add `mass: ...` or `stiffness: ...`; without them an acceleration goes in, a force per mass"),
        );
    }

    /// With a mass or a stiffness a force goes in.
    fn force_goes_in(&mut self, word: &str, input: Option<(Span, Dimension)>, system: Span) -> Option<()> {
        let (place, dimension) = input?;
        if is_force(dimension) {
            return Some(());
        }
        let message = format!(
            "with `{word}` a force goes into the oscillator, not {}",
            dimension.describe()
        );
        let help = if dimension == Dimension::ACCELERATION {
            format!("leave `{word}` out: an acceleration goes in as it is")
        } else {
            "give `gain` in its place: the output over the input at rest".to_string()
        };
        let finding = Diagnostic::new(Code::UnitMismatch, place, message).label(system, "goes into this");
        self.report(finding.help(help));
        None
    }

    /// Whether every frequency response, and every spectrum that goes through one, says something wherever it is needed.
    pub(super) fn within_responses(&mut self, varying: &Varying, name: &Word) -> bool {
        let mut sound = true;
        for (id, terms) in varying.form.by_source() {
            if terms.iter().all(|term| term.operator.systems.is_empty()) {
                continue;
            }
            let source = &self.model.sources[id.0 as usize];
            let finding = if let Err(why) = source.spectral().density(0.0) {
                let message = format!(
                    "`{}` needs the spectrum of `{}`, which cannot be told",
                    name.text, source.name
                );
                Diagnostic::new(Code::ValueRange, name.span, message)
                    .here(why.to_string())
                    .label(source.place, "passes through a system")
                    .help("let its table say `beyond: zero` or `beyond: hold`")
            } else if let Some(table) = frequency::beyond_table(source, terms) {
                let (first, last) = table.range();
                let message = format!(
                    "`{}` needs the response `{}` where its table says nothing",
                    name.text,
                    table.name()
                );
                let range = format!(
                    "the table reaches from {} to {} rad/s",
                    show_number(first, 6),
                    show_number(last, 6)
                );
                Diagnostic::new(Code::ValueRange, name.span, message)
                    .here(range)
                    .label(source.place, "has a spectrum beyond that")
                    .help("make the table longer, or say `beyond: zero` or `beyond: hold`")
            } else {
                continue;
            };
            self.report(finding);
            sound = false;
        }
        sound
    }
}

/// A force, or one per length or area, or a moment: a mass over the square of a time.
fn is_force(dimension: Dimension) -> bool {
    per_force(dimension, -2)
}

fn per_force(dimension: Dimension, time: i16) -> bool {
    let exponent = |base: Base| dimension.exponent(base);
    exponent(Base::Mass) == Exponent::from_integer(1)
        && exponent(Base::Time) == Exponent::from_integer(time)
        && exponent(Base::Current) == Exponent::from_integer(0)
}
