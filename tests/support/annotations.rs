//! Annotation files in the MIT format (annot(5) of the WFDB Applications Guide).

use std::path::Path;

/// One annotation.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Annotation {
    /// Sample that it marks.
    pub sample: i64,
    /// Its code, as the guide numbers them.
    pub code: u16,
}

/// Codes that mark a beat (ecgcodes.h of the WFDB library).
pub const BEATS: &[u16] = &[1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12, 13, 25, 30, 34, 35, 38, 41];
/// All annotations of a file.
pub fn annotations(path: &Path) -> Vec<Annotation> {
    let bytes = std::fs::read(path).unwrap_or_else(|error| panic!("{}: {error}", path.display()));
    let words: Vec<u16> = bytes.chunks_exact(2).map(|pair| u16::from_le_bytes([pair[0], pair[1]])).collect();
    let mut found = Vec::new();
    let mut sample = 0i64;
    let mut index = 0;
    while index < words.len() {
        let (code, step) = (words[index] >> 10, words[index] & 0x3FF);
        index += 1;
        match (code, step) {
            (0, 0) => break,
            (59, _) => {
                sample += i64::from(((u32::from(words[index]) << 16) | u32::from(words[index + 1])) as i32);
                index += 2;
            }
            (60..=62, _) => {}
            (63, length) => index += usize::from(length).div_ceil(2),
            _ => {
                sample += i64::from(step);
                found.push(Annotation { sample, code });
            }
        }
    }
    found
}
