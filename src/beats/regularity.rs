//! Regular or not.

use super::detect::median;
use super::{Beat, Rhythm, RrRange, WhyUncertain};
use crate::units::{SampleRate, Seconds, Span, Spans};

/// Fewest beats that make a rhythm (own choice: three intervals).
pub(super) const FEWEST: usize = 4;
/// Largest robust spread of RR over its median in a regular rhythm (own choice; 1.4826 × the median
/// absolute deviation, which estimates a standard deviation).
const LARGEST_SPREAD: f64 = 0.06;
/// Largest part of the intervals that may be more than 15 % off the median: a few premature beats.
const LARGEST_PART_OFF: f64 = 0.20;

/// The rhythm of the beats; intervals over a gap don't count.
pub(super) fn of(beats: &[Beat], rate: SampleRate, gaps: &Spans) -> Rhythm {
    if beats.len() < FEWEST {
        return Rhythm::Uncertain(WhyUncertain::TooFewBeats(beats.len()));
    }
    let mut intervals: Vec<f64> = beats
        .windows(2)
        .map(|pair| Span { start: pair[0].fiducial.0, end: pair[1].fiducial.0 })
        .filter(|span| !gaps.touches(*span))
        .map(|span| rate.duration(span.len()).get())
        .collect();
    if intervals.len() + 1 < FEWEST {
        return Rhythm::Uncertain(WhyUncertain::Gaps);
    }
    let middle = median(&mut intervals);
    let mut deviations: Vec<f64> = intervals.iter().map(|rr| (rr - middle).abs()).collect();
    let spread = 1.4826 * median(&mut deviations) / middle;
    let off = intervals.iter().filter(|rr| (*rr - middle).abs() > 0.15 * middle).count();
    let range = RrRange {
        mean: Seconds::literal(intervals.iter().sum::<f64>() / intervals.len() as f64),
        median: Seconds::literal(middle),
        min: Seconds::literal(intervals.iter().copied().fold(f64::INFINITY, f64::min)),
        max: Seconds::literal(intervals.iter().copied().fold(0.0, f64::max)),
        count: intervals.len(),
    };
    if spread <= LARGEST_SPREAD && off as f64 <= LARGEST_PART_OFF * intervals.len() as f64 {
        Rhythm::Regular(range)
    } else {
        Rhythm::Irregular(range)
    }
}
