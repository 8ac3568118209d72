//! Files: those that are there, those that are not, and those that are something else.

use super::{Folder, GUST, Run};

fn refused(folder: &Folder, file: &str, words: &str) {
    for command in ["check", "evaluate"] {
        let run = folder.run([command, file]).ends_with(2);
        assert_eq!(run.out, "", "{file}");
        assert!(run.err.contains(words), "{file}: {}", run.err);
    }
}

#[test]
fn standard_input() {
    let folder = Folder::new();
    let run = Run::of(folder.command().args(["evaluate", "-", "--json"]), GUST.as_bytes()).ends_with(0);
    assert_eq!(run.json()["model"]["title"], "Gust on a sign");
    let run = Run::of(folder.command().args(["check", "-"]), b"constant a = ").ends_with(2);
    assert!(run.err.contains("syntax/unexpected"), "{}", run.err);
}

#[test]
fn a_part_beside_standard_input_is_found_in_the_working_folder() {
    let folder = Folder::with("shared/gust.limit", GUST);
    let text = "use \"shared/gust.limit\" as sign";
    Run::of(folder.command().args(["evaluate", "-"]), text.as_bytes()).ends_with(0);
}

#[test]
fn missing_file() {
    refused(&Folder::new(), "nowhere.limit", "there is no such file");
}

#[test]
fn folder_in_place_of_a_file() {
    let folder = Folder::with("models/a.limit", GUST);
    refused(&folder, "models", "it is a folder");
}

#[test]
fn bytes_that_are_no_text() {
    let folder = Folder::with("a.limit", b"title \"\xff\xfe\"");
    refused(&folder, "a.limit", "it is not UTF-8 text (byte 7 is wrong)");
}

#[cfg(unix)]
#[test]
fn a_pipe_with_a_name_is_not_followed() {
    let folder = Folder::new();
    let made = std::process::Command::new("mkfifo")
        .arg(folder.path("a.limit"))
        .status();
    assert!(made.is_ok_and(|status| status.success()));
    // Opening it would wait for a writer for ever.
    refused(&folder, "a.limit", "it is a device or a pipe");
    folder.write("b.limit", "use \"a.limit\" as a");
    refused(&folder, "b.limit", "it is a device or a pipe");
}

#[test]
fn parts_that_use_each_other() {
    let folder = Folder::with("a.limit", "use \"b.limit\" as b");
    folder.write("b.limit", "use \"a.limit\" as a");
    refused(&folder, "a.limit", "part/cycle");
    folder.write("c.limit", "use \"./sub/../c.limit\" as c");
    folder.write("sub/d.limit", "");
    refused(&folder, "c.limit", "part/cycle");
}

#[test]
fn parts_and_tables_are_found_beside_the_file_that_names_them() {
    let table = "lag [s], correlation\n0, 1\n1, 0.9\n2, 0.6\n4, 0\n";
    let part = "process sway : m = gaussian(standard_deviation: 1 m
                    correlation: tabulated(\"../data/sway.csv\", beyond: zero))";
    let whole = "use \"parts/sway.limit\" as one
                 use \"parts/sway.limit\" as other
                 margin gap : m = one.sway - other.sway
                 expect standard_deviation(gap) = 1.41421 m within 0.001 %";
    let folder = Folder::with("models/parts/sway.limit", part);
    folder.write("models/data/sway.csv", table);
    folder.write("models/whole.limit", whole);
    let elsewhere = Folder::new();
    let whole = folder.path("models/whole.limit");
    elsewhere.run(["evaluate".as_ref(), whole.as_os_str()]).ends_with(0);
}

#[test]
fn a_fault_in_a_part_is_shown_in_the_part() {
    let folder = Folder::with("a.limit", "use \"sub/b.limit\" as b (length: 2 m)");
    folder.write("sub/b.limit", "parameter length : m\nconstant area = length + 3 s\n");
    let run = folder.run(["check", "a.limit", "--json"]).ends_with(2);
    let finding = &run.json()["diagnostics"][0];
    assert_eq!(finding["code"], "unit/mismatch");
    assert_eq!(finding["line"], 2);
    assert!(
        finding["file"].as_str().is_some_and(|file| file.ends_with("b.limit")),
        "{finding}"
    );
}
