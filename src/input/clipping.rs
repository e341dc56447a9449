//! Where a converter stood at its limit.
//!
//! Clipped is (own rules, no published source):
//! - every sample at a limit that the source states for its converter or its storage;
//! - a run of one value at the signal's own minimum or maximum, at least 12 ms and 4 samples long, that is
//!   both entered and left by a jump of at least 2 % of the signal's range and 4 of its smallest steps. The
//!   crest of a wave, also of a coarsely stored one, is reached by ever smaller steps, so it is not taken.
//!   Where there is one such run, every sample of that value is clipped.

use crate::recording::Samples;
use crate::units::{Seconds, Span, Spans};

const SHORTEST_RUN: Seconds = Seconds::literal(0.012);
const FEWEST_SAMPLES: usize = 4;
const JUMP_OF_RANGE: f64 = 0.02;
const JUMP_OF_STEPS: f64 = 4.0;

/// The same samples with what is clipped marked. `limits` are the two values at the ends of the
/// converter's range, in any order.
pub(super) fn marked(samples: Samples, limits: [f64; 2]) -> Samples {
    let Some((lowest, highest)) = samples.extremes() else { return samples };
    if lowest == highest {
        return samples;
    }
    let [low, high] = [limits[0].min(limits[1]), limits[0].max(limits[1])];
    let mut spans = Spans::none();
    for (extreme, at_limit) in [(lowest, lowest <= low), (highest, highest >= high)] {
        let runs = runs_of(&samples, extreme);
        if at_limit || is_rail(&samples, &runs, highest - lowest) {
            spans = spans.union(&runs);
        }
    }
    samples.with_saturated(spans)
}

/// Where the samples have one value.
fn runs_of(samples: &Samples, value: f64) -> Spans {
    let mut spans = Vec::new();
    for (first, values) in samples.runs() {
        let within = Spans::of_true(values.iter().map(|own| *own == value));
        spans.extend(within.iter().map(|run| Span { start: first + run.start, end: first + run.end }));
    }
    Spans::from_unordered(spans)
}

/// Whether any of the runs is long and has corners, so that its value is a limit of some converter.
fn is_rail(samples: &Samples, runs: &Spans, range: f64) -> bool {
    let shortest = (samples.rate().samples(SHORTEST_RUN).ceil() as usize).max(FEWEST_SAMPLES);
    let mut long = runs.iter().filter(|run| run.len() >= shortest).peekable();
    if long.peek().is_none() {
        return false;
    }
    let least = (JUMP_OF_RANGE * range).max(JUMP_OF_STEPS * smallest_step(samples));
    long.any(|run| smaller_jump(samples, run) >= least)
}

/// The smaller of the jumps into and out of a run; 0 where it stands at an end or beside a gap.
fn smaller_jump(samples: &Samples, run: Span) -> f64 {
    let before = run.start.checked_sub(1).and_then(|index| samples.at(index));
    match (before, samples.at(run.start), samples.at(run.end)) {
        (Some(before), Some(level), Some(after)) => (before - level).abs().min((after - level).abs()),
        _ => 0.0,
    }
}

/// The smallest change from one sample to the next; infinite when nothing changes.
fn smallest_step(samples: &Samples) -> f64 {
    let steps = samples.runs().flat_map(|(_, run)| run.windows(2)).map(|pair| (pair[1] - pair[0]).abs());
    steps.filter(|step| *step > 0.0).fold(f64::INFINITY, f64::min)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::units::SampleRate;

    fn clipped(values: Vec<f64>, limits: [f64; 2]) -> Vec<Span> {
        let rate = SampleRate::new(500.0).expect("a rate");
        marked(Samples::new(rate, values, Spans::none()), limits).saturated().iter().collect()
    }

    /// One beat-like swing in steps of 5 µV, cut at `ceiling`.
    fn swing(ceiling: f64) -> Vec<f64> {
        let wave = (0..500).map(|index| (f64::from(index) / 10.0).sin() * 1.5);
        wave.map(|value| ((value * 200.0).round() / 200.0).min(ceiling)).collect()
    }

    #[test]
    fn a_flat_top_with_corners_is_clipped_and_a_crest_is_not() {
        assert_eq!(clipped(swing(2.0), [-10.0, 10.0]), []);
        let cut = clipped(swing(0.9), [-10.0, 10.0]);
        assert_eq!(cut.len(), 8, "one for each crest");
        // Source: computed, 10 (π − 2 asin 0.6) = 18.5 samples.
        assert!(cut.iter().all(|span| (18..=20).contains(&span.len())), "{cut:?}");
    }

    #[test]
    fn a_single_sample_at_the_stated_limit_is_clipped() {
        assert_eq!(clipped(vec![0.0, 0.5, 1.0, 0.5, 0.0], [1.0, -1.0]), [Span { start: 2, end: 3 }]);
    }

    #[test]
    fn a_flat_signal_is_flat_and_not_clipped() {
        assert_eq!(clipped(vec![1.0; 100], [1.0, -1.0]), []);
    }
}
