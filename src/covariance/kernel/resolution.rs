//! How far a table can be trusted: to half its last digit at its rows, less between them.

use super::spline::Piece;
use super::tabulated::{Beyond, Tabulated};
use crate::expression::Interval;

/// Decimals that are looked for. Numbers without a decimal are taken to be meant to one at least; a double holds no more
/// than 15.
const DECIMALS: std::ops::Range<i32> = 1..15;

/// How far from a whole number a scaled value may be, in its last digits.
const ROUNDING: f64 = 8.0 * f64::EPSILON;

/// A lag so near to the last one, relatively, is the last one.
const SAME: f64 = 1e-12;

/// Between two rows the spline is trusted to so many times its distance from the straight line.
const BETWEEN: f64 = 2.0;

/// The arithmetic of a spline, as a share of the variance.
const ARITHMETIC: f64 = 1e-14;

/// Half of the last digit to which numbers are written: what rounding has left open. 0 where they have all digits of a
/// double.
pub(super) fn half_digit(values: impl Iterator<Item = f64> + Clone) -> f64 {
    let written = |decimals: i32| {
        let scale = 10.0_f64.powi(decimals);
        values.clone().all(|value| {
            let scaled = value * scale;
            (scaled - scaled.round()).abs() <= ROUNDING * scaled.abs()
        })
    };
    DECIMALS
        .clone()
        .find(|decimals| written(*decimals))
        .map_or(0.0, |decimals| 0.5 * 10.0_f64.powi(-decimals))
}

impl Tabulated {
    /// What the table says at a lag, and what it leaves open there; `None` where it says nothing.
    ///
    /// At a row it is half the last digit, except at lag zero, where a correlation is 1. Towards the middle between two
    /// rows it grows to twice the largest distance of the spline from the straight line, here or between the rows next
    /// to these. Beyond a table that ends in a constant it is half the last digit again, or the step down to it.
    pub(super) fn known(&self, lag: f64) -> Option<(f64, f64)> {
        let lag = if (lag - self.last_lag()).abs() <= SAME * self.last_lag() {
            self.last_lag()
        } else {
            lag
        };
        let value = self.value(lag).ok()?;
        let Some((place, piece)) = self.place(lag) else {
            return Some((value, self.doubt_beyond()));
        };
        let share = (lag - piece.from) / piece.length;
        let of_row = if place == 0 { share } else { 1.0 };
        let bend = self.pieces_about(place).iter().map(bend).fold(0.0, f64::max);
        let between = 4.0 * share * (1.0 - share).max(0.0) * BETWEEN * bend;
        Some((value, of_row * self.resolution() + between))
    }

    /// An interval that holds the values over lags that differ by no more than rounding.
    pub(super) fn enclosure(&self, lag: Interval) -> Interval {
        let near = |lag: f64| {
            self.known(lag).map_or(Interval::WHOLE, |(value, doubt)| {
                Interval::about(value, doubt + ARITHMETIC * self.variance())
            })
        };
        near(lag.low.max(0.0)).hull(near(lag.high))
    }

    /// What a constant beyond the table leaves open: half the last digit, or the step down to it from the last row where
    /// that is no jump.
    fn doubt_beyond(&self) -> f64 {
        match self.jump() {
            Some(_) => self.resolution(),
            None => self.resolution().max(self.step_at_end()),
        }
    }

    /// The difference between the last row and what holds behind it.
    fn step_at_end(&self) -> f64 {
        if self.beyond() == Beyond::Refuse {
            return 0.0;
        }
        (self.end().0 - self.plateau()).abs()
    }

    /// The jump at the last lag: the value there, and the value right behind. A step that rounding of both explains is none,
    /// nor is one of a thousandth of the variance, which is where people end a table of something that fades for ever.
    pub fn jump(&self) -> Option<(f64, f64)> {
        let allowed = (ROUNDED_TWICE * self.resolution()).max(FADED * self.variance());
        (self.step_at_end() > allowed).then(|| (self.end().0, self.plateau()))
    }
}

/// How far a piece of the spline is from the straight line between its rows.
fn bend(piece: &Piece) -> f64 {
    let end = piece.change(piece.length);
    [0.25, 0.5, 0.75]
        .into_iter()
        .map(|share| (piece.change(share * piece.length) - share * end).abs())
        .fold(0.0, f64::max)
}

/// Both values at a step may be wrong by half a digit.
const ROUNDED_TWICE: f64 = 2.0 * (1.0 + 1e-9);

/// A share of the variance that is taken for nothing where a table ends.
const FADED: f64 = 1e-3;
