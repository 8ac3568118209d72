//! Densities written by the user.

mod ends;
mod search;

use crate::covariance::kernel::{Estimate, Unavailable};
use crate::covariance::spectral::Tail;
use crate::expression::Tape;
use crate::numerics::quadrature::{self, Tolerance};
use ends::End;
use std::fmt;
use std::sync::Arc;

/// An expression in the frequency, with its further arguments set.
#[derive(Clone)]
pub struct User {
    name: String,
    tape: Arc<Tape>,
    names: Vec<String>,
    arguments: Vec<f64>,
    head: End,
    tail: End,
    /// Rising frequencies from the reach of one end to that of the other, graded towards the peaks.
    breakpoints: Vec<f64>,
}

/// Units of frequency that a series is tried in.
const MOST_UNITS: usize = 12;

/// Why an expression is no spectrum.
#[derive(Clone, Debug, PartialEq)]
pub enum InvalidSpectrum {
    /// Negative somewhere.
    Negative {
        /// The angular frequency, in rad/s.
        frequency: f64,
        /// The density there.
        density: f64,
    },
    /// No finite number somewhere.
    NoValue {
        /// The angular frequency, in rad/s.
        frequency: f64,
    },
    /// Of infinite power at low frequency: it grows at least like 1/omega towards 0.
    InfiniteAtZero {
        /// The power of omega with which it begins, -1 or below.
        exponent: f64,
    },
    /// 0 at every frequency.
    Zero,
    /// It cannot be told how it ends.
    Unclear {
        /// Which end: infinity, or frequency 0.
        at_infinity: bool,
        /// Why not, in words; h is 1/omega at infinity, omega at 0.
        reason: String,
    },
}

impl fmt::Display for InvalidSpectrum {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Negative { frequency, density } => write!(out, "its density is {density} at {frequency} rad/s"),
            Self::NoValue { frequency } => write!(out, "its density has no value at {frequency} rad/s"),
            Self::InfiniteAtZero { exponent } => {
                write!(
                    out,
                    "it grows like omega^{exponent} towards frequency 0, and its power is infinite there"
                )
            }
            Self::Zero => out.write_str("it is 0 at every frequency"),
            Self::Unclear { at_infinity, reason } => {
                let end = if *at_infinity { "high" } else { "low" };
                write!(out, "it cannot be told how it behaves at {end} frequency: {reason}")
            }
        }
    }
}

impl std::error::Error for InvalidSpectrum {}

/// Integrand values after which an integral is given up, and the operations they may take.
const EVALUATIONS: usize = 200_000;
const OPERATIONS: usize = 100_000_000;

/// The relative error aimed at.
const RELATIVE: f64 = 1e-12;

impl User {
    /// From the name of the spectrum, its expression in the frequency (rad/s) and arguments, and their names and values
    /// in SI units, in their order. Looks for the ends and the peaks of the density, at some thousand frequencies; a peak
    /// narrower than about 1 % of its frequency is found if its frequency stands in the expression or among the
    /// arguments, or if it has shoulders.
    pub fn new(
        name: impl Into<String>,
        tape: Arc<Tape>,
        arguments: Vec<(String, f64)>,
    ) -> Result<Self, InvalidSpectrum> {
        let (names, arguments): (Vec<String>, Vec<f64>) = arguments.into_iter().unzip();
        let numbers = arguments.iter().copied().chain(tape.numbers());
        let mut hints: Vec<f64> = numbers.map(f64::abs).filter(|number| number.is_normal()).collect();
        hints.sort_by(f64::total_cmp);
        hints.dedup();
        // Powers of a corner frequency soon leave the range of doubles, unless frequencies are counted in corners.
        let units = [1.0].into_iter().chain(hints.iter().copied()).take(MOST_UNITS);
        let mut first = None;
        for unit in units {
            match Self::ends(&tape, &arguments, &hints, unit) {
                Ok((head, tail, breakpoints)) => {
                    return Ok(Self {
                        name: name.into(),
                        tape,
                        names,
                        arguments,
                        head,
                        tail,
                        breakpoints,
                    });
                }
                Err(unclear @ InvalidSpectrum::Unclear { .. }) => {
                    first.get_or_insert(unclear);
                }
                Err(other) => return Err(other),
            }
        }
        Err(first.unwrap_or(InvalidSpectrum::Zero))
    }

    /// The series at both ends, in powers of frequency over a unit of frequency, and the breakpoints between them.
    fn ends(tape: &Tape, arguments: &[f64], hints: &[f64], unit: f64) -> Result<(End, End, Vec<f64>), InvalidSpectrum> {
        let end = |at_infinity: bool| {
            End::new(tape, arguments, at_infinity, unit)
                .map_err(|reason| InvalidSpectrum::Unclear { at_infinity, reason })
        };
        let (mut head, mut tail) = (end(false)?, end(true)?);
        if head.exponent() <= -1.0 {
            return Err(InvalidSpectrum::InfiniteAtZero {
                exponent: head.exponent(),
            });
        }
        for (end, at_infinity) in [(&head, false), (&tail, true)] {
            if !end.is_known() {
                let reason = "its terms cancel as far as they were followed".to_string();
                return Err(InvalidSpectrum::Unclear { at_infinity, reason });
            }
        }
        let evaluate = |omega: f64| tape.evaluate(&omega, arguments);
        let breakpoints = search::breakpoints(evaluate, &mut head, &mut tail, hints)?;
        Ok((head, tail, breakpoints))
    }

    /// The density: the expression between the ends, the series beyond, where the expression may leave the range of a
    /// double or lose its digits.
    pub(super) fn density(&self, omega: f64) -> Result<f64, Unavailable> {
        let value = if omega < self.head.reach {
            self.head.value(omega)
        } else if omega * self.tail.reach > 1.0 {
            self.tail.value(1.0 / omega)
        } else {
            self.tape.evaluate(&omega, &self.arguments)
        };
        if value.is_nan() {
            return Err(Unavailable::NoDensity {
                spectrum: self.name.clone(),
                frequency: omega,
            });
        }
        Ok(value.max(0.0))
    }

    /// lambda_n of an order that the tail leaves finite: the ends from their series, the rest by quadrature.
    pub(super) fn moment(&self, order: u32) -> Result<Estimate, Unavailable> {
        let power = f64::from(order);
        let ends = self.head.integral(power) + self.tail.integral(-power - 2.0);
        let ends = Estimate {
            value: ends,
            error: self.head.agreement * ends.abs(),
        };
        let integrand = |omega: f64| omega.powi(order as i32) * self.tape.evaluate(&omega, &self.arguments);
        let tolerance = Tolerance {
            absolute: 0.1 * RELATIVE * ends.value.abs(),
            relative: RELATIVE,
        };
        // Nothing lies between the ends of a single power.
        let evaluations = EVALUATIONS.min(OPERATIONS / self.tape.size().max(1));
        let middle = quadrature::between(integrand, &self.breakpoints, tolerance, evaluations);
        Ok(middle.map_or(ends, |middle| {
            ends.plus(Estimate {
                value: middle.value,
                error: middle.error,
            })
        }))
    }

    pub(super) fn tail(&self) -> Tail {
        if self.tail.is_flat() {
            Tail::Faster
        } else {
            Tail::Power(self.tail.exponent())
        }
    }

    pub(super) fn head(&self) -> f64 {
        self.head.exponent()
    }

    pub(super) fn grid(&self) -> Vec<f64> {
        std::iter::once(0.0).chain(self.breakpoints.iter().copied()).collect()
    }
}

impl fmt::Debug for User {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        fmt::Display::fmt(self, out)
    }
}

/// Two user spectra are the same if they are one expression with the same arguments.
impl PartialEq for User {
    fn eq(&self, other: &Self) -> bool {
        Arc::ptr_eq(&self.tape, &other.tape)
            && self.name == other.name
            && self.names == other.names
            && self.arguments == other.arguments
    }
}

impl fmt::Display for User {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(out, "{}(", self.name)?;
        for (place, (name, value)) in self.names.iter().zip(&self.arguments).enumerate() {
            let comma = if place > 0 { ", " } else { "" };
            write!(out, "{comma}{name}: {value}")?;
        }
        out.write_str(")")
    }
}
