//! The JSON documents that other programs rely on: their keys, the types and units of their values, what is left out.

use super::{Folder, GUST, near};
use serde_json::Value;
use std::f64::consts::PI;

fn evaluated(model: &str) -> Value {
    Folder::with("a.limit", model)
        .run(["evaluate", "a.limit", "--json"])
        .json()
}

/// Holds that an object has these keys, in this order of the alphabet, and no others.
fn has_keys(value: &Value, keys: &[&str]) {
    let found: Vec<&str> = value
        .as_object()
        .into_iter()
        .flat_map(|object| object.keys().map(String::as_str))
        .collect();
    let mut wanted = keys.to_vec();
    wanted.sort_unstable();
    assert_eq!(found, wanted, "{value}");
}

/// Holds a number to six digits.
fn is_near(value: &Value, expected: f64) {
    let number = value.as_f64().unwrap_or_else(|| panic!("{value} is no number"));
    assert!(near(number, expected, 1e-6), "{number:e} instead of {expected:e}");
}

/// Holds that no value in a document is null.
fn without_null(value: &Value) {
    match value {
        Value::Null => panic!("a null"),
        Value::Array(values) => values.iter().for_each(without_null),
        Value::Object(values) => values.values().for_each(without_null),
        _ => {}
    }
}

const MOMENTS: [&str; 9] = [
    "name",
    "unit",
    "mean",
    "standard_deviation",
    "derivative_standard_deviation",
    "zero_upcrossing_rate",
    "bandwidth",
    "irregularity",
    "spectral_moments",
];

#[test]
fn the_document() {
    let document = evaluated(GUST);
    without_null(&document);
    has_keys(
        &document,
        &[
            "format",
            "version",
            "tool",
            "model",
            "parameters",
            "processes",
            "margins",
            "limit_states",
            "expectations",
            "warnings",
        ],
    );
    assert_eq!(document["format"], "outcross-results");
    assert_eq!(document["version"], 1);
    assert_eq!(
        document["tool"],
        serde_json::json!({ "name": "outcross", "version": env!("CARGO_PKG_VERSION") })
    );
    has_keys(&document["model"], &["file", "title", "sha256"]);
    assert_eq!(document["model"]["file"], "a.limit");
    assert_eq!(document["model"]["title"], "Gust on a sign");
    assert_eq!(document["warnings"], serde_json::json!([]));
    assert_eq!(
        document["parameters"],
        serde_json::json!([
            { "name": "level", "value": 6000.0, "unit": "N" },
            { "name": "memory", "value": 2.0, "unit": "s" },
        ])
    );
}

/// The digest of the empty message is well known (FIPS 180-4 examples; from memory).
#[test]
fn the_digest_is_that_of_the_bytes() {
    let digest = evaluated("")["model"]["sha256"].clone();
    assert_eq!(
        digest,
        "e3b0c44298fc1c149afbf4c8996fb92427ae41e4649b934ca495991b7852b855"
    );
}

/// Moments of exp(-u^2/2) with u = tau / 2 s, by hand: lambda_n is the variance times the n-th absolute moment of a
/// normal variable of standard deviation 1/(2 s): 1, sqrt(2/pi)/2, 1/4, 3/16.
#[test]
fn moments_are_in_si_units() {
    let document = evaluated(GUST);
    let gust = &document["processes"][0];
    has_keys(gust, &MOMENTS);
    assert_eq!(gust["name"], "gust");
    assert_eq!(gust["unit"], "N");
    is_near(&gust["mean"], 2000.0);
    is_near(&gust["standard_deviation"], 1000.0);
    is_near(&gust["derivative_standard_deviation"], 500.0);
    is_near(&gust["zero_upcrossing_rate"], 0.5 / (2.0 * PI));
    is_near(&gust["bandwidth"], (1.0 - 2.0 / PI).sqrt());
    is_near(&gust["irregularity"], (1.0_f64 / 3.0).sqrt());
    for (index, moment) in [1e6, 1e6 * (2.0 / PI).sqrt() / 2.0, 1e6 / 4.0, 1e6 * 3.0 / 16.0]
        .into_iter()
        .enumerate()
    {
        is_near(&gust["spectral_moments"][index], moment);
    }
    let pull = &document["margins"][0];
    has_keys(pull, &MOMENTS);
    is_near(&pull["mean"], 4000.0);
    is_near(&pull["spectral_moments"][0], 4e6);
}

/// A barrier four standard deviations off. Phi(-4) is 3.167124e-5 in every table of the normal distribution; the rate is
/// Rice's.
#[test]
fn limit_states() {
    let document = evaluated(GUST);
    let state = &document["limit_states"][0];
    has_keys(
        state,
        &[
            "name",
            "failure_when",
            "reference_period",
            "first_passage",
            "upcrossing_rate",
            "initial_failure_probability",
            "survival",
            "failure_probability",
            "reliability_index",
            "mean_time_to_failure",
            "relative_error",
            "table",
            "requirements",
            "assumptions",
        ],
    );
    assert_eq!(state["name"], "bending");
    assert_eq!(state["failure_when"], "gust > level");
    assert_eq!(state["first_passage"], "poisson");
    assert_eq!(state["reference_period"], 1000.0);
    let initial = 3.167_124_183e-5;
    let rate = 0.5 / (2.0 * PI) * (-8.0_f64).exp();
    let failure = |time: f64| initial - (1.0 - initial) * (-rate * time).exp_m1();
    is_near(&state["upcrossing_rate"], rate);
    is_near(&state["initial_failure_probability"], initial);
    is_near(&state["failure_probability"], failure(1000.0));
    is_near(&state["survival"], 1.0 - failure(1000.0));
    is_near(&state["mean_time_to_failure"], (1.0 - initial) / rate);
    assert!(
        state["relative_error"]
            .as_f64()
            .is_some_and(|error| error > 0.0 && error < 1e-9)
    );
    let table = &state["table"];
    assert_eq!(table.as_array().map(Vec::len), Some(2));
    has_keys(
        &table[0],
        &[
            "t",
            "survival",
            "failure_probability",
            "reliability_index",
            "upcrossing_rate",
        ],
    );
    is_near(&table[0]["t"], 60.0);
    is_near(&table[0]["failure_probability"], failure(60.0));
    assert_eq!(table[1]["reliability_index"], state["reliability_index"]);
    for assumption in state["assumptions"].as_array().into_iter().flatten() {
        has_keys(assumption, &["code", "text"]);
    }
}

#[test]
fn requirements() {
    let document = evaluated(GUST);
    let requirements = &document["limit_states"][0]["requirements"];
    has_keys(
        &requirements[0],
        &["text", "value", "limit", "over", "verdict", "basis"],
    );
    assert_eq!(requirements[0]["text"], "failure_probability <= 5 %");
    assert_eq!(requirements[0]["limit"], 0.05);
    assert_eq!(requirements[0]["over"], 1000.0);
    assert_eq!(requirements[0]["verdict"], "met");
    assert_eq!(requirements[0]["basis"], "Brief, 4.2");
    assert_eq!(
        requirements[0]["value"],
        document["limit_states"][0]["failure_probability"]
    );
    has_keys(&requirements[1], &["text", "value", "limit", "over", "verdict"]);
    assert_eq!(requirements[1]["over"], 600.0);
}

#[test]
fn expectations() {
    let document = evaluated(GUST);
    let expectations = &document["expectations"];
    let keys = ["text", "value", "expected", "tolerance", "tolerance_kind", "holds"];
    has_keys(&expectations[0], &keys);
    has_keys(&expectations[1], &keys);
    assert_eq!(expectations[0]["text"], "standard_deviation(pull) = 2 kN within 0.1 %");
    assert_eq!(expectations[0]["expected"], 2000.0);
    assert_eq!(expectations[0]["tolerance"], 0.001);
    assert_eq!(expectations[0]["tolerance_kind"], "relative");
    assert_eq!(expectations[0]["holds"], true);
    is_near(&expectations[0]["value"], 2000.0);
    assert_eq!(expectations[1]["text"], "mean(gust) = 2 kN within 1 N");
    assert_eq!(expectations[1]["tolerance"], 1.0);
    assert_eq!(expectations[1]["tolerance_kind"], "absolute");
}

#[test]
fn what_does_not_exist_is_left_out_and_what_is_infinite_is_a_word() {
    let rough = "process rough = gaussian(standard_deviation: 1, correlation: exponential(length: 1 s))
                 process once = gaussian(standard_deviation: 1, correlation: matern(smoothness: 3/2, length: 1 s))
                 expect bandwidth(rough) = 0.5 within 1 %";
    let document = evaluated(rough);
    without_null(&document);
    has_keys(&document["model"], &["file", "sha256"]);
    let kept = |lost: &[&str]| -> Vec<&str> { MOMENTS.into_iter().filter(|key| !lost.contains(key)).collect() };
    let (rough, once) = (&document["processes"][0], &document["processes"][1]);
    has_keys(rough, &kept(&["bandwidth", "irregularity"]));
    assert_eq!(rough["derivative_standard_deviation"], "infinite");
    assert_eq!(rough["zero_upcrossing_rate"], "infinite");
    assert_eq!(
        rough["spectral_moments"],
        serde_json::json!([1.0, "infinite", "infinite", "infinite"])
    );
    assert_eq!(rough["unit"], "1");
    has_keys(once, &kept(&["irregularity"]));
    assert_eq!(once["spectral_moments"][3], "infinite");
    // The expectation about what does not exist does not hold.
    let expectation = &document["expectations"][0];
    has_keys(
        expectation,
        &["text", "expected", "tolerance", "tolerance_kind", "holds"],
    );
    assert_eq!(expectation["holds"], false);
}

#[test]
fn a_failure_that_cannot_be_told_from_never_keeps_its_digits() {
    let folder = Folder::with("a.limit", GUST);
    let far = |level: &str| {
        let run = folder
            .run(["evaluate", "a.limit", "--json", "--set", level])
            .ends_with(0);
        run.json()["limit_states"][0].clone()
    };
    // Fifteen standard deviations: 0.5/(2 pi) exp(-225/2) /s, to which the start adds a part in 10^5.
    let state = far("level=17 kN");
    assert_eq!(state["survival"], 1.0);
    let rate = 0.5 / (2.0 * PI) * (-112.5_f64).exp();
    let probability = state["failure_probability"].as_f64().unwrap_or(f64::NAN);
    assert!(near(probability, rate * 1000.0, 1e-2), "{probability:e}");
    // Beyond the smallest double the probability is 0, and there is no end to the time until failure.
    let state = far("level=1000 kN");
    assert_eq!(state["failure_probability"], 0.0);
    assert_eq!(state["mean_time_to_failure"], "infinite");
    // The index lives on logarithms: Phi(-b) is about exp(-b^2/2) / (b sqrt(2 pi)), to be 1000/(4 pi) exp(-998^2/2).
    let square = 998.0 * 998.0 - 2.0 * ((1000.0 / (4.0 * PI)).ln() + (998.0 * (2.0 * PI).sqrt()).ln());
    is_near(&state["reliability_index"], square.sqrt());
}

#[test]
fn several_files_give_an_array() {
    let folder = Folder::with("a.limit", GUST);
    folder.write("b.limit", GUST);
    let one = folder.run(["evaluate", "--json", "a.limit"]).ends_with(0).json();
    let both = folder
        .run(["evaluate", "--json", "a.limit", "b.limit"])
        .ends_with(0)
        .json();
    assert_eq!(both.as_array().map(Vec::len), Some(2));
    assert_eq!(both[0], one);
    assert_eq!(both[1]["model"]["file"], "b.limit");
    let checked = folder
        .run(["check", "--json", "a.limit", "b.limit"])
        .ends_with(0)
        .json();
    assert_eq!(checked.as_array().map(Vec::len), Some(2));
}

#[test]
fn parts_are_named_by_their_part() {
    let folder = Folder::with("a.limit", "use \"b.limit\" as sign (level: 7 kN)");
    folder.write("b.limit", GUST);
    let document = folder.run(["evaluate", "--json", "a.limit"]).ends_with(0).json();
    assert_eq!(document["processes"][0]["name"], "sign.gust");
    assert_eq!(document["margins"][0]["name"], "sign.pull");
    assert_eq!(document["limit_states"][0]["name"], "sign.bending");
}

#[test]
fn warnings_have_places() {
    let two_lengths = "process a = gaussian(standard_deviation: 1\n    \
                       correlation: damped_cosine(scale_of_fluctuation: 1 s, frequency: 0.1 Hz))";
    let document = evaluated(two_lengths);
    let warning = &document["warnings"][0];
    has_keys(warning, &["code", "message", "file", "line", "column"]);
    assert_eq!(warning["code"], "kernel/two-lengths");
    assert_eq!(warning["line"], 2);
}

#[test]
fn findings() {
    let folder = Folder::with("a.limit", "constant größe = 3 m\nconstant b = größe + 2 s\n");
    let run = folder.run(["check", "--json", "a.limit"]).ends_with(2);
    assert_eq!(run.err, "");
    let document = run.json();
    without_null(&document);
    has_keys(&document, &["format", "version", "diagnostics"]);
    assert_eq!(document["format"], "outcross-diagnostics");
    assert_eq!(document["version"], 1);
    let finding = &document["diagnostics"][0];
    let keys = [
        "code",
        "severity",
        "message",
        "file",
        "line",
        "column",
        "end_line",
        "end_column",
        "labels",
    ];
    let found: Vec<&str> = finding
        .as_object()
        .into_iter()
        .flat_map(|one| one.keys().map(String::as_str))
        .collect();
    assert!(keys.iter().all(|key| found.contains(key)), "{finding}");
    assert!(
        found.iter().all(|key| keys.contains(key) || *key == "help"),
        "{finding}"
    );
    assert_eq!(finding["severity"], "error");
    assert_eq!(finding["file"], "a.limit");
    assert_eq!(finding["line"], 2);
    let sound = folder.run(["check", "--json", "-"]).ends_with(0).json();
    assert_eq!(sound["diagnostics"], serde_json::json!([]));
}
