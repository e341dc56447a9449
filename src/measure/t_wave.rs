//! T peak and T end.
//!
//! The end over all leads is where the spatial velocity behind the wave's last flank has fallen; each
//! lead's end is the mean of four published ends: chord corner (triangle method, Rosin 2001), slope
//! threshold (Martínez et al. 2004), tangent (Lepeschkin and Surawicz 1952) and area (Zhang et al.
//! 2006). Their errors are of one size and differ in kind, so the mean beats each.

use super::shape::{Mark, Shape, WaveMarks, median};
use super::slopes::{above_line, corner, slope, smooth, spatial};
use crate::recording::Lead;
use crate::units::Seconds;

/// Smallest T that is one, in at least a quarter of the signals (own choice; smaller waves can't be
/// told from the baseline).
const SMALLEST: f64 = 0.02;

/// Marks the T wave behind a QRS; `rr` is the interval to the next QRS. `None` when there is none.
pub(super) fn delineate(shape: &Shape, qrs: &WaveMarks, rr: Seconds) -> Option<WaveMarks> {
    let start = shape.moved(qrs.core.1, 40.0);
    let fiducial_ms = |index: usize| (index as f64 - shape.fiducial as f64) * 1000.0 / shape.rate.get();
    let longest =
        (rr.ms() - 120.0).min(15.0 * rr.ms().max(0.0).sqrt() + 80.0).min(fiducial_ms(qrs.core.1) + 600.0);
    let end = shape.moved(shape.fiducial, longest);
    if end < start + shape.steps(60.0) {
        return None;
    }
    let smoothed: Vec<Vec<f64>> = shape
        .beat
        .signals
        .iter()
        .map(|signal| smooth(signal, shape.rate, Seconds::literal(0.010), 1))
        .collect();
    let slopes: Vec<Vec<f64>> =
        shape.beat.signals.iter().map(|signal| slope(signal, shape.rate, Seconds::literal(0.012))).collect();
    let velocity = spatial(&slopes);
    let global_end = global_end(shape, &smoothed, &velocity, start, end)?;
    let peaks: Vec<f64> = shape
        .beat
        .names
        .iter()
        .zip(&smoothed)
        .map(|(name, signal)| own_peak(shape, *name, signal, start, end, global_end))
        .collect();
    let middle = median(peaks.iter().copied());
    let peak_clip = shape.ms(30.0);
    let ends: Vec<f64> = smoothed
        .iter()
        .zip(&slopes)
        .zip(&peaks)
        .map(|((signal, slope), &peak)| own_end(shape, signal, slope, peak as usize, global_end, end))
        .collect();
    let middle_end = median(ends.iter().copied());
    let end_clip = shape.ms(50.0);
    let each: Vec<Mark> = shape
        .beat
        .names
        .iter()
        .enumerate()
        .map(|(index, name)| Mark {
            onset: None,
            peak: middle + (peaks[index] - middle).clamp(-peak_clip, peak_clip) - shape.ms(3.4),
            offset: middle_end
                + 0.65 * (ends[index] - middle_end).clamp(-end_clip, end_clip)
                + shape.ms(6.0 + end_habit(*name)),
        })
        .collect();
    let large = smoothed
        .iter()
        .zip(&peaks)
        .filter(|(signal, peak)| height(shape, signal, **peak as usize, global_end) >= SMALLEST)
        .count();
    if large * 4 < shape.beat.signals.len().max(4) {
        return None;
    }
    Some(WaveMarks { each, core: (start, global_end) })
}

/// Height of a lead's T over the line from its begin to its end.
fn height(shape: &Shape, signal: &[f64], peak: usize, end: usize) -> f64 {
    let (from, to) = (shape.moved(end, -220.0), shape.moved(end, 36.0));
    above_line(signal, from, to).get(peak.saturating_sub(from)).map_or(0.0, |height| height.abs())
}

fn global_end(
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

/// The extremum that a reader would take: the late, upright phase unless the other dominates.
fn own_peak(
    shape: &Shape,
    name: Option<Lead>,
    signal: &[f64],
    start: usize,
    end: usize,
    global_end: usize,
) -> f64 {
    let (from, to) = (shape.moved(global_end, -160.0).max(start), shape.moved(global_end, 36.0).min(end));
    if to <= from + 2 {
        return global_end as f64 - shape.ms(84.0);
    }
    let heights = above_line(signal, from, to);
    let expected = global_end as f64 - shape.ms(84.0);
    let upright = if name == Some(Lead::AVR) { -1.0 } else { 1.0 };
    let mut best = (expected.clamp(from as f64, to as f64), 0.0);
    for step in 1..heights.len() - 1 {
        let (before, here, after) = (heights[step - 1], heights[step], heights[step + 1]);
        if (here - before) * (after - here) > 0.0 {
            continue;
        }
        let position = (from + step) as f64;
        let place = (-((position - expected) / shape.ms(90.0)).powi(2) / 2.0).exp();
        let score = here.abs() * place * if here * upright > 0.0 { 1.6 } else { 1.0 };
        if score > best.1 {
            best = (position, score);
        }
    }
    best.0
}

fn own_end(shape: &Shape, signal: &[f64], slope: &[f64], peak: usize, global_end: usize, end: usize) -> f64 {
    let last = shape.moved(global_end, 60.0).min(end).max(peak + 2).min(shape.length - 1);
    let steepest = (peak..=last).max_by(|&a, &b| slope[a].abs().total_cmp(&slope[b].abs())).unwrap_or(peak);
    let falling = slope[steepest] < 0.0;
    let chord = corner(signal, steepest.min(last - 1), last, falling) as f64;
    let limit = 0.30 * slope[steepest].abs();
    let threshold = (steepest..=last).find(|&index| slope[index].abs() <= limit).unwrap_or(last) as f64;
    let level = median(signal[last.saturating_sub(shape.steps(16.0))..=last].iter().copied());
    let per_sample = slope[steepest] / shape.rate.get();
    let tangent = if per_sample == 0.0 {
        threshold
    } else {
        (steepest as f64 + (level - signal[steepest]) / per_sample).clamp(steepest as f64, last as f64)
    };
    let area = area_end(signal, steepest, last, shape.steps(80.0)) as f64;
    (chord + threshold + tangent + area) / 4.0
}

/// Where the area between the signal and its own value over the preceding window is largest.
fn area_end(signal: &[f64], from: usize, to: usize, window: usize) -> usize {
    let mut best = (to, -1.0);
    for index in from..=to {
        let start = index.saturating_sub(window);
        let area: f64 = signal[start..=index].iter().map(|value| value - signal[index]).sum::<f64>().abs();
        if area > best.1 {
            best = (index, area);
        }
    }
    best.0
}

/// How much later than the others readers end T in a lead, in ms.
fn end_habit(name: Option<Lead>) -> f64 {
    match name {
        Some(Lead::II) => 2.0,
        Some(Lead::III) => -2.0,
        Some(Lead::AVR) => -3.0,
        Some(Lead::AVL) => -4.0,
        Some(Lead::V1) => -6.0,
        Some(Lead::V2) => -2.0,
        Some(Lead::V3) => 1.0,
        Some(Lead::V4) => 4.0,
        Some(Lead::V5 | Lead::V6) => 3.0,
        _ => 0.0,
    }
}
