//! The built program, run as a user runs it.

use std::path::Path;
use std::process::{Command, Output};

/// What a run of the program gave.
#[derive(Debug)]
pub struct Ran {
    /// Exit status; `None` when a signal ended it.
    pub status: Option<i32>,
    /// Standard output.
    pub stdout: String,
    /// Standard error.
    pub stderr: String,
}

/// Runs `leadsheet` with `arguments` in `folder`.
pub fn leadsheet(folder: &Path, arguments: &[&str]) -> Ran {
    ran(Command::new(env!("CARGO_BIN_EXE_leadsheet")).args(arguments).current_dir(folder))
}

/// Runs a prepared command to its end.
pub fn ran(command: &mut Command) -> Ran {
    let Output { status, stdout, stderr } = command.output().expect("the program starts");
    Ran {
        status: status.code(),
        stdout: String::from_utf8(stdout).expect("output is UTF-8"),
        stderr: String::from_utf8(stderr).expect("messages are UTF-8"),
    }
}

impl Ran {
    /// The standard output of a run that must have succeeded.
    pub fn ok(self) -> String {
        assert_eq!(self.status, Some(0), "{}", self.stderr);
        self.stdout
    }
}
