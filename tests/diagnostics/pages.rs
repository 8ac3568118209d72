//! The page of every code: its examples raise that code alone, and its mends raise nothing.

use crate::support::memory::Memory;
use outcross::diagnostics::Code;

/// The name under which an example is read.
const MAIN: &str = "example.limit";

/// Codes without an example, as it would be too large to be read by anyone.
const WITHOUT_EXAMPLE: [Code; 4] = [
    Code::FileTooLarge,
    Code::SyntaxNesting,
    Code::ModelTooLarge,
    Code::ModelUnexplained,
];

/// A fenced block: what its head says, and what stands in it.
struct Block<'a> {
    head: &'a str,
    text: String,
}

/// The fenced blocks of a page.
fn blocks(page: &str) -> Vec<Block<'_>> {
    let mut blocks = Vec::new();
    let mut lines = page.lines();
    while let Some(line) = lines.next() {
        if let Some(head) = line.strip_prefix("```") {
            let text = lines.by_ref().take_while(|line| *line != "```");
            let text = text.map(|line| format!("{line}\n")).collect();
            blocks.push(Block { head, text });
        }
    }
    blocks
}

/// An example: the model and the files it names. Where the page shows two files of one name, the wrong example has the
/// first, and the mended one the last.
fn example(page: &str, kind: &str) -> Option<Memory> {
    let mut blocks = blocks(page);
    if kind == "wrong" {
        blocks.reverse();
    }
    let model = blocks.iter().find(|block| block.head == format!("limit {kind}"))?;
    let mut memory = Memory::of(MAIN, &model.text);
    for block in &blocks {
        if let Some((_, name)) = block.head.split_once(" file ") {
            memory.insert(name.trim_matches('"'), &*block.text);
        }
    }
    Some(memory)
}

#[test]
fn every_page_has_the_same_parts() {
    for code in Code::ALL {
        let page = code.page();
        let title = format!("# {}\n", code.name());
        assert!(page.starts_with(&title), "{}: begins with its code", code.name());
        assert!(
            page.ends_with('\n') && !page.ends_with("\n\n"),
            "{}: ends with one newline",
            code.name()
        );
        let headings: Vec<&str> = page.lines().filter(|line| line.starts_with("## ")).collect();
        let wanted: &[&str] = if WITHOUT_EXAMPLE.contains(code) {
            &["## The mend", "## Where it matters"]
        } else {
            &["## Wrong", "## Mended", "## Where it matters"]
        };
        assert_eq!(headings, wanted, "{}", code.name());
        for line in page.lines() {
            assert!(
                line.chars().count() <= 120,
                "{}: a line is too long: {line}",
                code.name()
            );
        }
        for block in blocks(page) {
            let file = block.head.starts_with("limit file \"") || block.head.starts_with("csv file \"");
            let known = file || ["limit wrong", "limit mended"].contains(&block.head);
            assert!(known, "{}: {}", code.name(), block.head);
        }
    }
}

#[test]
fn every_wrong_example_raises_its_code_alone() {
    let mut faults = String::new();
    for code in Code::ALL.iter().filter(|code| !WITHOUT_EXAMPLE.contains(code)) {
        let run = example(code.page(), "wrong")
            .expect("the page has a wrong example")
            .run(MAIN, true)
            .with_results();
        if run.diagnostics.is_empty() || run.diagnostics.iter().any(|one| one.code != *code) {
            faults += &format!("{} raises {:?}\n{}", code.name(), run.codes(), run.shown());
        }
    }
    assert!(faults.is_empty(), "{faults}");
}

#[test]
fn every_mended_example_raises_nothing() {
    let mut faults = String::new();
    for code in Code::ALL.iter().filter(|code| !WITHOUT_EXAMPLE.contains(code)) {
        let run = example(code.page(), "mended")
            .expect("the page has a mended example")
            .run(MAIN, true)
            .with_results();
        if run.open().next().is_some() {
            faults += &format!("{}:\n{}", code.name(), run.shown());
        }
        assert!(run.model.is_some() || run.open().next().is_some(), "{}", code.name());
    }
    assert!(faults.is_empty(), "{faults}");
}

#[test]
fn a_code_is_found_by_its_name() {
    for code in Code::ALL {
        assert_eq!(Code::find(code.name()), Some(*code));
    }
    assert_eq!(Code::find("unit"), None);
}
