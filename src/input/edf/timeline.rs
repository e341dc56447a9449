//! When each data record was taken.

use super::header::{Continuity, Header};
use super::records::Held;
use crate::input::Fault;
use crate::input::limits::{MAX_SAMPLES, at_most};
use crate::recording::Note;
use crate::units::{SampleRate, Seconds, Span, Spans};

/// A recording that pauses for longer than this many times its own length is several recordings (own rule).
const MOST_PAUSE: f64 = 100.0;

/// Data records that follow each other without a gap.
#[derive(Debug, PartialEq)]
struct Stretch {
    /// Index of the first.
    first: usize,
    /// Seconds from the first sample of the recording.
    start: f64,
}

/// The stretches of a recording, in ascending order.
pub(super) struct Timeline {
    /// The time of the first sample, in seconds from the start in the header.
    pub first_onset: f64,
    stretches: Vec<Stretch>,
}

/// From what the data records state of themselves.
pub(super) fn of(header: &Header, held: &Held, notes: &mut Vec<Note>) -> Result<Timeline, Fault> {
    let first_onset = held.onsets.first().copied().flatten();
    let continuous = Timeline {
        first_onset: first_onset.unwrap_or(0.0),
        stretches: vec![Stretch { first: 0, start: 0.0 }],
    };
    let fastest = header.ordinary().map(|signal| signal.samples).max();
    let (Some(fastest), true) = (fastest, header.continuity != Continuity::Plain) else {
        return Ok(continuous);
    };
    let discontinuous = header.continuity == Continuity::Discontinuous;
    if discontinuous && held.onsets.is_empty() {
        return Err(Fault::unsupported(
            format!("{} without a signal of annotations does not say where its gaps lie", header.reserved),
            "export the recording again at its source",
        ));
    }
    match stretches(&held.onsets, header.duration, header.duration / fastest as f64) {
        Ok(stretches) => {
            let timeline = Timeline { stretches, ..continuous };
            timeline.check(header, held.onsets.len())?;
            if !discontinuous && timeline.stretches.len() > 1 {
                notes.push(Note::caution(format!(
                    "the header says {}, but the data records state gaps between them: these are kept",
                    header.reserved
                )));
            }
            Ok(timeline)
        }
        Err(index) if discontinuous => Err(Fault::malformed(
            header.record_at(index),
            "a data record that states its own time, not before the end of the one before it",
            match held.onsets.get(index).copied().flatten() {
                Some(onset) => format!("{onset} s"),
                None => "none".to_owned(),
            },
            "export the recording again at its source",
        )),
        Err(_) => {
            notes.push(Note::information(
                "the times that the data records state are no sound sequence; the records are taken as one after the other",
            ));
            Ok(continuous)
        }
    }
}

/// Stretches from the onsets; else the index of the first that is missing or lies too early.
fn stretches(onsets: &[Option<f64>], duration: f64, tolerance: f64) -> Result<Vec<Stretch>, usize> {
    let mut stretches = vec![Stretch { first: 0, start: 0.0 }];
    let mut onsets = onsets.iter().copied().enumerate();
    let Some((_, first)) = onsets.next() else { return Ok(stretches) };
    let first = first.ok_or(0usize)?;
    let mut before = first;
    for (index, onset) in onsets {
        let onset = onset.ok_or(index)?;
        let pause = onset - before - duration;
        if pause < -tolerance {
            return Err(index);
        }
        if pause > tolerance {
            stretches.push(Stretch { first: index, start: onset - first });
        }
        before = onset;
    }
    Ok(stretches)
}

impl Timeline {
    /// Refuses pauses that ask for more memory than the file justifies.
    fn check(&self, header: &Header, records: usize) -> Result<(), Fault> {
        let Some(last) = self.stretches.last() else { return Ok(()) };
        let recorded = records as f64 * header.duration;
        let whole = last.start + (records - last.first.min(records)) as f64 * header.duration;
        if whole > recorded * (1.0 + MOST_PAUSE) {
            return Err(Fault::unsupported(
                format!("{recorded} s of recording lie scattered over {whole} s"),
                "export each part of it to a file of its own",
            ));
        }
        let per_second: f64 =
            header.ordinary().map(|signal| signal.samples as f64).sum::<f64>() / header.duration;
        at_most(MAX_SAMPLES, "samples in the recording, gaps counted in", (whole * per_second) as u64)
    }

    /// The values at their times, and where there are none.
    pub fn spread(&self, values: Vec<f64>, per_record: usize, rate: SampleRate) -> (Vec<f64>, Spans) {
        if self.stretches.len() < 2 {
            return (values, Spans::none());
        }
        let mut spread: Vec<f64> = Vec::new();
        let mut gaps = Vec::new();
        let ends = self.stretches.iter().skip(1).map(|stretch| stretch.first * per_record);
        for (stretch, end) in self.stretches.iter().zip(ends.chain([values.len()])) {
            let start = Seconds::new(stretch.start).map_or(0, |time| rate.count(time)).max(spread.len());
            gaps.push(Span { start: spread.len(), end: start });
            spread.resize(start, 0.0);
            spread.extend_from_slice(values.get(stretch.first * per_record..end).unwrap_or_default());
        }
        (spread, Spans::from_unordered(gaps))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    // Source: EDF+ 2.2.4 (r), a record's time is that of its first sample; the times are chosen by hand.
    #[test]
    fn records_join_where_one_ends_and_the_next_starts() {
        let found = |onsets: &[f64]| {
            let onsets: Vec<Option<f64>> = onsets.iter().copied().map(Some).collect();
            stretches(&onsets, 0.5, 0.001)
                .map(|all| all.iter().map(|one| (one.first, one.start)).collect::<Vec<_>>())
        };
        assert_eq!(found(&[0.25, 0.75, 1.2505]), Ok(vec![(0, 0.0)]));
        assert_eq!(found(&[0.25, 0.75, 2.25, 2.75]), Ok(vec![(0, 0.0), (2, 2.0)]));
        assert_eq!(found(&[0.25, 0.75, 0.75]), Err(2));
        assert_eq!(stretches(&[Some(0.0), None], 1.0, 0.001), Err(1));
    }

    #[test]
    fn values_stand_at_their_times_with_gaps_between() {
        let timeline = Timeline {
            first_onset: 0.0,
            stretches: vec![Stretch { first: 0, start: 0.0 }, Stretch { first: 1, start: 1.5 }],
        };
        let rate = SampleRate::new(4.0).expect("a rate");
        let (values, gaps) = timeline.spread(vec![1.0, 2.0, 3.0, 4.0, 5.0, 6.0, 7.0, 8.0], 4, rate);
        assert_eq!(values, [1.0, 2.0, 3.0, 4.0, 0.0, 0.0, 5.0, 6.0, 7.0, 8.0]);
        assert_eq!(gaps.iter().collect::<Vec<_>>(), [Span { start: 4, end: 6 }]);
    }
}
