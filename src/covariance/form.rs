//! Linear forms over sources: what every process and every margin is, in one normal form.
//!
//! A form is a deterministic part and a sum of coefficient × operator × source, an operator being derivative × delay ×
//! linear systems. It is kept sorted and merged, so two ways of writing one margin are one value. Coefficients are carried to twice the working precision and rounded once
//! when they are read, so the order in which they were added up leaves no trace in the last digit.

use super::response::{Chain, System};
use std::cmp::Ordering;
use std::fmt;

/// One independent, zero-mean, stationary Gaussian process, as an index into the sources of a model.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct SourceId(pub u32);

/// A linear, time-invariant operation in normal form: the n-th mean-square derivative, delayed, of what comes out of
/// linear systems. All of these commute.
#[derive(Clone, Debug, PartialEq)]
pub struct Operator {
    /// How often the source is differentiated.
    pub derivatives: u32,
    /// The delay in s: the source is taken at `t - delay`.
    pub delay: f64,
    /// The systems that the source passes through.
    pub systems: Chain,
}

impl Operator {
    /// The source itself.
    pub const IDENTITY: Self = Self {
        derivatives: 0,
        delay: 0.0,
        systems: Chain::NONE,
    };

    fn order(&self, other: &Self) -> Ordering {
        self.derivatives
            .cmp(&other.derivatives)
            .then(self.delay.total_cmp(&other.delay))
            .then_with(|| self.systems.order(&other.systems))
    }

    /// With a delay and a number of derivatives more.
    fn moved(&self, derivatives: u32, delay: f64) -> Self {
        Self {
            derivatives: self.derivatives.saturating_add(derivatives),
            delay: if delay == 0.0 {
                self.delay
            } else {
                decimal(self.delay + delay)
            },
            systems: self.systems.clone(),
        }
    }
}

/// The unevaluated sum of two doubles, `high` being the rounded value: about 32 digits.
///
/// The error-free transformations are those of Dekker (1971), "A floating-point technique for extending the available
/// precision", and Knuth, The Art of Computer Programming, vol. 2, section 4.2.2.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Exact {
    high: f64,
    low: f64,
}

impl Exact {
    /// A double as it is.
    pub fn new(value: f64) -> Self {
        Self { high: value, low: 0.0 }
    }

    /// The product of two doubles, exactly (unless it leaves the range of doubles).
    pub fn product(a: f64, b: f64) -> Self {
        let high = a * b;
        // Beyond the range of doubles the low part would be infinity minus infinity.
        let low = if high.is_finite() {
            f64::mul_add(a, b, -high)
        } else {
            0.0
        };
        Self { high, low }
    }

    /// The sum.
    #[must_use]
    pub fn plus(self, other: Self) -> Self {
        let high = self.high + other.high;
        let part = high - self.high;
        let rest = (self.high - (high - part)) + (other.high - part);
        Self::renormalised(high, rest + (self.low + other.low))
    }

    /// The product with a double.
    #[must_use]
    pub fn times(self, factor: f64) -> Self {
        let product = Self::product(self.high, factor);
        Self::renormalised(product.high, f64::mul_add(self.low, factor, product.low))
    }

    /// Rounded to the nearest double.
    pub fn value(self) -> f64 {
        self.high
    }

    fn renormalised(high: f64, low: f64) -> Self {
        if !(high.is_finite() && low.is_finite()) {
            return Self::new(high);
        }
        let sum = high + low;
        Self {
            high: sum,
            low: low - (sum - high),
        }
    }
}

/// One term of a form.
#[derive(Clone, Debug, PartialEq)]
pub struct Term {
    /// What it is made from.
    pub source: SourceId,
    /// What is done to the source.
    pub operator: Operator,
    coefficient: Exact,
}

impl Term {
    /// The coefficient, rounded once.
    pub fn coefficient(&self) -> f64 {
        self.coefficient.value()
    }

    fn order(&self, other: &Self) -> Ordering {
        self.source
            .cmp(&other.source)
            .then_with(|| self.operator.order(&other.operator))
    }
}

/// `deterministic + sum of coefficient * operator * source`, sorted by source and operator, no two terms alike.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct LinearForm {
    deterministic: Exact,
    terms: Vec<Term>,
}

impl LinearForm {
    /// A number: nothing varies.
    pub fn constant(value: f64) -> Self {
        Self {
            deterministic: Exact::new(value),
            terms: Vec::new(),
        }
    }

    /// A source with a mean.
    pub fn source(mean: f64, source: SourceId) -> Self {
        Self {
            deterministic: Exact::new(mean),
            terms: vec![Term {
                source,
                operator: Operator::IDENTITY,
                coefficient: Exact::new(1.0),
            }],
        }
    }

    /// The sum of forms, each times a factor; one sort however many there are.
    pub fn combination<'a>(parts: impl IntoIterator<Item = (f64, &'a LinearForm)>) -> Self {
        let mut deterministic = Exact::default();
        let mut terms = Vec::new();
        for (factor, form) in parts {
            deterministic = deterministic.plus(form.deterministic.times(factor));
            terms.extend(form.terms.iter().map(|term| Term {
                coefficient: term.coefficient.times(factor),
                ..term.clone()
            }));
        }
        Self {
            deterministic,
            terms: merged(terms),
        }
    }

    /// The mean-square derivative: the deterministic part, a constant, goes.
    #[must_use]
    pub fn derivative(&self) -> Self {
        self.mapped(Exact::default(), |term| Term {
            operator: term.operator.moved(1, 0.0),
            ..term.clone()
        })
    }

    /// The form `by` seconds earlier.
    #[must_use]
    pub fn delayed(&self, by: f64) -> Self {
        self.mapped(self.deterministic, |term| Term {
            operator: term.operator.moved(0, by),
            ..term.clone()
        })
    }

    /// What comes out of a system, times a factor, when the form goes in; the mean passes through at rest. `None` where the
    /// form has a mean and the system says nothing about rest.
    pub fn through(&self, system: &System, factor: f64) -> Option<Self> {
        let gain = match system.static_gain() {
            Some(gain) => gain,
            None if self.mean() == 0.0 => 0.0,
            None => return None,
        };
        Some(self.mapped(self.deterministic.times(gain).times(factor), |term| Term {
            source: term.source,
            operator: Operator {
                systems: term.operator.systems.with(system),
                ..term.operator
            },
            coefficient: term.coefficient.times(factor),
        }))
    }

    fn mapped(&self, deterministic: Exact, change: impl Fn(&Term) -> Term) -> Self {
        Self {
            deterministic,
            terms: merged(self.terms.iter().map(change).collect()),
        }
    }

    /// The deterministic part: the mean of the form, since sources have none.
    pub fn mean(&self) -> f64 {
        self.deterministic.value()
    }

    /// The terms in their order.
    pub fn terms(&self) -> &[Term] {
        &self.terms
    }

    /// The terms of each source, together.
    pub fn by_source(&self) -> impl Iterator<Item = (SourceId, &[Term])> {
        self.terms
            .chunk_by(|a, b| a.source == b.source)
            .filter_map(|terms| Some((terms.first()?.source, terms)))
    }

    /// Whether nothing in it varies.
    pub fn is_constant(&self) -> bool {
        self.terms.is_empty()
    }

    /// The form as text, with the names of the sources: `4 + 0.8 pull - 0.2 pull(t - 0.4)`, in SI units.
    pub fn show<'a>(&'a self, name: &'a dyn Fn(SourceId) -> String) -> impl fmt::Display + 'a {
        Shown { form: self, name }
    }
}

/// The double nearest to the value's fifteen-digit decimal, so that 0.1 + 0.2 is the delay 0.3; a negative zero is zero.
fn decimal(value: f64) -> f64 {
    format!("{value:.14e}").parse().unwrap_or(value) + 0.0
}

/// Sorts, adds up what is alike, and drops what has cancelled: a sum within a few roundings of its parts is zero.
fn merged(mut terms: Vec<Term>) -> Vec<Term> {
    if terms.is_sorted_by(|a, b| a.order(b) == Ordering::Less) {
        return terms;
    }
    terms.sort_by(Term::order);
    terms
        .chunk_by(|a, b| a.order(b) == Ordering::Equal)
        .filter_map(|alike| {
            let first = alike.first()?;
            let zero = (Exact::default(), 0.0);
            let (coefficient, size) = alike.iter().fold(zero, |(sum, size), term| {
                (sum.plus(term.coefficient), size + term.coefficient().abs())
            });
            let cancelled = alike.len() > 1 && coefficient.value().abs() <= 4.0 * f64::EPSILON * size;
            (!cancelled).then(|| Term {
                coefficient,
                ..first.clone()
            })
        })
        .collect()
}

struct Shown<'a> {
    form: &'a LinearForm,
    name: &'a dyn Fn(SourceId) -> String,
}

impl fmt::Display for Shown<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}", self.form.mean())?;
        for term in &self.form.terms {
            let coefficient = term.coefficient();
            let sign = if coefficient < 0.0 { '-' } else { '+' };
            let systems = term.operator.systems.systems();
            write!(f, " {sign} {} ", coefficient.abs())?;
            systems.iter().try_for_each(|_| f.write_str("respond("))?;
            write!(f, "{}", (self.name)(term.source))?;
            write!(f, "{}", "'".repeat(term.operator.derivatives as usize))?;
            let delay = term.operator.delay;
            match delay.total_cmp(&0.0) {
                Ordering::Greater => write!(f, "(t - {delay})")?,
                Ordering::Less => write!(f, "(t + {})", -delay)?,
                Ordering::Equal => {}
            }
            systems
                .iter()
                .try_for_each(|system| write!(f, ", through: {system})"))?;
        }
        Ok(())
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::covariance::response::{Average, Oscillator};

    fn x() -> LinearForm {
        LinearForm::source(2.0, SourceId(0))
    }

    fn y() -> LinearForm {
        LinearForm::source(3.0, SourceId(1))
    }

    fn show(form: &LinearForm) -> String {
        let name = |id: SourceId| if id.0 == 0 { "x".to_string() } else { "y".to_string() };
        form.show(&name).to_string()
    }

    #[test]
    fn two_ways_of_writing_are_one_value() {
        let (x, y) = (x(), y());
        let half_sum = LinearForm::combination([(1.0, &x), (1.0, &y)]);
        let one = LinearForm::combination([(0.7, &half_sum)]);
        let other = LinearForm::combination([(0.7, &y), (0.7, &x)]);
        assert_eq!(one, other);
        let inner = LinearForm::combination([(0.1, &x), (0.7, &x)]);
        let one = LinearForm::combination([(1.0, &inner), (0.3, &x)]);
        let inner = LinearForm::combination([(0.7, &x), (0.3, &x)]);
        let other = LinearForm::combination([(0.1, &x), (1.0, &inner)]);
        assert_eq!(one, other);
    }

    #[test]
    fn what_cancels_is_gone() {
        let thrice = LinearForm::combination([(3.0, &LinearForm::combination([(0.1, &x())]))]);
        assert!(LinearForm::combination([(1.0, &thrice), (-0.3, &x())]).is_constant());
    }

    #[test]
    fn derivatives_and_delays_commute_and_print() {
        let one = x().derivative().delayed(0.5);
        let other = x().delayed(0.5).derivative();
        assert_eq!(one, other);
        let form = LinearForm::combination([(1.0, &x()), (-0.2, &one), (4.0, &y().delayed(-1.0))]);
        assert_eq!(show(&form), "14 + 1 x - 0.2 x'(t - 0.5) + 4 y(t + 1)");
    }

    #[test]
    fn a_delay_there_and_back_is_none() {
        assert_eq!(x().delayed(0.1).delayed(0.2), x().delayed(0.3));
        assert_eq!(x().delayed(0.4).delayed(-0.4), x());
    }

    #[test]
    fn products_beyond_the_doubles_stay_infinite() {
        let huge = LinearForm::combination([(1e308, &LinearForm::constant(1e308))]);
        assert_eq!(huge.mean(), f64::INFINITY);
    }
    #[test]
    fn systems_derivatives_and_delays_are_in_no_order() {
        let deck = System::Oscillator(Oscillator::new(9.0, 0.05).unwrap());
        let filter = System::Average(Average::new(3.0).unwrap());
        let through = |form: &LinearForm, system: &System, factor: f64| form.through(system, factor).unwrap();
        let one = through(&through(&x().derivative(), &filter, 1.0).delayed(0.5), &deck, 2.0).derivative();
        let other = through(&through(&x(), &deck, 2.0).derivative().derivative(), &filter, 1.0).delayed(0.5);
        assert_eq!(one, other);
        assert_eq!(
            show(&one),
            "0 + 2 respond(respond(x''(t - 0.5), through: oscillator(frequency: 9 rad/s, damping: 0.05, gain: 1)), \
             through: average(over: 3 s))"
        );
        assert_eq!(through(&x(), &deck, 2.0).mean(), 4.0);
        let gone = LinearForm::combination([(1.0, &through(&x(), &deck, 2.0)), (-2.0, &through(&x(), &deck, 1.0))]);
        assert!(gone.is_constant());
    }
}
