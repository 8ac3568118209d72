//! The results of one limit state.

use super::number::Real;
use super::{LimitStateResult, RequirementResult, Shown, TableRow, extremes};
use crate::check::{LimitQuantity, LimitState, Requirement};
use crate::covariance::coherence::Coherences;
use crate::covariance::moments::{FormMoments, Moment, MomentTable};
use crate::covariance::source::Source;
use crate::reliability::crossings::{FailureRegion, GaussianMargin};
use crate::reliability::first_passage::{FirstPassage, Method};
use crate::reliability::probability::Probability;
use crate::reliability::verdict::Verdict;
use crate::units::show;

/// Digits of judged values in text.
pub(super) const DIGITS: usize = 5;

/// Below this many standard deviations from mean to barrier, entries are no rare events and Poisson crossings prove
/// nothing: the probability of being failed at an instant is above 2 % there.
pub(super) const LOW_BARRIER: f64 = 2.0;

/// What rounding leaves even where no moment cancels.
const ROUNDING: f64 = 1e-14;

/// A limit state with everything that its results are read from.
pub(super) struct Judged<'m> {
    pub(super) limit_state: &'m LimitState,
    pub(super) margin: GaussianMargin,
    pub(super) passage: FirstPassage,
    relative_error: f64,
    pub(super) sources: &'m [Source],
    pub(super) coherences: Option<&'m Coherences>,
}

impl<'m> Judged<'m> {
    pub(super) fn new(table: &MomentTable<'m>, limit_state: &'m LimitState) -> Self {
        let moments = table.moments_of(&limit_state.margin);
        let margin = GaussianMargin {
            mean: limit_state.margin.mean(),
            standard_deviation: moments.standard_deviation(),
            derivative_standard_deviation: moments.derivative_standard_deviation().unwrap_or(f64::NAN),
            bandwidth: moments.bandwidth(),
        };
        Self {
            limit_state,
            margin,
            passage: FirstPassage::new(&margin, limit_state.region, limit_state.method),
            relative_error: relative_error(&margin, limit_state, &moments),
            sources: table.sources(),
            coherences: table.coherences(),
        }
    }

    pub(super) fn reduced_barrier(&self) -> f64 {
        self.margin.reduced_barrier(self.limit_state.region)
    }

    /// The level that a one-sided condition on a margin of mean 0 leaves out on the other side.
    pub(super) fn other_side(&self) -> Option<String> {
        let level = match self.limit_state.region {
            FailureRegion::Below(level) | FailureRegion::Above(level) => level,
            FailureRegion::Outside(..) => return None,
        };
        (self.margin.mean == 0.0 && level != 0.0).then(|| show(-level, &self.limit_state.unit, DIGITS))
    }

    pub(super) fn result(&self) -> LimitStateResult {
        let limit_state = self.limit_state;
        let period = limit_state.reference_period.seconds;
        let over = self.passage.within(period);
        LimitStateResult {
            name: limit_state.name.clone(),
            failure_when: limit_state.failure_when.clone(),
            reference_period: period,
            first_passage: limit_state.method.name(),
            upcrossing_rate: Real::new(self.passage.ln_rate.exp()),
            initial_failure_probability: Real::new(self.passage.initial.failure()),
            survival: Real::new(over.survival()),
            failure_probability: Real::new(over.failure()),
            reliability_index: index(over),
            mean_time_to_failure: Real::new(self.passage.ln_mean_time_to_failure().exp()),
            relative_error: Real::new(self.relative_error),
            table: limit_state.tabulate.iter().map(|time| self.row(time.seconds)).collect(),
            extremes: extremes::over_the_reference_period(&self.margin, limit_state),
            requirements: limit_state
                .requirements
                .iter()
                .map(|one| self.requirement(one))
                .collect(),
            assumptions: self.assumptions(),
        }
    }

    fn row(&self, time: f64) -> TableRow {
        let over = self.passage.within(time);
        TableRow {
            t: time,
            survival: Real::new(over.survival()),
            failure_probability: Real::new(over.failure()),
            reliability_index: index(over),
            upcrossing_rate: Real::new(self.passage.ln_rate.exp()),
        }
    }

    /// A quantity over a time, as the formula has it.
    pub(super) fn quantity(&self, quantity: LimitQuantity, time: f64) -> f64 {
        match quantity {
            LimitQuantity::UpcrossingRate => self.passage.ln_rate.exp(),
            LimitQuantity::MeanTimeToFailure => self.passage.ln_mean_time_to_failure().exp(),
            LimitQuantity::InitialFailureProbability => self.passage.initial.failure(),
            of_period => of_probability(of_period, self.passage.within(time)),
        }
    }

    /// Judges a demand on all values that the numerical error leaves open. Where the barrier is low the formula proves
    /// nothing: the demand is then judged on the bounds that hold whatever the dependence of the crossings.
    fn requirement(&self, requirement: &Requirement) -> RequirementResult {
        let quantity = requirement.quantity;
        let time = requirement.over.seconds;
        let value = self.quantity(quantity, time);
        let by_formula = matches!(
            quantity,
            LimitQuantity::Survival | LimitQuantity::FailureProbability | LimitQuantity::ReliabilityIndex
        );
        let doubtful = self.reduced_barrier() < LOW_BARRIER;
        let verdict = if doubtful && quantity == LimitQuantity::MeanTimeToFailure {
            Verdict::NotEstablished
        } else {
            let (one, other) = if doubtful && by_formula {
                let (least, most) = self.passage.bounds(time);
                (of_probability(quantity, least), of_probability(quantity, most))
            } else {
                (value, value)
            };
            let low = one.min(other) - self.error(quantity, one.min(other));
            let high = one.max(other) + self.error(quantity, one.max(other));
            // The error does not lead beyond what the quantity can be.
            let (least, most) = quantity.range();
            requirement
                .demand
                .judge(low.clamp(least, most), high.clamp(least, most))
        };
        RequirementResult {
            text: requirement.text.clone(),
            value: Real::new(value),
            limit: requirement.demand.limit(),
            over: time,
            verdict: verdict.words(),
            shown: Shown {
                demand: if by_formula {
                    format!(
                        "{} over {}",
                        requirement.text,
                        show(time, &requirement.over.unit, DIGITS)
                    )
                } else {
                    requirement.text.clone()
                },
                value: show(value, &requirement.unit, DIGITS),
            },
            basis: requirement.basis.clone(),
        }
    }

    /// The numerical error of a quantity, in its own unit.
    fn error(&self, quantity: LimitQuantity, value: f64) -> f64 {
        match quantity {
            // d beta = d Pf / phi(beta), and Pf / phi(beta) is about 1 / beta in the tail.
            LimitQuantity::ReliabilityIndex => self.relative_error / value.abs().max(1.0),
            LimitQuantity::Survival => self.relative_error * (1.0 - value).max(f64::EPSILON),
            _ => self.relative_error * value.abs(),
        }
    }
}

/// What rounding in the moments does to a failure probability. In the tail `d ln Pf = -(r + 1/r) dr`, and `r` feels the
/// rounding of the difference between barrier and mean as well as half the relative error of the variance.
fn relative_error(margin: &GaussianMargin, limit_state: &LimitState, moments: &FormMoments) -> f64 {
    let region = limit_state.region;
    let reduced = margin.reduced_barrier(region).abs();
    let level = match region {
        FailureRegion::Below(level) | FailureRegion::Above(level) => level.abs(),
        FailureRegion::Outside(lower, upper) => lower.abs().max(upper.abs()),
    };
    let [variance, _, derivative, _] = &moments.lambda;
    let of_difference = f64::EPSILON * (level + margin.mean.abs()) / margin.standard_deviation;
    let of_variance = 0.5 * reduced * variance.relative_error();
    // The rate by `vanmarcke` rises at most with the power 1.2 of the bandwidth.
    let of_bandwidth = match limit_state.method {
        Method::Vanmarcke => 1.2 * moments.bandwidth_error(),
        Method::Poisson | Method::PoissonSafeStart => 0.0,
    };
    (reduced + 1.0) * (of_difference + of_variance)
        + of_bandwidth
        + 0.5 * derivative.relative_error()
        + ROUNDING * (1.0 + reduced * reduced)
}

fn of_probability(quantity: LimitQuantity, probability: Probability) -> f64 {
    match quantity {
        LimitQuantity::Survival => probability.survival(),
        LimitQuantity::ReliabilityIndex => probability.reliability_index(),
        _ => probability.failure(),
    }
}

fn index(probability: Probability) -> Option<Real> {
    Real::new(probability.reliability_index())
}

impl FormMoments {
    /// The relative error of the bandwidth `q`: `q² = 1 - k`, and what `k` is off by, half of it over `q²`, is the more the
    /// narrower the band.
    fn bandwidth_error(&self) -> f64 {
        let [zeroth, first, second, _] = self.lambda.map(|moment| moment.relative_error());
        match self.bandwidth() {
            Some(q) => 0.5 * (1.0 - q * q) * (zeroth + 2.0 * first + second + f64::EPSILON) / (q * q),
            None => f64::INFINITY,
        }
    }
}

impl Moment {
    /// The relative error; 0 where the moment is infinite.
    fn relative_error(&self) -> f64 {
        match self {
            Moment::Finite { value, error } if *value != 0.0 => (error / value).abs(),
            Moment::Finite { .. } | Moment::Infinite | Moment::Unknown => 0.0,
            Moment::Unreached => f64::INFINITY,
        }
    }
}
