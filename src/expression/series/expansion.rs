//! Sums of terms, and the arithmetic that needs no more than that.

use std::fmt;

use super::{SeriesTerm, Unknown};

/// Exponents closer than that are one exponent: they come out of sums of rounded numbers.
const SAME_EXPONENT: f64 = 1e-9;

/// So many terms are kept. What needs more is cut, and its order lowered.
pub(super) const MOST_TERMS: usize = 128;

/// The order of what falls faster than any power of h: beyond all that is ever asked for, yet not exact, so that no
/// sign is read from it.
pub(super) const ORDER_OF_FLAT: f64 = 1e6;

/// No power of the logarithm beyond it; it keeps (1 + ln h)^64^64 and its like from filling the memory.
const MOST_LOGS: u32 = 4096;

/// A sum of terms plus O(h^order): terms sorted by dominance, no two of equal powers, none cancelled, all of them below
/// the order, all numbers finite but the order, which may be plus infinity.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct Expansion {
    terms: Vec<SeriesTerm>,
    order: f64,
}

impl Expansion {
    pub fn new(mut terms: Vec<SeriesTerm>, order: f64) -> Result<Self, Unknown> {
        let finite = |term: &SeriesTerm| {
            term.coefficient.is_finite()
                && term.error.is_finite()
                && term.exponent.is_finite()
                && term.logs <= MOST_LOGS
        };
        if order.is_nan() || order == f64::NEG_INFINITY || !terms.iter().all(finite) {
            return Err(Unknown::Overflow);
        }
        let mut order = whole_if_close(order);
        terms.retain(|term| below(term.exponent, order));
        merge_exponents(&mut terms);
        let mut sums: Vec<SeriesTerm> = Vec::with_capacity(terms.len());
        for term in terms {
            match sums.last_mut() {
                Some(last) if last.exponent == term.exponent && last.logs == term.logs => *last = last.plus(&term),
                _ => sums.push(term),
            }
        }
        if !sums.iter().all(finite) {
            return Err(Unknown::Overflow);
        }
        sums.retain(|term| !term.is_cancelled());
        if let Some(beyond) = sums.get(MOST_TERMS) {
            order = beyond.exponent;
            sums.retain(|term| below(term.exponent, order));
        }
        Ok(Self { terms: sums, order })
    }

    pub fn constant(value: f64) -> Result<Self, Unknown> {
        if value.is_finite() {
            Self::new(vec![SeriesTerm::new(value, 0.0, 0)], f64::INFINITY)
        } else {
            Err(Unknown::Undefined)
        }
    }

    /// Nothing but O(h^order).
    pub fn remainder(order: f64) -> Result<Self, Unknown> {
        Self::new(Vec::new(), order)
    }

    /// A positive power of what has no known term: zero if exact.
    pub fn remainder_of_power(&self, exponent: f64) -> Result<Self, Unknown> {
        let order = self.order * exponent;
        Self::remainder(if self.order.is_finite() {
            order.min(ORDER_OF_FLAT)
        } else {
            order
        })
    }

    pub fn terms(&self) -> &[SeriesTerm] {
        &self.terms
    }

    pub fn order(&self) -> f64 {
        self.order
    }

    /// The largest term.
    pub fn leading(&self) -> Option<&SeriesTerm> {
        self.terms.first()
    }

    /// Zero without remainder.
    pub fn is_zero(&self) -> bool {
        self.terms.is_empty() && self.order == f64::INFINITY
    }

    /// The exponent of the largest term, or of the remainder.
    pub fn valuation(&self) -> f64 {
        self.leading().map_or(self.order, |term| term.exponent)
    }

    /// The number, if it is one without remainder.
    pub fn exact_number(&self) -> Option<f64> {
        match self.terms.as_slice() {
            _ if self.order.is_finite() => None,
            [] => Some(0.0),
            [term] if term.exponent == 0.0 && term.logs == 0 => Some(term.coefficient),
            _ => None,
        }
    }

    pub fn coefficient(&self, exponent: f64) -> Option<f64> {
        let exponent = whole_if_close(exponent);
        let here = |term: &&SeriesTerm| term.logs == 0 && (term.exponent - exponent).abs() < SAME_EXPONENT;
        below(exponent, self.order).then(|| self.terms.iter().find(here).map_or(0.0, |term| term.coefficient))
    }

    pub fn add(&self, other: &Self) -> Result<Self, Unknown> {
        let terms = self.terms.iter().chain(&other.terms).copied().collect();
        Self::new(terms, self.order.min(other.order))
    }

    pub fn sub(&self, other: &Self) -> Result<Self, Unknown> {
        self.add(&other.negated())
    }

    pub fn negated(&self) -> Self {
        Self {
            terms: self.terms.iter().map(SeriesTerm::negated).collect(),
            order: self.order,
        }
    }

    pub fn mul(&self, other: &Self) -> Result<Self, Unknown> {
        self.mul_below(other, f64::INFINITY)
    }

    /// The product up to O(h^order) at most.
    pub fn mul_below(&self, other: &Self, order: f64) -> Result<Self, Unknown> {
        let order = order
            .min(self.order + other.valuation())
            .min(other.order + self.valuation());
        let mut terms = Vec::new();
        for one in &self.terms {
            let products = other.terms.iter().map(|two| one.times(two));
            terms.extend(products.take_while(|term| below(term.exponent, order)));
        }
        Self::new(terms, order)
    }

    /// The product with one term.
    pub fn scaled(&self, factor: &SeriesTerm) -> Result<Self, Unknown> {
        let terms = self.terms.iter().map(|term| term.times(factor)).collect();
        Self::new(terms, self.order + factor.exponent)
    }

    pub fn with_order_at_most(&self, order: f64) -> Result<Self, Unknown> {
        Self::new(self.terms.clone(), self.order.min(order))
    }
}

/// Gives exponents that agree one value, and sorts.
fn merge_exponents(terms: &mut [SeriesTerm]) {
    for term in terms.iter_mut() {
        term.exponent = whole_if_close(term.exponent);
    }
    terms.sort_by(SeriesTerm::dominance);
    let mut exponent = f64::NEG_INFINITY;
    for term in terms.iter_mut() {
        if term.exponent - exponent < SAME_EXPONENT {
            term.exponent = exponent;
        } else {
            exponent = term.exponent;
        }
    }
    terms.sort_by(SeriesTerm::dominance);
}

fn below(exponent: f64, order: f64) -> bool {
    exponent < order - SAME_EXPONENT
}

/// The nearest whole number if it is close, and never -0.
fn whole_if_close(exponent: f64) -> f64 {
    let whole = exponent.round();
    if (exponent - whole).abs() < SAME_EXPONENT {
        whole + 0.0
    } else {
        exponent
    }
}

impl fmt::Display for Expansion {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        if self.is_zero() {
            return f.write_str("0");
        }
        for (place, term) in self.terms.iter().enumerate() {
            match (place, term.coefficient < 0.0) {
                (0, _) => write!(f, "{term}")?,
                (_, true) => write!(f, " - {}", term.negated())?,
                (_, false) => write!(f, " + {term}")?,
            }
        }
        let plus = if self.terms.is_empty() { "" } else { " + " };
        if self.order.is_finite() {
            let power = SeriesTerm::new(1.0, self.order, 0);
            write!(f, "{plus}O({power})")?;
        }
        Ok(())
    }
}
