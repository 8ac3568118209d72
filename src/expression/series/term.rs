//! One term of a series.

use std::cmp::Ordering;
use std::fmt;

use crate::expression::show::number;

/// `coefficient * h^exponent * (ln h)^logs`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct SeriesTerm {
    /// The factor before the powers.
    pub coefficient: f64,
    /// The power of h.
    pub exponent: f64,
    /// The power of ln h.
    pub logs: u32,
    /// Bound of the absolute error of the coefficient, in units of machine epsilon.
    pub(super) error: f64,
}

/// What counts as cancelled: a coefficient within that many times its error bound. Arguments that come rounded from
/// elsewhere, by a few more operations than are counted here, still cancel.
const CANCELLED: f64 = 256.0 * f64::EPSILON;

impl SeriesTerm {
    /// A term whose coefficient is rounded to the last bit.
    pub fn new(coefficient: f64, exponent: f64, logs: u32) -> Self {
        Self {
            coefficient,
            exponent,
            logs,
            error: coefficient.abs(),
        }
    }

    /// Whether no more than rounding is left of it.
    pub(super) fn is_cancelled(&self) -> bool {
        self.coefficient.abs() <= CANCELLED * self.error
    }

    /// Whether it is larger than any number as h goes to 0.
    pub(super) fn diverges(&self) -> bool {
        self.exponent < 0.0 || (self.exponent == 0.0 && self.logs > 0)
    }

    /// Whether it is negative for all small h; ln h is.
    pub(super) fn is_negative(&self) -> bool {
        (self.coefficient < 0.0) != (self.logs % 2 == 1)
    }

    /// Larger terms first, as h goes to 0.
    pub(super) fn dominance(&self, other: &Self) -> Ordering {
        self.exponent
            .total_cmp(&other.exponent)
            .then(other.logs.cmp(&self.logs))
    }

    /// The product of two terms; errors to first order, and a rounding of the product itself.
    pub(super) fn times(&self, other: &Self) -> Self {
        let coefficient = self.coefficient * other.coefficient;
        Self {
            coefficient,
            exponent: self.exponent + other.exponent,
            logs: self.logs.saturating_add(other.logs),
            error: self.coefficient.abs() * other.error + other.coefficient.abs() * self.error + coefficient.abs(),
        }
    }

    /// The sum of two terms of equal powers.
    pub(super) fn plus(&self, other: &Self) -> Self {
        let coefficient = self.coefficient + other.coefficient;
        Self {
            coefficient,
            error: self.error + other.error + coefficient.abs(),
            ..*self
        }
    }

    pub(super) fn negated(&self) -> Self {
        Self {
            coefficient: -self.coefficient,
            ..*self
        }
    }
}

/// For example `-0.5 h^2 ln(h)`.
impl fmt::Display for SeriesTerm {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let mut factors = Vec::new();
        match self.exponent {
            0.0 => {}
            1.0 => factors.push("h".to_owned()),
            exponent => factors.push(format!("h^{}", number(exponent))),
        }
        match self.logs {
            0 => {}
            1 => factors.push("ln(h)".to_owned()),
            logs => factors.push(format!("ln(h)^{logs}")),
        }
        match self.coefficient {
            1.0 if !factors.is_empty() => {}
            -1.0 if !factors.is_empty() => f.write_str("-")?,
            coefficient => factors.insert(0, number(coefficient)),
        }
        f.write_str(&factors.join(" "))
    }
}
