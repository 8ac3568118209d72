//! Random models, as data and as text.

use proptest::collection::vec;
use proptest::prelude::*;
use std::fmt::Write;
use std::ops::Range;

/// A process `x0`, `x1`, ... made by `gaussian(...)`, in kN.
#[derive(Clone, Debug)]
pub struct Source {
    pub mean: f64,
    pub deviation: f64,
    /// The correlation function, as written.
    pub kernel: String,
}

/// A coefficient times a source, differentiated and delayed. Coefficients and delays have few binary digits, so that
/// halves, doubles and sums of them are exact.
#[derive(Clone, Debug)]
pub struct Term {
    pub coefficient: f64,
    pub source: usize,
    pub derivatives: usize,
    /// In s.
    pub delay: f64,
}

/// Sources, and a form over them.
#[derive(Clone, Debug)]
pub struct Combination {
    pub sources: Vec<Source>,
    /// In kN.
    pub constant: f64,
    pub terms: Vec<Term>,
}

/// A kernel that is differentiable at least three times: a term may be differentiated once and still be crossed.
pub fn kernel() -> impl Strategy<Value = String> {
    let length = || 0.1..10.0;
    prop_oneof![
        length().prop_map(|length| format!("squared_exponential(length: {length} s)")),
        (length(), prop_oneof![Just(3.5), 3.1..6.0])
            .prop_map(|(length, smoothness)| format!("matern(smoothness: {smoothness}, length: {length} s)")),
        (length(), 0.6..5.0)
            .prop_map(|(length, mixture)| format!("rational_quadratic(length: {length} s, mixture: {mixture})")),
        (0.0..5.0, 0.1..5.0)
            .prop_map(|(lower, width)| format!("band_limited(lower: {lower} Hz, upper: {} Hz)", lower + width)),
        (length(), length()).prop_map(|(one, two)| format!(
            "0.25 * squared_exponential(length: {one} s) + 0.75 * matern(smoothness: 9/2, length: {two} s)"
        )),
    ]
}

pub fn source() -> impl Strategy<Value = Source> {
    (-20.0..20.0, 0.5..5.0, kernel()).prop_map(|(mean, deviation, kernel)| Source {
        mean,
        deviation,
        kernel,
    })
}

fn term(sources: usize) -> impl Strategy<Value = Term> {
    let coefficient = prop_oneof![-64..-1, 1..64].prop_map(|eighths| f64::from(eighths) / 8.0);
    let delay = prop_oneof![Just(0.0), (-40..40).prop_map(|eighths| f64::from(eighths) / 8.0)];
    let derivatives = prop_oneof![3 => Just(0usize), 1 => Just(1)];
    (coefficient, 0..sources, derivatives, delay).prop_map(|(coefficient, source, derivatives, delay)| Term {
        coefficient,
        source,
        derivatives,
        delay,
    })
}

/// Terms, at most one for a source, derivative and delay: terms of a text that cancel are a matter of their own.
pub fn terms(sources: usize, count: Range<usize>) -> impl Strategy<Value = Vec<Term>> {
    vec(term(sources), count).prop_map(|mut terms| {
        let key = |term: &Term| (term.source, term.derivatives, term.delay.to_bits());
        terms.sort_by_key(key);
        terms.dedup_by_key(|term| key(term));
        terms
    })
}

pub fn combination() -> impl Strategy<Value = Combination> {
    (1..4usize)
        .prop_flat_map(|count| (vec(source(), count), -100.0..100.0, terms(count, 1..5)))
        .prop_map(|(sources, constant, terms)| Combination {
            sources,
            constant,
            terms,
        })
}

impl Source {
    pub fn declaration(&self, name: &str) -> String {
        format!(
            "process {name} : kN = gaussian(mean: {} kN, standard_deviation: {} kN, correlation: {})",
            self.mean, self.deviation, self.kernel
        )
    }
}

impl Term {
    /// The operations on a source of this name.
    pub fn operand(&self, name: &str) -> String {
        let mut text = name.to_string();
        if self.delay != 0.0 {
            text = format!("delay({text}, by: {} s)", self.delay);
        }
        for _ in 0..self.derivatives {
            text = format!("derivative({text})");
        }
        text
    }

    /// Coefficient times operand; a derivative is worth its rate over a second.
    pub fn written(&self, coefficient: f64, operand: &str) -> String {
        match self.derivatives {
            0 => format!("{coefficient} * {operand}"),
            n => format!("{coefficient} s^{n} * {operand}"),
        }
    }

    pub fn text(&self) -> String {
        self.written(self.coefficient, &self.operand(&format!("x{}", self.source)))
    }
}

impl Combination {
    /// The declarations of the sources, a line each.
    pub fn declarations(&self) -> Vec<String> {
        let sources = self.sources.iter().enumerate();
        sources
            .map(|(index, source)| source.declaration(&format!("x{index}")))
            .collect()
    }

    /// The form as written.
    pub fn form(&self) -> String {
        let mut text = format!("{} kN", self.constant);
        for term in &self.terms {
            write!(text, " + {}", term.text()).unwrap();
        }
        text
    }

    /// The whole model, its margin called `m`.
    pub fn text(&self) -> String {
        format!("{}\nmargin m : kN = {}", self.declarations().join("\n"), self.form())
    }
}
