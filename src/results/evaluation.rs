//! From the checked model to its results.

use super::limit_state::{DIGITS, Judged};
use super::number::Real;
use super::{ExpectationResult, LimitStateResult, ModelIdentity, Moments, ParameterValue, Results, Tool, Warning};
use super::{extremes, findings};
use crate::check::{Expectation, Kind, LimitState, Model, Named, ProcessQuantity, Subject, Tolerance};
use crate::covariance::moments::{FormMoments, Moment, MomentTable};
use crate::diagnostics::{Code, Diagnostic, sort};
use crate::source::Files;
use crate::units::{Unit, show, show_number};
use sha2::{Digest, Sha256};
use std::f64::consts::PI;

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
