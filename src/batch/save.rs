//! Files that are there whole or not at all.

use std::fmt;
use std::fs::{self, File, OpenOptions};
use std::io::{self, ErrorKind, Write};
use std::path::{Path, PathBuf};
use std::sync::atomic::{AtomicUsize, Ordering};

/// What to do when the file is already there.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Overwrite {
    /// Leave it and say so.
    Refuse,
    /// Put the new one in its place.
    Allow,
}

/// Why a file could not be written.
#[derive(Debug)]
pub enum SaveError {
    /// It is already there.
    Exists(PathBuf),
    /// Its folder is not there.
    NoFolder(PathBuf),
    /// The system refused.
    Io {
        /// Which file.
        path: PathBuf,
        /// What it said.
        error: io::Error,
    },
}

impl fmt::Display for SaveError {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            SaveError::Exists(path) => {
                write!(f, "{}: already there; choose another name or add --overwrite", path.display())
            }
            SaveError::NoFolder(path) => {
                write!(f, "{}: the folder is not there; create it or choose another", path.display())
            }
            SaveError::Io { path, error } => write!(f, "{}: could not be written: {error}", path.display()),
        }
    }
}

impl std::error::Error for SaveError {}

/// Writes `bytes` to `path` by way of a temporary file in the same folder.
///
/// # Errors
/// [`SaveError`]; the temporary file is gone then, and what stood at `path` is as it was.
pub fn save(path: &Path, bytes: &[u8], overwrite: Overwrite) -> Result<(), SaveError> {
    let folder = match path.parent() {
        Some(folder) if !folder.as_os_str().is_empty() => folder,
        _ => Path::new("."),
    };
    if !folder.is_dir() {
        return Err(SaveError::NoFolder(folder.to_owned()));
    }
    if overwrite == Overwrite::Refuse && path.symlink_metadata().is_ok() {
        return Err(SaveError::Exists(path.to_owned()));
    }
    let temporary = temporary_beside(folder, path);
    let outcome = write_whole(&temporary, bytes).and_then(|()| put_in_place(&temporary, path, overwrite));
    if outcome.is_err() {
        // The first error is the one to report.
        let _ = fs::remove_file(&temporary);
    }
    outcome.map_err(|error| match error.kind() {
        ErrorKind::AlreadyExists => SaveError::Exists(path.to_owned()),
        _ => SaveError::Io { path: path.to_owned(), error },
    })
}

fn temporary_beside(folder: &Path, path: &Path) -> PathBuf {
    static NEXT: AtomicUsize = AtomicUsize::new(0);
    let name = path.file_name().unwrap_or_default().to_string_lossy();
    let number = NEXT.fetch_add(1, Ordering::Relaxed);
    folder.join(format!(".{name}.{}-{number}.part", std::process::id()))
}

fn write_whole(path: &Path, bytes: &[u8]) -> io::Result<()> {
    let mut file: File = OpenOptions::new().write(true).create_new(true).open(path)?;
    file.write_all(bytes)?;
    file.sync_data()
}

fn put_in_place(temporary: &Path, path: &Path, overwrite: Overwrite) -> io::Result<()> {
    if overwrite == Overwrite::Allow {
        return fs::rename(temporary, path);
    }
    // A hard link fails when the name is taken, where a rename would replace it.
    match fs::hard_link(temporary, path) {
        Ok(()) => fs::remove_file(temporary),
        Err(error) if error.kind() == ErrorKind::AlreadyExists => Err(error),
        // File systems without hard links.
        Err(_) => fs::rename(temporary, path),
    }
}
