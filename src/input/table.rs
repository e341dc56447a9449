//! The table of formats.

use super::files::Candidate;
use super::{Error, Fault, csv, wfdb};
use crate::recording::Decoded;

/// How sure a format is that a file is its own, 0 (not mine) to 100 (nothing else looks like this).
pub(super) type Score = u8;

/// Reads a file that the format took for its own.
pub(super) type Reader = fn(&Candidate) -> Result<Decoded, Error>;

/// One row: a format and how to know and read it.
pub(super) struct Format {
    pub info: FormatInfo,
    pub score: fn(&Candidate) -> Score,
    pub read: Reader,
}

/// What is listed of a format.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct FormatInfo {
    /// Short name, as it stands in [`Source::format`](crate::recording::Source::format).
    pub name: &'static str,
    /// What it is, on one line.
    pub description: &'static str,
}

const FORMATS: &[Format] = &[wfdb::FORMAT, csv::FORMAT];

/// Every format that is read, in the order in which a file is offered to them.
pub fn formats() -> impl Iterator<Item = FormatInfo> {
    FORMATS.iter().map(|format| format.info)
}

/// The reader of the surest format.
pub(super) fn identify(candidate: &Candidate) -> Result<Reader, Error> {
    let mut best: Option<(Score, &Format)> = None;
    for format in FORMATS {
        let score = (format.score)(candidate);
        if score > best.map_or(0, |(highest, _)| highest) {
            best = Some((score, format));
        }
    }
    if let Some((_, format)) = best {
        return Ok(format.read);
    }
    let names: Vec<&str> = formats().map(|format| format.name).collect();
    Err(candidate.unknown(&names.join(", ")))
}

impl Candidate {
    fn unknown(&self, names: &str) -> Error {
        match self.problem() {
            Some(error) => error,
            None if self.head().is_empty() => {
                Fault::unsupported("the file is empty", "check that it was copied whole").within(self.path())
            }
            None => Fault::unsupported(
                "the content is of no format that is read",
                format!("the formats are {names}; for WFDB name the .hea file"),
            )
            .within(self.path()),
        }
    }
}
