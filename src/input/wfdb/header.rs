//! The header as written.

use super::record_line::RecordLine;
use super::signal_line::SignalLine;
use crate::input::limits::{MAX_SIGNALS, at_most};
use crate::input::{At, Fault};

/// A header, line by line.
pub(super) struct Header {
    pub record: RecordLine,
    pub signals: Vec<SignalLine>,
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
        if record.segments.is_some() {
            return Ok(Self { record, signals: Vec::new(), comments });
        }
        if record.signals == 0 {
            return Err(Fault::unsupported(
                format!("line {number} states 0 signals"),
                "name the header of a record that holds signals",
            ));
        }
        let mut signals = Vec::new();
        for (number, line) in lines.by_ref().take(record.signals as usize) {
            signals.push(SignalLine::parse(line, number)?);
        }
        if (signals.len() as u64) < record.signals {
            return Err(Fault::malformed(
                At::Line(number),
                format!("{} signal lines below, as stated here", record.signals),
                format!("{}", signals.len()),
                "check that the header was copied whole",
            ));
        }
        Ok(Self { record, signals, comments })
    }
}
