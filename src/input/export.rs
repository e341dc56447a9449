//! The way back: decoded signals to files of an open format.

use super::{csv, wfdb};
use crate::recording::Decoded;
use std::fmt;

/// What is written.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Target {
    /// `NAME.csv` with its sidecar `NAME.toml`. Signals of another rate than most get a table of their own,
    /// `NAME_125Hz.csv`.
    Csv,
    /// `NAME.hea` with `NAME.dat`. Signals of several rates share it.
    Wfdb,
}

/// Why nothing was written.
#[derive(Clone, Debug, PartialEq)]
pub enum ExportError {
    /// There is no sample to write.
    Empty,
    /// The name can't stand in the header.
    Name(String),
    /// The rates of the signals have no common frame.
    Rates(Vec<f64>),
    /// A signal spans more steps than 32 bits hold.
    Range {
        /// As the source names it.
        signal: String,
    },
}

/// The files of `decoded` in another format, each with its name, header or table first.
///
/// All samples are within half a step of the source's resolution, gaps stay gaps, and reading the files gives
/// the same subject, occasion and cautions. `name` is the file name without extension.
///
/// # Errors
/// When the format can't hold the recording; the message says what to do instead.
pub fn export(decoded: &Decoded, target: Target, name: &str) -> Result<Vec<(String, Vec<u8>)>, ExportError> {
    if decoded.signals.iter().all(|signal| signal.samples.is_empty()) {
        return Err(ExportError::Empty);
    }
    match target {
        Target::Csv => Ok(csv::write(decoded, name)),
        Target::Wfdb => wfdb::write(decoded, name),
    }
}

impl fmt::Display for ExportError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Empty => write!(f, "the recording holds no samples; there is nothing to export"),
            Self::Name(name) => write!(
                f,
                "`{name}` can't be the name of a WFDB record; use letters, digits, `_`, `-` and `.` only"
            ),
            Self::Rates(rates) => {
                let rates: Vec<String> = rates.iter().map(f64::to_string).collect();
                write!(
                    f,
                    "signals sampled at {}/s don't fit one WFDB record; export to .csv",
                    rates.join(", ")
                )
            }
            Self::Range { signal } => {
                write!(f, "{signal} spans more steps of its resolution than 32 bits hold; export to .csv")
            }
        }
    }
}

impl std::error::Error for ExportError {}
