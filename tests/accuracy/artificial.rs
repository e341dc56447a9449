//! Artificial beats of known marks at many rates and sampling rates, without noise.

use super::statistics::Errors;
use super::{INTERVALS, intervals, measured, recording};
use crate::support::dipole::{Breath, LEADS, Recipe, Strip, Truth, seen_in};
use leadsheet::measure::Measurements;
use leadsheet::recording::Lead;
use rayon::prelude::*;

pub const SAMPLING: [f64; 5] = [250.0, 360.0, 500.0, 1000.0, 2000.0];
pub const RATES: [f64; 10] = [40.0, 60.0, 80.0, 100.0, 120.0, 140.0, 160.0, 180.0, 200.0, 220.0];
const MARKS: [&str; 5] = ["P on", "P off", "QRS on", "QRS off", "T off"];
const STILL: Breath = Breath { rate: 0.2, gain: 0.0, turn: 0.0, wander: [0.0; 3] };
/// One rate at one sampling rate.
pub struct Cell {
    pub sampling: f64,
    pub rate: f64,
    /// P begins only after T has ended.
    pub apart: bool,
    /// Error of each mark, in ms, where it is made.
    pub marks: [Option<f64>; 5],
    /// Error of each interval in ms as measured, where it is given.
    pub intervals: [Option<f64>; 4],
    /// Largest error of an amplitude in µV, of P, of Q, R, S and of T.
    pub amplitudes: [f64; 3],
}

/// QT by Bazett's root and a PR that shortens with RR, as they do in life.
fn strip(sampling: f64, rate: f64) -> (Recipe, Strip) {
    let rr = 60.0 / rate;
    let recipe = Recipe {
        sampling,
        rr,
        rr_scatter: 0.0,
        pr: Some(0.110 + 0.050 * ((rr - 0.27) / 0.6).min(1.0)),
        qt: Some(0.390 * rr.sqrt().min(1.0)),
        noise_uv: 0.0,
        breath: STILL,
        ..Recipe::SINUS
    };
    let mut strip = recipe.strip();
    strip.breath = STILL;
    (recipe, strip)
}

pub fn cells() -> Vec<Cell> {
    let all: Vec<(f64, f64)> =
        SAMPLING.iter().flat_map(|sampling| RATES.iter().map(move |rate| (*sampling, *rate))).collect();
    all.par_iter().map(|(sampling, rate)| cell(*sampling, *rate)).collect()
}

fn cell(sampling: f64, rate: f64) -> Cell {
    let (recipe, strip) = strip(sampling, rate);
    let found = measured(recording(sampling, &strip.eight()));
    let truth = strip.truth();
    let of = |truth: &Truth| -> [f64; 5] {
        let (p, qrs, t) = (truth.p.expect("a P"), truth.qrs.expect("a QRS"), truth.t.expect("a T"));
        [p.onset, p.offset, qrs.onset, qrs.offset, t.offset].map(|time| time * 1000.0)
    };
    let [p_on, p_off, qrs_on, qrs_off, t_off] = of(&truth[0]);
    let built = [p_off - p_on, qrs_on - p_on, qrs_off - qrs_on, t_off - qrs_on];
    let given = intervals(&found);
    Cell {
        sampling,
        rate,
        apart: t_off - qrs_on + qrs_on - p_on < recipe.rr * 1000.0,
        marks: marks(&found, &truth.iter().map(of).collect::<Vec<_>>()),
        intervals: [0, 1, 2, 3].map(|index| given[index].map(|value| value - built[index])),
        amplitudes: amplitudes(&found, &strip),
    }
}

/// The median error of each mark over the beats.
fn marks(found: &Measurements, truth: &[[f64; 5]]) -> [Option<f64>; 5] {
    let mut errors: [Errors; 5] = Default::default();
    for beat in &found.beats {
        let (Some(qrs_on), qrs_off) = (beat.qrs.onset, beat.qrs.offset) else { continue };
        let Some(truth) = truth.iter().find(|truth| (truth[2] - qrs_on.ms()).abs() < 60.0) else { continue };
        let made = [
            beat.p.and_then(|p| p.onset),
            beat.p.map(|p| p.offset),
            Some(qrs_on),
            Some(qrs_off),
            beat.t.map(|t| t.offset),
        ];
        for ((errors, made), truth) in errors.iter_mut().zip(made).zip(truth) {
            if let Some(made) = made {
                errors.push(made.ms() - truth);
            }
        }
    }
    errors.map(|errors| (errors.count() > 0).then(|| errors.median()))
}

/// Extremes of each wave, seen at a step of 0.1 ms, against the amplitudes given.
fn amplitudes(found: &Measurements, strip: &Strip) -> [f64; 3] {
    let beat = &strip.beats[1];
    let mut largest = [0.0f64; 3];
    let chest = [Lead::I, Lead::II, Lead::V1, Lead::V2, Lead::V3, Lead::V4, Lead::V5, Lead::V6];
    for (index, lead) in chest.into_iter().enumerate().take(LEADS.len()) {
        let Some(given) = found.amplitudes[lead] else { continue };
        let range = |wave: &Option<(f64, crate::support::dipole::Wave)>| {
            let (_, wave) = wave.as_ref().expect("the wave is there");
            let steps = ((wave.offset() - wave.onset()) * 10_000.0) as usize;
            (0..=steps)
                .map(|step| seen_in(index, wave.at(wave.onset() + step as f64 / 10_000.0)))
                .fold((0.0f64, 0.0f64), |(low, high), value| (low.min(value), high.max(value)))
        };
        let larger = |(low, high): (f64, f64)| if -low > high { low } else { high };
        let mut judge = |slot: usize, given: Option<f64>, truth: f64| {
            if let Some(given) = given {
                largest[slot] = largest[slot].max((given - truth).abs() * 1000.0);
            }
        };
        let (low, high) = range(&beat.qrs);
        judge(0, given.p.map(|p| p.get()), larger(range(&beat.p)));
        judge(1, [given.r, given.r_prime].into_iter().flatten().map(|r| r.get()).reduce(f64::max), high);
        judge(1, [given.q, given.s].into_iter().flatten().map(|s| s.get()).reduce(f64::min), low);
        judge(2, given.t.map(|t| t.get()), larger(range(&beat.t)));
    }
    largest
}

/// What is the same in all cells, in ms: the waves begin and end with no slope, so a mark lies a little inside or
/// outside them. One number per mark and per interval, the median of the cells whose P and T are apart.
pub struct Constants {
    pub marks: [f64; 5],
    pub intervals: [f64; 4],
}

impl Constants {
    pub fn of(cells: &[Cell]) -> Self {
        let apart = || cells.iter().filter(|cell| cell.apart);
        Self {
            marks: [0, 1, 2, 3, 4]
                .map(|mark| Errors::of(apart().filter_map(|cell| cell.marks[mark])).median()),
            intervals: [0, 1, 2, 3]
                .map(|interval| Errors::of(apart().filter_map(|cell| cell.intervals[interval])).median()),
        }
    }
}

/// All cells as a table, the constants taken off and stated.
pub fn table(cells: &[Cell]) -> String {
    let constants = Constants::of(cells);
    let mut text = format!("{:>6} {:>5} {:<9}", "/s", "/min", "P, T");
    for name in MARKS.iter().chain(&INTERVALS).chain(&["P µV", "QRS µV", "T µV"]) {
        text += &format!("{name:>8}");
    }
    let stated = constants.marks.iter().chain(&constants.intervals);
    text += &format!("\n{:<22}", "constant taken off");
    text.extend(stated.map(|constant| format!("{constant:>8.1}")));
    for cell in cells {
        let place = if cell.apart { "apart" } else { "P on T" };
        text += &format!("\n{:>6} {:>5} {place:<9}", cell.sampling, cell.rate);
        let marks = cell.marks.iter().zip(&constants.marks);
        let intervals = cell.intervals.iter().zip(&constants.intervals);
        let errors = marks.chain(intervals).map(|(error, constant)| error.map(|error| error - constant));
        for error in errors.chain(cell.amplitudes.map(Some)) {
            text += &error.map_or_else(|| format!("{:>8}", "–"), |error| format!("{error:>8.1}"));
        }
    }
    text
}

// Source of the truth: the construction. What is not held here is printed by `figures` as it is.
#[test]
fn on_artificial_beats_marks_and_intervals_lie_where_they_were_built() {
    let cells = cells();
    let constants = Constants::of(&cells);
    println!("{}", table(&cells));
    assert!(constants.marks.iter().all(|constant| constant.abs() <= 10.0), "{:?}", constants.marks);
    assert!(constants.intervals.iter().all(|constant| constant.abs() <= 15.0), "{:?}", constants.intervals);
    let most = |errors: &mut dyn Iterator<Item = Option<f64>>, constant: f64| {
        errors.flatten().map(|error| (error - constant).abs()).fold(0.0, f64::max)
    };
    let interval = |index: usize, fastest: f64| {
        let slow = cells.iter().filter(|cell| cell.rate <= fastest);
        most(&mut slow.map(|cell| cell.intervals[index]), constants.intervals[index])
    };
    let apart = cells.iter().filter(|cell| cell.apart);
    let qrs_onset = most(&mut apart.map(|cell| cell.marks[2]), constants.marks[2]);
    assert!(qrs_onset <= 4.0, "QRS onset {qrs_onset:.1} ms");
    for (index, fastest, limit) in [(0, 100.0, 4.0), (1, 120.0, 5.0), (2, 160.0, 6.0), (3, 120.0, 8.0)] {
        let error = interval(index, fastest);
        assert!(error <= limit, "{} up to {fastest}/min: {error:.1} ms", INTERVALS[index]);
    }
    for cell in &cells {
        // A P on the T before it is not told, and nothing stands in its place.
        assert!(cell.apart || cell.intervals[1].is_none(), "{}/min: a PR of a P on T", cell.rate);
        if cell.sampling >= 1000.0 {
            assert!(cell.amplitudes[1] <= 10.0, "{}/min: QRS {:.1} µV", cell.rate, cell.amplitudes[1]);
        }
        if cell.rate <= 100.0 {
            assert!(cell.intervals[1].is_some(), "{}/s, {}/min: no PR", cell.sampling, cell.rate);
        }
    }
}
