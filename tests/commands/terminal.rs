//! What is meant for people: help, explanations, colour; and readers that go away.

use super::{Folder, GUST, Run};
use outcross::diagnostics::Code;
use std::io::Write;
use std::process::{Command, Stdio};

const FAULTY: &str = "constant a = b\n";

fn colored(run: &Run) -> bool {
    run.err.contains('\u{1b}')
}

#[test]
fn colour_is_for_terminals_unless_asked_for() {
    let folder = Folder::with("a.limit", FAULTY);
    let check = |arguments: &[&str]| folder.run([&["check", "a.limit"], arguments].concat()).ends_with(2);
    assert!(!colored(&check(&[])), "standard error is a pipe here");
    assert!(!colored(&check(&["--color", "auto"])));
    assert!(!colored(&check(&["--color", "never"])));
    assert!(colored(&check(&["--color", "always"])));
    let mut without = folder.command();
    without.env("NO_COLOR", "1").args(["check", "a.limit"]);
    assert!(!colored(&Run::of(&mut without, b"")));
}

#[test]
fn colour_changes_nothing_but_colour() {
    let folder = Folder::with("a.limit", FAULTY);
    let plain = folder.run(["check", "a.limit"]);
    let colored = folder.run(["check", "a.limit", "--color", "always"]);
    let mut text = String::new();
    let mut rest = colored.err.as_str();
    while let Some((before, sequence)) = rest.split_once("\u{1b}[") {
        text.push_str(before);
        rest = sequence.split_once('m').map_or("", |(_, after)| after);
    }
    text.push_str(rest);
    assert_eq!(text, plain.err);
}

#[test]
fn help_says_what_the_results_are_worth_and_how_runs_end() {
    let folder = Folder::new();
    let help = |arguments: &[&str]| {
        let run = folder.run(arguments).ends_with(0);
        assert!(run.out.lines().all(|line| line.chars().count() <= 160), "{}", run.out);
        run.out.split_whitespace().collect::<Vec<_>>().join(" ")
    };
    for arguments in [
        &["--help"][..],
        &["-h"],
        &["help"],
        &["evaluate", "--help"],
        &["help", "evaluate"],
    ] {
        let text = help(arguments);
        for words in [
            "the judgement of a licensed engineer",
            "Exit status 0 done; every requirement is met",
            "1 done; a requirement is not met or not established",
            "3 a result could not be reached",
        ] {
            assert!(text.contains(words), "{arguments:?} lacks `{words}`");
        }
    }
    assert!(help(&["check", "--help"]).contains("Exit status 0 nothing is wrong"));
    for command in ["check", "evaluate"] {
        let text = help(&[command, "--help"]);
        for option in ["--set <NAME=VALUE>", "--json", "--color <WHEN>", "<FILE>..."] {
            assert!(text.contains(option), "{command} lacks {option}");
        }
    }
}

#[test]
fn version() {
    let run = Folder::new().run(["--version"]).ends_with(0);
    assert_eq!(run.out, format!("outcross {}\n", env!("CARGO_PKG_VERSION")));
}

#[test]
fn explain_lists_every_code_and_explains_each() {
    let folder = Folder::new();
    let list = folder.run(["explain"]).ends_with(0).out;
    assert_eq!(list.lines().count(), Code::ALL.len());
    for code in Code::ALL {
        assert!(
            list.lines().any(|line| line.starts_with(code.name())),
            "{}",
            code.name()
        );
        let run = folder.run(["explain", code.name()]).ends_with(0);
        assert!(!run.out.trim().is_empty(), "{}", code.name());
    }
}

#[test]
fn explain_of_an_unknown_code_offers_the_nearest() {
    let folder = Folder::new();
    let run = folder.run(["explain", "unit/mismach"]).ends_with(2);
    assert_eq!(run.out, "");
    assert!(run.err.contains("unit/mismatch"), "{}", run.err);
    let run = folder.run(["explain", "42"]).ends_with(2);
    assert!(run.err.contains("outcross explain"), "{}", run.err);
}

/// Starts a program that reads its model from standard input, and closes its outputs before it can write to them.
fn without_reader(command: &mut Command, model: &str) -> i32 {
    let mut child = command
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("the program starts");
    drop(child.stdout.take());
    drop(child.stderr.take());
    let mut input = child.stdin.take().expect("the input is a pipe");
    input.write_all(model.as_bytes()).expect("the program reads its input");
    drop(input);
    child
        .wait()
        .expect("the program ends")
        .code()
        .expect("it ends by itself")
}

#[test]
fn a_reader_that_goes_away_does_not_change_the_verdict() {
    let folder = Folder::new();
    let not_met = GUST.replace("<= 5 %", "<= 1 %");
    for json in [&[][..], &["--json"]] {
        let ends = |command: &str, model: &str| without_reader(folder.command().args([command, "-"]).args(json), model);
        assert_eq!(ends("evaluate", GUST), 0);
        assert_eq!(ends("evaluate", &not_met), 1);
        assert_eq!(ends("evaluate", FAULTY), 2);
        assert_eq!(ends("check", GUST), 0);
        assert_eq!(ends("check", FAULTY), 2);
    }
}
