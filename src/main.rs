//! Arguments in, exit status out.

use std::process::ExitCode;

fn main() -> ExitCode {
    outcross::commands::run(std::env::args_os())
}
