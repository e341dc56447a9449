//! What a beat shows without a P: the T wave as a smooth random curve.
//!
//! The curve is a Gaussian process. In time it has a slow and a quick part; over the leads it moves mostly in the
//! directions in which this patient's own ST-T moves, so that a deflection in another direction stands out even
//! where T is steep. Time and leads are turned so that every component is independent; a P is then sought by
//! ordinary weighted sums.

use super::linear::eigen;
use super::window::{Curves, Window};

/// Standard deviations and scales of what is not a P.
#[derive(Clone, Copy, Debug)]
pub(super) struct Smoothness {
    /// Of the slow part, in mV.
    pub slow: f64,
    /// Its time scale, in ms.
    pub slow_scale: f64,
    /// Of the quick part, in mV.
    pub quick: f64,
    /// Its time scale, in ms.
    pub quick_scale: f64,
    /// What no lead's own direction explains, as a variance against the mean one of the leads.
    pub sideways: f64,
    /// Noise of one grid value, in mV at a step of 4 ms.
    pub noise: f64,
    /// Where the beat is steep little is believed: the noise grows by the slope times this, in ms.
    pub jitter: f64,
}

/// Level and tilt of the baseline are left free: standard deviations in mV, the tilt's from the middle
/// to one standard deviation of the times.
const LEVEL: f64 = 0.3;
const TILT: f64 = 0.15;

/// A window turned into independent components.
pub(super) struct Background {
    /// Per time, its weight times its row of the turning matrix.
    turned_times: Vec<Vec<f64>>,
    /// Per component over the leads, the leads' shares.
    pub modes: Vec<Vec<f64>>,
    /// Per component in time, per mode: one over the variance.
    pub precision: Vec<Vec<f64>>,
    /// Half the sum of the logarithms of all variances.
    spread: f64,
    count: usize,
}

impl Background {
    /// `shape` is the window whose values tell the directions of ST-T.
    pub fn of(window: &Window, curves: &Curves, shape: &Window, smoothness: &Smoothness) -> Self {
        let count = window.times.len();
        let floor = smoothness.noise * (4.0 / window.step).sqrt();
        let weights: Vec<f64> = window
            .times
            .iter()
            .map(|time| 1.0 / floor.hypot(smoothness.jitter * curves.slope_at(*time)))
            .collect();
        let (values, vectors) = eigen(&kernel(&window.times, &weights, smoothness), count);
        let turned_times = (0..count)
            .map(|time| {
                (0..count).map(|component| vectors[component * count + time] * weights[time]).collect()
            })
            .collect();
        let leads = curves.leads.len();
        let (mode_values, mode_vectors) = eigen(&directions(shape, leads, smoothness.sideways), leads);
        let precision: Vec<Vec<f64>> = values
            .iter()
            .map(|value| {
                mode_values.iter().map(|mode| 1.0 / (mode.max(0.0) * value.max(0.0) + 1.0)).collect()
            })
            .collect();
        let spread = -0.5 * precision.iter().flatten().map(|precision: &f64| precision.ln()).sum::<f64>();
        Self {
            turned_times,
            modes: mode_vectors.chunks_exact(leads).map(<[f64]>::to_vec).collect(),
            precision,
            spread,
            count,
        }
    }

    /// A curve in time, given for a run of the grid from `first` on, in components.
    pub fn turned(&self, first: usize, run: impl Iterator<Item = f64>) -> Vec<f64> {
        let mut components = vec![0.0; self.count];
        for (value, turned) in run.zip(&self.turned_times[first.min(self.count)..]) {
            for (slot, factor) in components.iter_mut().zip(turned) {
                *slot += value * factor;
            }
        }
        components
    }

    /// Values of all leads in components: per component in time, per mode.
    pub fn turned_values(&self, values: &[Vec<f64>]) -> Vec<Vec<f64>> {
        let modes = self.modes.len();
        let mut components = vec![vec![0.0; modes]; self.count];
        for (leads, turned) in values.iter().zip(&self.turned_times) {
            let in_modes: Vec<f64> = self.modes.iter().map(|mode| super::linear::dot(mode, leads)).collect();
            for (slots, factor) in components.iter_mut().zip(turned) {
                for (slot, value) in slots.iter_mut().zip(&in_modes) {
                    *slot += factor * value;
                }
            }
        }
        components
    }

    /// The log likelihood of components, but for a constant of the window.
    pub fn log_likelihood(&self, components: &[Vec<f64>]) -> f64 {
        let squares: f64 = components
            .iter()
            .flatten()
            .zip(self.precision.iter().flatten())
            .map(|(value, precision)| value * value * precision)
            .sum();
        -0.5 * squares - self.spread
    }
}

/// The covariance in time over the noise.
fn kernel(times: &[f64], weights: &[f64], smoothness: &Smoothness) -> Vec<f64> {
    let count = times.len() as f64;
    let middle = times.iter().sum::<f64>() / count;
    let variance = (times.iter().map(|time| (time - middle).powi(2)).sum::<f64>() / count).max(1.0);
    let bell = |difference: f64, height: f64, scale: f64| {
        height * height * (-0.5 * (difference / scale).powi(2)).exp()
    };
    let mut kernel = Vec::with_capacity(times.len() * times.len());
    for (time, weight) in times.iter().zip(weights) {
        for (other, other_weight) in times.iter().zip(weights) {
            let covariance = bell(time - other, smoothness.slow, smoothness.slow_scale)
                + bell(time - other, smoothness.quick, smoothness.quick_scale)
                + LEVEL * LEVEL
                + TILT * TILT * (time - middle) * (other - middle) / variance;
            kernel.push(covariance * weight * other_weight);
        }
    }
    kernel
}

/// The leads' second moments about their means, scaled to a mean variance of 1, and a little in every direction.
fn directions(shape: &Window, leads: usize, sideways: f64) -> Vec<f64> {
    let count = shape.values.len().max(1) as f64;
    let means: Vec<f64> =
        (0..leads).map(|lead| shape.values.iter().map(|values| values[lead]).sum::<f64>() / count).collect();
    let mut moments = vec![0.0; leads * leads];
    for values in &shape.values {
        for row in 0..leads {
            for column in 0..leads {
                moments[row * leads + column] +=
                    (values[row] - means[row]) * (values[column] - means[column]);
            }
        }
    }
    let trace: f64 = (0..leads).map(|lead| moments[lead * leads + lead]).sum();
    let scale = if trace > 0.0 { leads as f64 / trace } else { 0.0 };
    for (at, moment) in moments.iter_mut().enumerate() {
        *moment = *moment * scale + if at / leads == at % leads { sideways } else { 0.0 };
    }
    moments
}
