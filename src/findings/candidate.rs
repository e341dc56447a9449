//! A retrograde P as it might be: a raised cosine in time, a dipole over the leads.
//!
//! Each candidate is weighed against the background alone by the ratio of their likelihoods, averaged over the
//! potentials that a P may have. Candidates agree on an onset with a spread; that spread is its uncertainty.

use super::background::Background;
use super::dipole::{Expected, row};
use super::linear::{cholesky, dot, inverse, log_determinant, solve};
use super::window::{Curves, Window};
use std::f64::consts::PI;

/// Durations, in ms, and places of the peak, as a part of the duration.
const DURATIONS: [f64; 3] = [58.0, 70.0, 84.0];
const PEAKS: [f64; 3] = [0.4, 0.5, 0.6];
/// Step of the onset, in ms.
const STEP: f64 = 4.0;
/// The onset lies at least so long before the next QRS, in ms.
const BEFORE_NEXT: f64 = 80.0;
/// The earliest onset, in ms from QRS onset.
pub(super) const EARLIEST: f64 = 20.0;
/// How much of a P may lie before the window, in ms.
const HIDDEN: f64 = 40.0;
/// Onsets this near to the best, in ms, are of the same P.
const SAME: f64 = 40.0;

/// What a P may look like.
#[derive(Clone, Copy, Debug)]
pub(super) struct Atrial {
    /// Its dipole.
    pub dipole: Expected,
    /// Standard deviation in each lead of what is no dipole, in mV.
    pub rest: f64,
}

/// A time course: zero before its onset and after its duration, 1 at its peak.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Course {
    pub onset: f64,
    pub duration: f64,
    pub peak: f64,
}

/// A course in components, with what its weights sum to in each mode.
pub(super) struct Template {
    pub course: Course,
    components: Vec<f64>,
    energy: Vec<f64>,
}

/// The outcome over all candidates.
#[derive(Clone, Debug)]
pub(super) struct Posterior {
    /// Logarithm of the likelihood ratio against the background, averaged over the candidates.
    pub evidence: f64,
    /// Mean onset, in ms from QRS onset.
    pub onset: f64,
    /// Its standard deviation by the model's own account, in ms.
    pub deviation: f64,
    /// The best candidate.
    pub course: Course,
    /// Its potentials at the peak, in the order of the leads, in mV.
    pub potentials: Vec<f64>,
}

impl Course {
    pub fn at(&self, time: f64) -> f64 {
        let part = (time - self.onset) / self.duration;
        if part <= 0.0 || part >= 1.0 {
            return 0.0;
        }
        let turn = if part < self.peak { part / self.peak } else { (1.0 - part) / (1.0 - self.peak) };
        (1.0 - (PI * turn).cos()) / 2.0
    }

    /// Its components, from the grid times inside its span.
    pub fn turned(&self, window: &Window, background: &Background) -> Vec<f64> {
        let first = window.times.partition_point(|time| *time <= self.onset);
        let run = window.times[first..].iter().take_while(|time| **time < self.onset + self.duration);
        background.turned(first, run.map(|time| self.at(*time)))
    }
}

/// All candidates over a cycle of `rr` ms; `fine` is off for a first look.
pub(super) fn templates(window: &Window, background: &Background, rr: f64, fine: bool) -> Vec<Template> {
    let earliest = EARLIEST.max(window.times.first().map_or(0.0, |time| time - HIDDEN));
    let step = if fine { STEP } else { 2.0 * STEP };
    let count = (((rr - BEFORE_NEXT - earliest) / step).floor().max(-1.0) + 1.0) as usize;
    let mut templates = Vec::new();
    for duration in DURATIONS {
        for peak in PEAKS {
            if !fine && (duration, peak) != (DURATIONS[1], PEAKS[1]) {
                continue;
            }
            for index in 0..count {
                let course = Course { onset: earliest + index as f64 * step, duration, peak };
                let components = course.turned(window, background);
                let energy = energies(&components, &components, background);
                templates.push(Template { course, components, energy });
            }
        }
    }
    templates
}

/// Weighted products of two courses, per mode.
pub(super) fn energies(a: &[f64], b: &[f64], background: &Background) -> Vec<f64> {
    let mut sums = vec![0.0; background.modes.len()];
    for ((a, b), precision) in a.iter().zip(b).zip(&background.precision) {
        for (sum, precision) in sums.iter_mut().zip(precision) {
            *sum += a * b * precision;
        }
    }
    sums
}

/// Weighted products of a course with the beat, per mode.
pub(super) fn products(course: &[f64], beat: &[Vec<f64>], background: &Background) -> Vec<f64> {
    let mut sums = vec![0.0; background.modes.len()];
    for ((value, row), precision) in course.iter().zip(beat).zip(&background.precision) {
        for ((sum, own), precision) in sums.iter_mut().zip(row).zip(precision) {
            *sum += value * own * precision;
        }
    }
    sums
}

/// Weighs all candidates; `None` when there are none.
pub(super) fn weigh(
    templates: &[Template],
    beat: &[Vec<f64>],
    background: &Background,
    curves: &Curves,
    atrial: &Atrial,
) -> Option<Posterior> {
    let prior = Prior::of(background, curves, atrial)?;
    let weighed: Vec<(f64, Vec<f64>)> = templates
        .iter()
        .map(|template| prior.ratio(&template.energy, products(&template.components, beat, background)))
        .collect();
    let (best, highest) = weighed
        .iter()
        .enumerate()
        .map(|(index, (ratio, _))| (index, *ratio))
        .max_by(|a, b| a.1.total_cmp(&b.1))?;
    let likelihoods: Vec<f64> = weighed.iter().map(|(ratio, _)| (ratio - highest).exp()).collect();
    let all: f64 = likelihoods.iter().sum();
    let near = |template: &Template| (template.course.onset - templates[best].course.onset).abs() < SAME;
    let (mut sum, mut mean, mut square) = (0.0, 0.0, 0.0);
    for (template, weight) in templates.iter().zip(&likelihoods).filter(|(template, _)| near(template)) {
        let onset = template.course.onset;
        sum += weight;
        mean += weight * onset;
        square += weight * onset * onset;
    }
    mean /= sum;
    let modes = &weighed[best].1;
    let potentials = (0..curves.leads.len())
        .map(|lead| background.modes.iter().zip(modes).map(|(mode, value)| mode[lead] * value).sum())
        .collect();
    Some(Posterior {
        evidence: highest + (all / templates.len() as f64).ln(),
        onset: mean,
        deviation: (square / sum - mean * mean).max(0.0).sqrt(),
        course: templates[best].course,
        potentials,
    })
}

/// The potentials expected of a P, in modes.
struct Prior {
    mean: Vec<f64>,
    precision: Vec<f64>,
    /// Precision times mean.
    pull: Vec<f64>,
    /// What the prior alone adds to the logarithm of the ratio.
    constant: f64,
}

impl Prior {
    fn of(background: &Background, curves: &Curves, atrial: &Atrial) -> Option<Self> {
        let leads = curves.leads.len();
        let rows: Vec<[f64; 3]> = background
            .modes
            .iter()
            .map(|mode| {
                let mut sum = [0.0; 3];
                for (share, lead) in mode.iter().zip(&curves.leads) {
                    for (slot, component) in sum.iter_mut().zip(row(*lead)) {
                        *slot += share * component;
                    }
                }
                sum
            })
            .collect();
        let Expected { mean, deviation } = atrial.dipole;
        let mut covariance = vec![0.0; leads * leads];
        for a in 0..leads {
            for b in 0..leads {
                let dipole: f64 =
                    (0..3).map(|axis| rows[a][axis] * rows[b][axis] * deviation[axis].powi(2)).sum();
                covariance[a * leads + b] = dipole + if a == b { atrial.rest.powi(2) } else { 0.0 };
            }
        }
        let precision = inverse(&covariance, leads)?;
        cholesky(&mut covariance, leads)?;
        let mean: Vec<f64> = rows.iter().map(|row| dot(row, &mean)).collect();
        let pull: Vec<f64> = precision.chunks_exact(leads).map(|row| dot(row, &mean)).collect();
        let constant = -0.5 * dot(&mean, &pull) - 0.5 * log_determinant(&covariance, leads);
        Some(Self { mean, precision, pull, constant })
    }

    /// The logarithm of the likelihood ratio and the most likely potentials.
    fn ratio(&self, energy: &[f64], mut products: Vec<f64>) -> (f64, Vec<f64>) {
        let leads = energy.len();
        let mut matrix = self.precision.clone();
        for (mode, energy) in energy.iter().enumerate() {
            matrix[mode * leads + mode] += energy;
        }
        if cholesky(&mut matrix, leads).is_none() {
            return (f64::NEG_INFINITY, self.mean.clone());
        }
        for (product, pull) in products.iter_mut().zip(&self.pull) {
            *product += pull;
        }
        let mut solution = products.clone();
        solve(&matrix, leads, &mut solution);
        let ratio = 0.5 * dot(&products, &solution) + self.constant - 0.5 * log_determinant(&matrix, leads);
        (ratio, solution)
    }
}
