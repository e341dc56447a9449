//! From signal files to signals in mV.

use super::super::files::{Files, beside};
use super::super::voltage::millivolts_per;
use super::super::{Error, Fault, clipping};
use super::header::Header;
use super::signal_line::SignalLine;
use super::storage::Storage;
use crate::recording::{Note, Quantity, Samples, Signal};
use crate::units::{SampleRate, Spans};
use std::ops::Range;
use std::path::Path;

/// Samples of all signals together, read at most: 1 GiB as mV.
const MAX_SAMPLES: u64 = 1 << 27;

/// header(5): "if the gain is omitted or 0, 200 counts per unit are assumed, and the signal is not calibrated" (m).
const DEFAULT_GAIN: f64 = 200.0;

/// Signals that share a file, and so are interleaved in it frame by frame.
struct Group {
    signals: Range<usize>,
    storage: Storage,
    /// Samples of one frame.
    frame: u64,
    /// The file's bytes behind the offset.
    bytes: Vec<u8>,
    offset: usize,
}

/// Every signal of the header, in its order.
pub(super) fn read(
    path: &Path,
    header: &Header,
    files: &mut Files,
    notes: &mut Vec<Note>,
) -> Result<Vec<Signal>, Error> {
    let mut groups = Vec::new();
    for signals in grouped(&header.signals).map_err(|fault| fault.within(path))? {
        groups.push(Group::open(path, &header.signals, signals, files)?);
    }
    let frames = frames(header, &groups).map_err(|fault| fault.within(path))?;
    let mut signals = Vec::with_capacity(header.signals.len());
    let mut checks = Checks::default();
    for group in &groups {
        let lines = &header.signals[group.signals.clone()];
        group.require(frames, path, &lines[0])?;
        let interleaved = group.storage.decode(&group.bytes[group.offset..], (frames * group.frame) as usize);
        let mut first = 0;
        for line in lines {
            let width = line.samples_per_frame as usize;
            let counts = if group.storage == Storage::Null {
                vec![group.storage.invalid(); frames as usize * width]
            } else {
                deinterleave(&interleaved, group.frame as usize, first, width)
            };
            first += width;
            checks.compare(line, group.storage, &counts);
            signals.push(signal(line, group.storage, counts, header.record.rate, path)?);
        }
    }
    checks.report(notes);
    unit_notes(header, notes);
    Ok(signals)
}

/// Neighbouring lines that name one file.
fn grouped(lines: &[SignalLine]) -> Result<Vec<Range<usize>>, Fault> {
    let mut groups: Vec<Range<usize>> = Vec::new();
    for (index, line) in lines.iter().enumerate() {
        if let Some(group) = groups.last_mut()
            && lines[group.start].file == line.file
        {
            let first = &lines[group.start];
            if (first.format, first.offset) != (line.format, line.offset) {
                return Err(Fault::malformed(
                    line.at,
                    format!("format and offset of the other signals in {}", line.file),
                    format!("format {}, offset {}", line.format, line.offset),
                    "signals of one file share its format: correct the signal line",
                ));
            }
            group.end = index + 1;
            continue;
        }
        if line.file != "~" && lines[..index].iter().any(|earlier| earlier.file == line.file) {
            return Err(Fault::malformed(
                line.at,
                format!("all signals of {} on neighbouring lines", line.file),
                "another file's signal between them",
                "put the signal lines in the order in which the samples stand in the file",
            ));
        }
        groups.push(index..index + 1);
    }
    Ok(groups)
}

impl Group {
    fn open(
        header: &Path,
        lines: &[SignalLine],
        signals: Range<usize>,
        files: &mut Files,
    ) -> Result<Self, Error> {
        let line = &lines[signals.start];
        let storage = Storage::of(line.format, line.at).map_err(|fault| fault.within(header))?;
        let frame = lines[signals.clone()].iter().map(|line| u64::from(line.samples_per_frame)).sum();
        let bytes = match storage {
            Storage::Null => Vec::new(),
            _ => {
                let path = beside(header, &line.file, line.at).map_err(|fault| fault.within(header))?;
                files.data(&path)?
            }
        };
        let offset = usize::try_from(line.offset).unwrap_or(usize::MAX).min(bytes.len());
        Ok(Self { signals, storage, frame, bytes, offset })
    }

    fn frames(&self) -> u64 {
        self.storage.samples_in((self.bytes.len() - self.offset) as u64) / self.frame
    }

    /// Refuses a file that is shorter than stated.
    fn require(&self, frames: u64, header: &Path, line: &SignalLine) -> Result<(), Error> {
        let needed = self.storage.bytes_of(frames.saturating_mul(self.frame)).saturating_add(line.offset);
        if self.storage == Storage::Null || self.bytes.len() as u64 >= needed {
            return Ok(());
        }
        let fault = Fault::malformed(
            super::super::At::Byte(self.bytes.len() as u64),
            format!("{needed} bytes, as the header states"),
            "the end of the file",
            "the file is cut short, or the header belongs to another file: copy both again",
        );
        Err(fault.within(&header.with_file_name(&line.file)))
    }
}

/// Frames of the record: as stated, or as many as every signal file holds.
fn frames(header: &Header, groups: &[Group]) -> Result<u64, Fault> {
    let held = groups.iter().filter(|group| group.storage != Storage::Null).map(Group::frames).min();
    let frames = header.record.frames.or(held).unwrap_or(0);
    if frames == 0 {
        return Err(Fault::unsupported(
            "the record holds no samples",
            "check that its files were copied whole",
        ));
    }
    let frame: u64 = groups.iter().map(|group| group.frame).sum();
    let samples = frames.saturating_mul(frame);
    if samples > MAX_SAMPLES {
        return Err(Fault::Limit { what: "samples in the record", found: samples, max: MAX_SAMPLES });
    }
    Ok(frames)
}

fn deinterleave(interleaved: &[i32], frame: usize, first: usize, width: usize) -> Vec<i32> {
    if width == 1 {
        return interleaved.iter().skip(first).step_by(frame).copied().collect();
    }
    interleaved.chunks_exact(frame).flat_map(|frame| &frame[first..first + width]).copied().collect()
}

fn signal(
    line: &SignalLine,
    storage: Storage,
    mut counts: Vec<i32>,
    frame_rate: SampleRate,
    path: &Path,
) -> Result<Signal, Error> {
    let rate = SampleRate::new(frame_rate.get() * f64::from(line.samples_per_frame)).ok_or_else(|| {
        Fault::malformed(line.at, "a finite sampling rate", "one beyond all bounds", "correct the header")
            .within(path)
    })?;
    // The first `skew` frames of a lagging signal precede the recording; as many are missing at its end.
    let length = counts.len();
    let skew = line.skew.saturating_mul(u64::from(line.samples_per_frame)).min(length as u64) as usize;
    counts.drain(..skew);
    let clipped = clipping::spans(&counts, converter_limits(line, storage), rate);
    counts.resize(length, storage.invalid());
    let invalid = storage.invalid();
    let gaps = Spans::of_true(counts.iter().map(|&count| count == invalid));
    let unit = line.unit.as_deref();
    let (quantity, factor) = match (unit.map(|unit| (unit, millivolts_per(unit))), line.gain) {
        (None, Some(_)) => (Quantity::Voltage, 1.0),
        (None, None) => (Quantity::UncalibratedVoltage, 1.0),
        (Some((_, Some(factor))), Some(_)) => (Quantity::Voltage, factor),
        (Some((_, Some(factor))), None) => (Quantity::UncalibratedVoltage, factor),
        (Some((unit, None)), _) => (Quantity::Other(unit.to_owned()), 1.0),
    };
    let gain = line.gain.unwrap_or(DEFAULT_GAIN);
    let values =
        counts.iter().map(|&count| (i64::from(count) - line.baseline) as f64 * factor / gain).collect();
    let samples = Samples::new(rate, values, gaps).with_saturated(clipped);
    Ok(Signal { name: line.description.clone(), quantity, resolution: Some((factor / gain).abs()), samples })
}

/// The smallest and largest count that the converter gives.
fn converter_limits(line: &SignalLine, storage: Storage) -> (i64, i64) {
    let bits = line.converter_bits.unwrap_or(storage.bits()).min(storage.bits()).clamp(1, 32);
    let half = 1i64 << (bits - 1);
    (line.converter_zero.saturating_sub(half), line.converter_zero.saturating_add(half - 1))
}

/// Stated against found first samples and checksums.
#[derive(Default)]
struct Checks {
    stated: bool,
    checksums: Vec<String>,
    initials: Vec<String>,
}

impl Checks {
    fn compare(&mut self, line: &SignalLine, storage: Storage, counts: &[i32]) {
        let name = if line.description.is_empty() { line.at.to_string() } else { line.description.clone() };
        let (Some(checksum), Some(initial)) = (line.checksum, line.initial) else { return };
        self.stated |= checksum != 0 || initial != 0;
        let sum = counts.iter().fold(0i16, |sum, &count| sum.wrapping_add(count as i16));
        if storage != Storage::Null && checksum as i16 != sum {
            self.checksums.push(name.clone());
        }
        if counts.first().is_some_and(|&first| i64::from(first) != initial) {
            self.initials.push(name);
        }
    }

    fn report(self, notes: &mut Vec<Note>) {
        // A header of zeros all over is one whose writer did not compute them.
        if !self.stated {
            return;
        }
        if !self.checksums.is_empty() {
            notes.push(Note::caution(format!(
                "the checksum in the header does not match the samples of {}: the data file may be damaged or another's",
                self.checksums.join(", ")
            )));
        }
        if !self.initials.is_empty() {
            notes.push(Note::information(format!(
                "the first sample in the header does not match the data of {}",
                self.initials.join(", ")
            )));
        }
    }
}

fn unit_notes(header: &Header, notes: &mut Vec<Note>) {
    let mut unusual: Vec<&str> = header.signals.iter().filter_map(|line| line.unit.as_deref()).collect();
    unusual.retain(|unit| millivolts_per(unit) == Some(1.0) && *unit != "mV");
    unusual.sort_unstable();
    unusual.dedup();
    for unit in unusual {
        notes.push(Note::information(format!("the unit is written `{unit}` and read as mV")));
    }
}
