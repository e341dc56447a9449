//! P onset and offset.
//!
//! The stretch before the QRS is searched in all leads together; in each lead the onset is the corner
//! of the wave, the point farthest from the chord between baseline and peak (triangle method, Rosin
//! 2001; scale-free, no threshold), the offset where 80 % of the wave's slope is spent. Each lead is
//! then drawn towards the median, so that one lead's noise can't carry its mark away. Constants in ms are the readers' habit.

use super::shape::{Mark, Shape, WaveMarks, median};
use super::slopes::{above_line, corner, slope, smooth, spatial};
use crate::recording::Lead;
use crate::units::Seconds;

/// Where a P may lie: a stretch of the window before the QRS.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct SearchWindow {
    pub from: usize,
    pub to: usize,
}

/// Below this RR (150/min) a P must have the whole search window behind the end of T (own choice, made
/// after built tachycardias without a P at 325 to 385 ms were given a PR).
const CROWDED: Seconds = Seconds::literal(0.400);

/// The search window; `None` when the T wave before leaves no room for a separate P.
pub(super) fn window(
    shape: &Shape,
    qrs: &WaveMarks,
    t: Option<&WaveMarks>,
    rr: Seconds,
) -> Option<SearchWindow> {
    let to = shape.moved(qrs.core.0, -20.0);
    let previous = shape.fiducial as f64 - shape.rate.samples(rr);
    let t_end = t
        .map_or(f64::NEG_INFINITY, |t| previous + (t.core.1 as f64 - shape.fiducial as f64) + shape.ms(16.0));
    let earliest = (qrs.core.0 as f64 - shape.ms(260.0)).max(previous + shape.ms(220.0));
    let from = earliest.max(t_end);
    // The window is never shorter than 120 ms, but it may not reach back into the T wave's peak; in a fast
    // rhythm not into the T wave at all, whose flank would pass for a P.
    let short = to as f64 - shape.ms(120.0);
    let into_t = if rr < CROWDED { 0.0 } else { shape.ms(70.0) };
    if from > short + into_t {
        return None;
    }
    let from = (from.min(short).max(0.0) as usize).max(shape.beat.valid.start);
    (to > from + shape.steps(60.0)).then_some(SearchWindow { from, to })
}

/// Marks the P wave inside `window`, which must hold one.
pub(super) fn delineate(shape: &Shape, window: SearchWindow, qrs: &WaveMarks) -> Option<WaveMarks> {
    let sigma = Seconds::literal(0.010);
    let smoothed: Vec<Vec<f64>> =
        shape.beat.signals.iter().map(|signal| smooth(signal, shape.rate, sigma, 1)).collect();
    let velocity = spatial(
        &shape.beat.signals.iter().map(|signal| slope(signal, shape.rate, sigma)).collect::<Vec<_>>(),
    );
    let common = common_peak(&smoothed, window);
    let core = core(shape, &velocity, window, common);
    let (from, to) = (shape.moved(core.0, -24.0), shape.moved(core.1, 16.0));
    let (chord_from, chord_to) = (shape.moved(core.0, -50.0), shape.moved(core.1, 50.0).min(qrs.core.0));
    if to <= from + 4 || chord_to <= core.1 {
        return None;
    }
    let own: Vec<Own> = smoothed
        .iter()
        .map(|signal| {
            let heights = above_line(signal, from, to);
            let inside = core.0 - from..=core.1 - from;
            let at = inside.max_by(|&a, &b| heights[a].abs().total_cmp(&heights[b].abs())).unwrap_or(0);
            let (peak, upright) = (from + at, heights[at] >= 0.0);
            Own {
                peak: peak as f64,
                chord_on: corner(signal, chord_from.min(peak - 1), peak, upright) as f64,
                chord_off: corner(signal, peak, chord_to.max(peak + 1), upright) as f64,
                spent_20: spent(signal, from, to, 0.2),
                spent_80: spent(signal, from, to, 0.8),
            }
        })
        .collect();
    let middle = |value: fn(&Own) -> f64| median(own.iter().map(value));
    let (chord_on, chord_off) = (middle(|own| own.chord_on), middle(|own| own.chord_off));
    let (spent_20, spent_80) = (middle(|own| own.spent_20), middle(|own| own.spent_80));
    let (clip, peak_clip) = (shape.ms(30.0), shape.ms(50.0));
    let latest = qrs.core.0 as f64 - shape.ms(4.0);
    let each = own
        .iter()
        .zip(&shape.beat.names)
        .map(|(own, name)| {
            let (on_habit, off_habit) = habit(*name);
            let onset = chord_on
                + 0.5 * (own.chord_on - chord_on).clamp(-clip, clip)
                + 0.35 * (own.spent_20 - spent_20).clamp(-clip, clip)
                + shape.ms(3.2 + on_habit);
            let offset = 0.7 * spent_80
                + 0.3 * chord_off
                + 0.65 * (own.spent_80 - spent_80).clamp(-clip, clip)
                + 0.3 * (own.chord_off - chord_off).clamp(-clip, clip)
                + shape.ms(4.5 + off_habit);
            let common = common as f64;
            Mark {
                onset: Some(onset),
                peak: common + (own.peak - common).clamp(-peak_clip, peak_clip) - shape.ms(2.4),
                offset: offset.min(latest),
                told: [true; 3],
            }
        })
        .collect();
    Some(WaveMarks { each, core })
}

struct Own {
    peak: f64,
    chord_on: f64,
    chord_off: f64,
    spent_20: f64,
    spent_80: f64,
}

/// Where the leads together stand highest above the line between the window's ends.
fn common_peak(smoothed: &[Vec<f64>], window: SearchWindow) -> usize {
    let mut power = vec![0.0; window.to - window.from + 1];
    for signal in smoothed {
        for (slot, height) in power.iter_mut().zip(above_line(signal, window.from, window.to)) {
            *slot += height * height;
        }
    }
    let best = (0..power.len()).max_by(|&a, &b| power[a].total_cmp(&power[b])).unwrap_or(0);
    window.from + best.clamp(1, power.len() - 2)
}

/// Begin and end on the spatial velocity: outward from the steepest flanks to near the base. The right
/// flank is the last high one within 110 ms, so that the second hump of a bifid P belongs to it.
fn core(shape: &Shape, velocity: &[f64], window: SearchWindow, peak: usize) -> (usize, usize) {
    let base = |from: usize, to: usize| (from..=to).map(|i| velocity[i]).fold(f64::INFINITY, f64::min);
    let steepest = |from: usize, to: usize| {
        (from..=to).max_by(|&a, &b| velocity[a].total_cmp(&velocity[b])).unwrap_or(from)
    };
    let left = steepest(window.from, peak);
    let low = base(window.from, left);
    let limit = low + 0.2 * (velocity[left] - low);
    let onset = (window.from..=left).rev().find(|&i| velocity[i] <= limit).unwrap_or(window.from);
    let reach = shape.moved(peak, 110.0).min(window.to);
    let highest = velocity[steepest(peak, reach)];
    let right = (peak + 1..reach)
        .rev()
        .find(|&i| {
            velocity[i] >= velocity[i - 1] && velocity[i] >= velocity[i + 1] && velocity[i] >= 0.4 * highest
        })
        .unwrap_or(steepest(peak, reach));
    let low = base(right, window.to);
    let limit = low + 0.35 * (velocity[right] - low);
    let offset = (right..=window.to).find(|&i| velocity[i] <= limit).unwrap_or(window.to);
    (onset, offset.max(onset + 2))
}

/// The position at which a part of the summed absolute slope is spent.
fn spent(signal: &[f64], from: usize, to: usize, part: f64) -> f64 {
    let step = |index: usize| (signal[index + 1] - signal[index]).abs();
    let total: f64 = (from..to).map(step).sum();
    let mut sum = 0.0;
    for index in from..to {
        let next = sum + step(index);
        if next >= part * total {
            let over = if next > sum { (part * total - sum) / (next - sum) } else { 0.0 };
            return index as f64 + over;
        }
        sum = next;
    }
    to as f64
}

/// How much later than the others readers mark onset and offset in a lead, in ms.
fn habit(name: Option<Lead>) -> (f64, f64) {
    match name {
        Some(Lead::I) => (0.0, 2.0),
        Some(Lead::II) => (-4.0, 4.0),
        Some(Lead::III) => (-2.0, 0.0),
        Some(Lead::AVR) => (-2.0, 2.0),
        Some(Lead::AVL) => (6.0, 4.0),
        Some(Lead::AVF) => (-2.0, 2.0),
        Some(Lead::V1) => (-2.0, -6.0),
        Some(Lead::V2) => (0.0, -3.0),
        Some(Lead::V3) => (-2.0, -3.0),
        Some(Lead::V4) => (-2.0, 0.0),
        Some(Lead::V6) => (2.0, 0.0),
        _ => (0.0, 0.0),
    }
}
