//! Covariance functions written by the user.

use std::fmt;
use std::sync::Arc;

use super::Unavailable;
use crate::expression::{Interval, Number, Series, Tape};

/// An expression in the lag, with its further arguments set.
#[derive(Clone)]
pub struct User {
    name: String,
    tape: Arc<Tape>,
    names: Vec<String>,
    arguments: Vec<f64>,
    /// Taken off the expression: the constant part it was given with.
    constant: f64,
    times: Option<(f64, f64)>,
}

impl fmt::Debug for User {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        fmt::Display::fmt(self, out)
    }
}

/// Two user kernels are the same if they are one expression with the same arguments.
impl PartialEq for User {
    fn eq(&self, other: &Self) -> bool {
        Arc::ptr_eq(&self.tape, &other.tape)
            && self.name == other.name
            && self.names == other.names
            && self.arguments == other.arguments
            && self.constant == other.constant
    }
}

impl User {
    /// From the name of the kernel, its expression in the lag (s) and arguments, and their names and values in SI
    /// units, in their order.
    pub fn new(name: impl Into<String>, tape: Arc<Tape>, arguments: Vec<(String, f64)>) -> Self {
        let (names, arguments) = arguments.into_iter().unzip();
        let mut user = Self {
            name: name.into(),
            tape,
            names,
            arguments,
            constant: 0.0,
            times: None,
        };
        user.times = user.find_times();
        user
    }

    /// The name of the kernel.
    pub fn name(&self) -> &str {
        &self.name
    }

    /// The kernel less a constant.
    pub(super) fn less(&self, constant: f64) -> Self {
        let mut user = Self {
            constant: self.constant + constant,
            ..self.clone()
        };
        user.times = user.find_times();
        user
    }

    /// Its value at a lag, which may be no number.
    fn evaluate(&self, lag: f64) -> f64 {
        self.tape.evaluate(&lag, &self.arguments) - self.constant
    }

    /// An interval that holds its values over an interval of lags.
    pub(super) fn enclosure(&self, lag: Interval) -> Interval {
        let arguments: Vec<Interval> = self.arguments.iter().map(|value| Interval::point(*value)).collect();
        self.tape
            .evaluate(&lag, &arguments)
            .sub(&Interval::point(self.constant))
    }

    /// The operations that one value takes.
    pub(super) fn operations(&self) -> u64 {
        self.tape.size() as u64
    }

    /// Whether it is written as a sum of which a term in the lag is subtracted.
    pub fn subtracts_terms(&self) -> bool {
        self.tape.subtracts_terms()
    }

    /// Its series right of a lag, or left of it in terms of the distance.
    fn series(&self, lag: f64, order: f64, direction: f64) -> Series {
        let arguments: Vec<Series> = self.arguments.iter().map(|value| Series::constant(*value)).collect();
        Series::expand(0.0, order, |distance| {
            let there = Series::constant(lag).add(&distance.mul(&Series::constant(direction)));
            self.tape
                .evaluate(&there, &arguments)
                .sub(&Series::constant(self.constant))
        })
    }

    pub(super) fn value(&self, lag: f64) -> Result<f64, Unavailable> {
        let mut value = self.evaluate(lag);
        if lag == 0.0 && !value.is_finite() {
            // sin(x)/x and its like: the value is the limit.
            let limit = self.series(0.0, 1.0, 1.0);
            let diverges = limit
                .terms()
                .first()
                .is_some_and(|term| term.exponent < 0.0 || term.exponent == 0.0 && term.logs > 0);
            value = limit.coefficient(0.0).filter(|_| !diverges).unwrap_or(f64::NAN);
        }
        if value.is_finite() {
            Ok(value)
        } else {
            Err(Unavailable::NoValue {
                kernel: self.name.clone(),
                lag,
            })
        }
    }

    pub(super) fn loss(&self, lag: f64) -> Result<f64, Unavailable> {
        Ok(self.value(0.0)? - self.value(lag)?)
    }

    pub(super) fn expansion(&self, order: f64) -> Series {
        self.series(0.0, order.min(HIGHEST_ORDER), 1.0)
    }

    /// By series to both sides, which must agree: an expression may have a kink anywhere.
    pub(super) fn taylor(&self, lag: f64, order: usize) -> Result<Vec<f64>, Unavailable> {
        let right = self.series(lag, order as f64 + 1.0, 1.0);
        let left = self.series(lag, order as f64 + 1.0, -1.0);
        if right.reason().is_some() || left.reason().is_some() {
            return Err(Unavailable::NoValue {
                kernel: self.name.clone(),
                lag,
            });
        }
        let mut coefficients = Vec::with_capacity(order + 1);
        for derivative in 0..=order {
            let not_smooth = Unavailable::NotSmooth { lag, derivative };
            let n = derivative as f64;
            let broken = |series: &Series| {
                let here = |exponent: f64| exponent > n - 1.0 && exponent <= n;
                let whole = |exponent: f64, logs: u32| exponent == n && logs == 0;
                series
                    .terms()
                    .iter()
                    .any(|term| here(term.exponent) && !whole(term.exponent, term.logs))
            };
            let (Some(from_right), Some(from_left)) = (right.coefficient(n), left.coefficient(n)) else {
                return Err(not_smooth);
            };
            let mirrored = if derivative % 2 == 0 { from_left } else { -from_left };
            let size = from_right
                .abs()
                .max(mirrored.abs())
                .max(self.coefficient_scale(derivative));
            if broken(&right) || broken(&left) || (from_right - mirrored).abs() > JUMP * size {
                return Err(not_smooth);
            }
            coefficients.push(from_right);
        }
        Ok(coefficients)
    }

    /// The size a Taylor coefficient has, going by the variance and the shortest time.
    fn coefficient_scale(&self, n: usize) -> f64 {
        let shortest = self.times.map_or(f64::INFINITY, |(shortest, _)| shortest);
        self.evaluate(0.0).abs().min(f64::MAX) / shortest.powi(n as i32)
    }

    pub(super) fn times(&self) -> Option<(f64, f64)> {
        self.times
    }

    /// Looks along the lags, each twice the one before, for where it begins to fall and where it is gone.
    fn find_times(&self) -> Option<(f64, f64)> {
        let variance = self.value(0.0).ok().filter(|variance| *variance > 0.0)?;
        let lags = (-100..100).map(|power| 2.0_f64.powi(power));
        let values: Vec<(f64, f64)> = lags
            .filter_map(|lag| Some((lag, self.value(lag).ok()? / variance)))
            .collect();
        let begins = values.iter().find(|(_, value)| 1.0 - value > BEGUN)?.0;
        let gone = values
            .iter()
            .rev()
            .find(|(_, value)| value.abs() > GONE)
            .map_or(begins, |(lag, _)| *lag);
        // What never goes has no longest time; it is given room to turn in.
        let longest = if gone > begins * FOREVER { begins } else { gone };
        Some((begins, longest.max(begins)))
    }
}

/// Right-sided expansions end here, whatever order is asked for.
const HIGHEST_ORDER: f64 = 64.0;
/// Derivatives from both sides that differ by more than that share of their size are different.
const JUMP: f64 = 1e-9;
/// A kernel has begun to fall when it has lost that share.
const BEGUN: f64 = 0.05;
/// A kernel has gone when it is below that share for good.
const GONE: f64 = 0.02;
/// A kernel that is still there after so many times the time it began to fall in does not go.
const FOREVER: f64 = 1e6;

impl fmt::Display for User {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(out, "{}(", self.name)?;
        for (place, (name, value)) in self.names.iter().zip(&self.arguments).enumerate() {
            let comma = if place > 0 { ", " } else { "" };
            write!(out, "{comma}{name}: {value}")?;
        }
        out.write_str(")")?;
        if self.constant == 0.0 {
            Ok(())
        } else {
            write!(out, " - {}", self.constant)
        }
    }
}
