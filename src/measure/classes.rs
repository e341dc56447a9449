//! Every class of beats with its representative beat and the marks on it.

use super::p_wave;
use super::presence::{self, Pace, Presence};
use super::qrs;
use super::seen::Seen;
use super::segments::Thinned;
use super::shape::{Shape, WaveMarks, median};
use super::t_wave;
use crate::average::{RepresentativeBeat, representative_of};
use crate::beats::{Beats, Channels};
use crate::units::Seconds;

/// Classes beyond this one hold stray beats of a long recording; they get the marks of the largest.
const MOST: usize = 40;
/// A long recording is averaged piece by piece, since shapes drift: so many beats of a class …
const PIECE_BEATS: usize = 10;
/// … over so much time make a piece (own choice; ten beats leave a third of the noise).
const PIECE: Seconds = Seconds::literal(10.0);
/// A recording up to here is one piece.
const WHOLE: Seconds = Seconds::literal(20.0);

/// A class, or a piece of one, with its marks.
pub(super) struct Marked {
    pub beat: RepresentativeBeat,
    /// Members, as indices into the beats of the recording.
    pub members: Vec<usize>,
    pub qrs: WaveMarks,
    pub p: Option<(WaveMarks, Presence)>,
    pub t: Option<(WaveMarks, Vec<f64>)>,
    /// Whether a QT can be read from the end of T.
    pub t_end_reliable: bool,
    /// How wide each mark may lie, in ms, as [`Seen::spreads`].
    pub spreads: [f64; 8],
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

/// The marks of every beat.
pub(super) struct Classes {
    marked: Vec<Marked>,
    /// Per beat of the recording, which of `marked` holds it.
    holder: Vec<Option<usize>>,
}

impl Classes {
    /// Marks every class; `dominant` is the representative beat of the largest one.
    pub fn mark(
        channels: &Channels,
        beats: &Beats,
        dominant: Option<&RepresentativeBeat>,
        rr_change: f64,
    ) -> Self {
        let mut classes = Self { marked: Vec::new(), holder: vec![None; beats.all.len()] };
        let Some(dominant) = dominant else { return classes };
        let thinned = Thinned::around(channels, beats);
        let mut members: Vec<Vec<usize>> = vec![Vec::new(); MOST];
        for (index, beat) in beats.all.iter().enumerate() {
            if let Some(members) = members.get_mut(beat.class.0) {
                members.push(index);
            }
        }
        let mut add = |beat: RepresentativeBeat, members: &[usize]| {
            let marked = mark(beat, members.to_vec(), beats, &thinned, rr_change)?;
            for &member in &marked.members {
                classes.holder[member] = Some(classes.marked.len());
            }
            classes.marked.push(marked);
            Some(())
        };
        // The whole of the largest class comes first: intervals are read from it.
        if add(dominant.clone(), &members[dominant.class.0]).is_none() {
            return classes;
        }
        for (class, members) in members.iter().enumerate() {
            let pieces = pieces(beats, members);
            if class == dominant.class.0 && pieces.len() == 1 {
                continue;
            }
            for piece in pieces {
                if let Some(beat) = representative_of(channels, beats, piece) {
                    add(beat, piece);
                }
            }
        }
        classes
    }

    /// The largest class over the whole recording; `None` when no beat of it can be used.
    pub fn dominant(&self) -> Option<&Marked> {
        self.marked.first()
    }

    /// The marks that hold for a beat: those of its class, else of the largest one.
    pub fn of(&self, beat: usize) -> Option<&Marked> {
        self.holder.get(beat).copied().flatten().map_or(self.dominant(), |index| self.marked.get(index))
    }
}

/// A class cut into pieces of a stretch of the recording each.
fn pieces<'a>(beats: &Beats, members: &'a [usize]) -> Vec<&'a [usize]> {
    let at = |member: usize| beats.rate.time_of(beats.all[member].fiducial);
    let (Some(&first), Some(&last)) = (members.first(), members.last()) else { return Vec::new() };
    if at(last) - at(first) <= WHOLE {
        return vec![members];
    }
    let mut ends = Vec::new();
    let mut start = 0;
    for end in 1..=members.len() {
        if end - start >= PIECE_BEATS && at(members[end - 1]) - at(members[start]) >= PIECE {
            ends.push(end);
            start = end;
        }
    }
    // What is left over belongs to the last piece.
    match ends.last_mut() {
        Some(end) => *end = members.len(),
        None => ends.push(members.len()),
    }
    let starts = std::iter::once(0).chain(ends.iter().copied());
    starts.zip(&ends).map(|(start, &end)| &members[start..end]).collect()
}

fn mark(
    beat: RepresentativeBeat,
    members: Vec<usize>,
    beats: &Beats,
    thinned: &Thinned,
    rr_change: f64,
) -> Option<Marked> {
    let fiducials: Vec<usize> = members.iter().map(|&index| beats.all[index].fiducial.0).collect();
    let shape = Shape::of(&beat);
    let seen = Seen::of(&shape);
    let qrs = seen.qrs(qrs::core(&shape)?);
    let (before, after) = intervals(beats, &members);
    let pace = Pace { rr: before, change: rr_change };
    let t = t_wave::core(&shape, &qrs, after).map(|core| {
        let t = seen.t(core);
        if after < presence::ROOMY { t_wave::crowded(&shape, t) } else { (t, true) }
    });
    let (t, t_end_reliable) = t.map_or((None, false), |(t, reliable)| (Some(t), reliable));
    let paced = members.iter().filter(|&&index| beats.all[index].paced).count() * 2 >= members.len();
    let p = (!paced)
        .then(|| p_wave::window(&shape, &qrs, t.as_ref(), before))
        .flatten()
        .and_then(|window| {
            let classical = p_wave::delineate(&shape, window, &qrs);
            // In a fast rhythm the network may take the end of T for a P: the search window has the say.
            if pace.rr < presence::ROOMY { Some(seen.joined(classical?)) } else { seen.p(classical) }
        })
        .and_then(|p| {
            let presence = presence::of_p(&shape, thinned, &p, &fiducials, pace, &seen)?;
            Some((p, presence))
        });
    let t = t.map(|t| {
        let shifts = t_shifts(&shape, thinned, &t, &fiducials);
        (t, shifts)
    });
    Some(Marked { members, qrs, p, t, t_end_reliable, spreads: seen.spreads(), beat })
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
