//! What a tape can be evaluated over.

/// A number type: all operations an expression can ask for.
///
/// An operation without a value (a negative number under a root, a division by zero) gives what the type has for it:
/// NaN or an infinity for `f64`, an unknown series for [`Series`](super::Series). Both spread through what follows.
pub trait Number: Clone {
    /// The number `value`.
    fn number(value: f64) -> Self;
    /// No value at all, as of a symbol that was not given one.
    fn undefined() -> Self;
    /// `self + other`.
    fn add(&self, other: &Self) -> Self;
    /// `self - other`.
    fn sub(&self, other: &Self) -> Self;
    /// `self * other`.
    fn mul(&self, other: &Self) -> Self;
    /// `self / other`.
    fn div(&self, other: &Self) -> Self;
    /// `-self`.
    fn neg(&self) -> Self;
    /// `self` to the power of `exponent`. A zero exponent gives 1, also at base zero; a negative base takes whole
    /// exponents only.
    fn power(&self, exponent: &Self) -> Self;
    /// Square root.
    fn sqrt(&self) -> Self;
    /// e to the power of `self`.
    fn exp(&self) -> Self;
    /// Natural logarithm.
    fn ln(&self) -> Self;
    /// Logarithm to base 10.
    fn log10(&self) -> Self;
    /// Sine, argument in radians.
    fn sin(&self) -> Self;
    /// Cosine, argument in radians.
    fn cos(&self) -> Self;
    /// Tangent, argument in radians.
    fn tan(&self) -> Self;
    /// Inverse sine in radians.
    fn asin(&self) -> Self;
    /// Inverse cosine in radians.
    fn acos(&self) -> Self;
    /// Inverse tangent in radians.
    fn atan(&self) -> Self;
    /// Hyperbolic sine.
    fn sinh(&self) -> Self;
    /// Hyperbolic cosine.
    fn cosh(&self) -> Self;
    /// Hyperbolic tangent.
    fn tanh(&self) -> Self;
    /// Error function.
    fn erf(&self) -> Self;
    /// Absolute value.
    fn abs(&self) -> Self;
    /// The smaller of two; undefined if either is.
    fn min(&self, other: &Self) -> Self;
    /// The larger of two; undefined if either is.
    fn max(&self, other: &Self) -> Self;
    /// 0 below 0, else 1.
    fn step(&self) -> Self;
}

/// The sum of operands, those marked `true` subtracted; 0 without any. From left to right.
pub(super) fn sum<'a, N: Number + 'a>(operands: impl IntoIterator<Item = (bool, &'a N)>) -> N {
    let mut operands = operands.into_iter();
    let first = match operands.next() {
        None => return N::number(0.0),
        Some((true, value)) => value.neg(),
        Some((false, value)) => value.clone(),
    };
    operands.fold(
        first,
        |sum, (negative, value)| if negative { sum.sub(value) } else { sum.add(value) },
    )
}

/// The product of operands, those marked `true` dividing; 1 without any. From left to right.
pub(super) fn product<'a, N: Number + 'a>(operands: impl IntoIterator<Item = (bool, &'a N)>) -> N {
    let mut operands = operands.into_iter();
    let first = match operands.next() {
        None => return N::number(1.0),
        Some((true, value)) => N::number(1.0).div(value),
        Some((false, value)) => value.clone(),
    };
    operands.fold(first, |product, (divides, value)| {
        if divides {
            product.div(value)
        } else {
            product.mul(value)
        }
    })
}

/// Elementary functions come from `libm`, so that every platform gives the same bits.
impl Number for f64 {
    fn number(value: f64) -> Self {
        value
    }

    fn undefined() -> Self {
        f64::NAN
    }

    fn add(&self, other: &Self) -> Self {
        self + other
    }

    fn sub(&self, other: &Self) -> Self {
        self - other
    }

    fn mul(&self, other: &Self) -> Self {
        self * other
    }

    fn div(&self, other: &Self) -> Self {
        self / other
    }

    fn neg(&self) -> Self {
        -self
    }

    /// Correctly rounded at exponents -1, 1/2, 1 and 2, within 1 ulp elsewhere.
    fn power(&self, exponent: &Self) -> Self {
        match *exponent {
            // The standard's pow hides NaN in NaN^0 and 1^NaN.
            other if self.is_nan() || other.is_nan() => f64::NAN,
            -1.0 => 1.0 / self,
            0.5 => libm::sqrt(*self),
            2.0 => self * self,
            other => libm::pow(*self, other),
        }
    }

    fn sqrt(&self) -> Self {
        libm::sqrt(*self)
    }

    fn exp(&self) -> Self {
        libm::exp(*self)
    }

    fn ln(&self) -> Self {
        libm::log(*self)
    }

    fn log10(&self) -> Self {
        libm::log10(*self)
    }

    fn sin(&self) -> Self {
        libm::sin(*self)
    }

    fn cos(&self) -> Self {
        libm::cos(*self)
    }

    fn tan(&self) -> Self {
        libm::tan(*self)
    }

    fn asin(&self) -> Self {
        libm::asin(*self)
    }

    fn acos(&self) -> Self {
        libm::acos(*self)
    }

    fn atan(&self) -> Self {
        libm::atan(*self)
    }

    fn sinh(&self) -> Self {
        libm::sinh(*self)
    }

    fn cosh(&self) -> Self {
        libm::cosh(*self)
    }

    fn tanh(&self) -> Self {
        libm::tanh(*self)
    }

    fn erf(&self) -> Self {
        libm::erf(*self)
    }

    fn abs(&self) -> Self {
        libm::fabs(*self)
    }

    fn min(&self, other: &Self) -> Self {
        if *self < *other || self.is_nan() { *self } else { *other }
    }

    fn max(&self, other: &Self) -> Self {
        if *self > *other || self.is_nan() { *self } else { *other }
    }

    fn step(&self) -> Self {
        if self.is_nan() {
            *self
        } else if *self < 0.0 {
            0.0
        } else {
            1.0
        }
    }
}

#[cfg(test)]
mod tests {
    use super::Number;

    #[test]
    fn powers_at_the_edges() {
        let power = |base: f64, exponent: f64| Number::power(&base, &exponent);
        assert_eq!(power(0.0, 0.0), 1.0);
        assert_eq!(power(0.0, 1.9), 0.0);
        assert_eq!(power(0.0, -0.5), f64::INFINITY);
        assert_eq!(power(-2.0, 3.0), -8.0);
        assert_eq!(power(-2.0, -1.0), -0.5);
        assert_eq!(power(4.0, 1.5), 8.0);
        assert!(power(-2.0, 0.5).is_nan());
        assert!(power(-2.0, 1.0 / 3.0).is_nan());
    }

    #[test]
    fn an_undefined_operand_stays_undefined() {
        assert!(Number::power(&f64::NAN, &0.0).is_nan());
        assert!(Number::power(&1.0, &f64::NAN).is_nan());
        assert!(Number::min(&f64::NAN, &1.0).is_nan());
        assert!(Number::min(&1.0, &f64::NAN).is_nan());
        assert!(Number::max(&f64::NAN, &1.0).is_nan());
        assert!(Number::max(&1.0, &f64::NAN).is_nan());
        assert!(Number::step(&f64::NAN).is_nan());
    }

    #[test]
    fn a_step_is_one_from_zero_on() {
        assert_eq!(Number::step(&-1e-300), 0.0);
        assert_eq!(Number::step(&0.0), 1.0);
        assert_eq!(Number::step(&-0.0), 1.0);
    }
}
