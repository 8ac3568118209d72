//! The two ends of a written density, frequency 0 and infinity: as series, which say how it falls and are integrated
//! analytically.

use crate::expression::{Series, SeriesTerm, Tape};

/// The order of a series from which on its function is flatter than any power.
const FLAT: f64 = 1e5;

/// How far a series may differ from the expression where it takes its place, relatively: more where the expression is so
/// long that its rounding is.
const AGREEMENT: f64 = 1e-12;

/// One end, over h: omega itself at frequency 0, 1/omega at infinity.
#[derive(Clone, Debug)]
pub(super) struct End {
    /// The series up to the order known; empty where the density is flatter than any power of h.
    terms: Vec<SeriesTerm>,
    /// The power of h it is known to fall with at least, where no term says so.
    order: f64,
    /// The series is in powers of h times this.
    scale: f64,
    /// The h up to which the end reaches; 0 until it has been found.
    pub reach: f64,
    /// How far the series may differ from the expression at the reach, relatively.
    pub agreement: f64,
}

impl End {
    /// From the expression and its arguments; else why there is no series. `at_infinity` says which end.
    /// The series is in powers of h over a unit: of `unit` at frequency 0, of its reciprocal at infinity.
    pub fn new(tape: &Tape, arguments: &[f64], at_infinity: bool, unit: f64) -> Result<Self, String> {
        let arguments: Vec<Series> = arguments.iter().map(|value| Series::constant(*value)).collect();
        let power = if at_infinity { -1.0 } else { 1.0 };
        let omega = Series::from_terms(vec![SeriesTerm::new(unit, power, 0)], f64::INFINITY);
        let series = tape.evaluate(&omega, &arguments);
        match series.reason() {
            Some(reason) => Err(reason.to_string()),
            None => Ok(Self {
                terms: series.terms().to_vec(),
                order: series.order(),
                scale: if at_infinity { unit } else { unit.recip() },
                reach: 0.0,
                agreement: AGREEMENT.max(f64::EPSILON * tape.size() as f64),
            }),
        }
    }

    /// Whether the density is flatter than any power of h.
    pub fn is_flat(&self) -> bool {
        self.terms.is_empty() && self.order >= FLAT
    }

    /// The power of h of the largest term, or what it is at least; infinite where the density is flat.
    pub fn exponent(&self) -> f64 {
        match self.terms.first() {
            Some(term) => term.exponent,
            None if self.is_flat() => f64::INFINITY,
            None => self.order,
        }
    }

    /// Whether [`End::exponent`] is that of a term.
    pub fn is_known(&self) -> bool {
        !self.terms.is_empty() || self.is_flat()
    }

    /// The sum of the series.
    pub fn value(&self, h: f64) -> f64 {
        if h == 0.0 {
            return match self.terms.first() {
                Some(term) if term.exponent == 0.0 && term.logs == 0 => term.coefficient,
                Some(term) if term.exponent <= 0.0 => f64::INFINITY,
                _ => 0.0,
            };
        }
        let x = h * self.scale;
        let ln = x.ln();
        let value = |term: &SeriesTerm| {
            let power = if term.exponent.fract() == 0.0 {
                x.powi(term.exponent as i32)
            } else {
                x.powf(term.exponent)
            };
            term.coefficient * power * ln.powi(term.logs as i32)
        };
        // From the smallest to the largest.
        self.terms.iter().rev().map(value).sum()
    }

    /// Whether the series says what the expression says.
    pub fn agrees(&self, h: f64, density: f64) -> bool {
        (self.value(h) - density).abs() <= self.agreement * density.abs()
    }

    /// The integral of h^power times the density over h from 0 to where the end reaches: each term in closed form. The
    /// whole exponents must be above -1.
    pub fn integral(&self, power: f64) -> f64 {
        let reach = self.reach * self.scale;
        let ln = reach.ln();
        let term = |term: &SeriesTerm| {
            let s = term.exponent + power + 1.0;
            let whole = reach.powf(s);
            // By parts: the integral of h^(s-1) (ln h)^k is I_k = h^s (ln h)^k / s - k/s I_(k-1).
            let first = whole / s;
            let sum = (1..=term.logs).fold(first, |before, k| {
                (whole * ln.powi(k as i32) - f64::from(k) * before) / s
            });
            term.coefficient * sum
        };
        self.terms.iter().rev().map(term).sum::<f64>() * self.scale.powf(-(power + 1.0))
    }
}
