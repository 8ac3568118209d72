//! The command line: one file a command, and what they share.

mod check;
mod evaluate;
mod explain;
mod session;

use crate::source::Disk;
use clap::builder::styling::Styles;
use clap::builder::{PathBufValueParser, TypedValueParser};
use clap::{Args, Parser, Subcommand, ValueEnum};
use std::ffi::OsString;
use std::path::PathBuf;
use std::process::ExitCode;

/// What a run ends with.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Status {
    /// Done, and every requirement and expectation holds.
    Holds,
    /// Done, and a requirement or an expectation does not hold.
    DoesNotHold,
    /// The model, a data file or the command line is wrong: nothing was computed.
    Wrong,
    /// A result could not be reached to its tolerance.
    NotReached,
}

impl From<Status> for u8 {
    fn from(status: Status) -> Self {
        match status {
            Status::Holds => 0,
            Status::DoesNotHold => 1,
            Status::Wrong => 2,
            Status::NotReached => 3,
        }
    }
}

impl From<Status> for ExitCode {
    fn from(status: Status) -> Self {
        u8::from(status).into()
    }
}

// Lines are short enough that no terminal but a narrow one breaks them again.
const CAUTION: &str = "\
Results are as good as the model and its assumptions: Gaussian, stationary processes and crossings
counted as a Poisson process. They do not replace the code of practice that applies, the judgement
of a licensed engineer, or an independent check. Requirements of local codes and authorities go
first.

Exit status
  0   done; every requirement is met and every expectation holds
  1   done; a requirement is not met or not established, or an expectation does not hold
  2   the model, a data file or the command line is wrong; nothing was computed
  3   a result could not be reached to its tolerance; what was computed is printed";

const OF_CHECK: &str = "\
Findings go to standard error; a line that counts what the model has goes to standard output.
With --json or --sarif, the findings are a document on standard output.

Exit status
  0   nothing is wrong (there may be warnings)
  2   a model, a data file or the command line is wrong";

const OF_EVALUATE: &str = "\
Results go to standard output, findings to standard error. With --json, the results are a document
in coherent SI units, or an array of them for several files; where a model is wrong, its findings are
a document in their place.

Exit status
  0   done; every requirement is met and every expectation holds
  1   done; a requirement is not met or not established, or an expectation does not hold
  2   a model, a data file or the command line is wrong; nothing was computed
  3   a result could not be reached to its tolerance; what was computed is printed

Results do not replace the code of practice that applies, the judgement of a licensed engineer, or
an independent check.";

/// Checks and computes stochastic limit states: whether a margin of Gaussian processes stays positive for years.
#[derive(Parser)]
#[command(name = "outcross", version, styles = Styles::plain(), after_help = CAUTION, max_term_width = 100)]
struct CommandLine {
    #[command(subcommand)]
    command: Command,
    /// Colour in the findings; `auto` follows the terminal and the variable NO_COLOR
    #[arg(long, global = true, value_enum, default_value_t = ColorChoice::Auto, value_name = "WHEN")]
    color: ColorChoice,
}

#[derive(Clone, Copy, ValueEnum)]
enum ColorChoice {
    Auto,
    Always,
    Never,
}

#[derive(Subcommand)]
enum Command {
    /// Check names, parts, units, kinds and kernels; every problem is shown, not the first
    #[command(after_help = OF_CHECK)]
    Check(CheckArguments),
    /// Check, then compute moments, crossing rates, survival, requirements and expectations
    #[command(after_help = OF_EVALUATE)]
    Evaluate(EvaluateArguments),
    /// Explain a code of a finding, such as `unit/mismatch`, with an example and the mend
    Explain(ExplainArguments),
}

#[derive(Args)]
struct ModelArguments {
    /// Model files (`.limit`); `-` reads standard input
    #[arg(required = true, value_name = "FILE")]
    files: Vec<PathBuf>,
    /// Set a parameter of the file in any unit of its dimension: `--set rod_diameter="36 mm"`; may be repeated
    #[arg(long = "set", value_name = "NAME=VALUE")]
    set: Vec<String>,
    /// Read nothing outside of this folder; if left out, of the nearest folder around the model that holds `.git`, or
    /// of the model's own folder
    #[arg(long, value_name = "FOLDER", value_parser = PathBufValueParser::new().try_map(|path| Disk::within(&path)))]
    root: Option<Disk>,
    /// Write a JSON document to standard output
    #[arg(long)]
    json: bool,
}

#[derive(Args)]
struct CheckArguments {
    #[command(flatten)]
    model: ModelArguments,
    /// Write the findings to standard output as a SARIF 2.1.0 log, for tools that gather findings
    #[arg(long, conflicts_with = "json")]
    sarif: bool,
}

#[derive(Args)]
struct EvaluateArguments {
    #[command(flatten)]
    model: ModelArguments,
    /// Compute only this limit state; may be repeated
    #[arg(long, value_name = "LIMIT_STATE")]
    only: Vec<String>,
    /// The largest relative error a failure probability may have
    #[arg(long, value_name = "REL", default_value_t = 1e-3, value_parser = tolerance)]
    tolerance: f64,
}

#[derive(Args)]
struct ExplainArguments {
    /// The code as shown with a finding; without one, all codes are listed
    #[arg(value_name = "CODE")]
    code: Option<String>,
}

fn tolerance(text: &str) -> Result<f64, String> {
    match text.parse::<f64>() {
        Ok(value) if value > 0.0 && value < 1.0 => Ok(value),
        _ => Err("a tolerance is a number above 0 and below 1, such as 1e-3".to_string()),
    }
}

/// Runs the program with its arguments, the first being its own name.
pub fn run(arguments: impl IntoIterator<Item = OsString>) -> ExitCode {
    let line = match CommandLine::try_parse_from(arguments) {
        Ok(line) => line,
        Err(error) => {
            // Help and version are asked for; anything else is a fault of the command line.
            let status = if error.use_stderr() {
                Status::Wrong
            } else {
                Status::Holds
            };
            // A closed pipe is nobody's fault here.
            let _ = error.print();
            return status.into();
        }
    };
    let status = match line.command {
        Command::Check(arguments) => check::run(&arguments, line.color),
        Command::Evaluate(arguments) => evaluate::run(&arguments, line.color),
        Command::Explain(arguments) => explain::run(&arguments),
    };
    status.unwrap_or_else(session::output_failed).into()
}
