//! The spectra the language knows by name.
//!
//! Each is one file: its density, its moments, how it begins and ends, all in closed form but for the moments of JONSWAP
//! spectra. Frequencies are in rad/s, densities one-sided over omega, in the square of the process's unit per rad/s.
//! Those of wind are shapes, of unit area.

mod band_limited;
mod clough_penzien;
mod davenport;
mod jonswap;
mod kaimal;
mod kanai_tajimi;
mod pierson_moskowitz;
mod von_karman;
mod white;

pub use band_limited::BandLimited;
pub use clough_penzien::CloughPenzien;
pub use davenport::Davenport;
pub use jonswap::Jonswap;
pub use kaimal::Kaimal;
pub use kanai_tajimi::KanaiTajimi;
pub use pierson_moskowitz::PiersonMoskowitz;
pub use von_karman::VonKarman;
pub use white::White;

use crate::covariance::kernel::{Estimate, InvalidParameter, demand};
use crate::covariance::spectral::{Rational, Tail};
use std::fmt;

/// What every named spectrum can tell about itself.
pub trait Density {
    /// The density at omega >= 0, in rad/s; 0 at infinity unless it is white.
    fn density(&self, omega: f64) -> f64;

    /// lambda_n of an order for which the tail leaves it finite.
    fn moment(&self, order: u32) -> Estimate;

    /// How it falls at high frequency.
    fn tail(&self) -> Tail;

    /// The power of omega with which it begins; infinite where it begins flatter than any power.
    fn head(&self) -> f64;

    /// Rising frequencies from 0, graded towards peaks and edges, beyond which the density only falls.
    fn grid(&self) -> Vec<f64>;

    /// As a rational function of frequency, where it is one.
    fn rational(&self) -> Option<Rational> {
        None
    }
}

/// A spectrum with a name.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Family {
    /// The same at all frequencies
    White(White),
    /// The same between two frequencies
    BandLimited(BandLimited),
    /// Wind sea, fully developed
    PiersonMoskowitz(PiersonMoskowitz),
    /// Wind sea, growing
    Jonswap(Jonswap),
    /// Gusts, after Kaimal
    Kaimal(Kaimal),
    /// Gusts, after von Kármán
    VonKarman(VonKarman),
    /// Gusts, after Davenport
    Davenport(Davenport),
    /// Strong ground motion
    KanaiTajimi(KanaiTajimi),
    /// Strong ground motion without its slow part
    CloughPenzien(CloughPenzien),
}

macro_rules! each_family {
    ($self:ident, $family:ident => $body:expr) => {
        match $self {
            Family::White($family) => $body,
            Family::BandLimited($family) => $body,
            Family::PiersonMoskowitz($family) => $body,
            Family::Jonswap($family) => $body,
            Family::Kaimal($family) => $body,
            Family::VonKarman($family) => $body,
            Family::Davenport($family) => $body,
            Family::KanaiTajimi($family) => $body,
            Family::CloughPenzien($family) => $body,
        }
    };
}

impl Density for Family {
    fn density(&self, omega: f64) -> f64 {
        each_family!(self, family => family.density(omega))
    }

    fn moment(&self, order: u32) -> Estimate {
        each_family!(self, family => family.moment(order))
    }

    fn tail(&self) -> Tail {
        each_family!(self, family => family.tail())
    }

    fn head(&self) -> f64 {
        each_family!(self, family => family.head())
    }

    fn grid(&self) -> Vec<f64> {
        each_family!(self, family => family.grid())
    }

    fn rational(&self) -> Option<Rational> {
        each_family!(self, family => family.rational())
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
    White,
    BandLimited,
    PiersonMoskowitz,
    Jonswap,
    Kaimal,
    VonKarman,
    Davenport,
    KanaiTajimi,
    CloughPenzien
);

/// Accepts a density: positive and a normal number.
fn level(family: &'static str, value: f64) -> Result<f64, InvalidParameter> {
    demand(
        value.is_normal() && value > 0.0,
        family,
        "level",
        value,
        "greater than 0",
    )
}

/// Accepts a damping as a ratio to critical.
fn damping(family: &'static str, parameter: &'static str, value: f64) -> Result<f64, InvalidParameter> {
    let allowed = (1e-12..1.0).contains(&value);
    demand(allowed, family, parameter, value, "above 0 (1e-12) and below 1")
}

/// Distances from a frequency, each eight times the one before, to either side.
fn around(frequency: f64, width: f64, steps: i32) -> impl Iterator<Item = f64> {
    let distances = (0..steps).map(move |step| width * 8.0_f64.powi(step));
    distances.flat_map(move |distance| [frequency - distance, frequency + distance])
}

/// 0 and a frequency with its eightfolds.
fn octuples(frequency: f64) -> Vec<f64> {
    let steps = (-1..4).map(|step| frequency * 8.0_f64.powi(step));
    std::iter::once(0.0).chain(steps).collect()
}
