//! The examples: each runs without a finding, each requirement is met, each expectation of its author holds.

use super::{Run, program};
use std::fs;
use std::path::Path;

/// Every `.limit` file of the folder, those that are parts aside.
fn examples() -> Vec<String> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("examples");
    let mut names: Vec<String> = fs::read_dir(folder)
        .expect("there are examples")
        .map(|entry| entry.expect("a folder can be read").file_name())
        .map(|name| name.into_string().expect("names of examples are plain"))
        .filter(|name| name.ends_with(".limit"))
        .collect();
    names.sort();
    names
}

fn run(command: &str, example: &str) -> Run {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    Run::of(program(root).args([command, &format!("examples/{example}")]), b"")
}

#[test]
fn examples_are_sound() {
    assert!(examples().len() >= 3);
    for example in examples() {
        let run = run("check", &example).ends_with(0);
        assert_eq!(run.err, "", "{example}");
    }
}

#[test]
fn examples_show_results_in_the_units_of_their_trade() {
    let mut settings = insta::Settings::clone_current();
    settings.add_filter(
        r"\(SHA-256 [0-9a-f]{12}\.\.\.\), outcross \S+",
        "(SHA-256 ...), outcross ...",
    );
    settings.bind(|| {
        for example in examples() {
            let run = run("evaluate", &example).ends_with(0);
            assert_eq!(run.err, "", "{example}");
            insta::assert_snapshot!(example.trim_end_matches(".limit"), run.out);
        }
    });
}
