//! The command line: the only room with arguments, the terminal, the clock and the environment.
//!
//! Arguments as typed become checked values, then work, then an exit status: 0 when all
//! was done, 1 when something could not be, 2 when the arguments don't make sense.

mod args;
mod demo;
mod export;
mod inputs;
mod look;
mod measure;
mod print;
mod terminal;

use args::{Command, Typed};
use clap::Parser;
use std::ffi::OsString;
use std::process::ExitCode;

/// Why a command ended without doing all of its work.
enum Failure {
    /// The arguments don't make sense together.
    Usage(String),
    /// Something could not be done; everything has been said.
    Reported,
    /// Something could not be done, and this is why.
    Because(String),
}

/// Runs the program on its arguments, the program's name first.
pub fn run(arguments: impl IntoIterator<Item = OsString>) -> ExitCode {
    let typed = match Typed::try_parse_from(arguments) {
        Ok(typed) => typed,
        Err(error) => {
            // Help and version go to stdout with status 0, mistakes to stderr with status 2.
            let _ = error.print();
            return ExitCode::from(if error.use_stderr() { 2 } else { 0 });
        }
    };
    let outcome = match &typed.command {
        Command::Print(args) => print::print(args),
        Command::Measure(args) => measure::measure(args),
        Command::Export(args) => export::export(args),
        Command::Layouts => terminal::list(crate::sheet::layouts().map(|layout| (layout.name, layout.about))),
        Command::Formats => {
            terminal::list(crate::input::formats().map(|format| (format.name, format.description)))
        }
        Command::Demo(args) => demo::demo(args),
    };
    match outcome {
        Ok(()) => ExitCode::SUCCESS,
        Err(Failure::Usage(text)) => {
            terminal::complain(&text);
            ExitCode::from(2)
        }
        Err(Failure::Because(text)) => {
            terminal::complain(&text);
            ExitCode::FAILURE
        }
        Err(Failure::Reported) => ExitCode::FAILURE,
    }
}
