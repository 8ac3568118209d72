//! The results of `evaluate`: one document for a model, the contract with other programs.
//!
//! All numbers are in coherent SI units (N, m, s; angles in rad). A number that does not exist is left out; an infinite
//! one is the string `"infinite"`.

mod assumptions;
mod coherences;
mod evaluation;
mod extremes;
mod findings;
mod limit_state;
mod number;
mod responses;

pub use evaluation::evaluate;
pub use number::Real;

use crate::diagnostics::Diagnostic;
use serde::Serialize;

/// Everything `evaluate` finds out about a model.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Results {
    /// `outcross-results`
    pub format: &'static str,
    /// The version of this contract.
    pub version: u32,
    /// The program.
    pub tool: Tool,
    /// The model.
    pub model: ModelIdentity,
    /// Parameters with the values of this run.
    pub parameters: Vec<ParameterValue>,
    /// Processes, those of parts included.
    pub processes: Vec<Moments>,
    /// Margins, those of parts included.
    pub margins: Vec<Moments>,
    /// Limit states.
    pub limit_states: Vec<LimitStateResult>,
    /// The author's checks.
    pub expectations: Vec<ExpectationResult>,
    /// Findings that did not stop the computation.
    pub warnings: Vec<Warning>,
    /// Those of them that only the results show, for people.
    #[serde(skip)]
    pub findings: Vec<Diagnostic>,
}

/// The program that computed.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Tool {
    /// Its name.
    pub name: &'static str,
    /// Its version.
    pub version: &'static str,
}

/// Which model was computed.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct ModelIdentity {
    /// The path as given.
    pub file: String,
    /// The title, where there is one.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub title: Option<String>,
    /// The SHA-256 of the file's bytes, in hexadecimal.
    pub sha256: String,
}

/// A parameter.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct ParameterValue {
    /// Its full name.
    pub name: String,
    /// Its value in `unit`.
    pub value: f64,
    /// The coherent SI unit.
    pub unit: String,
}

/// The moments of a process or margin. Square roots of moments are in `unit` and `unit` per second.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Moments {
    /// Its full name.
    pub name: String,
    /// The coherent SI unit.
    pub unit: String,
    /// The mean.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub mean: Option<Real>,
    /// The standard deviation.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub standard_deviation: Option<Real>,
    /// The standard deviation of the derivative.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub derivative_standard_deviation: Option<Real>,
    /// The mean rate of upcrossings of the mean, in 1/s.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub zero_upcrossing_rate: Option<Real>,
    /// `sqrt(1 - lambda_1^2 / (lambda_0 lambda_2))`
    #[serde(skip_serializing_if = "Option::is_none")]
    pub bandwidth: Option<Real>,
    /// `lambda_2 / sqrt(lambda_0 lambda_4)`; left out where `lambda_4` is infinite.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub irregularity: Option<Real>,
    /// `lambda_0`, `lambda_1`, `lambda_2`, `lambda_4` of the one-sided density over omega in rad/s. Left out where one
    /// of them is not known.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub spectral_moments: Option<[Real; 4]>,
    /// Whether a moment exists that could not be computed to six digits.
    #[serde(skip)]
    pub unreached: bool,
}

/// A limit state.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct LimitStateResult {
    /// Its full name.
    pub name: String,
    /// The condition as written.
    pub failure_when: String,
    /// The reference period in s.
    pub reference_period: f64,
    /// The method, as the language names it.
    pub first_passage: &'static str,
    /// The mean rate of entries into failure, in 1/s.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub upcrossing_rate: Option<Real>,
    /// The probability of being failed at the start.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub initial_failure_probability: Option<Real>,
    /// The probability of surviving the reference period.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub survival: Option<Real>,
    /// The probability of failing within it.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub failure_probability: Option<Real>,
    /// The reliability index over it.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reliability_index: Option<Real>,
    /// The mean time to failure in s.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub mean_time_to_failure: Option<Real>,
    /// An estimate of the relative error of the failure probability, from rounding in the moments.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub relative_error: Option<Real>,
    /// Survival at the times asked for.
    pub table: Vec<TableRow>,
    /// The extreme of the margin over the reference period, where it is asked for.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub extremes: Option<Extremes>,
    /// What is demanded.
    pub requirements: Vec<RequirementResult>,
    /// What the results rest on.
    pub assumptions: Vec<Assumption>,
}

/// Survival at a time.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct TableRow {
    /// The time in s.
    pub t: f64,
    /// The probability of surviving it.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub survival: Option<Real>,
    /// The probability of failing within it.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub failure_probability: Option<Real>,
    /// The reliability index over it.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub reliability_index: Option<Real>,
    /// The mean rate of entries into failure at that time, in 1/s.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub upcrossing_rate: Option<Real>,
}

/// The distribution of the extreme of a margin on the side on which it fails, over the reference period: the largest value,
/// the least, or the largest modulus.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Extremes {
    /// Its mean, in the margin's unit.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub mean: Option<Real>,
    /// Levels that it does not go beyond, with the probability of that.
    pub levels: Vec<ExtremeLevel>,
}

/// A fractile of an extreme.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct ExtremeLevel {
    /// The probability that the extreme does not go beyond the level.
    pub fractile: f64,
    /// The level, in the margin's unit.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub level: Option<Real>,
}

/// A demand and its verdict.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct RequirementResult {
    /// The demand as written.
    pub text: String,
    /// What was found; left out where it does not exist.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub value: Option<Real>,
    /// What is demanded.
    pub limit: f64,
    /// The time it is about, in s.
    pub over: f64,
    /// `met`, `not met` or `not established`.
    pub verdict: &'static str,
    /// The value and the limit as people read them.
    #[serde(skip)]
    pub shown: Shown,
    /// Where the demand comes from.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub basis: Option<String>,
}

/// A judged value in the units of the text.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Shown {
    /// What was demanded, with its time where that matters.
    pub demand: String,
    /// What was found.
    pub value: String,
}

/// Something the results rest on.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Assumption {
    /// A short name.
    pub code: &'static str,
    /// In words, with the number that matters.
    pub text: String,
}

/// A check by the author and whether it holds.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct ExpectationResult {
    /// As written.
    pub text: String,
    /// What was found; left out where it does not exist.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub value: Option<Real>,
    /// What was expected.
    pub expected: f64,
    /// How near it must be.
    pub tolerance: f64,
    /// `relative` or `absolute`.
    pub tolerance_kind: &'static str,
    /// Whether it is that near.
    pub holds: bool,
    /// The value as people read it.
    #[serde(skip)]
    pub shown: String,
    /// Where the expected value comes from.
    #[serde(skip)]
    pub basis: Option<String>,
}

/// A finding that did not stop the computation.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Warning {
    /// Its code.
    pub code: &'static str,
    /// Its message.
    pub message: String,
    /// The file.
    pub file: String,
    /// The line, from 1.
    pub line: usize,
    /// The column, from 1, in Unicode scalar values.
    pub column: usize,
    /// The reason for which the file accepts it.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub accepted: Option<String>,
}

impl Results {
    /// Whether every requirement is met and every expectation holds.
    pub fn all_hold(&self) -> bool {
        let mut requirements = self
            .limit_states
            .iter()
            .flat_map(|limit_state| &limit_state.requirements);
        requirements.all(|requirement| requirement.verdict == "met")
            && self.expectations.iter().all(|expectation| expectation.holds)
    }
}
