//! The stretch behind the QRS that holds a T, over all leads together: it ends where the spatial velocity
//! behind the wave's last flank has fallen.

use super::shape::{Shape, WaveMarks, median};
use super::slopes::{above_line, slope, smooth, spatial};
use crate::units::Seconds;

/// Smallest T that is one, in at least a quarter of the signals (own choice; smaller waves can't be
/// told from the baseline).
const SMALLEST: f64 = 0.02;

/// First and last sample; `rr` is the interval to the next QRS. `None` when there is no T.
pub(super) fn core(shape: &Shape, qrs: &WaveMarks, rr: Seconds) -> Option<(usize, usize)> {
    let start = shape.moved(qrs.core.1, 40.0);
    let fiducial_ms = |index: usize| (index as f64 - shape.fiducial as f64) * 1000.0 / shape.rate.get();
    let longest =
        (rr.ms() - 120.0).min(15.0 * rr.ms().max(0.0).sqrt() + 80.0).min(fiducial_ms(qrs.core.1) + 600.0);
    let end = shape.moved(shape.fiducial, longest);
    if end < start + shape.steps(60.0) {
        return None;
    }
    let signals = &shape.beat.signals;
    let smoothed: Vec<Vec<f64>> =
        signals.iter().map(|signal| smooth(signal, shape.rate, Seconds::literal(0.010), 1)).collect();
    let slopes: Vec<Vec<f64>> =
        signals.iter().map(|signal| slope(signal, shape.rate, Seconds::literal(0.012))).collect();
    let end = wave_end(shape, &smoothed, &spatial(&slopes), start, end)?;
    let (from, to) = (shape.moved(end, -220.0), shape.moved(end, 36.0));
    let height = |signal: &[f64]| {
        above_line(signal, from, to).into_iter().fold(0.0f64, |high, height| high.max(height.abs()))
    };
    let large = smoothed.iter().filter(|signal| height(signal) >= SMALLEST).count();
    (large * 4 >= signals.len().max(4)).then_some((start, end))
}

/// Readers end T so much later than the velocity falls, in ms (median on LUDB).
const LATER: f64 = 9.0;
/// In a fast rhythm the two ends may differ by so much more, in ms (own choice, on built beats of known ends).
const APART: f64 = 10.0;

/// The T of a rhythm so fast that the next P or QRS stands near its end, where the network ends it late: half-way
/// to the end that the velocity tells. And whether the two agree, or the end can't be relied on.
pub(super) fn crowded(shape: &Shape, mut t: WaveMarks) -> (WaveMarks, bool) {
    let middle = median(t.each.iter().map(|mark| mark.offset));
    let late = middle - t.core.1 as f64 - shape.ms(LATER);
    for mark in &mut t.each {
        mark.offset -= late / 2.0;
    }
    (t, late.abs() <= shape.ms(APART))
}

/// From the steepest flank behind the largest deflection to where the velocity nears its base.
fn wave_end(
    shape: &Shape,
    smoothed: &[Vec<f64>],
    velocity: &[f64],
    start: usize,
    end: usize,
) -> Option<usize> {
    let mut power = vec![0.0; end - start + 1];
    for signal in smoothed {
        for (slot, height) in power.iter_mut().zip(above_line(signal, start, end)) {
            *slot += height * height;
        }
    }
    let peak = start + (0..power.len()).max_by(|&a, &b| power[a].total_cmp(&power[b]))?;
    let steepest = (peak..=end).max_by(|&a, &b| velocity[a].total_cmp(&velocity[b]))?;
    let base = (steepest..=end).map(|index| velocity[index]).fold(f64::INFINITY, f64::min);
    let limit = base + 0.4 * (velocity[steepest] - base);
    let found = (steepest..=end).find(|&index| velocity[index] <= limit).unwrap_or(end);
    (found > start + shape.steps(20.0)).then_some(found)
}
