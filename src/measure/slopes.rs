//! Smoothing and slopes by Gaussians: a stated width, zero phase, no ringing.

use crate::units::{SampleRate, Seconds};

/// One side of a Gaussian of standard deviation `sigma`, from its middle outward.
fn half_gaussian(rate: SampleRate, sigma: Seconds) -> Vec<f64> {
    let sigma = rate.samples(sigma).max(0.3);
    let reach = (3.0 * sigma).ceil() as usize;
    (0..=reach).map(|step| (-(step as f64 / sigma).powi(2) / 2.0).exp()).collect()
}

/// The slope of the signal behind a Gaussian, in mV/s; exact on a straight line.
pub(super) fn slope(signal: &[f64], rate: SampleRate, sigma: Seconds) -> Vec<f64> {
    let weights = half_gaussian(rate, sigma);
    let norm: f64 =
        weights.iter().enumerate().map(|(step, weight)| 2.0 * (step * step) as f64 * weight).sum::<f64>();
    let weights: Vec<f64> =
        weights.iter().enumerate().map(|(step, weight)| step as f64 * weight * rate.get() / norm).collect();
    folded(signal, &weights, 1, |ahead, behind| ahead - behind)
}

/// The signal behind a Gaussian, every `stride` samples.
pub(super) fn smooth(signal: &[f64], rate: SampleRate, sigma: Seconds, stride: usize) -> Vec<f64> {
    let mut weights = half_gaussian(rate, sigma);
    let norm = weights[0] + 2.0 * weights[1..].iter().sum::<f64>();
    weights.iter_mut().for_each(|weight| *weight /= norm);
    // The middle one is met once, as its own two neighbours.
    weights[0] /= 2.0;
    folded(signal, &weights, stride.max(1), |ahead, behind| ahead + behind)
}

/// For every `stride`-th sample the sum over `weights` of what `pair` makes of the samples that lie so far
/// ahead and behind; outside, the first and last sample are held.
fn folded(signal: &[f64], weights: &[f64], stride: usize, pair: impl Fn(f64, f64) -> f64) -> Vec<f64> {
    let reach = weights.len() - 1;
    let (Some(&first), Some(&last)) = (signal.first(), signal.last()) else { return Vec::new() };
    let mut held = vec![first; reach];
    held.extend_from_slice(signal);
    held.extend(std::iter::repeat_n(last, reach));
    let count = signal.len().div_ceil(stride);
    let mut sums = vec![0.0; count];
    // Weight by weight, so that neighbouring sums are made at once.
    for (step, weight) in weights.iter().enumerate() {
        let (ahead, behind) = (&held[reach + step..], &held[reach - step..]);
        if stride == 1 {
            for ((sum, ahead), behind) in sums.iter_mut().zip(ahead).zip(behind) {
                *sum += weight * pair(*ahead, *behind);
            }
        } else {
            let (ahead, behind) = (ahead.iter().step_by(stride), behind.iter().step_by(stride));
            for ((sum, ahead), behind) in sums.iter_mut().zip(ahead).zip(behind) {
                *sum += weight * pair(*ahead, *behind);
            }
        }
    }
    sums
}

/// The spatial velocity of several slopes, scaled to twelve leads: √(12/n · Σ slope²), in mV/s.
pub(super) fn spatial(slopes: &[Vec<f64>]) -> Vec<f64> {
    let scale = 12.0 / slopes.len().max(1) as f64;
    let length = slopes.first().map_or(0, Vec::len);
    (0..length)
        .map(|index| (scale * slopes.iter().map(|slope| slope[index] * slope[index]).sum::<f64>()).sqrt())
        .collect()
}

/// What stands above the straight line from `from` to `to`, for those samples.
pub(super) fn above_line(signal: &[f64], from: usize, to: usize) -> Vec<f64> {
    let (first, last) = (signal[from], signal[to]);
    let width = (to - from).max(1) as f64;
    (from..=to).map(|index| signal[index] - first - (last - first) * (index - from) as f64 / width).collect()
}

/// The index that lies farthest from the straight line between `from` and `to`, on the side away from
/// the peak: the corner of a wave (triangle method, Rosin 2001).
pub(super) fn corner(signal: &[f64], from: usize, to: usize, upright: bool) -> usize {
    let sign = if upright { -1.0 } else { 1.0 };
    let heights = above_line(signal, from, to);
    let mut best = (from, f64::NEG_INFINITY);
    for (step, height) in heights.into_iter().enumerate() {
        if sign * height > best.1 {
            best = (from + step, sign * height);
        }
    }
    best.0
}
