//! Intervals, axes and amplitudes, each a value or the reason why there is none.
//!
//! Marks are made on the representative beat of each class, in every lead, and carried to the beats:
//! whether a wave is there is one question to all leads together, where it begins and ends is asked
//! lead by lead, and the leads then agree.

mod amplitude;
mod axis;
mod classes;
mod global;
mod measured;
mod measurements;
pub mod network;
mod p_wave;
mod presence;
mod qrs;
mod qtc;
mod seen;
mod segments;
mod shape;
mod slopes;
mod t_wave;

pub use axis::frontal_axis;
pub use measured::{Measured, Reading, Reason};
pub use measurements::{Amplitudes, BeatMarks, LeadMarks, Measurements, Wave};
pub use qtc::{HIGHEST_RATE, bazett, fridericia};

use crate::average::RepresentativeBeat;
use crate::beats::{Beats, Channels, Rhythm};
use crate::recording::{Lead, PerLead};
use crate::units::{Degrees, Millivolts, PerMinute, Seconds, Span, Spans};
use classes::{Classes, Marked};
use global::Intervals;

/// RR may spread so far around its mean for a corrected QT: (longest − shortest) / mean (own limit).
const STABLE_RR: f64 = 0.20;

/// Measures a recording. `representative` is the beat of the dominant class.
pub fn measure(
    channels: &Channels,
    beats: &Beats,
    representative: Option<&RepresentativeBeat>,
) -> Measurements {
    let rr_change = rr_change(beats);
    let classes = Classes::mark(channels, beats, representative, rr_change);
    let dominant = classes.dominant();
    let (rate, rr) = rate_and_rr(beats, &channels.gaps);
    let intervals = match dominant {
        Some(marked) => Intervals::of(marked, &why_no_p(beats, rr_change)),
        None => Intervals::none(&Reason::TooFewBeats { needed: 1, found: 0 }),
    };
    let stable = match &beats.rhythm {
        Rhythm::Regular(range) => (range.max - range.min) / range.mean <= STABLE_RR,
        _ => false,
    };
    let axes = axes(dominant);
    let marks = dominant.map(|marked| intervals.drawn_on(global::beat(marked, None, Seconds::ZERO, true)));
    Measurements {
        ventricular_rate: rate,
        qtc_bazett: qtc::measured(&intervals.qt, &rr, stable, bazett),
        qtc_fridericia: qtc::measured(&intervals.qt, &rr, stable, fridericia),
        rr,
        p_duration: intervals.p_duration,
        pr: intervals.pr,
        qrs: intervals.qrs,
        qt: intervals.qt,
        p_axis: axes.0,
        qrs_axis: axes.1,
        t_axis: axes.2,
        beats: beat_marks(beats, &classes),
        lead_beats: PerLead::from_fn(|lead| lead_marks(lead, beats, &classes)),
        representative: marks,
        lead_representative: PerLead::from_fn(|lead| lead_mark(dominant?, lead, None, Seconds::ZERO, true)),
        amplitudes: PerLead::from_fn(|lead| amplitudes(dominant?, lead)),
        noise: PerLead::from_fn(|lead| noise(dominant?, lead)),
    }
}

fn beat_marks(beats: &Beats, classes: &Classes) -> Vec<BeatMarks> {
    (0..beats.all.len())
        .filter_map(|index| {
            let marked = classes.of(index)?;
            let beat = beats.all[index];
            let place = marked.place(index);
            Some(global::beat(
                marked,
                place,
                beats.rate.time_of(beat.fiducial),
                beat.class == Beats::DOMINANT,
            ))
        })
        .collect()
}

fn lead_marks(lead: Lead, beats: &Beats, classes: &Classes) -> Option<Vec<LeadMarks>> {
    (0..beats.all.len())
        .filter_map(|index| Some((index, classes.of(index)?)))
        .map(|(index, marked)| {
            let beat = beats.all[index];
            let dominant = beat.class == Beats::DOMINANT;
            lead_mark(marked, lead, marked.place(index), beats.rate.time_of(beat.fiducial), dominant)
        })
        .collect()
}

fn lead_mark(
    marked: &Marked,
    lead: Lead,
    place: Option<usize>,
    fiducial: Seconds,
    dominant: bool,
) -> Option<LeadMarks> {
    let signal = marked.beat.names.iter().position(|name| *name == Some(lead))?;
    let shape = marked.shape();
    let wave = |mark: &shape::Mark, shift: f64| Wave {
        onset: mark.onset.filter(|_| mark.told[0]).map(|onset| fiducial + shape.time(onset + shift)),
        peak: fiducial + shape.time(mark.peak + shift),
        offset: fiducial + shape.time(mark.offset + shift),
    };
    // A P or T that can't be told in this lead has no marks in it.
    let p = global::p_shift(marked, place).zip(marked.p.as_ref()).and_then(|(shift, (p, _))| {
        let mark = &p.each[signal];
        mark.is_told().then(|| wave(mark, shift))
    });
    let t = marked.t.as_ref().and_then(|(t, shifts)| {
        let mark = &t.each[signal];
        let shift = place.and_then(|place| shifts.get(place).copied()).unwrap_or(0.0);
        mark.is_told().then(|| wave(mark, shift))
    });
    let found = amplitudes(marked, lead)?;
    Some(LeadMarks {
        marks: BeatMarks { dominant, p, qrs: wave(&marked.qrs.each[signal], 0.0), t },
        visible: [found.p.is_some(), found.r.or(found.q).is_some(), found.t.is_some()],
    })
}

fn amplitudes(marked: &Marked, lead: Lead) -> Option<Amplitudes> {
    let signal = marked.beat.names.iter().position(|name| *name == Some(lead))?;
    Some(amplitude::of_lead(
        &marked.beat.signals[signal],
        &marked.shape(),
        marked.p.as_ref().map(|(p, _)| &p.each[signal]),
        &marked.qrs.each[signal],
        marked.t.as_ref().map(|(t, _)| &t.each[signal]),
    ))
}

/// Noise of a single beat: what the average leaves, times the root of the beats used.
fn noise(marked: &Marked, lead: Lead) -> Option<Millivolts> {
    marked.beat.noise(lead).map(|noise| noise * (marked.beat.used.len() as f64).sqrt())
}

/// Rate and RR from the intervals that no gap interrupts: a gap may hide beats.
fn rate_and_rr(beats: &Beats, gaps: &Spans) -> (Measured<PerMinute>, Measured<Seconds>) {
    let intervals: Vec<f64> = beats
        .all
        .windows(2)
        .map(|pair| Span { start: pair[0].fiducial.0, end: pair[1].fiducial.0 })
        .filter(|span| !gaps.touches(*span))
        .map(|span| beats.rate.duration(span.len()).get())
        .collect();
    if intervals.is_empty() {
        let found = beats.all.len();
        let reason = if found < 2 { Reason::TooFewBeats { needed: 2, found } } else { Reason::Gaps };
        return (Measured::NotMeasurable(reason.clone()), Measured::NotMeasurable(reason));
    }
    let count = intervals.len() as f64;
    let mean = intervals.iter().sum::<f64>() / count;
    let spread = match &beats.rhythm {
        Rhythm::Regular(_) | Rhythm::Irregular(_) => {
            let squares: f64 = intervals.iter().map(|rr| (rr - mean).powi(2)).sum();
            Seconds::new((squares / count).sqrt())
        }
        Rhythm::Uncertain(_) => None,
    };
    match Seconds::new(mean).and_then(|rr| Some((rate_of(rr)?, rr))) {
        Some((rate, rr)) => {
            (Measured::Value(Reading::bare(rate)), Measured::Value(Reading { spread, ..Reading::bare(rr) }))
        }
        _ => (Measured::NotMeasurable(Reason::UnstableRr), Measured::NotMeasurable(Reason::UnstableRr)),
    }
}

/// 60 s over an RR interval; `None` unless it is above zero.
pub fn rate_of(rr: Seconds) -> Option<PerMinute> {
    if rr > Seconds::ZERO { PerMinute::new(60.0 / rr.get()) } else { None }
}

/// Median change from one RR to the next, over RR.
fn rr_change(beats: &Beats) -> f64 {
    let rr: Vec<f64> =
        beats.all.windows(2).map(|pair| (pair[1].fiducial.0 - pair[0].fiducial.0) as f64).collect();
    if rr.len() < 2 {
        return 0.0;
    }
    shape::median(rr.windows(2).map(|pair| (pair[1] - pair[0]).abs() / pair[0]))
}

fn why_no_p(beats: &Beats, rr_change: f64) -> Reason {
    let dominant: Vec<bool> = beats.of(Beats::DOMINANT).map(|beat| beat.paced).collect();
    if dominant.iter().filter(|paced| **paced).count() * 2 >= dominant.len().max(1) {
        return Reason::Paced;
    }
    if matches!(beats.rhythm, Rhythm::Irregular(_)) && rr_change > 0.08 {
        return Reason::IrregularWithoutP;
    }
    Reason::NoPBeforeQrs
}

type Axes = (Measured<Degrees>, Measured<Degrees>, Measured<Degrees>);

fn axes(dominant: Option<&Marked>) -> Axes {
    let none = |reason: Reason| Measured::NotMeasurable(reason);
    let Some(marked) = dominant else {
        let reason = Reason::TooFewBeats { needed: 1, found: 0 };
        return (none(reason.clone()), none(reason.clone()), none(reason));
    };
    let marks = global::beat(marked, None, Seconds::ZERO, true);
    let of = |wave: &Wave, onset: Seconds| axis::of_wave(&marked.beat, onset, wave.offset);
    let p = marks.p.as_ref().map_or_else(|| none(Reason::NoPBeforeQrs), |p| of(p, p.onset.unwrap_or(p.peak)));
    let qrs = of(&marks.qrs, marks.qrs.onset.unwrap_or(marks.qrs.peak));
    let t = marks
        .t
        .as_ref()
        .map_or_else(|| none(Reason::TEndUnreliable), |t| of(t, t.peak - (t.offset - t.peak) * 1.5));
    (p, qrs, t)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::beats::{Beat, WhyUncertain};
    use crate::units::{SampleIndex, SampleRate};

    // Source: common practice at 25 mm/s, 300 over large boxes of 200 ms and 1500 over small ones of 40 ms.
    #[test]
    fn rates_agree_with_boxes_counted_on_paper() {
        let rate = |seconds: f64| rate_of(Seconds::literal(seconds)).unwrap().get();
        assert!((rate(0.2) - 300.0).abs() < 0.01);
        assert!((rate(2.0 * 0.2) - 150.0).abs() < 0.01);
        assert!((rate(2.14 * 0.2) - 140.0).abs() < 0.2);
        assert!((rate(8.33 * 0.04) - 180.0).abs() < 0.2);
        assert_eq!(rate_of(Seconds::ZERO), None);
    }

    fn beats_at(samples: &[usize], rhythm: Rhythm) -> Beats {
        let beat = |&fiducial: &usize| Beat {
            fiducial: SampleIndex(fiducial),
            class: Beats::DOMINANT,
            paced: false,
        };
        let rate = SampleRate::new(500.0).unwrap();
        Beats { rate, all: samples.iter().map(beat).collect(), rhythm, spikes: Vec::new() }
    }

    // Source: construction, one beat a second; the gap hides three.
    #[test]
    fn an_interval_over_a_gap_counts_for_no_rate() {
        let gaps = Spans::from_unordered(vec![Span { start: 900, end: 2400 }]);
        let beats = beats_at(&[250, 750, 2750, 3250], Rhythm::Uncertain(WhyUncertain::Gaps));
        let (rate, rr) = rate_and_rr(&beats, &gaps);
        assert_eq!(rate.value().map(PerMinute::get), Some(60.0));
        assert_eq!(rr.value().map(Seconds::get), Some(1.0));

        let beats = beats_at(&[750, 2750], Rhythm::Uncertain(WhyUncertain::TooFewBeats(2)));
        assert!(matches!(rate_and_rr(&beats, &gaps).0, Measured::NotMeasurable(Reason::Gaps)));
    }
}
