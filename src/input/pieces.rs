//! A file read piece by piece, so that a long recording stands in memory once, as samples.

use super::{At, Error, Fault};
use sha2::{Digest, Sha256};
use std::fs::File;
use std::io::{self, BufReader, Read};
use std::path::Path;

const BUFFER: usize = 256 * 1024;

/// A file from front to end. Every byte is hashed, also what is passed over.
pub(super) struct Pieces<'a> {
    reader: BufReader<File>,
    hash: &'a mut Sha256,
    path: &'a Path,
    length: u64,
    position: u64,
    piece: Vec<u8>,
}

impl<'a> Pieces<'a> {
    /// At the front of a file of so many bytes.
    pub fn new(file: File, length: u64, path: &'a Path, hash: &'a mut Sha256) -> Self {
        let reader = BufReader::with_capacity(BUFFER, file);
        Self { reader, hash, path, length, position: 0, piece: Vec::new() }
    }

    /// Bytes of the whole file.
    pub fn length(&self) -> u64 {
        self.length
    }

    /// The next `count` bytes. Where the file ends before, that is the error, and nothing is allocated.
    pub fn take(&mut self, count: u64, what: &str) -> Result<&[u8], Error> {
        let end = self.position.saturating_add(count);
        if end > self.length {
            let fault = Fault::malformed(
                At::Byte(self.length),
                format!("{what} up to byte {end}"),
                "the end of the file",
                "check that the file was copied whole",
            );
            return Err(fault.within(self.path));
        }
        self.piece.resize(count as usize, 0);
        self.reader.read_exact(&mut self.piece).map_err(|error| Fault::Io(error).within(self.path))?;
        self.hash.update(&self.piece);
        self.position = end;
        Ok(&self.piece)
    }

    /// Passes over the bytes before `position`; none when it lies behind.
    pub fn skip_to(&mut self, position: u64) -> Result<(), Error> {
        let count = position.saturating_sub(self.position);
        let passed = io::copy(&mut self.reader.by_ref().take(count), self.hash)
            .map_err(|error| Fault::Io(error).within(self.path))?;
        self.position += passed;
        Ok(())
    }

    /// Passes over the rest of the file.
    pub fn finish(mut self) -> Result<(), Error> {
        io::copy(&mut self.reader, self.hash).map_err(|error| Fault::Io(error).within(self.path))?;
        Ok(())
    }
}
