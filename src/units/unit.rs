//! A unit: a product of powers of symbols, with its dimension, its size and its spelling.

use std::fmt;

use super::dimension::{Dimension, Exponent, product, sum, whole};
use super::scale::Scale;
use super::spelling::spell;
use super::table;

/// A unit of which everything is known.
#[derive(Clone, Debug, PartialEq)]
pub struct Unit {
    dimension: Dimension,
    scale: Scale,
    factors: Vec<(Box<str>, Exponent)>,
    text: Box<str>,
}

impl Unit {
    /// The unit `1` of plain numbers.
    pub fn one() -> Self {
        Self::spelt(Dimension::PLAIN, Scale::ONE, Vec::new())
    }

    /// The unit of one symbol, prefix included: `kN`, `year`.
    pub fn named(symbol: &str) -> Option<Self> {
        let (dimension, scale) = table::find(symbol)?;
        Some(Self::spelt(
            dimension,
            scale,
            vec![(symbol.into(), Exponent::from_integer(1))],
        ))
    }

    /// The coherent SI unit of a dimension, as [`Dimension::si_name`] names it.
    pub fn si(dimension: Dimension) -> Self {
        let factors = dimension
            .si_factors()
            .into_iter()
            .map(|(symbol, power)| (symbol.into(), power));
        Self::spelt(dimension, Scale::ONE, factors.collect())
    }

    /// Its dimension.
    pub fn dimension(&self) -> Dimension {
        self.dimension
    }

    /// Its size in the coherent SI unit.
    pub fn scale(&self) -> Scale {
        self.scale
    }

    /// Its spelling: `kN/m^2`, `/year`, `1`.
    pub fn text(&self) -> &str {
        &self.text
    }

    /// `value` of this unit, in the coherent SI unit. Finite values give finite values, 0 or an infinity.
    pub fn to_si(&self, value: f64) -> f64 {
        self.scale.to_si(value)
    }

    /// `value` of the coherent SI unit, in this unit. Finite values give finite values, 0 or an infinity.
    pub fn from_si(&self, value: f64) -> f64 {
        self.scale.from_si(value)
    }

    /// The unit of a product; like symbols are gathered. `None` where a power is beyond all bounds.
    pub fn times(&self, other: &Self) -> Option<Self> {
        let dimension = self.dimension.times(other.dimension)?;
        let scale = self.scale.times(other.scale)?;
        let mut factors = self.factors.clone();
        for (symbol, power) in &other.factors {
            match factors.iter_mut().find(|(own, _)| own == symbol) {
                Some((_, own)) => *own = sum(*own, *power)?,
                None => factors.push((symbol.clone(), *power)),
            }
        }
        factors.retain(|(_, power)| *power.numer() != 0);
        Some(Self::spelt(dimension, scale, factors))
    }

    /// The unit of a quotient.
    pub fn over(&self, other: &Self) -> Option<Self> {
        self.times(&other.power(-1)?)
    }

    /// The unit of a whole power.
    pub fn power(&self, exponent: i32) -> Option<Self> {
        if exponent == 0 {
            return Some(Self::one());
        }
        let dimension = self.dimension.power_i32(exponent)?;
        let scale = self.scale.power(exponent)?;
        let exponent = whole(exponent)?;
        let mut factors = self.factors.clone();
        for (_, power) in &mut factors {
            *power = product(*power, exponent)?;
        }
        Some(Self::spelt(dimension, scale, factors))
    }

    fn spelt(dimension: Dimension, scale: Scale, factors: Vec<(Box<str>, Exponent)>) -> Self {
        let text = spell(factors.iter().map(|(symbol, power)| (&**symbol, *power)), "").into();
        Self {
            dimension,
            scale,
            factors,
            text,
        }
    }
}

impl fmt::Display for Unit {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.text)
    }
}
