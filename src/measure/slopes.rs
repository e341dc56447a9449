//! Smoothing and slopes by Gaussians: a stated width, zero phase, no ringing.

use crate::units::{SampleRate, Seconds};

/// One side of a Gaussian of standard deviation `sigma`, from its middle outward.
fn half_gaussian(rate: SampleRate, sigma: Seconds) -> Vec<f64> {
    let sigma = rate.samples(sigma).max(0.3);
    let reach = (3.0 * sigma).ceil() as usize;
    (0..=reach).map(|step| (-(step as f64 / sigma).powi(2) / 2.0).exp()).collect()
}

fn clamped(signal: &[f64], index: isize) -> f64 {
    signal[index.clamp(0, signal.len() as isize - 1) as usize]
}

/// The slope of the signal behind a Gaussian, in mV/s; exact on a straight line.
pub(super) fn slope(signal: &[f64], rate: SampleRate, sigma: Seconds) -> Vec<f64> {
    let weights = half_gaussian(rate, sigma);
    let norm: f64 =
        weights.iter().enumerate().map(|(step, weight)| 2.0 * (step * step) as f64 * weight).sum::<f64>();
    let reach = weights.len() - 1;
    let at = |index: usize| -> f64 {
        let mut sum = 0.0;
        if index >= reach && index + reach < signal.len() {
            for (step, weight) in weights.iter().enumerate().skip(1) {
                sum += step as f64 * weight * (signal[index + step] - signal[index - step]);
            }
        } else {
            for (step, weight) in weights.iter().enumerate().skip(1) {
                let (ahead, behind) = (index as isize + step as isize, index as isize - step as isize);
                sum += step as f64 * weight * (clamped(signal, ahead) - clamped(signal, behind));
            }
        }
        sum / norm * rate.get()
    };
    (0..signal.len()).map(at).collect()
}

/// The signal behind a Gaussian, every `stride` samples.
pub(super) fn smooth(signal: &[f64], rate: SampleRate, sigma: Seconds, stride: usize) -> Vec<f64> {
    let weights = half_gaussian(rate, sigma);
    let norm = weights[0] + 2.0 * weights[1..].iter().sum::<f64>();
    let reach = weights.len() - 1;
    (0..signal.len())
        .step_by(stride.max(1))
        .map(|index| {
            let mut sum = weights[0] * signal[index];
            if index >= reach && index + reach < signal.len() {
                for (step, weight) in weights.iter().enumerate().skip(1) {
                    sum += weight * (signal[index + step] + signal[index - step]);
                }
            } else {
                for (step, weight) in weights.iter().enumerate().skip(1) {
                    let (ahead, behind) = (index as isize + step as isize, index as isize - step as isize);
                    sum += weight * (clamped(signal, ahead) + clamped(signal, behind));
                }
            }
            sum / norm
        })
        .collect()
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
