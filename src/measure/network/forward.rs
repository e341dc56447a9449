//! From windows to marks: down to coarse times, up again, the leads' mean mixed in on the way.

use super::layers::{Conv, Map};
use super::weights::{Block, LEADS, MARKS, Weights};
use super::window::{FIDUCIAL, LENGTH, RATE};
use crate::recording::Lead;
use std::array::from_fn;
use std::sync::OnceLock;

/// A lead that stays below is left out of the means, in mV.
const DEAD: f32 = 0.005;

/// Where a mark stands, in ms from the fiducial.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Estimate {
    /// The mean of where it may stand.
    pub time: f64,
    /// Its standard deviation, as the network sees it.
    pub spread: f64,
}

/// What the network says of a beat.
#[derive(Clone, Debug, PartialEq)]
pub struct Seen {
    /// Per signal: P onset, peak, offset, QRS onset, peak, offset, T peak, offset. They mean something only
    /// where the wave is there.
    pub marks: Vec<[Estimate; MARKS]>,
    /// Log-odds that a P stands before the QRS.
    pub p: f64,
    /// Log-odds that a T follows it.
    pub t: f64,
}

static NETWORKS: OnceLock<Vec<Weights>> = OnceLock::new();

/// Marks with other weights from now on, such as those of networks that were trained without the recording
/// that they are judged on. Only before the first beat is marked, and once; tells whether it took them.
pub fn replace(weights: &[u8]) -> bool {
    Weights::from_bytes(weights).is_some_and(|weights| NETWORKS.set(weights).is_ok())
}

/// Marks a beat from its [`super::windows`] and the leads that they are.
pub fn see(windows: &[Vec<f32>], names: &[Option<Lead>]) -> Seen {
    if windows.is_empty() {
        return Seen { marks: Vec::new(), p: f64::NEG_INFINITY, t: f64::NEG_INFINITY };
    }
    let features: Vec<Map> = windows.iter().map(|window| features(window)).collect();
    let alive: Vec<bool> =
        windows.iter().map(|window| window.iter().any(|value| value.abs() > DEAD)).collect();
    let networks = NETWORKS.get_or_init(Weights::own);
    together(&networks.iter().map(|weights| one(weights, &features, names, &alive)).collect::<Vec<_>>())
}

/// The first mark of T, and so many networks speak of what lies before it. The others were also trained on beats
/// made fast, with T on the next P: they end T well there, but take a terminal P into the QRS.
const T_PEAK: usize = 6;
const ALL_BUT_T: usize = 2;

/// The mean of several networks: of each mark the mixture of their distributions.
fn together(all: &[Seen]) -> Seen {
    let before_t = &all[..all.len().min(ALL_BUT_T)];
    let mean =
        |of: &[Seen], value: &dyn Fn(&Seen) -> f64| of.iter().map(value).sum::<f64>() / of.len() as f64;
    let mark = |signal: usize, mark: usize| {
        let of = if mark < T_PEAK { before_t } else { all };
        let time = mean(of, &|seen| seen.marks[signal][mark].time);
        let square = mean(of, &|seen| {
            let Estimate { time, spread } = seen.marks[signal][mark];
            time * time + spread * spread
        });
        Estimate { time, spread: (square - time * time).max(0.0).sqrt() }
    };
    Seen {
        marks: (0..all[0].marks.len()).map(|signal| from_fn(|number| mark(signal, number))).collect(),
        p: mean(before_t, &|seen| seen.p),
        t: mean(all, &|seen| seen.t),
    }
}

fn one(weights: &Weights, features: &[Map], names: &[Option<Lead>], alive: &[bool]) -> Seen {
    let share = 1.0 / alive.iter().filter(|alive| **alive).count().max(1) as f32;
    let mean = |maps: &[Map]| {
        let mut mean = Map::zero(maps[0].times(), maps[0].channels);
        for (map, _) in maps.iter().zip(alive).filter(|(_, alive)| **alive) {
            for (sum, value) in mean.values.iter_mut().zip(&map.values) {
                *sum += share * value;
            }
        }
        mean
    };
    let fuse = |maps: &mut [Map], conv: &Conv| {
        let common = conv.run(&mean(maps).relu());
        maps.iter_mut().for_each(|map| map.add(&common));
    };
    let each = |maps: &[Map], make: &dyn Fn(&Map) -> Map| maps.iter().map(make).collect::<Vec<Map>>();

    let mut maps: Vec<Map> = features
        .iter()
        .zip(names)
        .map(|(features, name)| {
            let mut map = weights.stem.run(features);
            let own = &weights.lead[name.map_or(LEADS - 1, |lead| lead as usize)];
            for row in map.values.chunks_exact_mut(own.len()) {
                row.iter_mut().zip(own).for_each(|(value, more)| *value += more);
            }
            map
        })
        .collect();
    let mut skips = Vec::new();
    for level in 0..4 {
        if level > 0 {
            maps = each(&maps, &|map| weights.down[level - 1].run(&map.relu().folded(2)));
        }
        maps = each(&maps, &|map| block(map, &weights.down_block[level]));
        if level > 0 {
            fuse(&mut maps, &weights.down_fuse[level - 1]);
        }
        skips.push(maps.clone());
    }
    maps = each(&maps, &|map| block(map, &weights.bottom));
    fuse(&mut maps, &weights.bottom_fuse);
    let there = weights.there.run(&mean(&each(&maps, &Map::relu)));
    let highest =
        |output: usize| there.values.iter().skip(output).step_by(2).fold(f32::NEG_INFINITY, |a, &b| a.max(b));
    for level in (0..3).rev() {
        maps = each(&maps, &|map| weights.up[level].run(&map.relu()).doubled());
        for (map, skip) in maps.iter_mut().zip(&skips[level]) {
            map.add(skip);
        }
        if level > 0 {
            fuse(&mut maps, &weights.up_fuse[level - 1]);
        }
        maps = each(&maps, &|map| block(map, &weights.up_block[level]));
    }
    Seen {
        marks: maps.iter().map(|map| marks(&weights.head.run(&map.relu()))).collect(),
        p: f64::from(highest(0)),
        t: f64::from(highest(1)),
    }
}

/// Two views of the potential, one scaled to the lead and one that bends, for two neighbouring times.
fn features(window: &[f32]) -> Map {
    let power = window.iter().map(|value| value * value).sum::<f32>() / window.len() as f32;
    let scale = power.sqrt().max(0.03);
    let values = window
        .iter()
        .flat_map(|value| [(value / scale).clamp(-8.0, 8.0) / 2.0, (value / 0.05).asinh() / 2.0])
        .collect();
    Map { channels: 4, values }
}

fn block(map: &Map, block: &Block) -> Map {
    let mut out = block.1.run(&block.0.run(&map.relu()).relu());
    out.add(map);
    out
}

/// Mean and deviation of each mark under the softmax over time.
fn marks(logits: &Map) -> [Estimate; MARKS] {
    let mut found = [Estimate::default(); MARKS];
    for (mark, found) in found.iter_mut().enumerate() {
        let column = || logits.values.iter().skip(mark).step_by(MARKS);
        let highest = column().fold(f32::NEG_INFINITY, |high, &value| high.max(value));
        let (mut sum, mut first, mut second) = (0.0, 0.0, 0.0);
        for (index, &value) in column().enumerate() {
            let weight = f64::from((value - highest).exp());
            let time = (2.0 * index as f64 + 0.5 - FIDUCIAL as f64) * 1000.0 / RATE;
            sum += weight;
            first += weight * time;
            second += weight * time * time;
        }
        let time = first / sum;
        *found = Estimate { time, spread: (second / sum - time * time).max(0.0).sqrt() };
    }
    debug_assert_eq!(logits.times() * 2, LENGTH);
    found
}
