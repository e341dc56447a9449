//! QRS detection on the spatial velocity.

use super::Channels;
use crate::condition::{self, FilterChain};
use crate::units::{Hertz, SampleRate, Seconds};

/// The band in which a QRS stands out (own choice after a trial; 8–25 Hz leaves P and T behind).
const BAND: FilterChain =
    FilterChain { low_cut: Some(Hertz::literal(8.0)), high_cut: Some(Hertz::literal(25.0)), mains: None };
const SMOOTHING: Seconds = Seconds::literal(0.082);
const REFRACTORY: Seconds = Seconds::literal(0.250);
/// Half the neighbourhood whose strongest peaks set the threshold.
const NEIGHBOURHOOD: Seconds = Seconds::literal(8.0);

const FORERUNNER: Seconds = Seconds::literal(0.280);
const FORERUNNER_STRENGTH: f64 = 0.6;

/// A first fiducial for each QRS, ascending.
pub(super) fn qrs(channels: &Channels, rate: SampleRate) -> Vec<usize> {
    let envelope = envelope(channels, rate);
    let candidates = candidates(&envelope, rate.count(REFRACTORY).max(1));
    let floor = 1.5 * median(&mut envelope.iter().copied().step_by(4).collect::<Vec<_>>());
    let reach = rate.count(NEIGHBOURHOOD);
    let mut first = 0;
    let mut last = 0;
    let mut found = Vec::new();
    for &peak in &candidates {
        while candidates[first] + reach < peak {
            first += 1;
        }
        while last < candidates.len() && candidates[last] <= peak + reach {
            last += 1;
        }
        let neighbours = &candidates[first..last];
        let mut heights: Vec<f64> = neighbours.iter().map(|&index| envelope[index]).collect();
        heights.sort_by(|a, b| b.total_cmp(a));
        let span = rate.duration((2 * reach).min(envelope.len())).get();
        let strongest = heights.len().min(3.max((span / 2.0) as usize));
        let typical = median(&mut heights[..strongest]);
        if envelope[peak] > (0.3 * typical).max(floor) {
            found.push(peak);
        }
    }
    without_forerunners(&found, &envelope, rate)
}

/// Leaves out what stands shortly before a much stronger complex: an atrial pacing spike or a P that
/// passed the threshold. No ventricle is activated twice so soon with so different a strength.
fn without_forerunners(found: &[usize], envelope: &[f64], rate: SampleRate) -> Vec<usize> {
    let near = rate.count(FORERUNNER);
    let runs_before = |pair: &[usize]| {
        pair[1] - pair[0] < near && envelope[pair[0]] < FORERUNNER_STRENGTH * envelope[pair[1]]
    };
    let dropped = found.windows(2).map(runs_before).chain(std::iter::once(false));
    found.iter().zip(dropped).filter(|(_, dropped)| !dropped).map(|(&peak, _)| peak).collect()
}

/// The spatial velocity in the band, in mV/s, smoothed.
fn envelope(channels: &Channels, rate: SampleRate) -> Vec<f64> {
    let length = channels.len();
    let mut squares = vec![0.0; length];
    for signal in &channels.signals {
        let mut band = signal.clone();
        // At the lowest rates that are read, 100/s, both corners can be realised.
        if condition::run(BAND, rate, &mut band).is_err() {
            band.clone_from(signal);
        }
        for index in 1..length.saturating_sub(1) {
            let slope = (band[index + 1] - band[index - 1]) * rate.get() / 2.0;
            squares[index] += slope * slope;
        }
    }
    for value in &mut squares {
        *value = value.sqrt();
    }
    for gap in channels.gaps.iter() {
        squares[gap.start..gap.end].fill(0.0);
    }
    moving_mean(&squares, rate.count(SMOOTHING) / 2)
}

fn moving_mean(values: &[f64], half: usize) -> Vec<f64> {
    let mut sums = Vec::with_capacity(values.len() + 1);
    sums.push(0.0);
    let mut sum = 0.0;
    for value in values {
        sum += value;
        sums.push(sum);
    }
    (0..values.len())
        .map(|index| {
            let (start, end) = (index.saturating_sub(half), (index + half + 1).min(values.len()));
            (sums[end] - sums[start]) / (end - start) as f64
        })
        .collect()
}

/// Local maxima, the strongest first, none within `apart` of a stronger one; ascending.
fn candidates(envelope: &[f64], apart: usize) -> Vec<usize> {
    let mut peaks: Vec<usize> = (1..envelope.len().saturating_sub(1))
        .filter(|&index| envelope[index] >= envelope[index - 1] && envelope[index] > envelope[index + 1])
        .collect();
    peaks.sort_by(|&a, &b| envelope[b].total_cmp(&envelope[a]).then(a.cmp(&b)));
    let mut taken = std::collections::BTreeSet::new();
    for peak in peaks {
        let near = taken.range(peak.saturating_sub(apart)..=peak + apart).next();
        if near.is_none() {
            taken.insert(peak);
        }
    }
    taken.into_iter().collect()
}

/// The median, reordering the values; 0 for none.
pub fn median(values: &mut [f64]) -> f64 {
    if values.is_empty() {
        return 0.0;
    }
    let middle = values.len() / 2;
    let odd = values.len() % 2 == 1;
    let (below, &mut upper, _) = values.select_nth_unstable_by(middle, f64::total_cmp);
    if odd {
        return upper;
    }
    let lower = below.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    (lower + upper) / 2.0
}
