//! The header as written: 256 bytes for the recording, then 256 for each signal.

use super::field::Field;
use super::signal_header::SignalHeader;
use crate::input::limits::{MAX_SAMPLES, MAX_SIGNALS, at_most};
use crate::input::pieces::Pieces;
use crate::input::{At, Error, Fault};
use crate::recording::Note;
use std::path::Path;

/// How wide a sample is, which is all that tells BDF from EDF.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Width {
    Bits16,
    Bits24,
}

impl Width {
    /// By the version field.
    pub fn of(head: &[u8]) -> Option<Self> {
        match head.get(..8)? {
            b"0       " => Some(Self::Bits16),
            b"\xffBIOSEMI" => Some(Self::Bits24),
            _ => None,
        }
    }

    /// Bytes of one sample.
    pub fn bytes(self) -> u64 {
        match self {
            Self::Bits16 => 2,
            Self::Bits24 => 3,
        }
    }

    /// The smallest and largest count.
    pub fn limits(self) -> [f64; 2] {
        let half = 2f64.powi(8 * self.bytes() as i32 - 1);
        [-half, half - 1.0]
    }

    /// The label of a signal that holds annotations.
    fn annotations(self) -> &'static str {
        match self {
            Self::Bits16 => "EDF Annotations",
            Self::Bits24 => "BDF Annotations",
        }
    }
}

/// How the data records follow each other.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Continuity {
    /// Neither `+C` nor `+D`: one after the other.
    Plain,
    /// `+C`: one after the other.
    Continuous,
    /// `+D`: each at the time that its first annotation states.
    Discontinuous,
}

/// What the header states.
pub(super) struct Header {
    pub width: Width,
    pub patient: String,
    pub recording: String,
    pub date: String,
    pub time: String,
    /// `EDF+C`, `BDF+D`, `24BIT`, or nothing.
    pub reserved: String,
    pub continuity: Continuity,
    /// Seconds of one data record; above 0 unless all signals hold annotations.
    pub duration: f64,
    pub signals: Vec<SignalHeader>,
    /// Data records; `None` is unknown.
    records: Option<u64>,
}

const FIXED: usize = 256;

/// Seconds of a data record, far beyond any that was ever written on either side.
const DURATIONS: std::ops::RangeInclusive<f64> = 1e-6..=1e6;

/// Whether the numbers of a header stand where they must; one of them may be damaged.
pub(super) fn is_plausible(head: &[u8]) -> bool {
    let numbers = [(184, 8), (236, 8), (252, 4)];
    numbers.into_iter().filter(|&(start, width)| Field::of(head, start, width).whole("").is_ok()).count() >= 2
}

impl Header {
    /// From the front of the file.
    pub fn read(pieces: &mut Pieces, path: &Path) -> Result<Self, Error> {
        let mut bytes = pieces.take(FIXED as u64, "the header")?.to_vec();
        let count = signal_count(&bytes).map_err(|fault| fault.within(path))?;
        bytes.extend_from_slice(pieces.take(count * FIXED as u64, "the header")?);
        Self::parse(&bytes, count as usize).map_err(|fault| fault.within(path))
    }

    fn parse(bytes: &[u8], count: usize) -> Result<Self, Fault> {
        let field = |start, width| Field::of(bytes, start, width);
        let width = Width::of(bytes).ok_or_else(|| field(0, 8).wrong("the version of EDF or BDF"))?;
        let stated = field(184, 8);
        if stated.whole("the number of bytes in the header")? != bytes.len() as i64 {
            return Err(stated.wrong(&format!("{}, the bytes of a header of {count} signals", bytes.len())));
        }
        let reserved = field(192, 44).text();
        let continuity = match reserved.get(..5) {
            Some("EDF+C" | "BDF+C") => Continuity::Continuous,
            Some("EDF+D" | "BDF+D") => Continuity::Discontinuous,
            _ => Continuity::Plain,
        };
        let records = field(236, 8);
        let records = match records.whole("the number of data records, or -1")? {
            -1 => None,
            number => {
                Some(u64::try_from(number).map_err(|_| records.wrong("the number of data records, or -1"))?)
            }
        };
        let special = (continuity != Continuity::Plain).then(|| width.annotations());
        let signals: Result<Vec<SignalHeader>, Fault> =
            (0..count).map(|index| SignalHeader::parse(bytes, index, count, special)).collect();
        let signals = signals?;
        let duration_field = field(244, 8);
        let duration = duration_field.number("the seconds of a data record")?;
        let timeless = duration == 0.0 && signals.iter().all(|signal| signal.annotations);
        if !timeless && !DURATIONS.contains(&duration) {
            return Err(duration_field.wrong("the seconds of a data record, above 0"));
        }
        Ok(Self {
            width,
            patient: field(8, 80).text(),
            recording: field(88, 80).text(),
            date: field(168, 8).text(),
            time: field(176, 8).text(),
            reserved,
            continuity,
            duration,
            signals,
            records,
        })
    }

    /// The signals that hold samples.
    pub fn ordinary(&self) -> impl Iterator<Item = &SignalHeader> {
        self.signals.iter().filter(|signal| !signal.annotations)
    }

    /// The signals that hold annotations.
    pub fn annotations(&self) -> impl Iterator<Item = &SignalHeader> {
        self.signals.iter().filter(|signal| signal.annotations)
    }

    /// Bytes of the header itself.
    fn bytes(&self) -> u64 {
        (FIXED * (1 + self.signals.len())) as u64
    }

    /// Samples of one data record, those of annotations counted in.
    fn record_samples(&self) -> u64 {
        self.signals.iter().map(|signal| signal.samples).sum()
    }

    /// Bytes of one data record, never 0.
    pub fn record_bytes(&self) -> u64 {
        self.record_samples() * self.width.bytes()
    }

    /// Where a data record starts.
    pub fn record_at(&self, index: usize) -> At {
        At::Byte(self.bytes().saturating_add((index as u64).saturating_mul(self.record_bytes())))
    }

    /// The data records of a file of so many bytes: as stated, or as many as it holds.
    pub fn records(&self, length: u64, notes: &mut Vec<Note>) -> Result<u64, Fault> {
        let held_bytes = length.saturating_sub(self.bytes());
        let held = held_bytes / self.record_bytes();
        let count = self.records.unwrap_or(held);
        if count == 0 {
            return Err(Fault::unsupported(
                "the recording holds no samples",
                "check that the file was copied whole",
            ));
        }
        at_most(MAX_SAMPLES, "samples in the recording", count.saturating_mul(self.record_samples()))?;
        if count > held {
            return Err(Fault::malformed(
                At::Byte(length),
                format!("{count} data records of {} bytes, as the header states", self.record_bytes()),
                "the end of the file",
                "the file is cut short: copy it again",
            ));
        }
        if self.records.is_none() {
            notes.push(Note::information(format!(
                "the header leaves the number of data records open; the file holds {held}"
            )));
        } else if held > count {
            notes.push(Note::information(format!(
                "the file holds {} more data records than its header states; they are left out",
                held - count
            )));
        }
        Ok(count)
    }
}

fn signal_count(fixed: &[u8]) -> Result<u64, Fault> {
    let field = Field::of(fixed, 252, 4);
    let count = field.whole("the number of signals")?;
    let count = u64::try_from(count).map_err(|_| field.wrong("the number of signals"))?;
    at_most(MAX_SIGNALS, "signals in the header", count)?;
    if count == 0 {
        return Err(Fault::unsupported("the header states 0 signals", "use a file that holds signals"));
    }
    Ok(count)
}
