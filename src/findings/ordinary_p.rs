//! The rival of a long RP: an ordinary P before the next QRS, right atrium first, then left.

use super::background::Background;
use super::candidate::{Course, energies, products};
use super::dipole::{Expected, row};
use super::linear::{cholesky, dot, log_determinant, solve};
use super::sinus::Overlay;
use super::window::{Curves, Window};

/// The two halves of an ordinary P: down and to the front, then down, left and to the back (own choice after
/// normal P loops).
const HALVES: [Expected; 2] = [
    Expected { mean: [0.03, 0.08, -0.05], deviation: [0.03, 0.04, 0.04] },
    Expected { mean: [0.06, 0.06, 0.03], deviation: [0.03, 0.04, 0.04] },
];
/// Durations, in ms.
const DURATIONS: [f64; 2] = [84.0, 104.0];
/// Each half's part of the duration; they overlap.
const HALF: f64 = 0.64;
/// PR, in ms, and the step between candidates.
const SHORTEST_PR: f64 = 100.0;
const LONGEST_PR: f64 = 210.0;
const STEP: f64 = 8.0;

/// Standard deviation of the gain of a sinus P from one recording to the next, about 1 (own choice).
const GAIN_DEVIATION: f64 = 0.3;

/// An ordinary P found before the QRS.
#[derive(Clone, Copy, Debug)]
pub(super) struct OrdinaryP {
    /// Logarithm of the likelihood ratio against the background, averaged over the candidates.
    pub evidence: f64,
    /// PR of the best candidate, in ms.
    pub pr: f64,
}

/// Weighs an ordinary P; `None` when the window holds no place for it.
pub(super) fn weigh(
    window: &Window,
    beat: &[Vec<f64>],
    background: &Background,
    curves: &Curves,
    rr: f64,
) -> Option<OrdinaryP> {
    // Each mode's view of X, Y, Z.
    let rows: Vec<[f64; 3]> = background
        .modes
        .iter()
        .map(|mode| {
            [0, 1, 2].map(|axis: usize| {
                mode.iter().zip(&curves.leads).map(|(share, lead)| share * row(*lead)[axis]).sum()
            })
        })
        .collect();
    let mut found: Vec<(f64, f64)> = Vec::new();
    for duration in DURATIONS {
        let count = ((LONGEST_PR - SHORTEST_PR) / STEP).floor() as usize + 1;
        for index in 0..count {
            let pr = LONGEST_PR - index as f64 * STEP;
            let onset = rr - pr;
            if onset < window.times[0] {
                continue;
            }
            let halves = [0.0, 1.0 - HALF].map(|later| {
                Course { onset: onset + later * duration, duration: HALF * duration, peak: 0.5 }
                    .turned(window, background)
            });
            found.push((ratio(&halves, beat, background, &rows), pr));
        }
    }
    mean(&found)
}

/// Weighs the P of the same patient's sinus beat, earlier or later and larger or smaller; `None` when it shows none.
pub(super) fn weigh_known(
    window: &Window,
    beat: &[Vec<f64>],
    background: &Background,
    overlay: &Overlay,
    rr: f64,
) -> Option<OrdinaryP> {
    let (length, wave) = overlay.p()?;
    let mut found: Vec<(f64, f64)> = Vec::new();
    let count = ((LONGEST_PR - SHORTEST_PR) / STEP).floor() as usize + 1;
    for index in 0..count {
        let pr = LONGEST_PR - index as f64 * STEP;
        // Conduction is not much quicker than in sinus rhythm, or the P would be another one.
        if pr < 0.6 * length || rr - pr < window.times[0] {
            continue;
        }
        let values: Vec<Vec<f64>> =
            window
                .times
                .iter()
                .map(|time| time - (rr - pr))
                .map(|time| {
                    if (0.0..length).contains(&time) { wave(time) } else { vec![0.0; background.modes.len()] }
                })
                .collect();
        let components = background.turned_values(&values);
        let (mut energy, mut product) = (0.0, 0.0);
        for ((wave, own), precision) in components.iter().zip(beat).zip(&background.precision) {
            for ((wave, own), precision) in wave.iter().zip(own).zip(precision) {
                energy += wave * wave * precision;
                product += wave * own * precision;
            }
        }
        let precision = GAIN_DEVIATION.powi(-2);
        let (matrix, right) = (energy + precision, product + precision);
        found.push((0.5 * right * right / matrix - 0.5 * precision - 0.5 * (matrix / precision).ln(), pr));
    }
    mean(&found)
}

/// The candidates' mean likelihood ratio, as a logarithm, and the best one's PR.
fn mean(found: &[(f64, f64)]) -> Option<OrdinaryP> {
    let (highest, pr) = found.iter().copied().max_by(|a, b| a.0.total_cmp(&b.0))?;
    let mean = found.iter().map(|(ratio, _)| (ratio - highest).exp()).sum::<f64>() / found.len() as f64;
    Some(OrdinaryP { evidence: highest + mean.ln(), pr })
}

/// The logarithm of the likelihood ratio of two dipoles with these courses.
fn ratio(halves: &[Vec<f64>; 2], beat: &[Vec<f64>], background: &Background, rows: &[[f64; 3]]) -> f64 {
    const N: usize = 6;
    let mut matrix = [0.0; N * N];
    let mut right = [0.0; N];
    let mut constant = 0.0;
    for (a, half) in halves.iter().enumerate() {
        let own = products(half, beat, background);
        for (b, other) in halves.iter().enumerate() {
            let energy = energies(half, other, background);
            for i in 0..3 {
                for j in 0..3 {
                    matrix[(3 * a + i) * N + 3 * b + j] =
                        rows.iter().zip(&energy).map(|(row, energy)| energy * row[i] * row[j]).sum();
                }
            }
        }
        let Expected { mean, deviation } = HALVES[a];
        for axis in 0..3 {
            let precision = deviation[axis].powi(-2);
            let place = 3 * a + axis;
            matrix[place * N + place] += precision;
            right[place] =
                rows.iter().zip(&own).map(|(row, own)| own * row[axis]).sum::<f64>() + precision * mean[axis];
            constant += 0.5 * precision.ln() - 0.5 * precision * mean[axis] * mean[axis];
        }
    }
    if cholesky(&mut matrix, N).is_none() {
        return f64::NEG_INFINITY;
    }
    let mut solution = right;
    solve(&matrix, N, &mut solution);
    0.5 * dot(&right, &solution) + constant - 0.5 * log_determinant(&matrix, N)
}
