//! Amplitudes of one lead on the representative beat.

use super::Amplitudes;
use super::shape::{Mark, Shape};
use super::slopes::above_line;
use crate::units::Millivolts;

/// A deflection smaller than this is none (IEC 60601-2-25 annex FF.5: experts see waves from 20 µV).
const SMALLEST: f64 = 0.020;

/// Q, R, S, R′, J against the level at QRS onset; P and T against the line between their ends.
pub(super) fn of_lead(
    signal: &[f64],
    shape: &Shape,
    p: Option<&Mark>,
    qrs: &Mark,
    t: Option<&Mark>,
) -> Amplitudes {
    let last = signal.len() - 1;
    let index = |position: f64| (position.round().max(0.0) as usize).min(last);
    let (onset, offset) = (index(qrs.onset.unwrap_or(qrs.peak)), index(qrs.offset));
    let level = mean(&signal[onset.saturating_sub(shape.steps(6.0))..=onset]);
    let mut amplitudes = Amplitudes {
        p: p.and_then(|p| wave(signal, index(p.onset.unwrap_or(p.peak)), index(p.offset))),
        t: t.and_then(|t| {
            let from = index(t.peak - (t.offset - t.peak) * 1.5).max(offset);
            wave(signal, from, index(t.offset))
        }),
        j: Millivolts::new(signal[offset] - level),
        ..Amplitudes::default()
    };
    for (height, _) in deflections(signal, onset, offset, level) {
        let value = Millivolts::new(height);
        let slots = &mut amplitudes;
        if height > 0.0 {
            if slots.r.is_none() {
                slots.r = value;
            } else if slots.r_prime.is_none() {
                slots.r_prime = value;
            }
        } else if slots.r.is_none() {
            slots.q = value;
        } else if slots.s.is_none() {
            slots.s = value;
        }
    }
    amplitudes
}

fn mean(values: &[f64]) -> f64 {
    values.iter().sum::<f64>() / values.len().max(1) as f64
}

/// The extreme of each run on one side of the level that is large enough, in order.
fn deflections(signal: &[f64], onset: usize, offset: usize, level: f64) -> Vec<(f64, usize)> {
    let mut found: Vec<(f64, usize)> = Vec::new();
    for (index, value) in signal.iter().enumerate().take(offset + 1).skip(onset) {
        let height = value - level;
        if height.abs() < SMALLEST {
            continue;
        }
        match found.last_mut() {
            Some((extreme, place)) if (*extreme > 0.0) == (height > 0.0) => {
                if height.abs() > extreme.abs() {
                    (*extreme, *place) = (height, index);
                }
            }
            _ => found.push((height, index)),
        }
    }
    found
}

/// The largest deflection over the line between both ends.
fn wave(signal: &[f64], from: usize, to: usize) -> Option<Millivolts> {
    if to <= from + 2 {
        return None;
    }
    let heights = above_line(signal, from, to);
    let extreme = heights.into_iter().max_by(|a, b| a.abs().total_cmp(&b.abs()))?;
    if extreme.abs() < SMALLEST { None } else { Millivolts::new(extreme) }
}
