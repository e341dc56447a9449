//! The last wave of a tachycardia: whether its last QRS is followed by a P as the others are.

use super::candidate::Course;
use super::evidence::{Wave, part};
use super::retrograde::{COMPARED, Cycle, weigh};
use super::sinus::{self, Overlay};
use super::stretch::Stretch;
use super::{Subject, WaveAtEnd, suspicion};

/// At least this part of the others' P is a P, at most that part is none (own choice).
const THERE: f64 = 0.6;
const GONE: f64 = 0.4;

/// The last wave of the tachycardia with the beats `first..=last`; `None` when its P can't be told or the last beat
/// lies between.
pub(super) fn last_wave(subject: &Subject, first: usize, last: usize, sinus: &Stretch) -> Option<WaveAtEnd> {
    let tachycardia = Stretch::of(subject, first + 1, last, last - 1)?;
    let (curves, other) = (tachycardia.curves(), sinus.curves());
    let marks = tachycardia.measurements.representative.as_ref()?;
    let cycle = Cycle {
        qrs_end: marks.qrs.offset.ms() - tachycardia.qrs_onset,
        rr: tachycardia.measurements.rr.value()?.ms(),
    };
    let overlay = Overlay::of(
        &curves,
        cycle.qrs_end,
        &other,
        &sinus::Marks::of(&sinus.measurements, super::retrograde::LATE)?,
    )
    .filter(|overlay| overlay.likeness >= sinus::LEAST_LIKENESS)?;
    let weighed = weigh(&curves, cycle, Some(&overlay), &COMPARED)?;
    if !suspicion::likely(&weighed, cycle.rr, true) {
        return None;
    }
    let found = &weighed.retrograde;
    let wave = Wave {
        course: Course { onset: found.onset, ..found.course },
        leads: &curves.leads,
        potentials: &found.potentials,
        qrs_onset: tachycardia.qrs_onset,
    };
    match part(subject.channels, subject.beats, &tachycardia.average, &wave, last)? {
        part if part >= THERE => Some(WaveAtEnd::P),
        part if part <= GONE => Some(WaveAtEnd::Qrs),
        _ => None,
    }
}
