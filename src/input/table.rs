//! The table of formats.

use super::files::Candidate;
use super::{Error, Fault, csv, edf, ishne, wfdb};
use crate::recording::Decoded;
use std::collections::{BTreeMap, BTreeSet};
use std::ffi::OsString;
use std::fs;
use std::io;
use std::path::{Path, PathBuf};

/// How sure a format is that a file is its own, 0 (not mine) to 100 (nothing else looks like this).
pub(super) type Score = u8;

/// Reads a file that the format took for its own.
pub(super) type Reader = fn(&Candidate) -> Result<Decoded, Error>;

/// One row: a format and how to know and read it.
pub(super) struct Format {
    pub info: FormatInfo,
    pub score: fn(&Candidate) -> Score,
    /// Whether the file stands for a recording of its own in a folder: a header does, its data don't.
    pub stands_alone: fn(&Candidate) -> bool,
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

const FORMATS: &[Format] = &[wfdb::FORMAT, edf::FORMAT, ishne::FORMAT, csv::FORMAT];

/// Every format that is read, in the order in which a file is offered to them.
pub fn formats() -> impl Iterator<Item = FormatInfo> {
    FORMATS.iter().map(|format| format.info)
}

/// The recordings in a folder, sorted by name; one that stands there in several formats is listed once,
/// in the first of the table, and the segments of a record are not listed beside it.
///
/// # Errors
/// When the folder can't be read.
pub fn recordings_in(folder: &Path) -> io::Result<Vec<PathBuf>> {
    let mut found: BTreeMap<OsString, (usize, PathBuf)> = BTreeMap::new();
    let mut segments: BTreeSet<OsString> = BTreeSet::new();
    for entry in fs::read_dir(folder)? {
        let path = entry?.path();
        if !path.is_file() {
            continue;
        }
        let Ok(candidate) = Candidate::open(&path) else { continue };
        let Some(format) = FORMATS.iter().position(|format| (format.stands_alone)(&candidate)) else {
            continue;
        };
        segments.extend(wfdb::segments_of(&candidate).into_iter().map(OsString::from));
        let name = path.file_stem().unwrap_or_default().to_owned();
        match found.get(&name) {
            Some((known, _)) if *known <= format => {}
            _ => {
                found.insert(name, (format, path));
            }
        }
    }
    found.retain(|name, (format, _)| FORMATS[*format].info != wfdb::FORMAT.info || !segments.contains(name));
    Ok(found.into_values().map(|(_, path)| path).collect())
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
