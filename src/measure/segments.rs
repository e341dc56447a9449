//! A stretch of every beat in all signals, smoothed and thinned, to be compared with each other.

use super::slopes::smooth;
use crate::beats::{Beats, Channels};
use crate::units::Seconds;

/// So far before the first beat and behind the last one.
const MARGIN: Seconds = Seconds::literal(1.2);

/// The part of the recording that holds the beats, behind a Gaussian of 8 ms, thinned to some 250 samples
/// per second.
pub(super) struct Thinned {
    signals: Vec<Vec<f64>>,
    /// Samples of the recording per sample here.
    pub stride: usize,
    /// Sample of the recording that is the first one here, a multiple of the stride.
    start: usize,
}

/// A stretch in all signals, one after the other, each over its own straight line.
#[derive(Clone, Debug)]
pub(super) struct Segment(pub Vec<f64>);

impl Thinned {
    pub fn around(channels: &Channels, beats: &Beats) -> Self {
        let rate = channels.rate;
        let stride = rate.count(Seconds::literal(0.004)).max(1);
        let margin = rate.count(MARGIN);
        let first = beats.all.first().map_or(0, |beat| beat.fiducial.0.saturating_sub(margin));
        let last = beats.all.last().map_or(0, |beat| (beat.fiducial.0 + margin).min(channels.len()));
        let start = first / stride * stride;
        let signals = channels
            .signals
            .iter()
            .map(|signal| {
                smooth(signal.get(start..last).unwrap_or(&[]), rate, Seconds::literal(0.008), stride)
            })
            .collect();
        Self { signals, stride, start }
    }

    /// Place of a sample of the recording here, rounded down to the thinned grid.
    fn place(&self, sample: isize) -> Option<usize> {
        Some(usize::try_from(sample).ok()?.checked_sub(self.start)? / self.stride)
    }

    /// The stretch from `from` for `count` thinned samples; `from` counts samples of the recording and
    /// is rounded to the thinned grid. `None` where the recording ends before.
    pub fn cut(&self, from: isize, count: usize) -> Option<Segment> {
        let start = self.place(from)?;
        let mut all = Vec::with_capacity(count * self.signals.len());
        for signal in &self.signals {
            let part = signal.get(start..start + count)?;
            let (first, last) = (part[0], part[count - 1]);
            let width = count.max(2) as f64 - 1.0;
            all.extend(
                part.iter()
                    .enumerate()
                    .map(|(step, value)| value - first - (last - first) * step as f64 / width),
            );
        }
        Some(Segment(all))
    }

    /// The root mean square slope over a stretch, in mV per thinned sample.
    pub fn roughness(&self, from: isize, to: isize) -> Option<f64> {
        let (start, end) = (self.place(from)?, self.place(to)?);
        if end < start + 3 {
            return None;
        }
        let (mut sum, mut count) = (0.0, 0);
        for signal in &self.signals {
            let part = signal.get(start..end)?;
            // A straight slope is no roughness: the end of T may lie here.
            let mean = (part[part.len() - 1] - part[0]) / (part.len() - 1) as f64;
            sum += part.windows(2).map(|pair| (pair[1] - pair[0] - mean).powi(2)).sum::<f64>();
            count += part.len() - 1;
        }
        Some((sum / count as f64).sqrt())
    }
}

impl Segment {
    /// Pearson's correlation about zero.
    pub fn correlation(&self, other: &Segment) -> f64 {
        let (mut dot, mut a, mut b) = (0.0, 0.0, 0.0);
        for (x, y) in self.0.iter().zip(&other.0) {
            dot += x * y;
            a += x * x;
            b += y * y;
        }
        if a > 0.0 && b > 0.0 { dot / (a * b).sqrt() } else { 0.0 }
    }

    pub fn add(&mut self, other: &Segment) {
        for (x, y) in self.0.iter_mut().zip(&other.0) {
            *x += y;
        }
    }
}
