//! From the checked model to its results.

use super::extremes;
use super::findings;
use super::number::Real;
use super::responses;
use super::{
    Assumption, ExpectationResult, LimitStateResult, ModelIdentity, Moments, ParameterValue, RequirementResult,
    Results, Shown, TableRow, Tool, Warning,
};
use crate::check::{
    Expectation, Kind, LimitQuantity, LimitState, Model, Named, ProcessQuantity, Requirement, Subject, Tolerance,
};
use crate::covariance::moments::{FormMoments, Moment, MomentTable};
use crate::covariance::source::Source;
use crate::diagnostics::{Code, Diagnostic, sort};
use crate::reliability::crossings::{FailureRegion, GaussianMargin};
use crate::reliability::first_passage::{FirstPassage, Method, ln_clumping};
use crate::reliability::probability::Probability;
use crate::reliability::verdict::Verdict;
use crate::source::Files;
use crate::units::{Unit, show, show_number};
use sha2::{Digest, Sha256};
use std::f64::consts::PI;

/// Digits of judged values in text.
const DIGITS: usize = 5;

/// Below this many standard deviations from mean to barrier, entries are no rare events and Poisson crossings prove
/// nothing: the probability of being failed at an instant is above 2 % there.
const LOW_BARRIER: f64 = 2.0;

/// Below this bandwidth entries come in clumps (Vanmarcke 1975, "On the distribution of the first-passage time for
/// normal stationary random processes", J. Appl. Mech. 42; the figure itself is common practice, no source).
const NARROW_BAND: f64 = 0.3;

/// What rounding leaves even where no moment cancels.
const ROUNDING: f64 = 1e-14;

/// Computes everything. `only` names the limit states wanted; empty for all. `warnings` are those of the check.
pub fn evaluate(files: &Files, model: &Model, warnings: &[Diagnostic], only: &[String]) -> Results {
    let table = MomentTable::new(&model.sources).coherent(&model.coherences);
    let varying: Vec<FormMoments> = model
        .varying
        .iter()
        .map(|named| table.moments_of(&named.form))
        .collect();
    let of_kind = |kind: Kind| {
        let named = model.varying.iter().zip(&varying);
        named
            .filter(|(named, _)| named.kind == kind)
            .map(|(named, moments)| moments_of(named, moments))
            .collect()
    };
    let wanted = |limit_state: &&LimitState| only.is_empty() || only.contains(&limit_state.name);
    let limit_states: Vec<&LimitState> = model.limit_states.iter().filter(wanted).collect();
    let judged: Vec<LimitStateResult> = limit_states
        .iter()
        .map(|limit_state| Judged::new(&table, limit_state).result())
        .collect();
    let expectations: Vec<ExpectationResult> = model
        .expectations
        .iter()
        .map(|expectation| expected(expectation, model, &varying, &table))
        .collect();
    let pairs = limit_states.iter().zip(&judged);
    let mut findings: Vec<Diagnostic> = pairs
        .filter_map(|(one, result)| findings::too_good(one, result))
        .collect();
    let pairs = model.expectations.iter().zip(&expectations);
    findings.extend(pairs.filter_map(|(one, result)| findings::known_ratio(one, result)));
    let mut acceptances = model.acceptances.clone();
    acceptances.apply(&mut findings);
    if only.is_empty() {
        findings.extend(acceptances.idle(Code::needs_results));
    }
    sort(&mut findings);
    Results {
        format: "outcross-results",
        version: 1,
        tool: Tool {
            name: "outcross",
            version: env!("CARGO_PKG_VERSION"),
        },
        model: identity(files, model),
        parameters: model
            .parameters
            .iter()
            .map(|parameter| ParameterValue {
                name: parameter.name.clone(),
                value: parameter.value,
                unit: parameter.unit.dimension().si_name(),
            })
            .collect(),
        processes: of_kind(Kind::Process),
        margins: of_kind(Kind::Margin),
        limit_states: judged,
        expectations,
        warnings: warnings
            .iter()
            .chain(&findings)
            .map(|warning| warning_entry(files, warning))
            .collect(),
        findings,
    }
}

fn identity(files: &Files, model: &Model) -> ModelIdentity {
    let file = files.get(model.file);
    let digest = Sha256::digest(file.text.as_bytes());
    ModelIdentity {
        file: file.name(),
        title: model.title.clone(),
        sha256: digest.iter().map(|byte| format!("{byte:02x}")).collect(),
    }
}

fn warning_entry(files: &Files, warning: &Diagnostic) -> Warning {
    let place = files.place(warning.place);
    Warning {
        code: warning.code.name(),
        message: warning.message.clone(),
        file: files.get(warning.place.file).name(),
        line: place.line,
        column: place.column,
        accepted: warning.accepted.clone(),
    }
}

fn moments_of(named: &Named, moments: &FormMoments) -> Moments {
    let spectral: Option<Vec<Real>> = moments.lambda.iter().map(|moment| Real::new(moment.value()?)).collect();
    Moments {
        name: named.name.clone(),
        unit: named.dimension.si_name(),
        mean: Real::new(named.form.mean()),
        standard_deviation: Real::new(moments.standard_deviation()),
        derivative_standard_deviation: moments.derivative_standard_deviation().and_then(Real::new),
        zero_upcrossing_rate: zero_upcrossing_rate(moments).and_then(Real::new),
        bandwidth: moments.bandwidth().and_then(Real::new),
        irregularity: moments.irregularity().and_then(Real::new),
        spectral_moments: spectral.and_then(|moments| moments.try_into().ok()),
        unreached: moments.lambda.contains(&Moment::Unreached),
    }
}

/// The mean rate of upcrossings of the mean, `sqrt(lambda_2 / lambda_0) / (2 pi)`, in 1/s (Rice 1944-45).
fn zero_upcrossing_rate(moments: &FormMoments) -> Option<f64> {
    Some(moments.derivative_standard_deviation()? / (2.0 * PI * moments.standard_deviation()))
}

/// A limit state with everything that its results are read from.
struct Judged<'m> {
    limit_state: &'m LimitState,
    margin: GaussianMargin,
    passage: FirstPassage,
    relative_error: f64,
    sources: &'m [Source],
}

impl<'m> Judged<'m> {
    fn new(table: &MomentTable<'m>, limit_state: &'m LimitState) -> Self {
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
        }
    }

    fn reduced_barrier(&self) -> f64 {
        self.margin.reduced_barrier(self.limit_state.region)
    }

    /// The level that a one-sided condition on a margin of mean 0 leaves out on the other side.
    fn other_side(&self) -> Option<String> {
        let level = match self.limit_state.region {
            FailureRegion::Below(level) | FailureRegion::Above(level) => level,
            FailureRegion::Outside(..) => return None,
        };
        (self.margin.mean == 0.0 && level != 0.0).then(|| show(-level, &self.limit_state.unit, DIGITS))
    }

    fn result(&self) -> LimitStateResult {
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
    fn quantity(&self, quantity: LimitQuantity, time: f64) -> f64 {
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

    /// That entries come in clumps, with what that makes of the result where it can be told.
    fn narrow_band(&self, bandwidth: f64) -> Assumption {
        let limit_state = self.limit_state;
        let corrected = FirstPassage::new(&self.margin, limit_state.region, Method::Vanmarcke)
            .within(limit_state.reference_period.seconds)
            .failure();
        let by_vanmarcke = if corrected.is_finite() {
            let corrected = show_number(corrected, 3);
            format!("; by `first passage vanmarcke` it is {corrected} over the reference period")
        } else {
            String::new()
        };
        let bandwidth = show_number(bandwidth, 3);
        Assumption {
            code: "narrow-band",
            text: format!(
                "The margin is narrow-banded (bandwidth {bandwidth}, below 0.3): entries come in clumps, so the failure \
                 probability is likely overstated{by_vanmarcke}."
            ),
        }
    }

    fn of_method(&self) -> Assumption {
        let (code, text) = match self.limit_state.method {
            Method::Poisson => (
                "poisson-crossings",
                "Entries into failure are counted as a Poisson process, whatever the start: right for barriers far from \
                 the mean."
                    .to_string(),
            ),
            Method::PoissonSafeStart => (
                "poisson-crossings",
                "Entries into failure are counted as a Poisson process among those that are safe: right for barriers far \
                 from the mean."
                    .to_string(),
            ),
            Method::Vanmarcke => {
                let factor = self.clumping().map_or("not known".to_string(), |factor| show_number(factor, 3));
                let bandwidth = self.margin.bandwidth.map_or("not known".to_string(), |q| show_number(q, 3));
                (
                    "clumped-crossings",
                    format!(
                        "Entries into failure come in clumps, and some time is spent in failure: their rate is multiplied by \
                         {factor}, which follows from the bandwidth {bandwidth} of the margin (Vanmarcke 1975)."
                    ),
                )
            }
        };
        Assumption { code, text }
    }

    /// What clumping and the time spent in failure make of the rate of entries.
    fn clumping(&self) -> Option<f64> {
        Some(ln_clumping(&self.margin, self.limit_state.region, self.margin.bandwidth?)?.exp())
    }

    fn assumptions(&self) -> Vec<Assumption> {
        let mut assumptions = vec![
            Assumption {
                code: "stationary-gaussian",
                text: "The processes are Gaussian, and their statistics stay the same during the whole time.".into(),
            },
            self.of_method(),
        ];
        for (source, _) in self.limit_state.margin.by_source() {
            let notes = self
                .sources
                .get(source.0 as usize)
                .map_or(&[][..], |source| &source.notes);
            assumptions.extend(notes.iter().map(|note| Assumption {
                code: "kernel",
                text: note.clone(),
            }));
        }
        if let Some(other) = self.other_side() {
            assumptions.push(Assumption {
                code: "one-sided",
                text: format!(
                    "Only one side fails. The mean is 0, so the margin is as often beyond {other} on the other side, \
                     which does not count."
                ),
            });
        }
        assumptions.extend(responses::assumptions(&self.limit_state.margin));
        let reduced = self.reduced_barrier();
        if reduced < LOW_BARRIER {
            let time = self.limit_state.reference_period.seconds;
            let (least, most) = self.passage.bounds(time);
            let (least, most) = (
                show_number(least.failure(), DIGITS),
                show_number(most.failure(), DIGITS),
            );
            let distance = show_number(reduced.abs(), 3);
            let where_it_is = if reduced > 0.0 {
                format!("The barrier is only {distance} standard deviations from the mean")
            } else {
                format!("The mean itself is failed, {distance} standard deviations beyond the barrier")
            };
            assumptions.push(Assumption {
                code: "low-barrier",
                text: format!(
                    "{where_it_is}, so entries are not rare and the formula is outside its range (2 or more). \
                     Requirements are judged on what holds in any case: the failure probability over the reference \
                     period is at least {least} and at most {most}."
                ),
            });
        }
        if self.margin.bandwidth.is_none() {
            assumptions.push(Assumption {
                code: "bandwidth-unknown",
                text: "The bandwidth of the margin is not known, so it was not checked whether entries come in clumps."
                    .into(),
            });
        }
        let narrow = self.margin.bandwidth.filter(|bandwidth| *bandwidth < NARROW_BAND);
        if let Some(bandwidth) = narrow.filter(|_| self.limit_state.method != Method::Vanmarcke) {
            assumptions.push(self.narrow_band(bandwidth));
        }
        assumptions
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

fn expected(
    expectation: &Expectation,
    model: &Model,
    varying: &[FormMoments],
    table: &MomentTable<'_>,
) -> ExpectationResult {
    let value = match expectation.subject {
        Subject::Varying(index, quantity) => match (model.varying.get(index), varying.get(index)) {
            (Some(named), Some(moments)) => of_varying(quantity, named, moments),
            _ => None,
        },
        Subject::LimitState(index, quantity, time) => model
            .limit_states
            .get(index)
            .map(|limit_state| Judged::new(table, limit_state).quantity(quantity, time)),
        Subject::Extreme(index, quantity, time) => model.limit_states.get(index).and_then(|limit_state| {
            let judged = Judged::new(table, limit_state);
            extremes::quantity(&judged.margin, limit_state, quantity, time)
        }),
    };
    let (tolerance, tolerance_kind, allowed) = match expectation.tolerance {
        Tolerance::Relative(share) => (share, "relative", share * expectation.expected.abs()),
        Tolerance::Absolute(distance) => (distance, "absolute", distance),
    };
    ExpectationResult {
        text: expectation.text.clone(),
        value: value.and_then(Real::new),
        expected: expectation.expected,
        tolerance,
        tolerance_kind,
        holds: value.is_some_and(|value| (value - expectation.expected).abs() <= allowed),
        shown: value.map_or_else(
            || "does not exist".to_string(),
            |value| show_in(value, &expectation.unit),
        ),
        basis: expectation.basis.clone(),
    }
}

fn show_in(value: f64, unit: &Unit) -> String {
    show(value, unit, DIGITS + 1)
}

fn of_varying(quantity: ProcessQuantity, named: &Named, moments: &FormMoments) -> Option<f64> {
    match quantity {
        ProcessQuantity::Mean => Some(named.form.mean()),
        ProcessQuantity::StandardDeviation => Some(moments.standard_deviation()),
        ProcessQuantity::DerivativeStandardDeviation => moments.derivative_standard_deviation(),
        ProcessQuantity::ZeroUpcrossingRate => zero_upcrossing_rate(moments),
        ProcessQuantity::Bandwidth => moments.bandwidth(),
        ProcessQuantity::Irregularity => moments.irregularity(),
    }
}

impl Results {
    /// What did not reach its tolerance, in words: failure probabilities with a larger relative error, and moments that
    /// could not be computed to six digits.
    pub fn out_of_reach(&self, tolerance: f64) -> Vec<String> {
        let moments = self.processes.iter().chain(&self.margins).filter(|one| one.unreached);
        let inexact = |one: &&LimitStateResult| one.relative_error.is_none_or(|error| error.value() > tolerance);
        let limit_states = self.limit_states.iter().filter(inexact);
        let of_moments = moments.map(|one| format!("the spectral moments of `{}`: too many digits cancel", one.name));
        let of_limit_states = limit_states.map(|one| match one.relative_error {
            Some(error) => {
                let error = show_number(error.value(), 1);
                format!(
                    "the failure probability of `{}`: its relative error is {error}",
                    one.name
                )
            }
            None => format!("the limit state `{}`: its moments leave the range of numbers", one.name),
        });
        of_moments.chain(of_limit_states).collect()
    }
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
