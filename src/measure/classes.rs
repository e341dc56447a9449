//! Every class of beats with its representative beat and the marks on it.

use super::p_wave;
use super::presence::{self, Presence};
use super::qrs;
use super::segments::Thinned;
use super::shape::{Shape, WaveMarks, median};
use super::t_wave;
use crate::average::{RepresentativeBeat, representative};
use crate::beats::{Beats, Channels, ClassId};
use crate::units::Seconds;

/// Classes beyond this one hold stray beats of a long recording; they get the marks of the largest.
const MOST: usize = 40;

/// A class with its marks.
pub(super) struct Marked {
    pub beat: RepresentativeBeat,
    /// Members, as indices into the beats of the recording.
    pub members: Vec<usize>,
    pub qrs: WaveMarks,
    pub p: Option<(WaveMarks, Presence)>,
    pub t: Option<(WaveMarks, Vec<f64>)>,
}

impl Marked {
    /// The view of its representative beat.
    pub fn shape(&self) -> Shape<'_> {
        Shape::of(&self.beat)
    }

    /// The place of a beat among the members.
    pub fn place(&self, beat: usize) -> Option<usize> {
        self.members.binary_search(&beat).ok()
    }
}

/// Marks every class; `None` where no beat of a class can be used.
pub(super) fn mark_all(
    channels: &Channels,
    beats: &Beats,
    dominant: Option<&RepresentativeBeat>,
    rr_change: f64,
) -> Vec<Option<Marked>> {
    let classes = beats.all.iter().map(|beat| beat.class.0 + 1).max().unwrap_or(0).min(MOST);
    let thinned = Thinned::of(channels, channels.rate);
    (0..classes)
        .map(|class| {
            let beat = match dominant {
                Some(beat) if beat.class.0 == class => beat.clone(),
                _ => representative(channels, beats, ClassId(class))?,
            };
            mark(beat, beats, &thinned, rr_change)
        })
        .collect()
}

fn mark(beat: RepresentativeBeat, beats: &Beats, thinned: &Thinned, rr_change: f64) -> Option<Marked> {
    let members: Vec<usize> =
        (0..beats.all.len()).filter(|&index| beats.all[index].class == beat.class).collect();
    let fiducials: Vec<usize> = members.iter().map(|&index| beats.all[index].fiducial.0).collect();
    let shape = Shape::of(&beat);
    let qrs = qrs::delineate(&shape)?;
    let (before, after) = intervals(beats, &members);
    let t = t_wave::delineate(&shape, &qrs, after);
    let paced = members.iter().filter(|&&index| beats.all[index].paced).count() * 2 >= members.len();
    let p = (!paced)
        .then(|| p_wave::window(&shape, &qrs, t.as_ref(), before))
        .flatten()
        .and_then(|window| p_wave::delineate(&shape, window, &qrs))
        .and_then(|p| {
            let presence = presence::of_p(&shape, thinned, &p, &fiducials, rr_change)?;
            Some((p, presence))
        });
    let t = t.map(|t| {
        let shifts = t_shifts(&shape, thinned, &t, &fiducials);
        (t, shifts)
    });
    Some(Marked { members, qrs, p, t, beat })
}

/// Median interval before and after the members; a single beat without neighbours counts as 1 s.
fn intervals(beats: &Beats, members: &[usize]) -> (Seconds, Seconds) {
    let rr = |index: usize| {
        let pair = beats.all.get(index.checked_sub(1)?..=index)?;
        Some((pair[1].fiducial.0 - pair[0].fiducial.0) as f64 / beats.rate.get())
    };
    let middle = |intervals: Vec<f64>| {
        if intervals.is_empty() {
            Seconds::literal(1.0)
        } else {
            Seconds::new(median(intervals)).unwrap_or(Seconds::literal(1.0))
        }
    };
    (
        middle(members.iter().filter_map(|&index| rr(index)).collect()),
        middle(members.iter().filter_map(|&index| rr(index + 1)).collect()),
    )
}

/// How much later each beat's T lies than on the representative beat, in samples; four fifths of what
/// the best correlation says, since part of that is noise.
fn t_shifts(shape: &Shape, thinned: &Thinned, t: &WaveMarks, fiducials: &[usize]) -> Vec<f64> {
    let (from, to) = (shape.moved(t.core.1, -160.0), shape.moved(t.core.1, 36.0));
    let count = (to - from) / thinned.stride;
    let start = from as isize - shape.fiducial as isize;
    let cut = |fiducial: usize| thinned.cut(fiducial as isize + start, count);
    let mut sum: Option<super::segments::Segment> = None;
    for segment in fiducials.iter().filter_map(|&fiducial| cut(fiducial)) {
        match &mut sum {
            Some(sum) => sum.add(&segment),
            None => sum = Some(segment),
        }
    }
    let Some(model) = sum else { return vec![0.0; fiducials.len()] };
    let reach = shape.steps(60.0) as isize;
    fiducials
        .iter()
        .map(|&fiducial| {
            presence::best_shift(thinned, &model, fiducial as isize + start, count, reach)
                .filter(|(_, r)| *r >= 0.5)
                .map_or(0.0, |(shift, _)| 0.8 * shift)
        })
        .collect()
}
