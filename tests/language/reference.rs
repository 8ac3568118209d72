//! The examples of the language reference and of the readme, run: what is shown as sound is sound and holds, what is
//! shown as refused is refused for the reason given, and what is shown as printed is what the program prints.
//!
//! The first line of a fenced block says what it is: `limit` a complete file, `limit fragment` one that stands with the
//! declarations of `limit prelude`, `limit refused` one that this version does not compute, `limit faulty CODE` one with
//! a fault. A name, `gusts.limit` or `gusts.csv`, makes the block a file that the others can use.

use crate::support::memory::{Memory, Run};
use outcross::diagnostics::{Code, Diagnostic};
use outcross::expression::Function;
use outcross::language;
use outcross::language::tree::{Declaration, DeclarationKind, Tree};
use outcross::report::text;
use outcross::results::{self, Results};
use outcross::source::Files;
use outcross::units;
use std::collections::BTreeSet;
use std::path::Path;

const REFERENCE: &str = include_str!("../../grammar/reference.md");
const README: &str = include_str!("../../README.md");

/// The name of a block that has none.
const UNNAMED: &str = "example.limit";

/// A fenced block of a page.
struct Block {
    line: usize,
    tags: Vec<&'static str>,
    text: String,
}

impl Block {
    fn is(&self, tag: &str) -> bool {
        self.tags.contains(&tag)
    }

    fn name(&self) -> Option<&'static str> {
        let name = self.tags.last()?;
        name.contains('.').then_some(*name)
    }

    fn is_complete(&self) -> bool {
        self.tags.first() == Some(&"limit") && (self.tags.len() == 1 || self.name().is_some())
    }
}

fn blocks(page: &'static str) -> Vec<Block> {
    let mut found = Vec::new();
    let mut open: Option<Block> = None;
    for (index, line) in page.lines().enumerate() {
        match (line.strip_prefix("```"), &mut open) {
            (Some(tags), None) => {
                open = Some(Block {
                    line: index + 1,
                    tags: tags.split_whitespace().collect(),
                    text: String::new(),
                });
            }
            (Some(_), Some(_)) => found.extend(open.take()),
            (None, Some(block)) => {
                block.text.push_str(line);
                block.text.push('\n');
            }
            (None, None) => {}
        }
    }
    assert!(open.is_none(), "a block is not closed");
    found
}

/// Checks a text among the named blocks of its page.
fn checked(blocks: &[Block], name: &str, text: &str, require_parameters: bool) -> Run {
    let mut memory = Memory::default();
    for block in blocks {
        if let Some(name) = block.name() {
            memory.insert(name, &*block.text);
        }
    }
    memory.with(name, text).run(name, require_parameters)
}

/// Checks a piece of a file: nobody rests a result on what it declares, and it is not to blame for that.
fn checked_piece(blocks: &[Block], text: &str, require_parameters: bool) -> Run {
    let mut run = checked(blocks, UNNAMED, &completed(blocks, text), require_parameters);
    run.diagnostics.retain(|one| one.code != Code::NameUnused);
    run
}

fn codes(run: &Run) -> BTreeSet<&'static str> {
    run.codes().into_iter().collect()
}

fn computed(run: &Run) -> Option<Results> {
    let model = run.model.as_ref()?;
    Some(results::evaluate(&run.files, model, &run.diagnostics, &[]))
}

fn parsed(files: &mut Files, text: &str) -> Tree {
    let file = files.add(UNNAMED, text.to_string());
    language::parse(file, text).0
}

fn declared(declaration: &Declaration) -> Option<&str> {
    match &declaration.kind {
        DeclarationKind::Use { name, .. }
        | DeclarationKind::Parameter { name, .. }
        | DeclarationKind::Definition { name, .. }
        | DeclarationKind::Function { name, .. }
        | DeclarationKind::Climate { name, .. }
        | DeclarationKind::LimitState { name, .. } => Some(&name.text),
        _ => None,
    }
}

/// A fragment with the declarations of the prelude that it does not make itself.
fn completed(blocks: &[Block], fragment: &str) -> String {
    let mut files = Files::new();
    let own = parsed(&mut files, fragment);
    let own: Vec<&str> = own.declarations.iter().filter_map(declared).collect();
    let prelude = blocks
        .iter()
        .find(|block| block.is("prelude"))
        .expect("the page has a prelude");
    let mut whole = fragment.to_string();
    for declaration in &parsed(&mut files, &prelude.text).declarations {
        if !declared(declaration).is_some_and(|name| own.contains(&name)) {
            whole.push_str(files.text(declaration.span));
            whole.push('\n');
        }
    }
    whole
}

/// Sound, without a warning; and where everything is there to be computed, all that is required and expected holds.
fn sound(line: usize, check: impl Fn(bool) -> Run) {
    let run = check(false);
    assert!(
        run.open().next().is_none(),
        "the block of line {line}:\n{}",
        run.shown()
    );
    let complete = check(true);
    if let Some(results) = computed(&complete) {
        assert!(results.findings.is_empty(), "the block of line {line}: {results:#?}");
        assert!(
            results.all_hold(),
            "the block of line {line} does not hold: {results:#?}"
        );
        assert!(
            results.out_of_reach(1e-3).is_empty(),
            "the block of line {line} is not reached: {results:#?}"
        );
    }
}

#[test]
fn complete_files_and_fragments_are_sound_and_hold() {
    for page in [REFERENCE, README] {
        let blocks = blocks(page);
        for block in &blocks {
            if block.is_complete() {
                let name = block.name().unwrap_or(UNNAMED);
                sound(block.line, |required| checked(&blocks, name, &block.text, required));
            } else if block.is("fragment") || block.is("prelude") {
                sound(block.line, |required| checked_piece(&blocks, &block.text, required));
            }
        }
    }
}

#[test]
fn what_is_refused_for_now_says_so_and_nothing_else() {
    let blocks = blocks(REFERENCE);
    for block in blocks.iter().filter(|block| block.is("refused")) {
        let run = checked_piece(&blocks, &block.text, false);
        let (line, findings) = (block.line, run.shown());
        assert_eq!(
            codes(&run),
            BTreeSet::from(["language/not-yet"]),
            "the block of line {line}:\n{findings}"
        );
        for declaration in &parsed(&mut Files::new(), &block.text).declarations {
            let inside = |one: &Diagnostic| declaration.span.range().contains(&(one.place.start as usize));
            let found = run.diagnostics.iter().any(inside);
            assert!(
                found,
                "a declaration of the block of line {line} is not refused:\n{findings}"
            );
        }
    }
}

#[test]
fn what_is_shown_as_faulty_has_that_fault_alone() {
    let blocks = blocks(REFERENCE);
    for block in blocks.iter().filter(|block| block.is("faulty")) {
        let code = *block.tags.last().expect("it is tagged");
        assert!(
            Code::find(code).is_some(),
            "line {}: there is no code {code}",
            block.line
        );
        let run = checked_piece(&blocks, &block.text, false);
        assert_eq!(
            codes(&run),
            BTreeSet::from([code]),
            "the block of line {}:\n{}",
            block.line,
            run.shown()
        );
    }
}

#[test]
fn every_block_of_the_language_is_run() {
    for page in [REFERENCE, README] {
        for block in blocks(page).iter().filter(|block| block.is("limit")) {
            let known = ["fragment", "prelude", "refused", "faulty"]
                .iter()
                .any(|tag| block.is(tag));
            assert!(
                known || block.is_complete(),
                "line {}: nobody runs a block {:?}",
                block.line,
                block.tags
            );
        }
    }
}

#[test]
fn the_tables_of_the_reference_are_complete() {
    let has = |text: &str| REFERENCE.contains(text);
    let missing_units = units::entries().iter().filter(|entry| {
        // The ohm sign of Unicode is the same letter to a reader.
        entry.symbol != "\u{2126}" && !has(&format!("`{}`", entry.symbol))
    });
    assert_eq!(missing_units.map(|entry| entry.symbol).collect::<Vec<_>>(), [""; 0]);
    let missing_words = language::RESERVED.iter().filter(|word| !has(&format!("`{word}`")));
    assert_eq!(missing_words.collect::<Vec<_>>(), [&""; 0]);
    let missing_functions = Function::ALL
        .iter()
        .map(|function| function.name())
        .filter(|name| !has(&format!("`{name}(")));
    assert_eq!(missing_functions.collect::<Vec<_>>(), [""; 0]);
}

#[test]
fn every_code_that_the_reference_names_exists() {
    let families: BTreeSet<&str> = Code::ALL
        .iter()
        .filter_map(|code| code.name().split('/').next())
        .collect();
    for word in REFERENCE.split('`').skip(1).step_by(2) {
        if word
            .split_once('/')
            .is_some_and(|(family, _)| families.contains(family))
        {
            assert!(Code::find(word).is_some(), "there is no code {word}");
        }
    }
}

#[test]
fn the_readme_shows_an_example_and_what_the_program_prints_for_it() {
    let blocks = blocks(README);
    let model = blocks
        .iter()
        .find(|block| block.is_complete())
        .expect("the readme shows a model");
    let name = model.name().expect("it is a file of the project");
    let on_disk =
        std::fs::read_to_string(Path::new(env!("CARGO_MANIFEST_DIR")).join(name)).expect("the example exists");
    assert_eq!(model.text, on_disk, "the readme shows another text than {name}");
    let printed = blocks
        .iter()
        .find(|block| block.is("text"))
        .expect("the readme shows what is printed");
    let run = checked(&blocks, name, &model.text, true);
    let (model, results) = (
        run.model.as_ref().expect("it is sound"),
        computed(&run).expect("it is sound"),
    );
    let mut out = Vec::new();
    text::write(&mut out, model, &results).expect("a vector takes all");
    assert_eq!(printed.text, String::from_utf8_lossy(&out));
}

#[test]
fn the_readme_shows_what_the_program_says_of_a_mistake() {
    let blocks = blocks(README);
    let model = blocks
        .iter()
        .find(|block| block.is_complete())
        .expect("the readme shows a model");
    let shown = blocks
        .iter()
        .find(|block| block.is("console"))
        .expect("the readme shows a mistake");
    let sound = "squared_exponential(length: 0.4 s)";
    let mistaken = model
        .text
        .replace(sound, "oscillator(frequency: 1.4 1/s, damping: 1 %)");
    let run = checked(&blocks, model.name().expect("it is a file"), &mistaken, true);
    assert_eq!(shown.text.trim_end(), run.shown().trim_end());
}
