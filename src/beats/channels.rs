//! All signals of a recording side by side, in mV, whatever they are called.

use crate::condition::Conditioned;
use crate::recording::{Lead, Samples};
use crate::units::{SampleRate, Seconds, Spans};

/// The signals that beats are sought in: the leads that are there, then the others.
#[derive(Clone, Debug)]
pub struct Channels {
    /// Which lead each signal is; `None` for a signal that is none of the twelve.
    pub names: Vec<Option<Lead>>,
    /// The signals, all of one length; samples in a gap are 0.
    pub signals: Vec<Vec<f64>>,
    /// Where every signal has a gap.
    pub gaps: Spans,
    /// Samples per second.
    pub rate: SampleRate,
}

impl Channels {
    /// Gathers the signals of a recording.
    pub fn of(measured: &Conditioned) -> Self {
        let leads = measured.leads.iter().filter_map(|(lead, samples)| Some((Some(lead), samples.as_ref()?)));
        let extra = measured.extra.iter().map(|extra| (None, &extra.samples));
        let all: Vec<(Option<Lead>, &Samples)> = leads.chain(extra).collect();
        let length = all.first().map_or(0, |(_, samples)| samples.len());
        let gaps = all
            .iter()
            .map(|(_, samples)| samples.gaps().complement(length))
            .fold(Spans::none(), |covered, valid| covered.union(&valid))
            .complement(length);
        Self {
            names: all.iter().map(|(name, _)| *name).collect(),
            signals: all.iter().map(|(_, samples)| samples.values_with_gaps().to_vec()).collect(),
            gaps,
            rate: measured.rate,
        }
    }

    /// Samples of each signal.
    pub fn len(&self) -> usize {
        self.signals.first().map_or(0, Vec::len)
    }

    /// Whether there is nothing.
    pub fn is_empty(&self) -> bool {
        self.len() == 0
    }

    /// The same with a straight line from 8 ms before to 16 ms after each of `spikes`.
    pub fn bridged(&self, spikes: &[usize]) -> Self {
        let rate = self.rate;
        let mut bridged = self.clone();
        let before = rate.count(Seconds::literal(0.008));
        let after = rate.count(Seconds::literal(0.016));
        for signal in &mut bridged.signals {
            for &spike in spikes {
                let end = (spike + after).min(signal.len().saturating_sub(1));
                let start = spike.saturating_sub(before);
                if start >= end {
                    continue;
                }
                let (first, last) = (signal[start], signal[end]);
                let width = (end - start).max(1) as f64;
                for (step, value) in signal[start..=end].iter_mut().enumerate() {
                    *value = first + (last - first) * step as f64 / width;
                }
            }
        }
        bridged
    }
}
