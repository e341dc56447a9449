//! The stretch of the representative beat that is searched, on an even grid of times from QRS onset.

use super::linear::dot;
use crate::average::RepresentativeBeat;
use crate::recording::Lead;

/// Step of the grid, in ms; longer where the stretch would need more than [`MOST`] steps.
const STEP: f64 = 4.0;
const MOST: usize = 80;
/// Smoothing before the grid is read, standard deviation in ms.
const SMOOTHING: f64 = 1.5;

/// The independent leads of a beat, smoothed, to be read at any time from QRS onset.
pub(super) struct Curves {
    pub leads: Vec<Lead>,
    signals: Vec<Vec<f64>>,
    /// Root mean square over the leads of the slope, in mV/ms.
    slope: Vec<f64>,
    /// Index of QRS onset, with its fraction.
    onset: f64,
    per_ms: f64,
    /// Last time that any beat gives.
    pub end: f64,
}

/// One value per lead for each time of a grid.
#[derive(Clone)]
pub(super) struct Window {
    /// In ms from QRS onset.
    pub times: Vec<f64>,
    /// Per time, the leads in the order of [`Curves::leads`], in mV.
    pub values: Vec<Vec<f64>>,
    pub step: f64,
}

impl Curves {
    /// `onset` in ms from the fiducial.
    pub fn of(beat: &RepresentativeBeat, onset: f64) -> Self {
        let per_ms = beat.rate.get() / 1000.0;
        let leads: Vec<Lead> =
            Lead::INDEPENDENT.into_iter().filter(|lead| beat.lead(*lead).is_some()).collect();
        let signals: Vec<Vec<f64>> = leads
            .iter()
            .filter_map(|lead| beat.lead(*lead))
            .map(|signal| smooth(signal, SMOOTHING * per_ms))
            .collect();
        let length = signals.first().map_or(0, Vec::len);
        let mut slope = vec![0.0; length];
        for signal in &signals {
            for index in 1..length.saturating_sub(1) {
                slope[index] += ((signal[index + 1] - signal[index - 1]) / 2.0 * per_ms).powi(2);
            }
        }
        for value in &mut slope {
            *value = (*value / signals.len().max(1) as f64).sqrt();
        }
        let onset = beat.fiducial.0 as f64 + onset * per_ms;
        let end = (beat.valid.end as f64 - 2.0 - onset) / per_ms;
        Self { leads, signals, slope, onset, per_ms, end }
    }

    /// All leads at a time.
    pub fn at(&self, time: f64) -> Vec<f64> {
        self.signals.iter().map(|signal| self.read(signal, time)).collect()
    }

    /// The slope at a time, over all leads.
    pub fn slope_at(&self, time: f64) -> f64 {
        self.read(&self.slope, time)
    }

    fn read(&self, signal: &[f64], time: f64) -> f64 {
        let last = signal.len().saturating_sub(2);
        let position = (self.onset + time * self.per_ms).clamp(0.0, last as f64);
        let (index, part) = (position.floor() as usize, position.fract());
        let value = |index: usize| signal.get(index).copied().unwrap_or(0.0);
        value(index) * (1.0 - part) + value(index + 1) * part
    }

    /// The stretch from one time to another.
    pub fn window(&self, from: f64, to: f64) -> Window {
        let to = to.min(self.end);
        let step = STEP.max((to - from) / MOST as f64);
        let count = (((to - from) / step).floor().max(0.0) as usize) + 1;
        let times: Vec<f64> = (0..count).map(|index| from + index as f64 * step).collect();
        let values = times.iter().map(|time| self.at(*time)).collect();
        Window { times, values, step }
    }
}

/// Gaussian smoothing with a standard deviation in samples.
fn smooth(signal: &[f64], deviation: f64) -> Vec<f64> {
    let reach = (3.0 * deviation).ceil().max(1.0) as usize;
    let mut kernel: Vec<f64> = (0..=2 * reach)
        .map(|index| (-0.5 * ((index as f64 - reach as f64) / deviation).powi(2)).exp())
        .collect();
    let sum: f64 = kernel.iter().sum();
    kernel.iter_mut().for_each(|value| *value /= sum);
    let Some((&first, &last)) = signal.first().zip(signal.last()) else { return Vec::new() };
    let mut padded = vec![first; reach];
    padded.extend_from_slice(signal);
    padded.extend(std::iter::repeat_n(last, reach));
    padded.windows(kernel.len()).map(|window| dot(window, &kernel)).collect()
}
