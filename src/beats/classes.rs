//! Beats of like shape.

use super::{Channels, ClassId};
use crate::condition::{self, FilterChain};
use crate::units::{Hertz, SampleRate, Seconds};

/// Shape without baseline and without muscle noise.
const BAND: FilterChain =
    FilterChain { low_cut: Some(Hertz::literal(2.0)), high_cut: Some(Hertz::literal(40.0)), mains: None };
const BEFORE: Seconds = Seconds::literal(0.060);
const AFTER: Seconds = Seconds::literal(0.100);
const LAG: Seconds = Seconds::literal(0.030);
/// Correlation over all leads together from which a beat joins a class (own choice after a trial).
const JOINS: f64 = 0.90;
/// Classes that a beat is compared with at most, the largest first.
const COMPARED: usize = 12;

/// A class while it grows: the sum of its members' windows.
struct Growing {
    sum: Vec<f64>,
    members: Vec<usize>,
}

/// Refined fiducials with their classes, in order; class 0 is the largest.
pub(super) fn sort(channels: &Channels, rate: SampleRate, detected: &[usize]) -> Vec<(usize, ClassId)> {
    let signals: Vec<Vec<f64>> = channels
        .signals
        .iter()
        .map(|signal| {
            let mut band = signal.clone();
            // 40 Hz is below the limit at every rate that is read.
            if condition::run(BAND, rate, &mut band).is_err() {
                band.clone_from(signal);
            }
            band
        })
        .collect();
    let window = Window {
        signals: &signals,
        before: rate.count(BEFORE),
        after: rate.count(AFTER),
        // The shape is sampled every 4 ms, the lag at the recording's own rate.
        stride: rate.count(Seconds::literal(0.004)).max(1),
    };
    let lag = rate.count(LAG) as isize;
    let mut fiducials = detected.to_vec();
    let mut class_of = vec![usize::MAX; detected.len()];
    let mut classes: Vec<Growing> = Vec::new();
    for pass in 0..2 {
        let templates: Vec<Growing> = std::mem::take(&mut classes);
        // The second pass starts from the shapes of the first, so that the order of beats matters less.
        let mut shapes: Vec<Vec<f64>> = templates.into_iter().map(|class| class.sum).collect();
        let mut members: Vec<Vec<usize>> = vec![Vec::new(); shapes.len()];
        for beat in 0..fiducials.len() {
            let mut order: Vec<usize> = (0..shapes.len()).collect();
            if shapes.len() > COMPARED {
                order.sort_by_key(|&class| std::cmp::Reverse(members[class].len()));
                order.truncate(COMPARED);
            }
            let best = order
                .into_iter()
                .map(|class| {
                    let (shift, r) = window.best_lag(&shapes[class], fiducials[beat], lag);
                    (class, shift, r)
                })
                .max_by(|a, b| a.2.total_cmp(&b.2));
            match best {
                Some((class, shift, r)) if r >= JOINS => {
                    fiducials[beat] = fiducials[beat].saturating_add_signed(shift);
                    if pass == 0 {
                        window.add(&mut shapes[class], fiducials[beat]);
                    }
                    members[class].push(beat);
                    class_of[beat] = class;
                }
                _ => {
                    shapes.push(window.cut(fiducials[beat]));
                    members.push(vec![beat]);
                    class_of[beat] = shapes.len() - 1;
                }
            }
        }
        classes = shapes.into_iter().zip(members).map(|(sum, members)| Growing { sum, members }).collect();
    }
    let mut order: Vec<usize> =
        (0..classes.len()).filter(|&class| !classes[class].members.is_empty()).collect();
    order.sort_by_key(|&class| (std::cmp::Reverse(classes[class].members.len()), classes[class].members[0]));
    let mut rank = vec![0; classes.len()];
    for (position, &class) in order.iter().enumerate() {
        rank[class] = position;
    }
    let mut sorted: Vec<(usize, ClassId)> = fiducials
        .into_iter()
        .zip(class_of)
        .map(|(fiducial, class)| (fiducial, ClassId(rank[class])))
        .collect();
    sorted.sort_by_key(|(fiducial, _)| *fiducial);
    let apart = rate.count(Seconds::literal(0.200));
    sorted.dedup_by(|next, kept| next.0 < kept.0 + apart);
    sorted
}

struct Window<'a> {
    signals: &'a [Vec<f64>],
    before: usize,
    after: usize,
    stride: usize,
}

impl Window<'_> {
    /// The window of all signals around a fiducial, one after the other; 0 outside the recording.
    fn cut(&self, fiducial: usize) -> Vec<f64> {
        let mut cut = Vec::new();
        self.visit(fiducial as isize, |value| cut.push(value));
        cut
    }

    fn add(&self, sum: &mut [f64], fiducial: usize) {
        let mut slots = sum.iter_mut();
        self.visit(fiducial as isize, |value| {
            if let Some(slot) = slots.next() {
                *slot += value;
            }
        });
    }

    fn visit(&self, fiducial: isize, mut see: impl FnMut(f64)) {
        let start = fiducial - self.before as isize;
        let count = (self.before + self.after) / self.stride;
        for signal in self.signals {
            let inside = usize::try_from(start)
                .ok()
                .and_then(|start| signal.get(start..start + (count * self.stride).max(1)));
            if let Some(inside) = inside {
                inside.iter().step_by(self.stride).take(count).for_each(|value| see(*value));
                continue;
            }
            for step in 0..count {
                let index = start + (step * self.stride) as isize;
                see(usize::try_from(index).ok().and_then(|index| signal.get(index)).copied().unwrap_or(0.0));
            }
        }
    }

    /// The shift of the fiducial that correlates best with `shape`, and the correlation.
    fn best_lag(&self, shape: &[f64], fiducial: usize, lag: isize) -> (isize, f64) {
        let energy: f64 = shape.iter().map(|value| value * value).sum();
        let mut best = (0, -1.0);
        // Coarse, then fine around the best.
        let coarse = (self.stride as isize).max(1);
        let try_lag = |shift: isize, best: &mut (isize, f64)| {
            let (mut dot, mut own) = (0.0, 0.0);
            let mut slots = shape.iter();
            self.visit(fiducial as isize + shift, |value| {
                dot += value * slots.next().copied().unwrap_or(0.0);
                own += value * value;
            });
            let r = if energy > 0.0 && own > 0.0 { dot / (energy * own).sqrt() } else { 0.0 };
            if r > best.1 {
                *best = (shift, r);
            }
        };
        let mut shift = -lag;
        while shift <= lag {
            try_lag(shift, &mut best);
            shift += coarse;
        }
        let middle = best.0;
        for shift in middle - coarse + 1..middle + coarse {
            if shift != middle {
                try_lag(shift, &mut best);
            }
        }
        best
    }
}
