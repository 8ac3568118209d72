//! Linear systems that a process passes through: what they do to each frequency.
//!
//! A [`System`] is described by its transfer function H(i omega): the process `a cos(omega t)` comes out as `|H| a cos(omega t
//! + arg H)`. Systems have no unit here: oscillators and first-order systems have the static gain 1, and the factor between
//! input and output, with its unit, belongs to the coefficient of a term. Several systems one behind the other are a
//! [`Chain`], whose order does not matter.

mod average;
mod chain;
mod first_order;
mod oscillator;
mod tabulated;

pub use average::Average;
pub use chain::Chain;
pub use first_order::FirstOrder;
pub use oscillator::Oscillator;
pub use tabulated::{FrequencyResponse, InvalidResponse};

use super::kernel::InvalidParameter;
use nalgebra::Complex;
use std::cmp::Ordering;
use std::fmt;
use std::sync::Arc;

/// A linear, time-invariant, stable system. Cheap to clone.
#[derive(Clone, Debug, PartialEq)]
pub enum System {
    /// One degree of freedom.
    Oscillator(Oscillator),
    /// A single real pole.
    FirstOrder(FirstOrder),
    /// The mean over the last while.
    Average(Average),
    /// A measured or computed frequency response.
    Tabulated(Arc<FrequencyResponse>),
}

impl System {
    /// H(i omega) at a finite omega >= 0, in rad/s.
    pub fn transfer(&self, omega: f64) -> Complex<f64> {
        match self {
            Self::Oscillator(system) => system.transfer(omega),
            Self::FirstOrder(system) => system.transfer(omega),
            Self::Average(system) => system.transfer(omega),
            Self::Tabulated(system) => system.transfer(omega),
        }
    }

    /// H(0): what becomes of a mean. `None` where a table says nothing there.
    pub fn static_gain(&self) -> Option<f64> {
        match self {
            Self::Oscillator(_) | Self::FirstOrder(_) | Self::Average(_) => Some(1.0),
            Self::Tabulated(system) => system.static_gain(),
        }
    }

    /// The power r with which |H| falls, as omega^-r, at high frequency; infinite where H is 0 beyond some frequency.
    pub fn roll_off(&self) -> f64 {
        match self {
            Self::Oscillator(_) => 2.0,
            Self::FirstOrder(_) | Self::Average(_) => 1.0,
            Self::Tabulated(system) => system.roll_off(),
        }
    }

    /// The poles of H in rad/s, left of the imaginary axis, where H(s) is the product of -p/(s - p) over them.
    pub fn poles(&self) -> Option<Vec<Complex<f64>>> {
        match self {
            Self::Oscillator(system) => Some(system.poles().to_vec()),
            Self::FirstOrder(system) => Some(vec![system.pole()]),
            Self::Average(_) | Self::Tabulated(_) => None,
        }
    }

    /// Frequencies above 0, in rad/s, graded towards where H changes: what an integral over frequency must look at. Beyond
    /// the largest, H is close to its power law, but for the wave of an average.
    pub fn frequencies(&self) -> Vec<f64> {
        match self {
            Self::Oscillator(system) => system.frequencies(),
            Self::FirstOrder(system) => system.frequencies(),
            Self::Average(system) => system.frequencies(),
            Self::Tabulated(system) => system.frequencies(),
        }
    }

    /// An order among systems, so that chains have one form.
    fn order(&self, other: &Self) -> Ordering {
        match (self, other) {
            (Self::Oscillator(one), Self::Oscillator(other)) => one.order(other),
            (Self::FirstOrder(one), Self::FirstOrder(other)) => one.order(other),
            (Self::Average(one), Self::Average(other)) => one.order(other),
            (Self::Tabulated(one), Self::Tabulated(other)) if Arc::ptr_eq(one, other) => Ordering::Equal,
            (Self::Tabulated(one), Self::Tabulated(other)) => one.order(other),
            _ => self.rank().cmp(&other.rank()),
        }
    }

    fn rank(&self) -> u8 {
        match self {
            Self::Oscillator(_) => 0,
            Self::FirstOrder(_) => 1,
            Self::Average(_) => 2,
            Self::Tabulated(_) => 3,
        }
    }
}

/// As the language writes it, in SI units.
impl fmt::Display for System {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Oscillator(system) => system.fmt(f),
            Self::FirstOrder(system) => system.fmt(f),
            Self::Average(system) => system.fmt(f),
            Self::Tabulated(system) => system.fmt(f),
        }
    }
}

/// Times and frequencies lie between the reciprocal of this and this, in SI units, as those of kernels do.
const EXTREME: f64 = 1e30;

/// A parameter that must be above 0 and within reason.
fn positive(family: &'static str, parameter: &'static str, value: f64) -> Result<f64, InvalidParameter> {
    if (1.0 / EXTREME..=EXTREME).contains(&value) {
        Ok(value)
    } else {
        Err(InvalidParameter {
            family,
            parameter,
            value,
            demand: "above 0 (between 1e-30 and 1e30 in SI units)",
        })
    }
}
