//! Muscle noise and baseline drift mixed into real recordings, from clean to unreadable.
//!
//! Source of the recordings: LUDB 1.0.1; of the noise: record `ma` of the MIT-BIH Noise Stress Test Database 1.0.0.
//! What is measured without noise is the truth here: an interval that noise moves by more than 40 ms (one small box
//! at 25 mm/s) must not be given without a word.

use super::{INTERVALS, intervals};
use crate::support::dipole::{LEADS, SplitMix64};
use crate::support::{headers, shared};
use leadsheet::case::{Case, Settings};
use leadsheet::recording::{Lead, Recording, Weight};
use rayon::prelude::*;
use std::f64::consts::TAU;
use std::fmt::Write;
use std::path::Path;

/// Muscle noise in µV RMS; the baseline drifts by five times as much, at 0.15 to 0.4 Hz.
pub const LEVELS: [f64; 7] = [10.0, 25.0, 50.0, 100.0, 200.0, 400.0, 800.0];
const DRIFT: f64 = 5.0;
const OFF: f64 = 40.0;

/// Counts over recordings of one interval at one level.
#[derive(Clone, Copy, Default)]
pub struct Count {
    /// Given clean.
    pub clean: usize,
    /// Given with noise, of these.
    pub given: usize,
    /// Moved by more than 40 ms.
    pub off: usize,
    /// … and nothing on the sheet says that noise may have done it.
    pub unsaid: usize,
}

fn read(header: &Path) -> Recording {
    let decoded = leadsheet::input::read(header).unwrap_or_else(|error| panic!("{error}"));
    Recording::from_decoded(decoded).unwrap_or_else(|refusal| panic!("{}: {refusal}", header.display()))
}

/// The two signals of the noise record at 500 samples per second, each with a mean square of 1 without what drifts.
fn muscle(header: &Path) -> Vec<Vec<f64>> {
    let decoded = leadsheet::input::read(header).unwrap_or_else(|error| panic!("{error}"));
    let signal = |values: &[f64]| -> Vec<f64> {
        let step = 360.0 / 500.0;
        let length = (values.len() as f64 / step) as usize - 2;
        let mut even: Vec<f64> = (0..length)
            .map(|index| {
                let at = index as f64 * step;
                let (whole, part) = (at as usize, at.fract());
                values[whole] * (1.0 - part) + values[whole + 1] * part
            })
            .collect();
        // What is slower than about 1 Hz is drift, which is added by its own measure.
        for piece in even.chunks_mut(500) {
            let mean = piece.iter().sum::<f64>() / piece.len() as f64;
            piece.iter_mut().for_each(|value| *value -= mean);
        }
        let rms = (even.iter().map(|value| value * value).sum::<f64>() / even.len() as f64).sqrt();
        even.iter().map(|value| value / rms).collect()
    };
    decoded.signals.iter().map(|found| signal(found.samples.values_with_gaps())).collect()
}

fn mixed(clean: &Recording, muscle: &[Vec<f64>], level: f64, seed: u64) -> Recording {
    let mut random = SplitMix64::new(seed);
    let lead = |name: &str| Lead::ALL.into_iter().find(|lead| lead.name() == name).expect("a lead");
    let leads: Vec<Vec<f64>> = LEADS
        .iter()
        .enumerate()
        .map(|(index, name)| {
            let noise = &muscle[index % muscle.len()];
            let from = (random.uniform() * (noise.len() - clean.length) as f64) as usize;
            let (hertz, phase) = (0.15 + 0.25 * random.uniform(), random.uniform());
            let values = clean.samples(lead(name)).expect("twelve leads").values_with_gaps();
            values
                .iter()
                .zip(&noise[from..])
                .enumerate()
                .map(|(at, (value, noise))| {
                    let time = at as f64 / clean.rate.get();
                    let drift = DRIFT * (TAU * (hertz * time + phase)).sin();
                    value + level / 1000.0 * (noise + drift)
                })
                .collect()
        })
        .collect();
    super::recording(clean.rate.get(), &leads)
}

/// The intervals, and whether a caution speaks of noise.
fn judged(recording: Recording) -> ([Option<f64>; 4], bool) {
    let case = Case::analyse(recording, None, Settings::default()).expect("it is analysed");
    let observations = &case.analysis.findings.observations;
    let said = observations.iter().any(|note| note.weight == Weight::Caution && note.what.contains("noise"));
    (intervals(&case.analysis.measurements), said)
}

/// Per level, per interval, over every `step`th recording.
pub fn counts(step: usize) -> Option<Vec<[Count; 4]>> {
    let (folder, noise) = (shared("data/ludb")?, shared("data/noise")?);
    let muscle = muscle(&noise.join("ma.hea"));
    let all: Vec<_> = headers(&folder).into_iter().step_by(step).collect();
    let outcomes: Vec<Vec<[Count; 4]>> = all
        .par_iter()
        .enumerate()
        .map(|(index, header)| {
            let clean = read(header);
            let (truth, _) = judged(clean.clone());
            LEVELS
                .iter()
                .map(|level| {
                    let (found, said) =
                        judged(mixed(&clean, &muscle, *level, index as u64 * 100 + *level as u64));
                    [0, 1, 2, 3].map(|interval| {
                        let Some(truth) = truth[interval] else { return Count::default() };
                        let off = found[interval].is_some_and(|found| (found - truth).abs() > OFF);
                        Count {
                            clean: 1,
                            given: usize::from(found[interval].is_some()),
                            off: usize::from(off),
                            unsaid: usize::from(off && !said),
                        }
                    })
                })
                .collect()
        })
        .collect();
    let sum = |level: usize, interval: usize| {
        outcomes.iter().map(|outcome| outcome[level][interval]).fold(Count::default(), |sum, one| Count {
            clean: sum.clean + one.clean,
            given: sum.given + one.given,
            off: sum.off + one.off,
            unsaid: sum.unsaid + one.unsaid,
        })
    };
    Some((0..LEVELS.len()).map(|level| [0, 1, 2, 3].map(|interval| sum(level, interval))).collect())
}

pub fn table(counts: &[[Count; 4]]) -> String {
    let mut text = format!("{:<24}", "muscle noise µV RMS");
    for name in INTERVALS {
        write!(text, "{:>28}", format!("{name} clean given off unsaid")).expect("a string takes all");
    }
    for (level, row) in LEVELS.iter().zip(counts) {
        write!(text, "\n{level:<24}").expect("a string takes all");
        for count in row {
            let all = format!("{} {} {} {}", count.clean, count.given, count.off, count.unsaid);
            write!(text, "{all:>28}").expect("a string takes all");
        }
    }
    text
}

#[test]
fn no_interval_that_muscle_noise_moves_by_a_small_box_is_given_without_a_caution() {
    let Some(counts) = counts(4) else { return };
    println!("{}", table(&counts));
    for (level, row) in LEVELS.iter().zip(&counts) {
        for (interval, count) in INTERVALS.iter().zip(row) {
            assert_eq!(count.unsaid, 0, "{interval} at {level} µV");
        }
    }
    let clean = counts[0].iter().map(|count| count.off).sum::<usize>();
    assert_eq!(clean, 0, "10 µV of noise moved an interval");
}
