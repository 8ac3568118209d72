//! Survival over a time, from crossings counted as a Poisson process, as they are or corrected for their clumping.

use super::crossings::{FailureRegion, GaussianMargin};
use super::probability::{Probability, ln_chance_of_event, ln_sum};
use std::f64::consts::{FRAC_PI_2, PI};

/// How crossings become survival.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Method {
    /// `S = P0 exp(-nu T)`: crossings come as a Poisson process, whatever the start.
    Poisson,
    /// `S = P0 exp(-nu T / P0)`: crossings are counted among the paths that are safe.
    PoissonSafeStart,
    /// `S = P0 exp(-h T)`, `h` the rate of entries corrected for clumping by the bandwidth and for the time that is spent
    /// in failure: one barrier beyond the mean, or two evenly about it.
    Vanmarcke,
}

impl Method {
    /// Its name in the language and in results.
    pub fn name(self) -> &'static str {
        match self {
            Self::Poisson => "poisson",
            Self::PoissonSafeStart => "poisson_safe_start",
            Self::Vanmarcke => "vanmarcke",
        }
    }
}

/// The logarithm of the factor by which clumping and the time spent in failure change the rate of entries,
///
/// ```text
/// (1 - exp(-c q^1.2 r)) / (1 - exp(-r²/2)),   c = sqrt(2 pi) for one barrier, sqrt(pi/2) for two,
/// ```
///
/// `r` the barrier in standard deviations from the mean and `q` the bandwidth (Vanmarcke 1975, "On the distribution of the
/// first-passage time for normal stationary random processes", J. Appl. Mech. 42, eq. 30 and 32, from memory; with the
/// exponent 1.2 in place of 1 that he found to fit simulations).
///
/// `None` unless there is one barrier beyond the mean or two evenly about it.
pub fn ln_clumping(margin: &GaussianMargin, region: FailureRegion, bandwidth: f64) -> Option<f64> {
    let reduced = margin.reduced_barrier(region);
    let sides = match region {
        FailureRegion::Below(_) | FailureRegion::Above(_) => (2.0 * PI).sqrt(),
        FailureRegion::Outside(..) if margin.is_centred(region) => FRAC_PI_2.sqrt(),
        FailureRegion::Outside(..) => return None,
    };
    let entries = sides * bandwidth.powf(1.2) * reduced;
    (reduced > 0.0).then(|| (-(-entries).exp_m1()).ln() - (-(-0.5 * reduced * reduced).exp_m1()).ln())
}

/// A limit state of a stationary margin.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct FirstPassage {
    /// The probability of being failed at the start.
    pub initial: Probability,
    /// The logarithm of the mean rate of entries into failure, per second.
    pub ln_rate: f64,
    /// The logarithm of the rate at which survivors fail, per second.
    ln_hazard: f64,
}

impl FirstPassage {
    /// For a margin and its region of failure. The bandwidth is asked of `vanmarcke` alone: without one, and where the method
    /// does not apply, no probability is a number.
    pub fn new(margin: &GaussianMargin, region: FailureRegion, method: Method) -> Self {
        let initial = margin.point_in_time(region);
        let ln_rate = margin.ln_entry_rate(region);
        let ln_hazard = match method {
            Method::Poisson => ln_rate,
            Method::PoissonSafeStart => ln_rate - initial.ln_survival(),
            Method::Vanmarcke => margin
                .bandwidth
                .and_then(|bandwidth| ln_clumping(margin, region, bandwidth))
                .map_or(f64::NAN, |factor| ln_rate + factor),
        };
        Self {
            initial,
            ln_rate,
            ln_hazard,
        }
    }

    /// The probability of failure within `time` seconds.
    ///
    /// `Pf = p0 + P0 (1 - exp(-h T))`, a sum of positive parts, so nothing cancels (Poisson crossings: Coleman 1959,
    /// "Reliability of aircraft structures in resisting chance failure"; the start among the safe: Ditlevsen 1986,
    /// "Duration of visit to critical set by Gaussian process", both from memory).
    pub fn within(&self, time: f64) -> Probability {
        let ln_expected = self.ln_hazard + time.ln();
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
        self.initial.ln_survival() - self.ln_hazard
    }
}
