//! QRS onset and offset.
//!
//! Over all leads: outward from the largest spatial velocity until it stays below a threshold. In
//! each lead: slope thresholds as in Martínez et al. 2004 (IEEE Trans Biomed Eng 51:570), with two
//! changes: the lead's own slope before and after the QRS is taken off first, so that a sloping ST
//! segment isn't QRS; and the threshold grows less than the QRS does, as readers mark. The leads then
//! agree: each is drawn towards their median, so that one lead's noise can't carry its mark away.
//! Constants in ms at the end of each rule are the readers' habit: they mark the last flat point.

use super::shape::{Mark, Shape, WaveMarks, median};
use super::slopes::{slope, spatial};
use crate::units::Seconds;

/// Marks the QRS; `None` when the beat has no valid samples around its fiducial.
pub(super) fn delineate(shape: &Shape) -> Option<WaveMarks> {
    let narrow: Vec<Vec<f64>> =
        shape.beat.signals.iter().map(|signal| slope(signal, shape.rate, Seconds::literal(0.005))).collect();
    let velocity = spatial(&narrow);
    let (from, to) = (shape.moved(shape.fiducial, -80.0), shape.moved(shape.fiducial, 80.0));
    let steepest = (from..=to).max_by(|&a, &b| velocity[a].total_cmp(&velocity[b]))?;
    let threshold = 14.0 * (velocity[steepest] / 200.0).powf(0.25);
    let onset = walk(&velocity, steepest, shape.moved(shape.fiducial, -150.0), threshold, shape.steps(8.0));
    let offset = walk(&velocity, steepest, shape.moved(shape.fiducial, 190.0), threshold, shape.steps(16.0));
    if offset <= onset {
        return None;
    }
    let own: Vec<(f64, f64)> =
        shape.beat.signals.iter().map(|signal| own_limits(shape, signal, onset, offset)).collect();
    let median_on = median(own.iter().map(|pair| pair.0));
    let median_off = median(own.iter().map(|pair| pair.1));
    let clip = shape.ms(24.0);
    let each = own
        .iter()
        .zip(&shape.beat.signals)
        .map(|(&(on, off), signal)| {
            let (g_on, g_off) = (onset as f64, offset as f64);
            let onset =
                g_on + 0.65 * (median_on - g_on) + 0.55 * (on - median_on).clamp(-clip, clip) - shape.ms(9.6);
            let offset = g_off
                + 0.74 * (median_off - g_off)
                + 0.55 * (off - median_off).clamp(-clip, clip)
                + shape.ms(4.6);
            Mark { onset: Some(onset), peak: peak(signal, onset, offset), offset }
        })
        .collect();
    Some(WaveMarks { each, core: (onset, offset) })
}

/// From `start` towards `limit`: the last position above `threshold` before it stays below for `quiet`.
fn walk(velocity: &[f64], start: usize, limit: usize, threshold: f64, quiet: usize) -> usize {
    let mut edge = start;
    let mut below = 0;
    let mut index = start;
    while index != limit && below < quiet {
        index = if limit < start { index - 1 } else { index + 1 };
        if velocity[index] < threshold {
            below += 1;
        } else {
            below = 0;
            edge = index;
        }
    }
    edge
}

fn own_limits(shape: &Shape, signal: &[f64], onset: usize, offset: usize) -> (f64, f64) {
    let slope = slope(signal, shape.rate, Seconds::literal(0.007));
    let over = |from: usize, to: usize| median(slope[from..=to.max(from)].iter().copied());
    let before = over(shape.moved(onset, -50.0), shape.moved(onset, -12.0));
    let after = over(shape.moved(offset, 24.0), shape.moved(offset, 70.0));
    let largest = slope[onset..=offset].iter().fold(0.0f64, |high, value| high.max(value.abs()));
    let threshold = (5.0 * (largest / 60.0).powf(0.3)).min(0.3 * largest);
    let (earliest, latest) = (shape.moved(onset, -32.0), shape.moved(offset, 32.0));
    let first = (earliest..=latest).find(|&index| (slope[index] - before).abs() > threshold).unwrap_or(onset);
    let last =
        (earliest..=latest).rev().find(|&index| (slope[index] - after).abs() > threshold).unwrap_or(offset);
    (first as f64, last as f64)
}

/// The largest deflection from the level at onset; an R at least 0.6 of it is preferred, as readers do.
fn peak(signal: &[f64], onset: f64, offset: f64) -> f64 {
    let (from, to) = (onset.round().max(0.0) as usize, (offset.round() as usize).min(signal.len() - 1));
    let level = signal[from.min(to)];
    let range = from.min(to)..=to;
    let highest = range.clone().max_by(|&a, &b| signal[a].total_cmp(&signal[b])).unwrap_or(from);
    let lowest = range.min_by(|&a, &b| signal[a].total_cmp(&signal[b])).unwrap_or(from);
    let (up, down) = (signal[highest] - level, level - signal[lowest]);
    (if up >= 0.6 * down { highest } else { lowest }) as f64
}
