//! A density whose every value is an integral of its own, looked at once and then interpolated.

use super::super::kernel::{Estimate, Line, Unavailable};
use super::super::spectral::{Rational, SpectralDensity, Tail};
use std::f64::consts::PI;

/// Nodes of a piece: the extreme points of a Chebyshev polynomial, where interpolation is stable (J.-P. Berrut and
/// L. N. Trefethen 2004, "Barycentric Lagrange interpolation", SIAM Rev. 46).
const NODES: usize = 17;

/// Densities looked at before a piece is taken as it is.
const MOST_VALUES: usize = 2_000;

/// The accuracy aimed at, as a share of the largest density.
const SHARE: f64 = 1e-10;

/// Pieces beyond the grid, each so many times as long as what is before it.
const TAIL_PIECES: usize = 12;
const STRETCH: f64 = 1.6;

/// A density is known as long as it is not wrong by more than that share.
const KNOWN: f64 = 1e-4;

/// A spectrum with its density interpolated in pieces.
#[derive(Clone, Debug)]
pub(in crate::covariance) struct Sampled {
    lines: Vec<Line>,
    tail: Tail,
    head: f64,
    pieces: Vec<Piece>,
    grid: Vec<f64>,
}

#[derive(Clone, Debug)]
struct Piece {
    from: f64,
    to: f64,
    nodes: [f64; NODES],
    values: [f64; NODES],
    /// The largest error of the values.
    noise: f64,
    /// What one more node would change.
    miss: f64,
}

impl Sampled {
    pub(in crate::covariance) fn new(spectrum: &dyn SpectralDensity) -> Result<Self, Unavailable> {
        let mut found = Self {
            lines: spectrum.lines()?,
            tail: spectrum.tail(),
            head: spectrum.head(),
            pieces: Vec::new(),
            grid: spectrum.grid()?,
        };
        let mut left: Vec<(f64, f64)> = found
            .grid
            .windows(2)
            .filter_map(|pair| Some((*pair.first()?, *pair.last()?)))
            .collect();
        // The first piece is the last to be taken.
        left.reverse();
        let mut looked_at = 0;
        let mut largest: f64 = 0.0;
        while let Some((from, to)) = left.pop() {
            let piece = Piece::new(spectrum, from, to)?;
            looked_at += NODES;
            largest = piece
                .values
                .iter()
                .fold(largest, |largest, value| largest.max(value.abs()));
            let middle = 0.5 * (from + to);
            if piece.miss > (SHARE * largest).max(3.0 * piece.noise)
                && looked_at < MOST_VALUES
                && middle > from
                && middle < to
            {
                left.extend([(middle, to), (from, middle)]);
                continue;
            }
            found.pieces.push(piece);
        }
        found.follow_the_tail(spectrum)?;
        found.grid = found.pieces.iter().map(|piece| piece.from).collect();
        found.grid.extend(found.pieces.last().map(|piece| piece.to));
        Ok(found)
    }

    /// Pieces beyond the grid, as long as the density is known there: the further out, the better the power law that
    /// follows.
    fn follow_the_tail(&mut self, spectrum: &dyn SpectralDensity) -> Result<(), Unavailable> {
        for _ in 0..TAIL_PIECES {
            let Some(last) = self.pieces.last() else { break };
            let piece = Piece::new(spectrum, last.to, STRETCH * last.to)?;
            let end = piece.values.last().copied().unwrap_or(0.0);
            let known = piece.noise + piece.miss <= KNOWN * end;
            if !known {
                break;
            }
            self.pieces.push(piece);
        }
        Ok(())
    }

    /// The density and its error, continued by the power law beyond the last piece.
    fn at(&self, omega: f64) -> (f64, f64) {
        let index = self.pieces.partition_point(|piece| piece.to < omega);
        match (self.pieces.get(index), self.pieces.last()) {
            (Some(piece), _) => (piece.at(omega), piece.miss + piece.noise),
            (None, Some(last)) => {
                let end = last.values.last().copied().unwrap_or(0.0).max(0.0);
                let fallen = (omega / last.to).powf(-self.tail.exponent());
                (end * fallen, (last.miss + last.noise) * fallen)
            }
            (None, None) => (0.0, 0.0),
        }
    }
}

impl Piece {
    fn new(spectrum: &dyn SpectralDensity, from: f64, to: f64) -> Result<Self, Unavailable> {
        let node = |index: usize| match index {
            0 => from,
            last if last == NODES - 1 => to,
            between => from + (to - from) * (0.5 - 0.5 * (PI * between as f64 / (NODES - 1) as f64).cos()),
        };
        let nodes = std::array::from_fn(node);
        let mut values = [0.0; NODES];
        let mut noise: f64 = 0.0;
        for (value, node) in values.iter_mut().zip(nodes) {
            let density = spectrum.density(node)?;
            *value = density.value;
            noise = noise.max(density.error);
        }
        Ok(Self {
            from,
            to,
            nodes,
            values,
            noise,
            miss: miss(&values),
        })
    }

    fn at(&self, omega: f64) -> f64 {
        let (mut above, mut below) = (0.0, 0.0);
        for (index, (value, node)) in self.values.iter().zip(self.nodes).enumerate() {
            let distance = omega - node;
            if distance == 0.0 {
                return *value;
            }
            let sign = if index % 2 == 0 { 1.0 } else { -1.0 };
            let weight = if index == 0 || index == NODES - 1 {
                0.5 * sign
            } else {
                sign
            } / distance;
            above += weight * value;
            below += weight;
        }
        above / below
    }
}

/// The size of the last three Chebyshev coefficients of the polynomial through the values.
fn miss(values: &[f64; NODES]) -> f64 {
    let degree = (NODES - 1) as f64;
    let coefficient = |order: usize| -> f64 {
        let terms = values.iter().enumerate().map(|(index, value)| {
            let half = if index == 0 || index == NODES - 1 { 0.5 } else { 1.0 };
            // The nodes rise, so the cosine runs backwards: a sign that the modulus does not see.
            half * value * (PI * (order * index) as f64 / degree).cos()
        });
        (2.0 / degree * terms.sum::<f64>()).abs()
    };
    (NODES - 3..NODES).map(coefficient).fold(0.0, f64::max)
}

impl SpectralDensity for Sampled {
    fn density(&self, omega: f64) -> Result<Estimate, Unavailable> {
        let (value, error) = self.at(omega);
        Ok(Estimate { value, error })
    }

    fn is_closed(&self) -> bool {
        false
    }

    fn lines(&self) -> Result<Vec<Line>, Unavailable> {
        Ok(self.lines.clone())
    }

    fn grid(&self) -> Result<Vec<f64>, Unavailable> {
        Ok(self.grid.clone())
    }

    fn tail(&self) -> Tail {
        self.tail
    }

    fn head(&self) -> f64 {
        self.head
    }

    fn rational(&self) -> Option<Vec<Rational>> {
        None
    }
}
