//! Candidates for a retrograde P, and how much of the signals each explains.

use super::background::{Background, dot};
use super::window::{STEP, Window};
use crate::recording::Lead;
use crate::units::Seconds;

/// Durations tried, in ms, and where in the wave its peak lies.
const DURATIONS: [f64; 4] = [55.0, 67.0, 80.0, 95.0];
const PEAKS: [f64; 3] = [0.38, 0.50, 0.62];
/// A candidate that keeps less than this part of its energy beside the background can't be told from it.
const SEPARABLE: f64 = 0.10;
/// A wave that was fitted: one shape, its own amplitude in each lead.
#[derive(Clone, Debug)]
pub(super) struct Fit {
    /// Onset after QRS onset.
    pub onset: Seconds,
    /// Its duration.
    pub duration: Seconds,
    /// Amplitude in each lead of the window, in mV.
    pub amplitudes: Vec<f64>,
    /// What the leads hold beside the background without it over what they hold with it, less one.
    pub gain: f64,
    /// What is left of the signals beside background and wave.
    pub rest: f64,
    /// The shape beside the background, weighted.
    pub shape: Vec<f64>,
}

/// The window made ready: weighted, the background removed.
pub(super) struct Prepared {
    pub background: Background,
    pub weights: Vec<f64>,
    /// Weight of each lead.
    pub lead_weights: Vec<f64>,
    residuals: Vec<Vec<f64>>,
}

impl Prepared {
    /// `slopes` tells where the signals are steep; `knot` is the distance of the spline's knots.
    pub fn of(window: &Window, slopes: &Window, knot: Seconds) -> Self {
        let length = window.len();
        // Near the QRS a small error of time is a large one of potential: such samples count little.
        let weights: Vec<f64> = (0..length)
            .map(|sample| {
                let (before, after) = (sample.saturating_sub(1), (sample + 1).min(length - 1));
                let square: f64 =
                    slopes.signals.iter().map(|signal| (signal[after] - signal[before]).powi(2)).sum();
                let slope = (square / window.signals.len() as f64).sqrt() / ((after - before).max(1) as f64);
                // 2 ms of slope against 8 µV.
                0.008 / (0.008f64.powi(2) + (0.5 * slope).powi(2)).sqrt()
            })
            .collect();
        let background = Background::new(length, knot / STEP, &weights);
        let residuals = window
            .signals
            .iter()
            .map(|signal| {
                let mut weighted: Vec<f64> = signal.iter().zip(&weights).map(|(x, w)| x * w).collect();
                background.remove(&mut weighted);
                weighted
            })
            .collect();
        // A lead with a large T explains itself badly.
        let lead_weights = slopes
            .signals
            .iter()
            .map(|signal| {
                let (low, high) =
                    signal.iter().fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), &value| {
                        (low.min(value), high.max(value))
                    });
                1.0 / (1.0 + (3.0 * (high - low)).powi(2)).sqrt()
            })
            .collect();
        Self { background, weights, lead_weights, residuals }
    }

    /// What the independent leads hold beside the background, without any wave.
    pub fn without(&self, window: &Window) -> f64 {
        let energy = |index: usize| {
            self.lead_weights[index].powi(2) * dot(&self.residuals[index], &self.residuals[index])
        };
        window.independent().into_iter().map(energy).sum()
    }

    /// A signal of the window's length, weighted, its background removed.
    pub fn residual(&self, signal: &[f64]) -> Vec<f64> {
        let mut weighted: Vec<f64> = signal.iter().zip(&self.weights).map(|(x, w)| x * w).collect();
        self.background.remove(&mut weighted);
        weighted
    }
}

/// All candidates that a retrograde P may be, best first.
pub(super) fn fits(window: &Window, prepared: &Prepared) -> Vec<Fit> {
    let independent = window.independent();
    let without = prepared.without(window);
    let mut found = Vec::new();
    for duration in DURATIONS {
        let width = duration / STEP.ms();
        let last = (window.len() as f64 - width).floor().max(0.0) as usize;
        for peak in PEAKS {
            for onset in 0..=last {
                let mut shape = raised_cosine(window.len(), onset as f64, width, peak);
                let whole: f64 = shape.iter().zip(&prepared.weights).map(|(x, w)| (x * w).powi(2)).sum();
                shape.iter_mut().zip(&prepared.weights).for_each(|(x, w)| *x *= w);
                prepared.background.remove(&mut shape);
                let rest = dot(&shape, &shape);
                if whole <= 0.0 || rest < SEPARABLE * whole {
                    continue;
                }
                let amplitudes: Vec<f64> =
                    prepared.residuals.iter().map(|residual| dot(residual, &shape) / rest).collect();
                if !retrograde(window, &amplitudes) {
                    continue;
                }
                let explained: f64 = independent
                    .iter()
                    .map(|&index| prepared.lead_weights[index].powi(2) * amplitudes[index].powi(2) * rest)
                    .sum();
                let gain = explained / (without - explained).max(1e-9);
                found.push(Fit {
                    onset: window.time_of(onset as f64),
                    duration: STEP * width,
                    amplitudes,
                    gain,
                    rest: without - explained,
                    shape,
                });
            }
        }
    }
    found.sort_by(|a, b| b.gain.total_cmp(&a.gain));
    found
}

/// A raised cosine of height 1 whose flanks meet at `peak` of its width.
fn raised_cosine(length: usize, onset: f64, width: f64, peak: f64) -> Vec<f64> {
    (0..length)
        .map(|sample| {
            let place = (sample as f64 - onset) / width;
            if !(0.0..=1.0).contains(&place) {
                return 0.0;
            }
            let phase =
                if place < peak { place / peak / 2.0 } else { 0.5 + (place - peak) / (1.0 - peak) / 2.0 };
            (1.0 - (2.0 * std::f64::consts::PI * phase).cos()) / 2.0
        })
        .collect()
}

/// Whether the amplitudes are those of atria activated from below over the septum: down in II, III and
/// aVF, up in aVR and aVL, not down in V1 (common practice); in mV.
fn retrograde(window: &Window, amplitudes: &[f64]) -> bool {
    let of = |lead: Lead| window.leads.iter().position(|own| *own == lead).map(|index| amplitudes[index]);
    let all = |test: bool, lead: Option<f64>| lead.is_none() || test;
    let avf = of(Lead::AVF).or(of(Lead::II)).unwrap_or(0.0);
    let check = |lead: Lead, rule: fn(f64, f64) -> bool| {
        let value = of(lead);
        all(value.is_some_and(|value| rule(value, avf.abs())), value)
    };
    avf < -0.030
        && check(Lead::II, |value, _| value < -0.020)
        && check(Lead::III, |value, _| value < -0.020)
        && check(Lead::AVR, |value, _| value > 0.0)
        && check(Lead::AVL, |value, _| value > 0.0)
        && check(Lead::I, |value, avf| value.abs() < 0.6 * avf)
        && check(Lead::V1, |value, _| value > -0.010)
        && check(Lead::V2, |value, avf| value > -0.6 * avf)
        && check(Lead::V3, |value, avf| value > -0.6 * avf)
        && check(Lead::V5, |value, avf| value.abs() < avf)
        && check(Lead::V6, |value, avf| value.abs() < 0.9 * avf)
}
