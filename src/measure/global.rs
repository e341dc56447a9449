//! From the leads' marks to one mark over all leads, and to intervals.
//!
//! Global marks run from the third earliest onset to the third latest offset of twelve leads, so that
//! one outlier can't decide (AHA/ACCF/HRS 2007 part I takes the earliest and the latest).

use super::classes::Marked;
use super::shape::{Mark, WaveMarks, median};
use super::{BeatMarks, Measured, Reading, Reason, Wave};
use crate::units::Seconds;

/// What the network's marks lack against the distance between the readers' third earliest and third latest
/// ones, given back, in ms (P duration, PR, QRS, QT; fitted on records that the network had not seen): its
/// marks lie closer together than readers' do.
const P_DURATION: f64 = 4.8;
const PR: f64 = 0.7;
const QRS: f64 = 2.3;
const QT: f64 = 5.7;
/// The expected error of an interval as a part of how wide its two marks may lie: the part, and the marks as
/// [`super::seen::Seen::spreads`] numbers them (fitted on records that the network had not seen, so that two
/// thirds of the errors are smaller).
const P_ERROR: (f64, usize, usize) = (0.354, 0, 2);
const PR_ERROR: (f64, usize, usize) = (0.235, 0, 3);
const QRS_ERROR: (f64, usize, usize) = (0.37, 3, 5);
const QT_ERROR: (f64, usize, usize) = (0.40, 3, 7);
/// Largest scatter of the leads' T ends (1.4826 × median absolute deviation) for a QT, in ms.
const T_END_SCATTER: f64 = 45.0;

fn nth(mut values: Vec<f64>, rank: usize) -> f64 {
    values.sort_by(f64::total_cmp);
    values[rank.clamp(1, values.len()) - 1]
}

/// With fewer signals than this there is no third and no second; their mean is taken.
const FEW: usize = 4;

/// Third of twelve, second of eight, first of fewer.
fn rank(signals: usize) -> usize {
    (signals / 4).max(1)
}

fn decided(values: Vec<f64>, rank: usize) -> f64 {
    if values.len() < FEW {
        values.iter().sum::<f64>() / values.len().max(1) as f64
    } else {
        nth(values, rank)
    }
}

fn earliest(marks: &[Mark], rank: usize, shift: f64) -> f64 {
    shift + decided(marks.iter().map(|mark| mark.onset.unwrap_or(mark.peak)).collect(), rank)
}

fn latest(marks: &[Mark], rank: usize, shift: f64) -> f64 {
    shift - decided(marks.iter().map(|mark| -mark.offset).collect(), rank)
}

/// The mean of the second to fifth latest offsets of twelve: leads differ the most on the end of T.
fn late(marks: &[Mark], rank: usize, shift: f64) -> f64 {
    let ranks = (rank * 2 / 3).max(1)..=(rank * 5 / 3).max(1);
    let count = ranks.clone().count() as f64;
    ranks.map(|rank| latest(marks, rank, shift)).sum::<f64>() / count
}

/// Whether more than half of the signals can tell where the wave lies.
fn told(marks: &WaveMarks) -> bool {
    marks.each.iter().filter(|mark| mark.is_told()).count() * 2 > marks.each.len()
}

/// The global mark of a wave, moved by `shift` samples.
fn wave(marked: &Marked, marks: &WaveMarks, shift: f64, fiducial: Seconds) -> Wave {
    let shape = marked.shape();
    let rank = rank(marks.each.len());
    let at = |position: f64| fiducial + shape.time(position);
    Wave {
        onset: marks
            .each
            .iter()
            .all(|mark| mark.onset.is_some())
            .then(|| at(earliest(&marks.each, rank, shift))),
        peak: at(shift + median(marks.each.iter().map(|mark| mark.peak))),
        offset: at(latest(&marks.each, rank, shift)),
    }
}

/// The global marks of a member of a class whose fiducial stands at `fiducial`; `place` is its place
/// among the members, `None` for the representative beat itself.
pub(super) fn beat(marked: &Marked, place: Option<usize>, fiducial: Seconds, dominant: bool) -> BeatMarks {
    BeatMarks {
        dominant,
        p: p_shift(marked, place)
            .zip(marked.p.as_ref().filter(|(p, _)| told(p)))
            .map(|(shift, (p, _))| wave(marked, p, shift, fiducial)),
        qrs: wave(marked, &marked.qrs, 0.0, fiducial),
        t: marked.t.as_ref().filter(|(t, _)| told(t)).map(|(t, shifts)| {
            wave(marked, t, place.and_then(|place| shifts.get(place).copied()).unwrap_or(0.0), fiducial)
        }),
    }
}

/// The shift of a beat's P; `None` when the beat has none.
pub(super) fn p_shift(marked: &Marked, place: Option<usize>) -> Option<f64> {
    let (_, presence) = marked.p.as_ref()?;
    match place {
        None => Some(0.0),
        Some(place) => presence.shifts.get(place).copied().flatten().map(|shift| 0.8 * shift),
    }
}

/// P duration, PR, QRS and QT of the dominant class.
pub(super) struct Intervals {
    pub p_duration: Measured<Seconds>,
    pub pr: Measured<Seconds>,
    pub qrs: Measured<Seconds>,
    pub qt: Measured<Seconds>,
}

impl Intervals {
    /// None of them, for one reason.
    pub fn none(reason: &Reason) -> Self {
        let none = || Measured::NotMeasurable(reason.clone());
        Self { p_duration: none(), pr: none(), qrs: none(), qt: none() }
    }

    /// The marks of the representative beat, set apart by the intervals as printed, so that a caliper laid
    /// on them reads what the table says.
    pub fn drawn_on(&self, mut marks: BeatMarks) -> BeatMarks {
        let Some(onset) = marks.qrs.onset else { return marks };
        if let Some(qrs) = self.qrs.value() {
            marks.qrs.offset = onset + qrs;
        }
        if let (Some(p), Some(pr), Some(duration)) = (&mut marks.p, self.pr.value(), self.p_duration.value())
        {
            p.onset = Some(onset - pr);
            p.offset = onset - pr + duration;
        }
        if let (Some(t), Some(qt)) = (&mut marks.t, self.qt.value()) {
            t.offset = onset + qt;
        }
        marks
    }

    /// From the marks of the dominant class; `no_p` is the reason when it has no P.
    pub fn of(marked: &Marked, no_p: &Reason) -> Self {
        let shape = marked.shape();
        let signals = marked.qrs.each.len();
        let rank = rank(signals);
        // The ends of the QRS are the best agreed on: the second earliest and second latest of twelve.
        let qrs_rank = (signals / 6).max(1);
        let interval = |samples: f64, constant: f64, scatter: Option<f64>, error: f64| {
            let ms = |samples: f64| samples * 1000.0 / shape.rate.get();
            match Seconds::from_ms(ms(samples) + constant) {
                Some(value) if value > Seconds::ZERO => Measured::Value(Reading {
                    value,
                    spread: scatter.and_then(|scatter| Seconds::from_ms(ms(scatter))),
                    expected_error: Seconds::from_ms(error),
                }),
                _ => Measured::NotMeasurable(Reason::LeadsDisagree),
            }
        };
        let error = |(part, from, to): (f64, usize, usize)| {
            part * (marked.spreads[from].powi(2) + marked.spreads[to].powi(2)).sqrt()
        };
        let constant = |ms: f64| if signals >= 8 { ms } else { 0.0 };
        let onset = earliest(&marked.qrs.each, rank, 0.0);
        let (p_duration, pr) = match &marked.p {
            Some((p, _)) if !told(p) => (
                Measured::NotMeasurable(Reason::LeadsDisagree),
                Measured::NotMeasurable(Reason::LeadsDisagree),
            ),
            // Fewer than half of the beats have the P at its place: the average only looks as if they did.
            Some((_, presence)) if presence.shifts.iter().flatten().count() * 2 < presence.shifts.len() => (
                Measured::NotMeasurable(Reason::PNotRelatedToQrs),
                Measured::NotMeasurable(Reason::PNotRelatedToQrs),
            ),
            Some((p, presence)) => {
                let shifts: Vec<f64> = presence.shifts.iter().flatten().map(|shift| 0.8 * shift).collect();
                let shift = median(shifts.iter().copied());
                let (p_on, p_off) = (earliest(&p.each, rank, shift), latest(&p.each, rank, shift));
                (
                    interval(p_off - p_on, constant(P_DURATION), None, error(P_ERROR)),
                    interval(onset - p_on, constant(PR), deviation(&shifts), error(PR_ERROR)),
                )
            }
            None => (Measured::NotMeasurable(no_p.clone()), Measured::NotMeasurable(no_p.clone())),
        };
        let qrs = if told(&marked.qrs) {
            interval(
                latest(&marked.qrs.each, qrs_rank, 0.0) - earliest(&marked.qrs.each, qrs_rank, 0.0),
                constant(QRS),
                None,
                error(QRS_ERROR),
            )
        } else {
            Measured::NotMeasurable(Reason::LeadsDisagree)
        };
        let qt = match marked.t.as_ref().filter(|(t, _)| marked.t_end_reliable && told(t)) {
            Some((t, shifts)) => {
                let ends: Vec<f64> = t.each.iter().map(|mark| mark.offset).collect();
                let middle = median(ends.iter().copied());
                let scatter = 1.4826 * median(ends.iter().map(|end| (end - middle).abs()));
                if scatter > shape.ms(T_END_SCATTER) {
                    Measured::NotMeasurable(Reason::TEndUnreliable)
                } else {
                    let shift = median(shifts.iter().copied());
                    let onset = earliest(&marked.qrs.each, qrs_rank, 0.0);
                    interval(
                        late(&t.each, rank, shift) - onset,
                        constant(QT),
                        deviation(shifts),
                        error(QT_ERROR),
                    )
                }
            }
            None => Measured::NotMeasurable(Reason::TEndUnreliable),
        };
        Self { p_duration, pr, qrs, qt }
    }
}

/// Standard deviation; `None` for fewer than two.
fn deviation(values: &[f64]) -> Option<f64> {
    if values.len() < 2 {
        return None;
    }
    let mean = values.iter().sum::<f64>() / values.len() as f64;
    let squares: f64 = values.iter().map(|value| (value - mean).powi(2)).sum();
    Some((squares / (values.len() - 1) as f64).sqrt())
}
