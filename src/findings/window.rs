//! The stretch from the end of the QRS to the next one, on the representative beat, thinned to 4 ms.

use super::Subject;
use crate::average::RepresentativeBeat;
use crate::measure::BeatMarks;
use crate::recording::Lead;
use crate::units::Seconds;

/// Spacing of the thinned samples.
pub(super) const STEP: Seconds = Seconds::literal(0.004);

/// The stretch in the leads that are there.
#[derive(Clone, Debug)]
pub(super) struct Window {
    pub leads: Vec<Lead>,
    /// Per lead, in mV.
    pub signals: Vec<Vec<f64>>,
    /// Time of the first sample after QRS onset.
    pub start: Seconds,
    /// QRS onset relative to the fiducial of the beat.
    pub onset: Seconds,
    /// QRS duration.
    pub qrs: Seconds,
    /// End of T after QRS onset.
    pub t_end: Option<Seconds>,
}

impl Window {
    /// From `before` ahead of the end of the QRS to `tail` ahead of the next QRS onset; `None` when that is
    /// too short to hold a P.
    pub fn of(subject: &Subject, before: Seconds, tail: Seconds) -> Option<Self> {
        let beat = subject.representative?;
        let marks: &BeatMarks = subject.measurements.representative.as_ref()?;
        let rr = subject.measurements.rr.value()?;
        let onset = marks.qrs.onset?;
        let qrs = marks.qrs.offset - onset;
        let start = qrs - before;
        let count = ((rr - tail - start) / STEP).floor();
        if count < 25.0 {
            return None;
        }
        let leads: Vec<Lead> = beat.names.iter().flatten().copied().collect();
        let from = onset + start;
        let signals =
            leads.iter().filter_map(|&lead| sampled(beat, lead, from, count as usize)).collect::<Vec<_>>();
        (signals.len() == leads.len()).then(|| Self {
            leads,
            signals,
            start,
            onset,
            qrs,
            t_end: marks.t.map(|t| t.offset - onset),
        })
    }

    /// Samples of each signal.
    pub fn len(&self) -> usize {
        self.signals.first().map_or(0, Vec::len)
    }

    /// The time of a sample after QRS onset.
    pub fn time_of(&self, sample: f64) -> Seconds {
        self.start + STEP * sample
    }

    /// Places of the leads that carry independent information.
    pub fn independent(&self) -> Vec<usize> {
        (0..self.leads.len()).filter(|&index| Lead::INDEPENDENT.contains(&self.leads[index])).collect()
    }
}

/// A lead of the beat every 4 ms from `from` (relative to its fiducial), each the mean over 4 ms.
fn sampled(beat: &RepresentativeBeat, lead: Lead, from: Seconds, count: usize) -> Option<Vec<f64>> {
    let signal = beat.lead(lead)?;
    thinned(signal, beat.fiducial.0 as f64 + beat.rate.samples(from), beat.rate.samples(STEP), count)
}

/// `count` means over `step` samples, centred on `start`, `start + step`, …; `None` outside the signal.
pub(super) fn thinned(signal: &[f64], start: f64, step: f64, count: usize) -> Option<Vec<f64>> {
    let half = step / 2.0;
    let last = start + step * (count.max(1) - 1) as f64 + half;
    if start - half < 0.0 || last.ceil() as usize >= signal.len() {
        return None;
    }
    Some(
        (0..count)
            .map(|index| {
                let centre = start + step * index as f64;
                let (low, high) = ((centre - half).round() as usize, (centre + half).round() as usize);
                let part = &signal[low..=high];
                part.iter().sum::<f64>() / part.len() as f64
            })
            .collect(),
    )
}
