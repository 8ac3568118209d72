//! The slips of the trade: `slips.csv` says of each what keeps it out. Here every word of it is held to be true.
//!
//! `kept` is `caught` (a finding, and faulty files that raise it), `assumption` (what a result says it rests on, and files
//! in `shown/` that show it), `report` (a place in the report), `by construction`, or `later` with what it waits for.

use super::{Memory, content, folder, shared};
use outcross::diagnostics::Code;
use outcross::report::text;
use outcross::results;
use std::collections::BTreeSet;

/// A slip with what is said of it.
struct Slip {
    number: usize,
    kept: String,
    by: Vec<String>,
    files: Vec<String>,
    note: String,
}

fn slips() -> Vec<Slip> {
    let mut reader = csv::Reader::from_path(folder("slips.csv")).expect("the list can be read");
    let several = |cell: &str| {
        cell.split("; ")
            .filter(|one| !one.is_empty())
            .map(str::to_owned)
            .collect()
    };
    let records = reader.records().map(|record| record.expect("the list is a table"));
    records
        .map(|record| {
            assert!(!record[1].is_empty(), "{record:?}");
            Slip {
                number: record[0].parse().expect("slips are numbered"),
                kept: record[2].to_owned(),
                by: several(&record[3]),
                files: several(&record[4]),
                note: record[5].to_owned(),
            }
        })
        .collect()
}

/// The codes that a faulty file raises.
fn raised(file: &str) -> BTreeSet<&'static str> {
    let (name, text) = content(&folder("faulty").join(format!("{file}.limit")));
    let run = shared().with(&name, &text).run(&name, true).with_results();
    run.codes().into_iter().collect()
}

/// A sound file with what it comes to: the assumptions of its limit states, and its report.
fn shown(file: &str) -> (BTreeSet<&'static str>, String) {
    let (name, text) = content(&folder("shown").join(format!("{file}.limit")));
    let run = Memory::of(&name, &text).run(&name, true);
    assert!(run.diagnostics.is_empty(), "{}", run.shown());
    let model = run.model.as_ref().expect("it is sound");
    let results = results::evaluate(&run.files, model, &[], &[]);
    assert!(results.findings.is_empty(), "{:?}", results.findings);
    let mut report = Vec::new();
    text::write(&mut report, model, &results).expect("a vector takes everything");
    let assumptions = results.limit_states.iter().flat_map(|one| &one.assumptions);
    let report = String::from_utf8(report).expect("reports are UTF-8");
    (assumptions.map(|one| one.code).collect(), report)
}

#[test]
fn the_list_has_every_number() {
    let numbers: Vec<usize> = slips().iter().map(|slip| slip.number).collect();
    assert_eq!(numbers, (1..=numbers.len()).collect::<Vec<_>>());
    assert!(numbers.len() >= 72);
}

#[test]
fn what_is_caught_is_raised_by_each_file_named() {
    for slip in slips().iter().filter(|slip| slip.kept == "caught") {
        let number = slip.number;
        assert!(!slip.by.is_empty() && !slip.files.is_empty(), "{number}");
        let mut found = BTreeSet::new();
        for file in &slip.files {
            let raised = raised(file);
            assert!(
                raised.iter().any(|code| slip.by.iter().any(|by| by == code)),
                "{number}: {file} raises {raised:?}"
            );
            found.extend(raised);
        }
        for code in &slip.by {
            assert!(Code::find(code).is_some(), "{number}: there is no code {code}");
            assert!(found.contains(code.as_str()), "{number}: no file raises {code}");
        }
    }
}

#[test]
fn what_a_result_rests_on_is_said() {
    for slip in slips().iter().filter(|slip| slip.kept == "assumption") {
        assert!(!slip.by.is_empty() && !slip.files.is_empty(), "{}", slip.number);
        for file in &slip.files {
            let (assumptions, _) = shown(file);
            for by in &slip.by {
                assert!(
                    assumptions.contains(by.as_str()),
                    "{}: {file} says {assumptions:?}",
                    slip.number
                );
            }
        }
    }
}

#[test]
fn the_report_lists_what_has_no_basis() {
    let slips = slips();
    let files = slips
        .iter()
        .filter(|slip| slip.kept == "report")
        .flat_map(|slip| &slip.files);
    for file in files {
        let (_, report) = shown(file);
        let (_, list) = report
            .split_once("Numbers without a basis\n")
            .expect("the report has the list");
        assert!(
            list.contains("sway") && list.contains("require failure_probability"),
            "{report}"
        );
    }
}

#[test]
fn everything_else_says_why() {
    for slip in slips() {
        match slip.kept.as_str() {
            "caught" | "assumption" | "report" => {}
            "by construction" | "later" => {
                assert!(
                    !slip.note.is_empty() && slip.by.is_empty() && slip.files.is_empty(),
                    "{}",
                    slip.number
                );
            }
            other => panic!("{}: what is {other}?", slip.number),
        }
    }
}
