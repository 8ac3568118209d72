//! The program from outside: arguments and files in, output and exit status out.

mod contract;
mod examples;
mod files;
mod root;
mod sarif;
mod settings;
mod statuses;
mod terminal;
mod units;

use serde_json::Value;
use std::ffi::OsStr;
use std::io::Write;
use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};
use std::sync::atomic::{AtomicU32, Ordering};
use std::{env, fs, process};

/// A gust of 1 kN about 2 kN, and a level four standard deviations up. The moments of the squared exponential are known
/// in closed form.
pub const GUST: &str = r#"
language 1
title "Gust on a sign"

parameter level : kN = 6 kN     basis "Sheet 3"
parameter memory : s = 2 s

process gust : kN = gaussian(
    mean: 2 kN
    standard_deviation: 1 kN
    correlation: squared_exponential(length: memory)
)
margin pull : kN = 2 * gust

limit state bending {
    failure when      gust > level
    reference period  1000 s
    require           failure_probability <= 5 %   basis "Brief, 4.2"
    require           reliability_index >= 2 over 10 min
    tabulate at       1 min, 1000 s
}

expect standard_deviation(pull) = 2 kN within 0.1 %
expect mean(gust) = 2 kN within 1 N   basis "Survey"
"#;

/// A folder of its own for a test, gone with the test.
pub struct Folder {
    path: PathBuf,
}

impl Folder {
    /// An empty folder.
    pub fn new() -> Self {
        static NEXT: AtomicU32 = AtomicU32::new(0);
        let name = format!("{}-{}", process::id(), NEXT.fetch_add(1, Ordering::Relaxed));
        let path = Path::new(env!("CARGO_TARGET_TMPDIR")).join(name);
        fs::create_dir_all(&path).expect("a folder can be made");
        Self { path }
    }

    /// A folder with one file in it.
    pub fn with(name: &str, content: impl AsRef<[u8]>) -> Self {
        let folder = Self::new();
        folder.write(name, content);
        folder
    }

    /// Writes a file, and the folders it is in.
    pub fn write(&self, name: &str, content: impl AsRef<[u8]>) {
        let path = self.path.join(name);
        let parent = path.parent().expect("a file is in a folder");
        fs::create_dir_all(parent).expect("a folder can be made");
        fs::write(path, content).expect("a file can be written");
    }

    /// The place of a file.
    pub fn path(&self, name: &str) -> PathBuf {
        self.path.join(name)
    }

    /// The program, to be run in this folder, whatever the surroundings say about colour.
    pub fn command(&self) -> Command {
        program(&self.path)
    }

    /// Runs the program in this folder.
    pub fn run<A: AsRef<OsStr>>(&self, arguments: impl IntoIterator<Item = A>) -> Run {
        Run::of(self.command().args(arguments), b"")
    }
}

impl Drop for Folder {
    fn drop(&mut self) {
        // A folder that stays behind harms nobody.
        let _ = fs::remove_dir_all(&self.path);
    }
}

/// The program, to be run in a folder.
pub fn program(folder: &Path) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_outcross"));
    command.current_dir(folder).env_remove("NO_COLOR");
    command
}

/// What a run left behind.
pub struct Run {
    /// The exit status.
    pub status: i32,
    /// Standard output.
    pub out: String,
    /// Standard error.
    pub err: String,
}

impl Run {
    /// Runs a command to its end with this on its standard input.
    pub fn of(command: &mut Command, input: &[u8]) -> Self {
        let mut child = command
            .stdin(Stdio::piped())
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .expect("the program starts");
        // A program that does not read its input is free to end before it is written.
        let _ = child.stdin.take().expect("the input is a pipe").write_all(input);
        Self::from(child.wait_with_output().expect("the program ends"))
    }

    /// The JSON document on standard output.
    pub fn json(&self) -> Value {
        serde_json::from_str(&self.out).unwrap_or_else(|error| panic!("{error}\n{}\n{}", self.out, self.err))
    }

    /// Holds the exit status, showing everything if it is another one.
    pub fn ends_with(self, status: i32) -> Self {
        assert_eq!(self.status, status, "\n---- out\n{}\n---- err\n{}", self.out, self.err);
        self
    }
}

impl From<Output> for Run {
    fn from(output: Output) -> Self {
        Self {
            status: output.status.code().expect("the program ends by itself"),
            out: String::from_utf8(output.stdout).expect("the output is UTF-8"),
            err: String::from_utf8(output.stderr).expect("the findings are UTF-8"),
        }
    }
}

/// Whether two numbers agree to a relative tolerance.
pub fn near(one: f64, other: f64, tolerance: f64) -> bool {
    (one - other).abs() <= tolerance * one.abs().max(other.abs())
}
