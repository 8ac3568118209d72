//! The spectra the language knows by name, with their arguments.

use super::arguments::Arguments;
use super::spectrum::not_known_yet;
use super::{Context, Lowering, Scope};
use crate::check::value::{Area, Density, Number, Scalar, Value};
use crate::covariance::kernel::InvalidParameter;
use crate::covariance::spectrum::{
    BandLimited, CloughPenzien, Davenport, Interpolation, Jonswap, Kaimal, KanaiTajimi, PiersonMoskowitz, Spectrum,
    VonKarman, White,
};
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{Call, ExpressionKind, Word};
use crate::source::Span;
use crate::units::Dimension;

/// The spectra the language knows by name.
pub(super) const SPECTRA: &[&str] = &[
    "white",
    "band_limited",
    "pierson_moskowitz",
    "jonswap",
    "kaimal",
    "von_karman",
    "davenport",
    "kanai_tajimi",
    "clough_penzien",
    "tabulated",
    "two_sided",
];

/// The peak enhancement of the mean JONSWAP spectrum (Hasselmann et al. 1973).
const PEAK_ENHANCEMENT: f64 = 3.3;

/// An argument: its name, its dimension, an example.
type Wanted = (&'static str, Dimension, &'static str);

const FREQUENCY: Dimension = Dimension::ANGULAR_FREQUENCY;
const PLAIN: Dimension = Dimension::PLAIN;
const SEA: [Wanted; 2] = [("hs", Dimension::LENGTH, "6 m"), ("tp", Dimension::TIME, "11 s")];
const WIND: [Wanted; 2] = [
    ("length", Dimension::LENGTH, "180 m"),
    ("mean_speed", Dimension::SPEED, "22 m/s"),
];

/// The dimension of a shape of unit area.
const SHAPE: Dimension = Dimension::of(0, 0, 1, 0, -1);

/// That of the elevation of a sea.
const ELEVATION: Dimension = Dimension::of(2, 0, 1, 0, -1);

impl Lowering<'_, '_, '_> {
    /// A call of a spectrum the language knows.
    pub(super) fn spectrum_family(&mut self, span: Span, call: &Call, name: &str, scope: Scope<'_>) -> Value {
        let plain = Scope {
            context: Context::Plain,
            ..scope
        };
        let found = match name {
            "white" => self.with_level(span, call, plain, [], |level, []| White::new(level).map(Spectrum::from)),
            "band_limited" => {
                let others = [("lower", FREQUENCY, "0 Hz"), ("upper", FREQUENCY, "2 Hz")];
                self.with_level(span, call, plain, others, |level, [lower, upper]| {
                    BandLimited::new(level, lower, upper).map(Spectrum::from)
                })
            }
            "kanai_tajimi" => {
                let others = [("frequency", FREQUENCY, "2.5 Hz"), ("damping", PLAIN, "60 %")];
                self.with_level(span, call, plain, others, |level, [frequency, damping]| {
                    KanaiTajimi::new(level, frequency, damping).map(Spectrum::from)
                })
            }
            "clough_penzien" => {
                let others = [
                    ("frequency", FREQUENCY, "2.5 Hz"),
                    ("damping", PLAIN, "60 %"),
                    ("low_frequency", FREQUENCY, "0.25 Hz"),
                    ("low_damping", PLAIN, "60 %"),
                ];
                self.with_level(
                    span,
                    call,
                    plain,
                    others,
                    |level, [frequency, damping, low, low_damping]| {
                        CloughPenzien::new(level, frequency, damping, low, low_damping).map(Spectrum::from)
                    },
                )
            }
            "pierson_moskowitz" => self.sea(span, call, plain, None, |[hs, tp, _]| {
                PiersonMoskowitz::new(hs, tp).map(Spectrum::from)
            }),
            "jonswap" => {
                let enhancement = ("peak_enhancement", PLAIN, "3.3");
                self.sea(span, call, plain, Some(enhancement), |[hs, tp, enhancement]| {
                    Jonswap::new(hs, tp, enhancement).map(Spectrum::from)
                })
            }
            "kaimal" => self.wind(span, call, plain, None, |length, speed| {
                Kaimal::new(length, speed).map(Spectrum::from)
            }),
            "von_karman" => self.wind(span, call, plain, None, |length, speed| {
                VonKarman::new(length, speed).map(Spectrum::from)
            }),
            "davenport" => self.wind(span, call, plain, Some(Davenport::LENGTH), |length, speed| {
                Davenport::new(length, speed).map(Spectrum::from)
            }),
            "two_sided" => self.two_sided(call, scope),
            _ => self.tabulated_spectrum(call),
        };
        found.unwrap_or(Value::Fault)
    }

    /// A spectrum whose level says its dimension.
    fn with_level<const N: usize>(
        &mut self,
        span: Span,
        call: &Call,
        scope: Scope<'_>,
        others: [Wanted; N],
        build: impl FnOnce(f64, [f64; N]) -> Result<Spectrum, InvalidParameter>,
    ) -> Option<Value> {
        let mut known = vec!["level"];
        known.extend(others.map(|(name, _, _)| name));
        let arguments = self.arguments(call, &[], &known)?;
        let level = self.level_of(&arguments, scope);
        let values = self.numbers(&arguments, scope, &others).ok();
        let (level, values) = (level?, values?);
        match (level.value, values) {
            (Number::Known(height), Some(values)) => {
                let spectrum = self.valid(span, &arguments, build(height, values))?;
                Some(value(spectrum, level.dimension, Area::Open))
            }
            (Number::Unset, _) => None,
            _ => Some(not_known_yet(Some(level.dimension))),
        }
    }

    /// The level of a spectrum, which must say what it is per.
    fn level_of(&mut self, arguments: &Arguments<'_>, scope: Scope<'_>) -> Option<Scalar> {
        let expression = self.required(arguments, "level", "0.02 m^2/s^4/Hz")?;
        let level = self.value(expression, scope);
        let level = self.scalar(level, expression.span, "`level`")?;
        self.is_density(level.dimension, expression.span, "`level`")?;
        Some(level)
    }

    /// A wave spectrum; `enhancement` is the argument that may be left out.
    fn sea(
        &mut self,
        span: Span,
        call: &Call,
        scope: Scope<'_>,
        enhancement: Option<Wanted>,
        build: impl FnOnce([f64; 3]) -> Result<Spectrum, InvalidParameter>,
    ) -> Option<Value> {
        self.other_words_of_the_sea(call, enhancement.is_some())?;
        let mut known = SEA.map(|(name, _, _)| name).to_vec();
        known.extend(enhancement.map(|(name, _, _)| name));
        let arguments = self.arguments(call, &[], &known)?;
        let values = self.numbers(&arguments, scope, &SEA).ok();
        let enhancement = match enhancement {
            Some(wanted) if arguments.get(wanted.0).is_some() => {
                self.numbers(&arguments, scope, &[wanted]).ok()?.map(|[value]| value)
            }
            _ => Some(PEAK_ENHANCEMENT),
        };
        match (values?, enhancement) {
            (Some([hs, tp]), Some(enhancement)) => {
                let spectrum = self.valid(span, &arguments, build([hs, tp, enhancement]))?;
                Some(value(spectrum, ELEVATION, Area::Height))
            }
            _ => Some(not_known_yet(Some(ELEVATION))),
        }
    }

    /// Arguments that a wave spectrum does not take, where it can be said how they follow from those it takes.
    fn other_words_of_the_sea(&mut self, call: &Call, is_jonswap: bool) -> Option<()> {
        let words = call.arguments.iter().filter_map(|argument| argument.name.as_ref());
        let found: Vec<(&Word, String)> = words
            .filter_map(|word| Some((word, in_words_of_the_sea(&word.text, is_jonswap)?)))
            .collect();
        if found.is_empty() {
            return Some(());
        }
        let name = super::word_text(&call.function);
        for (word, help) in found {
            let message = format!("`{name}` has no argument called `{}`", word.text);
            self.report(Diagnostic::new(Code::CallArgument, word.span, message).help(help));
        }
        None
    }

    /// A gust spectrum; `usual` is the length where it may be left out.
    fn wind(
        &mut self,
        span: Span,
        call: &Call,
        scope: Scope<'_>,
        usual: Option<f64>,
        build: impl FnOnce(f64, f64) -> Result<Spectrum, InvalidParameter>,
    ) -> Option<Value> {
        let arguments = self.arguments(call, &[], &WIND.map(|(name, _, _)| name))?;
        let values = match usual {
            Some(length) if arguments.get("length").is_none() => {
                let speed = self.numbers(&arguments, scope, &[WIND[1]]).ok()?;
                speed.map(|[speed]| [length, speed])
            }
            _ => self.numbers(&arguments, scope, &WIND).ok()?,
        };
        match values {
            Some([length, speed]) => {
                let spectrum = self.valid(span, &arguments, build(length, speed))?;
                Some(value(spectrum, SHAPE, Area::Unit))
            }
            None => Some(not_known_yet(Some(SHAPE))),
        }
    }

    /// `two_sided(...)`: a density over frequencies of both signs, half of which lies at negative ones.
    fn two_sided(&mut self, call: &Call, scope: Scope<'_>) -> Option<Value> {
        let arguments = self.arguments(call, &["a spectrum"], &[])?;
        let subject = arguments.subjects.first().copied()?;
        match self.value(subject, scope) {
            Value::Spectrum(density) => {
                if density.area != Area::Open {
                    let by = match density.area {
                        Area::Height => "it is scaled to hs²/16",
                        _ => "it has unit area",
                    };
                    let message = "this spectrum is one-sided by its definition";
                    self.report(
                        Diagnostic::new(Code::SpectrumEnergy, subject.span, message)
                            .here(by)
                            .help("leave `two_sided(...)` out: it would double the variance"),
                    );
                    return None;
                }
                let spectrum = density.spectrum.scaled(2.0).ok()?;
                Some(Value::Spectrum(Density { spectrum, ..density }))
            }
            Value::Fault => None,
            other => {
                let help = "`two_sided` takes a spectrum, such as `two_sided(white(level: ...))`";
                self.wrong_kind(subject.span, other.kind(), "a spectrum", help);
                None
            }
        }
    }

    /// `linear`, or `log` for straight lines of the logarithms.
    pub(super) fn interpolation(&mut self, arguments: &Arguments<'_>) -> Option<Interpolation> {
        let Some(given) = arguments.get("interpolation") else {
            return Some(Interpolation::Linear);
        };
        let word = match &given.kind {
            ExpressionKind::Name(path) => super::word_text(path),
            _ => String::new(),
        };
        match word.as_str() {
            "linear" => Some(Interpolation::Linear),
            "log" => Some(Interpolation::Logarithmic),
            _ => {
                let message = "`interpolation` must say what holds between the rows of the table";
                self.report(
                    Diagnostic::new(Code::CallArgument, given.span, message)
                        .help("write `interpolation: linear`, or `interpolation: log` for straight lines in log-log"),
                );
                None
            }
        }
    }
}

fn value(spectrum: Spectrum, dimension: Dimension, area: Area) -> Value {
    Value::Spectrum(Density {
        spectrum,
        dimension,
        area,
    })
}

/// How a quantity that people name follows from the height and the peak period. The ratios of the periods are those of
/// the spectrum of Pierson and Moskowitz and of the mean JONSWAP spectrum, computed from their moments.
fn in_words_of_the_sea(word: &str, is_jonswap: bool) -> Option<String> {
    let (zero_crossing, mean) = if is_jonswap {
        ("1.286", "1.199")
    } else {
        ("1.408", "1.296")
    };
    let enhanced = if is_jonswap {
        " for a peak enhancement of 3.3"
    } else {
        ""
    };
    Some(match word {
        "tz" | "t02" | "tm02" | "zero_crossing_period" => {
            format!("give the peak period: `tp` is {zero_crossing} zero-crossing periods{enhanced}")
        }
        "t1" | "t01" | "tm01" | "mean_period" => {
            format!("give the peak period: `tp` is {mean} mean periods{enhanced}")
        }
        "standard_deviation" | "sigma" | "rms" => {
            "give the significant height: `hs` is four standard deviations".to_string()
        }
        "hm0" | "height" | "significant_height" | "significant_wave_height" => "the height is called `hs`".to_string(),
        "period" | "peak_period" => "the peak period is called `tp`".to_string(),
        "frequency" | "peak_frequency" | "fp" | "wp" | "omega_p" => {
            "give the peak period: `tp: 1 turn / ...` of the peak frequency".to_string()
        }
        "gamma" if is_jonswap => "it is called `peak_enhancement`".to_string(),
        _ => return None,
    })
}
