//! Spectra from a table.

use super::rising;
use crate::covariance::kernel::{Beyond, Estimate};
use crate::covariance::spectral::Tail;
use std::fmt;

/// What holds between the rows of a table.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Interpolation {
    /// Straight lines.
    Linear,
    /// Straight lines of the logarithms: a power of the frequency between two rows.
    Logarithmic,
}

/// A density given at frequencies. Its moments are exact, piece by piece.
#[derive(Clone, Debug, PartialEq)]
pub struct Tabulated {
    name: String,
    /// Frequency in rad/s and density, the frequencies rising.
    rows: Vec<(f64, f64)>,
    beyond: Beyond,
    interpolation: Interpolation,
}

/// Why a table is no spectrum. Rows count from 0.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum InvalidTable {
    /// It has fewer than two rows.
    Short,
    /// The frequency of a row is not above the one before, or below 0.
    NotRising {
        /// The row.
        row: usize,
    },
    /// The density of a row is negative or no number.
    Negative {
        /// The row.
        row: usize,
    },
    /// The frequency or the density of a row is 0, which has no logarithm.
    NoLogarithm {
        /// The row.
        row: usize,
    },
    /// It says nothing beyond its rows, and yet there is power at the first or the last of them.
    Open {
        /// The row.
        row: usize,
    },
    /// No row has any power.
    Empty,
}

impl fmt::Display for InvalidTable {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        out.write_str(match self {
            Self::Short => "a spectrum's table needs at least two rows",
            Self::NotRising { .. } => "the frequencies must rise from row to row, from 0 or above: this one does not",
            Self::Negative { .. } => "a spectral density is never negative: this one is",
            Self::NoLogarithm { .. } => "`interpolation: log` needs frequencies and densities greater than 0",
            Self::Open { .. } => "with `beyond: refuse` the density must have come down to 0 here",
            Self::Empty => "the density is 0 in every row",
        })
    }
}

impl std::error::Error for InvalidTable {}

impl Tabulated {
    /// From the name of the file and its rows: frequency in rad/s and density.
    pub fn new(
        name: String,
        rows: Vec<(f64, f64)>,
        beyond: Beyond,
        interpolation: Interpolation,
    ) -> Result<Self, InvalidTable> {
        if rows.len() < 2 {
            return Err(InvalidTable::Short);
        }
        let mut before = f64::NEG_INFINITY;
        for (row, (frequency, density)) in rows.iter().enumerate() {
            let logarithmic = interpolation == Interpolation::Logarithmic;
            if !(*frequency > before && *frequency >= 0.0 && frequency.is_finite()) {
                return Err(InvalidTable::NotRising { row });
            }
            if !(*density >= 0.0 && density.is_finite()) {
                return Err(InvalidTable::Negative { row });
            }
            if logarithmic && !(*frequency > 0.0 && *density > 0.0) {
                return Err(InvalidTable::NoLogarithm { row });
            }
            before = *frequency;
        }
        if rows.iter().all(|(_, density)| *density == 0.0) {
            return Err(InvalidTable::Empty);
        }
        let table = Self {
            name,
            rows,
            beyond,
            interpolation,
        };
        if beyond == Beyond::Refuse {
            if table.first().0 > 0.0 && table.first().1 > 0.0 {
                return Err(InvalidTable::Open { row: 0 });
            }
            if table.last().1 > 0.0 {
                return Err(InvalidTable::Open {
                    row: table.rows.len() - 1,
                });
            }
        }
        Ok(table)
    }

    /// What holds beyond its rows.
    pub fn beyond(&self) -> Beyond {
        self.beyond
    }

    /// What holds between its rows.
    pub fn interpolation(&self) -> Interpolation {
        self.interpolation
    }

    /// The first row: frequency in rad/s and density.
    pub fn first(&self) -> (f64, f64) {
        self.rows.first().copied().unwrap_or_default()
    }

    /// The last row.
    pub fn last(&self) -> (f64, f64) {
        self.rows.last().copied().unwrap_or_default()
    }

    pub(super) fn density(&self, omega: f64) -> f64 {
        let place = self.rows.partition_point(|(frequency, _)| *frequency <= omega);
        let before = place.checked_sub(1).and_then(|index| self.rows.get(index));
        match (before, self.rows.get(place)) {
            (Some(before), Some(after)) => Piece::new(*before, *after, self.interpolation).density(omega),
            (None, Some((_, held))) | (Some((_, held)), None) if self.beyond == Beyond::Hold => *held,
            // The last row itself belongs to the table.
            (Some((last, density)), None) if *last == omega => *density,
            _ => 0.0,
        }
    }

    /// lambda_n of an order that the tail leaves finite.
    pub(super) fn moment(&self, order: u32) -> Estimate {
        let pieces = self.rows.windows(2).filter_map(|pair| match pair {
            [before, after] => Some(Piece::new(*before, *after, self.interpolation)),
            _ => None,
        });
        let within: f64 = pieces.map(|piece| piece.moment(order)).sum();
        let held = match (self.beyond, self.first()) {
            (Beyond::Hold, (frequency, density)) => density * frequency.powi(order as i32 + 1) / f64::from(order + 1),
            _ => 0.0,
        };
        Estimate::closed(within + held)
    }

    /// The area within the rows.
    pub fn area(&self) -> f64 {
        let all = Self {
            beyond: Beyond::Zero,
            ..self.clone()
        };
        all.moment(0).value
    }

    pub(super) fn tail(&self) -> Tail {
        match self.beyond {
            Beyond::Hold if self.last().1 > 0.0 => Tail::Power(0.0),
            _ => Tail::Faster,
        }
    }

    pub(super) fn head(&self) -> f64 {
        match (self.beyond, self.first()) {
            (_, (0.0, density)) if density > 0.0 => 0.0,
            (_, (0.0, _)) => 1.0,
            (Beyond::Hold, (_, density)) if density > 0.0 => 0.0,
            _ => f64::INFINITY,
        }
    }

    pub(super) fn grid(&self) -> Vec<f64> {
        let rows = self.rows.iter().map(|(frequency, _)| *frequency);
        rising(std::iter::once(0.0).chain(rows).collect())
    }
}

/// What lies between two rows.
enum Piece {
    Line {
        from: (f64, f64),
        to: (f64, f64),
    },
    /// density * (omega/from)^power
    Power {
        from: f64,
        density: f64,
        ln_ratio: f64,
        power: f64,
    },
}

impl Piece {
    fn new(from: (f64, f64), to: (f64, f64), interpolation: Interpolation) -> Self {
        match interpolation {
            Interpolation::Linear => Self::Line { from, to },
            Interpolation::Logarithmic => {
                let ln_ratio = ((to.0 - from.0) / from.0).ln_1p();
                Self::Power {
                    from: from.0,
                    density: from.1,
                    ln_ratio,
                    power: (to.1 / from.1).ln() / ln_ratio,
                }
            }
        }
    }

    fn density(&self, omega: f64) -> f64 {
        match self {
            Self::Line { from, to } => {
                let share = (omega - from.0) / (to.0 - from.0);
                from.1 * (1.0 - share) + to.1 * share
            }
            Self::Power {
                from, density, power, ..
            } => density * (omega / from).powf(*power),
        }
    }

    /// The integral of omega^n, n at most 12, over the piece.
    fn moment(&self, order: u32) -> f64 {
        match self {
            // By the rule of Gauss with seven points, exact for polynomials up to degree 13: all its terms are positive.
            Self::Line { from, to } => {
                let (middle, half) = (0.5 * (from.0 + to.0), 0.5 * (to.0 - from.0));
                let value = |omega: f64| omega.powi(order as i32) * self.density(omega);
                let sum: f64 = GAUSS
                    .iter()
                    .map(|(point, weight)| weight * (value(middle - half * point) + value(middle + half * point)))
                    .sum();
                half * (sum + GAUSS_MIDDLE * value(middle))
            }
            // density from^(n+1) (ratio^k - 1)/k, k = n + 1 + power.
            Self::Power {
                from,
                density,
                ln_ratio,
                power,
            } => {
                let exponent = f64::from(order + 1) + power;
                let growth = exponent * ln_ratio;
                let mean = if growth == 0.0 { 1.0 } else { growth.exp_m1() / growth };
                density * from.powi(order as i32 + 1) * ln_ratio * mean
            }
        }
    }
}

/// Points and weights of Gauss and Legendre, to either side of the middle (Abramowitz and Stegun 1964, table 25.4).
const GAUSS: [(f64, f64); 3] = [
    (0.405_845_151_377_397_2, 0.381_830_050_505_118_9),
    (0.741_531_185_599_394_4, 0.279_705_391_489_276_67),
    (0.949_107_912_342_758_5, 0.129_484_966_168_869_7),
];
const GAUSS_MIDDLE: f64 = 0.417_959_183_673_469_4;

impl fmt::Display for Tabulated {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        let beyond = match self.beyond {
            Beyond::Zero => "zero",
            Beyond::Hold => "hold",
            Beyond::Refuse => "refuse",
        };
        let interpolation = match self.interpolation {
            Interpolation::Linear => "",
            Interpolation::Logarithmic => ", interpolation: log",
        };
        write!(out, "tabulated({:?}, beyond: {beyond}{interpolation})", self.name)
    }
}
