//! Intervals that hold a number for certain.

use std::f64::consts::{FRAC_PI_2, PI};

use super::Number;

/// A closed interval of real numbers; endpoints may be infinite.
///
/// Every operation returns an interval that holds all results over the numbers in its operands (R. E. Moore 1966,
/// Interval Analysis): sums, differences, products, quotients and roots are rounded outward by one unit in the last
/// place, which is what correct rounding leaves open, other functions by a few units. What may have no value, such as
/// a quotient by an interval that holds zero, is [`Interval::WHOLE`].
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Interval {
    /// The lower end.
    pub low: f64,
    /// The upper end.
    pub high: f64,
}

/// Units in the last place by which the elementary functions of `libm` are widened. Its documentation states errors below
/// one unit, for `sinh`, `cosh` and `tanh` below two.
const SLACK: u32 = 4;

/// Beyond that argument the place of a wave's extrema is not told from its rounded value.
const LARGEST_ANGLE: f64 = 1e12;

/// The relative error of an angle counted in half turns.
const COUNTING: f64 = 1e-15;

impl Interval {
    /// All numbers: nothing is known.
    pub const WHOLE: Self = Self {
        low: f64::NEG_INFINITY,
        high: f64::INFINITY,
    };

    /// One number.
    pub const fn point(value: f64) -> Self {
        Self {
            low: value,
            high: value,
        }
    }

    /// What lies within an error of a number. The error must not be negative.
    pub fn about(value: f64, error: f64) -> Self {
        Self {
            low: value - error,
            high: value + error,
        }
        .widened(1)
    }

    /// A number given by its nearest double.
    pub fn rounded(value: f64) -> Self {
        Self::point(value).widened(1)
    }

    /// The smallest interval that holds both.
    #[must_use]
    pub fn hull(self, other: Self) -> Self {
        Self {
            low: self.low.min(other.low),
            high: self.high.max(other.high),
        }
        .checked()
    }

    /// Whether both ends are finite.
    pub fn is_finite(self) -> bool {
        self.low.is_finite() && self.high.is_finite()
    }

    /// Whether it holds a number.
    pub fn holds(self, value: f64) -> bool {
        self.low <= value && value <= self.high
    }

    /// The number in its middle.
    pub fn middle(self) -> f64 {
        0.5 * self.low + 0.5 * self.high
    }

    /// Nothing is known of what is no interval.
    fn checked(self) -> Self {
        if self.low <= self.high { self } else { Self::WHOLE }
    }

    fn widened(self, units: u32) -> Self {
        let (mut low, mut high) = (self.low, self.high);
        for _ in 0..units {
            (low, high) = (low.next_down(), high.next_up());
        }
        Self { low, high }.checked()
    }

    /// The range of a rising function.
    fn rising(self, function: impl Fn(f64) -> f64) -> Self {
        Self {
            low: function(self.low),
            high: function(self.high),
        }
        .checked()
        .widened(SLACK)
    }

    /// Cut to a range in which the true values are known to lie.
    fn within(self, low: f64, high: f64) -> Self {
        Self {
            low: self.low.max(low),
            high: self.high.min(high),
        }
        .checked()
    }

    /// The hull of an operation at the four pairs of ends.
    fn corners(self, other: Self, operation: impl Fn(f64, f64) -> f64) -> Self {
        let ends = [
            operation(self.low, other.low),
            operation(self.low, other.high),
            operation(self.high, other.low),
            operation(self.high, other.high),
        ];
        if ends.iter().any(|end| end.is_nan()) {
            return Self::WHOLE;
        }
        Self {
            low: ends.into_iter().fold(f64::INFINITY, f64::min),
            high: ends.into_iter().fold(f64::NEG_INFINITY, f64::max),
        }
    }

    /// The range of cos(x + shift quarter turns).
    fn wave(self, shift: f64, function: impl Fn(f64) -> f64) -> Self {
        if !(self.low.abs() <= LARGEST_ANGLE && self.high.abs() <= LARGEST_ANGLE) {
            return Self { low: -1.0, high: 1.0 };
        }
        // Extrema lie where the angle is a whole number of half turns: maxima at even ones.
        let slack = COUNTING * (1.0 + self.low.abs().max(self.high.abs()));
        let first = ((self.low - slack) / PI + 0.5 * shift - slack).ceil();
        let last = ((self.high + slack) / PI + 0.5 * shift + slack).floor();
        let ends = self.corners(self, |end, _| function(end)).widened(SLACK);
        let (one, several) = (first <= last, first < last);
        let even = first.rem_euclid(2.0) == 0.0;
        Self {
            low: if several || one && !even { -1.0 } else { ends.low },
            high: if several || one && even { 1.0 } else { ends.high },
        }
        .within(-1.0, 1.0)
    }

    /// A whole power.
    fn whole_power(self, exponent: f64) -> Self {
        let power = |base: f64| libm::pow(base, exponent);
        let holds_zero = self.holds(0.0);
        if holds_zero && exponent < 0.0 {
            return Self::WHOLE;
        }
        let ends = self.corners(self, |end, _| power(end)).widened(SLACK);
        if exponent.rem_euclid(2.0) != 0.0 {
            return ends;
        }
        Self {
            low: if holds_zero { 0.0 } else { ends.low.max(0.0) },
            high: ends.high,
        }
    }
}

impl Number for Interval {
    fn number(value: f64) -> Self {
        Self::point(value).checked()
    }

    fn undefined() -> Self {
        Self::WHOLE
    }

    fn add(&self, other: &Self) -> Self {
        Self {
            low: self.low + other.low,
            high: self.high + other.high,
        }
        .checked()
        .widened(1)
    }

    fn sub(&self, other: &Self) -> Self {
        self.add(&other.neg())
    }

    fn mul(&self, other: &Self) -> Self {
        // Factors of exactly 0 and 1 leave nothing to round.
        for (one, two) in [(self, other), (other, self)] {
            if *one == Self::point(1.0) {
                return *two;
            }
            if *one == Self::point(0.0) && two.is_finite() {
                return *one;
            }
        }
        self.corners(*other, |a, b| a * b).widened(1)
    }

    fn div(&self, other: &Self) -> Self {
        if other.holds(0.0) {
            return Self::WHOLE;
        }
        self.corners(*other, |a, b| a / b).widened(1)
    }

    fn neg(&self) -> Self {
        Self {
            low: -self.high,
            high: -self.low,
        }
    }

    fn power(&self, exponent: &Self) -> Self {
        let single = exponent.low == exponent.high;
        match exponent.low {
            _ if !self.is_finite() || !exponent.is_finite() => Self::WHOLE,
            0.0 if single => Self::point(1.0),
            1.0 if single => *self,
            0.5 if single => self.sqrt(),
            whole if single && whole == whole.trunc() => self.whole_power(whole),
            _ if self.low < 0.0 || self.low == 0.0 && exponent.low <= 0.0 => Self::WHOLE,
            // Monotone in either, so that the ends are at the corners.
            _ => self
                .corners(*exponent, libm::pow)
                .widened(SLACK)
                .within(0.0, f64::INFINITY),
        }
    }

    fn sqrt(&self) -> Self {
        if self.low < 0.0 {
            return Self::WHOLE;
        }
        self.rising(libm::sqrt).within(0.0, f64::INFINITY)
    }

    fn exp(&self) -> Self {
        self.rising(libm::exp).within(0.0, f64::INFINITY)
    }

    fn ln(&self) -> Self {
        if self.low <= 0.0 {
            return Self::WHOLE;
        }
        self.rising(libm::log)
    }

    fn log10(&self) -> Self {
        if self.low <= 0.0 {
            return Self::WHOLE;
        }
        self.rising(libm::log10)
    }

    fn sin(&self) -> Self {
        self.wave(-1.0, libm::sin)
    }

    fn cos(&self) -> Self {
        self.wave(0.0, libm::cos)
    }

    fn tan(&self) -> Self {
        let largest = self.low.abs().max(self.high.abs());
        let slack = COUNTING * (1.0 + largest);
        let branch = |angle: f64| ((angle - FRAC_PI_2) / PI).floor();
        if largest > LARGEST_ANGLE || branch(self.low - slack) != branch(self.high + slack) {
            return Self::WHOLE;
        }
        self.rising(libm::tan)
    }

    fn asin(&self) -> Self {
        if self.low < -1.0 || self.high > 1.0 {
            return Self::WHOLE;
        }
        self.rising(libm::asin)
    }

    fn acos(&self) -> Self {
        if self.low < -1.0 || self.high > 1.0 {
            return Self::WHOLE;
        }
        self.neg().rising(|x| libm::acos(-x))
    }

    fn atan(&self) -> Self {
        self.rising(libm::atan)
    }

    fn sinh(&self) -> Self {
        self.rising(libm::sinh)
    }

    fn cosh(&self) -> Self {
        self.abs().rising(libm::cosh).within(1.0, f64::INFINITY)
    }

    fn tanh(&self) -> Self {
        self.rising(libm::tanh).within(-1.0, 1.0)
    }

    fn erf(&self) -> Self {
        self.rising(libm::erf).within(-1.0, 1.0)
    }

    fn abs(&self) -> Self {
        if self.low >= 0.0 {
            *self
        } else if self.high <= 0.0 {
            self.neg()
        } else {
            Self {
                low: 0.0,
                high: self.high.max(-self.low),
            }
        }
    }

    fn min(&self, other: &Self) -> Self {
        Self {
            low: self.low.min(other.low),
            high: self.high.min(other.high),
        }
    }

    fn max(&self, other: &Self) -> Self {
        Self {
            low: self.low.max(other.low),
            high: self.high.max(other.high),
        }
    }

    fn step(&self) -> Self {
        Self {
            low: if self.low < 0.0 { 0.0 } else { 1.0 },
            high: if self.high < 0.0 { 0.0 } else { 1.0 },
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::expression::{Arena, Function, Operand, Symbol, Tape};
    use proptest::prelude::*;

    proptest! {
        /// Every operation holds the value of doubles inside its operands, and is not much wider than it must be.
        #[test]
        fn results_of_doubles_lie_inside(a in -50.0..50.0f64, b in -50.0..50.0f64, width in 0.0..0.1f64, share in 0.0..1.0f64) {
            let interval = |value: f64| Interval { low: value, high: value + width };
            let (x, y) = (interval(a), interval(b));
            let (inside, other) = (a + share * width, b + share * width);
            for (found, value) in [
                (x.add(&y), inside + other),
                (x.sub(&y), inside - other),
                (x.mul(&y), inside * other),
                (x.div(&y), inside / other),
                (x.abs().power(&y), inside.abs().powf(other)),
                (x.power(&Interval::point(3.0)), inside.powi(3)),
                (x.power(&Interval::point(-2.0)), inside.powi(-2)),
                (Number::min(&x, &y), inside.min(other)),
                (Number::max(&x, &y), inside.max(other)),
            ] {
                prop_assert!(found.holds(value), "{found:?} {value}");
            }
            for function in Function::ALL.into_iter().filter(|function| *function.arity().end() == 1) {
                let value = function.evaluate(&[inside]);
                let found = function.evaluate(&[x]);
                prop_assert!(value.is_nan() || found.holds(value), "{function:?} {found:?} {value}");
            }
            let thin = Interval::rounded(a).cos();
            prop_assert!(thin.high - thin.low < 1e-13, "{thin:?}");
        }
    }

    #[test]
    fn extrema_inside_are_not_missed() {
        let x = Interval { low: -0.3, high: 0.2 };
        assert_eq!(x.cos().high, 1.0);
        assert!((x.cos().low - 0.3_f64.cos()).abs() < 1e-15);
        let half = Interval { low: 1.0, high: 2.0 };
        assert_eq!(half.sin().high, 1.0);
        assert!(half.sin().low < 0.8415 && half.sin().low > 0.84);
        assert!(half.cos().low > -0.42 && half.cos().high < 0.55);
        let turn = Interval { low: 0.0, high: 7.0 };
        assert_eq!(turn.sin(), Interval { low: -1.0, high: 1.0 });
        assert_eq!(half.tan(), Interval::WHOLE);
        assert_eq!(x.step(), Interval { low: 0.0, high: 1.0 });
        assert_eq!(x.power(&Interval::point(2.0)).low, 0.0);
    }

    #[test]
    fn what_has_no_value_is_anything() {
        let x = Interval { low: -1.0, high: 1.0 };
        for found in [
            x.ln(),
            x.sqrt(),
            Interval::point(2.0).div(&x),
            Interval::point(2.0).asin(),
        ] {
            assert_eq!(found, Interval::WHOLE);
        }
        assert_eq!(Interval::number(f64::NAN), Interval::WHOLE);
        assert_eq!(Interval::WHOLE.mul(&Interval::point(0.0)), Interval::WHOLE);
    }

    /// exp(-tau) (1 + tau) at a lag of a third.
    #[test]
    fn a_tape_runs_over_intervals() {
        let mut arena = Arena::new();
        let lag = arena.symbol(Symbol::Lag);
        let minus = arena.negative(lag);
        let decay = arena.apply(Function::Exp, &[minus]).expect("one argument");
        let one = arena.number(1.0);
        let sum = arena.sum(&[Operand::direct(one), Operand::direct(lag)]);
        let root = arena.product(&[Operand::direct(decay), Operand::direct(sum)]);
        let third = 1.0 / 3.0;
        let found = Tape::compile(&arena, root).evaluate(&Interval::rounded(third), &[]);
        assert!(
            found.holds((-third).exp() * (1.0 + third)) && found.high - found.low < 1e-14,
            "{found:?}"
        );
    }
}
