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

const README: &str = include_str!("../../README.md");

/// What stands in a block of the readme that begins with this line.
fn of_readme(fence: &str) -> &'static str {
    let (_, from) = README
        .split_once(&format!("\n{fence}\n"))
        .expect("the readme has the block");
    from.split_once("```").expect("a block ends").0
}

fn without_digest(text: &str) -> String {
    let lines = text.lines().map(|line| line.split(" (SHA-256").next().unwrap_or(line));
    lines.collect::<Vec<_>>().join("\n")
}

#[test]
fn the_readme_shows_the_example_and_what_it_prints() {
    let name = "footbridge_hanger.limit";
    let file = fs::read_to_string(Path::new(env!("CARGO_MANIFEST_DIR")).join("examples").join(name));
    assert_eq!(
        of_readme("```limit examples/footbridge_hanger.limit"),
        file.expect("the example can be read")
    );
    let run = run("evaluate", name).ends_with(0);
    assert_eq!(without_digest(of_readme("```text")), without_digest(&run.out));
}
