//! Moments of linear forms: what the theory of crossings needs to know of a process or a margin.
//!
//! A form is the sum of its parts over each source, which are independent. The part over one source has the one-sided
//! density |A(omega)|² G(omega), A being the sum of a_i (i omega)^n_i exp(-i omega d_i) over its terms, and the
//! autocovariance
//!
//! ```text
//! C(tau) = sum over i, j of a_i a_j (-1)^n_i K^(n_i + n_j)(tau + d_i - d_j)
//! ```
//!
//! (Cramér and Leadbetter 1967, Stationary and Related Stochastic Processes, sec. 7.6 and 9.3). Even moments are
//! derivatives of C at lag 0; lambda_1 has no such form and is integrated where it is not known. What passes through systems
//! is looked at over frequency (`covariance::frequency`).

use super::coherence::Coherences;
use super::existence;
use super::first_moment;
use super::form::{Exact, LinearForm, SourceId, Term};
use super::frequency::{self, coherent, coherent::Member};
use super::kernel::{self, Kernel, Smoothness, SpectralMoments};
use super::source::{Law, Source};
use nalgebra::{DMatrix, DVector};
use std::cell::{OnceCell, RefCell};
use std::collections::{BTreeMap, HashMap};
use std::rc::Rc;

/// The derivatives of kernels that are ever asked for: two terms, each differentiated four times, and the fourth of
/// their covariance.
const MOST_DERIVATIVES: usize = 12;

/// A spectral moment of a form.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Moment {
    /// Known, within an absolute error.
    Finite {
        /// In the square of the form's unit times (rad/s)^n.
        value: f64,
        /// In the same unit.
        error: f64,
    },
    /// Infinite: the spectrum falls too slowly.
    Infinite,
    /// Finite, but not to be had to six digits.
    Unreached,
    /// Not to be told from what the model says, such as beyond a table that refuses to be continued.
    Unknown,
}

impl Moment {
    const ZERO: Self = Self::Finite { value: 0.0, error: 0.0 };

    /// The number, infinity included; `None` where it is not known.
    pub fn value(&self) -> Option<f64> {
        match self {
            Self::Finite { value, .. } => Some(*value),
            Self::Infinite => Some(f64::INFINITY),
            Self::Unreached | Self::Unknown => None,
        }
    }

    fn finite(&self) -> Option<f64> {
        self.value().filter(|value| value.is_finite())
    }

    /// The sum; an infinite part makes it infinite whatever the others are.
    pub(super) fn plus(self, other: Self) -> Self {
        match (self, other) {
            (Self::Infinite, _) | (_, Self::Infinite) => Self::Infinite,
            (Self::Unreached, _) | (_, Self::Unreached) => Self::Unreached,
            (Self::Unknown, _) | (_, Self::Unknown) => Self::Unknown,
            (Self::Finite { value: a, error: e }, Self::Finite { value: b, error: f }) => Self::Finite {
                value: a + b,
                error: e + f,
            },
        }
    }

    pub(super) fn times(self, factor: f64) -> Self {
        match self {
            Self::Finite { value, error } => Self::Finite {
                value: value * factor,
                error: error * factor.abs(),
            },
            other => other,
        }
    }
}

impl From<&kernel::Moment> for Moment {
    fn from(moment: &kernel::Moment) -> Self {
        match moment {
            kernel::Moment::Finite { value, error } => Self::Finite {
                value: *value,
                error: *error,
            },
            kernel::Moment::Infinite => Self::Infinite,
            kernel::Moment::Unreached { .. } => Self::Unreached,
            kernel::Moment::Unknown(_) => Self::Unknown,
        }
    }
}

/// The moments of a form.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct FormMoments {
    /// lambda_0, lambda_1, lambda_2, lambda_4 of the one-sided density over omega in rad/s.
    pub lambda: [Moment; 4],
}

impl FormMoments {
    /// `sqrt(lambda_0)`, in the form's unit.
    pub fn standard_deviation(&self) -> f64 {
        self.lambda[0]
            .value()
            .map_or(f64::NAN, |variance| variance.max(0.0).sqrt())
    }

    /// `sqrt(lambda_2)`, in the form's unit per second; infinite where the form has no derivative, `None` where it could
    /// not be computed.
    pub fn derivative_standard_deviation(&self) -> Option<f64> {
        self.lambda[2].value().map(|variance| variance.max(0.0).sqrt())
    }

    /// `sqrt(1 - lambda_1²/(lambda_0 lambda_2))` (Vanmarcke 1972, "Properties of spectral moments with applications to
    /// random vibration", J. Eng. Mech. Div. 98): 0 for a single frequency, near 1 for a broad band. `None` where a
    /// moment is infinite or not known.
    pub fn bandwidth(&self) -> Option<f64> {
        let [zeroth, first, second, _] = self.lambda.map(|moment| moment.finite());
        let ratio = first?.powi(2) / (zeroth? * second?);
        ratio.is_finite().then(|| (1.0 - ratio).max(0.0).sqrt())
    }

    /// `lambda_2 / sqrt(lambda_0 lambda_4)`, the rate of upcrossings of the mean over the rate of maxima (Cartwright and
    /// Longuet-Higgins 1956). It is at most 1, and rounding does not take it beyond. `None` where a moment is infinite or
    /// not known.
    pub fn irregularity(&self) -> Option<f64> {
        let [zeroth, _, second, fourth] = self.lambda.map(|moment| moment.finite());
        let ratio = second? / (zeroth?.sqrt() * fourth?.sqrt());
        ratio.is_finite().then_some(ratio.min(1.0))
    }
}

/// The derivatives of kernels by order, for each source and lag (as the bits of a double).
type ByLag = HashMap<(SourceId, u64), Rc<Vec<Moment>>>;

/// The sources of a model with what has been found out about each: every kernel is asked once.
pub struct MomentTable<'s> {
    sources: &'s [Source],
    coherences: Option<&'s Coherences>,
    of_sources: Vec<OnceCell<SpectralMoments>>,
    at_zero: Vec<OnceCell<Vec<Moment>>>,
    at_lags: RefCell<ByLag>,
    of_forms: RefCell<HashMap<*const LinearForm, FormMoments>>,
}

impl<'s> MomentTable<'s> {
    /// Nothing found out yet.
    pub fn new(sources: &'s [Source]) -> Self {
        kernel::transform::begin();
        Self {
            sources,
            coherences: None,
            of_sources: vec![OnceCell::new(); sources.len()],
            at_zero: vec![OnceCell::new(); sources.len()],
            at_lags: RefCell::new(HashMap::new()),
            of_forms: RefCell::new(HashMap::new()),
        }
    }

    /// Over sources of which some are coherent.
    #[must_use]
    pub fn coherent(mut self, coherences: &'s Coherences) -> Self {
        self.coherences = Some(coherences).filter(|coherences| !coherences.is_empty());
        self
    }

    /// The coherences of the sources, where there are any.
    pub fn coherences(&self) -> Option<&'s Coherences> {
        self.coherences
    }

    /// The sources.
    pub fn sources(&self) -> &'s [Source] {
        self.sources
    }

    /// The moments of a form that lives as long as the sources: a margin and its limit states share one.
    pub fn moments_of(&self, form: &'s LinearForm) -> FormMoments {
        let key = std::ptr::from_ref(form);
        if let Some(known) = self.of_forms.borrow().get(&key) {
            return *known;
        }
        let moments = self.moments(form);
        self.of_forms.borrow_mut().insert(key, moments);
        moments
    }

    /// The moments of a form over these sources.
    pub fn moments(&self, form: &LinearForm) -> FormMoments {
        let mut sums = [Sum::default(); 4];
        let mut add = |parts: [Moment; 4]| sums.iter_mut().zip(parts).for_each(|(sum, part)| sum.add(part));
        let mut groups: BTreeMap<SourceId, Vec<Member<'_>>> = BTreeMap::new();
        for (id, terms) in form.by_source() {
            match self.coherences.and_then(|coherences| coherences.group(id)) {
                Some(group) => groups.entry(group).or_default().push(self.member(id, terms)),
                None => add(self.part(id, terms)),
            }
        }
        for members in groups.values() {
            match (members.as_slice(), self.coherences) {
                (several @ [_, _, ..], Some(coherences)) => {
                    add(coherent::moments(several, coherences, |one| {
                        self.part(one.id, one.terms)
                    }));
                }
                (alone, _) => alone.iter().for_each(|one| add(self.part(one.id, one.terms))),
            }
        }
        FormMoments {
            lambda: sums.map(Sum::moment),
        }
    }

    fn member<'t>(&self, id: SourceId, terms: &'t [Term]) -> Member<'t>
    where
        's: 't,
    {
        let source = &self.sources[id.0 as usize];
        Member { id, source, terms }
    }

    /// The covariance of two forms, `Cov[one(t), other(t + lag)]`, in the product of their units: the sum over the sources
    /// they share, and over those that are coherent. The lag is in s, of either sign.
    pub fn covariance(&self, one: &LinearForm, other: &LinearForm, lag: f64) -> Moment {
        let mut sum = Sum::default();
        sum.add(self.covariance_of_coherent(one, other, lag));
        let mut others = other.by_source().peekable();
        for (source, terms) in one.by_source() {
            // Both walks rise through the sources.
            while others.next_if(|(earlier, _)| *earlier < source).is_some() {}
            let Some((_, shared)) = others.next_if(|(same, _)| *same == source) else {
                continue;
            };
            if self.by_frequency(source, terms) || self.by_frequency(source, shared) {
                sum.add(frequency::covariance(
                    &self.sources[source.0 as usize],
                    terms,
                    shared,
                    lag,
                ));
                continue;
            }
            for a in terms {
                for b in shared {
                    let order = (a.operator.derivatives + b.operator.derivatives) as usize;
                    let parity = if a.operator.derivatives % 2 == 1 { -1.0 } else { 1.0 };
                    let at = lag + a.operator.delay - b.operator.delay;
                    let weight = parity * a.coefficient() * b.coefficient();
                    sum.add(self.derivative(source, order, at).times(weight));
                }
            }
        }
        sum.moment()
    }

    /// What different sources add to a covariance.
    fn covariance_of_coherent(&self, one: &LinearForm, other: &LinearForm, lag: f64) -> Moment {
        let mut sum = Sum::default();
        let Some(coherences) = self.coherences else {
            return sum.moment();
        };
        let in_groups = |(id, _): &(SourceId, &[Term])| coherences.group(*id).is_some();
        for (a, terms) in one.by_source().filter(in_groups) {
            for (b, others) in other.by_source().filter(in_groups) {
                if let Some(coherence) = coherences.between(a, b) {
                    let variance = |id, terms| self.part(id, terms)[0].finite().unwrap_or(0.0);
                    let scale = (variance(a, terms) * variance(b, others)).sqrt();
                    let (one, other) = (self.member(a, terms), self.member(b, others));
                    sum.add(coherent::covariance(&one, &other, coherence, lag, scale));
                }
            }
        }
        sum.moment()
    }

    /// Whether the terms are left to integrals over frequency: what goes through systems, or has no kernel.
    fn by_frequency(&self, source: SourceId, terms: &[Term]) -> bool {
        let through_systems = terms.iter().any(|term| !term.operator.systems.is_empty());
        through_systems || self.kernel(source).is_none()
    }

    fn kernel(&self, source: SourceId) -> Option<&'s Kernel> {
        self.sources[source.0 as usize].kernel()
    }

    /// The moments of a source itself.
    fn moments_of_source(&self, source: SourceId) -> &SpectralMoments {
        self.of_sources[source.0 as usize].get_or_init(|| match &self.sources[source.0 as usize].law {
            Law::Kernel(kernel) => kernel.moments(),
            Law::Spectrum(spectrum) => spectrum.moments(),
        })
    }

    /// The moments of the terms over one source.
    fn part(&self, source: SourceId, terms: &[Term]) -> [Moment; 4] {
        if let [term] = terms
            && let Law::Spectrum(spectrum) = &self.sources[source.0 as usize].law
            && term.operator.derivatives > 0
            && term.operator.systems.is_empty()
        {
            // Each derivative weighs the density with omega².
            let square = term.coefficient() * term.coefficient();
            let orders = [0, 1, 2, 4].map(|order| order + 2 * term.operator.derivatives);
            return orders.map(|order| Moment::from(&spectrum.moment(order)).times(square));
        }
        if let [term] = terms
            && term.operator.derivatives == 0
            && term.operator.systems.is_empty()
        {
            let moments = self.moments_of_source(source);
            let square = term.coefficient() * term.coefficient();
            let source = &self.sources[source.0 as usize];
            // Infinite although the derivative exists: beyond the range of doubles.
            let in_range = |moment: &kernel::Moment, derivatives: u32| match Moment::from(moment).times(square) {
                Moment::Infinite if existence::has_derivative(source, terms, derivatives) => Moment::Unreached,
                moment => moment,
            };
            let [zeroth, first, second, fourth] = &moments.lambda;
            return [
                in_range(zeroth, 0),
                in_range(first, 1),
                in_range(second, 1),
                in_range(fourth, 2),
            ];
        }
        let kernel = match self.kernel(source) {
            Some(kernel) if !self.by_frequency(source, terms) => kernel,
            _ => return frequency::moments(&self.sources[source.0 as usize], terms),
        };
        let own_first = || Moment::from(&self.moments_of_source(source).lambda[1]);
        let [variance, curvature, fourth] = [0, 2, 4].map(|n| self.even(source, terms, n));
        let source = &self.sources[source.0 as usize];
        let first = if existence::tail(source, terms).allows(1) {
            first_moment::of_terms(kernel, terms, own_first(), variance, curvature)
        } else {
            Moment::Infinite
        };
        [variance, first, curvature, fourth]
    }

    /// lambda_n for an even n, (-1)^(n/2) times the n-th derivative of the covariance at lag 0: a quadratic form in the
    /// coefficients, its matrix made of derivatives of the kernel at the differences of delays.
    fn even(&self, source: SourceId, terms: &[Term], n: usize) -> Moment {
        let sign = if n % 4 == 2 { -1.0 } else { 1.0 };
        let mut spoilt = Moment::ZERO;
        let matrix = DMatrix::from_fn(terms.len(), terms.len(), |row, column| {
            let (one, other) = (&terms[row].operator, &terms[column].operator);
            let parity = if one.derivatives % 2 == 1 { -sign } else { sign };
            let order = (one.derivatives + other.derivatives) as usize + n;
            match self.derivative(source, order, one.delay - other.delay) {
                Moment::Finite { value, .. } => parity * value,
                not_finite => {
                    spoilt = spoilt.plus(not_finite);
                    0.0
                }
            }
        });
        if spoilt != Moment::ZERO {
            return spoilt;
        }
        let coefficients = DVector::from_iterator(terms.len(), terms.iter().map(Term::coefficient));
        let value = coefficients.dot(&(&matrix * &coefficients));
        let sizes = coefficients.abs();
        let size = sizes.dot(&(matrix.abs() * &sizes));
        if n == 0
            && value.abs() < 1e-3 * size
            && let Some(variance) = self.variance_by_differences(source, terms)
        {
            return variance;
        }
        if !value.is_finite() {
            return Moment::Unreached;
        }
        Moment::Finite {
            value,
            error: size * (CLOSED_FORM + f64::EPSILON * terms.len() as f64),
        }
    }

    /// The variance of terms that nearly cancel, such as `X(t) - X(t - d)` for a small d, from what the kernel loses
    /// over each lag: sum a_i a_j K(d_ij) = (sum a)² K(0) - 2 sum over i < j of a_i a_j (K(0) - K(d_ij)). `None` where a
    /// term is differentiated.
    fn variance_by_differences(&self, source: SourceId, terms: &[Term]) -> Option<Moment> {
        let kernel = self.kernel(source)?;
        if terms.iter().any(|term| term.operator.derivatives > 0) {
            return None;
        }
        let total = terms
            .iter()
            .fold(Exact::default(), |sum, term| sum.plus(Exact::new(term.coefficient())))
            .value();
        let mut sum = Sum::default();
        sum.add(Moment::from(&kernel::Moment::Finite {
            value: total * total * kernel.value(0.0).ok()?,
            error: 0.0,
        }));
        for (index, one) in terms.iter().enumerate() {
            for other in &terms[index + 1..] {
                let lost = kernel.loss(one.operator.delay - other.operator.delay).ok()?;
                let weight = -2.0 * one.coefficient() * other.coefficient();
                let value = weight * lost;
                sum.add(Moment::Finite {
                    value,
                    error: value.abs() * CLOSED_FORM,
                });
            }
        }
        Some(sum.moment())
    }

    /// The derivative of an order of the kernel at a lag of either sign; infinite where it does not exist.
    fn derivative(&self, source: SourceId, order: usize, lag: f64) -> Moment {
        let Some(kernel) = self.kernel(source) else {
            return Moment::Unknown;
        };
        let size = lag.abs();
        let found = if size == 0.0 {
            let known = self.at_zero[source.0 as usize]
                .get_or_init(|| derivatives_at_zero(kernel, &self.sources[source.0 as usize]));
            known.get(order).copied()
        } else {
            let key = (source, size.to_bits());
            let known = self.at_lags.borrow().get(&key).cloned();
            let known = known.unwrap_or_else(|| {
                let computed = Rc::new(derivatives_at(kernel, size));
                self.at_lags.borrow_mut().insert(key, Rc::clone(&computed));
                computed
            });
            known.get(order).copied()
        };
        // The kernel is even: its odd derivatives change sign with the lag.
        let sign = if lag < 0.0 && order % 2 == 1 { -1.0 } else { 1.0 };
        found.unwrap_or(Moment::Infinite).times(sign)
    }
}

/// The relative error of closed forms.
pub(super) const CLOSED_FORM: f64 = 1e-13;

/// The derivatives of a kernel at lag 0 by order, as far as they exist: odd ones are 0.
fn derivatives_at_zero(kernel: &Kernel, source: &Source) -> Vec<Moment> {
    let exists = |order: usize| match source.smoothness() {
        Smoothness::Unlimited => true,
        Smoothness::Exactly { limiting, .. } => (order as f64) < limiting.exponent,
        Smoothness::AtLeast { derivatives } => order <= 2 * *derivatives as usize,
        Smoothness::Unclear { .. } => order == 0,
    };
    let expansion = kernel.expansion(MOST_DERIVATIVES as f64 + 1.0);
    let mut factorial = 1.0;
    let mut derivatives = Vec::new();
    for order in (0..=MOST_DERIVATIVES).take_while(|order| exists(*order)) {
        factorial *= order.max(1) as f64;
        derivatives.push(if order % 2 == 1 {
            Moment::ZERO
        } else {
            match expansion.coefficient(order as f64) {
                Some(coefficient) => exactly(factorial * coefficient),
                None => Moment::Unreached,
            }
        });
    }
    derivatives
}

/// The derivatives of a kernel at a lag above 0 by order, as far as they exist.
fn derivatives_at(kernel: &Kernel, lag: f64) -> Vec<Moment> {
    let smooth_to = |order: &usize| kernel.taylor(lag, *order).ok();
    let coefficients = smooth_to(&MOST_DERIVATIVES)
        .or_else(|| (0..MOST_DERIVATIVES).rev().find_map(|order| smooth_to(&order)))
        .unwrap_or_default();
    let mut factorial = 1.0;
    let derivative = |(order, coefficient): (usize, f64)| {
        factorial *= order.max(1) as f64;
        exactly(factorial * coefficient)
    };
    coefficients.into_iter().enumerate().map(derivative).collect()
}

fn exactly(value: f64) -> Moment {
    if value.is_finite() {
        Moment::Finite {
            value,
            error: value.abs() * CLOSED_FORM,
        }
    } else {
        Moment::Unreached
    }
}

/// A sum of moments to twice the working precision, so that the order of its terms leaves no trace.
#[derive(Clone, Copy)]
struct Sum {
    value: Exact,
    size: f64,
    error: f64,
    /// Set by the first part that is no finite number.
    spoilt: Option<Moment>,
}

impl Default for Sum {
    fn default() -> Self {
        Self {
            value: Exact::default(),
            size: 0.0,
            error: 0.0,
            spoilt: None,
        }
    }
}

impl Sum {
    fn add(&mut self, part: Moment) {
        match part {
            Moment::Finite { value, error } => {
                self.value = self.value.plus(Exact::new(value));
                self.size += value.abs();
                self.error += error;
            }
            unknown => self.spoilt = Some(self.spoilt.map_or(unknown, |earlier| earlier.plus(unknown))),
        }
    }

    fn moment(self) -> Moment {
        self.spoilt.unwrap_or_else(|| {
            let value = self.value.value();
            if value.is_finite() {
                Moment::Finite {
                    value,
                    error: self.error + f64::EPSILON * value.abs(),
                }
            } else {
                Moment::Unreached
            }
        })
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::covariance::kernel::SquaredExponential;
    use crate::source::{FileId, Span};

    fn sources() -> Vec<Source> {
        let source = |name: &str, length: f64| {
            let kernel = Kernel::from(SquaredExponential::new(length).expect("a positive length"));
            Source::new(name.into(), kernel, Span::new(FileId(0), 0, 0), Vec::new())
        };
        vec![source("x", 1.0), source("y", 2.0)]
    }

    fn value(moment: Moment) -> f64 {
        moment.value().expect("a known moment")
    }

    /// Closed forms of exp(-tau²/2) and its derivatives; signs by Cramér and Leadbetter 1967, sec. 9.3:
    /// Cov[X'(t), X(t + tau)] = -K'(tau), Cov[X(t), X'(t + tau)] = K'(tau).
    #[test]
    fn covariances_between_forms() {
        let sources = sources();
        let table = MomentTable::new(&sources);
        let x = LinearForm::source(7.0, SourceId(0));
        let y = LinearForm::source(-3.0, SourceId(1));
        let k = |tau: f64| (-0.5 * tau * tau).exp();
        let slope = |tau: f64| -tau * k(tau);
        let close = |a: f64, b: f64| assert!((a - b).abs() < 1e-14, "{a} against {b}");
        close(value(table.covariance(&x, &y, 0.3)), 0.0);
        close(value(table.covariance(&x, &x.delayed(0.5), 2.0)), k(1.5));
        close(value(table.covariance(&x.derivative(), &x, 0.7)), -slope(0.7));
        close(value(table.covariance(&x, &x.derivative(), 0.7)), slope(0.7));
        close(value(table.covariance(&x, &x.derivative(), -0.7)), slope(-0.7));
        let mixed = LinearForm::combination([(2.0, &x), (-1.0, &y), (0.5, &x.derivative())]);
        let expected = 2.0 * k(1.0) - 0.5 * slope(1.0);
        close(value(table.covariance(&mixed, &x, 1.0)), expected);
        // Both orders: Cov[A(t), B(t + tau)] = Cov[B(t), A(t - tau)].
        close(value(table.covariance(&x, &mixed, -1.0)), expected);
    }

    #[test]
    fn small_differences_keep_their_digits() {
        let sources = sources();
        let table = MomentTable::new(&sources);
        let x = LinearForm::source(0.0, SourceId(0));
        let step = 1e-6;
        let difference = LinearForm::combination([(1.0, &x), (-1.0, &x.delayed(step))]);
        let variance = value(table.moments(&difference).lambda[0]);
        let expected = -2.0 * (-0.5 * step * step).exp_m1();
        assert!(
            (variance / expected - 1.0).abs() < 1e-12,
            "{variance} against {expected}"
        );
    }
}
