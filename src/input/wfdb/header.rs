//! The header as written.

use super::record_line::RecordLine;
use super::segment_line::SegmentLine;
use super::signal_line::SignalLine;
use crate::input::limits::{MAX_SIGNALS, at_most};
use crate::input::{At, Fault};

/// A header, line by line.
pub(super) struct Header {
    pub record: RecordLine,
    /// Empty when the record is made of segments.
    pub signals: Vec<SignalLine>,
    /// Empty unless the record is made of segments.
    pub segments: Vec<SegmentLine>,
    /// Comment lines without `#`, trimmed, in order; empty ones left out.
    pub comments: Vec<String>,
}

impl Header {
    /// Lines that start with `#` are comments and may stand anywhere; empty lines are skipped.
    pub fn parse(text: &str) -> Result<Self, Fault> {
        let mut comments = Vec::new();
        let mut lines = Vec::new();
        for (number, line) in (1u64..).zip(text.lines()) {
            let line = line.trim();
            match line.strip_prefix('#') {
                Some(comment) if !comment.trim().is_empty() => comments.push(comment.trim().to_owned()),
                None if !line.is_empty() => lines.push((number, line)),
                _ => {}
            }
        }
        let mut lines = lines.into_iter();
        let Some((number, first)) = lines.next() else {
            return Err(Fault::malformed(
                At::File,
                "a record line (name, number of signals, sampling rate, number of samples)",
                "nothing",
                "check that the header was copied whole",
            ));
        };
        let record = RecordLine::parse(first, number)?;
        at_most(MAX_SIGNALS, "signals in the header", record.signals)?;
        if let Some(count) = record.segments {
            at_most(MAX_SEGMENTS, "segments in the header", count)?;
            let lines = lines.by_ref().take(count as usize);
            let segments: Vec<SegmentLine> =
                lines.map(|(number, line)| SegmentLine::parse(line, number)).collect::<Result<_, _>>()?;
            all_there(count, segments.len(), "segment", number)?;
            return Ok(Self { record, signals: Vec::new(), segments, comments });
        }
        if record.signals == 0 {
            return Err(Fault::unsupported(
                format!("line {number} states 0 signals"),
                "name the header of a record that holds signals",
            ));
        }
        let signal_lines = lines.by_ref().take(record.signals as usize);
        let signals: Vec<SignalLine> =
            signal_lines.map(|(number, line)| SignalLine::parse(line, number)).collect::<Result<_, _>>()?;
        all_there(record.signals, signals.len(), "signal", number)?;
        Ok(Self { record, signals, segments: Vec::new(), comments })
    }
}

/// Segments of one record; a week in an intensive care unit has some thousand.
const MAX_SEGMENTS: u64 = 10_000;

fn all_there(stated: u64, found: usize, what: &str, number: u64) -> Result<(), Fault> {
    if found as u64 >= stated {
        return Ok(());
    }
    Err(Fault::malformed(
        At::Line(number),
        format!("{stated} {what} lines below, as stated here"),
        found.to_string(),
        "check that the header was copied whole",
    ))
}
