//! Survival over a time, from crossings counted as a Poisson process.

use super::crossings::{FailureRegion, GaussianMargin};
use super::probability::{Probability, ln_chance_of_event, ln_sum};

/// How crossings become survival.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Method {
    /// `S = P0 exp(-nu T)`: crossings come as a Poisson process, whatever the start.
    Poisson,
    /// `S = P0 exp(-nu T / P0)`: crossings are counted among the paths that are safe.
    PoissonSafeStart,
}

impl Method {
    /// Its name in the language and in results.
    pub fn name(self) -> &'static str {
        match self {
            Self::Poisson => "poisson",
            Self::PoissonSafeStart => "poisson_safe_start",
        }
    }
}

/// A limit state of a stationary margin.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct FirstPassage {
    /// The probability of being failed at the start.
    pub initial: Probability,
    /// The logarithm of the mean rate of entries into failure, per second.
    pub ln_rate: f64,
    /// The method.
    pub method: Method,
}

impl FirstPassage {
    /// For a margin and its region of failure.
    pub fn new(margin: &GaussianMargin, region: FailureRegion, method: Method) -> Self {
        Self {
            initial: margin.point_in_time(region),
            ln_rate: margin.ln_entry_rate(region),
            method,
        }
    }

    /// The logarithm of the rate at which survivors fail, per second.
    fn ln_hazard(&self) -> f64 {
        match self.method {
            Method::Poisson => self.ln_rate,
            Method::PoissonSafeStart => self.ln_rate - self.initial.ln_survival(),
        }
    }

    /// The probability of failure within `time` seconds.
    ///
    /// `Pf = p0 + P0 (1 - exp(-h T))`, a sum of positive parts, so nothing cancels (Poisson crossings: Coleman 1959,
    /// "Reliability of aircraft structures in resisting chance failure"; the start among the safe: Ditlevsen 1986,
    /// "Duration of visit to critical set by Gaussian process", both from memory).
    pub fn within(&self, time: f64) -> Probability {
        let ln_expected = self.ln_hazard() + time.ln();
        let passed = self.initial.ln_survival() + ln_chance_of_event(ln_expected);
        Probability::from_logarithms(
            ln_sum(self.initial.ln_failure(), passed),
            self.initial.ln_survival() - ln_expected.exp(),
        )
    }

    /// The bounds that hold whatever the dependence of the crossings: failed at the start is a part of failed within
    /// `time`, and failed within `time` needs a failed start or at least one entry, `p0 <= Pf <= p0 + nu T`
    /// (Boole's and Markov's inequalities; JCSS Probabilistic Model Code, Part 1, Annex B, eq. B7).
    pub fn bounds(&self, time: f64) -> (Probability, Probability) {
        let upper = ln_sum(self.initial.ln_failure(), self.ln_rate + time.ln()).min(0.0);
        let upper = Probability::from_logarithms(upper, super::probability::ln_complement(upper));
        (self.initial, upper)
    }

    /// The logarithm of the mean time to failure in seconds: the integral of the survival function, `P0 / h`.
    pub fn ln_mean_time_to_failure(&self) -> f64 {
        self.initial.ln_survival() - self.ln_hazard()
    }
}
