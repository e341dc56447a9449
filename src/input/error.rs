//! Why a file could not be read.

use std::fmt;
use std::io::ErrorKind;
use std::path::{Path, PathBuf};

/// One file that could not be read.
#[derive(Debug)]
pub struct Error {
    /// Which file.
    pub file: PathBuf,
    /// What is wrong with it.
    pub fault: Fault,
}

/// What is wrong.
#[derive(Debug)]
pub enum Fault {
    /// The bytes break the format's rules.
    Malformed {
        /// Where in the file.
        at: At,
        /// What stands there in a sound file.
        expected: String,
        /// What stands there.
        found: String,
        /// What to do next.
        advice: String,
    },
    /// A sound file that this program can't use.
    Unsupported {
        /// What it is, or what it needs.
        what: String,
        /// What to do next.
        advice: String,
    },
    /// A count above what is read.
    Limit {
        /// What is counted.
        what: &'static str,
        /// How many there are.
        found: u64,
        /// How many are read at most.
        max: u64,
    },
    /// The file could not be opened or read.
    Io(std::io::Error),
}

/// A place in a file.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum At {
    /// The file as a whole.
    File,
    /// A 1-based line.
    Line(u64),
    /// A 1-based line and column of a table.
    Cell {
        /// 1-based line.
        line: u64,
        /// 1-based column.
        column: u64,
    },
    /// A 0-based byte.
    Byte(u64),
}

/// Characters of a found text in a message.
const MOST_SHOWN: usize = 400;

impl Fault {
    /// The bytes break the format's rules at a place. What was found is shown up to a length.
    pub(crate) fn malformed(
        at: At,
        expected: impl Into<String>,
        found: impl Into<String>,
        advice: impl Into<String>,
    ) -> Self {
        let mut found = found.into();
        if let Some((end, _)) = found.char_indices().nth(MOST_SHOWN) {
            found.truncate(end);
            found.push('\u{2026}');
        }
        Self::Malformed { at, expected: expected.into(), found, advice: advice.into() }
    }

    /// A sound file that this program can't use.
    pub(crate) fn unsupported(what: impl Into<String>, advice: impl Into<String>) -> Self {
        Self::Unsupported { what: what.into(), advice: advice.into() }
    }

    /// The fault, in a file.
    pub(crate) fn within(self, file: &Path) -> Error {
        Error { file: file.to_path_buf(), fault: self }
    }
}

impl fmt::Display for At {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            At::File => write!(f, "whole file"),
            At::Line(line) => write!(f, "line {line}"),
            At::Cell { line, column } => write!(f, "line {line}, column {column}"),
            At::Byte(byte) => write!(f, "byte {byte}"),
        }
    }
}

impl fmt::Display for Error {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "{}: ", self.file.display())?;
        match &self.fault {
            Fault::Malformed { at: At::File, expected, found, advice } => {
                write!(f, "expected {expected}, found {found}; {advice}")
            }
            Fault::Malformed { at, expected, found, advice } => {
                write!(f, "{at}: expected {expected}, found {found}; {advice}")
            }
            Fault::Unsupported { what, advice } => write!(f, "{what}; {advice}"),
            Fault::Limit { what, found, max } => {
                write!(f, "{found} {what}, but at most {max} are read; check the file's header")
            }
            Fault::Io(error) if error.kind() == ErrorKind::NotFound => {
                write!(f, "there is no such file; check the path")
            }
            Fault::Io(error) => write!(f, "{error}; check the path and the permissions"),
        }
    }
}

impl std::error::Error for Error {}
