//! What the program says about faulty models.
//!
//! `faulty/` holds a file for each mistake, `several/` files with more than one; the snapshots show what the user reads.
//! `shared/` holds the parts and tables they name.

mod limits;
mod mutation;
mod pages;
mod parts;
mod rendering;
mod robustness;
mod slips;

use crate::support::memory::Memory;
use std::fs;
use std::path::Path;

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

/// The folder of a kind of test files.
fn folder(name: &str) -> std::path::PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR"))
        .join("tests/diagnostics")
        .join(name)
}

/// The parts and tables that the faulty files name.
fn shared() -> Memory {
    let mut memory = Memory::default();
    for entry in fs::read_dir(folder("shared")).expect("the folder can be read") {
        let (name, text) = content(&entry.expect("the entry can be read").path());
        memory.insert(format!("shared/{name}"), text);
    }
    memory
}

#[test]
fn one_fault_gives_one_message() {
    let shared = shared();
    let mut others = String::new();
    insta::glob!("faulty/*.limit", |path| {
        let (name, text) = content(path);
        let run = shared.clone().with(&name, &text).run(&name, true).with_results();
        insta::assert_snapshot!(format!("{text}\n======== messages ========\n{}", run.shown()));
        if run.diagnostics.len() != 1 {
            others += &format!("{name}:\n{}\n", run.shown());
        }
    });
    assert!(others.is_empty(), "{others}");
}

#[test]
fn several_faults_are_all_shown() {
    let shared = shared();
    insta::glob!("several/*.limit", |path| {
        let (name, text) = content(path);
        let run = shared.clone().with(&name, &text).run(&name, true);
        insta::assert_snapshot!(format!("{text}\n======== messages ========\n{}", run.shown()));
        assert!(run.diagnostics.len() > 1, "{name}:\n{}", run.shown());
        assert!(run.model.is_none(), "{name}");
    });
}
