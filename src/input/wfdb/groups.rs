//! Signals that share a file, and so are interleaved in it frame by frame.

use super::flac;
use super::header::Header;
use super::signal_line::SignalLine;
use super::storage::Storage;
use crate::input::files::{Files, beside};
use crate::input::limits::{MAX_SAMPLES, at_most, most_missing};
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
    content: Content,
}

/// What the file of a group holds.
enum Content {
    /// Signals without a file.
    Null,
    Packed(Vec<u8>),
    Flac(flac::Channels),
}

impl<'a> Group<'a> {
    /// All groups of a header, their files read.
    pub fn open_all(path: &Path, header: &'a Header, files: &mut Files) -> Result<Vec<Self>, Error> {
        let ranges = neighbours(&header.signals).map_err(|fault| fault.within(path))?;
        let frame: u64 = header.signals.iter().map(|line| u64::from(line.samples_per_frame)).sum();
        let stated = header.record.frames;
        if let Some(frames) = stated {
            at_most(MAX_SAMPLES, "samples in the record", frames.saturating_mul(frame))
                .map_err(|fault| fault.within(path))?;
        }
        let most = stated.unwrap_or(MAX_SAMPLES / frame.max(1));
        ranges
            .into_iter()
            .map(|range| Self::open(path, &header.signals[range], stated.is_some(), most, files))
            .collect()
    }

    /// `frames` are the frames to be read, or where none are `stated` those that may be read at most.
    fn open(
        header: &Path,
        lines: &'a [SignalLine],
        stated: bool,
        frames: u64,
        files: &mut Files,
    ) -> Result<Self, Error> {
        let Some(line) = lines.first() else {
            return Err(Fault::unsupported("the record holds no signal", "check its header").within(header));
        };
        let storage = Storage::of(line.format, line.at).map_err(|fault| fault.within(header))?;
        let frame = lines.iter().map(|line| u64::from(line.samples_per_frame)).sum();
        let mut group = Self { lines, storage, frame, content: Content::Null };
        if storage == Storage::Null {
            return Ok(group);
        }
        let path = beside(header, &line.file, line.at).map_err(|fault| fault.within(header))?;
        let bytes = files.data(&path).map_err(|error| missing(error, header, line))?;
        group.content = Content::Packed(bytes);
        if storage.is_flac() {
            if let Some(other) = lines.iter().find(|own| own.samples_per_frame != line.samples_per_frame) {
                let expected = format!("`x{}`, as the first signal of {}", line.samples_per_frame, line.file);
                let found = format!("`x{}`", other.samples_per_frame);
                let fault = Fault::malformed(
                    other.at,
                    expected,
                    found,
                    "all channels of a FLAC stream have one rate: correct the signal line",
                );
                return Err(fault.within(header));
            }
            let samples = frames.saturating_mul(u64::from(line.samples_per_frame));
            let wanted = if stated { flac::Wanted::Exactly(samples) } else { flac::Wanted::UpTo(samples) };
            let channels = flac::decode(group.sample_bytes(), storage.bits(), lines.len(), wanted);
            group.content = Content::Flac(channels.map_err(|fault| fault.within(&path))?);
        }
        Ok(group)
    }

    /// Bytes before the first sample.
    fn offset(&self) -> u64 {
        self.lines.first().map_or(0, |line| line.offset)
    }

    /// The bytes of the samples; none when the offset lies behind the end.
    fn sample_bytes(&self) -> &[u8] {
        let Content::Packed(bytes) = &self.content else { return &[] };
        usize::try_from(self.offset()).ok().and_then(|offset| bytes.get(offset..)).unwrap_or_default()
    }

    /// Whole frames in the file; `None` for signals without a file.
    fn frames(&self) -> Option<u64> {
        let samples = match &self.content {
            Content::Null => return None,
            Content::Packed(_) => self.storage.samples_in(self.sample_bytes().len() as u64),
            Content::Flac(channels) => channels.held.saturating_mul(channels.counts.len() as u64),
        };
        Some(samples / self.frame.max(1))
    }

    /// Refuses a file that is shorter than stated, before anything is allocated for it.
    pub fn require(&self, frames: u64, header: &Path) -> Result<(), Error> {
        let (Some(line), Content::Packed(bytes)) = (self.lines.first(), &self.content) else { return Ok(()) };
        let samples = self.storage.bytes_of(frames.saturating_mul(self.frame));
        let needed = samples.saturating_add(self.offset());
        if bytes.len() as u64 >= needed {
            return Ok(());
        }
        let fault = Fault::malformed(
            At::Byte(bytes.len() as u64),
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
    pub fn decode(self, frames: u64) -> Vec<Vec<i32>> {
        let bytes = match self.content {
            Content::Flac(channels) => return channels.up_to(frames, self.lines),
            _ => self.sample_bytes(),
        };
        let frame = self.frame as usize;
        let interleaved = self.storage.decode(bytes, frames as usize * frame);
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
    let held = groups.iter().filter_map(Group::frames).min();
    let frames = header.record.frames.or(held).unwrap_or(0);
    if held == Some(0) || frames == 0 {
        return Err(Fault::unsupported(
            "the record holds no samples",
            "check that its files were copied whole",
        ));
    }
    let samples = |null: bool| -> u64 {
        let groups = groups.iter().filter(|group| (group.storage == Storage::Null) == null);
        groups.map(|group| group.frame.saturating_mul(frames)).fold(0, u64::saturating_add)
    };
    at_most(MAX_SAMPLES, "samples in the record", samples(false).saturating_add(samples(true)))?;
    at_most(most_missing(samples(false)), "samples without a file", samples(true))?;
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
