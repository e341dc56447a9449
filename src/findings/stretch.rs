//! Parts of a recording, as beats of their own.

use super::Subject;
use super::retrograde::LATE;
use super::window::Curves;
use crate::average::{RepresentativeBeat, representative};
use crate::beats::{Beats, ClassId, median};
use crate::measure::{Measured, Measurements, Reading, measure};
use crate::units::{SampleIndex, Seconds, Span};

/// A run of beats, averaged and measured.
pub(super) struct Stretch {
    pub average: RepresentativeBeat,
    /// RR is the median of the run.
    pub measurements: Measurements,
    /// QRS onset in ms from the fiducial.
    pub qrs_onset: f64,
}

impl Stretch {
    /// The beats `first..last`, as far as they are of the class of `like`; their neighbours are only used to know
    /// where they end. `None` when they can't be averaged or their QRS can't be marked.
    pub fn of(subject: &Subject, first: usize, last: usize, like: usize) -> Option<Self> {
        let class = subject.beats.all.get(like)?.class;
        let from = first.saturating_sub(1);
        let until = (last + 1).min(subject.beats.all.len());
        let member = |index: usize| (first..last).contains(&index) && subject.beats.all[index].class == class;
        let all = (from..until)
            .map(|index| {
                let class = if member(index) { Beats::DOMINANT } else { ClassId(1) };
                crate::beats::Beat { class, ..subject.beats.all[index] }
            })
            .collect();
        let beats = Beats { all, ..subject.beats.clone() };
        let mut average = representative(subject.channels, &beats, Beats::DOMINANT)?;
        let mut measurements = measure(subject.channels, &beats, Some(&average));
        // The rhythm is that of the whole recording; the stretch has its own.
        let mut intervals: Vec<f64> = subject.beats.all[first..last]
            .windows(2)
            .map(|pair| subject.beats.rate.duration(pair[1].fiducial.0 - pair[0].fiducial.0).get())
            .collect();
        if let (false, Some(value)) = (intervals.is_empty(), Seconds::new(median(&mut intervals))) {
            measurements.rr = Measured::Value(Reading::bare(value));
        }
        let qrs = &measurements.representative.as_ref()?.qrs;
        let qrs_onset = qrs.onset.unwrap_or(qrs.peak).ms() - LATE;
        // Back to the numbering of the recording.
        average.used.iter_mut().for_each(|beat| *beat += from);
        Some(Self { average, measurements, qrs_onset })
    }

    /// Its leads, to be read in ms from QRS onset.
    pub fn curves(&self) -> Curves {
        Curves::of(&self.average, self.qrs_onset)
    }
}

/// One beat of the recording with `after` ms behind its fiducial, to be read in ms from QRS onset.
pub(super) fn single(subject: &Subject, beat: usize, qrs_onset: f64, after: f64) -> Option<Curves> {
    let rate = subject.beats.rate;
    let fiducial = subject.beats.all.get(beat)?.fiducial.0;
    let samples = |ms: f64| (ms * rate.get() / 1000.0).round().max(0.0) as usize;
    let start = fiducial.saturating_sub(samples(200.0));
    let end = (fiducial + samples(after)).min(subject.channels.len());
    let names = subject.channels.names.clone();
    let alone = RepresentativeBeat {
        class: Beats::DOMINANT,
        rate,
        fiducial: SampleIndex(fiducial - start),
        valid: Span { start: 0, end: end - start },
        residual_noise: vec![None; names.len()],
        names,
        signals: subject.channels.signals.iter().map(|signal| signal[start..end].to_vec()).collect(),
        used: vec![beat],
        left_out: Vec::new(),
    };
    Some(Curves::of(&alone, qrs_onset))
}
