//! A segment line: `name samples`.

use crate::input::{At, Fault};

/// One segment of a record.
pub(super) struct SegmentLine {
    /// The line, for messages.
    pub at: At,
    /// The segment's record; `None` is a gap.
    pub name: Option<String>,
    /// Frames; 0 in the first line means that its record is a layout: signals without samples.
    pub frames: u64,
}

impl SegmentLine {
    pub fn parse(line: &str, number: u64) -> Result<Self, Fault> {
        let at = At::Line(number);
        let mut words = line.split_ascii_whitespace();
        let name = words.next().unwrap_or_default();
        let count = words.next().unwrap_or_default();
        let frames = count.parse().map_err(|_| {
            Fault::malformed(
                at,
                "the name of a segment and its number of samples",
                format!("`{line}`"),
                "correct the segment line, as header(5) of WFDB describes it",
            )
        })?;
        Ok(Self { at, name: (name != "~").then(|| name.to_owned()), frames })
    }
}
