//! The premature P that leads into a tachycardia.
//!
//! The last beat before is compared with the average of the beats before it: what it has more, behind its QRS and
//! before the first QRS of the tachycardia, is the premature P, also where it falls on the T wave.

use super::Subject;
use super::candidate::Course;
use super::evidence::level;
use super::linear::dot;
use super::stretch::{Stretch, single};
use super::window::Curves;
use crate::units::Seconds;

/// Beats before the tachycardia that make the average, at most and at least.
const MOST: usize = 12;
const FEWEST: usize = 3;
/// Durations of a P, in ms.
const DURATIONS: [f64; 3] = [70.0, 90.0, 110.0];
/// Steps of its onset and of the samples, in ms.
const STEP: f64 = 4.0;
/// PR of the first beat, in ms.
const PR: (f64, f64) = (80.0, 450.0);
/// What lies beside the P is looked at too, in ms, so that a level or a tilt isn't taken for it.
const BESIDE: f64 = 32.0;
/// Least root mean square of its potentials over time and leads, in mV, and least part of the difference that it explains.
const SMALLEST: f64 = 0.006;
const EXPLAINS: f64 = 0.5;

/// How a tachycardia starts.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Start {
    /// Onset of the premature P.
    pub premature_p: Option<Seconds>,
    /// From the P before to it.
    pub coupling: Option<Seconds>,
    /// PR of the beats before.
    pub pr_before: Option<Seconds>,
    /// PR of the first beat.
    pub first_pr: Option<Seconds>,
}

/// The beats before the tachycardia that starts with beat `first`.
pub(super) fn before(subject: &Subject, first: usize) -> Option<Stretch> {
    (first >= FEWEST).then(|| Stretch::of(subject, first.saturating_sub(MOST), first, first - 1)).flatten()
}

/// How the tachycardia with the first beat `first` starts, after the beats of `sinus`.
pub(super) fn start(subject: &Subject, first: usize, sinus: &Stretch) -> Start {
    let pr_before = sinus.measurements.pr.value();
    let mut start = Start { pr_before, ..Start::default() };
    let time =
        |beat: usize| subject.beats.rate.time_of(subject.beats.all[beat].fiducial).ms() + sinus.qrs_onset;
    let (last_qrs, first_qrs) = (time(first - 1), time(first));
    let Some(own) = single(subject, first - 1, sinus.qrs_onset, first_qrs - last_qrs + 50.0) else {
        return start;
    };
    let average = sinus.curves();
    // The average must not show its own next P there.
    let rr = sinus.measurements.rr.value().map_or(f64::INFINITY, Seconds::ms);
    // Where no sinus P is known, what the average shows there may be one, and nothing is told from it.
    let Some(pr) = pr_before.map(Seconds::ms) else { return start };
    let next_p = rr - pr - 10.0;
    let Some(onset) = sought(&own, &average, pr, next_p.min(average.end), first_qrs - last_qrs) else {
        return start;
    };
    start.premature_p = Seconds::from_ms(last_qrs + onset);
    start.first_pr = Seconds::from_ms(first_qrs - last_qrs - onset);
    start.coupling = Seconds::from_ms(onset + pr);
    start
}

/// Onset of the P in ms from the last QRS onset, in what `own` has more than the average until `next_qrs`.
///
/// It may look like a raised cosine or like the P of sinus rhythm, in each lead of any size.
fn sought(own: &Curves, average: &Curves, pr: f64, known: f64, next_qrs: f64) -> Option<f64> {
    let difference = |time: f64| -> Vec<f64> {
        own.at(time).iter().zip(average.at(time.min(known))).map(|(own, average)| own - average).collect()
    };
    let (first, last) = (average.at(-pr - 4.0), average.at(0.0));
    let sinus_p = |time: f64, lead: usize| {
        if !(0.0..pr).contains(&time) {
            return 0.0;
        }
        average.at(time - pr)[lead] - first[lead] - (last[lead] - first[lead]) * time / pr
    };
    let mut best: Option<(f64, f64)> = None;
    for duration in DURATIONS.into_iter().map(Some).chain([None]) {
        let length = duration.unwrap_or(pr);
        let mut onset = (next_qrs - PR.1).max(100.0);
        while onset <= next_qrs - PR.0 {
            let times: Vec<f64> = (0..)
                .map(|step| onset - BESIDE + STEP * f64::from(step))
                .take_while(|time| *time < (onset + length + BESIDE).min(next_qrs - 6.0))
                .collect();
            let values: Vec<Vec<f64>> = times.iter().map(|time| difference(*time)).collect();
            let (mut explained, mut all, mut squares) = (0.0, 0.0, 0.0);
            for lead in 0..own.leads.len() {
                let mut rest: Vec<f64> = values.iter().map(|values| values[lead]).collect();
                let mut shape: Vec<f64> = times
                    .iter()
                    .map(|time| match duration {
                        None => sinus_p(time - onset, lead),
                        Some(duration) => Course { onset, duration, peak: 0.5 }.at(*time),
                    })
                    .collect();
                level(&mut rest);
                level(&mut shape);
                let energy = dot(&shape, &shape);
                if energy > 0.0 {
                    let part = dot(&rest, &shape).powi(2) / energy;
                    explained += part;
                    squares += part / times.len() as f64;
                }
                all += dot(&rest, &rest);
            }
            let size = (squares / own.leads.len() as f64).sqrt();
            if size > SMALLEST && explained > EXPLAINS * all && best.is_none_or(|(most, _)| explained > most)
            {
                best = Some((explained, onset));
            }
            onset += STEP;
        }
    }
    best.map(|(_, onset)| onset)
}
