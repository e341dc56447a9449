//! Beats in a row, rendered at any sampling rate.

use super::{LEADS, SplitMix64, Vector, Wave, seen_in, twelve};
use std::f64::consts::TAU;

/// One beat. A wave that is there begins at its time, in s from the strip's begin.
#[derive(Clone, Debug)]
pub struct Beat {
    /// A P before the QRS.
    pub p: Option<(f64, Wave)>,
    /// The QRS; `None` for a P without one.
    pub qrs: Option<(f64, Wave)>,
    /// The T wave.
    pub t: Option<(f64, Wave)>,
    /// A P behind the QRS.
    pub retrograde_p: Option<(f64, Wave)>,
}

/// What breathing does.
#[derive(Clone, Copy, Debug)]
pub struct Breath {
    /// Breaths per second.
    pub rate: f64,
    /// Change of all potentials, as a fraction.
    pub gain: f64,
    /// Turn in the frontal plane, in radians.
    pub turn: f64,
    /// Baseline, in mV.
    pub wander: Vector,
}

/// A strip.
#[derive(Clone, Debug)]
pub struct Strip {
    /// Samples per second.
    pub rate: f64,
    /// Length.
    pub seconds: f64,
    /// In order.
    pub beats: Vec<Beat>,
    /// Breathing.
    pub breath: Breath,
    /// Standard deviation of white noise in each of the eight leads, in µV.
    pub noise_uv: f64,
    /// Of the noise.
    pub seed: u64,
}

/// Begin and end of a wave, in s from the strip's begin.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct WaveTruth {
    /// Its first moment.
    pub onset: f64,
    /// Its last.
    pub offset: f64,
}

/// The true marks of a beat.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Truth {
    /// The P before the QRS.
    pub p: Option<WaveTruth>,
    /// The QRS.
    pub qrs: Option<WaveTruth>,
    /// The T.
    pub t: Option<WaveTruth>,
    /// The P behind the QRS.
    pub retrograde_p: Option<WaveTruth>,
}

impl Breath {
    /// Quiet breathing.
    pub const QUIET: Self = Self { rate: 0.23, gain: 0.03, turn: 0.03, wander: [0.012, 0.020, 0.008] };

    fn phase(&self, time: f64) -> f64 {
        (TAU * self.rate * time).sin()
    }

    fn applied(&self, vector: Vector, time: f64) -> Vector {
        let phase = self.phase(time);
        let gain = 1.0 + self.gain * phase;
        let (sine, cosine) = (self.turn * phase).sin_cos();
        let [x, y, z] = vector;
        let turned = [x * cosine - y * sine, x * sine + y * cosine, z];
        [0, 1, 2].map(|axis| gain * turned[axis] + self.wander[axis] * phase)
    }
}

impl Beat {
    fn waves(&self) -> impl Iterator<Item = &(f64, Wave)> {
        [&self.p, &self.qrs, &self.t, &self.retrograde_p].into_iter().flatten()
    }

    /// Its true marks.
    pub fn truth(&self) -> Truth {
        let marks = |wave: &Option<(f64, Wave)>| {
            wave.as_ref().map(|(at, wave)| WaveTruth { onset: at + wave.onset(), offset: at + wave.offset() })
        };
        Truth {
            p: marks(&self.p),
            qrs: marks(&self.qrs),
            t: marks(&self.t),
            retrograde_p: marks(&self.retrograde_p),
        }
    }
}

impl Strip {
    /// The true marks of all beats.
    pub fn truth(&self) -> Vec<Truth> {
        self.beats.iter().map(Beat::truth).collect()
    }

    /// The eight leads of [`LEADS`], in mV.
    pub fn eight(&self) -> Vec<Vec<f64>> {
        let length = (self.seconds * self.rate).round() as usize;
        let mut vectors = vec![[0.0; 3]; length];
        for (at, wave) in self.beats.iter().flat_map(Beat::waves) {
            let from = ((at + wave.onset()) * self.rate).floor().max(0.0) as usize;
            let to = (((at + wave.offset()) * self.rate).ceil().max(0.0) as usize).min(length);
            for (index, sum) in vectors.iter_mut().enumerate().take(to).skip(from) {
                let part = wave.at(index as f64 / self.rate - at);
                for (slot, component) in sum.iter_mut().zip(part) {
                    *slot += component;
                }
            }
        }
        let mut random = SplitMix64::new(self.seed);
        let mut leads = vec![Vec::with_capacity(length); LEADS.len()];
        for (index, vector) in vectors.into_iter().enumerate() {
            let vector = self.breath.applied(vector, index as f64 / self.rate);
            for (lead, samples) in leads.iter_mut().enumerate() {
                samples.push(seen_in(lead, vector) + self.noise_uv / 1000.0 * random.normal());
            }
        }
        leads
    }

    /// All twelve leads in standard order, in whole µV.
    pub fn counts(&self) -> Vec<[i16; 12]> {
        let eight = self.eight();
        (0..eight[0].len())
            .map(|index| {
                let rounded =
                    [0, 1, 2, 3, 4, 5, 6, 7].map(|lead: usize| (eight[lead][index] * 1000.0).round());
                twelve(rounded).map(|value| value.round() as i16)
            })
            .collect()
    }
}
