//! `outcross explain CODE`

use super::session::{complain, print};
use super::{ExplainArguments, Status};
use crate::check::names_near;
use crate::diagnostics::Code;
use std::io::{self, Write};

pub(super) fn run(arguments: &ExplainArguments) -> io::Result<Status> {
    let Some(name) = &arguments.code else {
        print(|out| list(out))?;
        return Ok(Status::Holds);
    };
    match Code::find(name) {
        Some(code) => {
            print(|out| write!(out, "{}", code.page()))?;
            Ok(Status::Holds)
        }
        None => {
            let known = Code::ALL.iter().map(|code| code.name());
            let help = match names_near(name, known) {
                Some(near) => format!("did you mean {near}?"),
                None => "`outcross explain` lists them all".to_string(),
            };
            complain(&format!("there is no code `{name}`; {help}"))?;
            Ok(Status::Wrong)
        }
    }
}

fn list(out: &mut dyn Write) -> io::Result<()> {
    for code in Code::ALL {
        writeln!(out, "{:<30}{}", code.name(), code.summary())?;
    }
    Ok(())
}
