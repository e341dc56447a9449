//! What the tachycardia beat holds that the same patient's sinus beat does not.
//!
//! The sinus beat is laid under the tachycardia beat by its QRS, its ST segment and T wave drawn
//! together as a faster rate does, and taken away in every lead.

use super::background::dot;
use super::window::{STEP, Window};
use crate::average::RepresentativeBeat;
use crate::measure::Measurements;
use crate::recording::Lead;
use crate::units::Seconds;

/// How far the QRS of both beats may be shifted to fit each other.
const SHIFT: Seconds = Seconds::literal(0.020);
/// Least correlation of both QRS over all leads: below, the beats are not comparable (own choice).
const LIKE: f64 = 0.90;
/// Amplitudes may differ by so much between recordings.
const SCALES: (f64, f64) = (0.8, 1.25);

/// A sinus beat laid under a tachycardia beat.
pub(super) struct Sinus<'a> {
    beat: &'a RepresentativeBeat,
    /// The time in the sinus beat, relative to its fiducial, that meets the tachycardia's QRS onset.
    onset: Seconds,
    /// Per lead of the window.
    scales: Vec<f64>,
}

impl<'a> Sinus<'a> {
    /// Fits the QRS of both; `None` when they differ, so that nothing can be compared.
    pub fn fit(
        window: &Window,
        tachycardia: &RepresentativeBeat,
        sinus: &'a RepresentativeBeat,
        measured: &Measurements,
    ) -> Option<Self> {
        let nominal = measured.representative.as_ref()?.qrs.onset?;
        let count = ((window.qrs + Seconds::literal(0.030)) / STEP).round() as usize;
        let qrs_of = |beat: &RepresentativeBeat, lead: Lead, onset: Seconds| -> Option<Vec<f64>> {
            let from = onset - Seconds::literal(0.020);
            let mut part: Vec<f64> = (0..count)
                .map(|step| value_at(beat, lead, from + STEP * step as f64))
                .collect::<Option<_>>()?;
            let mean = part.iter().sum::<f64>() / count as f64;
            part.iter_mut().for_each(|value| *value -= mean);
            Some(part)
        };
        let own: Vec<Vec<f64>> = window
            .leads
            .iter()
            .map(|&lead| qrs_of(tachycardia, lead, window.onset))
            .collect::<Option<_>>()?;
        let mut best: Option<(f64, Seconds, Vec<Vec<f64>>)> = None;
        for step in -10..=10 {
            let onset = nominal + SHIFT * (f64::from(step) / 10.0);
            let Some(other) =
                window.leads.iter().map(|&lead| qrs_of(sinus, lead, onset)).collect::<Option<Vec<_>>>()
            else {
                continue;
            };
            let sum = |a: &[Vec<f64>], b: &[Vec<f64>]| a.iter().zip(b).map(|(x, y)| dot(x, y)).sum::<f64>();
            let r = sum(&own, &other) / (sum(&own, &own) * sum(&other, &other)).sqrt().max(1e-9);
            if best.as_ref().is_none_or(|(highest, ..)| r > *highest) {
                best = Some((r, onset, other));
            }
        }
        let (r, onset, other) = best?;
        if r < LIKE {
            return None;
        }
        let scales = own
            .iter()
            .zip(&other)
            .map(|(own, other)| (dot(own, other) / dot(other, other).max(1e-9)).clamp(SCALES.0, SCALES.1))
            .collect();
        Some(Self { beat: sinus, onset, scales })
    }

    /// The window less the sinus beat whose time after the end of the QRS runs `warp` times as fast.
    pub fn taken_from(&self, window: &Window, warp: f64) -> Option<Window> {
        let signals = window
            .leads
            .iter()
            .zip(&window.signals)
            .zip(&self.scales)
            .map(|((&lead, signal), scale)| {
                signal
                    .iter()
                    .enumerate()
                    .map(|(sample, value)| {
                        let time = window.time_of(sample as f64);
                        let behind = time - window.qrs;
                        let warped = if behind > Seconds::ZERO { window.qrs + behind * warp } else { time };
                        Some(value - scale * value_at(self.beat, lead, self.onset + warped)?)
                    })
                    .collect::<Option<Vec<f64>>>()
            })
            .collect::<Option<Vec<_>>>()?;
        Some(Window { signals, ..window.clone() })
    }
}

/// A lead of a beat at a time relative to its fiducial, between its samples; the last valid value behind
/// the end; `None` when the lead is absent.
fn value_at(beat: &RepresentativeBeat, lead: Lead, time: Seconds) -> Option<f64> {
    let signal = beat.lead(lead)?;
    let last = beat.valid.end.checked_sub(1)? as f64;
    let place = (beat.fiducial.0 as f64 + beat.rate.samples(time)).clamp(beat.valid.start as f64, last);
    let index = place.floor() as usize;
    let next = (index + 1).min(last as usize);
    Some(signal[index] + (signal[next] - signal[index]) * (place - index as f64))
}
