//! A frequency response given as a table.

use crate::covariance::kernel::Beyond;
use nalgebra::Complex;
use std::cmp::Ordering;
use std::f64::consts::{PI, TAU};
use std::fmt;

/// Rows of a frequency response: every one is a place where an integral over frequency is cut.
pub const MOST_ROWS: usize = 20_000;

/// A frequency response through the rows of a table: modulus and phase are straight lines between the rows, the phase
/// after it was unwrapped, so that it moves by half a turn at most from row to row.
///
/// A phase of -pi/2 is a response that lags a quarter of a period behind.
#[derive(Clone, Debug, PartialEq)]
pub struct FrequencyResponse {
    name: String,
    rows: Vec<Row>,
    beyond: Beyond,
}

#[derive(Clone, Copy, Debug, PartialEq)]
struct Row {
    omega: f64,
    modulus: f64,
    phase: f64,
}

impl Row {
    fn numbers(&self) -> [f64; 3] {
        [self.omega, self.modulus, self.phase]
    }

    fn response(&self) -> Complex<f64> {
        Complex::from_polar(self.modulus, self.phase)
    }
}

/// Why a table is no frequency response. Rows count from 0.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum InvalidResponse {
    /// It has fewer than two rows.
    TooShort,
    /// It has more rows than are followed.
    TooLong,
    /// A frequency is negative or does not exceed the one before it.
    NotRising {
        /// The row.
        row: usize,
    },
    /// A modulus is negative.
    Negative {
        /// The row.
        row: usize,
    },
    /// A number is infinite or none.
    NotFinite {
        /// The row.
        row: usize,
    },
}

impl fmt::Display for InvalidResponse {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::TooShort => f.write_str("a table of a frequency response needs at least two rows"),
            Self::TooLong => write!(f, "a table of a frequency response has at most {MOST_ROWS} rows"),
            Self::NotRising { .. } => f.write_str("the frequencies must grow from row to row, from 0 or above"),
            Self::Negative { .. } => {
                f.write_str("a modulus is not negative; a change of sign is a phase of half a turn")
            }
            Self::NotFinite { .. } => f.write_str("a number is not finite"),
        }
    }
}

impl std::error::Error for InvalidResponse {}

impl InvalidResponse {
    /// The row at fault, where it is one row.
    pub fn row(&self) -> Option<usize> {
        match self {
            Self::TooShort | Self::TooLong => None,
            Self::NotRising { row } | Self::Negative { row } | Self::NotFinite { row } => Some(*row),
        }
    }
}

impl FrequencyResponse {
    /// From a name to show, and rows of angular frequency in rad/s, modulus and phase in rad.
    pub fn new(name: impl Into<String>, rows: &[[f64; 3]], beyond: Beyond) -> Result<Self, InvalidResponse> {
        if rows.len() < 2 {
            return Err(InvalidResponse::TooShort);
        }
        if rows.len() > MOST_ROWS {
            return Err(InvalidResponse::TooLong);
        }
        let mut kept: Vec<Row> = Vec::with_capacity(rows.len());
        for (row, &[omega, modulus, phase]) in rows.iter().enumerate() {
            if !(omega.is_finite() && modulus.is_finite() && phase.is_finite()) {
                return Err(InvalidResponse::NotFinite { row });
            }
            let before = kept.last();
            if omega < 0.0 || before.is_some_and(|before| omega <= before.omega) {
                return Err(InvalidResponse::NotRising { row });
            }
            if modulus < 0.0 {
                return Err(InvalidResponse::Negative { row });
            }
            let phase = before.map_or(phase, |before| unwrapped(before.phase, phase));
            kept.push(Row { omega, modulus, phase });
        }
        Ok(Self {
            name: name.into(),
            rows: kept,
            beyond,
        })
    }

    /// The name it was given.
    pub fn name(&self) -> &str {
        &self.name
    }

    /// What holds outside the table.
    pub fn beyond(&self) -> Beyond {
        self.beyond
    }

    /// The first and the last frequency of the table, in rad/s.
    pub fn range(&self) -> (f64, f64) {
        let end = |row: Option<&Row>| row.map_or(0.0, |row| row.omega);
        (end(self.rows.first()), end(self.rows.last()))
    }

    pub(super) fn transfer(&self, omega: f64) -> Complex<f64> {
        let after = self.rows.partition_point(|row| row.omega < omega);
        let row = |index: usize| self.rows.get(index);
        match (after.checked_sub(1).and_then(row), row(after)) {
            (_, Some(here)) if here.omega == omega => here.response(),
            (Some(before), Some(after)) => {
                let share = (omega - before.omega) / (after.omega - before.omega);
                let between = |from: f64, to: f64| from + share * (to - from);
                Complex::from_polar(
                    between(before.modulus, after.modulus),
                    between(before.phase, after.phase),
                )
            }
            (Some(end), None) | (None, Some(end)) if self.beyond == Beyond::Hold => end.response(),
            _ => Complex::new(0.0, 0.0),
        }
    }

    /// The part of the response at rest that is in phase.
    pub(super) fn static_gain(&self) -> Option<f64> {
        let (first, _) = self.range();
        (first == 0.0 || self.beyond != Beyond::Refuse).then(|| self.transfer(0.0).re)
    }

    pub(super) fn roll_off(&self) -> f64 {
        let ends_at_zero = self.rows.last().is_some_and(|row| row.modulus == 0.0);
        if self.beyond == Beyond::Hold && !ends_at_zero {
            0.0
        } else {
            f64::INFINITY
        }
    }

    pub(super) fn frequencies(&self) -> Vec<f64> {
        self.rows.iter().map(|row| row.omega).collect()
    }

    pub(super) fn order(&self, other: &Self) -> Ordering {
        let numbers = |response: &Self| response.rows.iter().flat_map(Row::numbers).collect::<Vec<f64>>();
        let (one, two) = (numbers(self), numbers(other));
        let pairs = one.iter().zip(&two).map(|(a, b)| a.total_cmp(b));
        let first = pairs.into_iter().find(|order| *order != Ordering::Equal);
        let by_rows = first.unwrap_or_else(|| one.len().cmp(&two.len()));
        let by_name = || self.name.cmp(&other.name);
        by_rows
            .then((self.beyond as u8).cmp(&(other.beyond as u8)))
            .then_with(by_name)
    }
}

/// The phase, by whole turns, nearest to the one before it.
fn unwrapped(before: f64, phase: f64) -> f64 {
    let turns = ((phase - before) / TAU).round();
    let nearest = phase - TAU * turns;
    if (nearest - before).abs() <= PI * (1.0 + 1e-12) {
        nearest
    } else {
        phase
    }
}

impl fmt::Display for FrequencyResponse {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "tabulated(\"{}\")", self.name)
    }
}
