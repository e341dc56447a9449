//! Files in, [`Decoded`] out: the one place where counts become mV.
//!
//! A format is one folder and one row of the table that [`formats`] lists; files are identified by
//! content. A reader never panics, never allocates past its limits, and never guesses a unit or a rate.

mod clipping;
mod csv;
mod edf;
mod error;
mod export;
mod files;
mod ishne;
mod limits;
mod pieces;
mod stated;
mod table;
mod voltage;
mod wfdb;

pub use error::{At, Error, Fault};
pub use export::{ExportError, Target, export};
pub use table::{FormatInfo, formats, recordings_in};
pub use wfdb::marks;

use crate::recording::Decoded;
use std::path::Path;

/// Reads one recording. `path` names its header, its data file beside the header, or the record without
/// an extension.
///
/// # Errors
/// When the file can't be opened, is of no known format, breaks its format's rules, or states more than
/// is read. The message says where, and what to do next.
pub fn read(path: &Path) -> Result<Decoded, Error> {
    let candidate = files::Candidate::open(path)?;
    table::identify(&candidate)?(&candidate)
}
