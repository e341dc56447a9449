//! The representative beat.

use crate::beats::{Beats, Channels, ClassId, median};
use crate::recording::{Lead, PerLead};
use crate::units::{Millivolts, SampleIndex, SampleRate, Seconds, Span};

const BEFORE: Seconds = Seconds::literal(0.600);
const AFTER: Seconds = Seconds::literal(0.800);
/// A beat is blanked from here before the next fiducial on …
const NEXT: Seconds = Seconds::literal(0.050);
/// … and until here after the previous one.
const PREVIOUS: Seconds = Seconds::literal(0.080);
/// At most so many beats are averaged, evenly over the recording: more don't make it better.
const ENOUGH: usize = 60;
/// A beat whose distance from the median beat is this many times the typical one is left out.
const TOO_NOISY: f64 = 3.0;
/// RR below this part of the median RR, with another class before, makes a beat follow an ectopic one.
const PREMATURE: f64 = 0.85;

/// The typical beat of a class, in every lead.
#[derive(Clone, Debug, PartialEq)]
pub struct RepresentativeBeat {
    /// Which class it stands for.
    pub class: ClassId,
    /// Samples per second.
    pub rate: SampleRate,
    /// Index of the fiducial in the samples of each lead.
    pub fiducial: SampleIndex,
    /// Which samples any beat gives; outside, the last value is held and means nothing.
    pub valid: Span,
    /// Which lead each signal is; `None` for a signal that is none of the twelve.
    pub names: Vec<Option<Lead>>,
    /// The beat in each signal, in mV, all of one length.
    pub signals: Vec<Vec<f64>>,
    /// Beats used, as indices into the beats of the recording.
    pub used: Vec<usize>,
    /// Beats of the class that were not used.
    pub left_out: Vec<LeftOut>,
    /// Standard deviation of the noise left in the average, outside the QRS, per signal; `None` when
    /// one beat alone was used.
    pub residual_noise: Vec<Option<Millivolts>>,
}

/// A beat that was not used.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct LeftOut {
    /// Index into the beats of the recording.
    pub beat: usize,
    /// Why.
    pub why: WhyLeftOut,
}

/// Why a beat was not used.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum WhyLeftOut {
    /// A gap or the end of the recording cuts its QRS.
    Cut,
    /// It is too noisy.
    Noisy,
    /// It follows a premature beat, so its repolarisation differs.
    AfterEctopic,
    /// Enough others were used.
    NotNeeded,
}

impl RepresentativeBeat {
    /// The time of a sample of the beat, relative to its fiducial.
    pub fn time_of(&self, index: usize) -> Seconds {
        Seconds::literal((index as f64 - self.fiducial.0 as f64) / self.rate.get())
    }

    /// The beat in one lead, in mV; `None` where the lead is absent.
    pub fn lead(&self, lead: Lead) -> Option<&[f64]> {
        self.names.iter().position(|name| *name == Some(lead)).map(|index| self.signals[index].as_slice())
    }

    /// The residual noise in one lead.
    pub fn noise(&self, lead: Lead) -> Option<Millivolts> {
        self.names.iter().position(|name| *name == Some(lead)).and_then(|index| self.residual_noise[index])
    }

    /// Which leads it has.
    pub fn leads(&self) -> PerLead<bool> {
        PerLead::from_fn(|lead| self.names.contains(&Some(lead)))
    }
}

/// A beat's part of the recording: where it may be read, relative to its fiducial.
struct Part {
    beat: usize,
    fiducial: isize,
    from: isize,
    to: isize,
}

/// The representative beat of a class; `None` when no beat of it can be used.
pub fn representative(channels: &Channels, beats: &Beats, class: ClassId) -> Option<RepresentativeBeat> {
    let members: Vec<usize> = (0..beats.all.len()).filter(|&index| beats.all[index].class == class).collect();
    representative_of(channels, beats, &members)
}

/// The representative beat of some beats of one class, given as indices into the beats of the recording in
/// order; `None` when none of them can be used.
pub fn representative_of(
    channels: &Channels,
    beats: &Beats,
    members: &[usize],
) -> Option<RepresentativeBeat> {
    let class = beats.all.get(*members.first()?)?.class;
    let rate = beats.rate;
    let before = rate.count(BEFORE);
    let length = before + rate.count(AFTER) + 1;
    let (mut parts, mut left_out) = parts(channels, beats, members);
    if parts.len() > ENOUGH {
        let every = parts.len() as f64 / ENOUGH as f64;
        let wanted: Vec<usize> = (0..ENOUGH).map(|index| (index as f64 * every) as usize).collect();
        let mut index = 0;
        parts.retain(|part| {
            let keep = wanted.binary_search(&index).is_ok();
            index += 1;
            if !keep {
                left_out.push(LeftOut { beat: part.beat, why: WhyLeftOut::NotNeeded });
            }
            keep
        });
    }
    if parts.len() >= 4 {
        drop_noisy(channels, &mut parts, &mut left_out, rate);
    }
    if parts.is_empty() {
        return None;
    }
    let first = parts.iter().map(|part| part.from).min()?.max(-(before as isize));
    let last = parts.iter().map(|part| part.to).max()?.min((length - before) as isize);
    let valid = Span { start: (before as isize + first) as usize, end: (before as isize + last) as usize };
    let signals =
        channels.signals.iter().map(|signal| average(signal, &parts, valid, before, length)).collect();
    let mut beat = RepresentativeBeat {
        class,
        rate,
        fiducial: SampleIndex(before),
        valid,
        names: channels.names.clone(),
        signals,
        used: parts.iter().map(|part| part.beat).collect(),
        left_out,
        residual_noise: vec![None; channels.names.len()],
    };
    if parts.len() > 1 {
        beat.residual_noise = residual(channels, &beat, &parts);
    }
    Some(beat)
}

fn parts(channels: &Channels, beats: &Beats, members: &[usize]) -> (Vec<Part>, Vec<LeftOut>) {
    let rate = beats.rate;
    let count = |time: Seconds| rate.count(time) as isize;
    let (qrs_before, qrs_after) = (count(Seconds::literal(0.060)), count(Seconds::literal(0.100)));
    let at = |index: usize| beats.all[index].fiducial.0 as isize;
    let length = channels.len() as isize;
    let mut all = Vec::new();
    let mut left_out = Vec::new();
    let premature = PREMATURE * median_interval(beats, members);
    for &index in members {
        let fiducial = at(index);
        let mut from = -count(BEFORE);
        let mut to = count(AFTER) + 1;
        from = from.max(-fiducial);
        to = to.min(length - fiducial);
        if index > 0 {
            from = from.max(at(index - 1) + count(PREVIOUS) - fiducial);
        }
        if index + 1 < beats.all.len() {
            to = to.min(at(index + 1) - count(NEXT) - fiducial);
        }
        for gap in channels.gaps.iter() {
            let (start, end) = (gap.start as isize - fiducial, gap.end as isize - fiducial);
            if end <= 0 {
                from = from.max(end);
            } else if start > 0 {
                to = to.min(start);
            } else {
                to = from;
            }
        }
        if from > -qrs_before.min(fiducial.max(1)) || to < qrs_after || from >= to {
            left_out.push(LeftOut { beat: index, why: WhyLeftOut::Cut });
        } else {
            let after = follows_ectopic(beats, index, premature);
            all.push((Part { beat: index, fiducial, from, to }, after));
        }
    }
    // Only while enough others are left: under bigeminy every beat follows an ectopic one.
    let clean = all.iter().filter(|(_, after)| !after).count();
    let spare = clean >= 3;
    let mut kept = Vec::new();
    for (part, after) in all {
        if after && spare {
            left_out.push(LeftOut { beat: part.beat, why: WhyLeftOut::AfterEctopic });
        } else {
            kept.push(part);
        }
    }
    (kept, left_out)
}

fn interval(beats: &Beats, index: usize) -> f64 {
    (beats.all[index].fiducial.0 - beats.all[index - 1].fiducial.0) as f64
}

/// Median RR from a little before the first member to the last, in samples; 0 where there is none.
fn median_interval(beats: &Beats, members: &[usize]) -> f64 {
    let (Some(&first), Some(&last)) = (members.first(), members.last()) else { return 0.0 };
    let mut all: Vec<f64> =
        (first.saturating_sub(8).max(1)..=last).map(|index| interval(beats, index)).collect();
    if all.is_empty() { 0.0 } else { median(&mut all) }
}

/// Whether the beat before is of another class and came sooner than `premature`, in samples.
fn follows_ectopic(beats: &Beats, index: usize, premature: f64) -> bool {
    index >= 2
        && beats.all[index - 1].class != beats.all[index].class
        && interval(beats, index - 1) < premature
}

/// Leaves out beats whose QRS and ST differ from the median beat far more than is typical.
fn drop_noisy(channels: &Channels, parts: &mut Vec<Part>, left_out: &mut Vec<LeftOut>, rate: SampleRate) {
    let reach = |part: &Part| (-part.from).min(rate.count(Seconds::literal(0.2)) as isize);
    let stride = rate.count(Seconds::literal(0.004)).max(1);
    let distance = |part: &Part, middle: &[Vec<f64>], from: isize| -> f64 {
        let mut sum = 0.0;
        for (signal, middle) in channels.signals.iter().zip(middle) {
            for (step, value) in middle.iter().enumerate() {
                let index = part.fiducial + from + (step * stride) as isize;
                if let Some(own) = usize::try_from(index).ok().and_then(|index| signal.get(index)) {
                    sum += (own - value).powi(2);
                }
            }
        }
        sum.sqrt()
    };
    let from = -parts.iter().map(&reach).min().unwrap_or(0);
    let to =
        parts.iter().map(|part| part.to).min().unwrap_or(0).min(rate.count(Seconds::literal(0.3)) as isize);
    let steps = ((to - from).max(0) as usize) / stride;
    let middle: Vec<Vec<f64>> = channels
        .signals
        .iter()
        .map(|signal| {
            (0..steps)
                .map(|step| {
                    let offset = from + (step * stride) as isize;
                    let mut values: Vec<f64> = parts
                        .iter()
                        .filter_map(|part| signal.get(usize::try_from(part.fiducial + offset).ok()?).copied())
                        .collect();
                    median(&mut values)
                })
                .collect()
        })
        .collect();
    let distances: Vec<f64> = parts.iter().map(|part| distance(part, &middle, from)).collect();
    let limit = TOO_NOISY * median(&mut distances.clone());
    let mut index = 0;
    parts.retain(|part| {
        let keep = distances[index] <= limit;
        index += 1;
        if !keep {
            left_out.push(LeftOut { beat: part.beat, why: WhyLeftOut::Noisy });
        }
        keep
    });
}

fn average(signal: &[f64], parts: &[Part], valid: Span, before: usize, length: usize) -> Vec<f64> {
    let mut beat = vec![0.0; length];
    let mut values = Vec::with_capacity(parts.len());
    for (index, slot) in beat.iter_mut().enumerate().take(valid.end).skip(valid.start) {
        let offset = index as isize - before as isize;
        values.clear();
        values.extend(
            parts
                .iter()
                .filter(|part| part.from <= offset && offset < part.to)
                .map(|part| signal[(part.fiducial + offset) as usize]),
        );
        if !values.is_empty() {
            let mean = values.iter().sum::<f64>() / values.len() as f64;
            *slot = (mean + median(&mut values)) / 2.0;
        }
    }
    if !valid.is_empty() {
        let (first, last) = (beat[valid.start], beat[valid.end - 1]);
        beat[..valid.start].fill(first);
        beat[valid.end..].fill(last);
    }
    beat
}

/// The scatter of the beats about their average outside the QRS, over the root of their number.
fn residual(channels: &Channels, beat: &RepresentativeBeat, parts: &[Part]) -> Vec<Option<Millivolts>> {
    let rate = beat.rate;
    let (qrs_from, qrs_to) =
        (-(rate.count(Seconds::literal(0.060)) as isize), rate.count(Seconds::literal(0.100)) as isize);
    let before = beat.fiducial.0 as isize;
    channels
        .signals
        .iter()
        .zip(&beat.signals)
        .map(|(signal, average)| {
            let (mut squares, mut count) = (0.0, 0usize);
            for part in parts {
                let from = part.from.max(-before);
                let to = part.to.min(average.len() as isize - before);
                for offset in (from..to).filter(|offset| !(qrs_from..qrs_to).contains(offset)) {
                    squares += (signal[(part.fiducial + offset) as usize]
                        - average[(before + offset) as usize])
                        .powi(2);
                    count += 1;
                }
            }
            let used = parts.len() as f64;
            let variance = squares / count.max(1) as f64 * used / (used - 1.0);
            Millivolts::new((variance / used).sqrt())
        })
        .collect()
}
