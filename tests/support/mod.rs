//! Running the program on texts in memory, as `check` and `evaluate` run it on files, and reading its results as another
//! program would: from the JSON document.

pub mod memory;
pub mod random;

use memory::{Memory, Run};
use outcross::check::Model;
use outcross::diagnostics::{Diagnostic, Severity};
use outcross::results::evaluate;
use serde_json::Value;
use std::collections::BTreeSet;

/// The name of the model among the texts.
const MODEL: &str = "model.limit";

/// What became of a model.
pub struct Outcome {
    /// Its results, unless something is wrong with it.
    pub results: Option<Results>,
    /// Everything found.
    pub findings: Vec<Diagnostic>,
}

impl Outcome {
    /// The codes of the errors, each once.
    pub fn errors(&self) -> Vec<&'static str> {
        let errors = self
            .findings
            .iter()
            .filter(|finding| finding.code.severity() == Severity::Error);
        let codes: BTreeSet<&str> = errors.map(|finding| finding.code.name()).collect();
        codes.into_iter().collect()
    }
}

/// Checks a model beside other texts, `(path, text)`.
fn checked(model: &str, neighbours: &[(&str, &str)]) -> Run {
    let texts = Memory::of(MODEL, model);
    let texts = neighbours
        .iter()
        .fold(texts, |texts, (path, text)| texts.with(path, text));
    texts.run(MODEL, true)
}

/// Checks and computes a model beside other texts, `(path, text)`.
fn run_beside(model: &str, neighbours: &[(&str, &str)]) -> Outcome {
    let run = checked(model, neighbours);
    let results = run.model.map(|model| {
        let results = evaluate(&run.files, &model, &run.diagnostics, &[]);
        Results(serde_json::to_value(results).expect("results are JSON"))
    });
    let findings = run.diagnostics;
    Outcome { results, findings }
}

/// Checks and computes a model.
pub fn run(model: &str) -> Outcome {
    run_beside(model, &[])
}

/// The model that a text says, which must be sound.
#[track_caller]
pub fn model(text: &str) -> Model {
    let run = checked(text, &[]);
    sound(run.model, &run.diagnostics, text)
}

/// The results of a model in which nothing is wrong.
#[track_caller]
pub fn results(model: &str) -> Results {
    results_beside(model, &[])
}

/// The same beside other texts, `(path, text)`.
#[track_caller]
pub fn results_beside(model: &str, neighbours: &[(&str, &str)]) -> Results {
    let outcome = run_beside(model, neighbours);
    sound(outcome.results, &outcome.findings, model)
}

#[track_caller]
fn sound<T>(found: Option<T>, findings: &[Diagnostic], text: &str) -> T {
    found.unwrap_or_else(|| {
        let messages: Vec<&str> = findings.iter().map(|finding| &*finding.message).collect();
        panic!("{messages:#?} in\n{text}")
    })
}

/// The document of `evaluate --json`.
#[derive(Clone, Debug, PartialEq)]
pub struct Results(pub Value);

impl Results {
    /// A process or margin.
    #[track_caller]
    pub fn moments(&self, name: &str) -> Entry<'_> {
        self.entries("processes")
            .chain(self.entries("margins"))
            .find(|entry| entry.0["name"] == name)
            .unwrap_or_else(|| panic!("no process or margin {name}"))
    }

    /// A limit state.
    #[track_caller]
    pub fn limit_state(&self, name: &str) -> Entry<'_> {
        self.entries("limit_states")
            .find(|entry| entry.0["name"] == name)
            .unwrap_or_else(|| panic!("no limit state {name}"))
    }

    /// The entries of a list.
    pub fn entries(&self, list: &str) -> impl Iterator<Item = Entry<'_>> {
        self.0[list].as_array().into_iter().flatten().map(Entry)
    }

    /// Whether every expectation holds, and there is one.
    pub fn expectations_hold(&self) -> bool {
        let mut count = 0;
        self.entries("expectations")
            .inspect(|_| count += 1)
            .all(|one| one.0["holds"] == true)
            && count > 0
    }
}

/// A process, margin, limit state, row or requirement of the document.
#[derive(Clone, Copy, Debug)]
pub struct Entry<'r>(pub &'r Value);

impl Entry<'_> {
    /// A number, which must be there; infinite ones are words.
    #[track_caller]
    pub fn number(&self, key: &str) -> f64 {
        match number(&self.0[key]) {
            Some(number) => number,
            None => panic!("no number {key} in {:#}", self.0),
        }
    }

    /// lambda_0, lambda_1, lambda_2 and lambda_4.
    #[track_caller]
    pub fn spectral_moments(&self) -> [f64; 4] {
        let moments = &self.0["spectral_moments"];
        std::array::from_fn(|place| match number(&moments[place]) {
            Some(number) => number,
            None => panic!("no spectral moments in {:#}", self.0),
        })
    }

    /// The verdicts of a limit state.
    pub fn verdicts(&self) -> Vec<&str> {
        let requirements = self.0["requirements"].as_array().into_iter().flatten();
        requirements.filter_map(|one| one["verdict"].as_str()).collect()
    }

    /// The rows of a limit state's table.
    pub fn table(&self) -> impl Iterator<Item = Entry<'_>> {
        self.0["table"].as_array().into_iter().flatten().map(Entry)
    }
}

fn number(value: &Value) -> Option<f64> {
    match value.as_str() {
        Some("infinite") => Some(f64::INFINITY),
        Some("-infinite") => Some(f64::NEG_INFINITY),
        _ => value.as_f64(),
    }
}

/// The correlation coefficient of a process at a lag, read off the variances of `X(t) + X(t - d)` and `X(t) - X(t - d)`:
/// their difference is four times the covariance. The model has a process called `x`; `lag` is written with its unit.
#[track_caller]
pub fn correlation(model: &str, lag: &str) -> f64 {
    let results = results(&format!(
        "{model}\nmargin plus = x + delay(x, by: {lag})\nmargin minus = x - delay(x, by: {lag})\n"
    ));
    let variance = |name: &str| results.moments(name).number("standard_deviation").powi(2);
    (variance("plus") - variance("minus")) / (4.0 * variance("x"))
}

/// Fails unless two numbers agree within a share of the expected one.
#[track_caller]
pub fn close(found: f64, expected: f64, relative: f64, what: &str) {
    within(found, expected, relative * expected.abs(), what);
}

/// Fails unless two numbers agree within a distance.
#[track_caller]
pub fn within(found: f64, expected: f64, distance: f64, what: &str) {
    let miss = (found - expected).abs();
    assert!(
        miss <= distance,
        "{what}: {found:e}, expected {expected:e}, off by {miss:e}"
    );
}
