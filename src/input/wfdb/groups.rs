//! Signals that share a file, and so are interleaved in it frame by frame.

use super::header::Header;
use super::signal_line::SignalLine;
use super::storage::Storage;
use crate::input::files::{Files, beside};
use crate::input::limits::{MAX_SAMPLES, at_most};
use crate::input::{At, Error, Fault};
use crate::recording::Note;
use std::io::ErrorKind;
use std::ops::Range;
use std::path::Path;

/// Neighbouring signal lines that name one file, with the bytes of that file.
pub(super) struct Group<'a> {
    pub lines: &'a [SignalLine],
    pub storage: Storage,
    /// Samples of one frame, all signals together.
    frame: u64,
    bytes: Vec<u8>,
}

impl<'a> Group<'a> {
    /// All groups of a header, their files read.
    pub fn open_all(path: &Path, header: &'a Header, files: &mut Files) -> Result<Vec<Self>, Error> {
        let ranges = neighbours(&header.signals).map_err(|fault| fault.within(path))?;
        ranges.into_iter().map(|range| Self::open(path, &header.signals[range], files)).collect()
    }

    fn open(header: &Path, lines: &'a [SignalLine], files: &mut Files) -> Result<Self, Error> {
        let frame: u64 = lines.iter().map(|line| u64::from(line.samples_per_frame)).sum();
        let Some(line) = lines.first() else {
            return Err(Fault::unsupported("the record holds no signal", "check its header").within(header));
        };
        let storage = Storage::of(line.format, line.at).map_err(|fault| fault.within(header))?;
        if storage == Storage::Null && frame != lines.len() as u64 {
            // Nothing backs the count, so it must not ask for memory.
            let fault = Fault::malformed(
                line.at,
                "one sample a frame for a signal without a file",
                frame.to_string(),
                "correct the signal line",
            );
            return Err(fault.within(header));
        }
        let bytes = match storage {
            Storage::Null => Vec::new(),
            _ => {
                let path = beside(header, &line.file, line.at).map_err(|fault| fault.within(header))?;
                files.data(&path).map_err(|error| missing(error, header, line))?
            }
        };
        Ok(Self { lines, storage, frame, bytes })
    }

    /// Bytes before the first sample.
    fn offset(&self) -> u64 {
        self.lines.first().map_or(0, |line| line.offset)
    }

    /// The bytes of the samples; none when the offset lies behind the end.
    fn sample_bytes(&self) -> &[u8] {
        usize::try_from(self.offset()).ok().and_then(|offset| self.bytes.get(offset..)).unwrap_or_default()
    }

    /// Whole frames in the file; `None` for signals without a file.
    fn frames(&self) -> Option<u64> {
        let samples = self.storage.samples_in(self.sample_bytes().len() as u64);
        (self.storage != Storage::Null).then_some(samples / self.frame)
    }

    /// Refuses a file that is shorter than stated, before anything is allocated for it.
    pub fn require(&self, frames: u64, header: &Path) -> Result<(), Error> {
        let samples = self.storage.bytes_of(frames.saturating_mul(self.frame));
        let needed = samples.saturating_add(self.offset());
        let (Some(line), true) = (self.lines.first(), (self.bytes.len() as u64) < needed) else {
            return Ok(());
        };
        if self.storage == Storage::Null {
            return Ok(());
        }
        let fault = Fault::malformed(
            At::Byte(self.bytes.len() as u64),
            format!("{needed} bytes in all, as {} states", super::file_name(header)),
            "the end of the file",
            "the file is cut short, or the header belongs to another file: copy both again",
        );
        Err(fault.within(&header.with_file_name(&line.file)))
    }

    /// What a file holds beyond the stated length.
    pub fn surplus(&self, frames: u64) -> Option<Note> {
        let more = self.frames()?.checked_sub(frames).filter(|more| *more > 0)?;
        let file = &self.lines.first()?.file;
        Some(Note::information(format!(
            "{file} holds {more} more samples than the header states; they are left out"
        )))
    }

    /// The counts of every signal, in the order of the lines.
    pub fn decode(&self, frames: u64) -> Vec<Vec<i32>> {
        let frame = self.frame as usize;
        let interleaved = self.storage.decode(self.sample_bytes(), frames as usize * frame);
        let mut first = 0;
        let split = self.lines.iter().map(|line| {
            let width = line.samples_per_frame as usize;
            let mut counts: Vec<i32> = match width {
                1 => interleaved.iter().skip(first).step_by(frame).copied().collect(),
                _ => interleaved
                    .chunks_exact(frame)
                    .flat_map(|one| &one[first..first + width])
                    .copied()
                    .collect(),
            };
            first += width;
            if self.storage == Storage::Differences8 {
                let mut value = line.initial.unwrap_or(line.converter_zero) as i32;
                for count in &mut counts {
                    value = value.wrapping_add(*count);
                    *count = value;
                }
            }
            counts
        });
        split.collect()
    }
}

/// A signal file that is not there is the header's business.
fn missing(error: Error, header: &Path, line: &SignalLine) -> Error {
    match &error.fault {
        Fault::Io(io) if io.kind() == ErrorKind::NotFound => Fault::malformed(
            line.at,
            format!("the signal file {} beside the header", line.file),
            "no such file",
            "put it there, or correct the name",
        )
        .within(header),
        _ => error,
    }
}

/// Frames of the record: as stated, or as many as every signal file holds.
pub(super) fn frames(header: &Header, groups: &[Group]) -> Result<u64, Fault> {
    let held = groups.iter().filter_map(Group::frames).min().unwrap_or(0);
    let frames = header.record.frames.unwrap_or(held);
    if held == 0 || frames == 0 {
        return Err(Fault::unsupported(
            "the record holds no samples",
            "check that its files were copied whole",
        ));
    }
    let frame: u64 = groups.iter().map(|group| group.frame).sum();
    at_most(MAX_SAMPLES, "samples in the record", frames.saturating_mul(frame))?;
    Ok(frames)
}

fn neighbours(lines: &[SignalLine]) -> Result<Vec<Range<usize>>, Fault> {
    let mut groups: Vec<Range<usize>> = Vec::new();
    for (index, line) in lines.iter().enumerate() {
        let same = groups.last_mut().filter(|group| lines[group.start].file == line.file);
        let Some(group) = same else {
            let apart = lines[..index].iter().any(|earlier| earlier.file == line.file && line.format != 0);
            if apart {
                return Err(Fault::malformed(
                    line.at,
                    format!("all signals of {} on neighbouring lines", line.file),
                    "another file's signal between them",
                    "put the signal lines in the order in which the samples stand in the file",
                ));
            }
            groups.push(index..index + 1);
            continue;
        };
        let first = &lines[group.start];
        if (first.format, first.offset) != (line.format, line.offset) {
            return Err(Fault::malformed(
                line.at,
                format!(
                    "format {} and offset {}, as the first signal of {}",
                    first.format, first.offset, line.file
                ),
                format!("format {} and offset {}", line.format, line.offset),
                "signals of one file share its format: correct the signal line",
            ));
        }
        group.end = index + 1;
    }
    Ok(groups)
}
