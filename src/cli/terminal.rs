//! What the user sees.

use super::Failure;
use std::io::{self, ErrorKind, Write};

/// Writes to standard output. A reader that went away (`| head`) is no failure.
pub(super) fn say(text: &str) -> Result<(), Failure> {
    let mut out = io::stdout().lock();
    match out.write_all(text.as_bytes()).and_then(|()| out.flush()) {
        Err(error) if error.kind() != ErrorKind::BrokenPipe => {
            Err(Failure::Because(format!("standard output: {error}")))
        }
        _ => Ok(()),
    }
}

/// Writes a line to standard error; there is nowhere to complain about that failing.
pub(super) fn complain(text: &str) {
    let _ = writeln!(io::stderr().lock(), "leadsheet: {text}");
}

/// A two-column list.
pub(super) fn list(
    rows: impl IntoIterator<Item = (impl AsRef<str>, impl AsRef<str>)>,
) -> Result<(), Failure> {
    let rows: Vec<_> = rows.into_iter().collect();
    let width = rows.iter().map(|(name, _)| name.as_ref().chars().count()).max().unwrap_or(0);
    let lines: String =
        rows.iter().map(|(name, about)| format!("{:<width$}  {}\n", name.as_ref(), about.as_ref())).collect();
    say(&lines)
}
