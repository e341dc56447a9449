//! Beats showing of beats examined.

use super::candidate::Course;
use super::search::Evidence;
use crate::average::RepresentativeBeat;
use crate::beats::{Beats, Channels};
use crate::recording::Lead;

/// A beat shows the P when it holds at least this part of the average's (own choice: half, so that noise must be
/// as large as half the P to hide or to feign it).
const SHOWS: f64 = 0.5;
/// What lies beside the P, in ms, is looked at too, so that a level or a tilt isn't taken for it.
const BESIDE: f64 = 20.0;

/// A P as the average shows it.
pub(super) struct Wave<'a> {
    /// In ms from QRS onset.
    pub course: Course,
    pub leads: &'a [Lead],
    /// Per lead, in mV.
    pub potentials: &'a [f64],
    /// QRS onset in ms from the fiducial.
    pub qrs_onset: f64,
}

/// Asks each averaged beat for the P.
pub(super) fn count(
    channels: &Channels,
    beats: &Beats,
    average: &RepresentativeBeat,
    wave: &Wave,
) -> Evidence {
    let parts: Vec<f64> =
        average.used.iter().filter_map(|&beat| part(channels, beats, average, wave, beat)).collect();
    Evidence { showing: parts.iter().filter(|part| **part >= SHOWS).count(), examined: parts.len() }
}

/// How much of the average's P one beat holds: 1 for as much, 0 for none; `None` where the recording ends.
///
/// What the beat has beside the average without the P is projected on the P, over all leads at once; in each lead
/// a level and a tilt of its own are taken off both first.
pub(super) fn part(
    channels: &Channels,
    beats: &Beats,
    average: &RepresentativeBeat,
    wave: &Wave,
    beat: usize,
) -> Option<f64> {
    let per_ms = average.rate.get() / 1000.0;
    let from = ((wave.qrs_onset + wave.course.onset - BESIDE) * per_ms).round() as isize;
    let count = ((wave.course.duration + 2.0 * BESIDE) * per_ms).round() as usize;
    let fiducial = beats.all.get(beat)?.fiducial.0;
    let start = fiducial.checked_add_signed(from)?;
    let in_average = average.fiducial.0.checked_add_signed(from)?;
    let mut course: Vec<f64> = (0..count)
        .map(|index| wave.course.at((from + index as isize) as f64 / per_ms - wave.qrs_onset))
        .collect();
    level(&mut course);
    let (mut along, mut whole) = (0.0, 0.0);
    for (lead, potential) in wave.leads.iter().zip(wave.potentials) {
        let place = channels.names.iter().position(|name| *name == Some(*lead))?;
        let own = channels.signals.get(place)?.get(start..start + count)?;
        let mean = average.lead(*lead)?.get(in_average..in_average + count)?;
        let mut rest: Vec<f64> = own.iter().zip(mean).map(|(own, mean)| own - mean).collect();
        level(&mut rest);
        for (rest, course) in rest.iter().zip(&course) {
            let wave = potential * course;
            along += (rest + wave) * wave;
            whole += wave * wave;
        }
    }
    (whole > 0.0).then(|| along / whole)
}

/// Takes off the straight line that fits best.
pub(super) fn level(values: &mut [f64]) {
    let count = values.len() as f64;
    let middle = (count - 1.0) / 2.0;
    let mean = values.iter().sum::<f64>() / count;
    let (mut tilt, mut square) = (0.0, 0.0);
    for (index, value) in values.iter().enumerate() {
        let place = index as f64 - middle;
        tilt += place * value;
        square += place * place;
    }
    let tilt = if square > 0.0 { tilt / square } else { 0.0 };
    for (index, value) in values.iter_mut().enumerate() {
        *value -= mean + tilt * (index as f64 - middle);
    }
}
