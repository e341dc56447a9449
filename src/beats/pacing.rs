//! Pacing spikes: needed before anything else, since a spike is steeper than any QRS.
//!
//! Own design: an excursion of a few milliseconds that comes back, in at least four places.

use super::Channels;
use crate::units::{SampleRate, Seconds};

/// Least mean step of the four strongest leads, per 2 ms.
const STEP: f64 = 0.12;
/// Least mean step of a spike that counts.
const CERTAIN: f64 = 0.2;
/// Fewest certain spikes in a recording with a pacemaker.
const FEWEST: usize = 4;

/// The samples of all pacing spikes, ascending; empty when the recording shows no pacing.
pub(super) fn spikes(channels: &Channels) -> Vec<usize> {
    let rate = channels.rate;
    // Below 250/s a spike can't be told from a steep QRS.
    if rate.get() < 250.0 || channels.is_empty() {
        return Vec::new();
    }
    let length = channels.len();
    let stride = rate.count(Seconds::literal(0.002)).max(1);
    let samples = |ms: f64| rate.count(Seconds::literal(ms / 1000.0));
    let step = |index: usize| -> f64 {
        let mut steps: Vec<f64> =
            channels.signals.iter().map(|signal| (signal[index] - signal[index - stride]).abs()).collect();
        strongest_rms(&mut steps)
    };
    let steps: Vec<f64> = (0..length)
        .map(|index| if index < stride { 0.0 } else { quick(channels, index, stride, step) })
        .collect();
    let mut found = Vec::new();
    let mut index = samples(24.0).max(stride);
    while index + samples(16.0) < length {
        let here = steps[index];
        let around = &steps[index - samples(6.0)..=index + samples(6.0)];
        let before = &steps[index - samples(20.0)..index - samples(8.0)];
        let mean_before = before.iter().sum::<f64>() / before.len().max(1) as f64;
        let sharp = here > STEP && around.iter().all(|&other| other <= here) && mean_before < 0.2 * here;
        if sharp && comes_back(channels, index, samples(8.0), samples(12.0)) {
            found.push((index, here));
            index += samples(16.0);
        }
        index += 1;
    }
    if found.iter().filter(|(_, step)| *step > CERTAIN).count() < FEWEST {
        return Vec::new();
    }
    found.into_iter().map(|(index, _)| index).collect()
}

/// Skips the sorting where no lead has a step worth it.
fn quick(channels: &Channels, index: usize, stride: usize, step: impl Fn(usize) -> f64) -> f64 {
    let steep = channels.signals.iter().any(|signal| (signal[index] - signal[index - stride]).abs() > 0.1);
    if steep { step(index) } else { 0.0 }
}

/// Root mean square of the four largest.
fn strongest_rms(steps: &mut [f64]) -> f64 {
    steps.sort_by(|a, b| b.total_cmp(a));
    let strongest = &steps[..steps.len().min(4)];
    (strongest.iter().map(|step| step * step).sum::<f64>() / strongest.len().max(1) as f64).sqrt()
}

/// Whether the excursion at `index` has mostly gone after `later` samples.
fn comes_back(channels: &Channels, index: usize, earlier: usize, later: usize) -> bool {
    let mut excursions: Vec<(f64, f64)> = channels
        .signals
        .iter()
        .map(|signal| {
            let level = signal[index - earlier];
            let window = &signal[index - earlier..=index + later];
            let excursion = window.iter().map(|value| (value - level).abs()).fold(0.0, f64::max);
            (excursion, (signal[index + later] - level).abs())
        })
        .collect();
    excursions.sort_by(|a, b| b.0.total_cmp(&a.0));
    let strongest = &excursions[..excursions.len().min(4)];
    let (excursion, net) = strongest.iter().fold((0.0, 0.0), |sum, pair| (sum.0 + pair.0, sum.1 + pair.1));
    net < 0.45 * excursion
}

/// Whether a spike stands from 160 ms before to 30 ms after a fiducial.
pub(super) fn leads_into(spikes: &[usize], fiducial: usize, rate: SampleRate) -> bool {
    let from = fiducial.saturating_sub(rate.count(Seconds::literal(0.160)));
    let to = fiducial + rate.count(Seconds::literal(0.030));
    spikes.iter().any(|&spike| (from..=to).contains(&spike))
}
