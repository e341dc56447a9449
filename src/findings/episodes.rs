//! Regular narrow-complex tachycardias inside a longer recording: where they start and end.

use super::ending;
use super::gate::{BROAD, BROAD_MARGIN, SLOWEST};
use super::premature::{self, Start};
use super::{Observation, Subject, Tachycardia};
use crate::beats::{ClassId, median};
use crate::recording::Weight;
use crate::units::{PerMinute, Seconds};

/// Fewest beats of a tachycardia (own choice).
const FEWEST: usize = 8;
/// An interval may differ so much from the median of the run it continues (own choice).
const STEADY: f64 = 0.12;

/// Every run of intervals that are fast and steady, in beats of one class or of like ones.
pub(super) fn find(subject: &Subject) -> Vec<Tachycardia> {
    if subject.measurements.qrs.value().is_none_or(|qrs| qrs >= BROAD + BROAD_MARGIN) {
        return Vec::new();
    }
    let beats = &subject.beats.all;
    let rr: Vec<f64> = beats
        .windows(2)
        .map(|pair| subject.beats.rate.duration(pair[1].fiducial.0 - pair[0].fiducial.0).get())
        .collect();
    let slowest = 60.0 / SLOWEST.get();
    let mut found = Vec::new();
    let mut first = 0;
    while first < rr.len() {
        let mut last = first;
        let mut run: Vec<f64> = Vec::new();
        while last < rr.len() && rr[last] < slowest {
            let typical = if run.is_empty() { rr[last] } else { median(&mut run.clone()) };
            if (rr[last] - typical).abs() > STEADY * typical {
                break;
            }
            run.push(rr[last]);
            last += 1;
        }
        // The run is the intervals first..last, so the beats first..=last.
        let dominant = beats[first..=last].iter().filter(|beat| beat.class == ClassId(0)).count();
        if run.len() + 1 >= FEWEST && 2 * dominant > run.len() {
            found.extend(tachycardia(subject, first, last, &run));
        }
        first = last.max(first + 1);
    }
    found
}

fn tachycardia(subject: &Subject, first: usize, last: usize, run: &[f64]) -> Option<Tachycardia> {
    let onset = |beat: usize| -> Option<Seconds> {
        let at = subject.beats.rate.time_of(subject.beats.all[beat].fiducial);
        Some(at + subject.measurements.representative.as_ref()?.qrs.onset?)
    };
    let mean = run.iter().sum::<f64>() / run.len() as f64;
    let starts = first > 0;
    let ends = last + 1 < subject.beats.all.len();
    let sinus = if starts { premature::before(subject, first) } else { None };
    let start = sinus.as_ref().map_or_else(Start::default, |sinus| premature::start(subject, first, sinus));
    Some(Tachycardia {
        start: if starts { onset(first) } else { None },
        end: if ends { onset(last) } else { None },
        rate: PerMinute::new(60.0 / mean)?,
        premature_p: start.premature_p,
        coupling: start.coupling,
        pr_before: start.pr_before,
        first_pr: start.first_pr,
        ends_with: sinus.filter(|_| ends).and_then(|sinus| ending::last_wave(subject, first, last, &sinus)),
    })
}

/// What a reader must know of the values beside one that starts or ends inside the recording.
pub(super) fn observed(found: &Tachycardia) -> Option<Observation> {
    if found.start.is_none() && found.end.is_none() {
        return None;
    }
    Some(Observation {
        weight: Weight::Information,
        what: "measurements are of the whole recording, not of the tachycardia alone".to_owned(),
        leads: Vec::new(),
        value: None,
        evidence: None,
    })
}
