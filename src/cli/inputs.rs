//! From paths to recordings.

use super::Failure;
use crate::input;
use crate::recording::Recording;
use std::path::{Path, PathBuf};

/// Reads a recording and makes its leads.
///
/// # Errors
/// The message, with the file in it.
pub(super) fn read(path: &Path) -> Result<Recording, String> {
    let decoded = input::read(path).map_err(|error| error.to_string())?;
    Recording::from_decoded(decoded).map_err(|refusal| format!("{}: {refusal}", path.display()))
}

/// The recordings that the user named: files as they are, folders as the recordings in them, sorted.
///
/// # Errors
/// A folder that can't be read or that holds no recording.
pub(super) fn expand(named: &[PathBuf]) -> Result<Vec<PathBuf>, Failure> {
    let mut recordings = Vec::new();
    for path in named {
        if !path.is_dir() {
            recordings.push(path.clone());
            continue;
        }
        let found = input::recordings_in(path)
            .map_err(|error| Failure::Because(format!("{}: {error}", path.display())))?;
        if found.is_empty() {
            return Err(Failure::Because(format!(
                "{}: holds no recording of a known format; see `leadsheet formats`",
                path.display()
            )));
        }
        recordings.extend(found);
    }
    Ok(recordings)
}
