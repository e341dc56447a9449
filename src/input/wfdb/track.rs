//! One signal of a record made of segments.

use super::signal_line::SignalLine;
use super::signals::{quantity, step};
use crate::input::Fault;
use crate::recording::{Note, Quantity, Samples, Signal};
use crate::units::{SampleRate, Span, Spans};

/// A signal as it comes, segment by segment.
pub(super) struct Track {
    name: String,
    samples_per_frame: u32,
    rate: SampleRate,
    /// What the layout states, for a signal that no segment holds.
    layout: (Quantity, f64),
    /// What the segments state: the finest step of all.
    found: Option<(Quantity, f64)>,
    /// First frame, and the samples from there on.
    pieces: Vec<(u64, Samples)>,
}

impl Track {
    /// An empty one. `frames` are the record's frames per second.
    pub fn new(line: &SignalLine, frames: SampleRate) -> Result<Self, Fault> {
        Ok(Self {
            name: line.description.clone(),
            samples_per_frame: line.samples_per_frame,
            rate: super::signals::rate(line, frames)?,
            layout: (quantity(line).0, step(line)),
            found: None,
            pieces: Vec::new(),
        })
    }

    pub fn name(&self) -> &str {
        &self.name
    }

    /// Takes the signal of the segment that begins at frame `start`. What is of another quantity than in the
    /// segments before is left out, and the note says so.
    pub fn add(&mut self, start: u64, samples_per_frame: u32, signal: Signal) -> Result<Option<Note>, Fault> {
        if samples_per_frame != self.samples_per_frame {
            return Err(Fault::unsupported(
                format!(
                    "{} has {samples_per_frame} samples a frame, in other segments {}",
                    self.name, self.samples_per_frame
                ),
                "name the header of one of the segments instead",
            ));
        }
        let Signal { quantity, resolution, samples, .. } = signal;
        let resolution = resolution.unwrap_or(self.layout.1);
        self.found = match self.found.take() {
            None => Some((quantity, resolution)),
            Some((known, step)) => {
                let step = step.min(resolution);
                match (known, quantity) {
                    (known, own) if known == own => Some((known, step)),
                    (Quantity::Other(known), own) => {
                        return Ok(Some(self.refuse((Quantity::Other(known), step), &own)));
                    }
                    (known, own @ Quantity::Other(_)) => return Ok(Some(self.refuse((known, step), &own))),
                    _ => Some((Quantity::UncalibratedVoltage, step)),
                }
            }
        };
        self.pieces.push((start, samples));
        Ok(None)
    }

    fn refuse(&mut self, found: (Quantity, f64), own: &Quantity) -> Note {
        let unit = |quantity: &Quantity| match quantity {
            Quantity::Other(unit) => unit.clone(),
            _ => "mV".to_owned(),
        };
        let text =
            format!("{} is in {}, elsewhere in {}, and left out", self.name, unit(own), unit(&found.0));
        self.found = Some(found);
        Note::caution(text)
    }

    /// Samples that the segments hold.
    pub fn held(&self) -> u64 {
        self.pieces.iter().map(|(_, samples)| samples.len() as u64).sum()
    }

    /// The whole signal, as long as `frames` frames; what no segment holds is a gap.
    pub fn signal(self, frames: u64) -> Signal {
        let per_frame = self.samples_per_frame as usize;
        let mut values = vec![0.0; frames as usize * per_frame];
        let (mut gaps, mut clipped, mut end) = (Vec::new(), Vec::new(), 0);
        for (start, samples) in self.pieces {
            let start = start as usize * per_frame;
            let moved = |span: Span| Span { start: span.start + start, end: span.end + start };
            gaps.push(Span { start: end, end: start });
            gaps.extend(samples.gaps().iter().map(moved));
            clipped.extend(samples.saturated().iter().map(moved));
            end = start + samples.len();
            if let Some(place) = values.get_mut(start..end) {
                place.copy_from_slice(samples.values_with_gaps());
            }
        }
        gaps.push(Span { start: end, end: values.len() });
        let (quantity, step) = self.found.unwrap_or(self.layout);
        let samples = Samples::new(self.rate, values, Spans::from_unordered(gaps))
            .with_saturated(Spans::from_unordered(clipped));
        Signal { name: self.name, quantity, resolution: Some(step), samples }
    }
}
