//! The artificial calibration ECG, clean and with the noise of the stability tests.
//!
//! I, II and V1–V6 are identical, so III is flat, aVR inverted and aVL = aVF = half. Source of the leads' relations:
//! IEC 60601-2-51 family of texts; of the noise: IEC 60601-2-51 annex II; of the limits: IEC 60601-2-25:2011,
//! 201.12.1.101, as we understand them. The waves are our own: half sines and triangles with a corner at each end.

use super::statistics::Errors;
use super::{INTERVALS, intervals, measured, recording};
use crate::support::dipole::{LEADS, SplitMix64};
use leadsheet::measure::Measurements;
use leadsheet::recording::{Lead, Recording};
use rayon::prelude::*;
use std::f64::consts::{PI, TAU};
use std::fmt::Write;

const SAMPLING: f64 = 500.0;
const SECONDS: f64 = 10.0;
/// Limits of the mean and the standard deviation of P, PQ, QRS, QT, in ms.
pub const LIMITS: [(f64, f64); 4] = [(10.0, 8.0), (10.0, 8.0), (6.0, 5.0), (12.0, 10.0)];

/// All in s, amplitudes in mV.
#[derive(Clone, Copy)]
struct Shape {
    rr: f64,
    p: f64,
    pr: f64,
    qrs: f64,
    qt: f64,
    r: f64,
}

const SHAPES: [Shape; 6] = [
    Shape { rr: 1.0, p: 0.100, pr: 0.160, qrs: 0.100, qt: 0.380, r: 1.0 },
    Shape { rr: 1.4, p: 0.116, pr: 0.180, qrs: 0.090, qt: 0.420, r: 1.5 },
    Shape { rr: 0.75, p: 0.090, pr: 0.140, qrs: 0.080, qt: 0.340, r: 0.8 },
    Shape { rr: 0.6, p: 0.090, pr: 0.140, qrs: 0.110, qt: 0.320, r: 1.2 },
    Shape { rr: 0.5, p: 0.080, pr: 0.130, qrs: 0.084, qt: 0.290, r: 1.0 },
    Shape { rr: 0.4, p: 0.080, pr: 0.110, qrs: 0.080, qt: 0.250, r: 0.9 },
];
/// Heights of P, Q, S and T in mV and the parts of the QRS that Q, R and S take.
const P: f64 = 0.150;
const T: f64 = 0.300;
const QRS: [(f64, f64); 3] = [(0.2, -0.10), (0.5, 1.0), (0.3, -0.25)];
/// The part of the time from QRS end to T end that T takes.
const T_PART: f64 = 0.6;

#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Noise {
    None,
    HighFrequency,
    Mains(f64),
    Baseline,
}

pub const NOISES: [Noise; 5] =
    [Noise::None, Noise::HighFrequency, Noise::Mains(50.0), Noise::Mains(60.0), Noise::Baseline];

impl Noise {
    pub fn name(self) -> String {
        match self {
            Noise::None => "none".to_owned(),
            Noise::HighFrequency => "25 µV RMS high frequency".to_owned(),
            Noise::Mains(hertz) => format!("25 µV of {hertz} Hz"),
            Noise::Baseline => "0.5 mV of 0.3 Hz".to_owned(),
        }
    }

    fn at(self, time: f64, random: &mut SplitMix64, phase: f64) -> f64 {
        match self {
            Noise::None => 0.0,
            Noise::HighFrequency => 0.025 * random.normal(),
            Noise::Mains(hertz) => 0.025 * (TAU * (hertz * time + phase)).sin(),
            Noise::Baseline => 0.5 * (TAU * (0.3 * time + phase)).sin(),
        }
    }
}

impl Shape {
    /// At a time from QRS onset.
    fn at(&self, time: f64) -> f64 {
        let half_sine = |from: f64, length: f64, height: f64| {
            let part = (time - from) / length;
            if (0.0..1.0).contains(&part) { height * (PI * part).sin() } else { 0.0 }
        };
        let t = T_PART * (self.qt - self.qrs);
        let mut value = half_sine(-self.pr, self.p, P) + half_sine(self.qt - t, t, T);
        let mut from = 0.0;
        for (length, height) in QRS {
            let part = (time / self.qrs - from) / length;
            if (0.0..1.0).contains(&part) {
                value += height * self.r * (1.0 - (2.0 * part - 1.0).abs());
            }
            from += length;
        }
        value
    }

    fn recording(&self, noise: Noise, seed: u64) -> Recording {
        let mut random = SplitMix64::new(seed);
        let phase = random.uniform();
        // Beats fall at any place between two samples.
        let first = 0.3 + random.uniform() / SAMPLING;
        let clean = |time: f64| {
            let beat = ((time - first + self.pr) / self.rr).floor();
            self.at(time - first - beat * self.rr)
        };
        let samples = (SECONDS * SAMPLING) as usize;
        let leads: Vec<Vec<f64>> = LEADS
            .iter()
            .map(|_| {
                (0..samples)
                    .map(|index| index as f64 / SAMPLING)
                    .map(|time| clean(time) + noise.at(time, &mut random, phase))
                    .collect()
            })
            .collect();
        recording(SAMPLING, &leads)
    }

    fn built(&self) -> [f64; 4] {
        [self.p, self.pr, self.qrs, self.qt].map(|seconds| seconds * 1000.0)
    }
}

/// Errors of one kind of noise over all shapes: of each interval in ms, how often it isn't given, and the largest
/// error of an amplitude in µV.
pub struct Row {
    pub noise: Noise,
    pub errors: [Errors; 4],
    pub missing: [usize; 4],
    pub amplitude: f64,
    pub runs: usize,
}

pub fn rows() -> Vec<Row> {
    NOISES.iter().map(|noise| row(*noise)).collect()
}

fn row(noise: Noise) -> Row {
    let runs: Vec<(Shape, u64)> =
        SHAPES.iter().flat_map(|shape| (1..=10).map(move |seed| (*shape, seed))).collect();
    let found: Vec<(Shape, Measurements)> =
        runs.par_iter().map(|(shape, seed)| (*shape, measured(shape.recording(noise, *seed)))).collect();
    let mut row =
        Row { noise, errors: Default::default(), missing: [0; 4], amplitude: 0.0, runs: runs.len() };
    for (shape, found) in &found {
        for (index, (given, built)) in intervals(found).into_iter().zip(shape.built()).enumerate() {
            match given {
                Some(given) => row.errors[index].push(given - built),
                None => row.missing[index] += 1,
            }
        }
        for lead in [Lead::I, Lead::II, Lead::V1, Lead::V6] {
            let Some(given) = found.amplitudes[lead] else { continue };
            let truth = [
                (given.p, P),
                (given.q, QRS[0].1 * shape.r),
                (given.r, shape.r),
                (given.s, QRS[2].1 * shape.r),
                (given.t, T),
            ];
            for (given, truth) in truth {
                if let Some(given) = given {
                    row.amplitude = row.amplitude.max((given.get() - truth).abs() * 1000.0);
                }
            }
        }
    }
    row
}

pub fn table(rows: &[Row]) -> String {
    let mut text = format!("{:<26} {:>4}", "noise", "n");
    for name in INTERVALS {
        write!(text, "{:>22}", format!("{name} mean SD max –")).expect("a string takes all");
    }
    text.push_str("  amplitude µV");
    for row in rows {
        write!(text, "\n{:<26} {:>4}", row.noise.name(), row.runs).expect("a string takes all");
        for (errors, missing) in row.errors.iter().zip(row.missing) {
            let all =
                format!("{:.1} {:.1} {:.1} {missing}", errors.mean(), errors.deviation(), errors.largest());
            write!(text, "{all:>22}").expect("a string takes all");
        }
        write!(text, "  {:.1}", row.amplitude).expect("a string takes all");
    }
    text
}

// Source of the limits: IEC 60601-2-25:2011, 201.12.1.101, as we understand them. Held are the spreads and PQ's mean.
#[test]
fn on_the_calibration_ecg_intervals_spread_within_the_limits_with_and_without_noise() {
    let rows = rows();
    println!("{}", table(&rows));
    for row in &rows {
        for (index, errors) in row.errors.iter().enumerate() {
            let (mean, deviation) = LIMITS[index];
            let what = format!("{}, {}", row.noise.name(), INTERVALS[index]);
            assert!(
                errors.count() + row.missing[index] == row.runs && errors.count() > row.runs / 2,
                "{what}"
            );
            assert!(errors.deviation() <= deviation, "{what}: spread {:.1} ms", errors.deviation());
            assert!(index != 1 || errors.mean().abs() <= mean, "{what}: mean {:.1} ms", errors.mean());
        }
    }
}

// Source: the definitions of the limb leads; identical I and II leave III flat.
#[test]
fn on_the_calibration_ecg_derived_leads_are_what_their_definitions_say() {
    let made = SHAPES[0].recording(Noise::None, 1);
    let values = |lead: Lead| made.samples(lead).map(|samples| samples.values_with_gaps().to_vec());
    let one = values(Lead::I).expect("it is recorded");
    let against = |lead: Lead, factor: f64| {
        let own = values(lead).unwrap_or_else(|| panic!("{lead} is derived"));
        for (own, one) in own.iter().zip(&one) {
            assert!((own - factor * one).abs() < 1e-12, "{lead}: {own} against {factor} × {one}");
        }
    };
    if let Some(three) = values(Lead::III) {
        assert!(three.iter().all(|value| *value == 0.0));
    }
    against(Lead::AVR, -1.0);
    against(Lead::AVL, 0.5);
    against(Lead::AVF, 0.5);
}
