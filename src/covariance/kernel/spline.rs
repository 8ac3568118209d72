//! Even cubic splines.

/// One cubic piece, in powers of the distance from its left end.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Piece {
    pub from: f64,
    pub length: f64,
    /// Of 1, x, x^2, x^3.
    pub coefficients: [f64; 4],
}

impl Piece {
    pub fn end(&self) -> f64 {
        self.from + self.length
    }

    /// The polynomial without its constant term.
    pub fn change(&self, x: f64) -> f64 {
        let [_, b, c, d] = self.coefficients;
        x * (b + x * (c + x * d))
    }

    /// The coefficients about another point, x from the left end.
    pub fn about(&self, x: f64) -> [f64; 4] {
        let [a, b, c, d] = self.coefficients;
        [a + self.change(x), b + x * (2.0 * c + 3.0 * d * x), c + 3.0 * d * x, d]
    }

    /// The integral over the piece.
    pub fn integral(&self) -> f64 {
        let [a, b, c, d] = self.coefficients;
        let h = self.length;
        h * (a + h * (b / 2.0 + h * (c / 3.0 + h * d / 4.0)))
    }
}

/// The cubic spline through points with rising abscissae that begin at 0: slope 0 at 0, so that its even continuation
/// is smooth there, and no curvature at the other end, which is the least a table can be taken to say about it.
///
/// The second derivatives solve a tridiagonal, diagonally dominant system, by elimination without pivoting
/// (C. de Boor 1978, A Practical Guide to Splines, ch. IV).
pub(super) fn even_cubic(points: &[(f64, f64)]) -> Vec<Piece> {
    let intervals: Vec<(f64, f64)> = points
        .windows(2)
        .map(|pair| (pair[1].0 - pair[0].0, (pair[1].1 - pair[0].1) / (pair[1].0 - pair[0].0)))
        .collect();
    // Forward: each curvature as `offset + factor * (the next one)`.
    let mut eliminated: Vec<(f64, f64)> = Vec::with_capacity(points.len());
    let (mut before_length, mut before_slope) = (0.0, 0.0);
    let (mut offset, mut factor) = (0.0, 0.0);
    for (length, slope) in &intervals {
        let pivot = 2.0 * (before_length + length) + before_length * factor;
        offset = (6.0 * (slope - before_slope) - before_length * offset) / pivot;
        factor = -length / pivot;
        eliminated.push((offset, factor));
        (before_length, before_slope) = (*length, *slope);
    }
    // Backward, from curvature 0 at the end.
    let mut next = 0.0;
    let mut pieces: Vec<Piece> = Vec::with_capacity(intervals.len());
    for ((point, (length, slope)), (offset, factor)) in points.iter().zip(&intervals).zip(&eliminated).rev() {
        let curvature = offset + factor * next;
        let first = slope - length * (2.0 * curvature + next) / 6.0;
        let third = (next - curvature) / (6.0 * length);
        pieces.push(Piece {
            from: point.0,
            length: *length,
            coefficients: [point.1, first, 0.5 * curvature, third],
        });
        next = curvature;
    }
    pieces.reverse();
    // The slope at zero is zero by construction; what elimination left of it is rounding.
    if let Some(first) = pieces.first_mut() {
        first.coefficients[1] = 0.0;
    }
    pieces
}

/// The integral of (piece - offset) cos(omega tau) over all pieces.
///
/// Piece by piece with the exact moments of the oscillation over a piece (L. N. G. Filon 1928, On a quadrature formula
/// for trigonometric integrals, Proc. R. Soc. Edinb. 49), which is stable down to omega = 0; or, where every piece sees
/// whole turns, by parts, which keeps the digits of a transform that falls with omega^-4: the interior contributes through the
/// jumps of the third derivative alone, the end through value and slope.
pub(super) fn cosine_transform(pieces: &[Piece], offset: f64, omega: f64) -> f64 {
    let shortest = pieces.iter().map(|piece| piece.length).fold(f64::INFINITY, f64::min);
    if omega * shortest < BY_PARTS {
        let parts = pieces.iter().map(|piece| {
            let [a, b, c, d] = piece.coefficients;
            let h = piece.length;
            let moments = oscillating_moments(omega * h);
            let weights = [a - offset, b * h, c * h * h, d * h * h * h];
            let (sine, cosine) = (omega * piece.from).sin_cos();
            let sum = weights
                .iter()
                .zip(moments)
                .map(|(weight, (re, im))| weight * (cosine * re - sine * im));
            h * sum.sum::<f64>()
        });
        return parts.sum();
    }
    let Some(last) = pieces.last() else { return 0.0 };
    let [value, slope, curvature, _] = last.about(last.length);
    let (sine, cosine) = (omega * last.end()).sin_cos();
    let square = omega * omega;
    let jumps = pieces.iter().map(|piece| {
        let third = 6.0 * piece.coefficients[3];
        third * ((omega * piece.end()).cos() - (omega * piece.from).cos())
    });
    (value - offset) * sine / omega + slope * cosine / square
        - 2.0 * curvature * sine / (square * omega)
        - jumps.sum::<f64>() / (square * square)
}

/// From so much phase over the shortest piece on, integration by parts loses no digits.
const BY_PARTS: f64 = 8.0;

/// The integrals of x^j exp(i theta x) over [0, 1], j = 0..3, as real and imaginary parts.
fn oscillating_moments(theta: f64) -> [(f64, f64); 4] {
    if theta < 2.0 {
        return [0.0, 1.0, 2.0, 3.0].map(|j| {
            // sum of (i theta)^k / (k! (j + k + 1))
            let (mut re, mut im, mut factor) = (0.0, 0.0, 1.0);
            for k in (0..26).step_by(2).map(f64::from) {
                re += factor / (j + k + 1.0);
                factor *= theta / (k + 1.0);
                im += factor / (j + k + 2.0);
                factor *= -theta / (k + 2.0);
            }
            (re, im)
        });
    }
    // i theta M_j = exp(i theta) - j M_(j-1)
    let (sine, cosine) = theta.sin_cos();
    let mut last = (sine / theta, (1.0 - cosine) / theta);
    let mut moments = [last; 4];
    for (j, moment) in moments.iter_mut().enumerate().skip(1) {
        let j = j as f64;
        last = ((sine - j * last.1) / theta, (j * last.0 - cosine) / theta);
        *moment = last;
    }
    moments
}
