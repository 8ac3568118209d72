//! Times that people can write down.

use crate::expression::Interval;

/// A time in s as a whole number of units of a power of ten: exact, where a double is not.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Decimal {
    /// How many units.
    pub digits: i128,
    /// The unit is 10 to that power.
    pub exponent: i32,
}

impl Decimal {
    /// A positive time to a number of significant digits.
    pub fn near(time: f64, digits: usize) -> Option<Self> {
        Self::read(&format!("{time:.*e}", digits.saturating_sub(1)))
    }

    /// The shortest decimal that is read as this double.
    pub fn of(time: f64) -> Option<Self> {
        Self::read(&format!("{time:e}"))
    }

    fn read(text: &str) -> Option<Self> {
        let (mantissa, exponent) = text.split_once('e')?;
        let (whole, fraction) = mantissa.split_once('.').unwrap_or((mantissa, ""));
        let fraction = fraction.trim_end_matches('0');
        let digits: i128 = format!("{whole}{fraction}").parse().ok()?;
        let exponent = exponent.parse::<i32>().ok()? - i32::try_from(fraction.len()).ok()?;
        (digits > 0).then_some(Self { digits, exponent })
    }

    /// So many times as long.
    pub fn times(self, factor: i128) -> Self {
        Self {
            digits: self.digits * factor,
            ..self
        }
    }

    /// The double nearest to it.
    pub fn value(self) -> f64 {
        // Decimals of this form are always read, and rounded to nearest.
        format!("{}e{}", self.digits, self.exponent).parse().unwrap_or(f64::NAN)
    }

    /// An interval that holds it, and no more than one double to either side of the nearest.
    pub fn enclosure(self) -> Interval {
        let value = self.value();
        if self.digits == 0 || value.fract() == 0.0 && value.abs() < 9e15 && self.exponent >= 0 {
            return Interval::point(value);
        }
        Interval::rounded(value)
    }

    /// In units of a smaller or equal power of ten.
    pub fn in_units(self, exponent: i32) -> Option<i128> {
        let power = u32::try_from(self.exponent - exponent).ok()?;
        self.digits.checked_mul(10_i128.checked_pow(power)?)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn decimals_are_exact() {
        let step = Decimal::near(0.123_456, 2).expect("a time");
        assert_eq!((step.digits, step.exponent), (12, -2));
        assert_eq!(step.times(5).value(), 0.6);
        assert_eq!(
            Decimal::of(0.3),
            Some(Decimal {
                digits: 3,
                exponent: -1
            })
        );
        assert_eq!(Decimal::of(40.0), Some(Decimal { digits: 4, exponent: 1 }));
        assert_eq!(Decimal::of(0.3).and_then(|three| three.in_units(-4)), Some(3000));
        let whole = Decimal { digits: 4, exponent: 1 };
        assert_eq!(whole.enclosure(), Interval::point(40.0));
        let tenth = Decimal {
            digits: 1,
            exponent: -1,
        }
        .enclosure();
        assert!(tenth.low < 0.1 && 0.1 < tenth.high);
    }
}
