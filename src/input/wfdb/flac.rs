//! FLAC streams (formats 508, 516, 524): each signal is one channel.
//!
//! The rate in the stream means nothing: writers always state 96 000/s.

use super::signal_line::SignalLine;
use crate::input::limits::at_most;
use crate::input::{At, Fault};
use claxon::{FlacReader, FlacReaderOptions};

/// How many samples of each channel are to be read.
#[derive(Clone, Copy)]
pub(super) enum Wanted {
    /// So many; a stream that holds fewer is refused.
    Exactly(u64),
    /// All; a stream that holds more than this is refused.
    UpTo(u64),
}

/// The counts of a stream.
pub(super) struct Channels {
    pub counts: Vec<Vec<i32>>,
    /// Samples of each channel in the stream, those that are not wanted included.
    pub held: u64,
}

impl Channels {
    /// The samples of the first `frames` frames.
    pub fn up_to(mut self, frames: u64, lines: &[SignalLine]) -> Vec<Vec<i32>> {
        for (counts, line) in self.counts.iter_mut().zip(lines) {
            counts.truncate(frames as usize * line.samples_per_frame as usize);
        }
        self.counts
    }
}

/// Decodes a stream. Memory grows with what is decoded, never with what is stated.
pub(super) fn decode(bytes: &[u8], bits: u32, channels: usize, wanted: Wanted) -> Result<Channels, Fault> {
    let options = FlacReaderOptions { metadata_only: false, read_vorbis_comment: false };
    let mut reader = FlacReader::new_ext(bytes, options).map_err(|error| damaged("a FLAC stream", &error))?;
    let stated = reader.streaminfo();
    if (stated.bits_per_sample, stated.channels as usize) != (bits, channels) {
        return Err(Fault::malformed(
            At::File,
            format!("a FLAC stream of {bits} bit with as many channels as signals ({channels})"),
            format!("one of {} bit with {}", stated.bits_per_sample, stated.channels),
            "the header belongs to another file, or its signal lines are wrong",
        ));
    }
    let mut counts: Vec<Vec<i32>> = vec![Vec::new(); channels];
    let mut held = 0;
    let mut blocks = reader.blocks();
    let mut buffer = Vec::new();
    while !matches!(wanted, Wanted::Exactly(samples) if held >= samples) {
        let Some(block) =
            blocks.read_next_or_eof(buffer).map_err(|error| damaged(&sound_from(held), &error))?
        else {
            break;
        };
        if block.channels() as usize != channels {
            let error = claxon::Error::FormatError("a frame with another number of channels");
            return Err(damaged(&sound_from(held), &error));
        }
        held += u64::from(block.duration());
        if let Wanted::UpTo(most) = wanted {
            at_most(most, "samples in a channel", held)?;
        }
        for (channel, own) in (0..block.channels()).zip(&mut counts) {
            own.extend_from_slice(block.channel(channel));
        }
        buffer = block.into_buffer();
    }
    let needed = match wanted {
        Wanted::Exactly(samples) => samples,
        Wanted::UpTo(_) => stated.samples.unwrap_or(held),
    };
    if held < needed {
        return Err(Fault::malformed(
            At::File,
            format!("{needed} samples in each channel, as stated"),
            format!("the end of the stream behind {held}"),
            "the file is cut short, or the header belongs to another file: copy both again",
        ));
    }
    Ok(Channels { counts, held: held.max(stated.samples.unwrap_or(0)) })
}

fn sound_from(sample: u64) -> String {
    format!("a sound FLAC frame from sample {sample} on")
}

fn damaged(expected: &str, error: &claxon::Error) -> Fault {
    let found = match error {
        claxon::Error::IoError(_) => "the end of the file",
        claxon::Error::FormatError(reason) | claxon::Error::Unsupported(reason) => reason,
    };
    Fault::malformed(At::File, expected, found, "the file is damaged or cut short: copy it again")
}
