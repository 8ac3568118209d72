//! Models made at random, in great numbers: none may make the program panic, run for longer than a second, or write a
//! number that is none.
//!
//!     cargo run --release --example fuzz -- [--seed N] [--parse N] [--evaluate N]
//!     cargo run --release --example fuzz -- FILE...
//!
//! The first form makes texts from those of the tests (`corpus`) by changes that know the language (`mutation`): so many
//! are only parsed, so many are checked, computed and written out. The same seed and numbers give the same texts on
//! every machine. A text that comes to an end not seen before joins the others. What goes wrong (`trial`) is written to
//! files below `target/fuzz`, which the second form runs again.

#![allow(
    clippy::expect_used,
    clippy::panic,
    clippy::print_stdout,
    reason = "this is a test, and talks to the one who runs it"
)]

mod case;
mod corpus;
#[allow(dead_code, reason = "the tests use all of it")]
#[path = "../support/memory.rs"]
mod memory;
mod mutation;
#[path = "../support/random.rs"]
mod random;
mod trial;
mod watch;

use case::Case;
use corpus::Corpus;
use memory::Memory;
use random::Random;
use std::process::ExitCode;
use std::time::{Duration, Instant};
use trial::{Fault, Outcome};
use watch::Watch;

/// What a run consists of.
struct Plan {
    seed: u64,
    parse: u64,
    evaluate: u64,
    files: Vec<String>,
}

fn plan() -> Plan {
    let mut plan = Plan {
        seed: 1,
        parse: 200_000,
        evaluate: 20_000,
        files: Vec::new(),
    };
    let mut arguments = std::env::args().skip(1);
    while let Some(argument) = arguments.next() {
        let target = match argument.as_str() {
            "--seed" => &mut plan.seed,
            "--parse" => &mut plan.parse,
            "--evaluate" => &mut plan.evaluate,
            _ => {
                plan.files.push(argument);
                continue;
            }
        };
        let number = arguments.next().and_then(|number| number.parse().ok());
        *target = number.expect("a number stands behind the option");
    }
    plan
}

fn main() -> ExitCode {
    let plan = plan();
    let corpus = Corpus::of_the_tests();
    let mut run = Run::new(corpus.clone(), plan.seed);
    if plan.files.is_empty() {
        run.many("parsed", plan.parse, mutation::any, |case, _| trial::parse(case));
        run.corpus = corpus.clone();
        run.try_all();
        run.many("evaluated", plan.evaluate, mutation::sound, trial::evaluate);
    } else {
        for file in &plan.files {
            let text = std::fs::read_to_string(file).expect("the file can be read");
            let case = Case::from_text(&text);
            run.one(&case, trial::evaluate);
        }
    }
    println!("{} faults", run.faults);
    if run.faults == 0 {
        ExitCode::SUCCESS
    } else {
        ExitCode::FAILURE
    }
}

/// A run, and what it has come to so far.
struct Run {
    corpus: Corpus,
    memory: Memory,
    random: Random,
    watch: Watch,
    faults: usize,
    computed: u64,
    slowest: Duration,
}

impl Run {
    fn new(corpus: Corpus, seed: u64) -> Self {
        let memory = corpus.neighbours();
        println!("{} texts to begin with", corpus.models.len());
        // What a trial has to say about its panics is written to a file.
        std::panic::set_hook(Box::new(|_| {}));
        Self {
            corpus,
            memory,
            random: Random(seed),
            watch: Watch::start(),
            faults: 0,
            computed: 0,
            slowest: Duration::ZERO,
        }
    }

    /// Finds the models that have results.
    fn try_all(&mut self) {
        for model in self.corpus.models.clone() {
            let case = Case { model, neighbour: None };
            if self.one(&case, trial::evaluate) {
                self.corpus.sound.push(case.model);
            }
        }
        println!("{} of the models have results", self.corpus.sound.len());
    }

    /// Makes and tries many cases.
    fn many(
        &mut self,
        what: &str,
        count: u64,
        make: fn(&Corpus, &mut Random) -> Case,
        trial: fn(&Case, &mut Memory) -> Outcome,
    ) {
        let start = Instant::now();
        (self.computed, self.slowest) = (0, Duration::ZERO);
        for number in 1..=count {
            let case = make(&self.corpus, &mut self.random);
            self.one(&case, trial);
            if number == count || number.is_multiple_of(1_000_000) {
                let seconds = start.elapsed().as_secs_f64();
                println!(
                    "{what} {number} in {seconds:.0} s ({:.0} per second), {} of them with results; slowest {:.0} ms; \
                     {} + {} texts, {} faults",
                    number as f64 / seconds,
                    self.computed,
                    self.slowest.as_secs_f64() * 1e3,
                    self.corpus.models.len(),
                    self.corpus.sound.len(),
                    self.faults
                );
            }
        }
    }

    /// Tries one case, and says whether it has results.
    fn one(&mut self, case: &Case, trial: fn(&Case, &mut Memory) -> Outcome) -> bool {
        let (outcome, time) = self.timed(case, trial);
        self.slowest = self.slowest.max(time);
        let fault = match outcome {
            Ok(_) if time > watch::PATIENCE => Fault::Slow(time),
            Ok(end) => {
                self.computed += u64::from(end.has_results);
                self.corpus.learn(case, &end);
                return end.has_results;
            }
            Err(fault) => fault,
        };
        self.faults += 1;
        let path = case.save(&fault.to_string());
        println!("{}: {fault}", path.display());
        false
    }

    fn timed(&mut self, case: &Case, trial: fn(&Case, &mut Memory) -> Outcome) -> (Outcome, Duration) {
        self.watch.begin(case);
        let (start, busy) = (Instant::now(), watch::busy());
        let outcome = trial::guarded(case, &mut self.memory, trial);
        let (time, busy) = (start.elapsed(), watch::busy().zip(busy).map(|(end, start)| end - start));
        self.watch.end();
        (outcome, busy.unwrap_or(time))
    }
}
