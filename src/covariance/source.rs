//! Sources: what is random in a model.

use super::frequency::sampled::Sampled;
use super::kernel::{Kernel, Smoothness, Unavailable};
use super::spectral::{SpectralDensity, Tail};
use super::spectrum::Spectrum;
use crate::source::Span;
use std::cell::OnceCell;
use std::rc::Rc;

/// What a source is described by: all that there is to know of it.
#[derive(Clone, Debug, PartialEq)]
pub enum Law {
    /// Its covariance function, in the square of the process's SI unit.
    Kernel(Kernel),
    /// Its one-sided spectral density, in the square of the process's SI unit per rad/s.
    Spectrum(Spectrum),
}

impl From<Kernel> for Law {
    fn from(kernel: Kernel) -> Self {
        Self::Kernel(kernel)
    }
}

impl From<Spectrum> for Law {
    fn from(spectrum: Spectrum) -> Self {
        Self::Spectrum(spectrum)
    }
}

/// One independent, zero-mean, stationary Gaussian process.
#[derive(Clone, Debug)]
pub struct Source {
    /// The full name of the process that made it.
    pub name: String,
    /// What it is described by.
    pub law: Law,
    /// Where its name stands.
    pub place: Span,
    /// What was taken for granted to get the description, for the reader of results.
    pub notes: Vec<String>,
    smoothness: Smoothness,
    /// Its density where each value is an integral, looked at once.
    sampled: OnceCell<Result<Rc<Sampled>, Unavailable>>,
    tail: Tail,
}

impl Source {
    /// A source with its kernel or its spectrum.
    pub fn new(name: String, law: impl Into<Law>, place: Span, notes: Vec<String>) -> Self {
        let law = law.into();
        let (smoothness, tail) = match &law {
            Law::Kernel(kernel) => {
                let smoothness = kernel.smoothness();
                let tail = Tail::from(&smoothness);
                (smoothness, tail)
            }
            Law::Spectrum(spectrum) => (Smoothness::of_tail(spectrum.tail()), spectrum.tail()),
        };
        Self {
            name,
            law,
            place,
            notes,
            smoothness,
            sampled: OnceCell::new(),
            tail,
        }
    }

    /// How its density falls at high frequency.
    pub fn tail(&self) -> Tail {
        self.tail
    }

    /// Its covariance function, where it is described by one.
    pub fn kernel(&self) -> Option<&Kernel> {
        match &self.law {
            Law::Kernel(kernel) => Some(kernel),
            Law::Spectrum(_) => None,
        }
    }

    /// Its density in pieces, where each value is an integral of its own.
    pub(super) fn sampled(&self) -> Result<Rc<Sampled>, Unavailable> {
        self.sampled
            .get_or_init(|| Ok(Rc::new(Sampled::new(self.spectral())?)))
            .clone()
    }

    /// Its spectrum, for integrals over frequency.
    pub fn spectral(&self) -> &dyn SpectralDensity {
        match &self.law {
            Law::Kernel(kernel) => kernel,
            Law::Spectrum(spectrum) => spectrum,
        }
    }

    /// Why it has no more derivatives than it has, and which part of its kernel is to blame.
    pub fn roughness_in_words(&self) -> String {
        if let Law::Spectrum(spectrum) = &self.law {
            return tail_in_words(spectrum.tail());
        }
        match &self.smoothness {
            Smoothness::Unlimited => "smooth without limit".to_string(),
            Smoothness::Exactly { derivatives, limiting } => {
                let power = crate::units::show_number(limiting.exponent, 6);
                let logarithm = if limiting.log > 0 { " ln(tau)" } else { "" };
                let term = if power == "1" && logarithm.is_empty() {
                    "tau".to_string()
                } else {
                    format!("tau^{power}{logarithm}")
                };
                let correlation = self.limiting_correlation();
                match derivatives {
                    0 if limiting.exponent <= 1.0 => {
                        format!("{correlation} has a kink at lag 0 (it falls like {term}), so it has no derivative")
                    }
                    0 => {
                        format!("{correlation} falls like {term} at lag 0, slower than tau^2, so it has no derivative")
                    }
                    1 => format!("{correlation} has a term {term} at lag 0, so it has one derivative and no more"),
                    several => {
                        format!("{correlation} has a term {term} at lag 0, so it has {several} derivatives and no more")
                    }
                }
            }
            Smoothness::AtLeast { derivatives } => format!("{derivatives} derivatives are known to exist, no more"),
            Smoothness::Unclear { reason } => reason.clone(),
        }
    }

    /// The correlation, or the one of its parts that limits how smooth it is.
    fn limiting_correlation(&self) -> String {
        let Some(whole) = self.kernel().map(without_factor) else {
            return "its correlation".to_string();
        };
        let part = whole.roughest_part();
        if std::ptr::eq(whole, part) {
            return "its correlation".to_string();
        }
        let name = part.to_string();
        let name = name.split('(').next().unwrap_or_default();
        format!("the part `{name}` of its correlation")
    }

    /// How smooth it is.
    pub fn smoothness(&self) -> &Smoothness {
        &self.smoothness
    }
}

/// How a spectrum falls, and what that leaves: the n-th derivative needs a tail that falls faster than omega^-(2n + 1).
fn tail_in_words(tail: Tail) -> String {
    let exponent = match tail {
        Tail::Faster => return "smooth without limit".to_string(),
        Tail::Power(exponent) | Tail::AtLeast(exponent) => exponent,
    };
    let falls = match power_in_words(exponent) {
        _ if exponent == 0.0 => "does not fall at high frequency".to_string(),
        power => format!("falls like omega^-{power}"),
    };
    let derivatives = (1..)
        .take_while(|order| 2.0 * f64::from(*order) + 1.0 < exponent)
        .count();
    let needed = 2 * derivatives + if exponent > 1.0 { 3 } else { 1 };
    let has = match derivatives {
        _ if exponent <= 1.0 => "its variance is infinite".to_string(),
        0 => "it has no derivative".to_string(),
        1 => "it has one derivative and no more".to_string(),
        several => format!("it has {several} derivatives and no more"),
    };
    if exponent == 0.0 {
        format!("its spectrum {falls}, so {has}")
    } else {
        format!("its spectrum {falls}, no faster than omega^-{needed}, so {has}")
    }
}

/// A positive exponent, as a fraction where it is one of thirds.
fn power_in_words(exponent: f64) -> String {
    let thirds = 3.0 * exponent;
    let is_fraction = (thirds - thirds.round()).abs() < 1e-9 && (exponent - exponent.round()).abs() > 1e-9;
    if is_fraction {
        format!("({}/3)", thirds.round())
    } else {
        crate::units::show_number(exponent, 6)
    }
}

fn without_factor(kernel: &Kernel) -> &Kernel {
    match kernel {
        Kernel::Scaled(_, inner) => without_factor(inner),
        other => other,
    }
}
