//! Is there a P wave? One question per recording and then one per beat, over all leads together:
//! readers mark a P in all leads or in none, and agreement of the leads finds what one lead hides.

use super::seen::Seen;
use super::segments::{Segment, Thinned};
use super::shape::{Shape, WaveMarks, median};
use crate::units::Seconds;

/// Least median correlation of each beat's P with the mean of the others (own choice after a trial).
const REPEATS: f64 = 0.78;
/// The same where the network sees a P.
const REPEATS_IF_SEEN: f64 = 0.60;
/// Least correlation of one beat's P with the mean.
const SHOWS: f64 = 0.5;
/// Smallest P in the fourth best lead, in mV.
const SMALLEST: f64 = 0.012;
/// Largest roughness of the stretch before P against that of P …
const ROUGHEST: f64 = 0.65;
/// … where the network sees a P in a regular rhythm that is not fast: the end of T may lie there …
const ROUGHEST_IF_SEEN: f64 = 0.95;
/// … such as leaves room for a P behind T …
pub(super) const ROOMY: Seconds = Seconds::literal(0.450);
/// … and in a calm baseline.
const CALM: f64 = 0.30;
/// Beat-to-beat change of RR over RR from which a rhythm may be fibrillation.
const IRREGULAR: f64 = 0.06;
/// Classes of fewer beats don't show whether anything repeats.
const FEW: usize = 3;
/// The network's log-odds of a P: below this there is none …
const UNLIKELY: f64 = -3.0;
/// … from here on it is sure of one …
const SURE: f64 = 2.0;
/// … also where fibrillation is possible (own choices, on recordings that the network had not seen).
const SURE_IF_IRREGULAR: f64 = 3.2;

/// How the beats follow each other.
#[derive(Clone, Copy, Debug)]
pub(super) struct Pace {
    /// Median interval before the beats of the class.
    pub rr: Seconds,
    /// Median change from one RR of the recording to the next, over RR.
    pub change: f64,
}

/// Where each beat's P lies, if it has one: shift against the representative beat, in samples.
pub(super) struct Presence {
    /// Per beat of the class, in order.
    pub shifts: Vec<Option<f64>>,
}

/// Whether the beats with these fiducials have the P that the representative beat shows.
pub(super) fn of_p(
    shape: &Shape,
    thinned: &Thinned,
    p: &WaveMarks,
    fiducials: &[usize],
    pace: Pace,
    seen: &Seen,
) -> Option<Presence> {
    let (from, to) = (shape.moved(p.core.0, -24.0), shape.moved(p.core.1, 16.0));
    let count = (to - from) / thinned.stride;
    let start = from as isize - shape.fiducial as isize;
    if count < 5 || (seen.p < SURE && amplitude(shape, from, to) < SMALLEST) {
        return None;
    }
    let segments: Vec<Option<Segment>> =
        fiducials.iter().map(|&fiducial| thinned.cut(fiducial as isize + start, count)).collect();
    let whole: Vec<&Segment> = segments.iter().flatten().collect();
    let first = whole.first()?;
    let mut sum = Segment(vec![0.0; first.0.len()]);
    for segment in &whole {
        sum.add(segment);
    }
    // A single beat can't repeat.
    let repeats = (whole.len() > 1).then(|| {
        median(whole.iter().map(|segment| {
            let mut others = sum.clone();
            for (rest, own) in others.0.iter_mut().zip(&segment.0) {
                *rest -= own;
            }
            others.correlation(segment)
        }))
    });
    let rough = median(fiducials.iter().filter_map(|&fiducial| {
        let here = |offset: isize| fiducial as isize + offset;
        let before = thinned
            .roughness(here(start - shape.steps(90.0) as isize), here(start - shape.steps(10.0) as isize))?;
        let inside = thinned.roughness(here(start), here(start + (to - from) as isize))?;
        (inside > 0.0).then_some(before / inside)
    }));
    let regular = pace.change <= IRREGULAR;
    let there = match repeats {
        // The flank of T repeats as well as a P.
        Some(repeats) if pace.rr < ROOMY => repeats >= REPEATS && seen.p >= SURE,
        Some(repeats) if fiducials.len() >= FEW => {
            (repeats >= REPEATS && seen.p > UNLIKELY) || (repeats >= REPEATS_IF_SEEN && seen.sees_p())
        }
        // Too few beats to repeat anything: the network must be sure, and the baseline calm.
        _ => seen.p >= SURE && rough <= CALM,
    };
    let roomy = regular && pace.rr >= ROOMY && seen.sees_p();
    let roughest = if roomy { ROUGHEST_IF_SEEN } else { ROUGHEST };
    // Fibrillation is irregular; what lies before its QRS repeats by chance at best.
    if !there || rough > roughest || (!regular && seen.p < SURE_IF_IRREGULAR) {
        return None;
    }
    let reach = shape.steps(50.0) as isize;
    let shifts = fiducials
        .iter()
        .map(|&fiducial| {
            let best = best_shift(thinned, &sum, fiducial as isize + start, count, reach)?;
            (best.1 >= SHOWS).then_some(best.0)
        })
        .collect();
    Some(Presence { shifts })
}

/// The shift that correlates best with `model`, in samples of the recording, and the correlation.
pub(super) fn best_shift(
    thinned: &Thinned,
    model: &Segment,
    from: isize,
    count: usize,
    reach: isize,
) -> Option<(f64, f64)> {
    let stride = thinned.stride as isize;
    let mut best: Option<(f64, f64)> = None;
    let mut shift = -(reach / stride) * stride;
    while shift <= reach {
        if let Some(segment) = thinned.cut(from + shift, count) {
            let r = segment.correlation(model);
            if best.is_none_or(|(_, highest)| r > highest) {
                best = Some((shift as f64, r));
            }
        }
        shift += stride;
    }
    best
}

/// The P's height over its line in the fourth best signal (or the last, of fewer), in mV.
fn amplitude(shape: &Shape, from: usize, to: usize) -> f64 {
    let mut heights: Vec<f64> = shape
        .beat
        .signals
        .iter()
        .map(|signal| {
            let smoothed = super::slopes::smooth(&signal[from..=to], shape.rate, Seconds::literal(0.006), 1);
            super::slopes::above_line(&smoothed, 0, smoothed.len() - 1)
                .iter()
                .fold(0.0f64, |high, value| high.max(value.abs()))
        })
        .collect();
    heights.sort_by(|a, b| b.total_cmp(a));
    heights.get(3).or(heights.last()).copied().unwrap_or(0.0)
}
