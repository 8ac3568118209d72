//! One-sided spectral densities G(omega) of stationary processes that are described by their spectrum.
//!
//! A [`Spectrum`] is a tree of named densities, tables and user expressions joined by sums and non-negative factors.
//! Angular frequencies are in rad/s, densities in the square of the process's unit per rad/s; the variance is the
//! integral over omega from 0 to infinity. Every spectrum answers what [`SpectralDensity`] asks, and its moments
//! ([`Spectrum::moment`]): in closed form where there is one, else by quadrature between the peaks with the ends
//! integrated analytically. Whether a moment is finite is read from the tail's exponent.

mod family;
mod moments;
mod tabulated;
mod user;

#[cfg(test)]
mod tests;

pub use family::{
    BandLimited, CloughPenzien, Davenport, Density, Family, Jonswap, Kaimal, KanaiTajimi, PiersonMoskowitz, VonKarman,
    White,
};
pub use tabulated::{Interpolation, InvalidTable, Tabulated};
pub use user::{InvalidSpectrum, User};

use super::kernel::{Estimate, InvalidParameter, Line, Unavailable};
use super::spectral::{Rational, SpectralDensity, Tail};
use std::fmt;
use std::sync::Arc;

/// A one-sided spectral density. Cheap to clone.
#[derive(Clone, Debug, PartialEq)]
pub enum Spectrum {
    /// A named density.
    Family(Family),
    /// A table.
    Tabulated(Arc<Tabulated>),
    /// An expression of the user.
    User(Arc<User>),
    /// A positive multiple; built by [`Spectrum::scaled`].
    Scaled(f64, Arc<Spectrum>),
    /// A sum of none or several; built by [`Spectrum::sum`].
    Sum(Arc<[Spectrum]>),
}

impl<F: Into<Family>> From<F> for Spectrum {
    fn from(family: F) -> Self {
        Self::Family(family.into())
    }
}

impl From<Tabulated> for Spectrum {
    fn from(table: Tabulated) -> Self {
        Self::Tabulated(Arc::new(table))
    }
}

impl From<User> for Spectrum {
    fn from(user: User) -> Self {
        Self::User(Arc::new(user))
    }
}

impl Spectrum {
    /// The density that is 0 at every frequency.
    pub fn zero() -> Self {
        Self::Sum(Arc::new([]))
    }

    /// The density times a finite weight that is not negative.
    pub fn scaled(self, weight: f64) -> Result<Self, InvalidParameter> {
        if !(weight.is_finite() && weight >= 0.0) {
            return Err(InvalidParameter {
                family: "a spectrum",
                parameter: "the factor",
                value: weight,
                demand: "finite and not negative",
            });
        }
        Ok(match self {
            _ if weight == 0.0 => Self::zero(),
            spectrum if weight == 1.0 => spectrum,
            Self::Scaled(inner, spectrum) if (weight * inner).is_normal() => Self::Scaled(weight * inner, spectrum),
            spectrum => Self::Scaled(weight, Arc::new(spectrum)),
        })
    }

    /// The sum: the spectrum of a sum of independent processes.
    pub fn sum(terms: Vec<Spectrum>) -> Self {
        let mut flat = Vec::with_capacity(terms.len());
        for term in terms {
            match term {
                Self::Sum(inner) => flat.extend(inner.iter().cloned()),
                other => flat.push(other),
            }
        }
        match <[Spectrum; 1]>::try_from(flat) {
            Ok([single]) => single,
            Err(several) => Self::Sum(several.into()),
        }
    }
}

impl SpectralDensity for Spectrum {
    fn density(&self, omega: f64) -> Result<Estimate, Unavailable> {
        match self {
            Self::Family(family) => Ok(Estimate::closed(family.density(omega))),
            Self::Tabulated(table) => Ok(Estimate::closed(table.density(omega))),
            Self::User(user) => user.density(omega).map(Estimate::closed),
            Self::Scaled(weight, spectrum) => Ok(SpectralDensity::density(&**spectrum, omega)?.times(*weight)),
            Self::Sum(terms) => terms.iter().try_fold(Estimate::closed(0.0), |sum, term| {
                Ok(sum.plus(SpectralDensity::density(term, omega)?))
            }),
        }
    }

    fn is_closed(&self) -> bool {
        true
    }

    fn lines(&self) -> Result<Vec<Line>, Unavailable> {
        Ok(Vec::new())
    }

    fn grid(&self) -> Result<Vec<f64>, Unavailable> {
        Ok(match self {
            Self::Family(family) => family.grid(),
            Self::Tabulated(table) => table.grid(),
            Self::User(user) => user.grid(),
            Self::Scaled(_, spectrum) => spectrum.grid()?,
            Self::Sum(terms) => {
                let mut all = Vec::new();
                for term in terms.iter() {
                    all.extend(term.grid()?);
                }
                rising(all)
            }
        })
    }

    fn tail(&self) -> Tail {
        match self {
            Self::Family(family) => family.tail(),
            Self::Tabulated(table) => table.tail(),
            Self::User(user) => user.tail(),
            Self::Scaled(_, spectrum) => spectrum.tail(),
            Self::Sum(terms) => terms.iter().map(SpectralDensity::tail).fold(Tail::Faster, Tail::or),
        }
    }

    fn head(&self) -> f64 {
        match self {
            Self::Family(family) => family.head(),
            Self::Tabulated(table) => table.head(),
            Self::User(user) => user.head(),
            Self::Scaled(_, spectrum) => spectrum.head(),
            Self::Sum(terms) => terms.iter().map(SpectralDensity::head).fold(f64::INFINITY, f64::min),
        }
    }

    fn rational(&self) -> Option<Vec<Rational>> {
        match self {
            Self::Family(family) => family.rational().map(|one| vec![one]),
            Self::Tabulated(_) | Self::User(_) => None,
            Self::Scaled(weight, spectrum) => {
                let mut parts = spectrum.rational()?;
                parts.iter_mut().for_each(|part| part.gain *= weight);
                Some(parts)
            }
            Self::Sum(terms) => {
                let parts: Option<Vec<Vec<Rational>>> = terms.iter().map(SpectralDensity::rational).collect();
                Some(parts?.concat())
            }
        }
    }
}

/// Frequencies sorted, each once, those below 0 and beyond all numbers left out.
fn rising(mut frequencies: Vec<f64>) -> Vec<f64> {
    frequencies.retain(|frequency| *frequency >= 0.0 && frequency.is_finite());
    frequencies.sort_by(f64::total_cmp);
    frequencies.dedup();
    frequencies
}

/// As a person would write it, numbers in SI units.
impl fmt::Display for Spectrum {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Family(family) => family.fmt(out),
            Self::Tabulated(table) => table.fmt(out),
            Self::User(user) => user.fmt(out),
            Self::Scaled(weight, spectrum) => match **spectrum {
                Self::Sum(_) => write!(out, "{weight} * ({spectrum})"),
                _ => write!(out, "{weight} * {spectrum}"),
            },
            Self::Sum(terms) if terms.is_empty() => out.write_str("0"),
            Self::Sum(terms) => {
                for (place, term) in terms.iter().enumerate() {
                    let plus = if place > 0 { " + " } else { "" };
                    write!(out, "{plus}{term}")?;
                }
                Ok(())
            }
        }
    }
}
