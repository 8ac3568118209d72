//! Covariance functions given as a table.

use std::f64::consts::FRAC_2_PI;
use std::fmt;

use super::family::{Kink, Rough};
use super::spline::{self, Piece};
use super::{Estimate, Line, Unavailable, resolution};
use crate::expression::{Series, SeriesTerm};
use crate::numerics::quadrature::{self, Tolerance};

/// What a table is taken to say beyond its last lag.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Beyond {
    /// The covariance is zero.
    Zero,
    /// The covariance stays what it is at the last lag.
    Hold,
    /// Nothing: a value there is refused, and so is what depends on all lags.
    Refuse,
}

/// A covariance function through the points of a table: a cubic spline, even, with zero slope at lag zero and no
/// curvature at the last lag.
///
/// Between the points the third derivative is constant and at them it jumps, so lambda_4 is infinite unless the table
/// is flat.
#[derive(Clone, Debug, PartialEq)]
pub struct Tabulated {
    name: String,
    pieces: Vec<Piece>,
    last: f64,
    beyond: Beyond,
    /// Half the last digit of its values.
    resolution: f64,
}

/// Why a table is no covariance function. Rows count from 0.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum InvalidTable {
    /// It has fewer than two rows.
    TooShort,
    /// Its first lag is not 0.
    NotFromZero {
        /// The first lag, in s.
        first: f64,
    },
    /// A lag does not exceed the one before it.
    NotRising {
        /// The row.
        row: usize,
    },
    /// A number is infinite or none.
    NotFinite {
        /// The row.
        row: usize,
    },
    /// The value at lag zero, a variance, is not positive.
    NoVariance {
        /// The value.
        value: f64,
    },
}

impl fmt::Display for InvalidTable {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::TooShort => out.write_str("a table of a kernel needs at least two rows"),
            Self::NotFromZero { first } => write!(out, "the first lag must be 0, not {first} s"),
            Self::NotRising { row } => write!(out, "the lag in row {} does not exceed the one before it", row + 1),
            Self::NotFinite { row } => write!(out, "row {} holds a number that is not finite", row + 1),
            Self::NoVariance { value } => write!(out, "the value at lag zero must be positive, not {value}"),
        }
    }
}

impl std::error::Error for InvalidTable {}

impl Tabulated {
    /// From a name to show, lags in s that begin with 0 and rise, and the values there.
    pub fn new(name: impl Into<String>, rows: &[(f64, f64)], beyond: Beyond) -> Result<Self, InvalidTable> {
        if let Some(row) = rows
            .iter()
            .position(|(lag, value)| !(lag.is_finite() && value.is_finite()))
        {
            return Err(InvalidTable::NotFinite { row });
        }
        let &[(first, variance), .., (last, _)] = rows else {
            return Err(InvalidTable::TooShort);
        };
        if first != 0.0 {
            return Err(InvalidTable::NotFromZero { first });
        }
        if variance <= 0.0 {
            return Err(InvalidTable::NoVariance { value: variance });
        }
        if let Some(before) = rows.windows(2).position(|pair| pair[0].0 >= pair[1].0) {
            return Err(InvalidTable::NotRising { row: before + 1 });
        }
        let pieces = spline::even_cubic(rows);
        // Lags that nearly coincide can make slopes that leave the range of a double.
        if let Some(row) = pieces
            .iter()
            .position(|piece| !piece.coefficients.iter().all(|c| c.is_finite()))
        {
            return Err(InvalidTable::NotRising { row: row + 1 });
        }
        Ok(Self {
            name: name.into(),
            pieces,
            last,
            beyond,
            resolution: resolution::half_digit(rows.iter().map(|(_, value)| *value)),
        })
    }

    /// What holds beyond the last lag.
    pub fn beyond(&self) -> Beyond {
        self.beyond
    }

    /// The last lag, in s.
    pub fn last_lag(&self) -> f64 {
        self.last
    }

    /// Half of the last digit to which its values are written, which rounding has left open.
    pub fn resolution(&self) -> f64 {
        self.resolution
    }

    pub(super) fn variance(&self) -> f64 {
        self.pieces.first().map_or(0.0, |piece| piece.coefficients[0])
    }

    /// Value and slope at the last lag.
    pub(super) fn end(&self) -> (f64, f64) {
        self.pieces.last().map_or((0.0, 0.0), |piece| {
            let [value, slope, ..] = piece.about(piece.length);
            (value, slope)
        })
    }

    /// The constant it ends in.
    pub(super) fn plateau(&self) -> f64 {
        if self.beyond == Beyond::Hold { self.end().0 } else { 0.0 }
    }

    fn piece(&self, lag: f64) -> Option<&Piece> {
        self.place(lag).map(|(_, piece)| piece)
    }

    /// The piece that a lag lies in, and its place among all.
    pub(super) fn place(&self, lag: f64) -> Option<(usize, &Piece)> {
        let after = self.pieces.partition_point(|piece| piece.from <= lag);
        let place = after.checked_sub(1)?;
        Some((place, self.pieces.get(place)?)).filter(|_| lag <= self.last)
    }

    /// A piece with those next to it.
    pub(super) fn pieces_about(&self, place: usize) -> &[Piece] {
        let end = (place + 2).min(self.pieces.len());
        self.pieces.get(place.saturating_sub(1)..end).unwrap_or_default()
    }

    fn refused(&self, lag: f64) -> Unavailable {
        Unavailable::BeyondTable { lag, last: self.last }
    }

    fn beyond_end(&self, lag: f64) -> Result<f64, Unavailable> {
        if self.beyond == Beyond::Refuse {
            Err(self.refused(lag))
        } else {
            Ok(self.plateau())
        }
    }

    pub(super) fn value(&self, lag: f64) -> Result<f64, Unavailable> {
        match self.piece(lag) {
            Some(piece) => Ok(piece.coefficients[0] + piece.change(lag - piece.from)),
            None => self.beyond_end(lag),
        }
    }

    pub(super) fn loss(&self, lag: f64) -> Result<f64, Unavailable> {
        match self.piece(lag) {
            Some(piece) => Ok((self.variance() - piece.coefficients[0]) - piece.change(lag - piece.from)),
            None => Ok(self.variance() - self.beyond_end(lag)?),
        }
    }

    pub(super) fn expansion(&self, order: f64) -> Series {
        let coefficients = self.pieces.first().map_or([0.0; 4], |piece| piece.coefficients);
        let terms = coefficients
            .iter()
            .zip(0..)
            .map(|(coefficient, n)| SeriesTerm::new(*coefficient, f64::from(n), 0));
        Series::from_terms(terms.collect(), order)
    }

    pub(super) fn taylor(&self, lag: f64, order: usize) -> Result<Vec<f64>, Unavailable> {
        let mut coefficients = match self.piece(lag) {
            Some(_) if lag == self.last && self.end_kink() <= order => match self.beyond {
                Beyond::Refuse => return Err(self.refused(lag)),
                _ => {
                    return Err(Unavailable::NotSmooth {
                        lag,
                        derivative: self.end_kink(),
                    });
                }
            },
            Some(piece) if lag == piece.from && order >= 3 => {
                return Err(Unavailable::NotSmooth { lag, derivative: 3 });
            }
            Some(piece) => piece.about(lag - piece.from).to_vec(),
            None => vec![self.beyond_end(lag)?],
        };
        coefficients.resize(order + 1, 0.0);
        Ok(coefficients)
    }

    pub(super) fn kinks(&self) -> Vec<Kink> {
        let inner = self.pieces.iter().skip(1).map(|piece| Kink {
            lag: piece.from,
            derivative: 3,
        });
        inner
            .chain([Kink {
                lag: self.last,
                derivative: self.end_kink(),
            }])
            .collect()
    }

    /// The lowest derivative that jumps at the last lag.
    fn end_kink(&self) -> usize {
        let (value, slope) = self.end();
        match self.beyond {
            Beyond::Refuse => 1,
            _ if value != self.plateau() => 0,
            _ if slope != 0.0 => 1,
            _ => 3,
        }
    }

    /// The cubic term at lag zero, unless the table is flat.
    pub(super) fn roughness(&self) -> Option<Rough> {
        let curved = self.pieces.iter().any(|piece| piece.coefficients[3] != 0.0);
        curved.then_some(Rough { exponent: 3.0, log: 0 })
    }

    pub(super) fn times(&self) -> (f64, f64) {
        let shortest = self
            .pieces
            .iter()
            .map(|piece| piece.length)
            .fold(f64::INFINITY, f64::min);
        (shortest, self.last)
    }

    pub(super) fn lines(&self) -> Vec<Line> {
        let power = self.plateau();
        if power == 0.0 {
            Vec::new()
        } else {
            vec![Line { frequency: 0.0, power }]
        }
    }

    /// The continuous density, exactly; over all lags, so that it is refused with the rest of the lags.
    pub(super) fn density(&self, omega: f64) -> Result<f64, Unavailable> {
        self.beyond_end(f64::INFINITY)?;
        Ok(FRAC_2_PI * spline::cosine_transform(&self.pieces, self.plateau(), omega))
    }

    pub(super) fn scale_of_fluctuation(&self) -> Result<f64, Unavailable> {
        self.beyond_end(f64::INFINITY)?;
        if self.plateau() != 0.0 {
            return Ok(f64::INFINITY.copysign(self.plateau()));
        }
        Ok(2.0 * self.pieces.iter().map(Piece::integral).sum::<f64>())
    }

    /// lambda_0, lambda_2 and lambda_4.
    pub(super) fn even_moments(&self) -> [f64; 3] {
        let curvature = self.pieces.first().map_or(0.0, |piece| piece.coefficients[2]);
        let fourth = if self.roughness().is_some() { f64::INFINITY } else { 0.0 };
        [self.variance(), -2.0 * curvature, fourth]
    }

    /// lambda_1, 2/pi times the integral of (C(0) - C(tau)) / tau^2: over the first piece and beyond the table in closed
    /// form, over the rest by quadrature.
    pub(super) fn first_moment(&self) -> Result<Estimate, Unavailable> {
        self.beyond_end(f64::INFINITY)?;
        let [_, _, curvature, third] = self.pieces.first().map_or([0.0; 4], |piece| piece.coefficients);
        let first = self
            .pieces
            .first()
            .map_or(0.0, |piece| -piece.length * (curvature + 0.5 * piece.length * third));
        let beyond = (self.variance() - self.plateau()) / self.last;
        let mut sum = Estimate::closed(first + beyond);
        for piece in self.pieces.iter().skip(1) {
            let lost = self.variance() - piece.coefficients[0];
            let integrand = |lag: f64| (lost - piece.change(lag - piece.from)) / (lag * lag);
            let limits = [piece.from, piece.end()];
            if let Some(part) = quadrature::between(integrand, &limits, Tolerance::relative(1e-13), 2_000) {
                sum = sum.plus(Estimate {
                    value: part.value,
                    error: part.error,
                });
            }
        }
        Ok(sum.times(FRAC_2_PI))
    }
}

impl fmt::Display for Tabulated {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        let policy = match self.beyond {
            Beyond::Zero => "zero",
            Beyond::Hold => "hold",
            Beyond::Refuse => "refuse",
        };
        write!(out, "tabulated(\"{}\", beyond: {policy})", self.name)
    }
}
