//! What the network sees of a beat.

use crate::average::RepresentativeBeat;

/// Samples per second of the window.
pub const RATE: f64 = 250.0;
/// Samples of the window.
pub const LENGTH: usize = 288;
/// Index of the fiducial: 0.4 s stand before it.
pub const FIDUCIAL: usize = 100;
/// One side of the Gaussian that the beat is read through, in s.
const SIGMA: f64 = 0.002;

/// The beat in each signal, in mV, at 250 Hz around its fiducial, behind a Gaussian of 2 ms.
pub fn windows(beat: &RepresentativeBeat) -> Vec<Vec<f32>> {
    let rate = beat.rate.get();
    let sigma = (SIGMA * rate).max(0.4);
    let reach = 3.0 * sigma;
    let last = beat.signals.first().map_or(0, Vec::len) as isize - 1;
    beat.signals
        .iter()
        .map(|signal| {
            (0..LENGTH)
                .map(|index| {
                    let centre = beat.fiducial.0 as f64 + (index as f64 - FIDUCIAL as f64) * rate / RATE;
                    let (mut sum, mut weights) = (0.0, 0.0);
                    let (from, to) = ((centre - reach).ceil() as isize, (centre + reach).floor() as isize);
                    for at in from..=to {
                        let weight = (-((at as f64 - centre) / sigma).powi(2) / 2.0).exp();
                        sum += weight * signal[at.clamp(0, last) as usize];
                        weights += weight;
                    }
                    (sum / weights) as f32
                })
                .collect()
        })
        .collect()
}
