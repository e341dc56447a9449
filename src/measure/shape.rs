//! A representative beat as the delineators see it: positions in samples of its window.

use crate::average::RepresentativeBeat;
use crate::units::{SampleRate, Seconds};

/// One wave in one signal, in samples of the window, with fractions.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Mark {
    /// `None` where it is not told (T).
    pub onset: Option<f64>,
    pub peak: f64,
    pub offset: f64,
    /// Whether onset, peak and offset can be told in this signal.
    pub told: [bool; 3],
}

impl Mark {
    /// Whether the whole wave can be told in this signal.
    pub fn is_told(&self) -> bool {
        self.told.iter().all(|told| *told)
    }

    /// The mark moved towards another by a part of the way; what the other can't tell isn't told.
    pub fn towards(&self, other: &Mark, part: f64) -> Mark {
        let between = |own: f64, other: f64| own + part * (other - own);
        Mark {
            onset: self.onset.zip(other.onset).map(|(own, other)| between(own, other)),
            peak: between(self.peak, other.peak),
            offset: between(self.offset, other.offset),
            told: other.told,
        }
    }
}

/// One wave over all signals.
#[derive(Clone, Debug, PartialEq)]
pub(super) struct WaveMarks {
    /// In the order of the beat's signals.
    pub each: Vec<Mark>,
    /// Begin and end of the wave on the spatial velocity.
    pub core: (usize, usize),
}

/// The beat and its sampling.
pub(super) struct Shape<'a> {
    pub beat: &'a RepresentativeBeat,
    pub rate: SampleRate,
    pub fiducial: usize,
}

impl<'a> Shape<'a> {
    pub fn of(beat: &'a RepresentativeBeat) -> Self {
        Self { beat, rate: beat.rate, fiducial: beat.fiducial.0 }
    }

    /// Milliseconds in samples, with fractions.
    pub fn ms(&self, ms: f64) -> f64 {
        ms * self.rate.get() / 1000.0
    }

    /// Milliseconds in whole samples, at least one.
    pub fn steps(&self, ms: f64) -> usize {
        self.ms(ms).round().max(1.0) as usize
    }

    /// An index moved by milliseconds, kept inside the beat's valid samples.
    pub fn moved(&self, index: usize, ms: f64) -> usize {
        let moved = index as f64 + self.ms(ms);
        let last = self.beat.valid.end.saturating_sub(1).max(self.beat.valid.start);
        (moved.round().max(0.0) as usize).clamp(self.beat.valid.start, last)
    }

    /// The time of a position relative to the fiducial.
    pub fn time(&self, position: f64) -> Seconds {
        Seconds::new((position - self.fiducial as f64) / self.rate.get()).unwrap_or(Seconds::ZERO)
    }
}

/// The median.
pub(super) fn median(values: impl IntoIterator<Item = f64>) -> f64 {
    let mut values: Vec<f64> = values.into_iter().collect();
    crate::beats::median(&mut values)
}
