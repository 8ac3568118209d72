//! The factor from a unit to the coherent SI unit, kept exact.

/// The largest power of ten a scale may hold: far beyond every double, and small enough that nothing overflows.
const MAX_TEN: i32 = 10_000;
/// The largest power of π a scale may hold, such that it is a finite double that is not 0.
const MAX_PI: i32 = 500;

/// The powers of ten that are exact as doubles.
const TENS: [f64; 23] = [
    1e0, 1e1, 1e2, 1e3, 1e4, 1e5, 1e6, 1e7, 1e8, 1e9, 1e10, 1e11, 1e12, 1e13, 1e14, 1e15, 1e16, 1e17, 1e18, 1e19, 1e20,
    1e21, 1e22,
];

/// The size of a unit in coherent SI units: `numerator / denominator * 10^ten * π^pi`.
///
/// Numerator and denominator are whole numbers, exact up to 2^53, so that a conversion rounds once: 36 mm is the double
/// nearest to 0.036 m. A product beyond that, and π, cost a rounding more each.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Scale {
    numerator: f64,
    denominator: f64,
    ten: i32,
    pi: i32,
}

impl Scale {
    /// The scale of a coherent SI unit.
    pub const ONE: Self = Self::of(1, 1, 0, 0);

    /// `numerator / denominator * 10^ten * π^pi`; numerator and denominator are from 1 to 2^53.
    pub(super) const fn of(numerator: u64, denominator: u64, ten: i32, pi: i32) -> Self {
        assert!(0 < numerator && numerator <= 1 << 53 && 0 < denominator && denominator <= 1 << 53);
        Self {
            numerator: numerator as f64,
            denominator: denominator as f64,
            ten,
            pi,
        }
    }

    /// `value` of this unit, in the coherent SI unit. Finite values give finite values, 0 or an infinity.
    pub fn to_si(self, value: f64) -> f64 {
        if value == 0.0 || !value.is_finite() {
            return value;
        }
        times_pi(self.times_fraction(value), self.pi)
    }

    /// `value` of the coherent SI unit, in this unit. Finite values give finite values, 0 or an infinity.
    pub fn from_si(self, value: f64) -> f64 {
        if value == 0.0 || !value.is_finite() {
            return value;
        }
        // In the opposite order of `to_si`, so that π rad is 180 deg and back without a rounding.
        self.inverse().times_fraction(times_pi(value, -self.pi))
    }

    /// The scale of a product; `None` beyond all bounds.
    pub(super) fn times(self, other: Self) -> Option<Self> {
        let (ours, theirs) = (
            common_divisor(self.numerator, other.denominator),
            common_divisor(other.numerator, self.denominator),
        );
        let (numerator, above) = bounded((self.numerator / ours) * (other.numerator / theirs));
        let (denominator, below) = bounded((self.denominator / theirs) * (other.denominator / ours));
        let ten = self.ten + other.ten + above - below;
        let pi = self.pi + other.pi;
        (ten.abs() <= MAX_TEN && pi.abs() <= MAX_PI).then_some(Self {
            numerator,
            denominator,
            ten,
            pi,
        })
    }

    /// The scale of a power; `None` beyond all bounds.
    pub(super) fn power(self, exponent: i32) -> Option<Self> {
        let mut square = if exponent < 0 { self.inverse() } else { self };
        let mut left = exponent.unsigned_abs();
        let mut result = Self::ONE;
        while left > 0 {
            if left & 1 == 1 {
                result = result.times(square)?;
            }
            left >>= 1;
            if left > 0 {
                square = square.times(square)?;
            }
        }
        Some(result)
    }

    /// The scale of the reciprocal.
    pub(super) fn inverse(self) -> Self {
        Self {
            numerator: self.denominator,
            denominator: self.numerator,
            ten: -self.ten,
            pi: -self.pi,
        }
    }

    /// `value * numerator / denominator * 10^ten`, carried at twice the precision and rounded at the end.
    fn times_fraction(self, value: f64) -> f64 {
        /// Below it a product with a numerator cannot overflow.
        const SMALL: f64 = 1e100;
        let value = Pair { high: value, low: 0.0 };
        let mut result = if value.high.abs() < SMALL {
            value.times(self.numerator).over(self.denominator)
        } else {
            value.over(self.denominator).times(self.numerator)
        };
        let mut left = self.ten.unsigned_abs() as usize;
        while left > 0 && result.high != 0.0 && result.high.is_finite() {
            let step = left.min(TENS.len() - 1);
            result = if self.ten < 0 {
                result.over(TENS[step])
            } else {
                result.times(TENS[step])
            };
            left -= step;
        }
        result.rounded()
    }
}

/// An unevaluated sum of two doubles, the low one an order of 2^53 smaller (T. J. Dekker, A floating-point technique for
/// extending the available precision, Numerische Mathematik 18, 1971, with fused operations).
#[derive(Clone, Copy)]
struct Pair {
    high: f64,
    low: f64,
}

impl Pair {
    fn times(self, factor: f64) -> Self {
        let high = self.high * factor;
        Self {
            high,
            low: self.high.mul_add(factor, -high) + self.low * factor,
        }
    }

    fn over(self, divisor: f64) -> Self {
        let high = self.high / divisor;
        let remainder = high.mul_add(-divisor, self.high) + self.low;
        Self {
            high,
            low: remainder / divisor,
        }
    }

    fn rounded(self) -> f64 {
        if self.high.is_finite() {
            self.high + self.low
        } else {
            self.high
        }
    }
}

/// `value * π^power`.
fn times_pi(value: f64, power: i32) -> f64 {
    let factor = std::f64::consts::PI.powi(power.abs());
    if power < 0 { value / factor } else { value * factor }
}

/// Moves what is beyond 10^150 into a power of ten, so that products stay finite.
fn bounded(value: f64) -> (f64, i32) {
    if value > 1e150 {
        (value / 1e150, 150)
    } else {
        (value, 0)
    }
}

/// The greatest common divisor of two whole numbers; 1 where they are not exact.
fn common_divisor(a: f64, b: f64) -> f64 {
    const EXACT: f64 = 9_007_199_254_740_992.0;
    if a > EXACT || b > EXACT {
        return 1.0;
    }
    let (mut a, mut b) = (a, b);
    while b != 0.0 {
        (a, b) = (b, a % b);
    }
    a
}
