//! The correlation functions the language knows by name.
//!
//! Each family is one file: its value, its behaviour at lag zero and elsewhere, its spectrum and its moments, all in
//! closed form. Lags and lengths are in s, angular frequencies in rad/s, densities in s (per rad/s); a correlation
//! function is a plain number, 1 at lag zero. Densities are one-sided over omega:
//! C(tau) = integral over omega from 0 to infinity of G(omega) cos(omega tau).
//!
//! The forms and spectra are those of C. E. Rasmussen and C. K. I. Williams (2006), Gaussian Processes for Machine
//! Learning, ch. 4, and E. Vanmarcke (1983), Random Fields, ch. 3 and 5, brought to the conventions above.

mod band_limited;
mod damped_cosine;
mod exponential;
mod harmonic;
mod matern;
mod matern_origin;
mod oscillator;
mod parameter;
mod polynomial;
mod rational_quadratic;
mod squared_exponential;
mod triangular;

use std::fmt;

use super::{Line, Peak};
use crate::expression::Series;

pub use band_limited::BandLimited;
pub use damped_cosine::DampedCosine;
pub use exponential::Exponential;
pub use harmonic::Harmonic;
pub use matern::Matern;
pub use oscillator::Oscillator;
pub use parameter::InvalidParameter;
pub(in crate::covariance) use parameter::{demand, positive};
pub use rational_quadratic::RationalQuadratic;
pub use squared_exponential::SquaredExponential;
pub use triangular::Triangular;

pub(super) use polynomial::product;

/// What every named correlation function can tell about itself, in closed form.
///
/// Lags are finite and not negative; the kernel above this trait makes the function even.
pub trait Correlation {
    /// The correlation coefficient at a lag.
    fn value(&self, lag: f64) -> f64;

    /// What the correlation has lost since lag zero, 1 - rho(tau), without cancellation where tau is small.
    fn loss(&self, lag: f64) -> f64;

    /// The right-sided expansion at lag zero, up to terms beyond `order`.
    fn expansion(&self, order: f64) -> Series;

    /// The coefficients of h^0, h^1, ..., h^order in rho(lag + h), for a lag above zero that is no kink of an order
    /// asked for.
    fn taylor(&self, lag: f64, order: usize) -> Vec<f64>;

    /// The one-sided spectral density over omega; none where the spectrum consists of lines. Infinite where it is.
    fn density(&self, omega: f64) -> Option<f64>;

    /// The integral of rho over all lags, negative ones too (Vanmarcke 1983): pi times the density at zero. May be
    /// zero or infinite.
    fn scale_of_fluctuation(&self) -> f64;

    /// lambda_0, lambda_1, lambda_2 and lambda_4 of the one-sided density over omega; infinite where they are.
    fn moments(&self) -> [f64; 4];

    /// The first term at lag zero that no even analytic function has; none if rho is analytic.
    fn roughness(&self) -> Option<Rough>;

    /// The shortest and the longest time over which rho changes by its own order of magnitude, in s.
    fn times(&self) -> (f64, f64);

    /// Whether rho falls exponentially, or ends; else it falls as a power of the lag, or not at all.
    fn fades(&self) -> bool {
        true
    }

    /// The lags above zero where a derivative jumps.
    fn kinks(&self) -> Vec<Kink> {
        Vec::new()
    }

    /// Where the density changes.
    fn peaks(&self) -> Vec<Peak> {
        let (short, long) = self.times();
        [1.0 / long, 1.0 / short]
            .map(|width| Peak { frequency: 0.0, width })
            .to_vec()
    }

    /// The lines of the spectrum.
    fn lines(&self) -> Vec<Line> {
        Vec::new()
    }
}

/// A term tau^exponent (ln tau)^log.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Rough {
    /// The power of the lag.
    pub exponent: f64,
    /// The power of its logarithm.
    pub log: u32,
}

/// A lag where a kernel is not smooth.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Kink {
    /// The lag, in s.
    pub lag: f64,
    /// The lowest derivative that jumps there; 0 is the function itself.
    pub derivative: usize,
}

/// A correlation function with a name.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Family {
    /// exp(-u^2 / 2)
    SquaredExponential(SquaredExponential),
    /// exp(-u)
    Exponential(Exponential),
    /// The Matérn family
    Matern(Matern),
    /// (1 + u^2 / (2 alpha))^-alpha
    RationalQuadratic(RationalQuadratic),
    /// The displacement of an oscillator under white noise
    Oscillator(Oscillator),
    /// exp(-u) cos(omega tau)
    DampedCosine(DampedCosine),
    /// cos(omega tau)
    Harmonic(Harmonic),
    /// A flat spectrum between two frequencies
    BandLimited(BandLimited),
    /// max(1 - u, 0)
    Triangular(Triangular),
}

macro_rules! each_family {
    ($self:ident, $family:ident => $body:expr) => {
        match $self {
            Family::SquaredExponential($family) => $body,
            Family::Exponential($family) => $body,
            Family::Matern($family) => $body,
            Family::RationalQuadratic($family) => $body,
            Family::Oscillator($family) => $body,
            Family::DampedCosine($family) => $body,
            Family::Harmonic($family) => $body,
            Family::BandLimited($family) => $body,
            Family::Triangular($family) => $body,
        }
    };
}

impl Correlation for Family {
    fn value(&self, lag: f64) -> f64 {
        each_family!(self, family => family.value(lag))
    }

    fn loss(&self, lag: f64) -> f64 {
        each_family!(self, family => family.loss(lag))
    }

    fn expansion(&self, order: f64) -> Series {
        each_family!(self, family => family.expansion(order))
    }

    fn taylor(&self, lag: f64, order: usize) -> Vec<f64> {
        each_family!(self, family => family.taylor(lag, order))
    }

    fn density(&self, omega: f64) -> Option<f64> {
        each_family!(self, family => family.density(omega))
    }

    fn scale_of_fluctuation(&self) -> f64 {
        each_family!(self, family => family.scale_of_fluctuation())
    }

    fn moments(&self) -> [f64; 4] {
        each_family!(self, family => family.moments())
    }

    fn roughness(&self) -> Option<Rough> {
        each_family!(self, family => family.roughness())
    }

    fn times(&self) -> (f64, f64) {
        each_family!(self, family => family.times())
    }

    fn fades(&self) -> bool {
        each_family!(self, family => family.fades())
    }

    fn kinks(&self) -> Vec<Kink> {
        each_family!(self, family => family.kinks())
    }

    fn peaks(&self) -> Vec<Peak> {
        each_family!(self, family => family.peaks())
    }

    fn lines(&self) -> Vec<Line> {
        each_family!(self, family => family.lines())
    }
}

impl fmt::Display for Family {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        each_family!(self, family => family.fmt(out))
    }
}

macro_rules! family_from {
    ($($name:ident),*) => {
        $(impl From<$name> for Family {
            fn from(family: $name) -> Family {
                Family::$name(family)
            }
        })*
    };
}

family_from!(
    SquaredExponential,
    Exponential,
    Matern,
    RationalQuadratic,
    Oscillator,
    DampedCosine,
    Harmonic,
    BandLimited,
    Triangular
);
