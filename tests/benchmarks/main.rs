//! Speed, each figure beside its baseline: `cargo bench`.
//!
//! Baselines: `pest_alone` reads the same text with the grammar and throws the pairs away; `nothing` is a Rust program
//! that does nothing, run as a whole process. That of responses is SciPy (`responses.py` beside this file).

#![allow(missing_docs, reason = "what pest_derive makes has none")]
#![allow(
    clippy::expect_used,
    clippy::panic,
    reason = "a benchmark of something broken should stop"
)]

mod generated;
mod responses;

use divan::{Bencher, black_box};
use outcross::check::{Model, Settings, check};
use outcross::covariance::moments::MomentTable;
use outcross::diagnostics::Diagnostic;
use outcross::report::text;
use outcross::results::evaluate;
use outcross::source::{Files, Reader, Unreadable};
use pest::Parser;
use std::io::Write;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

fn main() {
    divan::main();
}

#[derive(pest_derive::Parser)]
#[grammar = "grammar/outcross.pest"]
struct Grammar;

/// One text, whatever the path.
struct Held(String);

impl Reader for Held {
    fn read(&self, _: &Path) -> Result<String, Unreadable> {
        Ok(self.0.clone())
    }

    fn identity(&self, path: &Path) -> PathBuf {
        path.to_path_buf()
    }
}

/// The checked model, with what was found besides.
fn checked(files: &mut Files, held: &Held) -> (Model, Vec<Diagnostic>) {
    let settings = Settings {
        require_parameters: true,
        ..Settings::default()
    };
    let (model, diagnostics) = check(files, held, Path::new("generated.limit"), &settings);
    match model {
        Some(model) => (model, diagnostics),
        None => panic!("the generated model has no faults, but {diagnostics:?}"),
    }
}

/// All of `evaluate` but the process around it, the report written to memory. Returns its size.
fn whole(held: &Held) -> usize {
    let mut files = Files::new();
    let (model, diagnostics) = checked(&mut files, held);
    let results = evaluate(&files, &model, &diagnostics, &[]);
    let mut out = Vec::new();
    text::write(&mut out, &model, &results).expect("memory takes all");
    out.len()
}

#[divan::bench(args = [1_000, 10_000], sample_count = 10, sample_size = 1)]
fn pest_alone(bencher: Bencher<'_, '_>, tens: usize) {
    let text = generated::model(tens);
    bencher.bench(|| {
        Grammar::parse(Rule::stretch, black_box(&text))
            .expect("the text is right")
            .count()
    });
}

#[divan::bench(args = [1_000, 10_000], sample_count = 10, sample_size = 1)]
fn evaluate_whole(bencher: Bencher<'_, '_>, tens: usize) {
    let held = Held(generated::model(tens));
    bencher.bench(|| whole(black_box(&held)));
}

/// The margin alone, from its linear form to its moments, nothing known of its sources beforehand.
#[divan::bench(sample_count = 50, sample_size = 1)]
fn margin_of_2000_terms_over_500_sources(bencher: Bencher<'_, '_>) {
    let held = Held(generated::wide_margin());
    let model = checked(&mut Files::new(), &held).0;
    bencher.bench_local(|| {
        let margin = model.varying.iter().find(|named| named.name == "wide");
        margin.map(|margin| MomentTable::new(black_box(&model.sources)).moments(&margin.form))
    });
}

/// The file of that margin, with its 500 processes, from text to report.
#[divan::bench(sample_count = 20, sample_size = 1)]
fn file_of_that_margin(bencher: Bencher<'_, '_>) {
    let held = Held(generated::wide_margin());
    bencher.bench(|| whole(black_box(&held)));
}

fn run(program: &Path, arguments: &[&Path]) {
    let status = Command::new(program).args(arguments).stdout(Stdio::null()).status();
    assert!(
        status.is_ok_and(|status| status.success()),
        "{} runs",
        program.display()
    );
}

/// The program that does nothing, built on demand: cargo builds no examples for a benchmark.
fn nothing() -> PathBuf {
    let built = Command::new(env!("CARGO"))
        .args(["build", "--quiet", "--release", "--example", "nothing"])
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .status();
    assert!(built.is_ok_and(|status| status.success()), "the baseline is built");
    Path::new(env!("CARGO_BIN_EXE_outcross"))
        .with_file_name("examples")
        .join("nothing")
}

#[divan::bench(sample_count = 200, sample_size = 1)]
fn start_of_nothing(bencher: Bencher<'_, '_>) {
    let nothing = nothing();
    bencher.bench(|| run(&nothing, &[]));
}

#[divan::bench(sample_count = 200, sample_size = 1)]
fn start_of_check_of_40_lines(bencher: Bencher<'_, '_>) {
    let text = generated::model(1);
    let lines: Vec<&str> = text.lines().collect();
    let path = std::env::temp_dir().join(format!("outcross-bench-{}.limit", std::process::id()));
    let mut file = std::fs::File::create(&path).expect("the temporary folder takes a file");
    writeln!(file, "{}", lines.join("\n")).expect("the disk takes the file");
    let program = PathBuf::from(env!("CARGO_BIN_EXE_outcross"));
    bencher.bench(|| run(&program, &[Path::new("check"), &path]));
    std::fs::remove_file(&path).expect("the file was made above");
}
