//! Files from disk: the one that was named, and those beside it.

use super::pieces::Pieces;
use super::{At, Error, Fault};
use sha2::{Digest, Sha256};
use std::borrow::Cow;
use std::fs::{self, File};
use std::io::{self, Read};
use std::path::{Path, PathBuf};

/// Enough to know any format by.
const HEAD: u64 = 64 * 1024;

/// Text files (headers, sidecars) are small; what is longer is none.
const MAX_TEXT: u64 = 4 * 1024 * 1024;

/// Data files up to 4 GiB are read.
const MAX_DATA: u64 = 4 * 1024 * 1024 * 1024;

/// A path that may be a recording: its first bytes, or why it has none.
pub(super) struct Candidate {
    path: PathBuf,
    head: io::Result<Vec<u8>>,
}

impl Candidate {
    /// Looks at the file. A missing one is not yet an error, because a record may be named without its
    /// extension; a folder is.
    pub fn open(path: &Path) -> Result<Self, Error> {
        if path.is_dir() {
            return Err(
                Fault::unsupported("this is a folder", "name the recording's file in it").within(path)
            );
        }
        Ok(Self { path: path.to_path_buf(), head: head_of(path) })
    }

    pub fn path(&self) -> &Path {
        &self.path
    }

    /// The first bytes; none when the file can't be read.
    pub fn head(&self) -> &[u8] {
        self.head.as_deref().unwrap_or_default()
    }

    /// Why the first bytes could not be read.
    pub fn problem(&self) -> Option<Error> {
        let error = self.head.as_ref().err()?;
        Some(Fault::Io(io::Error::new(error.kind(), error.to_string())).within(&self.path))
    }
}

fn head_of(path: &Path) -> io::Result<Vec<u8>> {
    let mut head = Vec::new();
    open_regular(path)?.take(HEAD).read_to_end(&mut head)?;
    Ok(head)
}

/// Opens a regular file; a pipe or a device would block or never end.
fn open_regular(path: &Path) -> io::Result<File> {
    if !fs::metadata(path)?.is_file() {
        return Err(io::Error::new(io::ErrorKind::InvalidInput, "not a regular file"));
    }
    File::open(path)
}

/// The files of one recording, hashed in the order in which they are read.
#[derive(Default)]
pub(super) struct Files {
    hash: Sha256,
}

impl Files {
    /// All bytes of a header or sidecar.
    pub fn text(&mut self, path: &Path) -> Result<Vec<u8>, Error> {
        self.read(path, MAX_TEXT)
    }

    /// All bytes of a data file.
    pub fn data(&mut self, path: &Path) -> Result<Vec<u8>, Error> {
        self.read(path, MAX_DATA)
    }

    /// A data file to be read from front to end; only what the caller takes stands in memory.
    pub fn pieces<'a>(&'a mut self, path: &'a Path) -> Result<Pieces<'a>, Error> {
        let open = || -> io::Result<(File, u64)> {
            let file = open_regular(path)?;
            let length = file.metadata()?.len();
            Ok((file, length))
        };
        let (file, length) = open().map_err(|error| Fault::Io(error).within(path))?;
        Ok(Pieces::new(file, length, path, &mut self.hash))
    }

    fn read(&mut self, path: &Path, max: u64) -> Result<Vec<u8>, Error> {
        let whole = || -> io::Result<Result<Vec<u8>, u64>> {
            let mut file = open_regular(path)?;
            let length = file.metadata()?.len();
            if length > max {
                return Ok(Err(length));
            }
            let mut bytes = Vec::with_capacity(length as usize);
            file.by_ref().take(max).read_to_end(&mut bytes)?;
            Ok(Ok(bytes))
        };
        match whole() {
            Ok(Ok(bytes)) => {
                self.hash.update(&bytes);
                Ok(bytes)
            }
            Ok(Err(found)) => Err(Fault::Limit { what: "bytes in the file", found, max }.within(path)),
            Err(error) => Err(Fault::Io(error).within(path)),
        }
    }

    /// SHA-256 over everything read so far, in lower-case hex.
    pub fn sha256(self) -> String {
        self.hash.finalize().iter().map(|byte| format!("{byte:02x}")).collect()
    }
}

/// The file `name` in the folder of `header`. Only a plain file name is followed, so that a header can't
/// reach outside its own folder.
pub(super) fn beside(header: &Path, name: &str, at: At) -> Result<PathBuf, Fault> {
    let plain = !name.is_empty()
        && name != "."
        && name != ".."
        && !name.contains(['/', '\\', ':', '\0'])
        && name != "-";
    if !plain {
        return Err(Fault::malformed(
            at,
            "the name of a file beside the header",
            format!("`{name}`"),
            "only files in the header's own folder are read: put the file there and name it without a folder",
        ));
    }
    Ok(header.with_file_name(name))
}

/// The last part of a path, for [`Source::file`](crate::recording::Source::file).
pub(super) fn file_name(path: &Path) -> String {
    path.file_name().map(|name| name.to_string_lossy().into_owned()).unwrap_or_default()
}

/// UTF-8, or else Latin-1, which every byte string is. Control characters are replaced, so that no source
/// can steer the terminal that shows its words.
pub(super) fn text_of(bytes: &[u8]) -> Cow<'_, str> {
    let bytes = bytes.strip_prefix(b"\xef\xbb\xbf").unwrap_or(bytes);
    let text: Cow<str> = match std::str::from_utf8(bytes) {
        Ok(text) => text.into(),
        Err(_) => bytes.iter().map(|&byte| char::from(byte)).collect(),
    };
    if text.contains(is_steering) { plain(&text).into() } else { text }
}

/// The same text with control characters replaced, line ends and tabs aside.
pub(super) fn plain(text: &str) -> String {
    text.replace(is_steering, "\u{fffd}")
}

fn is_steering(c: char) -> bool {
    c.is_control() && !matches!(c, '\n' | '\r' | '\t')
}
