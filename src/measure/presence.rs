//! Is there a P wave? One question per recording and then one per beat, over all leads together:
//! readers mark a P in all leads or in none, and agreement of the leads finds what one lead hides.

use super::segments::{Segment, Thinned};
use super::shape::{Shape, WaveMarks, median};
use crate::units::Seconds;

/// Least median correlation of each beat's P with the mean of the others (own choice after a trial).
const REPEATS: f64 = 0.78;
/// Least correlation of one beat's P with the mean.
const SHOWS: f64 = 0.5;
/// Smallest P in the fourth best lead, in mV.
const SMALLEST: f64 = 0.012;
/// Largest roughness of the stretch before P against that of P.
const ROUGHEST: f64 = 0.65;
/// The same, and the beat-to-beat change of RR over RR, that together mean fibrillation.
const FIBRILLATING: (f64, f64) = (0.3, 0.15);

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
    rr_change: f64,
) -> Option<Presence> {
    let (from, to) = (shape.moved(p.core.0, -24.0), shape.moved(p.core.1, 16.0));
    let count = (to - from) / thinned.stride;
    let start = from as isize - shape.fiducial as isize;
    if count < 5 || amplitude(shape, from, to) < SMALLEST {
        return None;
    }
    let segments: Vec<Option<Segment>> =
        fiducials.iter().map(|&fiducial| thinned.cut(fiducial as isize + start, count)).collect();
    let whole: Vec<&Segment> = segments.iter().flatten().collect();
    if whole.len() < 2 {
        return None;
    }
    let mut sum = Segment(vec![0.0; whole[0].0.len()]);
    for segment in &whole {
        sum.add(segment);
    }
    let repeats = median(whole.iter().map(|segment| {
        let mut others = sum.clone();
        for (rest, own) in others.0.iter_mut().zip(&segment.0) {
            *rest -= own;
        }
        others.correlation(segment)
    }));
    let rough = median(fiducials.iter().filter_map(|&fiducial| {
        let here = |offset: isize| fiducial as isize + offset;
        let before = thinned
            .roughness(here(start - shape.steps(90.0) as isize), here(start - shape.steps(10.0) as isize))?;
        let inside = thinned.roughness(here(start), here(start + (to - from) as isize))?;
        (inside > 0.0).then_some(before / inside)
    }));
    if repeats < REPEATS || rough > ROUGHEST || (rough > FIBRILLATING.0 && rr_change > FIBRILLATING.1) {
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
