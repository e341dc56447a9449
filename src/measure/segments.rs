//! A stretch of every beat in all signals, smoothed and thinned, to be compared with each other.

use super::slopes::smooth;
use crate::beats::Channels;
use crate::units::{SampleRate, Seconds};

/// The recording behind a Gaussian of 8 ms, thinned to some 250 samples per second.
pub(super) struct Thinned {
    signals: Vec<Vec<f64>>,
    /// Samples of the recording per sample here.
    pub stride: usize,
}

/// A stretch in all signals, one after the other, each over its own straight line.
#[derive(Clone, Debug)]
pub(super) struct Segment(pub Vec<f64>);

impl Thinned {
    pub fn of(channels: &Channels, rate: SampleRate) -> Self {
        let stride = rate.count(Seconds::literal(0.004)).max(1);
        let signals = channels
            .signals
            .iter()
            .map(|signal| smooth(signal, rate, Seconds::literal(0.008), stride))
            .collect();
        Self { signals, stride }
    }

    /// The stretch from `from` for `count` thinned samples; `from` counts samples of the recording and
    /// is rounded to the thinned grid. `None` where the recording ends before.
    pub fn cut(&self, from: isize, count: usize) -> Option<Segment> {
        let start = usize::try_from(from).ok()? / self.stride;
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
        let (start, end) =
            (usize::try_from(from).ok()? / self.stride, usize::try_from(to).ok()? / self.stride);
        if end < start + 3 {
            return None;
        }
        let (mut sum, mut count) = (0.0, 0);
        for signal in &self.signals {
            let part = signal.get(start..end)?;
            sum += part.windows(2).map(|pair| (pair[1] - pair[0]).powi(2)).sum::<f64>();
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
