//! Sums and multiples of spectra.

use super::Lowering;
use super::spectrum::Frequency;
use crate::check::value::{Area, Density, Number, Scalar, Value};
use crate::covariance::spectrum::Spectrum;
use crate::diagnostics::{Code, Diagnostic};
use crate::expression::{Symbol, Tape};
use crate::source::Span;
use crate::units::Dimension;
use std::sync::Arc;

const ALLOWED: &str = "only sums and non-negative multiples of spectra are spectra";

impl Lowering<'_, '_, '_> {
    pub(super) fn spectrum_sum(&mut self, values: Vec<(f64, Span, Value)>, dimension: Dimension) -> Value {
        let mut spectra = Vec::with_capacity(values.len());
        let mut areas = Vec::with_capacity(values.len());
        for (sign, span, value) in values {
            let area = match &value {
                Value::Spectrum(density) => density.area,
                _ => Area::Open,
            };
            let Some(spectrum) = self.as_spectrum(value, span) else {
                return Value::Fault;
            };
            if sign < 0.0 {
                self.negative_spectrum(span);
                return Value::Fault;
            }
            spectra.push(spectrum);
            areas.push(area);
        }
        let first = areas.first().copied().unwrap_or(Area::Open);
        Value::Spectrum(Density {
            spectrum: Spectrum::sum(spectra),
            dimension,
            area: if areas.iter().all(|area| *area == first) {
                first
            } else {
                Area::Open
            },
        })
    }

    pub(super) fn spectrum_product(&mut self, values: Vec<(bool, Span, Value)>, dimension: Dimension) -> Value {
        let mut weight = 1.0;
        let mut found: Option<(Span, Density)> = None;
        let mut open = false;
        for (inverse, place, value) in values {
            match value {
                Value::Scalar(scalar) => match scalar.value {
                    Number::Known(number) => {
                        if number < 0.0 || (inverse && number == 0.0) {
                            self.negative_spectrum(place);
                            return Value::Fault;
                        }
                        weight = if inverse { weight / number } else { weight * number };
                    }
                    // An argument that is not known yet, unless it is the frequency itself.
                    Number::Open(node) => {
                        if Tape::compile(&self.arena, node).symbols().contains(&Symbol::Lag) {
                            let help = "write the whole density out as one expression in the frequency";
                            self.wrong_kind(place, "a function of the frequency", "a number to scale with", help);
                            return Value::Fault;
                        }
                        open = true;
                    }
                    Number::Unset => return Value::Fault,
                },
                Value::Spectrum(density) if !inverse => {
                    if let Some((first, _)) = &found {
                        let message = "the product of two spectra is no spectrum";
                        self.report(
                            Diagnostic::new(Code::SpectrumInvalid, place, message)
                                .here("a second spectrum")
                                .label(*first, "a first one")
                                .help(ALLOWED),
                        );
                        return Value::Fault;
                    }
                    found = Some((place, density));
                }
                other => {
                    self.wrong_kind(place, other.kind(), "a number to scale a spectrum with", ALLOWED);
                    return Value::Fault;
                }
            }
        }
        let Some((place, density)) = found else {
            return Value::Fault;
        };
        let weight = if open { 0.0 } else { weight };
        match density.spectrum.scaled(weight) {
            Ok(spectrum) => Value::Spectrum(Density {
                spectrum,
                dimension,
                area: density.area,
            }),
            Err(_) => {
                self.negative_spectrum(place);
                Value::Fault
            }
        }
    }

    /// A spectrum, or an expression in the frequency as one.
    fn as_spectrum(&mut self, value: Value, place: Span) -> Option<Spectrum> {
        match value {
            Value::Spectrum(density) => Some(density.spectrum),
            Value::Scalar(Scalar { value, bare_zero, .. }) => {
                if bare_zero {
                    return Some(Spectrum::zero());
                }
                let node = self.node(value)?;
                let tape = Tape::compile(&self.arena, node);
                if tape
                    .symbols()
                    .iter()
                    .any(|symbol| matches!(symbol, Symbol::Argument(_)))
                {
                    return Some(Spectrum::zero());
                }
                self.user_density("an expression", &Arc::new(tape), Vec::new(), place, Frequency::Radian)
            }
            other => {
                self.wrong_kind(place, other.kind(), "a spectrum to add", ALLOWED);
                None
            }
        }
    }

    pub(super) fn negative_spectrum(&mut self, place: Span) {
        self.report(
            Diagnostic::new(
                Code::SpectrumInvalid,
                place,
                "a spectrum cannot be subtracted or scaled by less than 0",
            )
            .here("enters with a negative weight")
            .help(ALLOWED),
        );
    }
}
