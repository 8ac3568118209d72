//! The kernels the language knows by name, with their arguments.

use super::arguments::Arguments;
use super::mismatch::literal;
use super::spectrum_family::SPECTRA;
use super::{Context, Lowering, Scope};
use crate::check::value::{Covariance, Number, Value};
use crate::covariance::kernel::{
    BandLimited, Beyond, Harmonic, InvalidParameter, Kernel, Length, LengthOf, NoLength, Oscillator, Tabulated,
};
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{Call, ExpressionKind};
use crate::source::Span;
use crate::units::{Dimension, show_number};

/// The kernels the language knows by name.
pub(super) const FAMILIES: &[&str] = &[
    "squared_exponential",
    "exponential",
    "matern",
    "rational_quadratic",
    "oscillator",
    "damped_cosine",
    "harmonic",
    "band_limited",
    "triangular",
    "tabulated",
];

impl Lowering<'_, '_, '_> {
    /// A call of a kernel the language knows.
    pub(super) fn family(&mut self, span: Span, call: &Call, name: &str, scope: Scope<'_>) -> Value {
        let plain = Scope {
            context: Context::Plain,
            ..scope
        };
        let kernel = match name {
            "squared_exponential" => self.with_length(span, call, plain, &[], |[]| LengthOf::SquaredExponential),
            "exponential" => self.with_length(span, call, plain, &[], |[]| LengthOf::Exponential),
            "triangular" => self.with_length(span, call, plain, &[], |[]| LengthOf::Triangular),
            "matern" => {
                let others = [("smoothness", Dimension::PLAIN, "5/2")];
                self.with_length(span, call, plain, &others, |[smoothness]| LengthOf::Matern {
                    smoothness,
                })
            }
            "rational_quadratic" => {
                let others = [("mixture", Dimension::PLAIN, "2")];
                self.with_length(span, call, plain, &others, |[mixture]| LengthOf::RationalQuadratic {
                    mixture,
                })
            }
            "damped_cosine" => {
                let others = [("frequency", Dimension::ANGULAR_FREQUENCY, "0.1 Hz")];
                self.with_length(span, call, plain, &others, |[frequency]| LengthOf::DampedCosine {
                    frequency,
                })
            }
            "oscillator" => {
                let wanted = [
                    ("frequency", Dimension::ANGULAR_FREQUENCY, "0.5 Hz"),
                    ("damping", Dimension::PLAIN, "2 %"),
                ];
                self.with_numbers(span, call, plain, wanted, |[frequency, damping]| {
                    Oscillator::new(frequency, damping).map(Kernel::from)
                })
            }
            "harmonic" => {
                let wanted = [("frequency", Dimension::ANGULAR_FREQUENCY, "0.1 Hz")];
                self.with_numbers(span, call, plain, wanted, |[frequency]| {
                    Harmonic::new(frequency).map(Kernel::from)
                })
            }
            "band_limited" => {
                let wanted = [
                    ("lower", Dimension::ANGULAR_FREQUENCY, "0 Hz"),
                    ("upper", Dimension::ANGULAR_FREQUENCY, "2 Hz"),
                ];
                self.with_numbers(span, call, plain, wanted, |[lower, upper]| {
                    BandLimited::new(lower, upper).map(Kernel::from)
                })
            }
            _ => self.tabulated_kernel(call),
        };
        match kernel {
            Some(kernel) => Value::Kernel(Covariance {
                kernel,
                dimension: Dimension::PLAIN,
            }),
            None => Value::Fault,
        }
    }

    /// The values of named numbers; `Err` where one is at fault, `Ok(None)` where one is not known yet.
    pub(super) fn numbers<const N: usize>(
        &mut self,
        arguments: &Arguments<'_>,
        scope: Scope<'_>,
        wanted: &[(&str, Dimension, &str); N],
    ) -> Result<Option<[f64; N]>, ()> {
        let mut values = [0.0; N];
        let (mut sound, mut known) = (true, true);
        for (slot, (name, dimension, example)) in values.iter_mut().zip(wanted) {
            let scalar = self
                .required(arguments, name, example)
                .and_then(|expression| self.number(expression, scope, *dimension, &format!("`{name}`"), None));
            match scalar.map(|scalar| scalar.value) {
                Some(Number::Known(value)) => *slot = value,
                Some(Number::Open(_)) => known = false,
                Some(Number::Unset) | None => sound = false,
            }
        }
        if sound { Ok(known.then_some(values)) } else { Err(()) }
    }

    fn with_numbers<const N: usize>(
        &mut self,
        span: Span,
        call: &Call,
        scope: Scope<'_>,
        wanted: [(&str, Dimension, &str); N],
        build: impl FnOnce([f64; N]) -> Result<Kernel, InvalidParameter>,
    ) -> Option<Kernel> {
        let arguments = self.arguments(call, &[], &wanted.map(|(name, _, _)| name))?;
        match self.numbers(&arguments, scope, &wanted).ok()? {
            Some(values) => self.valid(span, &arguments, build(values)),
            None => Some(Kernel::Constant),
        }
    }

    /// The kernel, the spectrum or the system, or a finding at the argument that none can have.
    pub(super) fn valid<T>(
        &mut self,
        span: Span,
        arguments: &Arguments<'_>,
        built: Result<T, InvalidParameter>,
    ) -> Option<T> {
        match built {
            Ok(built) => Some(built),
            Err(fault) => {
                let place = arguments
                    .get(fault.parameter)
                    .map_or(span, |expression| expression.span);
                let message = format!("`{}` of `{}` must be {}", fault.parameter, fault.family, fault.demand);
                let unit = match fault.parameter {
                    "length" if SPECTRA.contains(&fault.family) => " m",
                    "hs" => " m",
                    "mean_speed" => " m/s",
                    "length" | "tp" | "time_constant" | "over" => " s",
                    "frequency" | "low_frequency" | "lower" | "upper" => " rad/s",
                    _ => "",
                };
                let written = self.as_written(place);
                let here = match literal(&written) {
                    Some(_) if place != span => format!("this is {written}"),
                    _ => format!("this is {}{unit}", show_number(fault.value, 6)),
                };
                let mut finding = Diagnostic::new(Code::ValueRange, place, message).here(here);
                finding.help = match fault.parameter {
                    parameter if parameter.ends_with("damping") && fault.value >= 1.0 => {
                        Some("write it as a share of critical damping, such as `2 %`".to_string())
                    }
                    "upper" if fault.value > 0.0 => Some("write the smaller frequency as `lower`".to_string()),
                    _ if fault.value < 0.0 => Some("remove the sign".to_string()),
                    _ => None,
                };
                if let Some(lower) = arguments.get("lower").filter(|_| fault.parameter == "upper") {
                    finding = finding.label(lower.span, "not below the other");
                }
                self.report(finding);
                None
            }
        }
    }

    /// A kernel with a length, or a scale of fluctuation in its place.
    fn with_length<const N: usize>(
        &mut self,
        span: Span,
        call: &Call,
        scope: Scope<'_>,
        others: &[(&str, Dimension, &str); N],
        build: impl FnOnce([f64; N]) -> LengthOf,
    ) -> Option<Kernel> {
        let mut known: Vec<&str> = others.iter().map(|(name, _, _)| *name).collect();
        known.extend(["length", "scale_of_fluctuation"]);
        let arguments = self.arguments(call, &[], &known)?;
        let values = self.numbers(&arguments, scope, others);
        let fluctuation = arguments.get("scale_of_fluctuation");
        if let (Some(_), Some(word)) = (arguments.get("length"), arguments.word("scale_of_fluctuation")) {
            let message = "`length` and `scale_of_fluctuation` say the same thing in two ways";
            let mut finding = Diagnostic::new(Code::CallArgument, word.span, message).help("keep one of the two");
            if let Some(first) = arguments.word("length") {
                finding = finding.label(first.span, "the other way");
            }
            self.report(finding);
            return None;
        }
        let (name, expression) = match fluctuation {
            Some(expression) => ("scale_of_fluctuation", expression),
            None => ("length", self.required(&arguments, "length", "10 s")?),
        };
        let length = self.number(expression, scope, Dimension::TIME, &format!("`{name}`"), None)?;
        let (values, length) = match (values.ok()?, length.value) {
            (_, Number::Unset) => return None,
            (Some(values), Number::Known(length)) => (values, length),
            _ => return Some(Kernel::Constant),
        };
        let family = build(values);
        if fluctuation.is_none() {
            return self.valid(span, &arguments, family.kernel(length));
        }
        let length = match family.length(length) {
            Length::Unique(length) => length,
            Length::Two { short, long } => {
                self.two_lengths(expression.span, short, long);
                short
            }
            Length::None(why) => {
                let name = super::word_text(&call.function);
                let message = match why {
                    NoLength::TooLarge { largest } => format!(
                        "no length of `{name}` has this scale of fluctuation: at this frequency it is at most {} s",
                        show_number(largest, 4)
                    ),
                    other => format!("no length of `{name}` has this scale of fluctuation: {other}"),
                };
                let finding = Diagnostic::new(Code::KernelFluctuation, expression.span, message);
                self.report(finding.help("give `length` instead"));
                return None;
            }
        };
        self.valid(span, &arguments, family.kernel(length))
    }

    fn two_lengths(&mut self, place: Span, short: f64, long: f64) {
        let (short, long) = (show_number(short, 6), show_number(long, 6));
        let message = format!("two lengths have this scale of fluctuation: {short} s and {long} s");
        self.report(
            Diagnostic::new(Code::KernelTwoLengths, place, message)
                .here(format!("taken as a length of {short} s"))
                .help("give `length` to say which one is meant"),
        );
    }

    /// `tabulated("file.csv", beyond: POLICY)`
    fn tabulated_kernel(&mut self, call: &Call) -> Option<Kernel> {
        let arguments = self.arguments(call, &["the name of a file"], &["beyond"])?;
        let beyond = self.beyond(call, &arguments);
        let file = arguments.subjects.first().copied()?;
        let table = self.kernel_table(file);
        let (beyond, table) = (beyond?, table?);
        match Tabulated::new(table.name.clone(), &table.rows, beyond) {
            Ok(kernel) => Some(kernel.into()),
            Err(why) => {
                self.report(Diagnostic::new(Code::TableContent, file.span, why.to_string()));
                None
            }
        }
    }

    /// What holds outside of a table: there is no default.
    pub(super) fn beyond(&mut self, call: &Call, arguments: &Arguments<'_>) -> Option<Beyond> {
        let given = arguments.get("beyond");
        let word = match given.map(|expression| &expression.kind) {
            Some(ExpressionKind::Name(path)) => super::word_text(path),
            _ => String::new(),
        };
        match word.as_str() {
            "zero" => Some(Beyond::Zero),
            "hold" => Some(Beyond::Hold),
            "refuse" => Some(Beyond::Refuse),
            _ => {
                let place = given.map_or(call.brackets, |expression| expression.span);
                let message = "`beyond` must say what holds outside of the table";
                self.report(
                    Diagnostic::new(Code::CallArgument, place, message)
                        .help("write `beyond: zero`, `beyond: hold` (the last value) or `beyond: refuse`"),
                );
                None
            }
        }
    }
}
