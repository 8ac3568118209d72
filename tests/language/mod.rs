//! Text to tree: files and the trees or the messages they give.
//!
//! `valid/` holds a file for each feature; its snapshot shows the tree. `faulty/` holds a file for each mistake; its
//! snapshot shows what the user reads.

mod budget;
mod places;
mod print;
mod reference;

use outcross::diagnostics::{Diagnostic, terminal};
use outcross::language::{self, tree::Tree};
use outcross::source::Files;
use std::fs;
use std::path::Path;

/// A text read as a file of that name.
pub struct Read {
    pub files: Files,
    pub tree: Tree,
    pub diagnostics: Vec<Diagnostic>,
}

/// Reads a text.
pub fn read(name: &str, text: &str) -> Read {
    let mut files = Files::new();
    let file = files.add(name, text.to_owned());
    let (tree, diagnostics) = language::parse(file, text);
    Read {
        files,
        tree,
        diagnostics,
    }
}

/// What a user reads at the terminal.
pub fn shown(read: &Read) -> String {
    let mut out = Vec::new();
    terminal::write(&mut out, &read.files, &read.diagnostics, false).expect("a vector takes everything");
    let text = String::from_utf8(out).expect("the terminal is written in UTF-8");
    text.lines().map(|line| line.trim_end().to_owned() + "\n").collect()
}

/// The text of a test file, with the line ends of Unix whatever the checkout made of them.
fn content(path: &Path) -> (String, String) {
    let name = path
        .file_name()
        .expect("a file has a name")
        .to_string_lossy()
        .into_owned();
    let text = fs::read_to_string(path).expect("the file can be read");
    (name, text.replace("\r\n", "\n"))
}

#[test]
fn valid_files_give_their_trees() {
    insta::glob!("valid/*.limit", |path| {
        let (name, text) = content(path);
        let read = read(&name, &text);
        assert_eq!(shown(&read), "");
        let tree = print::tree(&read.files, &read.tree);
        insta::assert_snapshot!(format!("{text}\n======== tree ========\n{tree}"));
    });
}

#[test]
fn faulty_files_say_what_is_wrong() {
    insta::glob!("faulty/*.limit", |path| {
        let (name, text) = content(path);
        let read = read(&name, &text);
        assert!(!read.diagnostics.is_empty(), "{name} gives no message");
        let kept = print::kept(&read.files, &read.tree);
        let messages = shown(&read);
        insta::assert_snapshot!(format!(
            "{text}\n======== messages ========\n{messages}======== kept ========\n{kept}"
        ));
    });
}

#[test]
fn a_value_from_the_command_line() {
    let values = [
        "36 mm",
        "-2.5",
        "2 * (3 kN + 1 kN)",
        "",
        "3 kN basis \"x\"",
        "1 +",
        "3 kN)",
        "name = 3",
        "(1",
    ];
    let shown: String = values
        .iter()
        .map(|value| {
            let mut files = Files::new();
            let file = files.add("--set depth", (*value).to_owned());
            let result = match language::parse_expression(file, value) {
                Ok(expression) => print::expression(&files, &expression),
                Err(diagnostics) => diagnostics
                    .iter()
                    .map(|one| one.message.clone())
                    .collect::<Vec<_>>()
                    .join("; "),
            };
            format!("{value:24}{result}\n")
        })
        .collect();
    insta::assert_snapshot!(shown);
}
