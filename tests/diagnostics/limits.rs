//! The limits that the reference lists, each gone beyond by one model: it is refused in time and in words.

use crate::support::memory::Memory;
use outcross::source::{Disk, LARGEST_FILE};
use std::fmt::Write;
use std::fs::{self, File};
use std::path::Path;
use std::time::{Duration, Instant};

/// Ample, unless something is attempted that should be refused.
const PATIENCE: Duration = Duration::from_secs(60);

/// The message of the finding with this code, which must be there.
#[track_caller]
fn refused(texts: &Memory, code: &str) -> String {
    let start = Instant::now();
    let run = texts.run("model.limit", true);
    assert!(start.elapsed() < PATIENCE, "took {:?}", start.elapsed());
    assert!(run.model.is_none());
    let finding = run.diagnostics.iter().find(|one| one.code.name() == code);
    finding.unwrap_or_else(|| panic!("{}", run.shown())).message.clone()
}

fn model(text: &str) -> Memory {
    Memory::of("model.limit", text)
}

/// `constant`s of little text.
fn constants(count: usize) -> String {
    let mut text = String::with_capacity(20 * count);
    for number in 0..count {
        writeln!(text, "constant a{number} = 1").expect("memory takes all");
    }
    text
}

const SOURCE: &str = "process x = gaussian(standard_deviation: 1, correlation: squared_exponential(length: 1 s))\n";

#[test]
fn size_of_a_file() {
    let folder = std::env::temp_dir().join(format!("outcross-limits-{}", std::process::id()));
    fs::create_dir_all(&folder).expect("a folder for this test");
    let path = folder.join("model.limit");
    let made = File::create(&path).and_then(|file| file.set_len(LARGEST_FILE + 1));
    made.expect("a file for this test");
    let disk = Disk::within(&folder).expect("the folder is there");
    let run = crate::support::memory::run(&disk, Path::new(&path), true);
    assert_eq!(run.codes(), ["file/too-large"]);
    assert!(
        run.diagnostics[0].message.ends_with("it is larger than 64 MiB"),
        "{}",
        run.shown()
    );
    fs::remove_dir_all(&folder).expect("the folder of this test can be removed");
}

#[test]
fn brackets_within_brackets() {
    let text = format!("constant a = {}1{}\n", "(".repeat(201), ")".repeat(201));
    assert_eq!(
        refused(&model(&text), "syntax/nesting"),
        "brackets are nested more than 200 deep"
    );
}

#[test]
fn parts_and_parts_within_parts() {
    let mut uses = String::new();
    for number in 0..10_001 {
        writeln!(uses, "use \"part.limit\" as a{number}").expect("memory takes all");
    }
    let message = refused(&model(&uses).with("part.limit", ""), "model/too-large");
    assert_eq!(message, "the model has more than 10000 parts or 4000000 declarations");
    let mut chain = model("use \"0.limit\" as a\n");
    for level in 0..40 {
        chain.insert(format!("{level}.limit"), format!("use \"{}.limit\" as a\n", level + 1));
    }
    assert_eq!(
        refused(&chain.with("40.limit", ""), "model/too-large"),
        "parts are nested more than 32 deep here"
    );
}

#[test]
fn declarations() {
    let mut uses = String::new();
    for number in 0..900 {
        writeln!(uses, "use \"part.limit\" as a{number}").expect("memory takes all");
    }
    // The limit is reached before any of them is looked at.
    let message = refused(&model(&uses).with("part.limit", &constants(5_000)), "model/too-large");
    assert_eq!(message, "the model has more than 10000 parts or 4000000 declarations");
}

#[test]
fn terms() {
    let mut text = SOURCE.replace("process x ", "process x0 ");
    for step in 1..30 {
        let (before, lag) = (step - 1, 1_u64 << step);
        writeln!(text, "process x{step} = x{before} + delay(x{before}, by: {lag} s)").expect("memory takes all");
    }
    let message = refused(&model(&text), "model/too-large");
    assert!(
        message.contains("more than 1000000 delays") || message.contains("more than 2000000 terms"),
        "{message}"
    );
    let mut many = SOURCE.to_owned();
    for number in 0..1_500 {
        writeln!(
            many,
            "{}",
            SOURCE.replace("process x ", &format!("process y{number} ")).trim()
        )
        .expect("memory takes all");
    }
    let sum: Vec<String> = (0..1_500).map(|number| format!("y{number}")).collect();
    writeln!(many, "process all = {}", sum.join(" + ")).expect("memory takes all");
    for number in 0..1_400 {
        writeln!(many, "margin m{number} = all + {number}").expect("memory takes all");
    }
    assert_eq!(
        refused(&model(&many), "model/too-large"),
        "the processes and margins up to here have more than 2000000 terms together"
    );
}

#[test]
fn delays_of_one_process() {
    let sum: Vec<String> = (1..1_002).map(|number| format!("delay(x, by: {number} s)")).collect();
    let text = format!("{SOURCE}margin m = {}\n", sum.join(" + "));
    assert_eq!(
        refused(&model(&text), "model/too-large"),
        "the processes and margins up to here pair more than 1000000 delays of one process"
    );
}

#[test]
fn rows_of_a_table() {
    let mut table = String::from("lag [s], correlation\n0, 1\n");
    for number in 1..1_000_001 {
        writeln!(table, "{number}, 0").expect("memory takes all");
    }
    let text = "process x = gaussian(standard_deviation: 1, correlation: tabulated(\"table.csv\", beyond: zero))\n";
    assert_eq!(
        refused(&model(text).with("table.csv", &table), "table/content"),
        "the file has more than 1000000 rows"
    );
}

#[test]
fn derivatives() {
    let text = format!("{SOURCE}margin m = {}x{}\n", "derivative(".repeat(5), ")".repeat(5));
    assert_eq!(
        refused(&model(&text), "value/range"),
        "a process is differentiated at most 4 times"
    );
}

#[test]
fn kernels_within_kernels() {
    let mut text = String::from("kernel k0(tau) = 1 * exponential(length: 1 s)\n");
    for level in 1..40 {
        writeln!(text, "kernel k{level}(tau) = 1 * k{}()", level - 1).expect("memory takes all");
    }
    text += "process x = gaussian(standard_deviation: 1, correlation: k39())\n";
    assert_eq!(
        refused(&model(&text), "model/too-large"),
        "kernels made of kernels, and spectra of spectra, are followed 32 deep and through 100000 calls, not further"
    );
    let mut text = String::from("kernel k0(tau) = 1 * exponential(length: 1 s)\n");
    for level in 1..20 {
        writeln!(text, "kernel k{level}(tau) = k{0}() * k{0}()", level - 1).expect("memory takes all");
    }
    text += "process x = gaussian(standard_deviation: 1, correlation: k19())\n";
    assert_eq!(
        refused(&model(&text), "model/too-large"),
        "kernels made of kernels, and spectra of spectra, are followed 32 deep and through 100000 calls, not further"
    );
}

#[test]
fn kernels_that_one_kernel_is_made_of() {
    let product = vec!["exponential(length: 1 s)"; 257].join(" * ");
    let text = format!("process x = gaussian(standard_deviation: 1, correlation: {product})\n");
    assert_eq!(
        refused(&model(&text), "model/too-large"),
        "this kernel is made of more than 256 parts"
    );
}

#[test]
fn expressions_in_kernels() {
    let body = vec!["tau / 1 s"; 50_000].join(" + ");
    let text = format!("kernel k(tau) = {body}\n");
    let mut uses = String::new();
    for number in 0..30 {
        writeln!(uses, "use \"part.limit\" as a{number}").expect("memory takes all");
    }
    assert_eq!(
        refused(&model(&uses).with("part.limit", &text), "model/too-large"),
        "the kernels and spectra written out up to here have more than 2000000 operations and numbers"
    );
}

#[test]
fn spectra() {
    let sum = vec!["white(level: 1 /Hz)"; 257].join(" + ");
    let text = format!("process x = gaussian(spectrum: {sum})\n");
    assert_eq!(
        refused(&model(&text), "model/too-large"),
        "this spectrum is made of more than 256 parts"
    );
    let body = vec!["f / 1 Hz"; 50_000].join(" + ");
    let text = format!("spectrum s(f) = 1 s / (1 + ({body})^2)\nprocess x = gaussian(spectrum: s())\n");
    assert_eq!(
        refused(&model(&text), "model/too-large"),
        "the written spectra up to here have more than 100000 operations together"
    );
    // As large as it may be: computed in time.
    let body = vec!["f / 1 Hz"; 20_000].join(" + ");
    let text = format!("spectrum s(f) = 1 s / (1 + ({body})^2)\nprocess x = gaussian(spectrum: s())\n");
    let start = Instant::now();
    let run = model(&text).run("model.limit", true);
    assert!(run.model.is_some(), "{}", run.shown());
    assert!(start.elapsed() < PATIENCE, "took {:?}", start.elapsed());
}
