//! Exit statuses.

use super::{Folder, GUST};

#[test]
fn zero_when_all_holds() {
    let run = Folder::with("a.limit", GUST).run(["evaluate", "a.limit"]).ends_with(0);
    assert_eq!(run.err, "");
    assert!(run.out.contains("requirements: 2 met, expectations: 2 of 2 hold"));
}

#[test]
fn one_when_a_requirement_is_not_met() {
    let text = GUST.replace("<= 5 %", "<= 1 %");
    let run = Folder::with("a.limit", text).run(["evaluate", "a.limit"]).ends_with(1);
    assert!(run.out.contains("requirements: 1 met, 1 not met"));
}

#[test]
fn one_when_a_requirement_is_not_established() {
    // A barrier one standard deviation from the mean is outside the range of the formula.
    let run = Folder::with("a.limit", GUST)
        .run(["evaluate", "a.limit", "--set", "level=3 kN", "--json"])
        .ends_with(1);
    let document = run.json();
    let state = &document["limit_states"][0];
    let codes: Vec<_> = state["assumptions"]
        .as_array()
        .into_iter()
        .flatten()
        .map(|one| &one["code"])
        .collect();
    assert!(codes.iter().any(|code| *code == "low-barrier"), "{codes:?}");
    assert_ne!(state["requirements"][0]["verdict"], "met");
}

#[test]
fn one_when_an_expectation_does_not_hold() {
    let text = GUST.replace("= 2 kN within 0.1 %", "= 2.1 kN within 0.1 %");
    let run = Folder::with("a.limit", text).run(["evaluate", "a.limit"]).ends_with(1);
    assert!(run.out.contains("does not hold"));
    assert!(run.out.contains("expectations: 1 of 2 hold"));
}

#[test]
fn two_when_the_model_is_wrong_and_nothing_is_computed() {
    let text = GUST.replace("gust > level", "gust > 3 m");
    let folder = Folder::with("a.limit", text);
    for command in ["check", "evaluate"] {
        let run = folder.run([command, "a.limit"]).ends_with(2);
        assert_eq!(run.out, "");
        assert!(run.err.contains("unit/mismatch"), "{}", run.err);
    }
    // A machine that reads results is told what is wrong in their place.
    let run = folder.run(["evaluate", "--json", "a.limit"]).ends_with(2);
    assert_eq!(run.json()["format"], "outcross-diagnostics");
    assert_eq!(run.json()["diagnostics"][0]["code"], "unit/mismatch");
    folder.write("b.limit", GUST);
    let both = folder
        .run(["evaluate", "--json", "a.limit", "b.limit"])
        .ends_with(2)
        .json();
    assert_eq!(both[0], run.json());
    assert_eq!(both[1]["diagnostics"], serde_json::json!([]));
}

#[test]
fn two_when_one_of_several_files_is_wrong() {
    let folder = Folder::with("a.limit", GUST);
    folder.write("b.limit", "constant a = b");
    let run = folder.run(["evaluate", "a.limit", "b.limit"]).ends_with(2);
    assert_eq!(run.out, "");
    let run = folder.run(["check", "a.limit", "b.limit"]).ends_with(2);
    assert!(run.out.starts_with("a.limit: "), "{}", run.out);
}

#[test]
fn two_when_the_command_line_is_wrong() {
    let folder = Folder::with("a.limit", GUST);
    let lines: [&[&str]; 7] = [
        &[],
        &["evaluate"],
        &["judge", "a.limit"],
        &["evaluate", "a.limit", "--jsn"],
        &["evaluate", "a.limit", "--tolerance", "0"],
        &["evaluate", "a.limit", "--tolerance", "wide"],
        &["evaluate", "a.limit", "--color", "mauve"],
    ];
    for line in lines {
        let run = folder.run(line).ends_with(2);
        assert_eq!(run.out, "", "{line:?}");
        assert_ne!(run.err, "", "{line:?}");
    }
}

#[test]
fn three_when_the_tolerance_is_not_reached_and_what_was_computed_is_printed() {
    let folder = Folder::with("a.limit", GUST);
    let run = folder.run(["evaluate", "a.limit", "--tolerance", "1e-16"]).ends_with(3);
    assert!(run.out.contains("failure probability over 1000 s"));
    let run = folder
        .run(["evaluate", "a.limit", "--tolerance", "1e-16", "--json"])
        .ends_with(3);
    assert!(run.json()["limit_states"][0]["failure_probability"].is_f64());
}

#[test]
fn three_when_the_margin_is_lost_to_rounding() {
    // The level is 1e12 standard deviations of the margin from 0: its place about the mean is known to four digits only.
    let text = GUST
        .replace("mean: 2 kN", "mean: 1e12 kN")
        .replace("gust > level", "gust > 1_000_000_000_004 kN")
        .replace("expect mean(gust) = 2 kN within 1 N   basis \"Survey\"", "");
    Folder::with("a.limit", text).run(["evaluate", "a.limit"]).ends_with(3);
}

#[cfg(target_os = "linux")]
#[test]
fn three_when_the_output_cannot_be_written() {
    let folder = Folder::with("a.limit", GUST);
    let full = std::fs::File::create("/dev/full").expect("Linux has a device that is always full");
    let output = folder.command().args(["evaluate", "a.limit"]).stdout(full).output();
    let run = super::Run::from(output.expect("the program starts")).ends_with(3);
    assert!(run.err.contains("cannot write the output"), "{}", run.err);
}
