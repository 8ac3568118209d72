//! What is known of a kernel's values for certain: bounds, and what a table leaves open.

use super::Kernel;
use crate::expression::{Interval, Number};

/// The error of closed forms and of the limit at lag zero, as a share of the value at lag zero.
const CLOSED_FORM: f64 = 1e-12;

/// The error that the values of an expression are taken to have where they are only looked at, not enclosed.
const EXPRESSION: f64 = 1e-13;

impl Kernel {
    /// An interval that holds the covariance at every lag in an interval of lags, none negative.
    ///
    /// Expressions are evaluated over intervals, so that nothing but the errors that `libm` states for its functions is
    /// taken on trust. Named families are trusted to 1e-12 of their variance, which the tests of their values show. A table
    /// is taken for what its rows say to half their last digit, and between them for what its spline says to twice
    /// the distance from the straight line. All numbers where nothing is known.
    pub fn enclosure(&self, lag: Interval) -> Interval {
        match self {
            Self::Constant => Interval::point(1.0),
            Self::Family(_) => self.closed(lag),
            Self::Tabulated(table) => table.enclosure(lag),
            Self::User(user) => {
                let found = user.enclosure(lag);
                if found.is_finite() || lag != Interval::point(0.0) {
                    found
                } else {
                    // sin(x)/x and its like: the limit.
                    self.closed(lag)
                }
            }
            Self::Scaled(weight, kernel) => Interval::point(*weight).mul(&kernel.enclosure(lag)),
            Self::Sum(terms) => {
                let terms = terms.iter().map(|term| term.enclosure(lag));
                terms.fold(Interval::point(0.0), |sum, term| sum.add(&term))
            }
            Self::Product(factors) => {
                let factors = factors.iter().map(|factor| factor.enclosure(lag));
                factors.fold(Interval::point(1.0), |product, factor| product.mul(&factor))
            }
        }
    }

    /// From values that are trusted, over a lag that is no wider than rounding makes it.
    fn closed(&self, lag: Interval) -> Interval {
        let (Ok(low), Ok(high), Ok(variance)) = (self.value(lag.low), self.value(lag.high), self.value(0.0)) else {
            return Interval::WHOLE;
        };
        let error = CLOSED_FORM * variance.abs();
        Interval::about(low, error).hull(Interval::about(high, error))
    }

    /// The covariance at a lag, and what it may be wrong by: little, except where it comes from a table. `None` where
    /// there is none.
    pub fn known(&self, lag: f64) -> Option<(f64, f64)> {
        match self {
            Self::Constant => Some((1.0, 0.0)),
            Self::Family(_) => Some((self.value(lag).ok()?, CLOSED_FORM)),
            Self::User(_) => {
                let value = self.value(lag).ok()?;
                Some((value, EXPRESSION * value.abs()))
            }
            Self::Tabulated(table) => table.known(lag),
            Self::Scaled(weight, kernel) => {
                let (value, error) = kernel.known(lag)?;
                Some((weight * value, weight.abs() * error))
            }
            Self::Sum(terms) => terms.iter().try_fold((0.0, 0.0), |(value, error), term| {
                let (more, doubt) = term.known(lag)?;
                Some((value + more, error + doubt))
            }),
            Self::Product(factors) => factors.iter().try_fold((1.0, 0.0), |(value, error), factor| {
                let (by, doubt): (f64, f64) = factor.known(lag)?;
                Some((value * by, error * (by.abs() + doubt) + f64::abs(value) * doubt))
            }),
        }
    }

    /// The operations that one value takes, roughly.
    pub fn operations(&self) -> u64 {
        /// What a named family or a table takes.
        const FAMILY: u64 = 20;
        match self {
            Self::Constant => 1,
            Self::Family(_) | Self::Tabulated(_) => FAMILY,
            Self::User(user) => user.operations(),
            Self::Scaled(_, kernel) => kernel.operations(),
            Self::Sum(parts) | Self::Product(parts) => parts
                .iter()
                .fold(1, |sum: u64, part| sum.saturating_add(part.operations())),
        }
    }

    /// The smallest distance between the rows of its tables, in s, and half the last digit of the coarsest of them.
    pub fn rows(&self) -> Option<(f64, f64)> {
        match self {
            Self::Constant | Self::Family(_) | Self::User(_) => None,
            Self::Tabulated(table) => Some((table.times().0, table.resolution())),
            Self::Scaled(_, kernel) => kernel.rows(),
            Self::Sum(parts) | Self::Product(parts) => parts
                .iter()
                .filter_map(Kernel::rows)
                .reduce(|a, b| (a.0.min(b.0), a.1.max(b.1))),
        }
    }
}
