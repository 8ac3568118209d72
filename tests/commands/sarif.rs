//! The log for tools that gather findings, held to the schema of its standard.

use super::{Folder, GUST, Run};
use serde_json::{Value, json};
use std::fs;
use std::path::Path;

/// A library with a fault, used twice and by way of another file; a warning beside it.
fn project() -> Folder {
    let folder = Folder::with(
        "models/deck.limit",
        "use \"../parts/mid span.limit\" as west\nuse \"../parts/mid span.limit\" as east\n",
    );
    folder.write("models/.git/keep", "");
    folder.write(
        "parts/mid span.limit",
        "use \"wind.limit\" as wind (deviation: -1 kN)\nconstant größe = 3 m + 2 kN\n",
    );
    folder.write(
        "parts/wind.limit",
        "parameter deviation : kN\n\
         process pull : kN = gaussian(\n    standard_deviation: deviation\n    correlation: exponential(length: 1 s)\n)\n",
    );
    folder.write("sound.limit", GUST);
    folder
}

#[track_caller]
fn valid(run: &Run) -> Value {
    let schema = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/diagnostics/sarif/sarif-schema-2.1.0.json");
    let schema = fs::read_to_string(schema).expect("the schema is there");
    // As published, the pattern of languages has a bracket too many, which is an error to a strict reader.
    let schema = schema.replace("[a-zA-Z]{2}]?$", "[a-zA-Z]{2}$");
    let schema = serde_json::from_str(&schema).expect("the schema is JSON");
    let validator = jsonschema::validator_for(&schema).expect("the schema is one");
    let log = run.json();
    let faults: Vec<String> = validator
        .iter_errors(&log)
        .map(|error| format!("{}: {error}", error.instance_path()))
        .collect();
    assert!(faults.is_empty(), "{faults:#?}\n{log:#}");
    log
}

#[test]
fn a_log_of_several_files() {
    let folder = project();
    let run = folder
        .run(["check", "--sarif", "--root", ".", "models/deck.limit", "sound.limit"])
        .ends_with(2);
    assert_eq!(run.err, "");
    let log = valid(&run);
    let run = &log["runs"][0];
    assert_eq!(
        run["invocations"],
        json!([{ "executionSuccessful": true, "exitCode": 2 }])
    );
    assert_eq!(run["columnKind"], "unicodeCodePoints");
    let results = run["results"].as_array().expect("results are a list");
    // The fault in `mid span.limit` is there twice and shown once, that in `wind.limit` too.
    let rules: Vec<&Value> = results.iter().map(|result| &result["ruleId"]).collect();
    assert_eq!(rules, ["unit/mismatch", "value/range"]);
    for (result, level) in results.iter().zip(["error", "error"]) {
        assert_eq!(result["level"], level);
        let rule = &run["tool"]["driver"]["rules"][result["ruleIndex"].as_u64().expect("an index") as usize];
        assert_eq!(rule["id"], result["ruleId"]);
        assert!(
            rule["help"]["markdown"]
                .as_str()
                .is_some_and(|page| page.contains("## Mended"))
        );
    }
    let place = &results[0]["locations"][0]["physicalLocation"];
    assert_eq!(
        place["artifactLocation"],
        json!({ "uri": "parts/mid%20span.limit", "uriBaseId": "ROOT" })
    );
    assert_eq!(
        place["region"],
        json!({ "startLine": 2, "startColumn": 24, "endLine": 2, "endColumn": 28 })
    );
    let root = run["originalUriBaseIds"]["ROOT"]["uri"].as_str().expect("a root");
    assert!(root.starts_with("file:///") && root.ends_with('/'), "{root}");
    let related = |result: &Value| -> Vec<String> {
        let places = result["relatedLocations"].as_array().into_iter().flatten();
        places
            .map(|one| {
                let uri = &one["physicalLocation"]["artifactLocation"]["uri"];
                format!(
                    "{}: {}",
                    uri.as_str().unwrap_or(""),
                    one["message"]["text"].as_str().unwrap_or("")
                )
            })
            .collect()
    };
    assert_eq!(
        related(&results[1]),
        [
            "parts/mid%20span.limit: `deviation` is set here",
            "parts/mid%20span.limit: used here as `wind`",
            "models/deck.limit: used here as `west`",
        ]
    );
}

#[test]
fn a_log_of_nothing() {
    let folder = project();
    let log = valid(&folder.run(["check", "--sarif", "sound.limit"]).ends_with(0));
    assert_eq!(log["runs"][0]["results"], json!([]));
    assert_eq!(log["runs"][0]["invocations"][0]["exitCode"], 0);
}

#[test]
fn warnings_are_no_errors() {
    let folder = Folder::with(
        "a.limit",
        "process a = gaussian(standard_deviation: 1, correlation: damped_cosine(scale_of_fluctuation: 1 s, frequency: 0.1 Hz))\n",
    );
    let log = valid(&folder.run(["check", "--sarif", "a.limit"]).ends_with(0));
    assert_eq!(log["runs"][0]["results"][0]["ruleId"], "kernel/two-lengths");
    assert_eq!(log["runs"][0]["results"][0]["level"], "warning");
    assert_eq!(log["runs"][0]["results"][0]["suppressions"], json!([]));
    let text = std::fs::read_to_string(folder.path("a.limit")).expect("it was written");
    folder.write(
        "a.limit",
        format!("{text}accept kernel/two-lengths because \"The shorter one.\"\n"),
    );
    let log = valid(&folder.run(["check", "--sarif", "a.limit"]).ends_with(0));
    let suppressions = &log["runs"][0]["results"][0]["suppressions"];
    assert_eq!(
        suppressions,
        &json!([{ "kind": "inSource", "justification": "The shorter one." }])
    );
}

#[test]
fn texts_that_are_no_files_have_a_name_alone() {
    let folder = Folder::with("a.limit", GUST);
    let run = Run::of(folder.command().args(["check", "--sarif", "-"]), b"constant a = ").ends_with(2);
    let log = valid(&run);
    let place = &log["runs"][0]["results"][0]["locations"][0]["physicalLocation"];
    assert_eq!(
        place["artifactLocation"],
        json!({ "description": { "text": "standard input" } })
    );
    for arguments in [
        ["a.limit", "--set", "level=3 m"],
        ["nowhere.limit", "--set", "level=3 kN"],
    ] {
        valid(
            &folder
                .run([&["check", "--sarif"], &arguments[..]].concat())
                .ends_with(2),
        );
    }
}

#[test]
fn models_of_two_projects() {
    let folder = Folder::with("one/a.limit", "constant a = b\n");
    folder.write("two/a.limit", "constant a = b\n");
    for project in ["one", "two"] {
        folder.write(&format!("{project}/.git/keep"), "");
    }
    let log = valid(
        &folder
            .run(["check", "--sarif", "one/a.limit", "two/a.limit"])
            .ends_with(2),
    );
    let bases = &log["runs"][0]["originalUriBaseIds"];
    assert!(bases["ROOT"]["uri"].as_str().is_some_and(|uri| uri.ends_with("/one/")));
    assert!(
        bases["ROOT_2"]["uri"]
            .as_str()
            .is_some_and(|uri| uri.ends_with("/two/"))
    );
    let results = log["runs"][0]["results"].as_array().map(Vec::len);
    assert_eq!(results, Some(2));
}

#[test]
fn one_document_at_a_time() {
    let folder = Folder::with("a.limit", GUST);
    assert_eq!(
        folder.run(["check", "--sarif", "--json", "a.limit"]).ends_with(2).out,
        ""
    );
    folder.run(["evaluate", "--sarif", "a.limit"]).ends_with(2);
}
