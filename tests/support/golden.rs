//! Texts that a reader has approved.

use std::path::Path;

/// Compares `text` with the file at `path`; with `BLESS=1` in the environment it rewrites the file instead.
pub fn assert_golden(path: &Path, text: &str) {
    if std::env::var_os("BLESS").is_some() {
        std::fs::write(path, text).unwrap_or_else(|error| panic!("{}: {error}", path.display()));
        return;
    }
    let golden = std::fs::read_to_string(path).unwrap_or_default();
    for (number, (own, approved)) in (1..).zip(text.lines().zip(golden.lines())) {
        assert_eq!(own, approved, "{}, line {number}; run with BLESS=1 to accept", path.display());
    }
    assert_eq!(
        text.lines().count(),
        golden.lines().count(),
        "{}: lines; run with BLESS=1 to accept",
        path.display()
    );
}
