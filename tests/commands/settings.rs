//! `--set` and `--only`.

use super::{Folder, GUST, Run};
use serde_json::Value;

fn set(folder: &Folder, value: &str) -> Run {
    folder.run(["evaluate", "a.limit", "--json", "--set", value])
}

#[test]
fn a_parameter_is_set_in_any_unit_of_its_dimension() {
    let folder = Folder::with("a.limit", GUST);
    let documents: Vec<Value> = [
        "level=6.5 kN",
        "level=6500 N",
        " level = 0.0065 MN",
        "level = 5 kN + 1500 N",
    ]
    .iter()
    .map(|value| set(&folder, value).ends_with(0).json())
    .collect();
    assert_eq!(documents[0]["parameters"][0]["value"], 6500.0);
    for document in &documents[1..] {
        assert_eq!(*document, documents[0]);
    }
    let as_written = folder.run(["evaluate", "a.limit", "--json"]).ends_with(0).json();
    assert_ne!(as_written["limit_states"], documents[0]["limit_states"]);
}

#[test]
fn several_parameters_are_set() {
    let folder = Folder::with("a.limit", GUST);
    let run = folder
        .run(["evaluate", "a.limit", "--set", "level=7 kN", "--set", "memory=0.1 min"])
        .ends_with(0);
    assert!(run.out.contains("7 kN") && run.out.contains("6 s"), "{}", run.out);
}

#[test]
fn a_required_parameter_is_set() {
    let text = GUST.replace(
        "parameter level : kN = 6 kN     basis \"Sheet 3\"",
        "parameter level : kN",
    );
    let folder = Folder::with("a.limit", text);
    folder.run(["check", "a.limit"]).ends_with(0);
    let run = folder.run(["evaluate", "a.limit"]).ends_with(2);
    assert!(run.err.contains("parameter/required"), "{}", run.err);
    set(&folder, "level=6 kN").ends_with(0);
}

#[test]
fn faults_of_a_setting_are_shown_in_its_text() {
    let folder = Folder::with("a.limit", GUST);
    for (value, code, words) in [
        ("levle=6 kN", "name/unknown", "level"),
        ("level=6 m", "unit/mismatch", "6 m"),
        ("level=6 Hz", "unit/mismatch", "6 Hz"),
        ("level", "syntax/unexpected", "NAME=VALUE"),
        ("level=", "syntax/unexpected", "--set"),
        ("level=6 kN)", "syntax/unexpected", "--set"),
        ("level=6 furlong", "unit/unknown", "furlong"),
        ("level=1e999 kN", "value/not-finite", "1e999"),
        ("pull=6 kN", "name/unknown", "pull"),
    ] {
        for command in ["check", "evaluate"] {
            let run = folder.run([command, "a.limit", "--set", value]).ends_with(2);
            assert!(run.err.contains(code), "{value}: {}", run.err);
            assert!(run.err.contains(words), "{value}: {}", run.err);
        }
    }
}

#[test]
fn a_parameter_of_a_part_is_not_reached() {
    let folder = Folder::with("a.limit", "use \"b.limit\" as b (level: 7 kN)");
    folder.write("b.limit", GUST);
    folder.run(["evaluate", "a.limit"]).ends_with(0);
    folder
        .run(["evaluate", "a.limit", "--set", "b.level=9 kN"])
        .ends_with(2);
}

/// Two limit states, of which the second is not met.
fn two_states() -> Folder {
    let second = "limit state bowing { failure when gust > 4 kN  reference period 1 h  require survival >= 0.9 }";
    Folder::with("a.limit", format!("{GUST}\n{second}\n"))
}

#[test]
fn only_the_limit_states_named_are_computed_and_judged() {
    let folder = two_states();
    folder.run(["evaluate", "a.limit"]).ends_with(1);
    let run = folder
        .run(["evaluate", "a.limit", "--json", "--only", "bending"])
        .ends_with(0);
    let document = run.json();
    let names: Vec<&Value> = document["limit_states"]
        .as_array()
        .into_iter()
        .flatten()
        .map(|state| &state["name"])
        .collect();
    assert_eq!(names, ["bending"]);
    let both = ["evaluate", "a.limit", "--json", "--only", "bowing", "--only", "bending"];
    let run = folder.run(both).ends_with(1);
    assert_eq!(run.json()["limit_states"].as_array().map(Vec::len), Some(2));
}

#[test]
fn an_unknown_limit_state_is_refused() {
    let folder = two_states();
    let run = folder.run(["evaluate", "a.limit", "--only", "bendin"]).ends_with(2);
    assert!(
        run.err.contains("`bendin`") && run.err.contains("bending"),
        "{}",
        run.err
    );
    assert_eq!(run.out, "");
    let run = folder.run(["evaluate", "a.limit", "--only", "x"]).ends_with(2);
    assert!(run.err.contains("bending") && run.err.contains("bowing"), "{}", run.err);
}
