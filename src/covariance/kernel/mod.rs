//! Covariance functions C(tau) of one stationary process with itself.
//!
//! A [`Kernel`] is a tree of named families, tables and user expressions joined by sums, products and non-negative
//! factors, all of which keep it a covariance function. It is even: a negative lag means its modulus. Lags are in s,
//! angular frequencies in rad/s, values in the square of the process's unit; densities are one-sided over omega,
//! C(tau) = integral over omega from 0 to infinity of G(omega) cos(omega tau).
//!
//! Every kernel answers the same questions: its value and what it has lost since lag zero ([`Kernel::value`],
//! [`Kernel::loss`]), its expansion right of lag zero and about any other lag ([`Kernel::expansion`],
//! [`Kernel::taylor`]), its spectrum ([`Kernel::lines`], [`Kernel::density`]), its scale of fluctuation, its spectral
//! moments and how often the process can be differentiated. Named families answer in closed form; what has none is
//! computed with a stated error.

mod algebra;
mod constant;
mod enclosure;
mod family;
mod length;
mod moments;
mod rational;
mod resolution;
mod smoothness;
mod spectrum;
mod spline;
mod tabulated;
pub(super) mod transform;
mod user;

#[cfg(test)]
mod tests;

use std::fmt;
use std::sync::Arc;

pub use family::{
    BandLimited, Correlation, DampedCosine, Exponential, Family, Harmonic, InvalidParameter, Kink, Matern, Oscillator,
    RationalQuadratic, Rough, SquaredExponential, Triangular,
};
pub(super) use family::{demand, positive};
pub use length::{Length, LengthOf, NoLength};
pub use moments::{Moment, SpectralMoments};
pub use smoothness::Smoothness;
pub use tabulated::{Beyond, InvalidTable, Tabulated};
pub use user::User;

/// A covariance function of the lag. Cheap to clone.
#[derive(Clone, Debug, PartialEq)]
pub enum Kernel {
    /// 1 at every lag: a random constant.
    Constant,
    /// A named correlation function.
    Family(Family),
    /// A table.
    Tabulated(Arc<Tabulated>),
    /// An expression of the user.
    User(Arc<User>),
    /// A positive multiple; built by [`Kernel::scaled`].
    Scaled(f64, Arc<Kernel>),
    /// A sum of none or several; built by [`Kernel::sum`].
    Sum(Arc<[Kernel]>),
    /// A product of several; built by [`Kernel::product`].
    Product(Arc<[Kernel]>),
}

/// A spectral line: a share of the variance at one frequency.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Line {
    /// Its angular frequency in rad/s; 0 for a random constant.
    pub frequency: f64,
    /// The variance it carries.
    pub power: f64,
}

/// A stretch of frequency where a density changes.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Peak {
    /// Its middle, an angular frequency in rad/s.
    pub frequency: f64,
    /// Its half width, in rad/s; 0 for an edge.
    pub width: f64,
}

/// A computed number with what it may be wrong by.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Estimate {
    /// The number; may be infinite where the quantity is.
    pub value: f64,
    /// A bound or an estimate of its absolute error; infinite if nothing is known.
    pub error: f64,
}

/// What closed forms are trusted to, relatively.
const CLOSED_FORM: f64 = 1e-13;

impl Estimate {
    /// From a closed form.
    pub(super) fn closed(value: f64) -> Self {
        let error = if value.is_finite() {
            value.abs() * CLOSED_FORM
        } else {
            0.0
        };
        Self { value, error }
    }

    pub(super) fn plus(self, other: Self) -> Self {
        Self {
            value: self.value + other.value,
            error: self.error + other.error,
        }
    }

    /// The product with a number; zero times infinity is zero.
    pub(super) fn times(self, factor: f64) -> Self {
        if factor == 0.0 {
            return Self { value: 0.0, error: 0.0 };
        }
        Self {
            value: self.value * factor,
            error: self.error * factor.abs(),
        }
    }
}

/// Why a kernel has no answer at a place.
#[derive(Clone, Debug, PartialEq)]
pub enum Unavailable {
    /// The lag lies beyond a table that says nothing there.
    BeyondTable {
        /// The lag, in s.
        lag: f64,
        /// The last lag of the table, in s.
        last: f64,
    },
    /// An expression has no finite value.
    NoValue {
        /// The name of the user kernel.
        kernel: String,
        /// The lag, in s.
        lag: f64,
    },
    /// A spectrum written out has no value.
    NoDensity {
        /// The name of the spectrum.
        spectrum: String,
        /// The angular frequency, in rad/s.
        frequency: f64,
    },
    /// A derivative does not exist.
    NotSmooth {
        /// The lag, in s.
        lag: f64,
        /// The lowest derivative that does not.
        derivative: usize,
    },
    /// A product has more spectral lines than are kept.
    TooManyLines,
    /// An expression has no series at lag zero.
    NoExpansion {
        /// The name of the user kernel.
        kernel: String,
        /// Why not, in words.
        reason: String,
    },
}

impl fmt::Display for Unavailable {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::BeyondTable { lag, last } => {
                write!(
                    out,
                    "the lag {lag} s lies beyond the table, which ends at {last} s and says nothing there"
                )
            }
            Self::NoValue { kernel, lag } => write!(out, "{kernel} has no finite value at the lag {lag} s"),
            Self::NoDensity { spectrum, frequency } => {
                write!(out, "{spectrum} has no value at the frequency {frequency} rad/s")
            }
            Self::NotSmooth { lag, derivative: 0 } => write!(out, "the kernel jumps at the lag {lag} s"),
            Self::NotSmooth { lag, derivative } => {
                write!(
                    out,
                    "the derivative of order {derivative} does not exist at the lag {lag} s"
                )
            }
            Self::TooManyLines => write!(
                out,
                "the spectrum of the product has more than {} lines",
                spectrum::MOST_LINES
            ),
            Self::NoExpansion { kernel, reason } => write!(out, "{kernel} has no series at lag zero: {reason}"),
        }
    }
}

impl std::error::Error for Unavailable {}

impl<F: Into<Family>> From<F> for Kernel {
    fn from(family: F) -> Self {
        Self::Family(family.into())
    }
}

impl From<Tabulated> for Kernel {
    fn from(table: Tabulated) -> Self {
        Self::Tabulated(Arc::new(table))
    }
}

impl From<User> for Kernel {
    fn from(user: User) -> Self {
        Self::User(Arc::new(user))
    }
}

impl Kernel {
    /// The kernel that is 0 at every lag.
    pub fn zero() -> Self {
        Self::Sum(Arc::new([]))
    }

    /// The kernel times a finite weight that is not negative.
    pub fn scaled(self, weight: f64) -> Result<Self, InvalidParameter> {
        if !(weight.is_finite() && weight >= 0.0) {
            let demand = "finite and not negative";
            return Err(InvalidParameter {
                family: "a kernel",
                parameter: "the factor",
                value: weight,
                demand,
            });
        }
        Ok(match self {
            _ if weight == 0.0 => Self::zero(),
            kernel if weight == 1.0 => kernel,
            Self::Scaled(inner, kernel) if weight * inner == 1.0 => Self::clone(&kernel),
            Self::Scaled(inner, kernel) if (weight * inner).is_normal() => Self::Scaled(weight * inner, kernel),
            kernel => Self::Scaled(weight, Arc::new(kernel)),
        })
    }

    /// The sum: the covariance of a sum of independent processes.
    pub fn sum(terms: Vec<Kernel>) -> Self {
        let mut flat = Vec::with_capacity(terms.len());
        for term in terms {
            match term {
                Self::Sum(inner) => flat.extend(inner.iter().cloned()),
                other => flat.push(other),
            }
        }
        match <[Kernel; 1]>::try_from(flat) {
            Ok([single]) => single,
            Err(several) => Self::Sum(several.into()),
        }
    }

    /// The product: the covariance of a product of independent zero-mean processes.
    pub fn product(factors: Vec<Kernel>) -> Self {
        let mut flat = Vec::with_capacity(factors.len());
        for factor in factors {
            match factor {
                Self::Constant => {}
                Self::Product(inner) => flat.extend(inner.iter().cloned()),
                other => flat.push(other),
            }
        }
        if flat.iter().any(|factor| *factor == Self::zero()) {
            return Self::zero();
        }
        match <[Kernel; 1]>::try_from(flat) {
            Ok([single]) => single,
            Err(none) if none.is_empty() => Self::Constant,
            Err(several) => Self::Product(several.into()),
        }
    }
}

/// As a person would write it, numbers in SI units.
impl fmt::Display for Kernel {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Constant => out.write_str("1"),
            Self::Family(family) => family.fmt(out),
            Self::Tabulated(table) => table.fmt(out),
            Self::User(user) => user.fmt(out),
            Self::Scaled(weight, kernel) => match **kernel {
                Self::Constant => write!(out, "{weight}"),
                Self::Sum(_) => write!(out, "{weight} * ({kernel})"),
                _ => write!(out, "{weight} * {kernel}"),
            },
            Self::Sum(terms) if terms.is_empty() => out.write_str("0"),
            Self::Sum(terms) => joined(out, terms, " + ", |_| false),
            Self::Product(factors) => joined(out, factors, " * ", |factor| matches!(factor, Self::Sum(_))),
        }
    }
}

fn joined(
    out: &mut fmt::Formatter<'_>,
    parts: &[Kernel],
    between: &str,
    in_brackets: impl Fn(&Kernel) -> bool,
) -> fmt::Result {
    for (place, part) in parts.iter().enumerate() {
        if place > 0 {
            out.write_str(between)?;
        }
        if in_brackets(part) {
            write!(out, "({part})")?
        } else {
            write!(out, "{part}")?
        }
    }
    Ok(())
}
