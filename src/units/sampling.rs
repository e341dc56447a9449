//! Positions in a sampled signal.

use super::{Hertz, Seconds};

/// Samples per second, positive and finite.
#[derive(Clone, Copy, Debug, PartialEq, PartialOrd)]
pub struct SampleRate(f64);

impl SampleRate {
    /// `None` unless `per_second` is finite and above zero.
    pub const fn new(per_second: f64) -> Option<Self> {
        if per_second.is_finite() && per_second > 0.0 { Some(Self(per_second)) } else { None }
    }

    /// Samples per second.
    pub const fn get(self) -> f64 {
        self.0
    }

    /// The same number as a frequency.
    pub const fn hertz(self) -> Hertz {
        Hertz::literal(self.0)
    }

    /// The time of a sample: index / rate, so that sample 0 is at 0 s.
    pub fn time_of(self, sample: SampleIndex) -> Seconds {
        Seconds::literal(sample.0 as f64 / self.0)
    }

    /// The length of `count` samples.
    pub fn duration(self, count: usize) -> Seconds {
        self.time_of(SampleIndex(count))
    }

    /// A duration in samples, not rounded.
    pub fn samples(self, time: Seconds) -> f64 {
        time.get() * self.0
    }

    /// A duration as a count of samples, rounded to the nearest; a negative one gives 0.
    pub fn count(self, time: Seconds) -> usize {
        self.samples(time).round().max(0.0) as usize
    }
}

/// The 0-based index of a sample.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct SampleIndex(pub usize);

/// A half-open range of samples, `start..end`.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Span {
    /// First sample inside.
    pub start: usize,
    /// First sample behind it.
    pub end: usize,
}

impl Span {
    /// How many samples it holds.
    pub const fn len(self) -> usize {
        self.end.saturating_sub(self.start)
    }

    /// Whether it holds none.
    pub const fn is_empty(self) -> bool {
        self.len() == 0
    }

    /// Whether `index` lies inside.
    pub const fn contains(self, index: usize) -> bool {
        self.start <= index && index < self.end
    }
}

/// Spans that are sorted, not empty, and neither overlap nor touch.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Spans(Vec<Span>);

impl Spans {
    /// No span at all.
    pub const fn none() -> Self {
        Self(Vec::new())
    }

    /// Sorts, drops the empty, merges what overlaps or touches.
    pub fn from_unordered(mut spans: Vec<Span>) -> Self {
        spans.retain(|span| !span.is_empty());
        spans.sort_by_key(|span| span.start);
        let mut merged: Vec<Span> = Vec::with_capacity(spans.len());
        for span in spans {
            match merged.last_mut() {
                Some(last) if span.start <= last.end => last.end = last.end.max(span.end),
                _ => merged.push(span),
            }
        }
        Self(merged)
    }

    /// The runs of `true`.
    pub fn of_true(flags: impl IntoIterator<Item = bool>) -> Self {
        let mut spans: Vec<Span> = Vec::new();
        for (index, flag) in flags.into_iter().enumerate() {
            if !flag {
                continue;
            }
            match spans.last_mut() {
                Some(last) if last.end == index => last.end += 1,
                _ => spans.push(Span { start: index, end: index + 1 }),
            }
        }
        Self(spans)
    }

    /// In ascending order.
    pub fn iter(&self) -> impl Iterator<Item = Span> + '_ {
        self.0.iter().copied()
    }

    /// Whether there is none.
    pub fn is_empty(&self) -> bool {
        self.0.is_empty()
    }

    /// All samples in all spans.
    pub fn total(&self) -> usize {
        self.iter().map(Span::len).sum()
    }

    /// Whether `index` lies in one of them.
    pub fn contains(&self, index: usize) -> bool {
        let after = self.0.partition_point(|span| span.start <= index);
        after > 0 && self.0[after - 1].contains(index)
    }

    /// Whether any sample of `span` lies in one of them.
    pub fn touches(&self, span: Span) -> bool {
        self.iter().any(|own| own.start < span.end && span.start < own.end)
    }

    /// Union with another set.
    pub fn union(&self, other: &Self) -> Self {
        Self::from_unordered(self.iter().chain(other.iter()).collect())
    }

    /// What lies in `0..length` and in none of them.
    pub fn complement(&self, length: usize) -> Self {
        let mut rest = Vec::new();
        let mut start = 0;
        for span in self.iter() {
            rest.push(Span { start, end: span.start.min(length) });
            start = span.end;
        }
        rest.push(Span { start, end: length });
        Self::from_unordered(rest)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn spans_merge_and_complement() {
        let spans = Spans::from_unordered(vec![
            Span { start: 8, end: 9 },
            Span { start: 2, end: 4 },
            Span { start: 4, end: 5 },
            Span { start: 6, end: 6 },
        ]);
        assert_eq!(spans.iter().collect::<Vec<_>>(), [Span { start: 2, end: 5 }, Span { start: 8, end: 9 }]);
        assert_eq!(spans.total(), 4);
        assert!(spans.contains(4) && !spans.contains(5));
        assert_eq!(
            spans.complement(10).iter().collect::<Vec<_>>(),
            [Span { start: 0, end: 2 }, Span { start: 5, end: 8 }, Span { start: 9, end: 10 }]
        );
        assert_eq!(Spans::of_true([true, true, false, true]).total(), 3);
    }
}
