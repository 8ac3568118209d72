//! Dimensions: products of rational powers of the base dimensions.

use num_rational::Ratio;

/// The power of a base dimension or of a unit.
pub type Exponent = Ratio<i16>;

/// A base dimension.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Base {
    /// Length, in m.
    Length,
    /// Mass, in kg.
    Mass,
    /// Time, in s.
    Time,
    /// Electric current, in A.
    Current,
    /// Plane angle, in rad. SI calls it a plain number; here it is kept apart, so that cycles and radians per second
    /// are told from events per second.
    Angle,
}

impl Base {
    /// All of them, in the order in which they are stored.
    pub const ALL: [Self; 5] = [Self::Length, Self::Mass, Self::Time, Self::Current, Self::Angle];
}

/// A dimension. Temperature, amount of substance and luminous intensity are no part of the language.
///
/// Arithmetic is checked: an exponent whose numerator or denominator does not fit 16 bits gives `None`.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Dimension {
    exponents: [Exponent; Base::ALL.len()],
}

impl Dimension {
    /// A plain number.
    pub const PLAIN: Self = Self::of(0, 0, 0, 0, 0);
    /// Length.
    pub const LENGTH: Self = Self::of(1, 0, 0, 0, 0);
    /// Mass.
    pub const MASS: Self = Self::of(0, 1, 0, 0, 0);
    /// Time.
    pub const TIME: Self = Self::of(0, 0, 1, 0, 0);
    /// Electric current.
    pub const CURRENT: Self = Self::of(0, 0, 0, 1, 0);
    /// Plane angle.
    pub const ANGLE: Self = Self::of(0, 0, 0, 0, 1);
    /// Length^2.
    pub const AREA: Self = Self::of(2, 0, 0, 0, 0);
    /// Length^3.
    pub const VOLUME: Self = Self::of(3, 0, 0, 0, 0);
    /// Length over time.
    pub const SPEED: Self = Self::of(1, 0, -1, 0, 0);
    /// Length over time^2.
    pub const ACCELERATION: Self = Self::of(1, 0, -2, 0, 0);
    /// Mass times acceleration.
    pub const FORCE: Self = Self::of(1, 1, -2, 0, 0);
    /// Force over area.
    pub const STRESS: Self = Self::of(-1, 1, -2, 0, 0);
    /// Force over length.
    pub const STIFFNESS: Self = Self::of(0, 1, -2, 0, 0);
    /// Force times length; also energy.
    pub const MOMENT: Self = Self::of(2, 1, -2, 0, 0);
    /// Moment over time.
    pub const POWER: Self = Self::of(2, 1, -3, 0, 0);
    /// Events over time.
    pub const RATE: Self = Self::of(0, 0, -1, 0, 0);
    /// Angle over time.
    pub const ANGULAR_FREQUENCY: Self = Self::of(0, 0, -1, 0, 1);

    /// The dimension with these whole exponents.
    pub const fn of(length: i16, mass: i16, time: i16, current: i16, angle: i16) -> Self {
        Self {
            exponents: [
                Ratio::new_raw(length, 1),
                Ratio::new_raw(mass, 1),
                Ratio::new_raw(time, 1),
                Ratio::new_raw(current, 1),
                Ratio::new_raw(angle, 1),
            ],
        }
    }

    /// The power of one base dimension.
    pub const fn exponent(self, base: Base) -> Exponent {
        self.exponents[base as usize]
    }

    /// Whether it is that of a plain number.
    pub fn is_plain(self) -> bool {
        self == Self::PLAIN
    }

    /// The dimension of a product.
    pub fn times(self, other: Self) -> Option<Self> {
        self.combine(other, sum)
    }

    /// The dimension of a quotient.
    pub fn over(self, other: Self) -> Option<Self> {
        self.times(other.power_i32(-1)?)
    }

    /// The dimension of a rational power.
    pub fn power(self, exponent: Exponent) -> Option<Self> {
        self.map(|own| product(own, exponent))
    }

    /// The dimension of a whole power.
    pub fn power_i32(self, exponent: i32) -> Option<Self> {
        self.map(|own| narrow(i64::from(*own.numer()) * i64::from(exponent), i64::from(*own.denom())))
    }

    /// The dimension of the root of a degree; `None` for degree 0.
    pub fn root(self, degree: i16) -> Option<Self> {
        self.power(narrow(1, i64::from(degree))?)
    }

    /// The dimension of a power whose exponent was computed: doubles within a few units in the last place of a
    /// fraction with a denominator up to 12 (`0.5`, `1.0 / 3.0`, `1.5`) are read as that fraction. A plain number may
    /// have any power; `None` where something else has a power that is no such fraction.
    pub fn power_f64(self, exponent: f64) -> Option<Self> {
        if self.is_plain() {
            return Some(self);
        }
        self.power(small_fraction(exponent)?)
    }

    /// The same with the angle left out, to tell faults of angle from other faults.
    #[must_use]
    pub fn without_angle(mut self) -> Self {
        self.exponents[Base::Angle as usize] = Ratio::new_raw(0, 1);
        self
    }

    fn map(mut self, change: impl Fn(Exponent) -> Option<Exponent>) -> Option<Self> {
        for exponent in &mut self.exponents {
            *exponent = change(*exponent)?;
        }
        Some(self)
    }

    fn combine(mut self, other: Self, join: impl Fn(Exponent, Exponent) -> Option<Exponent>) -> Option<Self> {
        for (exponent, theirs) in self.exponents.iter_mut().zip(other.exponents) {
            *exponent = join(*exponent, theirs)?;
        }
        Some(self)
    }
}

/// The sum of two exponents.
pub(super) fn sum(a: Exponent, b: Exponent) -> Option<Exponent> {
    let ((an, ad), (bn, bd)) = (wide(a), wide(b));
    narrow(an * bd + bn * ad, ad * bd)
}

/// The product of two exponents.
pub(super) fn product(a: Exponent, b: Exponent) -> Option<Exponent> {
    let ((an, ad), (bn, bd)) = (wide(a), wide(b));
    narrow(an * bn, ad * bd)
}

/// The quotient of two exponents; `None` if the second is 0.
pub(super) fn quotient(a: Exponent, b: Exponent) -> Option<Exponent> {
    let ((an, ad), (bn, bd)) = (wide(a), wide(b));
    narrow(an * bd, ad * bn)
}

/// A whole exponent.
pub(super) fn whole(exponent: i32) -> Option<Exponent> {
    narrow(i64::from(exponent), 1)
}

fn wide(a: Exponent) -> (i64, i64) {
    (i64::from(*a.numer()), i64::from(*a.denom()))
}

/// The fraction in lowest terms, if it fits.
fn narrow(numerator: i64, denominator: i64) -> Option<Exponent> {
    if denominator == 0 {
        return None;
    }
    let reduced = Ratio::new(numerator, denominator);
    let part = |value: i64| i16::try_from(value).ok();
    Some(Ratio::new_raw(part(*reduced.numer())?, part(*reduced.denom())?))
}

/// The fraction with a denominator up to 12 that a double stands for.
fn small_fraction(value: f64) -> Option<Exponent> {
    (1..=12_i16).find_map(|denominator| {
        let scaled = value * f64::from(denominator);
        let nearest = scaled.round();
        let near = (scaled - nearest).abs() <= 4.0 * f64::EPSILON * scaled.abs();
        if !near || nearest.abs() > f64::from(i16::MAX) {
            return None;
        }
        narrow(nearest as i64, i64::from(denominator))
    })
}
