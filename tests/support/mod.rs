//! Running the program on texts in memory, as `check` and `evaluate` run it on files.

use outcross::check::{Settings, check};
use outcross::diagnostics::{Diagnostic, any_error};
use outcross::results::{LimitStateResult, Moments, Results, evaluate};
use outcross::source::{Files, Reader, Unreadable};
use std::collections::BTreeMap;
use std::path::{Path, PathBuf};

/// The name of the model among the texts.
const MODEL: &str = "model.limit";

/// Texts by path, in place of a disk.
pub struct Texts(BTreeMap<PathBuf, String>);

impl Reader for Texts {
    fn read(&self, path: &Path) -> Result<String, Unreadable> {
        self.0.get(path).cloned().ok_or(Unreadable::Missing)
    }

    fn identity(&self, path: &Path) -> PathBuf {
        path.to_path_buf()
    }
}

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
        let mut codes: Vec<&str> = self
            .findings
            .iter()
            .filter(|finding| any_error(std::slice::from_ref(finding)))
            .map(|finding| finding.code.name())
            .collect();
        codes.sort_unstable();
        codes.dedup();
        codes
    }
}

/// Checks and computes a model; its neighbours are `(path, text)`.
pub fn run_beside(model: &str, neighbours: &[(&str, &str)]) -> Outcome {
    let mut texts = BTreeMap::from([(PathBuf::from(MODEL), model.to_string())]);
    texts.extend(
        neighbours
            .iter()
            .map(|(path, text)| (PathBuf::from(path), text.to_string())),
    );
    let settings = Settings {
        require_parameters: true,
        ..Settings::default()
    };
    let mut files = Files::new();
    let (model, findings) = check(&mut files, &Texts(texts), Path::new(MODEL), &settings);
    let results = model.map(|model| evaluate(&files, &model, &findings, &[]));
    Outcome { results, findings }
}

/// Checks and computes a model.
pub fn run(model: &str) -> Outcome {
    run_beside(model, &[])
}

/// The results of a model in which nothing is wrong.
pub fn results(model: &str) -> Results {
    let outcome = run(model);
    let findings: Vec<&str> = outcome.findings.iter().map(|finding| &*finding.message).collect();
    outcome.results.unwrap_or_else(|| panic!("{findings:#?} in\n{model}"))
}

/// The codes of what is wrong with a model.
pub fn errors(model: &str) -> Vec<&'static str> {
    run(model).errors()
}

/// A process or margin of some results.
pub fn moments<'r>(results: &'r Results, name: &str) -> &'r Moments {
    let mut all = results.processes.iter().chain(&results.margins);
    all.find(|one| one.name == name).unwrap_or_else(|| panic!("{name}"))
}

/// A limit state of some results.
pub fn limit_state<'r>(results: &'r Results, name: &str) -> &'r LimitStateResult {
    let found = results.limit_states.iter().find(|one| one.name == name);
    found.unwrap_or_else(|| panic!("{name}"))
}

/// A spectral moment of a process or margin: 0 for lambda_0, 1 and 2 for lambda_1 and lambda_2, 3 for lambda_4.
pub fn spectral_moment(of: &Moments, place: usize) -> f64 {
    let moments = of.spectral_moments.unwrap_or_else(|| panic!("moments of {}", of.name));
    moments[place].value()
}

/// The correlation coefficient of a process at a lag, read off the variances of `X(t) + X(t - d)` and `X(t) - X(t - d)`:
/// their difference is four times the covariance. The model has a process called `x`; `lag` is written with its unit.
pub fn correlation(model: &str, lag: &str) -> f64 {
    let model = format!("{model}\nmargin plus = x + delay(x, by: {lag})\nmargin minus = x - delay(x, by: {lag})\n");
    let results = results(&model);
    let variance = |name: &str| spectral_moment(moments(&results, name), 0);
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
