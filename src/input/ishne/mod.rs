//! ISHNE Holter files: a fixed header of 522 bytes, a block of free text, then interleaved samples of 16 bit.
//!
//! After the open description, Badilini, "The ISHNE Holter standard output file format", A.N.E. 1998. No outside
//! file was at hand: this reader is checked against a small writer of the tests' own only.

mod checksum;
mod header;
mod leads;

use super::files::{Candidate, Files, file_name};
use super::limits::{MAX_SAMPLES, at_most};
use super::pieces::Pieces;
use super::table::{Format, FormatInfo, Score};
use super::{At, Error, Fault, clipping};
use crate::recording::{Decoded, Note, Quantity, Samples, Signal, Source};
use crate::units::Spans;
use header::{Header, LeadHeader};

pub(super) const FORMAT: Format = Format {
    info: FormatInfo { name: "ishne", description: "ISHNE 1.0 Holter recording" },
    score,
    stands_alone: |candidate| candidate.head().starts_with(MAGIC),
    read,
};

const MAGIC: &[u8] = b"ISHNE1.0";

/// Beats of a recording, in a file of their own.
const ANNOTATIONS: &[u8] = b"ANN  1.0";

/// Frames that are decoded at a time.
const FRAMES: u64 = 1 << 14;

fn score(candidate: &Candidate) -> Score {
    let head = candidate.head();
    if head.starts_with(MAGIC) || head.starts_with(ANNOTATIONS) { 100 } else { 0 }
}

fn read(candidate: &Candidate) -> Result<Decoded, Error> {
    let path = candidate.path();
    if candidate.head().starts_with(ANNOTATIONS) {
        let fault = Fault::unsupported(
            "this file holds the annotations of a recording, not its signals",
            "name the recording itself",
        );
        return Err(fault.within(path));
    }
    let mut files = Files::default();
    let mut pieces = files.pieces(path)?;
    let mut notes = Vec::new();
    let header = Header::read(&mut pieces, path, &mut notes)?;
    let frames = frames(&header, pieces.length(), &mut notes).map_err(|fault| fault.within(path))?;
    pieces.skip_to(header.samples_at)?;
    let values = values(&header, frames, &mut pieces)?;
    pieces.finish()?;
    let signals = header.leads.iter().zip(values).map(|(lead, values)| signal(&header, lead, values));
    let signals = signals.collect();
    let Header { subject, occasion, .. } = header;
    let source = Source { file: file_name(path), format: FORMAT.info.name, sha256: files.sha256() };
    Ok(Decoded { source, signals, subject, occasion, notes })
}

/// Samples of each lead. Writers differ in what they count: the samples of one lead, or those of all.
fn frames(header: &Header, length: u64, notes: &mut Vec<Note>) -> Result<u64, Fault> {
    let leads = header.leads.len() as u64;
    let held = length.saturating_sub(header.samples_at) / (2 * leads);
    let frames = match header.stated_samples {
        Some(all) if all == held * leads => held,
        Some(stated) => stated,
        None => {
            notes.push(Note::information(
                "the header states no count of samples; the file's length was taken",
            ));
            held
        }
    };
    if frames == 0 {
        return Err(Fault::unsupported(
            "the recording holds no samples",
            "check that the file was copied whole",
        ));
    }
    at_most(MAX_SAMPLES, "samples in the recording", frames.saturating_mul(leads))?;
    if frames > held {
        return Err(Fault::malformed(
            At::Byte(length),
            format!("{frames} samples of {leads} leads, as the header states"),
            "the end of the file",
            "the file is cut short: copy it again",
        ));
    }
    if frames < held {
        notes.push(Note::information(format!(
            "the file holds {} more samples than its header states; they are left out",
            held - frames
        )));
    }
    Ok(frames)
}

/// The values of each lead, in mV.
fn values(header: &Header, frames: u64, pieces: &mut Pieces) -> Result<Vec<Vec<f64>>, Error> {
    let leads = header.leads.len();
    let mut values: Vec<Vec<f64>> =
        header.leads.iter().map(|_| Vec::with_capacity(frames as usize)).collect();
    let mut left = frames;
    while left > 0 {
        let count = left.min(FRAMES);
        let words = pieces.take(count * 2 * leads as u64, "samples")?.as_chunks::<2>().0;
        for (at, (values, lead)) in values.iter_mut().zip(&header.leads).enumerate() {
            let counts = words.iter().skip(at).step_by(leads).map(|&word| i16::from_le_bytes(word));
            values.extend(counts.map(|count| f64::from(count) * lead.step));
        }
        left -= count;
    }
    Ok(values)
}

fn signal(header: &Header, lead: &LeadHeader, values: Vec<f64>) -> Signal {
    let limits = [i16::MIN, i16::MAX].map(|count| f64::from(count) * lead.step);
    Signal {
        name: lead.name.clone(),
        quantity: Quantity::Voltage,
        resolution: Some(lead.step),
        samples: clipping::marked(Samples::new(header.rate, values, Spans::none()), limits),
    }
}
